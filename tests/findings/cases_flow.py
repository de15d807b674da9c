"""Cases of findings about the flow of participants, missing values and release."""

from __future__ import annotations

from dataclasses import replace
from typing import Any

from tests.findings import alter, trees
from tests.findings.trees import Case, sound_study

from fourfold.results import tree


def level(name: str, level: str, events: int, others: int, reference: bool = False) -> tree.SparseLevel:
    return tree.SparseLevel(variable=name, level=level, events=events, non_events=others, reference=reference)


def levels(*found: tree.SparseLevel) -> tree.Results:
    return alter.audit(levels=list(found))


def missing(name: str, count: int, percent: float, **changes: Any) -> tree.Results:
    found = tree.MissingVariable(variable=name, label=name, count=count, percent=percent)
    return alter.people(missing=[found], **changes)


def associated(p: float, tests: int = 1, lost: int = 0) -> tree.Results:
    """One incomplete variable with this P, among as many tests in all; ``lost`` of 3,000 incomplete."""
    first = tree.MissingAssociation(
        variable="age",
        events_incomplete=40,
        incomplete=200,
        events_complete=320,
        complete=2800,
        odds_ratio=1.94,
        lower=1.35,
        upper=2.79,
        p_value=p,
        test="chi-squared",
    )
    others = [replace(first, variable="village", odds_ratio=1.0, p_value=0.8) for _ in range(tests - 1)]
    results = alter.people(missing_associations=[first, *others])
    if not lost:
        return results
    kept = 3000 - lost
    flow = replace(results.participants, incomplete=lost, analysed=kept, non_events=kept - 360)
    return replace(results, participants=flow, model=replace(results.model, n=kept))


def few_associated(events: int, incomplete: int) -> tree.Results:
    found = tree.MissingAssociation(
        variable="age",
        events_incomplete=events,
        incomplete=incomplete,
        events_complete=1400 - events,
        complete=3000 - incomplete,
        odds_ratio=None,
        lower=None,
        upper=None,
        p_value=0.0001,
        test="Fisher exact",
    )
    return alter.people(missing_associations=[found])


def lost(incomplete: int) -> tree.Results:
    kept = 3000 - incomplete
    results = alter.people(incomplete=incomplete, analysed=kept, non_events=kept - 360, crude_rows={})
    return replace(results, model=replace(results.model, n=kept))


def shown_people(show: bool) -> tree.Results:
    results = alter.analysis(show_people=show, smallest_count=2)
    point = tree.JitteredPoint(x=1.0, y=0.5, event=True, group=None)
    looked = [replace(one, points=[point]) for one in results.outcome_by_quantity]
    return replace(results, outcome_by_quantity=looked)


def described(count: int, limit: int, hide_zero: bool = False) -> tree.Results:
    cells = [tree.DescriptiveCell(group=group, count=count, total=1500) for group in ("overall", "yes", "no")]
    row = tree.Descriptive(
        variable="village",
        label="Village",
        kind="category",
        level="Lower",
        unit=None,
        decimals=0,
        overall=cells[0],
        groups=cells[1:],
    )
    by = tree.DescriptiveTable(
        by="cough", by_label="Cough", groups=["yes", "no"], group_sizes=[360, 2640], rows=[row]
    )
    results = alter.analysis(smallest_count=limit, hide_zero=hide_zero)
    return replace(results, descriptives=tree.Descriptives(by_outcome=by))


def provenance(**changes: Any) -> tree.Results:
    results = sound_study()
    return replace(results, provenance=replace(results.provenance, **changes))


CASES = {
    "FLW-adds": Case(
        [
            (lambda: alter.people(analysed=2999), "serious"),
            (lambda: alter.people(eligible=3001), "serious"),
            (lambda: alter.model(n=2900), "serious"),
            (lambda: alter.model(events=350), "serious"),
            (
                lambda: alter.people(
                    exclusions=[tree.Exclusion(reason="Moved away", count=90, remaining=3000)]
                ),
                "serious",
            ),
        ],
        # A hidden box cannot be checked; it is no contradiction.
        [sound_study, lambda: alter.people(incomplete=None), lambda: alter.people(read=None)],
    ),
    # Published practice: about 5% is often called negligible; STROBE 12c asks in any case.
    "MIS-dropped": Case(
        [(lambda: lost(151), "concern"), (lambda: lost(600), "concern"), (lambda: lost(601), "serious")],
        [
            sound_study,
            lambda: lost(150),
            lambda: alter.people(incomplete=None),
            # Hidden, so that whether they are more than 5% must not be told.
            lambda: alter.people(eligible=40, incomplete=4, analysed=36, events=16, non_events=20),
        ],
    ),
    "MIS-much-missing": Case(
        [(lambda: missing("age", 600, 20.0), "concern")],
        [sound_study, lambda: missing("age", 597, 19.9), lambda: missing("cough", 900, 30.0)],
    ),
    "MIS-outcome": Case(
        [
            (lambda: missing("cough", 90, 3.0), "remark"),
            (lambda: missing("cough", 180, 6.0), "concern"),
            (lambda: missing("cough", 1, 0.03), "remark"),
        ],
        [sound_study, lambda: missing("age", 90, 3.0)],
    ),
    "MIS-depends": Case(
        [
            # Of 200 incomplete people 1 to 4 had the event: below 1e-49 whichever it is (SciPy).
            (lambda: few_associated(3, 200), "concern"),
            (lambda: associated(0.01), "concern"),
            (lambda: associated(0.01, lost=200), "serious"),
            (lambda: associated(0.02, tests=2), "concern"),
        ],
        # Bonferroni: 0.03 in one of two tests is not below 0.05 / 2.
        [
            sound_study,
            lambda: associated(0.06),
            lambda: associated(0.03, tests=2),
            # Of 14 incomplete people 1 to 4 had the event, of the others nearly half. Fisher's exact P is
            # 0.002 for 1 and 0.19 for 4 (SciPy); the finding must not tell which of the hidden counts it is.
            lambda: few_associated(1, 14),
            lambda: few_associated(4, 14),
        ],
    ),
    "MIS-crude-adjusted-rows": Case(
        [
            (lambda: alter.people(crude_rows={"stove": 3040}), "remark"),
            (lambda: alter.people(crude_rows={"stove": 3001}), "remark"),
        ],
        [sound_study, lambda: alter.people(crude_rows={"stove": None})],
    ),
    "SML-hidden": Case(
        [
            (lambda: levels(level("village", "Far", 4, 90)), "remark"),
            (lambda: described(1, 2), "remark"),
            (lambda: described(0, 5, hide_zero=True), "remark"),
        ],
        [
            sound_study,
            lambda: levels(level("village", "Far", 5, 90)),
            lambda: levels(level("village", "Far", 0, 90)),
            lambda: described(4, 4),
        ],
    ),
    # Relative standard error 100 / sqrt(20) = 22.4%; reliability rules of health departments.
    "SML-unreliable": Case(
        [
            (lambda: alter.people(events=19, non_events=2981), "concern"),
            (lambda: alter.people(events=1, non_events=2999), "concern"),
        ],
        [
            sound_study,
            lambda: alter.people(events=20, non_events=2980),
            lambda: alter.people(events=None),
        ],
    ),
    "SML-people-shown": Case(
        [(lambda: shown_people(True), "concern")], [sound_study, lambda: shown_people(False)]
    ),
    "SML-nothing-hidden": Case(
        [
            (lambda: alter.analysis(smallest_count=0), "remark"),
            (lambda: alter.analysis(smallest_count=1), "remark"),
        ],
        [
            sound_study,
            lambda: alter.analysis(smallest_count=2),
            lambda: alter.analysis(smallest_count=1, hide_zero=True),
        ],
    ),
    "REP-checklist": Case(
        [
            (lambda: alter.study(stated={}), "remark"),
            (lambda: alter.study(stated={k: v for k, v in trees.STATED.items() if k != "9"}), "remark"),
            (lambda: alter.prediction(alter.study(stated={})), "remark"),
        ],
        [sound_study, lambda: alter.prediction()],
    ),
    "REP-where-when": Case(
        [
            (lambda: alter.study(setting=None), "remark"),
            (lambda: alter.study(period_from=None, period_to=None), "remark"),
            (lambda: alter.study(setting=None, period_from=None, period_to=None), "remark"),
        ],
        [sound_study, lambda: alter.study(period_from=None)],
    ),
    "REP-seed-versions": Case(
        [
            (lambda: provenance(packages={}), "remark"),
            (lambda: provenance(packages={}, data_sha256=None, description=""), "remark"),
        ],
        [sound_study],
    ),
}
