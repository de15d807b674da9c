"""Does the answer hang on one row."""

from __future__ import annotations

from fourfold.findings.entry import Entry, found
from fourfold.results import tree


def _one_row(results: tree.Results) -> list[tree.Finding]:
    if results.influence is None:
        return []
    led = {v.name for v in results.variables if v.role in ("exposure", "predictor")}
    items = []
    crossing = False
    for term in results.influence.terms:
        change = term.largest_change_refitted
        if change is None:
            change = term.largest_change
        if term.term not in led or change is None:
            continue
        # Crossing 1 by a hair's breadth says little; it must come with a real move.
        if abs(change) > 0.2:
            items.append({"variable": term.term, "change": abs(change), "crosses": term.crosses_one})
            crossing = crossing or term.crosses_one
    if not items:
        return []
    about = list(dict.fromkeys(str(item["variable"]) for item in items))
    return [found(ONE_ROW, "serious" if crossing else "concern", about, items=items)]


ONE_ROW = Entry(
    id="INF-one-row", section="trust", notice=_one_row, source="Pregibon (1981), Ann Stat 9, 705-724"
)

ENTRIES = (ONE_ROW,)
