"""The calibration curve: outcome smoothed over fitted risk, and how far it strays from it."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray

from fourfold.measures.local_regression import local_regression
from fourfold.measures.proportion import normal_quantile
from fourfold.measures.tally import Tally, significant, tally
from fourfold.results import tree

Array = NDArray[np.float64]
Integers = NDArray[np.int64]

SPAN = 0.75
DEGREE = 2
FEWEST_RISKS = 5
# Above this many distinct risks the work would grow with their square.
MOST_RISKS = 1_500
# At either end this many distinct risks stay as they are: the curve bends most on them.
OUTERMOST = 50
COMPUTED = 300
METHOD = "local quadratic regression of the outcome on fitted risk, span 0.75"
METHOD_GATHERED = METHOD + ", fitted risks but the outermost first gathered into 1,500 groups of equal size"
METHOD_NONE = "no smooth curve: fewer than five distinct fitted risks"


@dataclass(frozen=True, slots=True)
class SmoothCalibration:
    """Curve with pointwise band, and distances between fitted risk and curve over all people.

    Attributes
    ----------
    curve : list of tree.CurvePoint
        Between the 1st and the 99th percentile of fitted risk.
    ici, e50, e90, emax : float or None
        Mean, median, 90th percentile and largest absolute distance.

    References
    ----------
    Austin & Steyerberg (2019). Stat Med 38, 4051-4065.
    """

    curve: list[tree.CurvePoint]
    method: str
    ici: float | None = None
    e50: float | None = None
    e90: float | None = None
    emax: float | None = None


def smooth_curve(
    risk: Array,
    event: NDArray[np.bool_],
    counts: Integers | None = None,
    *,
    confidence: float = 95.0,
    points: int = 101,
) -> SmoothCalibration:
    """Smooth the outcome over fitted risk by local quadratic regression.

    Parameters
    ----------
    risk : (n,) float array
    event : (n,) bool array
    counts : (n,) int array, optional
    confidence : float
        Of the pointwise band, in percent. Its variance is that of 0/1 outcomes at the curve.
    points : int
        Evenly spaced points of the curve.
    """
    found = tally(significant(risk), event, counts)
    if found.values.size < FEWEST_RISKS:
        return SmoothCalibration([], METHOD_NONE)
    low, high = found.quantiles([0.01, 0.99])
    everyone, method = found, METHOD
    if found.values.size > MOST_RISKS:
        found, method = _gathered(found), METHOD_GATHERED
    at = found.values if found is everyone else found.values[_places(found.values.size)]
    fitted = local_regression(found, at, SPAN, DEGREE).fitted
    smoothed = np.clip(np.interp(found.values, at, fitted), 0.0, 1.0)
    ici, e50, e90, emax = _distances(everyone, found, smoothed)
    curve: list[tree.CurvePoint] = []
    if high > low:
        at = np.linspace(low, high, points)
        fit = local_regression(found, at, SPAN, DEGREE, spread=smoothed * (1 - smoothed))
        half = normal_quantile(confidence) * np.sqrt(fit.variance)
        drawn = zip(at, np.clip(fit.fitted, 0.0, 1.0), fit.fitted, half, strict=True)
        curve = [
            tree.CurvePoint(
                x=float(x),
                y=float(y),
                lower=float(np.clip(raw - reach, 0.0, 1.0)),
                upper=float(np.clip(raw + reach, 0.0, 1.0)),
            )
            for x, y, raw, reach in drawn
        ]
    return SmoothCalibration(curve, method, ici=ici, e50=e50, e90=e90, emax=emax)


def _gathered(found: Tally) -> Tally:
    inner = slice(OUTERMOST, -OUTERMOST)
    middle = Tally(found.values[inner], found.people[inner], found.events[inner]).gathered(MOST_RISKS)

    def joined(outer: NDArray[Any], within: NDArray[Any]) -> NDArray[Any]:
        return np.concatenate([outer[:OUTERMOST], within, outer[-OUTERMOST:]])

    return Tally(
        joined(found.values, middle.values),
        joined(found.people, middle.people),
        joined(found.events, middle.events),
    )


def _places(values: int) -> Integers:
    """Where a gathered curve is computed; in between it is read off a straight line."""
    outer = np.arange(OUTERMOST)
    even = np.linspace(0, values - 1, COMPUTED).astype(np.int64)
    return np.unique(np.concatenate([outer, even, values - 1 - outer]))


def _distances(everyone: Tally, found: Tally, smoothed: Array) -> tuple[float, float, float, float]:
    """Mean, median, 90th percentile and largest distance, over people."""
    # Between groups the curve is read off a straight line.
    distance = np.abs(everyone.values - np.interp(everyone.values, found.values, smoothed))
    spread = tally(distance, np.zeros(distance.size, dtype=bool), everyone.people)
    e50, e90 = spread.quantiles([0.5, 0.9])
    mean = float(distance @ everyone.people / everyone.total)
    return mean, float(e50), float(e90), float(distance.max())
