"""The room that a count has: other tables that agree with everything that is shown.

All linked counts are put to the solver at once, with what an attacker takes for granted: counts
are whole and not negative, they add up, and marks say which are small.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from fourfold.report.disclosure.ledger import SMALL, SUBTRACTION, Count, Key, Ledger

Array = NDArray[np.float64]

WHOLE = 1e-6
"""A number this near to a whole one is it."""

UNMARKING = 5.0
"""Cost, for each unit beyond the limit, of no longer saying of a hidden count that it is small."""

SHORT = 1e5
"""Cost of each unit by which the wanted value is missed: far above that of hiding anything."""


@dataclass(slots=True)
class _Wanted:
    """What to ask of the solver: a count is its base, plus one column, less another."""

    base: Array
    plus: Array  # (2, n) bounds
    minus: Array
    cost: Array  # (2, n) of the two columns


class Room:
    """Tables that are possible, given what a ledger shows."""

    def __init__(self, ledger: Ledger) -> None:
        from scipy.sparse import csc_array, hstack

        self.ledger = ledger
        self.keys = list(ledger.counts)
        self.place = {key: place for place, key in enumerate(self.keys)}
        rows, columns, entries = [], [], []
        for row, relation in enumerate(ledger.relations):
            for key, by in relation.items():
                rows.append(row)
                columns.append(self.place[key])
                entries.append(float(by))
        shape = (len(ledger.relations), len(self.keys))
        self.matrix = csc_array((entries, (rows, columns)), shape=shape)
        self._doubled = hstack([self.matrix, -self.matrix], format="csc")
        self.linked = np.diff(self.matrix.indptr) > 0

    def make(self, key: Key, value: int, leaning: Mapping[Key, float]) -> Array | None:
        """The table nearest to the true one in which ``key`` is ``value``, or as near as can be.

        A shown count may differ at its cost, since it can be hidden, but is then known not to be
        small; a count marked small may exceed the limit, since it can be marked otherwise.
        ``leaning`` is the cost of a hidden count's every unit. None if the ledger contradicts itself.
        """
        wanted = self._wanted(marks=True)
        for other, place in self.place.items():
            count = self.ledger.counts[other]
            if count.shown and count.value:
                wanted.plus[1, place] = np.inf
                wanted.minus[1, place] = max(0, count.value - self.ledger.limit.smallest)
                wanted.cost[:, place] = count.cost
            elif count.hidden == SMALL:
                wanted.minus[0, place] = -np.inf
                wanted.cost[:, place] = leaning.get(other, 0.0), -UNMARKING
        self._aim(wanted, key, value)
        return self._solve(wanted)

    def widen(self, key: Key, value: int, leaning: Array, dearest: float) -> Array | None:
        """As `make`, against an attacker who does not know why a count is hidden.

        No count dearer than ``dearest`` to hide differs.
        """
        wanted = self._wanted(marks=False)
        wanted.cost[0] = leaning
        for other, place in self.place.items():
            count = self.ledger.counts[other]
            if count.shown and count.value and count.cost <= dearest:
                wanted.plus[1, place] = np.inf
                wanted.minus[1, place] = max(0, count.value - self.ledger.limit.smallest)
                wanted.cost[:, place] = count.cost
        self._aim(wanted, key, value)
        return self._solve(wanted)

    def _aim(self, wanted: _Wanted, key: Key, value: int) -> None:
        at, true = self.place[key], self.ledger.counts[key].value
        assert true is not None
        wanted.base[at] = 0
        wanted.plus[:, at] = min(value, true), max(value, true)
        wanted.minus[:, at] = 0
        wanted.cost[:, at] = SHORT if value <= true else -SHORT, 0

    def ends(self, key: Key, least: float, most: float) -> tuple[float, float]:
        """The least and the greatest that a hidden count can be, within these bounds."""
        ends = []
        at = self.place[key]
        for outward, bound in ((1.0, least), (-1.0, most)):
            wanted = self._wanted(marks=True)
            wanted.base[at] = 0
            wanted.plus[:, at] = least, most
            wanted.cost[0, at] = outward
            found = self._solve(wanted)
            # No table at the end of an unbounded range: there is no end.
            ends.append(bound if found is None else float(round(found[at])))
        return ends[0], ends[1]

    def _wanted(self, *, marks: bool) -> _Wanted:
        n = len(self.keys)
        wanted = _Wanted(np.zeros(n), np.zeros((2, n)), np.zeros((2, n)), np.zeros((2, n)))
        for place, key in enumerate(self.keys):
            count = self.ledger.counts[key]
            if count.shown:
                wanted.base[place] = count.value or 0
            else:
                wanted.plus[:, place] = _bounds(self.ledger, count) if marks else (0, np.inf)
        return wanted

    def _solve(self, wanted: _Wanted) -> Array | None:
        from scipy.optimize import Bounds, LinearConstraint, milp

        right = -(self.matrix @ wanted.base)
        low = np.concatenate([wanted.plus[0], wanted.minus[0]])
        high = np.concatenate([wanted.plus[1], wanted.minus[1]])
        for whole in (0, 1):
            # Tables of this kind nearly always have whole corners: the cheaper question comes first.
            found = milp(
                wanted.cost.ravel(),
                integrality=np.full(low.size, whole, dtype=np.int64),
                bounds=Bounds(low, high),
                constraints=LinearConstraint(self._doubled, right, right),
            )
            if found.x is None:
                return None
            plus, minus = found.x[: len(self.keys)], found.x[len(self.keys) :]
            table: Array = wanted.base + plus - minus
            if np.all(np.abs(table - np.round(table)) < WHOLE):
                break
        return table


def _bounds(ledger: Ledger, count: Count) -> tuple[float, float]:
    """What an attacker takes for granted of a count that is not shown."""
    limit = ledger.limit
    if count.hidden == SMALL:
        return limit.least, limit.most
    if count.hidden == SUBTRACTION:
        # Most are not small; that some are sums of small ones is no help to the attacker.
        return (limit.least if limit.small(count.value) else limit.smallest), np.inf
    return 0, np.inf
