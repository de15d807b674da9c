"""The proportion with the event along a quantity, before any adjustment: a smooth and bins."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray
from scipy.special import expit

from fourfold.measures.binomial_fit import binomial_fit
from fourfold.measures.proportion import normal_quantile, wilson_limits
from fourfold.measures.tally import Tally, tally
from fourfold.results import tree

Array = NDArray[np.float64]
Integers = NDArray[np.int64]

# Above this many distinct values they are first gathered into as many groups of equal size.
MOST_VALUES = 2_000
# Knots by Harrell's quantiles; the richest shape that the distinct values and events bear is used.
KNOT_QUANTILES = {4: (0.05, 0.35, 0.65, 0.95), 3: (0.1, 0.5, 0.9)}


def smooth(
    x: Array,
    event: NDArray[np.bool_],
    counts: Integers | None = None,
    *,
    confidence: float = 95.0,
    points: int = 101,
) -> list[tree.CurvePoint]:
    """Smoothed proportion by a logistic restricted cubic spline with a pointwise Wald band.

    Parameters
    ----------
    x : (n,) float array
        The quantity, in its unit, nothing missing.
    event : (n,) bool array
    counts : (n,) int array, optional
    confidence : float
        In percent.
    points : int
        How many points, evenly spaced between the 1st and 99th percentile of ``x``.

    Returns
    -------
    list of tree.CurvePoint
        Four knots; three, then a straight line in the log odds, where few distinct values or
        separation rule more out. Empty where no curve exists: fewer than three distinct values,
        nobody or everybody with the event, or values that separate the outcome.
    """
    found = tally(x, event, counts)
    if found.values.size > MOST_VALUES:
        found = found.gathered(MOST_VALUES)
    events = int(found.events.sum())
    if found.values.size < 3 or events in (0, found.total):
        return []
    low, high = found.quantiles([0.01, 0.99])
    if low == high:
        low, high = found.values[0], found.values[-1]
    at = np.linspace(low, high, points)
    centre = float(np.average(found.values, weights=found.people))
    spread = float(np.sqrt(np.average((found.values - centre) ** 2, weights=found.people)))
    for knots in _shapes(found):
        scaled = (knots - centre) / spread
        columns = _columns((found.values - centre) / spread, scaled)
        fit = binomial_fit(columns, found.events, found.people)
        if fit.converged:
            rows = _columns((at - centre) / spread, scaled)
            eta = rows @ fit.coefficients
            error = np.sqrt(np.einsum("ij,jk,ik->i", rows, fit.covariance, rows))
            half = normal_quantile(confidence) * error
            drawn = zip(at, expit(eta), expit(eta - half), expit(eta + half), strict=True)
            return [
                tree.CurvePoint(x=float(v), y=float(p), lower=float(lo), upper=float(hi))
                for v, p, lo, hi in drawn
            ]
    return []


def bins(
    x: Array,
    event: NDArray[np.bool_],
    counts: Integers | None = None,
    *,
    groups: int = 10,
    confidence: float = 95.0,
) -> list[tree.QuantityBin]:
    """Bins of nearly equal size, ties together, each with Wilson's interval.

    ``lower`` and ``upper`` are the smallest and largest value in the bin.
    """
    found = tally(x, event, counts)
    if not found.values.size:
        return []
    starts = found.equal_groups(groups)
    ends = np.append(starts[1:], found.values.size) - 1
    grouped = found.gathered(groups)
    lower, upper = wilson_limits(grouped.events, grouped.people, confidence)
    return [
        tree.QuantityBin(
            lower=float(found.values[start]),
            upper=float(found.values[end]),
            mean=float(grouped.values[place]),
            events=int(grouped.events[place]),
            total=int(grouped.people[place]),
            proportion=float(grouped.events[place] / grouped.people[place]),
            proportion_lower=float(lower[place]),
            proportion_upper=float(upper[place]),
        )
        for place, (start, end) in enumerate(zip(starts, ends, strict=True))
    ]


def _shapes(found: Tally) -> list[Array]:
    """Knots to try, richest first; an empty array is the straight line."""
    shapes = []
    for count, probabilities in KNOT_QUANTILES.items():
        knots = np.unique(found.quantiles(probabilities))
        if knots.size == count and found.values.size >= 2 * count - 1:
            shapes.append(knots)
    return [*shapes, np.empty(0)]


def _columns(x: Array, knots: Array) -> Array:
    """Intercept, the value, and the spline columns that are straight beyond the outer knots."""
    columns = [np.ones_like(x), x]
    if knots.size:
        last, before = knots[-1], knots[-2]

        def cube(knot: float) -> Array:
            return np.clip(x - knot, 0.0, None) ** 3

        for knot in knots[:-2]:
            part = cube(knot) - cube(before) * (last - knot) / (last - before)
            part = part + cube(last) * (before - knot) / (last - before)
            columns.append(part / (last - knots[0]) ** 2)
    return np.column_stack(columns)
