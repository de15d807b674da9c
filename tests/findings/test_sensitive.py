"""Which values of a finding may have to be hidden, and hiding them one at a time."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import replace

import pytest
from tests.findings import alter, cases_fit, cases_rows
from tests.findings.test_cases import FIRES
from tests.findings.trees import Build

from fourfold.findings import catalogue, places
from fourfold.findings.catalogue import CATALOGUE, Sensitive
from fourfold.report import disclosure
from fourfold.results import tree

# Whole numbers that count no people: parameters, bands, groups of risk, exposures, and limits that
# the description or a rule sets.
NO_PEOPLE = {
    "parameters", "bands", "groups",  "exposures", "limit", "wanted", "candidates", "fitted",
    "iterations",
}  # fmt: skip


def finding(id: str, values: dict[str, object]) -> tree.Finding:
    return tree.Finding(id=id, grade="remark", section="trust", values=values, source="")


@pytest.mark.parametrize(("id", "build", "grade"), FIRES)
def test_every_count_of_people_is_declared(id: str, build: Build, grade: str):
    (found,) = CATALOGUE[id].notice(build())
    declared = {one.path for one in catalogue.sensitive(found)}
    for path, value in places.numbers(found.values):
        if isinstance(value, int) and path not in declared:
            assert path[-1] in NO_PEOPLE, (path, value)


@pytest.mark.parametrize("entry", CATALOGUE.values(), ids=lambda entry: entry.id)
def test_every_declared_place_exists_in_some_case(entry):
    found = [one for id, build, _ in (case.values for case in FIRES) if id == entry.id
             for one in entry.notice(build())]  # fmt: skip
    for pattern in (*entry.counts, *entry.derived):
        assert any(list(places.paths(one.values, pattern)) for one in found), pattern


def test_counts_of_items_are_found_one_by_one():
    (found,) = CATALOGUE["DAT-implausible"].notice(cases_rows.implausible(7, 12))
    assert catalogue.sensitive(found) == [
        Sensitive(("found", 0, "below"), 7, "count"),
        Sensitive(("found", 0, "above"), 12, "count"),
        Sensitive(("found", 0, "lowest"), -3.0, "derived"),
        Sensitive(("found", 0, "highest"), 412.0, "derived"),
    ]


def test_replacing_one_place_leaves_the_finding_as_it_was():
    (found,) = CATALOGUE["DAT-implausible"].notice(cases_rows.implausible(7, 12))
    hidden = catalogue.replace(found, ("found", 0, "below"), None, "small")
    assert hidden.values["found"][0]["below"] is None
    assert hidden.values["found"][0]["above"] == 12
    assert hidden.hidden == {"found[0].below": "small"}
    assert found.values["found"][0]["below"] == 7
    assert found.hidden == {}


def test_replacing_without_a_reason_hides_nothing():
    (found,) = CATALOGUE["DAT-implausible"].notice(cases_rows.implausible(7, 12))
    assert catalogue.replace(found, ("found", 0, "below"), 8).hidden == {}


def test_of_an_unknown_finding_every_number_is_sensitive():
    found = finding("NEW-thing", {"a": 3, "b": 0.5, "c": True, "d": [{"e": 7, "f": "x"}], "g": None})
    assert catalogue.sensitive(found) == [
        Sensitive(("a",), 3, "count"),
        Sensitive(("b",), 0.5, "derived"),
        Sensitive(("d", 0, "e"), 7, "count"),
    ]


def test_a_value_that_is_not_there_is_no_place():
    assert catalogue.sensitive(finding("DAT-implausible", {"found": None})) == []
    assert catalogue.sensitive(finding("DAT-implausible", {})) == []
    assert list(places.paths({"counts": [1, 2]}, "counts[]")) == [("counts", 0), ("counts", 1)]
    assert list(places.paths({"counts": 3}, "counts[].n")) == []


def test_places_as_text():
    assert places.written(("found", 0, "count")) == "found[0].count"
    assert places.written(("rows",)) == "rows"
    assert places.written(("groups", 2, 1)) == "groups[2][1]"


def numbers(results: tree.Results, id: str) -> Iterator[int | float]:
    for one in results.findings:
        if one.id == id:
            yield from (value for _, value in places.numbers(one.values))


def noticed(results: tree.Results) -> tree.Results:
    return replace(results, findings=catalogue.notice(results))


def test_the_hiding_pass_reaches_into_lists_of_findings():
    results = noticed(cases_rows.implausible(0, 3))
    hidden = disclosure.hide(results)
    assert {3, 412.0} <= set(numbers(results, "DAT-implausible"))
    assert not {3, 412.0} & set(numbers(hidden, "DAT-implausible"))


def test_the_hiding_pass_reaches_a_separated_group():
    # Four people, all with the event.
    results = noticed(cases_fit.separated("village", "separated upward", 4, 4, lower=1.2))
    assert 4 in set(numbers(results, "SEP-infinite"))
    assert 4 not in set(numbers(disclosure.hide(results), "SEP-infinite"))


def test_figures_that_the_report_still_shows_are_not_hidden_in_a_finding():
    # A level of four people is hidden; the size of the sample and the model's shrinkage are not.
    results = alter.prediction(alter.size(shrinkage=0.79, required=3200, shortfall=200))
    level = tree.SparseLevel(variable="village", level="Far", events=3, non_events=1, reference=False)
    results = replace(results, audit=replace(results.audit, levels=[*results.audit.levels, level]))
    hidden = disclosure.hide(noticed(results))
    assert hidden.sample_size is not None
    assert hidden.sample_size.shrinkage == 0.79
    assert 0.79 in set(numbers(hidden, "SIZ-shrinkage"))
    assert {3200, 200} <= set(numbers(hidden, "SIZ-riley"))
    assert not {3, 1} & set(numbers(hidden, "COD-sparse-level"))
