"""Who is in the analysis and who is lost on the way to it."""

from __future__ import annotations

from typing import Any

from fourfold.findings import asked
from fourfold.findings.entry import CONCERN, REMARK, SERIOUS, Entry, Noticed
from fourfold.results import tree

STROBE = "von Elm et al. 2007, PLoS Med 4:e296"
WHITE_CARLIN = "White & Carlin 2010, Stat Med 29:2920-31"

MUCH_LOST, VERY_MUCH_LOST = 5.0, 20.0
"""Percent of people lost to missing values, from which it is a concern, or serious."""
MUCH_MISSING = 20.0
"""Percent without a value of one variable, from which that variable is named by itself."""
FALSE_ALARMS = 0.05


def adds(results: tree.Results) -> Noticed | None:
    wrong = [
        {"step": step, "reason": reason, "stated": stated, "computed": computed}
        for step, reason, stated, computed in _sums(results)
        if stated != computed
    ]
    return Noticed(SERIOUS, {"steps": wrong}) if wrong else None


def _sums(results: tree.Results) -> list[tuple[str, str | None, int, int]]:
    """Each box of the flow that can be worked out from others, as stated and as computed."""
    flow, sums = results.participants, list[tuple[str, str | None, int, int]]()

    def compare(
        step: str, reason: str | None, stated: int | None, whole: int | None, part: int | None
    ) -> None:
        if stated is not None and whole is not None and part is not None:
            sums.append((step, reason, stated, whole - part))

    before = flow.read
    for exclusion in flow.exclusions:
        compare("exclusion", exclusion.reason, exclusion.remaining, before, exclusion.count)
        before = exclusion.remaining
    compare("eligible", None, flow.eligible, before, 0)
    compare("analysed", None, flow.analysed, flow.eligible, flow.incomplete)
    compare("events", None, flow.events, flow.analysed, flow.non_events)
    if asked.fitted(results):
        compare("model", None, results.model.n, flow.analysed, 0)
        compare("model events", None, results.model.events, flow.events, 0)
    return sums


def dropped(results: tree.Results) -> Noticed | None:
    share = _lost(results)
    if share is None or share <= MUCH_LOST:
        return None
    flow = results.participants
    values = {"incomplete": flow.incomplete, "eligible": flow.eligible, "share": share}
    return Noticed(SERIOUS if share > VERY_MUCH_LOST else CONCERN, values)


def _lost(results: tree.Results) -> float | None:
    """Percent of eligible people who are not in the adjusted model."""
    flow = results.participants
    if flow.incomplete is None or not flow.eligible or asked.small(results, flow.incomplete):
        return None
    return 100 * flow.incomplete / flow.eligible


def much_missing(results: tree.Results) -> Noticed | None:
    needed = {variable.name for variable in asked.modelled(results)}
    found = [
        {"variable": one.variable, "count": one.count, "share": one.percent}
        for one in results.participants.missing
        if one.variable in needed
        and one.percent is not None
        and one.percent >= MUCH_MISSING
        and not asked.small(results, one.count)
    ]
    return Noticed(CONCERN, {"found": found}, asked.names(found)) if found else None


def missing_outcome(results: tree.Results) -> Noticed | None:
    outcome = {variable.name for variable in asked.of_role(results, "outcome")}
    for one in results.participants.missing:
        if one.variable in outcome and one.count:
            many = one.percent is not None and one.percent > MUCH_LOST
            grade = CONCERN if many and not asked.small(results, one.count) else REMARK
            return Noticed(grade, {"count": one.count, "share": one.percent}, [one.variable])
    return None


def depends(results: tree.Results) -> Noticed | None:
    looked = results.participants.missing_associations
    tests = [(one, _largest_p(results, one)) for one in looked if one.p_value is not None]
    # Bonferroni: with many incomplete variables one of them would be found by chance.
    found = [
        {
            "variable": one.variable,
            "odds": one.odds_ratio,
            "lower": one.lower,
            "upper": one.upper,
            "p_value": one.p_value,
        }
        for one, p in tests
        if p is not None and p < FALSE_ALARMS / len(tests)
    ]
    if not found:
        return None
    share = _lost(results)
    grade = SERIOUS if share is not None and share > MUCH_LOST else CONCERN
    return Noticed(grade, {"found": found}, asked.names(found))


def _largest_p(results: tree.Results, found: tree.MissingAssociation) -> float | None:
    """The P-value; where a count of the table is hidden, the largest that any such count could give.

    Otherwise the finding would tell which of the small counts it is.
    """
    a, c = found.events_incomplete, found.events_complete
    if a is None or c is None or found.incomplete is None or found.complete is None:
        return None
    cells = (a, found.incomplete - a, c, found.complete - c)
    if not any(asked.small(results, cell) for cell in cells):
        return found.p_value
    from fourfold.measures.hypergeometric import fisher

    events, row, other = a + c, found.incomplete, found.complete
    hidden = range(results.analysis.smallest_count)
    first = {x for n in hidden for x in (n, row - n, events - n, events - other + n)}
    tables = [(x, row - x, events - x, other - events + x) for x in first]
    alike = [
        table
        for table in tables
        if min(table) >= 0
        and [asked.small(results, cell) for cell in table] == [asked.small(results, cell) for cell in cells]
    ]
    return max(fisher(*table) for table in alike)


def crude_adjusted_rows(results: tree.Results) -> Noticed | None:
    analysed = results.participants.analysed
    found: list[dict[str, Any]] = [
        {"variable": name, "rows": rows, "lost": rows - analysed}
        for name, rows in results.participants.crude_rows.items()
        if rows is not None and analysed is not None and rows > analysed
    ]
    return Noticed(REMARK, {"analysed": analysed, "found": found}, asked.names(found)) if found else None


ENTRIES = (
    Entry(
        id="FLW-adds",
        section="participants",
        source=f"STROBE item 13 ({STROBE})",
        rule=adds,
        counts=("steps[].stated", "steps[].computed"),
    ),
    Entry(
        id="MIS-dropped",
        section="participants",
        source=f"STROBE item 12c ({STROBE}); Eekhout et al. 2012, Epidemiology 23:729-32",
        rule=dropped,
        counts=("incomplete", "eligible"),
        derived=("share",),
    ),
    Entry(
        id="MIS-much-missing",
        section="participants",
        source=f"STROBE item 14b ({STROBE}); Sterne et al. 2009, BMJ 338:b2393",
        rule=much_missing,
        counts=("found[].count",),
        derived=("found[].share",),
    ),
    Entry(
        id="MIS-outcome",
        section="participants",
        source=f"STROBE item 12d ({STROBE})",
        rule=missing_outcome,
        counts=("count",),
        derived=("share",),
    ),
    Entry(
        id="MIS-depends",
        section="participants",
        source=WHITE_CARLIN,
        rule=depends,
        derived=("found[].odds", "found[].lower", "found[].upper", "found[].p_value"),
    ),
    Entry(
        id="MIS-crude-adjusted-rows",
        section="participants",
        source=f"STROBE item 16a ({STROBE})",
        rule=crude_adjusted_rows,
        counts=("analysed", "found[].rows", "found[].lost"),
    ),
)
