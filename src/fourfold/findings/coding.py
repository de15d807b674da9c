"""How values became terms: references, units, cuts and levels that few people have."""

from __future__ import annotations

from typing import Any

from fourfold.findings import asked
from fourfold.findings.entry import CONCERN, REMARK, SERIOUS, Entry, Noticed
from fourfold.results import tree

STROBE_11 = "STROBE item 11 (von Elm et al. 2007, PLoS Med 4:e296)"
ROYSTON = "Royston, Altman & Sauerbrei 2006, Stat Med 25:127-41"

SMALL_SHARE = 5.0
"""Percent of people below which a reference level is small."""
FEW = 10
SPARSE = 5


def reference_unstated(results: tree.Results) -> Noticed | None:
    chosen = [
        variable
        for variable in asked.modelled(results)
        # A binary variable has no choice, and an odds ratio per doubling has no reference.
        if variable.reference_rule is not None and variable.kind != "binary" and variable.shape != "log2"
    ]
    if not chosen:
        return None
    found = [{"variable": one.name, "reference": one.reference, "rule": one.reference_rule} for one in chosen]
    # Of a covariate, and of a curve, the reference moves no estimate that is read as an answer.
    leads = any(one.role in asked.LEADING and one.kind != "quantity" for one in chosen)
    return Noticed(CONCERN if leads else REMARK, {"found": found}, asked.names(found))


def reference_small(results: tree.Results) -> Noticed | None:
    found: list[dict[str, Any]] = []
    for variable in asked.modelled(results):
        if variable.kind not in ("category", "ordered"):
            continue
        sizes = {
            one.level: (one.events, one.non_events)
            for one in results.audit.levels
            if one.variable == variable.name and one.events is not None and one.non_events is not None
        }
        if variable.reference not in sizes:
            continue
        events, others = sizes[variable.reference]
        everyone = sum(e + n for e, n in sizes.values())
        share = 100 * (events + others) / everyone if everyone else 0.0
        least = asked.few(results, FEW)
        # Where no level has enough to lean on, another choice would not help.
        better = any(min(size) >= least for level, size in sizes.items() if level != variable.reference)
        if better and (min(events, others) < least or share < SMALL_SHARE):
            found.append(
                {
                    "variable": variable.name,
                    "reference": variable.reference,
                    "events": events,
                    "non_events": others,
                    "share": share,
                }
            )
    return Noticed(CONCERN, {"found": found}, asked.names(found)) if found else None


def unit(results: tree.Results) -> Noticed | None:
    quantities = [one for one in asked.modelled(results) if one.kind == "quantity"]
    without_unit = [one.name for one in quantities if one.unit is None]
    per_one = [one.name for one in quantities if one.unit and one.per is None and one.shape == "linear"]
    if not without_unit and not per_one:
        return None
    grade = CONCERN if without_unit else REMARK
    values = {"without_unit": without_unit, "per_one": per_one}
    return Noticed(grade, values, [*without_unit, *per_one])


def cut(results: tree.Results) -> Noticed | None:
    bands = [one for one in asked.modelled(results) if one.cuts]
    if not bands:
        return None
    found = [
        {"variable": one.name, "quantity": one.derived_from, "bands": len(one.cuts) + 1} for one in bands
    ]
    unstated = [one.name for one in bands if one.cuts_chosen is None]
    return Noticed(CONCERN, {"found": found, "unstated": unstated}, asked.names(found))


def cut_by_data(results: tree.Results) -> Noticed | None:
    bands = [one for one in asked.modelled(results) if one.cuts]
    by_outcome = [one.name for one in bands if one.cuts_chosen == "from the outcome"]
    by_data = [one.name for one in bands if one.cuts_chosen == "from the data"]
    if not by_outcome and not by_data:
        return None
    values = {"by_outcome": by_outcome, "by_data": by_data}
    return Noticed(SERIOUS if by_outcome else CONCERN, values, [*by_outcome, *by_data])


def sparse_level(results: tree.Results) -> Noticed | None:
    found: list[dict[str, Any]] = []
    least = asked.few(results, SPARSE)
    for one in results.audit.levels:
        if one.events is None or one.non_events is None:
            continue
        # A level that nobody has is no sparse cell; it is told as an unused level.
        if one.events + one.non_events > 0 and min(one.events, one.non_events) < least:
            found.append(
                {
                    "variable": one.variable,
                    "level": one.level,
                    "events": one.events,
                    "non_events": one.non_events,
                }
            )
    return Noticed(CONCERN, {"found": found}, asked.names(found)) if found else None


ENTRIES = (
    Entry(
        id="COD-reference-unstated",
        section="methods",
        source="SAMPL guidelines (Lang & Altman 2015, Int J Nurs Stud 52:5-9)",
        rule=reference_unstated,
    ),
    Entry(
        id="COD-reference-small",
        section="results",
        source="common practice",
        rule=reference_small,
        counts=("found[].events", "found[].non_events"),
        derived=("found[].share",),
    ),
    Entry(id="COD-unit", section="methods", source=STROBE_11, rule=unit),
    Entry(id="COD-cut", section="methods", source=ROYSTON, rule=cut),
    Entry(
        id="COD-cut-by-data",
        section="methods",
        source=f"Altman et al. 1994, J Natl Cancer Inst 86:829-35; {ROYSTON}",
        rule=cut_by_data,
    ),
    Entry(
        id="COD-sparse-level",
        section="results",
        source="Greenland, Mansournia & Altman 2016, BMJ 352:i1981",
        rule=sparse_level,
        counts=("found[].events", "found[].non_events"),
    ),
)
