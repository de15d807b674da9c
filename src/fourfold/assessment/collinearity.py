"""Collinearity: generalised variance inflation of each term, condition index of the design."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from fourfold.results import tree

Array = NDArray[np.float64]

HIGH_INDEX = 30.0
HIGH_SHARE = 0.5


@dataclass(frozen=True, slots=True)
class Term:
    """A term of the model and its places among the coefficients."""

    name: str
    label: str
    columns: tuple[int, ...]


def collinearity(covariance: Array, terms: Sequence[Term], intercept: int | None = 0) -> tree.Collinearity:
    """Judge collinearity from the covariance of the coefficients.

    Parameters
    ----------
    covariance : (p, p) array
        Inverse of X'WX at the fit, intercept included if there is one.
    terms : sequence of Term
        Every column but the intercept belongs to one.
    intercept : int or None
        Place of the intercept.

    Returns
    -------
    tree.Collinearity
        ``condition_index`` is that of W^(1/2) X with columns scaled to unit length, intercept
        kept. ``shared_terms`` names terms that share one index above 30 with variance shares
        above one half each; columns of one term (spline, levels) are not held against it.

    References
    ----------
    Fox & Monette (1992). J Am Stat Assoc 87, 178-183.
    Belsley, Kuh & Welsch (1980). Regression Diagnostics.
    Lesaffre & Marx (1993). Commun Stat Theory Methods 22, 1933-1952.
    """
    errors = np.sqrt(np.diag(covariance))
    correlation = covariance / np.outer(errors, errors)
    slopes = [place for place in range(len(errors)) if place != intercept]
    gvif = [_gvif(correlation, term, slopes) for term in terms]
    index, shared = _condition(covariance, correlation, errors, terms)
    return tree.Collinearity(gvif=gvif, condition_index=index, shared_terms=shared)


def _gvif(correlation: Array, term: Term, slopes: list[int]) -> tree.Gvif:
    own = list(term.columns)
    others = [place for place in slopes if place not in term.columns]
    logs = [_log_det(correlation, own), _log_det(correlation, others), -_log_det(correlation, slopes)]
    value = float(np.exp(sum(logs)))
    return tree.Gvif(
        term=term.name,
        label=term.label,
        df=len(own),
        gvif=value,
        scaled=value ** (1 / (2 * len(own))),
    )


def _log_det(matrix: Array, places: list[int]) -> float:
    if not places:
        return 0.0
    return float(np.linalg.slogdet(matrix[np.ix_(places, places)])[1])


def _condition(
    covariance: Array, correlation: Array, errors: Array, terms: Sequence[Term]
) -> tuple[float | None, list[str]]:
    # X'WX is the inverse of the covariance; inverted by way of the correlation, whose elements
    # share one scale, then brought to unit columns.
    information = np.linalg.inv(correlation) / np.outer(errors, errors)
    length = np.sqrt(np.diag(information))
    scaled = information / np.outer(length, length)
    values, vectors = np.linalg.eigh((scaled + scaled.T) / 2)
    if values[0] <= 0:
        return None, []
    indices = np.sqrt(values[-1] / values)
    shares = vectors**2 / values
    shares /= shares.sum(axis=1, keepdims=True)
    shared: list[str] = []
    for place in np.flatnonzero(indices > HIGH_INDEX):
        together = [term.name for term in terms if shares[list(term.columns), place].max() > HIGH_SHARE]
        if len(together) > 1:
            shared += [name for name in together if name not in shared]
    return float(indices[0]), shared
