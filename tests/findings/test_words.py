"""Findings in words: whole sentences with their numbers, also where counts are hidden."""

from __future__ import annotations

import re
from dataclasses import replace
from typing import Any

import pytest
from tests.findings import alter, cases_fit, cases_reading, cases_rows
from tests.findings.test_cases import FIRES
from tests.findings.trees import Build

from fourfold.findings import catalogue
from fourfold.report.findings_words import FindingWords
from fourfold.report.wording import finding_texts
from fourfold.results import tree

UNSOUND = re.compile(
    # What a template leaves when a value or a word is missing, or white space is wrong.
    r"None|\bnan\b|\binf\b|undefined|Withheld|[{}%]{2}|—|  | [,.;:)]|\( |\(\)|\.\.|;\.|,\.|:\.|: ?$|hidden%"
)
GRAMMAR = re.compile(
    r"\b1 (?:rows|values|times|people|events|steps|groups|parameters|candidate parameters)\b"
    r"|\b(?:0|[2-9]|\d{2,}) (?:row|value|time|person|event|step|group) "
)


def words(results: tree.Results, finding: tree.Finding) -> FindingWords:
    ((_, told),) = finding_texts(replace(results, findings=[finding]))
    return told


def text_of(id: str, results: tree.Results) -> str:
    (finding,) = catalogue.CATALOGUE[id].notice(results)
    return words(results, finding).text


def check(told: FindingWords) -> None:
    for part in (told.text, told.action):
        # What is quoted is the authors' words, or a key of the description.
        part = re.sub(r"“[^”]*”", "“x”", part)
        assert not UNSOUND.search(part), part
        assert not GRAMMAR.search(part), part
        assert part.endswith((".", ".”")), part
        # Every sentence begins with a capital, a number or a quotation.
        for sentence in re.split(r"(?<=[a-z)”]\.) ", part):
            assert sentence[0].isupper() or sentence[0].isdigit() or sentence[0] == "“", part
    assert not UNSOUND.search(told.title), told.title
    assert told.title[0].isupper()
    assert not told.title.endswith((".", ":"))
    assert len(told.text) > 30
    assert len(told.action) > 15


@pytest.mark.parametrize(("id", "build", "grade"), FIRES)
def test_words_are_whole_sentences(id: str, build: Build, grade: str):
    results = build()
    (finding,) = catalogue.CATALOGUE[id].notice(results)
    check(words(results, finding))


@pytest.mark.parametrize("reason", ["small", "subtraction", "derived"])
@pytest.mark.parametrize(("id", "build", "grade"), FIRES)
def test_words_are_whole_sentences_where_numbers_are_hidden(id: str, build: Build, grade: str, reason: str):
    results = build()
    (finding,) = catalogue.CATALOGUE[id].notice(results)
    hidden = finding
    for path, value, kind in catalogue.sensitive(finding):
        if value is not None:
            hidden = catalogue.replace(hidden, path, None, reason if kind == "count" else "derived")
    told = words(results, hidden)
    check(told)
    for path, value, kind in catalogue.sensitive(finding):
        # Single digits stand in labels, items and limits too; three digits and more are counts only.
        if kind == "count" and isinstance(value, int) and value >= 100:
            assert f"{value:,}" not in told.text, (path, told.text)


def hide_all(id: str, results: tree.Results, reason: str) -> str:
    (finding,) = catalogue.CATALOGUE[id].notice(results)
    for path, _, _ in catalogue.sensitive(finding):
        finding = catalogue.replace(finding, path, None, reason)
    return words(results, finding).text


def test_one_row_and_many_rows():
    assert text_of("DAT-duplicates", alter.people(duplicated_identifiers=1)).startswith("1 row repeats an")
    assert text_of("DAT-duplicates", alter.people(duplicated_identifiers=1400)).startswith(
        "1,400 rows repeat an"
    )


def test_a_hidden_count_is_said_to_be_hidden():
    results = alter.people(duplicated_identifiers=3)
    assert hide_all("DAT-duplicates", results, "small").startswith("Fewer than 5 rows repeat an")
    assert hide_all("DAT-duplicates", results, "subtraction").startswith("A hidden number of rows repeat an")


def test_a_hidden_extreme_value_is_not_told():
    text = hide_all("DAT-implausible", cases_rows.implausible(0, 3), "small")
    assert "412" not in text
    assert "fewer than 5 values above 100" in text


def test_the_arrow_from_odds_to_risks_has_both_numbers():
    # Zhang & Yu 1998: an odds ratio of 3.5 at 30% is a risk ratio of 2.
    text = text_of("OR-not-risk", cases_reading.common(3.5, (540, 1260)))
    assert "the odds are 3.50 times as high" in text
    assert "30% of the unexposed" in text
    assert "risk about 2.00 times as high" in text
    cross = text_of("OR-not-risk", cases_reading.common(3.5, (540, 1260), design="cross-sectional"))
    assert "prevalence about 2.00 times" in cross
    assert "risk" not in cross


def test_separation_is_told_by_its_cell_and_its_bound():
    text = text_of("SEP-infinite", cases_fit.separated("stove", "separated upward", 40, 40, lower=7.5))
    assert "all 40 people in the group “yes” had the event" in text
    assert "odds ratios from 7.50 up" in text
    text = text_of("SEP-infinite", cases_fit.separated("village", "separated downward", 0, 31, upper=0.6))
    assert text.startswith("Village “Lower”: none of the 31 people in the group “Lower” had the event")
    assert "odds ratios up to 0.60" in text


def test_the_authors_words_are_quoted():
    text = text_of("CAU-words", alter.study(title="The effect of wood stoves on coughing"))
    assert "“effect of”" in text


def test_what_the_authors_write_is_never_read_as_a_template():
    title = "Effect of {{ 7 * 7 }} stoves"
    results = alter.variable("stove", alter.study(title=title), label="{% raw %} harmful {{ 1 }}")
    assert "49" not in text_of("CAU-words", results)


@pytest.mark.parametrize(
    ("change", "title"),
    [
        ({"setting": None}, "Where is not stated"),
        ({"period_from": None, "period_to": None}, "When is not stated"),
        ({"setting": None, "period_from": None, "period_to": None}, "Where and when is not stated"),
    ],
)
def test_what_is_not_stated_is_named(change: dict[str, Any], title: str):
    results = alter.study(**change)
    (finding,) = catalogue.CATALOGUE["REP-where-when"].notice(results)
    assert words(results, finding).title == title
