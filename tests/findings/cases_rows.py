"""Cases of findings about rows, flow, coding and release."""

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


def three_villages(reference: tuple[int, int], other: tuple[int, int]) -> tree.Results:
    return levels(
        level("village", "Upper", *reference, reference=True),
        level("village", "Middle", *other),
        level("village", "Lower", 170, 1080),
    )


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


def lost(incomplete: int) -> tree.Results:
    kept = 3000 - incomplete
    results = alter.people(incomplete=incomplete, analysed=kept, non_events=kept - 360, crude_rows={})
    return replace(results, model=replace(results.model, n=kept))


def implausible(below: int, above: int) -> tree.Results:
    found = tree.ImplausibleValues(
        variable="age",
        below=below,
        above=above,
        lowest=-3.0 if below else None,
        highest=412.0 if above else None,
        limits=[18.0, 100.0],
    )
    return alter.audit(implausible=[found])


def expected(direction: str, lower: float, upper: float) -> tree.Results:
    """The stove is expected to go one way; its odds ratio of 1.75 has these limits."""
    results = alter.variable("stove", expected=direction)
    return alter.adjusted("stove", results, lower=lower, upper=upper)


def two_expected() -> tree.Results:
    # One against what is expected, one with it: nothing speaks for reversed coding.
    return alter.variable("village", alter.variable("stove", expected="lowers"), expected="raises")


def bands(**changes: Any) -> tree.Results:
    return alter.variable("age", kind="ordered", derived_from="age_in_years", cuts=[40.0, 60.0], **changes)


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
    "DAT-duplicates": Case(
        [
            (lambda: alter.people(duplicated_identifiers=14), "concern"),
            (lambda: alter.people(duplicated_identifiers=1), "concern"),
        ],
        [sound_study, lambda: alter.people(duplicated_identifiers=None)],
    ),
    "DAT-identical-rows": Case(
        [(lambda: alter.people(duplicated_rows=3), "concern")],
        [sound_study, lambda: alter.people(duplicated_identifiers=14)],
    ),
    "DAT-implausible": Case(
        [
            (lambda: implausible(0, 3), "concern"),
            (lambda: implausible(1, 0), "concern"),
            (lambda: implausible(7, 12), "concern"),
        ],
        [sound_study, lambda: implausible(0, 0)],
    ),
    "DAT-missing-code": Case(
        [
            (
                lambda: alter.audit(
                    suspected_codes=[tree.SuspectedCode(variable="age", value=999.0, count=41)]
                ),
                "concern",
            )
        ],
        [sound_study],
    ),
    "DAT-outcome-reversed": Case(
        [
            (lambda: alter.audit(outcome_reversed="no"), "concern"),
            (lambda: expected("lowers", 1.41, 2.17), "concern"),
        ],
        [
            sound_study,
            lambda: expected("raises", 1.41, 2.17),
            # Against expectation, but an interval that holds 1 may be chance.
            lambda: expected("lowers", 0.9, 2.17),
            two_expected,
        ],
    ),
    "DAT-time-order": Case(
        [
            (
                lambda: alter.audit(date_order=[tree.DateOrder(covariate="stove", outcome="cough", count=7)]),
                "serious",
            )
        ],
        [
            sound_study,
            lambda: alter.audit(date_order=[tree.DateOrder(covariate="stove", outcome="cough", count=0)]),
        ],
    ),
    "DAT-constant": Case(
        [
            (lambda: alter.audit(constant=["village"]), "serious"),
            (lambda: alter.audit(constant=["village", "age"]), "serious"),
        ],
        [sound_study, lambda: alter.audit(near_constant=["village"])],
    ),
    "DAT-near-constant": Case(
        [
            (lambda: alter.audit(near_constant=["village"]), "remark"),
            (lambda: alter.audit(near_constant=["village", "stove"]), "remark"),
        ],
        [sound_study, lambda: alter.audit(constant=["village"])],
    ),
    "DAT-duplicated-column": Case(
        [
            (lambda: alter.audit(duplicated_columns=[["stove", "village"]]), "concern"),
            (lambda: alter.audit(duplicated_columns=[["stove", "village"], ["age", "cough"]]), "concern"),
        ],
        [sound_study],
    ),
    "DAT-identifier-offered": Case(
        [
            (lambda: alter.audit(looks_like_identifier=["age"]), "concern"),
            (lambda: alter.audit(looks_like_identifier=["age", "village"]), "concern"),
        ],
        [sound_study, lambda: alter.audit(looks_like_date=["age"])],
    ),
    "DAT-date-offered": Case(
        [
            (lambda: alter.audit(looks_like_date=["age"]), "concern"),
            (lambda: alter.audit(looks_like_date=["age", "village"]), "concern"),
        ],
        [sound_study, lambda: alter.audit(looks_like_identifier=["age"])],
    ),
    "DAT-unused-level": Case(
        [
            (lambda: alter.audit(unused_levels={"village": ["Middle"]}), "remark"),
            (lambda: alter.audit(unused_levels={"village": ["Middle", "Far"], "stove": ["x"]}), "remark"),
        ],
        [sound_study, lambda: alter.audit(unused_levels={"village": []})],
    ),
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
        [sound_study, lambda: lost(150), lambda: alter.people(incomplete=None)],
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
            (lambda: associated(0.01), "concern"),
            (lambda: associated(0.01, lost=200), "serious"),
            (lambda: associated(0.02, tests=2), "concern"),
        ],
        # Bonferroni: 0.03 in one of two tests is not below 0.05 / 2.
        [sound_study, lambda: associated(0.06), lambda: associated(0.03, tests=2)],
    ),
    "MIS-crude-adjusted-rows": Case(
        [
            (lambda: alter.people(crude_rows={"stove": 3040}), "remark"),
            (lambda: alter.people(crude_rows={"stove": 3001}), "remark"),
        ],
        [sound_study, lambda: alter.people(crude_rows={"stove": None})],
    ),
    "COD-reference-unstated": Case(
        [
            (lambda: alter.variable("village", reference_rule="most frequent"), "remark"),
            (lambda: alter.variable("age", reference_rule="median"), "remark"),
            (
                lambda: alter.variable(
                    "stove", kind="category", levels=["no", "old", "new"], reference_rule="most frequent"
                ),
                "concern",
            ),
        ],
        [sound_study, lambda: alter.variable("stove", reference_rule="most frequent")],
    ),
    "COD-reference-small": Case(
        [
            (lambda: three_villages((6, 90), (184, 1470)), "concern"),
            (lambda: three_villages((30, 100), (160, 1460)), "concern"),
        ],
        [
            sound_study,
            lambda: three_villages((40, 400), (150, 1160)),
            # All levels are as small: another reference would not help.
            lambda: levels(
                level("village", "Upper", 6, 90, reference=True),
                level("village", "Middle", 6, 70),
                level("village", "Lower", 5, 80),
            ),
        ],
    ),
    "COD-unit": Case(
        [
            (lambda: alter.variable("age", unit=None), "concern"),
            (lambda: alter.variable("age", shape="linear", per=None), "remark"),
        ],
        [sound_study, lambda: alter.variable("age", shape="linear", per=10.0)],
    ),
    "COD-cut": Case(
        [
            (lambda: bands(cuts_chosen="beforehand"), "concern"),
            (lambda: bands(cuts_chosen=None), "concern"),
        ],
        # Bands that are only described do not enter the model.
        [sound_study, lambda: bands(cuts_chosen="beforehand", role="other")],
    ),
    "COD-cut-by-data": Case(
        [
            (lambda: bands(cuts_chosen="from the outcome"), "serious"),
            (lambda: bands(cuts_chosen="from the data"), "concern"),
        ],
        [sound_study, lambda: bands(cuts_chosen="beforehand"), lambda: bands(cuts_chosen=None)],
    ),
    "COD-sparse-level": Case(
        [
            (lambda: levels(level("village", "Far", 4, 90)), "concern"),
            (lambda: levels(level("village", "Far", 90, 0)), "concern"),
            (lambda: levels(*(level("village", f"V{i}", 1, 30) for i in range(11))), "concern"),
        ],
        # Nobody at all: an unused level, told as such.
        [
            sound_study,
            lambda: levels(level("village", "Far", 5, 5)),
            lambda: levels(level("village", "Far", 0, 0)),
        ],
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
