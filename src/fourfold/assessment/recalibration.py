"""Calibration in the large and slope of given log odds, for data that did not fit the model.

On the data of a maximum likelihood fit they are 0 and 1 by construction and say nothing.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy.special import chdtrc

from fourfold.measures.binomial_fit import BinomialFit, binomial_fit, log_likelihood

Array = NDArray[np.float64]
Integers = NDArray[np.int64]


@dataclass(frozen=True, slots=True)
class Recalibration:
    """What moving and stretching the log odds would gain.

    Attributes
    ----------
    in_the_large, in_the_large_error : float
        Intercept beside the log odds as offset, and its standard error; nan without an estimate.
    intercept, slope, slope_error : float
        Both fitted; nan without a finite estimate.
    original, moved, stretched : float
        Log-likelihoods of the log odds as given, with the intercept, with intercept and slope.
    statistic, p_value : float
        Likelihood ratio test of intercept 0 and slope 1 together, 2 df.

    References
    ----------
    Cox (1958). Biometrika 45, 562-565.
    """

    in_the_large: float
    in_the_large_error: float
    intercept: float
    slope: float
    slope_error: float
    original: float
    moved: float
    stretched: float
    statistic: float
    p_value: float


def recalibrate(log_odds: Array, event: NDArray[np.bool_], counts: Integers | None = None) -> Recalibration:
    """Fit intercept alone, then intercept and slope, to given log odds.

    Parameters
    ----------
    log_odds : (n,) float array
        Rows with infinite log odds (risk 0 or 1) are left out: they have no slope.
    event : (n,) bool array
    counts : (n,) int array, optional
    """
    x, events, people = _finite(log_odds, event, counts)
    large = binomial_fit(np.ones((x.size, 1)), events, people, x)
    both = _slope_fit(x, events, people)
    original = log_likelihood(x, events, people)
    statistic = max(0.0, 2 * (both.log_likelihood - original))
    b, error = _estimate(both, 1)
    return Recalibration(
        *_estimate(large, 0),
        intercept=_estimate(both, 0)[0],
        slope=b,
        slope_error=error,
        original=original,
        moved=large.log_likelihood,
        stretched=both.log_likelihood,
        statistic=statistic,
        p_value=float(chdtrc(2, statistic)),
    )


def in_the_large(
    log_odds: Array, event: NDArray[np.bool_], counts: Integers | None = None
) -> tuple[float, float]:
    """Intercept with the log odds as offset, and its standard error."""
    x, events, people = _finite(log_odds, event, counts)
    return _estimate(binomial_fit(np.ones((x.size, 1)), events, people, x), 0)


def slope(log_odds: Array, event: NDArray[np.bool_], counts: Integers | None = None) -> tuple[float, float]:
    """Coefficient of the log odds, with an intercept beside it, and its standard error."""
    return _estimate(_slope_fit(*_finite(log_odds, event, counts)), 1)


def observed_expected(risk: Array, event: NDArray[np.bool_], counts: Integers | None = None) -> float:
    """Events observed over events expected."""
    weight = np.ones(risk.size) if counts is None else counts
    return float(weight @ event / (weight @ risk))


def _slope_fit(x: Array, events: Array, people: Array) -> BinomialFit:
    # In units of their own spread, whatever that is; turned back afterwards.
    spread = float(np.std(x))
    if spread == 0:
        nothing = np.full(2, np.nan)
        return BinomialFit(nothing, np.full((2, 2), np.nan), math.nan, False)
    fit = binomial_fit(np.column_stack([np.ones_like(x), x / spread]), events, people)
    unit = np.array([1.0, 1 / spread])
    return BinomialFit(
        fit.coefficients * unit, fit.covariance * np.outer(unit, unit), fit.log_likelihood, fit.converged
    )


def _estimate(fit: BinomialFit, place: int) -> tuple[float, float]:
    if not fit.converged:
        return math.nan, math.nan
    return float(fit.coefficients[place]), math.sqrt(fit.covariance[place, place])


def _finite(log_odds: Array, event: NDArray[np.bool_], counts: Integers | None) -> tuple[Array, Array, Array]:
    people = np.ones(log_odds.size) if counts is None else counts.astype(np.float64)
    inside = np.isfinite(log_odds)
    return log_odds[inside], (people * event)[inside], people[inside]
