"""How the estimates may be read, and how they are easily misread."""

from __future__ import annotations

from typing import Any

from fourfold.findings import asked, phrases
from fourfold.findings.entry import CONCERN, REMARK, SERIOUS, Entry, Noticed
from fourfold.measures.conversion import risk_ratio_from_odds_ratio
from fourfold.results import tree

COMMON = 0.10
"""Share with the event among the unexposed above which odds and risks part."""
APART = 0.10
WIDE = 4.0
"""Upper against lower limit of an interval that holds both halving and doubling."""
MANY = 5
SMALL_EXPECTED = 5.0


def not_risk(results: tree.Results) -> Noticed | None:
    if asked.prediction(results) or asked.case_control(results):
        return None
    found: list[dict[str, Any]] = []
    for table in results.tables:
        if table.c is None or table.d is None or table.c + table.d == 0 or table.risk_ratio is None:
            continue
        if any(asked.small(results, cell) for cell in (table.a, table.b, table.c, table.d)):
            continue
        baseline = table.c / (table.c + table.d)
        ratio, kind = _odds_ratio(results, table)
        if ratio is None or baseline <= COMMON:
            continue
        risk_ratio = risk_ratio_from_odds_ratio(ratio, baseline)
        if risk_ratio > 0 and abs(ratio / risk_ratio - 1) > APART:
            found.append(
                {
                    "variable": table.exposure,
                    "odds": ratio,
                    "risks": risk_ratio,
                    "baseline": 100 * baseline,
                    "kind": kind,
                }
            )
    if not found:
        return None
    said = phrases.risk_words(results)
    measure = "risk" if results.study.design == "cohort" else "prevalence"
    values = {"found": found, "said": said, "measure": measure}
    return Noticed(SERIOUS if said else CONCERN, values, asked.names(found))


def _odds_ratio(results: tree.Results, table: tree.FourfoldTable) -> tuple[float | None, str]:
    for one in results.estimates.adjusted:
        if one.term == table.exposure and one.level is None:
            return one.odds_ratio, "adjusted"
    return (table.odds_ratio.estimate if table.odds_ratio is not None else None), "crude"


def case_control_risk(results: tree.Results) -> Noticed | None:
    if not asked.case_control(results):
        return None
    said = phrases.risk_words(results)
    return Noticed(SERIOUS if said else REMARK, {"said": said})


def covariates_as_effects(results: tree.Results) -> Noticed | None:
    exposures = asked.of_role(results, "exposure")
    if asked.prediction(results) or len(exposures) < 2:
        return None
    names = [variable.name for variable in exposures]
    planned = [variable.name for variable in exposures if variable.planned]
    return Noticed(CONCERN, {"names": names, "planned": planned}, names)


def absence(results: tree.Results) -> Noticed | None:
    found = [
        {**asked.which(one), "lower": one.lower, "upper": one.upper}
        for one in asked.adjusted(results, "exposure")
        if one.lower is not None and one.upper is not None
        if one.lower <= 1 <= one.upper and one.upper >= WIDE * one.lower
    ]
    return Noticed(CONCERN, {"found": found}, asked.names(found)) if found else None


def many(results: tree.Results) -> Noticed | None:
    exposures = [variable.name for variable in asked.of_role(results, "exposure")]
    if len(exposures) <= MANY:
        return None
    expected = len(exposures) * (1 - results.analysis.confidence / 100)
    return Noticed(
        CONCERN,
        {"exposures": len(exposures), "expected": expected, "confidence": results.analysis.confidence},
        exposures,
    )


def collapse(results: tree.Results) -> Noticed | None:
    if asked.prediction(results) or len(asked.modelled(results)) < 2:
        return None
    crude = {_key(one): one.odds_ratio for one in results.estimates.crude}
    found: list[dict[str, Any]] = []
    for one in asked.adjusted(results, "exposure"):
        before = crude.get(_key(one))
        # A crude odds ratio is a function of its counts: where they are hidden nothing is said of it.
        if asked.small_cells(results, one.term):
            continue
        if before and one.odds_ratio and abs(one.odds_ratio / before - 1) > APART:
            found.append({**asked.which(one), "crude": before, "adjusted": one.odds_ratio})
    return Noticed(REMARK, {"found": found}, asked.names(found)) if found else None


def _key(estimate: tree.Estimate) -> tuple[Any, ...]:
    return (estimate.term, estimate.level, *(estimate.contrast or ()))


def absolute_missing(results: tree.Results) -> Noticed | None:
    if asked.prediction(results) or asked.case_control(results):
        return None
    shown = {table.exposure for table in results.tables if table.risk_exposed is not None}
    bare = [one.name for one in asked.of_role(results, "exposure") if one.name not in shown]
    return Noticed(CONCERN, {"names": bare}, bare) if bare else None


def expected_small(results: tree.Results) -> Noticed | None:
    found = [
        {"variable": table.exposure, "expected": table.smallest_expected}
        for table in results.tables
        if table.smallest_expected is not None and 0 < table.smallest_expected < SMALL_EXPECTED
    ]
    return Noticed(REMARK, {"found": found}, asked.names(found)) if found else None


ENTRIES = (
    Entry(
        id="OR-not-risk",
        section="results",
        source="Zhang & Yu 1998, JAMA 280:1690-1; Holcomb et al. 2001, Obstet Gynecol 98:685-8; "
        "Knol et al. 2011, PLoS One 6:e21248",
        rule=not_risk,
        derived=("found[].odds", "found[].risks", "found[].baseline"),
    ),
    Entry(
        id="OR-case-control-risk",
        section="results",
        source="Breslow & Day 1980, Statistical Methods in Cancer Research I, "
        "IARC Scientific Publications 32",
        rule=case_control_risk,
    ),
    Entry(
        id="TAB-covariates-as-effects",
        section="results",
        source="Westreich & Greenland 2013, Am J Epidemiol 177:292-8",
        rule=covariates_as_effects,
    ),
    Entry(
        id="NULL-as-absence",
        section="results",
        source="Altman & Bland 1995, BMJ 311:485; Greenland et al. 2016, Eur J Epidemiol 31:337-50",
        rule=absence,
        derived=("found[].lower", "found[].upper"),
    ),
    Entry(
        id="MUL-many",
        section="results",
        source="Wasserstein & Lazar 2016, Am Stat 70:129-33",
        rule=many,
    ),
    Entry(
        id="COLLAPSE",
        section="results",
        source="Greenland, Robins & Pearl 1999, Stat Sci 14:29-46",
        rule=collapse,
        derived=("found[].crude", "found[].adjusted"),
    ),
    Entry(
        id="ABS-missing",
        section="results",
        source="STROBE item 16c (von Elm et al. 2007, PLoS Med 4:e296)",
        rule=absolute_missing,
    ),
    Entry(
        id="TAB-expected-small",
        section="results",
        source="Cochran 1954, Biometrics 10:417-51",
        rule=expected_small,
        derived=("found[].expected",),
    ),
)
