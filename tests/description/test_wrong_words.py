"""Unknown keys and words: where they stand, the nearest right one, or what to do instead."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

import pytest

from fourfold.description import later
from fourfold.description.outline import below, outline
from fourfold.errors import Problem

from .studies import FULL, SMALL

Changed = Callable[..., Problem]


@pytest.mark.parametrize(
    ("old", "new", "hint"),
    [
        ("covariates:", "covariate:", "Did you mean `covariates`?"),
        ("kind: date", "knid: date, kind: date", "Did you mean `kind`?"),
        ("kind: date", "from_: age, kind: date", "Did you mean `from`?"),
        ("file:", "File:", "Did you mean `file`?"),
        (
            "{file: wound-infection.csv}",
            "{file: wound-infection.csv, missng: [9]}",
            "Did you mean `missing`?",
        ),
    ],
)
def test_a_misspelt_key_names_the_nearest(refused: Any, old: str, new: str, hint: str) -> None:
    problems = refused(SMALL.replace(old, new, 1))
    assert any(problem.advice == hint and "is not a known key" in problem.what for problem in problems)


def test_a_key_in_the_wrong_section_is_sent_to_the_right_one(changed: Changed) -> None:
    problem = changed("{file: wound-infection.csv}", "{file: wound-infection.csv, title: x}", at="title: x")
    assert problem.advice == "It belongs under `study`."
    problem = changed("outcome: infection", "outcome: infection\nconfidence: 90", at="confidence")
    assert problem.advice == "It belongs under `analysis`."
    problem = changed("kind: date", "kind: date, outcome: x", at="outcome: x")
    assert problem.advice == "It belongs at the top of the description, not indented."


def test_a_strange_key_is_shown_the_known_ones(changed: Changed) -> None:
    problem = changed("outcome: infection", "outcome: infection\nzzz: 1", at="zzz")
    assert problem.advice.startswith("Known keys here: study, data, variables, outcome")


@pytest.mark.parametrize(
    ("old", "new", "hint"),
    [
        ("design: cohort", "design: Cohort", "Did you mean 'cohort'?"),
        ("design: cohort", "design: case control", "Did you mean 'case-control'?"),
        ("purpose: association", "purpose: asociation", "Did you mean 'association'?"),
        ("kind: quantity", "kind: quantitiy", "Did you mean 'quantity'?"),
        ("kind: quantity", "kind: continuous", "Write `kind: quantity`."),
        ("kind: category,", "kind: nominal,", "Write `kind: category`."),
        ("kind: quantity", "kind: quantity, shape: spline", "Write `shape: {spline: {knots: 4}}`."),
        ("kind: quantity", "kind: quantity, shape: {spline: 4}", "Write `spline: {knots: 4}`."),
        ("kind: quantity", "kind: quantity, shape: quadratc", "Did you mean 'quadratic'?"),
        ("exposures: [smoker]", "exposures: smoker", "Write `exposures: [smoker]`."),
        ("kind: quantity", "kind: quantity, plausible: 18", "Write them as [18, 105]."),
        ("kind: quantity", "kind: quantity, plausible: [1, 2, 3]", "Write them as [18, 105]."),
    ],
)
def test_a_wrong_word_or_kind_has_its_mend(changed: Changed, old: str, new: str, hint: str) -> None:
    assert changed(old, new).advice == hint


@pytest.mark.parametrize(("where", "word"), later.WORDS)
def test_words_not_acted_on_say_what_to_do_instead(
    changed: Changed, where: tuple[str, str], word: str
) -> None:
    section, key = where
    fields = {"design": "cohort", "purpose": "association"}
    if key in fields:
        problem = changed(f"{key}: {fields[key]}", f"{key}: {word}", at=f"{word}")
    else:
        problem = changed("outcome: infection", f"outcome: infection\n{section}: {{{key}: {word}}}", at=word)
    assert "is not done by this version" in problem.what
    assert problem.advice == later.WORDS[where, word]
    # They are no accepted words, and what is advised is.
    assert word not in outline()[where].words


@pytest.mark.parametrize(("section", "key"), later.KEYS)
def test_keys_not_acted_on_say_what_to_do_instead(
    changed: Changed, section: tuple[str, ...], key: str
) -> None:
    inner = f"{key}: {{a: b}}"
    text = inner if not section else f"{section[0]}: {{{inner}}}"
    problem = changed("outcome: infection", f"outcome: infection\n{text}", at=inner)
    assert "not a key that this version acts on" in problem.what
    assert problem.advice == later.KEYS[section, key]
    assert key not in below(section)


def test_missing_keys_say_what_they_are_for(refused: Any) -> None:
    problems = refused("variables: {}\n")
    said = [problem.what for problem in problems]
    assert any(what.startswith("The key `study` is missing at the top") for what in said)
    assert any(what.startswith("The key `data` is missing at the top") for what in said)
    assert any(what.startswith("The key `outcome` is missing at the top") for what in said)
    assert all("fourfold keys" in problem.advice for problem in problems)


def test_a_missing_key_of_a_section_points_at_the_section(changed: Changed) -> None:
    problem = changed("design: cohort, ", "", at="study:")
    assert "The key `design` is missing under `study`." in problem.what
    assert "cohort, case-control, cross-sectional or survey" in problem.what
    text = FULL.replace("{reason: Under 18, where:", "{where:")
    problem = changed("Under", "Under", at="{where:", text=text) if "Under" in text else None
    assert problem is None or "`reason`" in problem.what


@pytest.mark.parametrize(
    ("new", "said"),
    [
        ("knots: 2", "must be 3 to 7; found 2"),
        ("knots: 8", "must be 3 to 7; found 8"),
        ("knots: [1, 2]", "must be 3 to 7; found 2"),
        ("knots: [1, 3, 2]", "must increase from left to right; 2 follows 3"),
        ("knots: [1, 2, 2]", "must increase from left to right; 2 follows 2"),
        ("knots: [1, two, 3]", "`knots` (item 2) expects a number; found 'two'"),
        ("knots: four", "expects a whole number; found 'four'"),
    ],
)
def test_knots(changed: Changed, new: str, said: str) -> None:
    problem = changed("{kind: quantity}", f"{{kind: quantity, shape: {{spline: {{{new}}}}}}}")
    assert said in problem.what


@pytest.mark.parametrize(
    ("old", "new", "said"),
    [
        ("{kind: quantity}", "{kind: quantity, plausible: [105, 18]}", "must give the lowest value first"),
        ("{kind: quantity}", "{kind: quantity, plausible: [18, 18]}", "must give the lowest value first"),
        ("[North, South]", "[North, South, North]", "lists 'North' twice"),
        ("[North, South]", "[North]", "lists one level only"),
        ("{kind: quantity}", "{kind: quantity, compare: [[25, 25]]}", "two different values"),
        ("infection.csv}", "infection.csv, delimiter: ;;}", "comma, semicolon, tab or bar"),
        ("infection.csv}", "infection.csv, encoding: utf-9}", "no known encoding: 'utf-9'"),
        ("infection.csv}", "infection.csv, encoding: zlib}", "no known encoding: 'zlib'"),
        ("outcome:", "report: {formats: []}\noutcome:", "`formats` is an empty list"),
        ("outcome:", "report: {formats: [html, html]}\noutcome:", "names a format twice"),
        ("outcome:", "report: {formats: [docx]}\noutcome:", "expects 'html' or 'pdf'; found 'docx'"),
        ("outcome:", "analysis: {confidence: 100}\noutcome:", "above 50 and below 100; found 100"),
        ("outcome:", "analysis: {seed: -1}\noutcome:", "must lie between 0"),
        (
            "outcome:",
            "follow_up: {statement: [equal, censored]}\noutcome:",
            "says both 'equal' and 'censored'",
        ),
        ("kind: quantity}", "kind: quantity, reference: tall}", "`reference` expects a number"),
    ],
)
def test_values_that_cannot_be_meant(changed: Changed, old: str, new: str, said: str) -> None:
    assert said in changed(old, new).what


def test_a_share_in_place_of_a_percentage(changed: Changed) -> None:
    assert changed("outcome:", "analysis: {confidence: 0.9}\noutcome:").advice == "Write 90."


def test_the_open_questions_of_a_draft_are_listed_and_nothing_else(refused: Any) -> None:
    text = (
        SMALL.replace("Wound infection in Quillmere", "ANSWER")
        .replace("cohort", "ANSWER")
        .replace("outcome: infection", "outcome: ANSWER")
        .replace("[smoker]", "[ANSWER]")
        .replace("present: yes", "present: ANSWER", 1)
        .replace("[North, South]", '["ANSWER", South]')  # quoted: a level of that name
    )
    problems = refused(text)
    assert [problem.what.split("`")[1] for problem in problems] == [
        "title",
        "design",
        "present",
        "outcome",
        "exposures",
    ]
    for problem in problems:
        assert "is still to be answered" in problem.what
        line = text.splitlines()[problem.where.line - 1]
        assert line[problem.where.column - 1 :].startswith("ANSWER")


def test_all_errors_come_at_once_and_in_order(refused: Any) -> None:
    text = (
        SMALL.replace("design: cohort", "design: kohort")
        .replace("wound-infection.csv", "wound.csv")
        .replace("{kind: binary, present: yes}", "{kind: binary, presnt: yes}")
        .replace("kind: quantity", "kind: quantity, per: 007")
        .replace("[age, ward]", "[age, wrad, seen]")
        + "outcome: smoker\n"
    )
    problems = refused(text)
    said = "\n".join(problem.what for problem in problems)
    for part in (
        "`design` expects",
        "no data file 'wound.csv'",
        "`presnt` is not a known key",
        "`per` expects a number",
        "'wrad', which is not a described variable",
        "'seen' is a date",
        "already given",
    ):
        assert part in said
    lines = [problem.where.line for problem in problems]
    assert lines == sorted(lines)
