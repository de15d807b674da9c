"""What the hiding pass takes away, place by place, and what it leaves alone."""

from __future__ import annotations

import dataclasses
import itertools
import json
import math
import re
from dataclasses import replace
from typing import Any

import pytest
from tests.report.disclosure.study import Shape, rows_of, tree_of
from tests.report.disclosure.whole import whole

from fourfold.report.disclosure import hide
from fourfold.report.disclosure.places.groups import wilson
from fourfold.report.disclosure.withheld import values_of
from fourfold.report.numbers import Withheld
from fourfold.results import json_file, tree

COUNTS = {
    "a", "b", "c", "d", "events", "non_events", "total", "count", "missing", "group_sizes", "n", "observed",
    "remaining", "read", "eligible", "incomplete", "analysed", "crude_rows", "events_incomplete",
    "events_complete", "complete", "rows_read", "below", "above", "duplicated_identifiers", "duplicated_rows",
    "high_leverage", "large_residuals",
}  # fmt: skip


def scaled(value: Any, by: int, name: str = "") -> Any:
    """The tree of a study in which everybody stands for ``by`` people: every count is a multiple."""
    if dataclasses.is_dataclass(value) and not isinstance(value, type):
        changed = {
            field.name: scaled(getattr(value, field.name), by, field.name)
            for field in dataclasses.fields(value)
        }
        return replace(value, **changed)
    if isinstance(value, list):
        return [scaled(item, by, name) for item in value]
    if isinstance(value, dict):
        return {key: scaled(item, by, name) for key, item in value.items()}
    return value * by if type(value) is int and name in COUNTS else value


def with_value(value: Any, path: tuple[str | int, ...], new: Any) -> Any:
    """The tree with another value at one place."""
    if not path:
        return new
    first, rest = path[0], path[1:]
    if isinstance(value, list):
        return [with_value(item, rest, new) if place == first else item for place, item in enumerate(value)]
    if isinstance(value, dict):
        return {**value, first: with_value(value[first], rest, new)}
    return replace(value, **{str(first): with_value(getattr(value, str(first)), rest, new)})


def at(value: Any, path: tuple[str | int, ...]) -> Any:
    for step in path:
        value = value[step] if isinstance(value, list | dict) else getattr(value, str(step))
    return value


def test_a_study_without_small_counts_comes_back_as_it_was() -> None:
    assert hide(whole()) == whole()


@pytest.mark.parametrize("limit", [0, 1])
def test_a_limit_of_one_hides_nothing(limit: int) -> None:
    shape = Shape(people=40, limit=limit)
    truth = tree_of(shape, rows_of(shape, 3))
    assert hide(truth) == truth


@pytest.mark.parametrize("seed", range(12))
def test_no_small_count_is_left_in_the_file(seed: int) -> None:
    # Everybody stands for 1009 people, so that a small count is a number found nowhere else.
    shape = Shape(people=90, levels=(2, 3, 2), missing=0.03, design=["cohort", "case-control"][seed % 2])
    truth = scaled(tree_of(shape, rows_of(shape, seed)), 1009)
    truth = replace(truth, analysis=replace(truth.analysis, smallest_count=5 * 1009))
    small = re.compile(r"(?<![\d.])(1009|2018|3027|4036)(?![\d.])")
    assert small.search(json_file.dumps(truth))
    assert not small.search(json_file.dumps(hide(truth)))


@pytest.mark.parametrize(
    "path",
    [
        ("participants", "duplicated_identifiers"),
        ("participants", "duplicated_rows"),
        ("participants", "exclusions", 0, "count"),
        ("participants", "incomplete"),
        ("participants", "missing", 1, "count"),
        ("participants", "patterns", 0, "count"),
        ("participants", "missing_associations", 0, "events_incomplete"),
        ("audit", "implausible", 0, "below"),
        ("audit", "implausible", 0, "above"),
        ("audit", "suspected_codes", 0, "count"),
        ("audit", "date_order", 0, "count"),
        ("audit", "levels", 3, "events"),
        ("audit", "levels", 3, "non_events"),
        ("tables", 0, "a"),
        ("tables", 0, "d"),
        ("estimates", "crude", 1, "events"),
        ("estimates", "adjusted", 2, "total"),
        ("descriptives", "by_outcome", "rows", 1, "groups", 0, "count"),
        ("descriptives", "by_outcome", "rows", 4, "groups", 1, "missing"),
        ("descriptives", "by_outcome", "rows", 4, "overall", "total"),
        ("descriptives", "by_outcome", "group_sizes", 0),
        ("descriptives", "by_exposure", 0, "rows", 0, "groups", 0, "count"),
        ("descriptives", "by_exposure", 0, "group_sizes", 1),
        ("risk_distribution", 0, "events"),
        ("risk_distribution", 5, "non_events"),
        ("influence", "high_leverage"),
        ("influence", "large_residuals"),
        ("participants", "events"),
        ("participants", "analysed"),
        ("participants", "eligible"),
        ("model", "n"),
    ],
)  # fmt: skip
def test_a_small_count_is_hidden_wherever_it_stands(path: tuple[str | int, ...]) -> None:
    # The tree no longer adds up: then too nothing small may be shown, in this place or another.
    truth = with_value(whole(), path, 3)
    hidden = hide(truth)
    assert at(hidden, path) is None
    owner = path
    while not hasattr(at(hidden, owner), "hidden"):
        owner = owner[:-1]
    assert str(path[len(owner)]) in at(hidden, owner).hidden
    json_file.dumps(hidden)
    assert hide(hidden) == hidden


def small_table(exposed_events: int = 3, **changes: Any) -> tree.Results:
    """Few exposed have the event; everything else is large."""
    shape = Shape(people=400, levels=(2,), quantities=1, missing=0.0, event=0.3, excluded=0, **changes)
    rows = rows_of(shape, 5)
    spared = 0
    for row in rows:
        if row["c0"] == "yes" and row["outcome"] == "yes":
            spared += 1
            if spared > exposed_events:
                row["outcome"] = "no"
    return tree_of(shape, rows)


def test_with_a_cell_go_the_other_cells_and_all_that_is_computed_from_them() -> None:
    hidden = hide(small_table())
    table = hidden.tables[0]
    assert [table.a, table.b, table.c, table.d] == [None] * 4
    assert table.hidden["a"] == "small"
    assert {table.hidden[cell] for cell in "bcd"} == {"subtraction"}
    figures = (
        "risk_exposed", "risk_unexposed", "odds_ratio", "risk_ratio", "risk_difference", "chi_squared",
        "chi_squared_p", "fisher_p", "smallest_expected",
    )  # fmt: skip
    assert all(getattr(table, name) is None and table.hidden[name] == "derived" for name in figures)
    crude, adjusted = hidden.estimates.crude[0], hidden.estimates.adjusted[0]
    assert crude.note == "hidden"
    assert [crude.odds_ratio, crude.lower, crude.upper, crude.p_value, crude.standard_error] == [None] * 5
    assert crude.events is None
    assert adjusted.events is None
    # An adjusted error below that of a single person in the cell would tell that there are more.
    assert (adjusted.note, adjusted.odds_ratio, adjusted.upper, adjusted.p_value) == (
        "hidden",
        None,
        None,
        None,
    )
    assert hidden.model.covariance is None
    assert hidden.participants.events is not None
    assert hidden.estimates.crude[1].odds_ratio is not None
    assert hidden.estimates.adjusted[1].odds_ratio is not None


@pytest.mark.parametrize(("events", "kept"), [(1, True), (2, False), (3, False), (4, False)])
def test_an_adjusted_interval_stays_only_if_it_allows_a_single_person_in_the_cell(events, kept) -> None:
    # Floor of the adjusted standard error: Woolf's (1955) from the same cells, a theorem for maximum
    # likelihood with an intercept on the same rows.
    truth = small_table(events)
    before, after = truth.estimates.adjusted[0], hide(truth).estimates.adjusted[0]
    assert before.standard_error is not None
    assert (before.standard_error > 1.0) == kept
    assert (after.odds_ratio is not None) == kept


def test_a_zero_is_shown_unless_zeros_are_hidden() -> None:
    truth = replace(small_table(exposed_events=0), risk_distribution=[])
    assert truth.tables[0].a == 0
    shown = hide(truth)
    assert shown.tables == truth.tables
    assert shown.estimates == truth.estimates
    strict = hide(replace(truth, analysis=replace(truth.analysis, hide_zero=True)))
    assert [strict.tables[0].a, strict.tables[0].b, strict.tables[0].c, strict.tables[0].d] == [None] * 4
    assert strict.estimates.crude[0].note == "hidden"


def test_a_finding_on_separation_would_tell_a_hidden_zero() -> None:
    finding = tree.Finding(
        id="SEP-infinite", grade="serious", section="results", source="", about=["c0"],
        values={"found": [{"variable": "c0", "level": None, "events": 0, "total": 190, "bound": 2.5}]},
    )  # fmt: skip
    truth = replace(small_table(exposed_events=0), findings=[finding])
    assert [one.id for one in hide(truth).findings] == ["SEP-infinite"]
    assert hide(replace(truth, analysis=replace(truth.analysis, hide_zero=True))).findings == []


def test_that_no_estimate_exists_would_tell_a_hidden_zero() -> None:
    truth = small_table(exposed_events=0)
    first = truth.estimates.adjusted[0]
    lost = replace(
        first, note="separated downward", log_odds_ratio=None, standard_error=None, odds_ratio=None,
        lower=None, upper=0.7, p_value=0.01,
    )  # fmt: skip
    adjusted = [lost if one.term == first.term else one for one in truth.estimates.adjusted]
    model = replace(
        truth.model, parameters=[first.term], terms=[first.term], coding=["1 for present"],
        coefficients=[None], covariance=None, separated=[first.term], separation="quasi-complete",
    )  # fmt: skip
    truth = replace(truth, estimates=replace(truth.estimates, adjusted=adjusted), model=model)
    shown = hide(truth)
    assert shown.estimates.adjusted[0].note == "separated downward"
    assert shown.model.separated == [first.term]
    strict = hide(replace(truth, analysis=replace(truth.analysis, hide_zero=True)))
    told = strict.estimates.adjusted[0]
    assert (told.note, told.upper, told.p_value, told.events) == ("hidden", None, None, None)
    assert (strict.model.separated, strict.model.separation) == ([], None)
    assert hide(strict) == strict


@pytest.mark.parametrize("seed", range(40))
def test_a_crude_odds_ratio_is_shown_with_all_its_counts_or_not_at_all(seed: int) -> None:
    """From two group sizes and an odds ratio with two decimals the counts can often be found.

    The search is the one by which 283 of 400 random tables had a single solution.
    """
    shape = Shape(people=[60, 150][seed % 2], levels=(2, 3), missing=0.02, event=0.2)
    truth = tree_of(shape, rows_of(shape, seed))
    hidden = hide(truth)
    for before, table in zip(truth.tables, hidden.tables, strict=True):
        assert before.a is not None
        cells = [table.a, table.b, table.c, table.d]
        assert (table.odds_ratio is None) == (None in cells)
    levels = {(one.variable, one.level): one for one in hidden.audit.levels}
    for estimate in hidden.estimates.crude:
        if estimate.term.startswith("q"):
            continue
        level = levels[estimate.term, estimate.level or "yes"]
        reference = levels[estimate.term, estimate.reference or "no"]
        counts = [level.events, level.non_events, reference.events, reference.non_events]
        if estimate.odds_ratio is not None:
            a, b, c, d = counts
            assert math.isclose(estimate.odds_ratio, a * d / (b * c))
        elif None in counts:
            assert estimate.note == "hidden"
            assert estimate.lower is estimate.upper is estimate.p_value is None


def test_the_whole_fit_goes_where_it_is_the_table_over_again() -> None:
    full, few = whole(), small_table()
    one_term = [variable for variable in few.variables if variable.kind != "quantity"]
    truth = replace(
        full, variables=one_term, participants=few.participants, tables=few.tables, audit=few.audit,
        descriptives=tree.Descriptives(),
        estimates=tree.Estimates(crude=few.estimates.crude[:1], adjusted=few.estimates.adjusted[:1]),
        model=replace(full.model, n=few.model.n, events=few.model.events),
        risk_distribution=[], outcome_by_quantity=[], findings=[],
        collinearity=tree.Collinearity(
            gvif=[tree.Gvif(term="c0", label="C0", df=1, gvif=1.25, scaled=1.118)], condition_index=2.5
        ),
    )  # fmt: skip
    hidden = hide(truth)
    assert hidden.tables[0].a is None
    assert hidden.collinearity is None
    assert hidden.estimates.adjusted[0].odds_ratio is None
    assert hidden.model.coefficients == [None] * 5
    assert hidden.model.covariance is hidden.model.log_likelihood is hidden.model.r_squared is None
    assert hidden.model.deviance is hidden.model.aic is hidden.model.likelihood_ratio is None
    assert hidden.discrimination is not None
    assert hidden.discrimination.auc is None
    assert hidden.discrimination.curve == []
    assert hidden.calibration is not None
    assert hidden.calibration.brier is None
    assert hidden.calibration.groups == []
    assert hidden.influence is not None
    assert hidden.influence.largest_pearson is None
    assert hide(hidden) == hidden


def test_a_fit_among_quantities_stays() -> None:
    full = whole()
    truth = with_value(full, ("audit", "levels", 3, "events"), 3)
    hidden = hide(truth)
    assert hidden.model == full.model
    assert hidden.discrimination == full.discrimination
    assert [one.odds_ratio for one in hidden.estimates.adjusted] == [
        one.odds_ratio for one in full.estimates.adjusted
    ]


def test_the_covariance_goes_where_it_is_as_many_equations_as_patterns() -> None:
    full = whole()
    yes_no = [
        tree.Variable(name=f"c{k}", label="", role="covariate", kind="binary", present="yes", reference="no")
        for k in range(4)
    ]
    levels = [
        tree.SparseLevel(variable="c0", level=level, events=events, non_events=90, reference=level == "no")
        for level, events in (("yes", 3), ("no", 60))
    ]
    truth = replace(
        full, variables=[full.variables[0], *yes_no], audit=tree.Audit(levels=levels), tables=[],
        descriptives=tree.Descriptives(), estimates=tree.Estimates(), findings=[],
    )  # fmt: skip
    hidden = hide(truth)
    assert hidden.model.covariance is None
    assert hidden.model.hidden["covariance"] == "derived"
    assert hidden.model.coefficients == full.model.coefficients


def test_groups_of_fitted_risk_with_few_events_are_joined() -> None:
    full = whole()
    assert full.calibration is not None
    groups = full.calibration.groups
    first, second = groups[0], groups[1]
    assert first.observed is not None
    assert second.observed is not None
    assert first.n is not None
    assert second.n is not None
    assert second.expected is not None
    moved = first.observed - 2
    few = [
        replace(first, observed=2, expected=1.5),
        replace(second, observed=second.observed + moved),
        *groups[2:],
    ]
    hidden = hide(replace(full, calibration=replace(full.calibration, groups=few)))
    assert hidden.calibration is not None
    assert len(hidden.calibration.groups) == 4
    joined = hidden.calibration.groups[0]
    assert joined.n == first.n + second.n
    assert joined.observed == first.observed + second.observed
    assert joined.expected == 1.5 + second.expected
    assert joined.lowest == first.lowest
    assert joined.highest == second.highest
    assert joined.proportion == joined.observed / joined.n
    assert hidden.calibration.hidden == {"groups": "small"}
    assert hidden.calibration.hosmer_lemeshow == full.calibration.hosmer_lemeshow
    assert [group.observed for group in hidden.calibration.groups[1:]] == [
        group.observed for group in groups[2:]
    ]


def test_limits_of_a_joined_group_are_wilsons() -> None:
    # Newcombe (1998), Stat Med 17, 857-872, table I: 81 of 263, 15 of 148, 0 of 20, 1 of 29.
    published = {(81, 263): (0.2553, 0.3662), (15, 148): (0.0624, 0.1605), (0, 20): (0.0, 0.1611),
                 (1, 29): (0.0061, 0.1718)}  # fmt: skip
    for (k, n), limits in published.items():
        assert wilson(k, n, 95) == pytest.approx(limits, abs=5e-5)


def test_bins_of_a_quantity_with_few_without_the_event_are_joined() -> None:
    full = whole()
    by_quantity = full.outcome_by_quantity[0]
    last = by_quantity.bins[-1]
    assert last.total is not None
    few = [*by_quantity.bins[:-1], replace(last, events=last.total - 4)]
    hidden = hide(replace(full, outcome_by_quantity=[replace(by_quantity, bins=few)]))
    found = hidden.outcome_by_quantity[0]
    assert len(found.bins) == 4
    assert found.bins[-1].upper == last.upper
    assert found.bins[-1].lower == by_quantity.bins[-2].lower
    assert found.hidden == {"bins": "small"}


def test_steps_of_the_roc_curve_tell_no_small_count() -> None:
    full = whole()
    assert full.discrimination is not None
    events, non_events = full.participants.events, full.participants.non_events
    assert events is not None
    assert non_events is not None
    fine = [tree.RocPoint(specificity=1.0, sensitivity=0.0)]
    reached = [0, 0]
    for step in range(events + non_events):
        reached[0 if step % 4 == 0 and reached[0] < events else 1] += 1
        if reached[1] > non_events:
            break
        fine.append(tree.RocPoint(specificity=1 - reached[1] / non_events, sensitivity=reached[0] / events))
    fine.append(tree.RocPoint(specificity=0.0, sensitivity=1.0))
    hidden = hide(replace(full, discrimination=replace(full.discrimination, curve=fine)))
    assert hidden.discrimination is not None
    curve = hidden.discrimination.curve
    assert {(p.specificity, p.sensitivity) for p in curve} <= {(p.specificity, p.sensitivity) for p in fine}
    assert (curve[0], curve[-1]) == (fine[0], fine[-1])
    assert len(curve) > 20
    for start, end in itertools.pairwise(curve):
        steps = (
            round((end.sensitivity - start.sensitivity) * events),
            round((start.specificity - end.specificity) * non_events),
        )
        assert all(step == 0 or step >= 5 for step in steps)
    assert hidden.discrimination.hidden == {"curve": "small"}
    assert hidden.discrimination.auc == full.discrimination.auc


def test_findings_lose_their_small_counts_and_what_stands_beside() -> None:
    full = whole()
    values = {
        "found": [
            {"variable": "c1", "level": "l1", "events": 40, "non_events": 77},
            {"variable": "c1", "level": "l2", "events": 2, "non_events": 78},
        ]
    }
    finding = replace(full.findings[0], values=values)
    found = hide(replace(full, findings=[finding])).findings[0]
    assert found.values["found"][0] == values["found"][0]
    assert found.values["found"][1] == {"variable": "c1", "level": "l2", "events": None, "non_events": None}
    assert found.hidden == {"found[1].events": "small", "found[1].non_events": "subtraction"}
    assert values["found"][1]["events"] == 2
    told = values_of(found)["found"][1]
    assert told["events"] == Withheld("small")
    assert told["non_events"] == Withheld("subtraction")


def test_a_finding_does_not_tell_what_is_hidden_elsewhere() -> None:
    truth = small_table(1)
    table = truth.tables[0]
    finding = tree.Finding(
        id="COD-reference-small", grade="concern", section="results", source="", about=["c0"],
        values={
            "found": [
                {"variable": "c0", "level": "no", "events": table.c, "non_events": table.d, "share": 12.5}
            ]
        },
    )  # fmt: skip
    repeated = tree.Finding(
        id="OR-not-risk", grade="concern", section="results", source="", about=["c0"],
        values={"found": [{"variable": "c0", "odds": 3.25, "risks": 2.75, "baseline": 0.125}]},
    )  # fmt: skip
    adjusted = truth.estimates.adjusted[0].lower
    kept = tree.Finding(
        id="NULL-as-absence", grade="concern", section="results", source="", about=["c0"],
        values={"found": [{"variable": "c0", "lower": adjusted, "upper": 77.5}]},
    )  # fmt: skip
    first, second, third = hide(replace(truth, findings=[finding, repeated, kept])).findings
    assert first.values["found"][0] == {
        "variable": "c0", "level": "no", "events": None, "non_events": None, "share": None,
    }  # fmt: skip
    assert second.values["found"][0] == {"variable": "c0", "odds": None, "risks": None, "baseline": None}
    assert third.values["found"][0] == {"variable": "c0", "lower": adjusted, "upper": None}


def test_a_finding_of_an_unknown_kind_keeps_no_small_number() -> None:
    finding = tree.Finding(
        id="NEW-unheard-of",
        grade="remark",
        section="trust",
        source="",
        values={"rows": 3, "share": 0.5, "word": "x"},
    )
    found = hide(replace(whole(), findings=[finding])).findings[0]
    assert found.values == {"rows": None, "share": None, "word": "x"}


def test_the_hash_of_a_tiny_file_goes_if_anything_of_it_is_hidden() -> None:
    shape = Shape(people=30, levels=(2,), quantities=0, missing=0.0, excluded=0, event=0.4)
    tiny = tree_of(shape, rows_of(shape, 2))
    hidden = hide(tiny)
    assert hidden != tiny
    assert hidden.provenance.data_sha256 is None
    assert hidden.provenance.hidden["data_sha256"] == "derived"
    large = tree_of(replace(shape, people=90), rows_of(replace(shape, people=90, event=0.03), 2))
    assert hide(large).provenance.data_sha256 == large.provenance.data_sha256


def test_single_people_are_shown_only_where_the_rules_say_so() -> None:
    point = tree.JitteredPoint(x=1.0, y=0.0, event=False, group=None)
    full = with_value(whole(), ("outcome_by_quantity", 0, "points"), [point])
    assert hide(full).outcome_by_quantity[0].points == []
    nothing_small = replace(full, analysis=replace(full.analysis, smallest_count=0))
    assert hide(nothing_small).outcome_by_quantity[0].points == []
    asked = replace(full, analysis=replace(full.analysis, smallest_count=0, show_people=True))
    assert hide(asked) == asked
    at_odds = replace(full, analysis=replace(full.analysis, smallest_count=5, show_people=True))
    assert hide(at_odds).outcome_by_quantity[0].points == []


def test_means_lose_the_digits_that_tell_how_many_there_were() -> None:
    rounded = 0
    for seed in range(6):
        shape = Shape(people=500, levels=(2, 3), quantities=2, missing=0.006)
        truth = tree_of(shape, rows_of(shape, seed))
        hidden = hide(truth)
        assert truth.descriptives.by_outcome is not None
        assert hidden.descriptives.by_outcome is not None
        for before, after in zip(
            truth.descriptives.by_outcome.rows, hidden.descriptives.by_outcome.rows, strict=True
        ):
            if before.level is not None:
                continue
            for was, now in zip(before.groups, after.groups, strict=True):
                assert was.mean is not None
                assert now.median == was.median
                if now.total is None:
                    assert now.mean == round(was.mean, 2)
                    rounded += now.mean != was.mean
                else:
                    assert now.mean == was.mean
    assert rounded > 2


def test_the_quartiles_of_few_people_go_with_their_count() -> None:
    shape = Shape(people=60, levels=(2,), quantities=1, missing=0.0, event=0.05, excluded=0)
    truth = tree_of(shape, rows_of(shape, 4))
    assert truth.participants.events in range(1, 5)
    row = hide(truth).descriptives.by_outcome.rows[-1]
    assert row.groups[0].total is None
    assert [row.groups[0].mean, row.groups[0].median, row.groups[0].upper_quartile] == [None] * 3
    assert row.overall.median is not None


def test_few_events_in_all_leave_no_figure_of_the_fit_that_tells_them() -> None:
    full = whole()
    shape = Shape(people=60, levels=(2,), quantities=1, missing=0.0, event=0.05, excluded=0)
    few = tree_of(shape, rows_of(shape, 4))
    hidden = hide(replace(full, **{name: getattr(few, name) for name in (
        "variables", "participants", "descriptives", "tables", "estimates", "audit", "risk_distribution",
    )}, model=replace(full.model, n=few.model.n, events=few.model.events), findings=[]))  # fmt: skip
    assert hidden.participants.events is hidden.model.events is hidden.model.null_log_likelihood is None
    assert hidden.discrimination is not None
    assert hidden.discrimination.auc is None
    assert hidden.discrimination.curve == []
    assert hidden.calibration is not None
    assert hidden.calibration.groups == []
    assert hidden.outcome_by_quantity[0].bins == []
    assert hidden.sample_size is not None
    assert hidden.sample_size.events_per_parameter is None


def test_what_was_hidden_is_read_back_as_hidden() -> None:
    hidden = hide(small_table())
    assert json_file.loads(json_file.dumps(hidden)) == hidden
    found = json.loads(json_file.dumps(hidden))
    assert found["tables"][0]["a"] is None
    assert found["tables"][0]["hidden"]["a"] == "small"


def test_an_earlier_tree_is_never_changed_in_place() -> None:
    truth = small_table()
    before = json_file.dumps(truth)
    hide(truth)
    assert json_file.dumps(truth) == before
