"""Profile-likelihood limits of coefficients and of linear combinations of them."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from fourfold.models.batch import Standardised, groups
from fourfold.models.blocks import Blocks
from fourfold.models.bracketing import constrained_maximum, limit_by_bracketing, limit_of_unbounded
from fourfold.models.likelihood import Observed
from fourfold.models.limits import remainder
from fourfold.models.logistic import Fit
from fourfold.models.separation import DOWNWARD, NONE, UPWARD, Separation, detect

Array = NDArray[np.float64]
Counts = NDArray[np.int64] | NDArray[np.float64]

PASSES = 25
"""Passes over the rows before what is left is bracketed."""

SLOW = 0.05
"""Where a step leaves more than this of the error, the curvature is computed anew."""


@dataclass(frozen=True, slots=True)
class ProfileLimits:
    """Limits on the log odds scale; infinite on an unbounded side, NaN where none could be computed.

    Attributes
    ----------
    lower, upper : (m,) float array
    """

    lower: Array
    upper: Array


@dataclass(frozen=True, slots=True)
class ContrastLimits:
    """Limits of one linear combination, and the likelihood-ratio test that it is zero.

    Attributes
    ----------
    lower, upper, statistic, p_value : (1,) float array
    """

    lower: Array
    upper: Array
    statistic: Array
    p_value: Array


def profile_limits(
    blocks: Blocks,
    event: NDArray[np.bool_],
    fit: Fit,
    columns: Sequence[int],
    confidence: float = 95.0,
    counts: Counts | None = None,
    separation: Separation | None = None,
    offset: Array | None = None,
) -> ProfileLimits:
    """Limits of single coefficients: {v : 2 [l(b^) - l_p(v)] <= chi-squared of 1 df}.

    All limits are advanced together, each along its own profile by the quadratic model of Venzon and
    Moolgavkar, until the deviance at it is right to 1e-9; those that stray are bracketed.

    Parameters
    ----------
    blocks : Blocks of p columns
    event : (n,) bool array
    fit : Fit
        Of the same rows.
    columns : sequence of m int
    confidence : float
        In percent.
    counts : (n,) array, optional
    separation : Separation, optional
        Needed if ``fit`` lies at the limit.
    offset : (n,) float array, optional
        As in the fit; not with separated data.

    References
    ----------
    Venzon & Moolgavkar (1988). Applied Statistics 37, 87-94.
    """
    lower, upper = np.full(len(columns), np.nan), np.full(len(columns), np.nan)
    if separation is None or separation.kind is None:
        contrasts = np.zeros((len(columns), blocks.p))
        contrasts[np.arange(len(columns)), list(columns)] = 1.0
        if len(columns):
            observed = Observed(blocks, event, counts, offset)
            lower, upper = _both_limits(observed, fit, contrasts, confidence)
        return ProfileLimits(lower, upper)
    finite = [place for place, column in enumerate(columns) if separation.direction[column] == NONE]
    left = remainder(blocks, event, separation, counts)
    if finite and left is not None:
        contrasts = np.zeros((len(finite), len(left.columns)))
        for row, place in enumerate(finite):
            contrasts[row, left.columns.index(columns[place])] = 1.0
        lower[finite], upper[finite] = _both_limits(left.observed, left.fit(), contrasts, confidence)
    for place, column in enumerate(columns):
        if separation.direction[column] != NONE:
            lower[place], upper[place] = _one_sided(
                blocks, event, fit, column, int(separation.direction[column]), confidence, counts
            )
    return ProfileLimits(lower, upper)


def profile_contrast(
    blocks: Blocks,
    event: NDArray[np.bool_],
    fit: Fit,
    contrast: Array,
    confidence: float = 95.0,
    counts: Counts | None = None,
    separation: Separation | None = None,
    offset: Array | None = None,
) -> ContrastLimits:
    """Limits of c'b for one contrast c, shape (p,), and the likelihood-ratio test of c'b = 0.

    Parameters are those of :func:`profile_limits`. A contrast that involves a coefficient without
    finite estimate has no limits here: both are NaN.
    """
    from scipy.special import chdtrc

    observed, inner = Observed(blocks, event, counts, offset), fit
    if separation is not None and separation.kind is not None:
        if bool((separation.direction[contrast != 0] != NONE).any()):
            nothing = np.array([np.nan])
            return ContrastLimits(nothing, nothing, nothing, nothing)
        left = remainder(blocks, event, separation, counts)
        if left is None:
            raise ValueError("every row is fitted with certainty: no contrast has a finite estimate")
        observed, inner, contrast = left.observed, left.fit(), contrast[left.columns]
    lower, upper = _both_limits(observed, inner, contrast[None, :], confidence)
    standardised = Standardised.of(observed, inner.covariance)
    at = standardised.inward(inner.coefficients)
    along = standardised.change.T @ contrast
    spread = standardised.inward_covariance(inner.covariance) @ along
    on_null = at - spread * (along @ at) / (along @ spread)
    try:
        null = constrained_maximum(standardised, on_null, along).sums.log_likelihood
    except ArithmeticError:
        null = np.nan
    statistic = np.array([np.maximum(0.0, 2 * (inner.log_likelihood - null))])
    return ContrastLimits(lower, upper, statistic, np.asarray(chdtrc(1, statistic)))


def drop_of(confidence: float) -> float:
    """How far the log-likelihood falls from its maximum to a limit."""
    from scipy.special import chdtri

    return float(chdtri(1, 1 - confidence / 100)) / 2


def _both_limits(observed: Observed, fit: Fit, contrasts: Array, confidence: float) -> tuple[Array, Array]:
    """Lower and upper limits of each contrast, shape (m, p), of a model with a finite estimate."""
    standardised = Standardised.of(observed, fit.covariance)
    centre = standardised.inward(fit.coefficients)
    covariance = standardised.inward_covariance(fit.covariance)
    inner = contrasts @ standardised.change
    m = len(contrasts)
    both = np.vstack([inner, inner])
    sides = np.repeat([-1.0, 1.0], m)
    drop = drop_of(confidence)
    target = fit.log_likelihood - drop
    # Out from the estimate along each profile's tangent, as far as the Wald limit.
    along = both @ covariance
    along /= np.sqrt(np.einsum("kj,kj->k", along, both))[:, None]
    start = centre + sides[:, None] * np.sqrt(2 * drop) * along
    values, settled = np.empty(2 * m), np.empty(2 * m, dtype=bool)
    for together in groups(2 * m, observed.blocks.p):
        values[together], settled[together] = _advance(
            standardised, centre, start[together], both[together], sides[together], target
        )
    for place in np.flatnonzero(~settled).tolist():
        try:
            values[place] = limit_by_bracketing(
                standardised, centre, both[place], float(sides[place]), target
            )
        except ArithmeticError:
            values[place] = np.nan
    return values[:m], values[m:]


def _advance(
    standardised: Standardised, centre: Array, start: Array, contrasts: Array, sides: Array, target: float
) -> tuple[Array, NDArray[np.bool_]]:
    """Move to all limits at once.

    At a point with gradient U and inverse curvature V, let g = V U, h = V c and k = c'h. The
    quadratic model's maximum subject to c'step = d is reached by step = g + h (d - c'g) / k and is
    l + U'g / 2 - (d - c'g)^2 / (2k). Setting it to the target gives
    step = g + side h sqrt(2 (l + U'g/2 - target) / k): Venzon and Moolgavkar's step for any contrast.

    Returns
    -------
    values : (k,) float array
        c'b at each limit.
    settled : (k,) bool array
        Where the deviance was verified.
    """
    points = start.copy()
    tolerance = max(1e-9, 4e-15 * abs(target))
    settled = np.zeros(len(points), dtype=bool)
    alive = np.arange(len(points))
    inverse = np.empty((*points.shape, points.shape[1]))
    last_error = np.full(len(points), np.inf)
    renew = True
    for _ in range(PASSES):
        here = standardised.sums(points[alive], information=renew)
        if here.information is not None:
            try:
                inverse[alive] = np.linalg.inv(here.information)
            except np.linalg.LinAlgError:
                break
        c = contrasts[alive]
        # A point that strayed far may overflow; it is then not good, and drawn back.
        with np.errstate(all="ignore"):
            g = np.einsum("kij,kj->ki", inverse[alive], here.gradient)
            h = np.einsum("kij,kj->ki", inverse[alive], c)
            size = np.einsum("ki,ki->k", c, h)
            pull = (np.einsum("ki,ki->k", c, g) / size)[:, None]
            # What is left of the gradient across the contrast, and the rise it still promises.
            nuisance = np.einsum("ki,ki->k", here.gradient - c * pull, g - h * pull)
            error = np.abs(2 * (here.log_likelihood - target)) + np.abs(nuisance)
            room = 2 * (here.log_likelihood - target) + np.einsum("ki,ki->k", here.gradient, g)
            outward = h * (sides[alive] * np.sqrt(room / size))[:, None]
        good = np.isfinite(error) & (room > 0) & (size > 0)
        # Too far out for the quadratic model: half way back to the estimate.
        step = np.where(good[:, None], g + outward, (centre - points[alive]) / 2)
        points[alive] += step
        done = good & (error < tolerance)
        settled[alive[done]] = True
        slow = ~good | (error > SLOW * last_error[alive])
        renew = bool((slow & ~done).any())
        last_error[alive] = np.where(good, error, np.inf)
        alive = alive[~done]
        if len(alive) == 0:
            break
    return np.einsum("ki,ki->k", contrasts, points), settled


def _one_sided(
    blocks: Blocks,
    event: NDArray[np.bool_],
    fit: Fit,
    column: int,
    direction: int,
    confidence: float,
    counts: Counts | None,
) -> tuple[float, float]:
    """The one limit of a coefficient that grows or falls without bound.

    With the coefficient held, the other columns may be separated still, whatever the value held:
    separation does not depend on an offset. The rows they leave are those whose likelihood varies.
    """
    if direction not in (UPWARD, DOWNWARD):
        return -np.inf, np.inf
    others = [other for other in range(blocks.p) if other != column]
    rows = np.ones(blocks.n, dtype=bool) if counts is None else np.asarray(counts > 0)
    if others:
        reduced = blocks.columns(others)
        separation = detect(reduced, event, counts)
        rows &= ~separation.certain
        left = remainder(reduced, event, separation, counts)
        others = [] if left is None else [others[kept] for kept in left.columns]
    observed = Observed(
        blocks.rows(rows).columns([column, *others]), event[rows], None if counts is None else counts[rows]
    )
    target = fit.log_likelihood - drop_of(confidence)
    try:
        limit = limit_of_unbounded(Standardised.plain(observed), 0, direction, target)
    except ArithmeticError:
        limit = np.nan
    return (limit, np.inf) if direction == UPWARD else (-np.inf, limit)
