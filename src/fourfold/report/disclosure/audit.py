"""An attacker: what can be worked out of the hidden counts from everything that is shown."""

from __future__ import annotations

from dataclasses import dataclass

from fourfold.report.disclosure.hiding import ledger_of
from fourfold.report.disclosure.ledger import SMALL, SUBTRACTION, Key, Ledger
from fourfold.report.disclosure.limit import Limit
from fourfold.report.disclosure.room import Room
from fourfold.results import tree


@dataclass(frozen=True, slots=True)
class Leak:
    """A hidden count that can be narrowed down too far.

    Attributes
    ----------
    key : tuple of str
    small : bool
        Whether it is a small count, or one hidden to protect such.
    lowest, highest : float
        What it can still be.
    allowed : tuple of float
        What it should still be able to be: the least and the greatest.
    """

    key: Key
    small: bool
    lowest: float
    highest: float
    allowed: tuple[float, float]


def audit(results: tree.Results, truth: tree.Results | None = None) -> list[Leak]:
    """Try to work out each hidden count of a tree; what comes of it should be nothing.

    A count marked small must still be able to be any small count that the marks themselves allow
    (a total of two parts marked small is at least 2). A count hidden for another's sake must be
    open over a range of the limit's width to someone who does not take the marks into account.

    Parameters
    ----------
    results : tree.Results
        After hiding.
    truth : tree.Results or None
        Before hiding; then small counts that stand nowhere but follow by subtraction are tried too.

    Returns
    -------
    list of Leak
    """
    limit = Limit.of(results.analysis)
    if not limit.active:
        return []
    ledger = ledger_of(results, limit)
    known = ledger_of(truth, limit) if truth is not None else ledger
    for key, count in ledger.counts.items():
        if count.value is None and key in known.counts:
            # So that sums of small counts are not taken to be beyond the limit.
            count.value = known.counts[key].value
    as_it_is, everything_open, unmarked = Room(ledger), Room(_opened(ledger)), Room(_unmarked(ledger))
    leaks = []
    for key, count in ledger.counts.items():
        small = limit.small(count.value)
        if count.hidden == SMALL or (count.guarded and not count.stands and small):
            allowed = everything_open.ends(key, limit.least, limit.most)
            found = as_it_is.ends(key, limit.least, limit.most)
        elif count.hidden == SUBTRACTION and not small and count.value != 0:
            found = unmarked.ends(key, 0, float("inf"))
            allowed = (found[0], found[0] + limit.smallest)
        else:
            continue
        if found[0] > allowed[0] or found[1] < allowed[1]:
            leaks.append(Leak(key, count.hidden != SUBTRACTION, *found, allowed))
    return leaks


def _opened(ledger: Ledger) -> Ledger:
    """The ledger as it would be if no count but zero were shown."""
    opened = _copy(ledger)
    for count in opened.counts.values():
        if count.shown and count.value:
            count.hidden = SUBTRACTION
    return opened


def _unmarked(ledger: Ledger) -> Ledger:
    """The ledger to someone who does not know why a count is hidden."""
    unmarked = _copy(ledger)
    for count in unmarked.counts.values():
        if count.stands and not count.shown:
            count.hidden = "derived"
    return unmarked


def _copy(ledger: Ledger) -> Ledger:
    from copy import deepcopy

    return deepcopy(ledger)
