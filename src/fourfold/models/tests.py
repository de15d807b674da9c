"""Likelihood-ratio and Wald tests of terms."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from fourfold.models.batch import Standardised, groups
from fourfold.models.blocks import Blocks
from fourfold.models.centring import centring
from fourfold.models.likelihood import Observed
from fourfold.models.limits import fit_at_limit
from fourfold.models.logistic import Fit, climb
from fourfold.models.separation import detect

Array = NDArray[np.float64]
Counts = NDArray[np.int64] | NDArray[np.float64]

PASSES = 15


@dataclass(frozen=True, slots=True)
class TestResult:
    """A test statistic with its chi-squared P value.

    Attributes
    ----------
    statistic : float
    df : int
        Columns dropped.
    p_value : float
    """

    # Its name is the trade's word for what it is; this keeps pytest from collecting it.
    __test__ = False

    statistic: float
    df: int
    p_value: float


def likelihood_ratio(
    blocks: Blocks,
    event: NDArray[np.bool_],
    fit: Fit,
    dropped: Sequence[tuple[int, ...]],
    counts: Counts | None = None,
    offset: Array | None = None,
) -> list[TestResult]:
    """Test each group of columns by the fall of the log-likelihood when its coefficients are zero.

    Both likelihoods come from the same rows. The reduced models are fitted together; a model at the
    limit of separated data is compared with the supremum of the reduced one.

    Parameters
    ----------
    blocks : Blocks of p columns
    event : (n,) bool array
    fit : Fit
        Of all columns to the same rows.
    dropped : sequence of tuples of int
        Columns of each term.
    counts : (n,) array, optional
    offset : (n,) float array, optional
        As in the fit; not with separated data.
    """
    if not dropped:
        return []
    if bool(np.isfinite(fit.coefficients).all()):
        observed = Observed(blocks, event, counts, offset)
        reduced = []
        for together in groups(len(dropped), blocks.p):
            reduced += _reduced_together(observed, fit, dropped[together])
    else:
        reduced = [_supremum_without(blocks, event, columns, counts) for columns in dropped]
    return [
        _result(max(0.0, 2 * (fit.log_likelihood - without)), len(columns))
        for without, columns in zip(reduced, dropped, strict=True)
    ]


def wald(fit: Fit, columns: Sequence[int]) -> TestResult:
    """Joint Wald test: b' V^-1 b of the given columns; NaN if one has no finite estimate."""
    index = list(columns)
    estimates = fit.coefficients[index]
    if not bool(np.isfinite(estimates).all()):
        return TestResult(np.nan, len(index), np.nan)
    covariance = fit.covariance[np.ix_(index, index)]
    # Scaled to unit diagonal, so that unlike units do not spoil the solution.
    se = np.sqrt(np.diagonal(covariance))
    z = estimates / se
    return _result(float(z @ np.linalg.solve(covariance / np.outer(se, se), z)), len(index))


def _result(statistic: float, df: int) -> TestResult:
    from scipy.special import chdtrc

    return TestResult(statistic, df, float(chdtrc(df, statistic)))


def _reduced_together(observed: Observed, fit: Fit, dropped: Sequence[tuple[int, ...]]) -> list[float]:
    """Log-likelihoods of the models without each group, by Newton steps taken all together.

    The curvature is computed once, near the optimum, and again only for models that settle slowly.
    """
    p = observed.blocks.p
    # The intercept of centred columns is another one: a model without intercept is fitted alone.
    standardised = Standardised.of(observed, fit.covariance)
    centre = standardised.inward(fit.coefficients)
    covariance = standardised.inward_covariance(fit.covariance)
    intercept = None if standardised.centred is None else standardised.centred.intercept
    together = [place for place, columns in enumerate(dropped) if intercept not in columns]
    answers = np.full(len(dropped), np.nan)
    points = np.empty((len(together), p))
    free = np.ones((len(together), p))
    for row, place in enumerate(together):
        gone = list(dropped[place])
        free[row, gone] = 0.0
        pull = np.linalg.solve(covariance[np.ix_(gone, gone)], centre[gone])
        points[row] = centre - covariance[:, gone] @ pull
        points[row, gone] = 0.0
    alive = np.arange(len(together))
    inverse = np.empty((len(together), p, p))
    last = np.full(len(together), np.inf)
    tolerance = 1e-10
    renew = True
    for _ in range(PASSES):
        if len(alive) == 0:
            break
        here = standardised.sums(points[alive], information=renew)
        mask = free[alive]
        if here.information is not None:
            held = here.information * mask[:, :, None] * mask[:, None, :]
            held[:, np.arange(p), np.arange(p)] += 1 - mask
            try:
                inverse[alive] = np.linalg.inv(held)
            except np.linalg.LinAlgError:
                break
        gradient = here.gradient * mask
        step = np.einsum("kij,kj->ki", inverse[alive], gradient)
        decrement = np.einsum("ki,ki->k", gradient, step)
        good = np.isfinite(decrement) & (decrement >= 0) & (decrement < 2 * last[alive])
        done = good & (decrement < tolerance)
        for row in np.flatnonzero(done).tolist():
            answers[together[alive[row]]] = here.log_likelihood[row] + decrement[row] / 2
        points[alive] += step
        renew = bool((decrement[good & ~done] > 0.05 * last[alive][good & ~done]).any())
        last[alive] = decrement
        alive = alive[good & ~done]
    for place in np.flatnonzero(np.isnan(answers)).tolist():
        answers[place] = _alone(observed, dropped[place])
    return [float(answer) for answer in answers]


def _alone(observed: Observed, columns: Sequence[int]) -> float:
    """Log-likelihood without some columns, by a fit of its own."""
    kept = [column for column in range(observed.blocks.p) if column not in set(columns)]
    if not kept:
        return _without_columns(observed)
    blocks = observed.blocks.columns(kept)
    reduced = Observed(blocks, observed.event, observed.counts, observed.offset)
    return climb(reduced, centring(blocks)).sums.log_likelihood


def _without_columns(observed: Observed) -> float:
    eta = np.zeros(observed.blocks.n) if observed.offset is None else observed.offset
    each = -np.logaddexp(0.0, -np.where(observed.event, eta, -eta))
    return float(each.sum() if observed.counts is None else each @ observed.counts)


def _supremum_without(
    blocks: Blocks, event: NDArray[np.bool_], columns: Sequence[int], counts: Counts | None
) -> float:
    kept = [column for column in range(blocks.p) if column not in set(columns)]
    if not kept:
        return _without_columns(Observed(blocks, event, counts))
    reduced = blocks.columns(kept)
    separation = detect(reduced, event, counts)
    if separation.kind is not None:
        return fit_at_limit(reduced, event, separation, counts).log_likelihood
    return _alone(Observed(blocks, event, counts), columns)
