"""Counts by fitted risk: the bins of its distribution, and the groups of the calibration table."""

from __future__ import annotations

from itertools import accumulate

from fourfold.report.disclosure.ledger import Key, Ledger, Path
from fourfold.report.disclosure.places.keys import ANALYSED, EVENT, NONE, everyone
from fourfold.results import tree


def enter(results: tree.Results, ledger: Ledger) -> None:
    """Enter bins and groups: each of the two holds everybody analysed."""
    bins = {outcome: _enter_bins(results, ledger, field, outcome) for field, outcome in FIELDS}
    found = results.calibration.groups if results.calibration is not None else []
    for place, group in enumerate(found):
        here: Path = ("calibration", "groups", place)
        n = ledger.place((*here, "n"), group.n, group.hidden, _group(place, "all"), 30)
        observed = ledger.place((*here, "observed"), group.observed, group.hidden, _group(place, EVENT), 20)
        ledger.relate(_group(place, "all"), [_group(place, EVENT), _group(place, NONE)])
        ledger.guard(_group(place, NONE))
        for field in ("proportion", "lower", "upper"):
            ledger.derive((*here, field), [n, observed])
        for field in ("expected", "mean_risk"):
            ledger.derive((*here, field), [n])
    for outcome in (EVENT, NONE):
        if found:
            ledger.relate(everyone(ANALYSED, outcome), [_group(k, outcome) for k in range(len(found))])
        for groups, edge in _shared_edges(results):
            # An edge of a bin that falls between two groups: below it both count the same people.
            below: Key = ("fitted risk", "below", str(edge), outcome)
            ledger.relate(below, bins[outcome][:edge])
            ledger.relate(below, [_group(place, outcome) for place in range(groups)])


FIELDS = (("events", EVENT), ("non_events", NONE))


def _group(place: int, outcome: str) -> Key:
    return "group of fitted risk", str(place), outcome


def _enter_bins(results: tree.Results, ledger: Ledger, field: str, outcome: str) -> list[Key]:
    keys: list[Key] = [
        ledger.place(
            ("risk_distribution", place, field),
            getattr(found, field),
            found.hidden,
            ("fitted risk", str(place), outcome),
            0.5,
        )
        for place, found in enumerate(results.risk_distribution)
    ]
    if keys:
        ledger.relate(everyone(ANALYSED, outcome), keys)
    return keys


def _shared_edges(results: tree.Results) -> list[tuple[int, int]]:
    """Groups that lie below an edge, and bins that do, for each edge that cuts through no group."""
    found = results.calibration.groups if results.calibration is not None else []
    shared = []
    for edge, one in enumerate(results.risk_distribution):
        for place in range(1, len(found)):
            before, after = found[place - 1].highest, found[place].lowest
            if edge and before is not None and after is not None and before < one.lower <= after:
                shared.append((place, edge))
    return shared


def edges(results: tree.Results) -> set[tuple[int, int]]:
    """People above each edge of a bin, with the event and without: steps of the ROC curve."""
    known = [
        (one.events, one.non_events)
        for one in reversed(results.risk_distribution)
        if one.events is not None and one.non_events is not None
    ]
    if len(known) < len(results.risk_distribution):
        return set()
    return set(accumulate(known, lambda so_far, one: (so_far[0] + one[0], so_far[1] + one[1])))
