"""People and events at each distinct value of a score, and their groups of equal size.

Groupings (Hosmer-Lemeshow, calibration points, bins of a quantity) all start here, so that ties
are kept together everywhere by the same rule.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

Array = NDArray[np.float64]
Integers = NDArray[np.int64]


@dataclass(frozen=True, slots=True)
class Tally:
    """Distinct values in ascending order with the people and events at each.

    Attributes
    ----------
    values : (m,) float array
    people, events : (m,) int array
    """

    values: Array
    people: Integers
    events: Integers

    @property
    def total(self) -> int:
        return int(self.people.sum())

    def order_statistics(self, places: ArrayLike) -> Array:
        """Values of the people at ``places`` (from 0) in ascending order."""
        return self.values[np.searchsorted(np.cumsum(self.people), places, side="right")]

    def quantiles(self, probabilities: ArrayLike) -> Array:
        """Type-7 quantiles over people (Hyndman & Fan 1996. Am Stat 50, 361-365)."""
        place = (self.total - 1) * np.asarray(probabilities, dtype=np.float64)
        below = np.floor(place).astype(np.int64)
        low = self.order_statistics(below)
        high = self.order_statistics(np.minimum(below + 1, self.total - 1))
        return np.where(low == high, low, low + (place - below) * (high - low))

    def equal_groups(self, groups: int) -> Integers:
        """First place of each of at most ``groups`` groups of nearly equal size.

        Cut at the type-7 quantiles j/groups, right-closed, ties together, equal cuts merged.
        """
        # A cut between two distinct values separates them like the lower of the two does, so the
        # lower order statistic is the cut: whole numbers only, no rounding to decide a group.
        last = self.total - 1
        places = [last * j // groups for j in range(1, groups)]
        ends = np.searchsorted(np.cumsum(self.people), np.array(places, dtype=np.int64), side="right")
        starts = np.unique(np.concatenate([[0], ends + 1]))
        return starts[starts < self.values.size].astype(np.int64)

    def gathered(self, groups: int) -> Tally:
        """One entry for each equal-sized group, at the mean value of its people."""
        starts = self.equal_groups(groups)
        people = np.add.reduceat(self.people, starts)
        mean = np.add.reduceat(self.values * self.people, starts) / people
        return Tally(mean, people, np.add.reduceat(self.events, starts))


def tally(values: ArrayLike, event: NDArray[np.bool_], counts: Integers | None = None) -> Tally:
    """Count people and events at each distinct value.

    Parameters
    ----------
    values : (n,) float array
    event : (n,) bool array
    counts : (n,) int array, optional
        People that each row stands for; rows that stand for nobody are left out.
    """
    x = np.asarray(values, dtype=np.float64)
    if counts is not None:
        inside = counts > 0
        if not inside.all():
            x, event, counts = x[inside], event[inside], counts[inside]
    order = np.argsort(x)
    x = x[order]
    if not x.size:
        nobody = np.zeros(0, dtype=np.int64)
        return Tally(x, nobody, nobody)
    starts = np.flatnonzero(np.concatenate([[True], x[1:] != x[:-1]]))
    if counts is None:
        people = np.diff(np.append(starts, x.size)).astype(np.int64)
        events = np.add.reduceat(event[order].astype(np.int64), starts)
    else:
        weight = counts[order].astype(np.int64)
        people = np.add.reduceat(weight, starts)
        events = np.add.reduceat(weight * event[order], starts)
    return Tally(x[starts], people, events)


def significant(values: ArrayLike, digits: int = 12) -> Array:
    """Round to significant digits, so that people with the same pattern are exactly tied.

    The same sum taken in another order differs in its last bits; ties must not depend on that.
    """
    x = np.asarray(values, dtype=np.float64)
    answer = x.copy()
    inside = np.isfinite(x) & (x != 0)
    finite = x[inside]
    power = digits - 1 - np.floor(np.log10(np.abs(finite)))
    # Powers of ten are exact up to 1e22; dividing by one rounds correctly, multiplying by 1e-k not.
    power = np.minimum(power, 300.0)
    grow, shrink = 10.0 ** np.maximum(power, 0.0), 10.0 ** np.maximum(-power, 0.0)
    answer[inside] = np.rint(finite * grow / shrink) / grow * shrink
    return answer
