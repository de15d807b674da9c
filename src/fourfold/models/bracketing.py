"""Limits by root finding on the profile: slower than the joint advance, and sure to arrive.

The profile log-likelihood is concave, so that a bracket, once found, is kept.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from fourfold.models.batch import Standardised
from fourfold.models.likelihood import Sums
from fourfold.models.newton import HALVINGS, ITERATIONS, Curvature

Array = NDArray[np.float64]

DOUBLINGS = 60


class Profile:
    """The profile log-likelihood of c'b above a target, each maximum started from the last."""

    def __init__(self, standardised: Standardised, start: Array, contrast: Array, target: float) -> None:
        self.standardised = standardised
        self.contrast = contrast
        self.target = target
        self.point = start

    def __call__(self, value: float) -> float:
        self.point, sums = _constrained(self.standardised, self.point, self.contrast, value)
        return sums.log_likelihood - self.target

    def unit(self) -> float:
        """Standard error of c'b by the curvature at the current point."""
        sums = self.standardised.sums(self.point[None, :], information=True)
        curvature = None if sums.information is None else Curvature.of(sums.information[0])
        if curvature is None:
            raise ArithmeticError("the information matrix is singular along the profile")
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
    step = 2 * profile.unit()
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


def constrained_maximum(standardised: Standardised, start: Array, contrast: Array, value: float) -> Sums:
    """Maximise the log-likelihood subject to c'b = value, from any start.

    Raises
    ------
    ArithmeticError
        If the information is singular or the steps do not settle.
    """
    return _constrained(standardised, start, contrast, value)[1]


def _constrained(
    standardised: Standardised, start: Array, contrast: Array, value: float
) -> tuple[Array, Sums]:
    def evaluate(point: Array) -> Sums:
        sums = standardised.sums(point[None, :], information=True)
        if sums.information is None:
            raise ArithmeticError("the information was not computed")
        return Sums(float(sums.log_likelihood[0]), sums.gradient[0], sums.information[0])

    point, here = start, evaluate(start)
    missing = value - float(contrast @ start)
    for iteration in range(ITERATIONS):
        curvature = Curvature.of(here.information)
        if curvature is None:
            raise ArithmeticError("the information matrix is singular along the profile")
        h = curvature.solve(contrast)
        size = float(contrast @ h)
        if iteration == 0 and missing != 0:
            # On to the constraint first, along the profile's tangent.
            point = point + h * (missing / size)
            here = evaluate(point)
            continue
        g = curvature.solve(here.gradient)
        ahead = float(contrast @ g)
        decrement = float(here.gradient @ g) - ahead**2 / size
        if decrement < 1e-12 * max(1.0, abs(here.log_likelihood)):
            return point, here
        step = g - h * (ahead / size)
        for _ in range(HALVINGS):
            there = evaluate(point + step)
            if there.log_likelihood >= here.log_likelihood - 1e-13 * max(1.0, abs(here.log_likelihood)):
                break
            step = step / 2
        else:
            return point, here
        point, here = point + step, there
    raise ArithmeticError("the steps along the profile did not settle")
