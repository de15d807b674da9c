"""Terms that say the same, and single people who decide."""

from __future__ import annotations

import math
from typing import Any

from fourfold.findings import asked
from fourfold.findings.entry import CONCERN, REMARK, SERIOUS, Entry, Noticed
from fourfold.results import tree

INFLATED = math.sqrt(5)
CONDITION = 30.0
MOVED, MUCH_MOVED = 0.2, 0.5
"""Standard errors by which one person moves an estimate."""


def gvif(results: tree.Results) -> Noticed | None:
    if results.collinearity is None:
        return None
    found = [
        {"variable": one.term, "scaled": one.scaled}
        for one in results.collinearity.gvif
        if one.scaled > INFLATED
    ]
    if not found:
        return None
    return Noticed(_grade(results, asked.names(found)), {"found": found}, asked.names(found))


def condition(results: tree.Results) -> Noticed | None:
    found = results.collinearity
    if found is None or found.condition_index is None or not found.shared_terms:
        return None
    if found.condition_index <= CONDITION:
        return None
    shared = list(found.shared_terms)
    values = {"index": found.condition_index, "names": shared}
    return Noticed(_grade(results, shared), values, shared)


def _grade(results: tree.Results, names: list[str]) -> str:
    # Covariates that go together blur each other, not the exposure's estimate.
    return CONCERN if asked.leading_names(results) & set(names) else REMARK


def one_row(results: tree.Results) -> Noticed | None:
    if results.influence is None:
        return None
    found: list[dict[str, Any]] = []
    for name in dict.fromkeys(one.term for one in results.influence.terms):
        own = [one for one in results.influence.terms if one.term == name]
        # A term of several columns is told once, by the column that moves most.
        most = max(own, key=lambda one: math.inf if _change(one) is None else abs(_change(one) or 0.0))
        change = _change(most)
        size = None if change is None else abs(change)
        crosses = any(one.crosses_one for one in own)
        if crosses or (size is not None and size > MOVED):
            found.append({"variable": name, "change": size, "crosses": crosses})
    if not found:
        return None
    turned = any(item["crosses"] and _moved(item["change"], MOVED) for item in found)
    if turned and not asked.prediction(results):
        grade = SERIOUS
    elif any(item["crosses"] or _moved(item["change"], MUCH_MOVED) for item in found):
        grade = CONCERN
    else:
        grade = REMARK
    return Noticed(grade, {"found": found}, asked.names(found))


def _change(term: tree.InfluenceTerm) -> float | None:
    if term.largest_change_refitted is not None:
        return term.largest_change_refitted
    return term.largest_change


def _moved(change: object, least: float) -> bool:
    # Without a finite estimate for one person fewer, nothing is moved farther.
    return not isinstance(change, float) or change > least


ENTRIES = (
    Entry(
        id="COL-gvif",
        section="trust",
        source="Fox & Monette 1992, J Am Stat Assoc 87:178-83",
        rule=gvif,
        derived=("found[].scaled",),
    ),
    Entry(
        id="COL-condition",
        section="trust",
        source="Belsley, Kuh & Welsch 1980, Regression Diagnostics; "
        "Lesaffre & Marx 1993, Commun Stat Theory Methods 22:1933-52",
        rule=condition,
        derived=("index",),
    ),
    Entry(
        id="INF-one-row",
        section="trust",
        source="Pregibon 1981, Ann Stat 9:705-24",
        rule=one_row,
        derived=("found[].change",),
    ),
)
