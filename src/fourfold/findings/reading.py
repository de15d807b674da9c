"""How the odds ratios may be misread."""

from __future__ import annotations

import math

from fourfold.findings.entry import Entry, found
from fourfold.results import tree

CASE_CONTROL = "case-control"


def _not_risk(results: tree.Results) -> list[tree.Finding]:
    items = []
    for table in results.tables:
        odds, risk, base = table.odds_ratio, table.risk_ratio, table.risk_unexposed
        if odds is None or risk is None or base is None:
            continue
        if odds.estimate is None or risk.estimate is None or base.estimate is None or risk.estimate <= 0:
            continue
        if base.estimate > 0.10 and odds.estimate > 0 and abs(math.log(odds.estimate / risk.estimate)) > math.log(1.1):
            items.append(
                {
                    "variable": table.exposure,
                    "odds_ratio": odds.estimate,
                    "risk_ratio": risk.estimate,
                    "base": 100 * base.estimate,
                }
            )
    about = [str(item["variable"]) for item in items]
    word = "risk" if results.study.design == "cohort" else "prevalence"
    return [found(NOT_RISK, "concern", about, items=items, names=about, word=word)] if items else []


def _no_risks(results: tree.Results) -> list[tree.Finding]:
    return [found(NO_RISKS, "remark")] if results.study.design == CASE_CONTROL else []


def _exposures(results: tree.Results) -> list[tree.Variable]:
    return [variable for variable in results.variables if variable.role == "exposure"]


def _presented_alike(results: tree.Results) -> list[tree.Finding]:
    exposures = _exposures(results)
    if not 2 <= len(exposures) <= 5:
        return []
    names = [variable.name for variable in exposures]
    planned = [variable.name for variable in exposures if variable.planned]
    return [found(PRESENTED_ALIKE, "concern", names, names=names, planned=planned)]


def _many(results: tree.Results) -> list[tree.Finding]:
    exposures = _exposures(results)
    if len(exposures) <= 5:
        return []
    names = [variable.name for variable in exposures]
    alpha = 1 - results.analysis.confidence / 100
    return [found(MANY, "concern", names, exposures=len(names), by_chance=alpha * len(names))]


def _absence(results: tree.Results) -> list[tree.Finding]:
    items = []
    for estimate in results.estimates.adjusted:
        if estimate.role != "exposure" or estimate.lower is None or estimate.upper is None:
            continue
        if estimate.lower < 1 < estimate.upper and estimate.upper / estimate.lower > 2:
            items.append(
                {
                    "variable": estimate.term,
                    "level": estimate.level,
                    "lower": estimate.lower,
                    "upper": estimate.upper,
                }
            )
    about = list(dict.fromkeys(str(item["variable"]) for item in items))
    return [found(ABSENCE, "concern", about, items=items)] if items else []


def _moved(results: tree.Results) -> list[tree.Finding]:
    crude = {(item.term, item.level): item for item in results.estimates.crude if item.contrast is None}
    items = []
    for estimate in results.estimates.adjusted:
        before = crude.get((estimate.term, estimate.level))
        if estimate.role != "exposure" or estimate.contrast is not None or before is None:
            continue
        if before.odds_ratio is None or estimate.odds_ratio is None:
            continue
        if abs(math.log(estimate.odds_ratio / before.odds_ratio)) > math.log(1.1):
            items.append(
                {
                    "variable": estimate.term,
                    "level": estimate.level,
                    "crude": before.odds_ratio,
                    "adjusted": estimate.odds_ratio,
                }
            )
    about = list(dict.fromkeys(str(item["variable"]) for item in items))
    return [found(MOVED, "remark", about, items=items)] if items else []


def _no_absolute(results: tree.Results) -> list[tree.Finding]:
    exposures = _exposures(results)
    if results.study.design == CASE_CONTROL or not exposures:
        return []
    with_table = {table.exposure for table in results.tables}
    names = [variable.name for variable in exposures if variable.name not in with_table]
    return [found(NO_ABSOLUTE, "concern", names, names=names)] if names else []


NOT_RISK = Entry(
    id="OR-not-risk", section="results", notice=_not_risk, derived=("items",),
    source="Zhang & Yu (1998), JAMA 280, 1690-1691; Holcomb et al. (2001), Obstet Gynecol 98, 685-688",
)  # fmt: skip
NO_RISKS = Entry(
    id="OR-case-control-risk", section="results", notice=_no_risks,
    source="STROBE statement (2007), items 12 and 16",
)  # fmt: skip
PRESENTED_ALIKE = Entry(
    id="TAB-covariates-as-effects", section="results", notice=_presented_alike,
    source="Westreich & Greenland (2013), Am J Epidemiol 177, 292-298",
)  # fmt: skip
MANY = Entry(
    id="MUL-many", section="results", notice=_many, source="Rothman (1990), Epidemiology 1, 43-46"
)
ABSENCE = Entry(
    id="NULL-as-absence", section="results", notice=_absence,
    source="Greenland et al. (2016), Eur J Epidemiol 31, 337-350",
)  # fmt: skip
MOVED = Entry(
    id="COLLAPSE", section="results", notice=_moved, derived=("items",),
    source="Greenland, Robins & Pearl (1999), Stat Sci 14, 29-46",
)  # fmt: skip
NO_ABSOLUTE = Entry(
    id="ABS-missing", section="results", notice=_no_absolute, source="STROBE statement (2007), item 16c"
)

ENTRIES = (NOT_RISK, NO_RISKS, PRESENTED_ALIKE, MANY, ABSENCE, MOVED, NO_ABSOLUTE)
