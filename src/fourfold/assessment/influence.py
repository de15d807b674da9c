"""Influence of single people on the fit, told in summaries that show nobody."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy.special import expit

from fourfold.assessment.refit import refit_without
from fourfold.measures.proportion import normal_quantile
from fourfold.results import tree

Array = NDArray[np.float64]
Integers = NDArray[np.int64]

CHUNK = 65_536
REFITS = 20
# In standard errors: below it one person's exact change is not worth a pass over long data.
WORTH_REFITTING = 0.02
LONG = 50_000
# Both as multiples that are common practice: three times the mean leverage, residuals beyond 3.
HIGH_LEVERAGE = 3.0
LARGE_RESIDUAL = 3.0


@dataclass(frozen=True, slots=True)
class Watched:
    """A coefficient whose changes are followed: an exposure's parameter and its place."""

    parameter: str
    term: str
    column: int


@dataclass(frozen=True, slots=True)
class RowDiagnostics:
    """Case statistics of one person of each row (never leaves the analysis).

    Attributes
    ----------
    leverage, pearson, deviance, cook : (n,) float array
    change : (n, m) float array
        One-step change of each watched coefficient when the person is left out: full estimate
        less the estimate without.
    """

    leverage: Array
    pearson: Array
    deviance: Array
    cook: Array
    change: Array


def row_diagnostics(
    X: Array,
    event: NDArray[np.bool_],
    log_odds: Array,
    covariance: Array,
    columns: Sequence[int],
) -> RowDiagnostics:
    """Leverage, residuals, Cook-type distance and one-step changes, row by row.

    Parameters
    ----------
    X : (n, p) array
    event : (n,) bool array
    log_odds : (n,) array
        May be infinite where separation makes a risk certain; such rows have no influence.
    covariance : (p, p) array
    columns : sequence of int
        Coefficients whose change is wanted.

    References
    ----------
    Pregibon (1981). Ann Stat 9, 705-724.
    """
    n, p = X.shape
    leverage, pearson, deviance, cook = (np.empty(n) for _ in range(4))
    change = np.empty((n, len(columns)))
    wanted = covariance[:, list(columns)]
    for begin in range(0, n, CHUNK):
        part = slice(begin, begin + CHUNK)
        x, eta, y = X[part], log_odds[part], event[part]
        risk, sign = expit(eta), np.where(y, 1.0, -1.0)
        # The chance of what did not happen; 1 - risk would round to 0 for large log odds.
        other = expit(-sign * eta)
        weight = risk * expit(-eta)
        h = np.minimum(np.einsum("ij,jk,ik->i", x, covariance, x, optimize=True) * weight, 1 - 1e-12)
        residual = sign * other
        with np.errstate(divide="ignore", invalid="ignore"):
            r = np.where(weight > 0, residual / np.sqrt(weight), 0.0)
        leverage[part], pearson[part] = h, r
        deviance[part] = sign * np.sqrt(2 * np.logaddexp(0.0, -sign * eta))
        cook[part] = r * r * h / (p * (1 - h) ** 2)
        change[part] = (x @ wanted) * (residual / (1 - h))[:, None]
    return RowDiagnostics(leverage, pearson, deviance, cook, change)


def influence(
    X: Array,
    event: NDArray[np.bool_],
    coefficients: Array,
    covariance: Array,
    watched: Sequence[Watched],
    counts: Integers | None = None,
    *,
    log_odds: Array | None = None,
    confidence: float = 95.0,
    refits: int = REFITS,
) -> tree.Influence:
    """Summarise influence, and refit exactly without those who move an exposure most.

    Parameters
    ----------
    X : (n, p) array
        Columns with a finite estimate only.
    event : (n,) bool array
    coefficients : (p,) array
    covariance : (p, p) array
    watched : sequence of Watched
        Coefficients of the exposures (columns of ``X``).
    counts : (n,) int array, optional
        People that each row stands for; one person of a row is left out, never the row.
    log_odds : (n,) array, optional
        Of each row where ``X @ coefficients`` is not all of it: columns without a finite
        estimate were taken out, and rows they decide are infinite.
    confidence : float
        Of the Wald interval that may cross 1, in percent.
    refits : int
        How many rows are refitted for each watched coefficient. From 50,000 rows on, of those
        only the first and any whose one-step change reaches 0.02 standard errors.

    Returns
    -------
    tree.Influence
        ``largest_change`` is signed, in standard errors of the whole fit: full estimate less
        the one without the person. ``high_leverage`` counts people above three times the mean;
        ``large_residuals`` those whose Pearson or deviance residual exceeds 3. Wald intervals
        are compared for ``crosses_one``; a refit without a finite estimate counts as crossing.
    """
    people = np.ones(X.shape[0]) if counts is None else counts.astype(np.float64)
    linear = X @ coefficients
    eta = linear if log_odds is None else log_odds
    found = row_diagnostics(X, event, eta, covariance, [one.column for one in watched])
    inside = people > 0
    mean = float(people @ found.leverage / people.sum())
    beyond = np.maximum(np.abs(found.pearson), np.abs(found.deviance)) > LARGE_RESIDUAL
    return tree.Influence(
        largest_leverage=float(found.leverage[inside].max()),
        mean_leverage=mean,
        high_leverage=round(float(people @ (found.leverage > HIGH_LEVERAGE * mean))),
        largest_pearson=float(np.abs(found.pearson[inside]).max()),
        largest_deviance_residual=float(np.abs(found.deviance[inside]).max()),
        large_residuals=round(float(people @ beyond)),
        largest_cook=float(found.cook[inside].max()),
        terms=_terms(X, event, people, eta, coefficients, covariance, watched, found, confidence, refits),
    )


def _terms(
    X: Array,
    event: NDArray[np.bool_],
    people: Array,
    eta: Array,
    coefficients: Array,
    covariance: Array,
    watched: Sequence[Watched],
    found: RowDiagnostics,
    confidence: float,
    refits: int,
) -> list[tree.InfluenceTerm]:
    if not watched:
        return []
    errors = np.sqrt(np.diag(covariance))
    scaled = found.change / errors[[one.column for one in watched]]
    scaled[people <= 0] = 0.0
    chosen = [_most_moved(scaled[:, place], refits) for place in range(len(watched))]
    rows = np.unique(np.concatenate(chosen))
    certain = ~np.isfinite(eta)
    # Rows of certain risk have no say: they are dropped by giving them no people.
    kept = np.where(certain, 0.0, people)
    offset = np.where(certain, 0.0, eta - X @ coefficients)
    step = (X[rows] @ covariance) * _factor(found, event, eta, rows)[:, None]
    again = refit_without(
        X,
        event.astype(np.float64),
        kept,
        offset,
        rows,
        coefficients - step,
        np.asarray(np.linalg.inv(covariance), dtype=np.float64),
    )
    z = normal_quantile(confidence)
    answer = []
    for place, one in enumerate(watched):
        mine = np.searchsorted(rows, chosen[place])
        whole, error = coefficients[one.column], errors[one.column]
        without = again.coefficients[mine, one.column]
        spread = np.sqrt(again.covariances[mine, one.column, one.column])
        side = _side(np.array([whole]), np.array([error]), z)[0]
        change = (whole - without) / error
        known = np.isfinite(change)
        largest = change[known][np.argmax(np.abs(change[known]))] if known.any() else None
        crosses = bool(np.any(~known | (_side(without, spread, z) != side)))
        answer.append(
            tree.InfluenceTerm(
                parameter=one.parameter,
                term=one.term,
                largest_change=float(scaled[np.argmax(np.abs(scaled[:, place])), place]),
                largest_change_refitted=None if largest is None else float(largest),
                crosses_one=crosses,
            )
        )
    return answer


def _most_moved(scaled: Array, refits: int) -> Integers:
    size = np.abs(scaled)
    refits = min(refits, size.size)
    top = np.argpartition(-size, refits - 1)[:refits] if refits < size.size else np.arange(size.size)
    if size.size >= LONG:
        top = top[(size[top] >= WORTH_REFITTING) | (size[top] == size.max())][:refits]
    return np.asarray(top, dtype=np.int64)


def _factor(found: RowDiagnostics, event: NDArray[np.bool_], eta: Array, rows: Integers) -> Array:
    sign = np.where(event[rows], 1.0, -1.0)
    return np.asarray(sign * expit(-sign * eta[rows]) / (1 - found.leverage[rows]))


def _side(estimate: Array, error: Array, z: float) -> Integers:
    """-1 or 1 where the interval lies below or above 0 on the log scale, else 0."""
    return np.asarray((estimate - z * error > 0).astype(int) - (estimate + z * error < 0).astype(int))
