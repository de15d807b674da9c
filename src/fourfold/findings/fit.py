"""Did the fit arrive, and may its estimates and limits be believed?"""

from __future__ import annotations

import math
from typing import Any

from fourfold.findings import asked
from fourfold.findings.entry import CONCERN, REMARK, SERIOUS, Entry, Noticed
from fourfold.results import tree

FARTHER = 0.1
"""Share of a Wald limit's distance from the estimate by which the profile limit may differ."""
STRONG = 3.0
TEN_TIMES = 10.0
NOT_NEGLIGIBLE = 0.001
"""A Wald P below this misleads nobody, however far below it the likelihood ratio's lies."""
SMALL_CELL = 10
COMPLETE = "complete"


def separation(results: tree.Results) -> Noticed | None:
    if not results.model.separation or results.model.separation == COMPLETE:
        return None
    found: list[dict[str, Any]] = [
        {**asked.which(one), **_direction(one), **_empty_cell(results, one)}
        for one in results.estimates.adjusted
        if one.note is not None and one.note.startswith("separated")
    ]
    named = {item["variable"] for item in found}
    others = [name for name in _separated_terms(results) if name not in named]
    about = [*asked.names(found), *others]
    # Estimates of the exposures stand where only covariates have none.
    leads = not about or bool(asked.leading_names(results) & set(about))
    return Noticed(SERIOUS if leads else CONCERN, {"found": found, "others": others}, about)


def _separated_terms(results: tree.Results) -> list[str]:
    pairs = zip(results.model.parameters, results.model.terms, strict=False)
    terms = [term for name, term in pairs if name in results.model.separated and term != "(intercept)"]
    return list(dict.fromkeys(terms))


def _direction(estimate: tree.Estimate) -> dict[str, Any]:
    if estimate.note == "separated upward":
        return {"direction": "upward", "bound": estimate.lower}
    if estimate.note == "separated downward":
        return {"direction": "downward", "bound": estimate.upper}
    return {"direction": None, "bound": None}


def _empty_cell(results: tree.Results, estimate: tree.Estimate) -> dict[str, Any]:
    """The group without events, or without anybody else, where one such group explains the separation."""
    variable = next((one for one in results.variables if one.name == estimate.term), None)
    nothing = {"group": None, "lacks": None, "total": None}
    if variable is None or variable.kind == "quantity":
        return nothing
    reference = next(
        (one for one in results.audit.levels if one.variable == estimate.term and one.reference), None
    )
    groups = [(estimate.level or variable.present, estimate.events, estimate.total)]
    if reference is not None and reference.events is not None and reference.non_events is not None:
        groups.append((reference.level, reference.events, reference.events + reference.non_events))
    for group, events, total in groups:
        if events is not None and total and events in (0, total):
            return {"group": group, "lacks": "events" if events == 0 else "others", "total": total}
    return nothing


def complete_separation(results: tree.Results) -> Noticed | None:
    if results.model.separation != COMPLETE:
        return None
    return Noticed(SERIOUS, {"parameters": len(results.model.separated)}, _separated_terms(results))


def not_converged(results: tree.Results) -> Noticed | None:
    model = results.model
    return None if model.converged else Noticed(SERIOUS, {"iterations": model.iterations})


def wald_profile_differ(results: tree.Results) -> Noticed | None:
    z = _normal_quantile(results.analysis.confidence)
    found: list[dict[str, Any]] = []
    for one in results.estimates.adjusted:
        distance = _farthest(one, z)
        if distance is not None and distance > FARTHER:
            b, se = one.log_odds_ratio or 0.0, one.standard_error or 0.0
            found.append(
                {
                    **asked.which(one),
                    "lower": one.lower,
                    "upper": one.upper,
                    "wald_lower": _exponential(b - z * se),
                    "wald_upper": _exponential(b + z * se),
                }
            )
    if not found:
        return None
    leads = any(item["variable"] in asked.leading_names(results) for item in found)
    return Noticed(CONCERN if leads else REMARK, {"found": found}, asked.names(found))


def _farthest(estimate: tree.Estimate, z: float) -> float | None:
    """Largest gap between a profile and a Wald limit, against the Wald limit's distance."""
    b, se = estimate.log_odds_ratio, estimate.standard_error
    if estimate.interval == "Wald" or b is None or not se:
        return None
    gaps = [
        abs(math.log(limit) - (b + side * z * se)) / (z * se)
        for limit, side in ((estimate.lower, -1), (estimate.upper, 1))
        if limit is not None and limit > 0
    ]
    return max(gaps, default=None)


def _exponential(x: float) -> float | None:
    return math.exp(x) if x < 700 else None


def _normal_quantile(confidence: float) -> float:
    from statistics import NormalDist

    return NormalDist().inv_cdf((1 + confidence / 100) / 2)


def hauck_donner(results: tree.Results) -> Noticed | None:
    found: list[dict[str, Any]] = []
    for one in results.estimates.adjusted:
        b, se, p = one.log_odds_ratio, one.standard_error, one.p_value
        if one.test == "Wald" or b is None or not se or p is None or abs(b) <= STRONG:
            continue
        wald = math.erfc(abs(b / se) / math.sqrt(2))
        if wald > max(TEN_TIMES * p, NOT_NEGLIGIBLE):
            found.append({**asked.which(one), "wald_p": wald, "ratio_p": p})
    return Noticed(REMARK, {"found": found}, asked.names(found)) if found else None


def wald_sparse(results: tree.Results) -> Noticed | None:
    if results.analysis.intervals != "Wald":
        return None
    least = asked.few(results, SMALL_CELL)
    found = [
        {"variable": one.variable, "level": one.level, "events": one.events, "non_events": one.non_events}
        for one in results.audit.levels
        if one.events is not None and one.non_events is not None
        if one.events + one.non_events > 0 and min(one.events, one.non_events) < least
    ]
    return Noticed(CONCERN, {"found": found}, asked.names(found)) if found else None


ENTRIES = (
    Entry(
        id="SEP-infinite",
        section="results",
        source="Albert & Anderson 1984, Biometrika 71:1-10; Konis 2007, thesis, University of Oxford",
        rule=separation,
        counts=("found[].total",),
        derived=("found[].bound",),
    ),
    Entry(
        id="SEP-complete",
        section="results",
        source="Albert & Anderson 1984, Biometrika 71:1-10; Konis 2007, thesis, University of Oxford",
        rule=complete_separation,
    ),
    Entry(id="EST-not-converged", section="results", source="common practice", rule=not_converged),
    Entry(
        id="EST-wald-profile-differ",
        section="results",
        source="Venzon & Moolgavkar 1988, Appl Stat 37:87-94",
        rule=wald_profile_differ,
        derived=("found[].lower", "found[].upper", "found[].wald_lower", "found[].wald_upper"),
    ),
    Entry(
        id="EST-hauck-donner",
        section="results",
        source="Hauck & Donner 1977, J Am Stat Assoc 72:851-3",
        rule=hauck_donner,
        derived=("found[].wald_p", "found[].ratio_p"),
    ),
    Entry(
        id="EST-wald-sparse",
        section="results",
        source="Greenland, Mansournia & Altman 2016, BMJ 352:i1981",
        rule=wald_sparse,
        counts=("found[].events", "found[].non_events"),
    ),
)
