"""Cases of findings about rows and coding."""

from __future__ import annotations

from dataclasses import replace
from typing import Any

from tests.findings import alter
from tests.findings.trees import Case, sound_study

from fourfold.results import tree


def level(name: str, level: str, events: int, others: int, reference: bool = False) -> tree.SparseLevel:
    return tree.SparseLevel(variable=name, level=level, events=events, non_events=others, reference=reference)


def levels(*found: tree.SparseLevel) -> tree.Results:
    return alter.audit(levels=list(found))


def limited(limit: int, *found: tree.SparseLevel) -> tree.Results:
    results = levels(*found)
    return replace(results, analysis=replace(results.analysis, smallest_count=limit))


def three_villages(reference: tuple[int, int], other: tuple[int, int]) -> tree.Results:
    return levels(
        level("village", "Upper", *reference, reference=True),
        level("village", "Middle", *other),
        level("village", "Lower", 170, 1080),
    )


def missing(name: str, count: int, percent: float, **changes: Any) -> tree.Results:
    found = tree.MissingVariable(variable=name, label=name, count=count, percent=percent)
    return alter.people(missing=[found], **changes)


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
        [
            sound_study,
            lambda: alter.audit(constant=["village"]),
            # Too few others to be counted; they are a sparse level.
            lambda: alter.audit(
                near_constant=["village"],
                levels=[level("village", "Upper", 300, 2696), level("village", "Lower", 1, 3)],
            ),
        ],
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
        [
            sound_study,
            lambda: alter.variable("stove", reference_rule="most frequent"),
            lambda: alter.variable("age", shape="log2", reference_rule="median"),
        ],
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
            # Where counts below 10 are hidden, 3 and 9 are told alike.
            (lambda: limited(10, level("village", "Far", 9, 90)), "concern"),
            (lambda: levels(*(level("village", f"V{i}", 1, 30) for i in range(11))), "concern"),
        ],
        # Nobody at all: an unused level, told as such.
        [
            sound_study,
            lambda: levels(level("village", "Far", 5, 5)),
            lambda: levels(level("village", "Far", 0, 0)),
        ],
    ),
}
