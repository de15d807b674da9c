"""The shape of quantities, and terms that carry the same information."""

from __future__ import annotations

import math

from fourfold.findings.entry import Entry, found
from fourfold.results import tree

IN_MODEL = ("exposure", "predictor", "covariate")


def _not_straight(results: tree.Results) -> list[tree.Finding]:
    tests = [
        test
        for test in results.term_tests
        if test.part == "non-linearity" and test.p_value is not None and test.p_value < 0.05
    ]
    if not tests:
        return []
    about = [test.term for test in tests]
    return [found(NOT_STRAIGHT, "concern", about, items=[{"variable": t.term, "p": t.p_value} for t in tests])]


def _unassessed(results: tree.Results) -> list[tree.Finding]:
    straight = [
        variable.name
        for variable in results.variables
        if variable.kind == "quantity" and variable.role in IN_MODEL and variable.shape in ("linear", "log2")
    ]
    return [found(UNASSESSED, "remark", straight, names=straight)] if straight else []


def _inflation(results: tree.Results) -> list[tree.Finding]:
    if results.collinearity is None:
        return []
    items = [
        {"variable": item.term, "scaled": item.scaled}
        for item in results.collinearity.gvif
        if item.scaled > math.sqrt(5)
    ]
    return [found(INFLATION, "concern", [str(i["variable"]) for i in items], items=items)] if items else []


def _condition(results: tree.Results) -> list[tree.Finding]:
    look = results.collinearity
    if look is None or look.condition_index is None or look.condition_index <= 30 or not look.shared_terms:
        return []
    return [found(CONDITION, "concern", list(look.shared_terms), index=look.condition_index, names=list(look.shared_terms))]


NOT_STRAIGHT = Entry(
    id="LIN-not-straight", section="results", notice=_not_straight,
    source="Harrell (2015), Regression Modeling Strategies, 2nd ed.",
)  # fmt: skip
UNASSESSED = Entry(
    id="LIN-unassessed", section="results", notice=_unassessed,
    source="Royston, Altman & Sauerbrei (2006), Stat Med 25, 127-141",
)  # fmt: skip
INFLATION = Entry(
    id="COL-gvif", section="trust", notice=_inflation,
    source="Fox & Monette (1992), J Am Stat Assoc 87, 178-183",
)  # fmt: skip
CONDITION = Entry(
    id="COL-condition", section="trust", notice=_condition,
    source="Belsley, Kuh & Welsch (1980), Regression Diagnostics",
)  # fmt: skip

ENTRIES = (NOT_STRAIGHT, UNASSESSED, INFLATION, CONDITION)
