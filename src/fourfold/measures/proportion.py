"""Intervals of a proportion and of a difference between two.

Score intervals throughout: they stay inside 0 to 1 and keep their coverage for few events.
"""

from __future__ import annotations

import math

import numpy as np
from numpy.typing import ArrayLike, NDArray
from scipy.special import ndtri

from fourfold.results import tree

Array = NDArray[np.float64]

WILSON = "Wilson"
NEWCOMBE = "Newcombe hybrid score"


def normal_quantile(confidence: float) -> float:
    """Two-sided normal quantile of a confidence level given in percent."""
    return float(ndtri((1 + confidence / 100) / 2))


def wilson_limits(events: ArrayLike, people: ArrayLike, confidence: float = 95.0) -> tuple[Array, Array]:
    """Wilson's score limits of many proportions at once.

    Parameters
    ----------
    events, people : (m,) array
        ``people`` must be positive; a limit is ``nan`` where it is not.
    confidence : float
        In percent.

    Returns
    -------
    lower, upper : (m,) float array

    References
    ----------
    Wilson (1927). J Am Stat Assoc 22, 209-212.
    """
    d, n = np.asarray(events, dtype=np.float64), np.asarray(people, dtype=np.float64)
    z = normal_quantile(confidence)
    with np.errstate(divide="ignore", invalid="ignore"):
        p = d / n
        centre = (p + z * z / (2 * n)) / (1 + z * z / n)
        half = z / (1 + z * z / n) * np.sqrt(p * (1 - p) / n + z * z / (4 * n * n))
    # At 0 and n events the limits are exactly 0 and 1; rounding would leave 1e-17 in their place.
    lower = np.where(d == 0, 0.0, centre - half)
    upper = np.where(d == n, 1.0, centre + half)
    unknown = n <= 0
    return np.where(unknown, np.nan, lower), np.where(unknown, np.nan, upper)


def wilson(events: int, people: int, confidence: float = 95.0) -> tree.Interval:
    """Proportion with Wilson's score interval; all None without people."""
    if people <= 0:
        return tree.Interval(method=WILSON)
    lower, upper = wilson_limits([events], [people], confidence)
    return tree.Interval(
        estimate=events / people, lower=float(lower[0]), upper=float(upper[0]), method=WILSON
    )


def newcombe(
    events_1: int, people_1: int, events_0: int, people_0: int, confidence: float = 95.0
) -> tree.Interval:
    """Difference of two proportions by the hybrid score method without continuity correction.

    References
    ----------
    Newcombe (1998). Stat Med 17, 873-890.
    """
    if people_1 <= 0 or people_0 <= 0:
        return tree.Interval(method=NEWCOMBE)
    p1, p0 = events_1 / people_1, events_0 / people_0
    lower, upper = wilson_limits([events_1, events_0], [people_1, people_0], confidence)
    difference = p1 - p0
    return tree.Interval(
        estimate=difference,
        lower=difference - math.hypot(p1 - lower[0], upper[1] - p0),
        upper=difference + math.hypot(upper[0] - p1, p0 - lower[1]),
        method=NEWCOMBE,
    )
