"""Steps of the ROC curve: each tells how many people, with the event and without, lie between."""

from __future__ import annotations

from dataclasses import replace

from fourfold.report.disclosure.ledger import SMALL
from fourfold.report.disclosure.limit import Limit
from fourfold.results import tree


def thin(
    found: tree.Discrimination,
    events: int | None,
    non_events: int | None,
    avoid: set[tuple[int, int]],
    limit: Limit,
) -> tree.Discrimination:
    """Leave points out until no step of the curve tells a small count; none is moved.

    Parameters
    ----------
    events, non_events : int or None
        Totals. Where they are hidden every step is a fraction that could give them away: no curve.
    avoid : set of (events, non-events)
        People above scores at which a point must not stand, since other counts are hidden there.
    """
    if events is None or non_events is None:
        return replace(found, curve=[], hidden={**found.hidden, "curve": "derived"}) if found.curve else found
    if len(found.curve) < 2:
        return found

    def told(start: tree.RocPoint, end: tree.RocPoint) -> bool:
        steps = (
            round(abs(end.sensitivity - start.sensitivity) * events),
            round(abs(start.specificity - end.specificity) * non_events),
        )
        return all(limit.open(step) for step in steps)

    def above(point: tree.RocPoint) -> tuple[int, int]:
        return round(point.sensitivity * events), round((1 - point.specificity) * non_events)

    *points, last = found.curve
    kept = points[:1]
    for point in points[1:]:
        if told(kept[-1], point) and above(point) not in avoid:
            kept.append(point)
    while len(kept) > 1 and not told(kept[-1], last):
        kept.pop()
    kept.append(last)
    if len(kept) == len(found.curve):
        return found
    return replace(found, curve=kept, hidden={**found.hidden, "curve": SMALL})
