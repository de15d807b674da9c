"""What the rows bring to light: repeated people, impossible values, columns that say nothing."""

from __future__ import annotations

from typing import Any

from fourfold.findings import asked
from fourfold.findings.entry import CONCERN, REMARK, SERIOUS, Entry, Noticed
from fourfold.results import tree

RECORD = "RECORD statement (Benchimol et al. 2015, PLoS Med 12:e1001885)"
SAMPL = "SAMPL guidelines (Lang & Altman 2015, Int J Nurs Stud 52:5-9)"
PRACTICE = "common practice"


def duplicates(results: tree.Results) -> Noticed | None:
    rows = results.participants.duplicated_identifiers
    return Noticed(CONCERN, {"rows": rows}) if rows else None


def identical_rows(results: tree.Results) -> Noticed | None:
    rows = results.participants.duplicated_rows
    return Noticed(CONCERN, {"rows": rows}) if rows else None


def implausible(results: tree.Results) -> Noticed | None:
    found = [
        {
            "variable": one.variable,
            "below": one.below,
            "above": one.above,
            "lowest": one.lowest,
            "highest": one.highest,
            "limits": list(one.limits),
        }
        for one in results.audit.implausible
        if one.below or one.above
    ]
    return Noticed(CONCERN, {"found": found}, asked.names(found)) if found else None


def missing_code(results: tree.Results) -> Noticed | None:
    found = [
        {"variable": one.variable, "value": one.value, "count": one.count}
        for one in results.audit.suspected_codes
    ]
    return Noticed(CONCERN, {"found": found}, asked.names(found)) if found else None


def outcome_reversed(results: tree.Results) -> Noticed | None:
    word, contrary = results.audit.outcome_reversed, _contrary(results)
    if word is None and not contrary:
        return None
    outcome = asked.of_role(results, "outcome")
    present = outcome[0].present if outcome else word
    about = [variable.name for variable in outcome]
    return Noticed(CONCERN, {"present": present, "by_word": word is not None, "contrary": contrary}, about)


def _contrary(results: tree.Results) -> list[str]:
    """Variables with a stated direction, if all their estimates go the other way, one of them clearly."""
    expected = {one.name: one.expected for one in asked.modelled(results) if one.expected}
    looked = [one for one in results.estimates.adjusted if one.term in expected and one.log_odds_ratio]
    against = [one for one in looked if (_log_odds(one) > 0) == (expected[one.term] == "lowers")]
    # One estimate can fall on the wrong side by chance; an interval beyond 1 is no such slip.
    clear = any(
        (one.lower is not None and one.lower > 1) or (one.upper is not None and one.upper < 1)
        for one in against
    )
    if not clear or len(against) < len(looked):
        return []
    return list(dict.fromkeys(one.term for one in against))


def _log_odds(estimate: tree.Estimate) -> float:
    return estimate.log_odds_ratio or 0.0


def time_order(results: tree.Results) -> Noticed | None:
    found: list[dict[str, Any]] = [
        {"variable": one.covariate, "outcome": one.outcome, "count": one.count}
        for one in results.audit.date_order
        if one.count != 0
    ]
    return Noticed(SERIOUS, {"found": found}, asked.names(found)) if found else None


def constant(results: tree.Results) -> Noticed | None:
    names = results.audit.constant
    return Noticed(SERIOUS, {"names": list(names)}, list(names)) if names else None


def near_constant(results: tree.Results) -> Noticed | None:
    names = [name for name in results.audit.near_constant if not _few_others(results, name)]
    return Noticed(REMARK, {"names": names}, names) if names else None


def _few_others(results: tree.Results, name: str) -> bool:
    """Are those without the frequent level so few that they are hidden? They are told as sparse."""
    sizes = [
        one.events + one.non_events
        for one in results.audit.levels
        if one.variable == name and one.events is not None and one.non_events is not None
    ]
    return bool(sizes) and asked.small(results, sum(sizes) - max(sizes))


def duplicated_column(results: tree.Results) -> Noticed | None:
    groups = [list(group) for group in results.audit.duplicated_columns]
    about = list(dict.fromkeys(name for group in groups for name in group))
    return Noticed(CONCERN, {"groups": groups}, about) if groups else None


def identifier_offered(results: tree.Results) -> Noticed | None:
    names = results.audit.looks_like_identifier
    return Noticed(CONCERN, {"names": list(names)}, list(names)) if names else None


def date_offered(results: tree.Results) -> Noticed | None:
    names = results.audit.looks_like_date
    return Noticed(CONCERN, {"names": list(names)}, list(names)) if names else None


def unused_level(results: tree.Results) -> Noticed | None:
    found: list[dict[str, Any]] = [
        {"variable": name, "levels": list(levels)}
        for name, levels in results.audit.unused_levels.items()
        if levels
    ]
    return Noticed(REMARK, {"found": found}, asked.names(found)) if found else None


ENTRIES = (
    Entry(id="DAT-duplicates", section="participants", source=RECORD, rule=duplicates, counts=("rows",)),
    Entry(
        id="DAT-identical-rows", section="participants", source=RECORD, rule=identical_rows, counts=("rows",)
    ),
    Entry(
        id="DAT-implausible",
        section="participants",
        source=SAMPL,
        rule=implausible,
        counts=("found[].below", "found[].above"),
        derived=("found[].lowest", "found[].highest"),
    ),
    Entry(
        id="DAT-missing-code",
        section="participants",
        source=PRACTICE,
        rule=missing_code,
        counts=("found[].count",),
    ),
    Entry(id="DAT-outcome-reversed", section="methods", source=PRACTICE, rule=outcome_reversed),
    Entry(
        id="DAT-time-order",
        section="participants",
        source="STROBE items 7 and 8 (von Elm et al. 2007, PLoS Med 4:e296); "
        "PROBAST (Wolff et al. 2019, Ann Intern Med 170:51-58)",
        rule=time_order,
        counts=("found[].count",),
    ),
    Entry(id="DAT-constant", section="methods", source=PRACTICE, rule=constant),
    Entry(id="DAT-near-constant", section="methods", source=PRACTICE, rule=near_constant),
    Entry(id="DAT-duplicated-column", section="methods", source=PRACTICE, rule=duplicated_column),
    Entry(id="DAT-identifier-offered", section="methods", source=PRACTICE, rule=identifier_offered),
    Entry(id="DAT-date-offered", section="methods", source=PRACTICE, rule=date_offered),
    Entry(id="DAT-unused-level", section="participants", source=PRACTICE, rule=unused_level),
)
