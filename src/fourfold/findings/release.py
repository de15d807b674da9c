"""What must be known before the report leaves the house: small numbers, gaps, repeatability."""

from __future__ import annotations

import math
from collections.abc import Iterator

from fourfold.findings import asked
from fourfold.findings.entry import CONCERN, REMARK, Entry, Noticed
from fourfold.results import tree

RELIABLE = 20
"""Events below which a proportion's relative standard error passes 22%."""

# Items that nothing but the authors' own statement can answer.
STROBE_BY_AUTHOR = ("1b", "2", "3", "6a", "8", "9", "19", "20", "21", "22")
TRIPOD_BY_AUTHOR = (
    "2", "3a", "3b", "3c", "8a", "9b", "17", "18a", "18b", "18c", "18d", "19", "25", "26",
    "27a", "27b", "27c",
)  # fmt: skip


def hidden(results: tree.Results) -> Noticed | None:
    analysis = results.analysis
    least = 0 if analysis.hide_zero else 1
    if any(least <= count < analysis.smallest_count for count in _counts(results)):
        return Noticed(REMARK, {"limit": analysis.smallest_count, "zero": analysis.hide_zero})
    return None


def _counts(results: tree.Results) -> Iterator[int]:
    flow = results.participants
    found: list[int | None] = [flow.events, flow.non_events]
    if flow.incomplete:
        found.append(flow.incomplete)
    found += [one.count for one in flow.exclusions]
    found += [one.count for one in flow.missing if one.count]
    found += [one.count for one in flow.patterns]
    for table in results.tables:
        found += [table.a, table.b, table.c, table.d]
    for level in results.audit.levels:
        found += [level.events, level.non_events]
    described = [results.descriptives.by_outcome, *results.descriptives.by_exposure]
    for characteristics in described:
        if characteristics is not None:
            for row in characteristics.rows:
                found += [cell.count for cell in (row.overall, *row.groups)]
    yield from (count for count in found if count is not None)


def unreliable(results: tree.Results) -> Noticed | None:
    events = results.participants.events
    if events is None or not 0 < events < asked.few(results, RELIABLE):
        return None
    return Noticed(CONCERN, {"events": events, "error": 100 / math.sqrt(events)})


def people_shown(results: tree.Results) -> Noticed | None:
    shown = [one.term for one in results.outcome_by_quantity if one.points]
    if not results.analysis.show_people or not shown:
        return None
    return Noticed(CONCERN, {"names": shown}, shown)


def nothing_hidden(results: tree.Results) -> Noticed | None:
    if results.analysis.smallest_count > 1 or results.analysis.hide_zero:
        return None
    return Noticed(REMARK)


def checklist(results: tree.Results) -> Noticed | None:
    by_author = TRIPOD_BY_AUTHOR if asked.prediction(results) else STROBE_BY_AUTHOR
    remaining = [item for item in by_author if item not in results.study.stated]
    if not remaining:
        return None
    standard = "TRIPOD+AI" if asked.prediction(results) else "STROBE"
    return Noticed(REMARK, {"standard": standard, "remaining": remaining})


def where_when(results: tree.Results) -> Noticed | None:
    study = results.study
    dated = study.period_from is not None or study.period_to is not None
    if study.setting and dated:
        return None
    return Noticed(REMARK, {"setting": bool(study.setting), "period": dated})


def seed_versions(results: tree.Results) -> Noticed | None:
    found = results.provenance
    lacking = []
    if not found.packages:
        lacking.append("versions")
    if found.data_sha256 is None:
        lacking.append("data")
    if not found.description:
        lacking.append("description")
    return Noticed(REMARK, {"lacking": lacking}) if lacking else None


ENTRIES = (
    Entry(
        id="SML-hidden",
        section="participants",
        source="common practice; a local rule may be stricter",
        rule=hidden,
    ),
    Entry(
        id="SML-unreliable",
        section="participants",
        source="reliability rules of health departments, relative standard error above 22% (common practice)",
        rule=unreliable,
        counts=("events",),
        derived=("error",),
    ),
    Entry(id="SML-people-shown", section="results", source="common practice", rule=people_shown),
    Entry(
        id="SML-nothing-hidden",
        section="participants",
        source="common practice; a local rule may be stricter",
        rule=nothing_hidden,
    ),
    Entry(
        id="REP-checklist",
        section="methods",
        source="STROBE (von Elm et al. 2007, PLoS Med 4:e296); TRIPOD+AI (Collins et al. 2024, "
        "BMJ 385:e078378)",
        rule=checklist,
    ),
    Entry(
        id="REP-where-when",
        section="methods",
        source="STROBE item 5 (von Elm et al. 2007, PLoS Med 4:e296)",
        rule=where_when,
    ),
    Entry(
        id="REP-seed-versions",
        section="methods",
        source="Peng 2011, Science 334:1226-7",
        rule=seed_versions,
    ),
)
