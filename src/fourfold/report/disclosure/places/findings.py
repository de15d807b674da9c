"""Counts inside findings, and figures in them that were computed from hidden ones."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass

from fourfold.findings import catalogue, places
from fourfold.report.disclosure.ledger import DERIVED, SMALL, SUBTRACTION, Ledger
from fourfold.report.disclosure.places.keys import ALL, ANALYSED, ELIGIBLE, EVENT, NONE, everyone
from fourfold.results import tree

WHOLE = [everyone(ANALYSED, outcome) for outcome in (ALL, EVENT, NONE)] + [everyone(ELIGIBLE)]


@dataclass(frozen=True, slots=True)
class _Known:
    """What the rest of the tree hides and shows.

    Attributes
    ----------
    values : counts hidden for others' sake
    about : variables of which a count is hidden
    totals : hidden totals
    shown : doubles that stand elsewhere in the tree for all to see
    """

    values: frozenset[int]
    about: frozenset[str]
    totals: frozenset[int | None]
    shown: frozenset[float]


def hide(found: Sequence[tree.Finding], ledger: Ledger, shown: Iterable[float]) -> list[tree.Finding]:
    """Findings without what may not be told; the finding itself stays.

    A finding names its counts but not which people they count, so the rule is strict: where one
    count of a finding (or of one item in it) is small, or equals one that is hidden elsewhere,
    all its counts go, and what is derived from counts goes with them.

    Parameters
    ----------
    found : sequence of tree.Finding
    ledger : Ledger
        With what is hidden.
    shown : doubles
        That the rest of the tree still shows: a finding may repeat them.
    """
    hidden = [count for count in ledger.counts.values() if count.hidden == SUBTRACTION]
    known = _Known(
        frozenset(count.value for count in hidden if count.value is not None),
        frozenset(part for key in ledger.counts if ledger.is_hidden(key) for part in key),
        frozenset(ledger.counts[key].value for key in WHOLE if ledger.is_hidden(key)),
        frozenset(shown),
    )
    return [_hidden(one, ledger, known) for one in found if not _tells_a_zero(one, ledger, known)]


def _hidden(finding: tree.Finding, ledger: Ledger, known: _Known) -> tree.Finding:
    found = catalogue.sensitive(finding)
    counts = {one.path: one.value for one in found if one.kind == catalogue.COUNT}
    small = {path for path, value in counts.items() if ledger.limit.small(value)}
    revealing = small | {path for path, value in counts.items() if value in known.values}
    # What stands beside a revealing count goes with it, and every total over the items.
    beside = {path[:-1] for path in revealing}

    def goes(path: places.Path) -> bool:
        return () in beside or path[:-1] in beside or (bool(revealing) and len(path) == 1)

    reasons = {path: SMALL if path in small else SUBTRACTION for path in counts if goes(path)}
    for one in found:
        touched = bool(known.totals or known.about & _about(finding, one.path))
        # Of a finding that is not known it is not known either what a figure repeats.
        repeated = one.value in known.shown and finding.id in catalogue.CATALOGUE
        if one.kind == catalogue.DERIVED and (goes(one.path) or touched) and not repeated:
            reasons[one.path] = DERIVED
    if known.totals:
        for path, value in places.numbers(finding.values):
            if value in known.totals:
                reasons.setdefault(path, SUBTRACTION)
    for path, reason in reasons.items():
        if places.value_at(finding.values, path) is not None:
            finding = catalogue.replace(finding, path, None, reason)
    return finding


def _about(finding: tree.Finding, path: places.Path) -> set[str]:
    """The variables that a figure is about: those its item names, else all of the finding."""
    owner = places.value_at(finding.values, path[:-1])
    there = {str(value) for value in owner.values()} if isinstance(owner, dict) else set()
    return there & set(finding.about) or set(finding.about)


def _tells_a_zero(finding: tree.Finding, ledger: Ledger, known: _Known) -> bool:
    """Would the finding say of a hidden zero that it is one? Separation is nothing else."""
    return (
        ledger.limit.hide_zero
        and finding.id.startswith("SEP-")
        and bool(known.about & set(finding.about) or not finding.about)
    )
