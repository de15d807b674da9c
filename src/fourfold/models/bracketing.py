"""Limits by root finding on the profile: slower than the joint advance, and sure to arrive.

The profile log-likelihood is concave, so that a bracket, once found, is kept.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from fourfold.models.batch import Standardised
from fourfold.models.newton import Curvature, Optimum, maximise

Array = NDArray[np.float64]

DOUBLINGS = 60

STEPS = 1000
"""Newton steps along a profile: far out the likelihood is nearly flat and each gains little."""


class Profile:
    """The profile log-likelihood of c'b above a target.

    Each maximum starts between those already known on either side: the log-likelihood is concave, so
    that it is no lower there than on the line between them.
    """

    def __init__(self, standardised: Standardised, start: Array, contrast: Array, target: float) -> None:
        self.standardised = standardised
        self.contrast = contrast
        self.target = target
        self.points = {float(contrast @ start): start}
        self.heights: dict[float, float] = {}

    def __call__(self, value: float) -> float:
        if value not in self.heights:
            start = self._start(value)
            found = constrained_maximum(self.standardised, start, self.contrast)
            self.points[value] = found.coefficients
            self.heights[value] = found.sums.log_likelihood - self.target
        return self.heights[value]

    def _start(self, value: float) -> Array:
        """A point with c'b = value, between known ones or beyond the nearest."""
        below = [known for known in self.points if known <= value]
        above = [known for known in self.points if known >= value]
        if below and above:
            left, right = max(below), min(above)
            share = 0.0 if left == right else (value - left) / (right - left)
            return (1 - share) * self.points[left] + share * self.points[right]
        nearest = max(below) if below else min(above)
        return self.points[nearest] + self.contrast * (value - nearest) / (self.contrast @ self.contrast)

    def unit(self) -> float:
        """Standard error of c'b by the curvature at the first point; 1 where there is none."""
        point = next(iter(self.points.values()))
        information = self.standardised.one(point).information
        curvature = Curvature.of(information)
        if curvature is None:
            return 1.0
        return float(np.sqrt(self.contrast @ curvature.solve(self.contrast)))


def limit_by_bracketing(
    standardised: Standardised, centre: Array, contrast: Array, side: float, target: float
) -> float:
    """Limit of c'b on one side of a finite estimate; infinite if the profile never falls so far.

    Parameters
    ----------
    centre : (p,) float array
        The estimate, in inner coefficients.
    contrast : (p,) float array
        In inner coefficients too.
    side : float
        -1 for the lower limit, +1 for the upper.
    target : float
        Log-likelihood at the limit.
    """
    profile = Profile(standardised, centre, contrast, target)
    inside = float(contrast @ centre)
    step = profile.unit()
    for _ in range(DOUBLINGS):
        outside = inside + side * step
        if profile(outside) < 0:
            return _root(profile, inside, outside)
        inside, step = outside, 2 * step
    return side * np.inf


def limit_of_unbounded(standardised: Standardised, column: int, direction: int, target: float) -> float:
    """The limit opposite to ``direction`` of a coefficient that has no finite estimate.

    Parameters
    ----------
    column : int
        Of the observed columns; its user's coefficient is meant.
    direction : int
        +1 if the likelihood rises towards +infinity, -1 towards -infinity.
    target : float
        Log-likelihood at the limit, below the supremum.
    """
    contrast = standardised.change[column]
    profile = Profile(standardised, np.zeros(len(contrast)), contrast, target)
    step, value = profile.unit(), 0.0
    towards = direction if profile(value) < 0 else -direction
    for _ in range(DOUBLINGS):
        beyond = value + towards * step
        if (profile(beyond) < 0) != (towards == direction):
            return _root(profile, value, beyond)
        value, step = beyond, 2 * step
    return -direction * np.inf


def _root(profile: Profile, inside: float, outside: float) -> float:
    from scipy.optimize import brentq

    return float(brentq(profile, inside, outside, xtol=1e-12 * max(1.0, abs(outside)), rtol=1e-14))


def constrained_maximum(standardised: Standardised, start: Array, contrast: Array) -> Optimum:
    """Maximise the log-likelihood among all b with the c'b that the start has.

    Raises
    ------
    ArithmeticError
        If the steps do not settle.
    """
    people = standardised.observed.people
    found = maximise(standardised.one, start, people, standardised.bound, held=contrast, iterations=STEPS)
    if not found.converged:
        raise ArithmeticError("the steps along the profile did not settle")
    return found
