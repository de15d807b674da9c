"""Discrimination: the area under the ROC curve with DeLong's variance, and the curve.

Scores are never argsorted: sorting the values of those with and without the event apart and
merging the two is several times as fast, and the ranks follow from where they interleave.
"""

from __future__ import annotations

import math
import sys
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy.special import expit

from fourfold.assessment.roc_curve import roc_curve
from fourfold.errors import EstimationError
from fourfold.measures.proportion import normal_quantile
from fourfold.measures.tally import Tally, significant, tally
from fourfold.results import tree

Array = NDArray[np.float64]
Integers = NDArray[np.int64]

LOGIT = "DeLong, logit scale"
ALL_ORDERED = "all pairs ordered, one-sided bound"
TOO_FEW = "no interval: fewer than two with or without the event"
# Below this many rows loading compiled code costs more than it saves.
COMPILED_FROM = 200_000


@dataclass(frozen=True, slots=True)
class Auc:
    """Area under the ROC curve with DeLong's standard error.

    Attributes
    ----------
    estimate : float
        Probability that a person with the event has the higher score; ties count half.
    standard_error : float
        On the probability scale; nan with a single person with, or without, the event.
    events, non_events : int

    References
    ----------
    DeLong, DeLong & Clarke-Pearson (1988). Biometrics 44, 837-845.
    Sun & Xu (2014). IEEE Signal Process Lett 21, 1389-1393.
    """

    estimate: float
    standard_error: float
    events: int
    non_events: int


def auc(
    score: Array, event: NDArray[np.bool_], counts: Integers | None = None, *, engine: str = "auto"
) -> Auc:
    """Estimate the area under the ROC curve of ``score`` for ``event``.

    Parameters
    ----------
    score : (n,) float array
        Any scale; only the order counts. No nan.
    event : (n,) bool array
    counts : (n,) int array, optional
        People that each row stands for.
    engine : str
        ``numpy``, ``compiled`` (needs numba), or ``auto``: compiled for long data where numba
        has been loaded already.

    Raises
    ------
    EstimationError
        If everyone, or no one, has the event.
    """
    if counts is not None:
        return _from_tally(tally(score, event, counts))
    score = np.ascontiguousarray(score, dtype=np.float64)
    event = np.ascontiguousarray(event, dtype=np.bool_)
    events = int(np.count_nonzero(event))
    _require_contrast(events, event.size - events)
    if engine == "auto":
        engine = "compiled" if event.size >= COMPILED_FROM and "numba" in sys.modules else "numpy"
    if engine == "compiled":
        from fourfold.assessment import compiled_ranks

        return Auc(*compiled_ranks.area(score, event, events), events, event.size - events)
    return _merged(score, event)


def discrimination(
    score: Array,
    event: NDArray[np.bool_],
    counts: Integers | None = None,
    confidence: float = 95.0,
    *,
    points: int = 200,
    least: int = 1,
) -> tree.Discrimination:
    """AUC with its interval on the logit scale, and the ROC curve.

    Parameters
    ----------
    score : (n,) float array
        Fitted risk or log odds; rounded to 12 significant digits, so that equal patterns tie.
    event : (n,) bool array
    counts : (n,) int array, optional
    confidence : float
        In percent.
    points : int
        The curve is thinned to about this many of its points.
    least : int
        Between two points of the curve lie at least this many people with the event or none,
        and as many without it or none.

    Raises
    ------
    EstimationError
        If everyone, or no one, has the event.
    """
    rounded = significant(score)
    found = auc(rounded, event, counts)
    a, error = found.estimate, found.standard_error
    lower: float | None = None
    upper: float | None = None
    method = LOGIT
    fewest = min(found.events, found.non_events)
    if a in (0.0, 1.0):
        # Disjoint pairs, as many as the smaller group has people, are all ordered: if the area
        # were below the bound that would be rarer than 1 - confidence.
        bound = (1 - confidence / 100) ** (1 / fewest)
        lower, upper, method = (bound, None, ALL_ORDERED) if a == 1 else (None, 1 - bound, ALL_ORDERED)
    elif math.isnan(error):
        method = TOO_FEW
    else:
        middle, half = math.log(a / (1 - a)), normal_quantile(confidence) * error / (a * (1 - a))
        lower, upper = float(expit(middle - half)), float(expit(middle + half))
    return tree.Discrimination(
        auc=a,
        standard_error=None if math.isnan(error) else error,
        lower=lower,
        upper=upper,
        method=method,
        curve=roc_curve(tally(rounded, event, counts), points, least),
    )


def _require_contrast(events: int, non_events: int) -> None:
    if events == 0 or non_events == 0:
        who = "Nobody" if events == 0 else "Everybody"
        raise EstimationError(
            f"{who} has the event, so discrimination cannot be measured.",
            "Check which value of the outcome is `present:`.",
        )


def _merged(score: Array, event: NDArray[np.bool_]) -> Auc:
    m = int(np.count_nonzero(event))
    n = event.size - m
    both = np.empty(score.size)
    with_event, without = both[:m], both[m:]
    # Taking by place is several times as fast as taking by mask, for outcomes in random order.
    with_event[:] = score.take(np.flatnonzero(event))
    without[:] = score.take(np.flatnonzero(~event))
    with_event.sort()
    without.sort()
    # A stable sort of two sorted runs is one merge.
    order = np.argsort(both, kind="stable")
    ordered, is_event = both[order], order < m
    new = ordered[1:] != ordered[:-1]
    if new.all():
        below, other = np.flatnonzero(is_event), np.flatnonzero(~is_event)
        below -= np.arange(m)
        other -= np.arange(n)
        estimate = int(below.sum()) / (m * n)
        placed, mirrored = below * (1 / n), other * (-1 / m)
        placed -= estimate
        mirrored += 1 - estimate
        return Auc(estimate, _error(float(placed @ placed), m, float(mirrored @ mirrored), n), m, n)
    ends = np.append(np.flatnonzero(new), m + n - 1)
    people = np.diff(ends, prepend=-1)
    return _from_tally(Tally(ordered[ends], people, np.diff(np.cumsum(is_event)[ends], prepend=0)))


def _error(squares_events: float, events: int, squares_non_events: float, non_events: int) -> float:
    if events < 2 or non_events < 2:
        return math.nan
    variance = squares_events / (events - 1) / events + squares_non_events / (non_events - 1) / non_events
    return math.sqrt(variance)


def _from_tally(found: Tally) -> Auc:
    events = found.events.astype(np.float64)
    non_events = (found.people - found.events).astype(np.float64)
    m, n = int(events.sum()), int(non_events.sum())
    _require_contrast(m, n)
    placed = (np.cumsum(non_events) - non_events / 2) / n
    other = 1 - (np.cumsum(events) - events / 2) / m
    estimate = float(events @ placed) / m
    squares = float(events @ (placed - estimate) ** 2), float(non_events @ (other - estimate) ** 2)
    return Auc(estimate, _error(squares[0], m, squares[1], n), m, n)
