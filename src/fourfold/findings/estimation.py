"""What can go wrong in the fit itself: separation, convergence, limits that disagree."""

from __future__ import annotations

import math
from typing import Any

from scipy.special import chdtrc, ndtri

from fourfold.findings.entry import Entry, found
from fourfold.results import tree

LED = ("exposure", "predictor")


def _separated(results: tree.Results) -> list[tree.Finding]:
    if results.model.separation != "quasi-complete":
        return []
    terms = [
        _cells(results, estimate)
        for estimate in results.estimates.adjusted
        if (estimate.note or "").startswith("separated")
    ]
    about = list(dict.fromkeys(item["variable"] for item in terms))
    return [found(SEPARATED, "serious", about, terms=terms, names=about)] if terms else []


def _cells(results: tree.Results, estimate: tree.Estimate) -> dict[str, Any]:
    """The empty cell behind a separated estimate, if a single cell explains it."""
    item: dict[str, Any] = {"variable": estimate.term, "level": estimate.level, "empty": None, "total": None}
    if estimate.contrast is not None or estimate.per is not None:
        return item
    other = _reference_cells(results, estimate)
    if estimate.total is not None and estimate.events is not None and estimate.total > 0:
        if estimate.events == 0:
            item |= {"empty": "events", "total": estimate.total, "side": "level"}
        elif estimate.events == estimate.total:
            item |= {"empty": "non-events", "total": estimate.total, "side": "level"}
        elif other is not None and other[0] == 0:
            item |= {"empty": "events", "total": other[1], "side": "reference", "reference": estimate.reference}
        elif other is not None and other[0] == other[1]:
            item |= {"empty": "non-events", "total": other[1], "side": "reference", "reference": estimate.reference}
    return item


def _reference_cells(results: tree.Results, estimate: tree.Estimate) -> tuple[int, int] | None:
    for level in results.audit.levels:
        if level.variable == estimate.term and level.reference:
            if level.events is None or level.non_events is None:
                return None
            return level.events, level.events + level.non_events
    for table in results.tables:
        if table.exposure == estimate.term and table.c is not None and table.d is not None:
            return table.c, table.c + table.d
    return None


def _complete(results: tree.Results) -> list[tree.Finding]:
    if results.model.separation != "complete":
        return []
    about = [variable.name for variable in results.variables if variable.role in LED]
    return [found(COMPLETE, "serious", about, parameters=len(results.model.separated))]


def _not_converged(results: tree.Results) -> list[tree.Finding]:
    if results.model.converged:
        return []
    return [found(NOT_CONVERGED, "serious", iterations=results.model.iterations)]


def _limits_differ(results: tree.Results) -> list[tree.Finding]:
    z = float(ndtri((1 + results.analysis.confidence / 100) / 2))
    items = []
    for estimate in results.estimates.adjusted:
        b, error = estimate.log_odds_ratio, estimate.standard_error
        if estimate.role not in LED or estimate.interval != "profile likelihood":
            continue
        if b is None or error is None or estimate.lower is None or estimate.upper is None:
            continue
        width = math.log(estimate.upper / estimate.lower)
        apart = max(abs(math.log(estimate.lower) - b + z * error), abs(math.log(estimate.upper) - b - z * error))
        if apart > 0.1 * width:
            items.append(
                {
                    "variable": estimate.term,
                    "level": estimate.level,
                    "profile": [estimate.lower, estimate.upper],
                    "wald": [math.exp(b - z * error), math.exp(b + z * error)],
                }
            )
    about = list(dict.fromkeys(str(item["variable"]) for item in items))
    return [found(LIMITS_DIFFER, "concern", about, items=items)] if items else []


def _hauck_donner(results: tree.Results) -> list[tree.Finding]:
    items = []
    for estimate in results.estimates.adjusted:
        b, error, p = estimate.log_odds_ratio, estimate.standard_error, estimate.p_value
        if b is None or error is None or p is None or error == 0 or estimate.test != "likelihood ratio":
            continue
        # The test is of the coefficient per unit; a stated unit changes both alike.
        wald = float(chdtrc(1, (b / error) ** 2))
        if abs(b) > 3 and wald > 10 * p:
            items.append({"variable": estimate.term, "level": estimate.level, "wald": wald, "ratio": p})
    about = list(dict.fromkeys(str(item["variable"]) for item in items))
    return [found(HAUCK_DONNER, "concern", about, items=items)] if items else []


SEPARATED = Entry(
    id="SEP-infinite", section="results", notice=_separated, counts=("terms",), derived=("terms",),
    source="Albert & Anderson (1984), Biometrika 71, 1-10; Konis (2007), thesis, Oxford",
)  # fmt: skip
COMPLETE = Entry(
    id="SEP-complete", section="results", notice=_complete,
    source="Albert & Anderson (1984), Biometrika 71, 1-10",
)  # fmt: skip
NOT_CONVERGED = Entry(
    id="EST-not-converged", section="results", notice=_not_converged, source="common practice"
)
LIMITS_DIFFER = Entry(
    id="EST-wald-profile-differ", section="results", notice=_limits_differ,
    source="Venzon & Moolgavkar (1988), Appl Stat 37, 87-94",
)  # fmt: skip
HAUCK_DONNER = Entry(
    id="EST-hauck-donner", section="results", notice=_hauck_donner,
    source="Hauck & Donner (1977), J Am Stat Assoc 72, 851-853",
)  # fmt: skip

ENTRIES = (SEPARATED, COMPLETE, NOT_CONVERGED, LIMITS_DIFFER, HAUCK_DONNER)
