"""Which further counts to hide so that no small one comes back by subtraction.

An attacker knows every count that is shown, how counts add up, that a count marked ``small`` is
below the limit, and that one marked ``subtraction`` is not. A small count is safe if, for all
that, it could still be the least and the greatest of the hidden counts. For each of these two
values the cheapest change of other counts that would make room for it is found by integer
programming; the counts that change are hidden, and the changed table is the proof that the
attacker cannot exclude the value. Marks alone can exclude one (two parts that are each at least 1
make no total of 1); then fewer counts are said to be small, or room is made as far as it goes.

References
----------
Fischetti & Salazar (2001). Manage Sci 47, 1008-1027.
Hundepool et al. (2012). Statistical Disclosure Control.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

from fourfold.report.disclosure.ledger import SMALL, SUBTRACTION, Key, Ledger
from fourfold.report.disclosure.marks import sums_of_small

if TYPE_CHECKING:
    from fourfold.report.disclosure.room import Room

LEAN = 1e-3
"""Against the cost of hiding, next to nothing."""

CHEAP = 10.0
"""What may be hidden at most to widen the range of a count that is not small."""


def choose(ledger: Ledger) -> None:
    """Hide small counts, and as few others as keep them from being found by subtraction.

    The ledger must be settled; its counts are marked.
    """
    limit = ledger.limit
    small = {key for key, count in ledger.counts.items() if count.shown and limit.small(count.value)}
    for key in small:
        ledger.counts[key].hidden = SMALL
    for key in sums_of_small(ledger):
        ledger.counts[key].hidden = SUBTRACTION
    guarded = {
        key
        for key, count in ledger.counts.items()
        if count.guarded and not count.stands and limit.small(count.value)
    }
    if small or guarded:
        from fourfold.report.disclosure.room import Room

        room = Room(ledger)
        tables = _protect(room, sorted(small | guarded))
        _widen(room, tables)


def _protect(room: Room, keys: list[Key]) -> list[list[int]]:
    """Hide until each key has its room; returns the tables that prove it."""
    tables: list[list[int]] = []
    ledger, limit = room.ledger, room.ledger.limit
    waiting = {
        (key, value): None
        for key in keys
        for value in (limit.least, limit.most)
        if ledger.counts[key].value != value and room.linked[room.place[key]]
    }
    while waiting:
        key, value = next(iter(waiting))
        # Other small counts are taken to their own ends on the way, where that costs nothing.
        leaning = {
            other: LEAN if bound == limit.least else -LEAN
            for other, bound in waiting
            if ledger.counts[other].hidden == SMALL
        }
        table = room.make(key, value, leaning)
        if table is None:
            # The tree contradicts itself, so nothing can be proved of it: all that bears on the
            # count is hidden.
            _hide_around(room, key)
            waiting = {other: None for other in waiting if other[0] != key}
            continue
        tables.append([round(number) for number in table])
        _hide_what_differs(room, tables[-1])
        _unmark_what_exceeds(room, tables[-1])
        reached = round(table[room.place[key]])
        if reached > value == limit.least and ledger.counts[key].hidden == SMALL:
            ledger.counts[key].hidden = SUBTRACTION
        del waiting[key, value]
        for other, bound in list(waiting):
            possible = table[room.place[other]]
            if possible < bound + 0.5 if bound == limit.least else possible > bound - 0.5:
                del waiting[other, bound]
    return tables


def _widen(room: Room, tables: list[list[int]]) -> None:
    """Give the counts that were hidden for others' sake a range as wide as the limit.

    They are not small, so this goes only as far as cheap counts can make it.
    """
    import numpy as np

    ledger, width = room.ledger, room.ledger.limit.smallest
    values = [ledger.counts[key].value for key in room.keys]
    known = np.array([[np.nan if value is None else value for value in values], *tables], dtype=float)
    lowest, highest = np.fmin.reduce(known, axis=0), np.fmax.reduce(known, axis=0)
    done: set[Key] = set()
    while True:
        narrow = [
            key
            for place, key in enumerate(room.keys)
            if ledger.counts[key].hidden == SUBTRACTION
            and ledger.counts[key].value
            and highest[place] - lowest[place] < width
            and key not in done
        ]
        if not narrow:
            return
        key, at = narrow[0], room.place[narrow[0]]
        done.add(key)
        leaning = np.zeros(len(room.keys))
        for outward in (1, -1):
            if highest[at] - lowest[at] >= width:
                break
            for other in narrow:
                leaning[room.place[other]] = -LEAN * outward
            aim = int(lowest[at] + width) if outward > 0 else int(max(0, highest[at] - width))
            table = room.widen(key, aim, leaning, CHEAP)
            if table is None:
                break
            _hide_what_differs(room, [round(number) for number in table])
            lowest, highest = np.fmin(lowest, table.round()), np.fmax(highest, table.round())


def _hide_what_differs(room: Room, table: list[int]) -> None:
    """Hide the shown counts that differ in a table which must remain possible."""
    for key, number in zip(room.keys, table, strict=True):
        count = room.ledger.counts[key]
        if count.shown and number != count.value:
            count.hidden = SUBTRACTION


def _hide_around(room: Room, key: Key) -> None:
    """Hide every count that a sum links with this one, directly or through counts not shown."""
    ledger = room.ledger
    reached, waiting = {key}, [key]
    while waiting:
        at = waiting.pop()
        for relation in ledger.relations:
            if at not in relation:
                continue
            for other in relation:
                if other not in reached:
                    reached.add(other)
                    if not ledger.counts[other].shown:
                        waiting.append(other)
    for other in reached:
        count = ledger.counts[other]
        if count.shown and count.value:
            count.hidden = SUBTRACTION


def _unmark_what_exceeds(room: Room, table: list[int]) -> None:
    """No longer say that a count is small if it is not in a table which must remain possible."""
    for key, number in zip(room.keys, table, strict=True):
        count = room.ledger.counts[key]
        if count.hidden == SMALL and number > room.ledger.limit.most:
            count.hidden = SUBTRACTION
