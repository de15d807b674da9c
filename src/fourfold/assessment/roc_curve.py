"""Points of the ROC curve, thinned for drawing and so that no step stands for few people."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from fourfold.measures.tally import Tally
from fourfold.results import tree

Integers = NDArray[np.int64]


def roc_curve(found: Tally, points: int = 200, least: int = 1) -> list[tree.RocPoint]:
    """Points from (specificity 1, sensitivity 0) to (0, 1), one for each distinct score kept.

    Parameters
    ----------
    found : Tally
        Of the score; both outcomes present.
    points : int
        At most about this many are kept, evenly along the curve. A point is left out, never moved.
    least : int
        A kept step holds no, or at least this many, people with the event, and likewise without.
    """
    events = np.concatenate([[0], np.cumsum(found.events[::-1])])
    non_events = np.concatenate([[0], np.cumsum((found.people - found.events)[::-1])])
    m, n = int(events[-1]), int(non_events[-1])
    kept = np.arange(events.size)
    if kept.size > points:
        along = events / m + non_events / n
        kept = np.unique(np.searchsorted(along, np.linspace(0, along[-1], points)))
        kept = np.unique(np.concatenate([[0], kept[kept < events.size], [events.size - 1]]))
    if least > 1:
        kept = _coarsened(kept, events, non_events, least)
    return [
        tree.RocPoint(specificity=float(1 - non_events[k] / n), sensitivity=float(events[k] / m))
        for k in kept
    ]


def _coarsened(kept: Integers, events: Integers, non_events: Integers, least: int) -> Integers:
    def wide(start: int, end: int) -> bool:
        steps = events[end] - events[start], non_events[end] - non_events[start]
        return all(step == 0 or step >= least for step in steps)

    chosen = [int(kept[0])]
    for place in kept[1:-1]:
        if wide(chosen[-1], int(place)):
            chosen.append(int(place))
    while len(chosen) > 1 and not wide(chosen[-1], int(kept[-1])):
        chosen.pop()
    return np.array([*chosen, int(kept[-1])], dtype=np.int64)
