"""Is a straight line enough, and does a curve stay within the data?"""

from __future__ import annotations

from typing import Any

from fourfold.findings import asked
from fourfold.findings.entry import CONCERN, REMARK, Entry, Noticed
from fourfold.results import tree

STRAIGHT = ("linear", "log2")
CHANCE = 0.05


def _tests(results: tree.Results) -> list[tree.TermTest]:
    return [one for one in results.term_tests if one.part == "non-linearity" and one.model == "adjusted"]


def not_straight(results: tree.Results) -> Noticed | None:
    found = [
        {
            "variable": one.term,
            "p_value": one.p_value,
            "straight": asked.shape(results, one.term) in STRAIGHT,
        }
        for one in _tests(results)
        if one.p_value is not None and one.p_value < CHANCE
    ]
    if not found:
        return None
    # Where the model has the curve already, the reader need only be sent to it.
    grade = CONCERN if any(one["straight"] for one in found) else REMARK
    return Noticed(grade, {"found": found}, asked.names(found))


def unassessed(results: tree.Results) -> Noticed | None:
    if not asked.fitted(results):
        return None
    tested = {one.term for one in _tests(results)}
    bare = [
        variable.name
        for variable in asked.modelled(results)
        if variable.kind == "quantity" and variable.shape in STRAIGHT and variable.name not in tested
    ]
    return Noticed(REMARK, {"names": bare}, bare) if bare else None


def beyond_range(results: tree.Results) -> Noticed | None:
    found: list[dict[str, Any]] = []
    for name, values in _asked_values(results).items():
        span = _span(results, name)
        if span is None:
            continue
        outside = [value for value in values if not span[0] <= value <= span[1]]
        if outside:
            found.append({"variable": name, "outside": outside, "lowest": span[0], "highest": span[1]})
    return Noticed(CONCERN, {"found": found}, asked.names(found)) if found else None


def _asked_values(results: tree.Results) -> dict[str, list[float]]:
    """Values at which a curve is read: the ends of each contrast, and the reference."""
    values: dict[str, list[float]] = {}
    for estimate in results.estimates.adjusted:
        if estimate.contrast is not None:
            values.setdefault(estimate.term, []).extend(estimate.contrast)
    for curve in results.curves:
        values.setdefault(curve.term, []).append(curve.reference)
    return {name: sorted(set(found)) for name, found in values.items()}


def _span(results: tree.Results, name: str) -> tuple[float, float] | None:
    for one in results.outcome_by_quantity:
        if one.term == name and one.bins:
            return min(part.lower for part in one.bins), max(part.upper for part in one.bins)
    return None


ENTRIES = (
    Entry(
        id="LIN-not-straight",
        section="results",
        source="Harrell 2015, Regression Modeling Strategies, 2nd edition, chapter 2; "
        "Royston, Altman & Sauerbrei 2006, Stat Med 25:127-41",
        rule=not_straight,
        derived=("found[].p_value",),
    ),
    Entry(
        id="LIN-unassessed",
        section="methods",
        source="Harrell 2015, Regression Modeling Strategies, 2nd edition, chapter 2",
        rule=unassessed,
    ),
    Entry(
        id="EXT-range",
        section="results",
        source="common practice",
        rule=beyond_range,
        derived=("found[].lowest", "found[].highest"),
    ),
)
