"""The catalogue as a whole: one list of ids everywhere, order, sources, and trees that lack parts."""

from __future__ import annotations

from dataclasses import fields, is_dataclass, replace
from typing import Any

import pytest
from tests.findings import alter
from tests.findings.test_cases import CASES, FIRES
from tests.findings.trees import Build, sound_study

from fourfold.findings import release
from fourfold.findings.catalogue import CATALOGUE, notice
from fourfold.findings.entry import GRADES, SECTIONS
from fourfold.report.assets import language_file
from fourfold.results import json_file, tree


def test_the_same_ids_are_catalogued_worded_and_tested_both_ways():
    assert set(CATALOGUE) == set(language_file("en", "findings")) == set(CASES)
    assert len(CATALOGUE) >= 40
    assert all(case.fires and case.silent for case in CASES.values())


def test_a_sound_study_gives_nothing_at_all():
    assert notice(sound_study()) == []


def test_a_sound_prediction_study_is_told_only_what_it_lacks():
    # Nothing validates a model on the data it was fitted to, and no answer about groups is stated.
    found = {finding.id for finding in notice(alter.prediction()) if finding.grade != "remark"}
    assert found == {"AUC-apparent", "VAL-none"}


def test_a_sound_case_control_study_is_told_only_how_to_read_it():
    assert [finding.id for finding in notice(alter.case_control())] == ["OR-case-control-risk"]


def test_serious_first_then_concerns_then_remarks():
    results = alter.variable("age", alter.analysis(selection="stepwise"), reason=None, unit=None)
    found = notice(results)
    assert [finding.grade for finding in found] == ["serious", "concern", "remark"]


@pytest.mark.parametrize("entry", CATALOGUE.values(), ids=lambda entry: entry.id)
def test_each_has_a_section_of_the_report_and_a_source(entry):
    assert entry.section in SECTIONS
    # A publication has a year; what is mere practice says so.
    assert any(f"{year}" in entry.source for year in range(1950, 2027)) or "common practice" in entry.source


def test_ids_are_unique_over_the_files():
    from fourfold.findings import catalogue

    ids = [entry.id for stage in catalogue._STAGES for entry in stage.ENTRIES]
    assert len(ids) == len(set(ids)) == len(CATALOGUE)


@pytest.mark.parametrize(("id", "build", "grade"), FIRES)
def test_values_survive_the_results_file(id: str, build: Build, grade: str):
    results = build()
    results = replace(results, findings=notice(results))
    assert json_file.loads(json_file.dumps(results)) == results


@pytest.mark.parametrize(
    ("items", "standard"),
    [
        (release.STROBE_BY_AUTHOR, "checklist-strobe"),
        (release.TRIPOD_BY_AUTHOR, "checklist-tripod"),
    ],
)
def test_items_left_to_the_authors_are_items_of_the_checklist_that_ask_the_author(items, standard):
    by_author = {str(one["item"]) for one in language_file("en", standard)["items"] if "author" in one}
    assert set(items) <= by_author


def emptied(value: Any) -> Any:
    """The same tree with every number that may be hidden gone."""
    if is_dataclass(value) and not isinstance(value, type):
        changes: dict[str, Any] = {}
        for item in fields(value):
            inside = getattr(value, item.name)
            optional = "None" in str(item.type) and isinstance(inside, int | float)
            changes[item.name] = None if optional and not isinstance(inside, bool) else emptied(inside)
        return replace(value, **changes)
    if isinstance(value, list):
        return [emptied(item) for item in value]
    if isinstance(value, dict):
        return {name: None if isinstance(item, int | float) else item for name, item in value.items()}
    return value


@pytest.mark.parametrize(("id", "build", "grade"), FIRES)
def test_no_rule_fails_where_numbers_are_hidden(id: str, build: Build, grade: str):
    for finding in notice(emptied(build())):
        assert finding.grade in GRADES


def bare(design: str, purpose: str) -> tree.Results:
    """As much of a tree as an audit makes: no fit, and nothing that needs one."""
    found = sound_study()
    none: Any = None
    return replace(
        found,
        study=replace(found.study, design=design, purpose=purpose),
        tables=[],
        estimates=tree.Estimates(),
        term_tests=[],
        model=replace(found.model, parameters=[], terms=[], coefficients=[], coding=[], n=none, events=none),
        discrimination=None,
        calibration=None,
        sample_size=None,
        influence=None,
        collinearity=None,
        outcome_by_quantity=[],
        audit=tree.Audit(),
        descriptives=tree.Descriptives(),
    )


@pytest.mark.parametrize("design", ["cohort", "case-control", "cross-sectional", "survey"])
@pytest.mark.parametrize("purpose", ["association", "prediction"])
def test_no_rule_fails_before_anything_is_fitted(design: str, purpose: str):
    # Nothing is held against a model that is not there.
    families = {finding.id.partition("-")[0] for finding in notice(bare(design, purpose))}
    assert not families & {"SEP", "EST", "LIN", "COL", "INF", "CAL", "AUC", "VAL", "EQN", "FAIR", "SIZ"}
