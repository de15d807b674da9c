"""What the design asks for and the analysis did not do."""

from __future__ import annotations

from fourfold.findings import asked
from fourfold.findings.entry import CONCERN, REMARK, SERIOUS, Entry, Noticed
from fourfold.results import tree

STROBE_12D = "STROBE item 12d (von Elm et al. 2007, PLoS Med 4:e296)"
VARIES, VARIES_MUCH = 1.0, 1.5
"""Upper against lower quartile of the length of follow-up."""


def matching_ignored(results: tree.Results) -> Noticed | None:
    matched = results.analysis.matched_on
    if not matched:
        return None
    among = {word.casefold() for one in asked.modelled(results) for word in (one.name, one.label)}
    missing = [name for name in matched if name.casefold() not in among]
    # Adjusting for what was matched on is sound for frequency matching; leaving it out is not.
    return Noticed(SERIOUS if missing else CONCERN, {"matched": list(matched), "missing": missing})


def clusters_ignored(results: tree.Results) -> Noticed | None:
    clusters = results.analysis.clusters_stated
    return Noticed(SERIOUS, {"clusters": clusters}) if clusters else None


def weights_ignored(results: tree.Results) -> Noticed | None:
    weights = results.analysis.weights_stated
    return Noticed(SERIOUS, {"weights": weights}) if weights else None


def survey_unweighted(results: tree.Results) -> Noticed | None:
    if results.study.design != "survey" or results.analysis.weights_stated:
        return None
    return Noticed(CONCERN)


def _states(results: tree.Results, word: str) -> bool:
    return word in results.analysis.follow_up


def follow_up_unequal(results: tree.Results) -> Noticed | None:
    return Noticed(SERIOUS) if _states(results, "unequal") else None


def censoring(results: tree.Results) -> Noticed | None:
    return Noticed(SERIOUS) if _states(results, "censored") else None


def competing_events(results: tree.Results) -> Noticed | None:
    return Noticed(CONCERN) if _states(results, "competing events") else None


def follow_up_unstated(results: tree.Results) -> Noticed | None:
    if results.study.design != "cohort" or results.analysis.follow_up:
        return None
    return Noticed(REMARK)


def follow_up_varies(results: tree.Results) -> Noticed | None:
    name = results.analysis.follow_up_variable
    table = results.descriptives.by_outcome
    if name is None or table is None:
        return None
    for row in table.rows:
        low, high = row.overall.lower_quartile, row.overall.upper_quartile
        if row.variable != name or low is None or high is None or high <= VARIES * low:
            continue
        values = {"lower": low, "median": row.overall.median, "upper": high, "unit": row.unit}
        return Noticed(CONCERN if high > VARIES_MUCH * low else REMARK, values, [name])
    return None


def immortal_time(results: tree.Results) -> Noticed | None:
    if results.analysis.exposure_measured != "during follow-up":
        return None
    leading = [variable.name for variable in asked.of_role(results, *asked.LEADING)]
    return Noticed(SERIOUS, {"names": leading}, leading)


ENTRIES = (
    Entry(
        id="DSN-matching-ignored",
        section="methods",
        source=f"{STROBE_12D}; Pearce 2016, BMJ 352:i969",
        rule=matching_ignored,
    ),
    Entry(
        id="DSN-clusters-ignored",
        section="methods",
        source=f"{STROBE_12D}; Liang & Zeger 1986, Biometrika 73:13-22",
        rule=clusters_ignored,
    ),
    Entry(
        id="DSN-weights-ignored",
        section="methods",
        source=f"{STROBE_12D}; Binder 1983, Int Stat Rev 51:279-92",
        rule=weights_ignored,
    ),
    Entry(id="DSN-survey-unweighted", section="methods", source=STROBE_12D, rule=survey_unweighted),
    Entry(
        id="DSN-follow-up-unequal",
        section="methods",
        source=f"{STROBE_12D}; Rothman, Greenland & Lash 2008, Modern Epidemiology, 3rd edition, chapter 3",
        rule=follow_up_unequal,
    ),
    Entry(
        id="DSN-censoring",
        section="methods",
        source=f"{STROBE_12D}; Rothman, Greenland & Lash 2008, Modern Epidemiology, 3rd edition, chapter 3",
        rule=censoring,
    ),
    Entry(
        id="DSN-competing-events",
        section="methods",
        source="Lau, Cole & Gange 2009, Am J Epidemiol 170:244-56",
        rule=competing_events,
    ),
    Entry(
        id="DSN-follow-up-unstated",
        section="methods",
        source="STROBE items 12d and 14c (von Elm et al. 2007, PLoS Med 4:e296)",
        rule=follow_up_unstated,
    ),
    Entry(
        id="DSN-follow-up-varies",
        section="participants",
        source="STROBE item 14c (von Elm et al. 2007, PLoS Med 4:e296)",
        rule=follow_up_varies,
        derived=("lower", "median", "upper"),
    ),
    Entry(
        id="DSN-immortal-time",
        section="methods",
        source="Suissa 2008, Am J Epidemiol 167:492-9",
        rule=immortal_time,
    ),
)
