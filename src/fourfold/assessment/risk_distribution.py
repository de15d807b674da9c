"""How fitted risks are spread among those with and without the event."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from fourfold.measures.tally import significant
from fourfold.results import tree

Array = NDArray[np.float64]
Integers = NDArray[np.int64]

# One over the width, so that edges are exact divisions; the widest that leaves eight bins.
PER_UNIT = (20, 50, 100, 200, 500, 1_000, 2_000, 5_000, 10_000)
FEWEST_BINS = 8


def bins(
    risk: Array,
    event: NDArray[np.bool_],
    counts: Integers | None = None,
    *,
    per_unit: int | None = None,
) -> list[tree.RiskBin]:
    """Count people by fitted risk in bins of equal width, from 0 to beyond the largest risk.

    Parameters
    ----------
    risk : (n,) float array
    event : (n,) bool array
    counts : (n,) int array, optional
    per_unit : int, optional
        Bins between 0 and 1. By default 20 (5 percentage points each), more where all risks
        are so low that fewer than eight bins would be used.

    Returns
    -------
    list of tree.RiskBin
        Lower edge included, upper edge not, but for a risk of exactly 1.
    """
    rounded = significant(risk)
    if not rounded.size:
        return []
    top = float(rounded.max())
    if per_unit is None:
        per_unit = next((n for n in PER_UNIT if top * n >= FEWEST_BINS), PER_UNIT[-1])
    edges = np.arange(per_unit + 1) / per_unit
    place = np.minimum(np.searchsorted(edges, rounded, side="right") - 1, per_unit - 1)
    used = int(place.max()) + 1
    weight = np.ones(rounded.size, dtype=np.int64) if counts is None else counts
    events = np.bincount(place[event], weights=weight[event], minlength=used)
    people = np.bincount(place, weights=weight, minlength=used)
    return [
        tree.RiskBin(
            lower=float(edges[k]),
            upper=float(edges[k + 1]),
            events=round(float(events[k])),
            non_events=round(float(people[k] - events[k])),
        )
        for k in range(used)
    ]
