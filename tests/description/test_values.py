"""The level written is the level meant, and a number is a number or is told how to become one.

What YAML 1.1 makes of the same text is taken from PyYAML's own safe loader, beside each check.
"""

from __future__ import annotations

from collections.abc import Callable
from datetime import date
from typing import Any

import pytest
import yaml
from hypothesis import HealthCheck, example, given, settings
from hypothesis import strategies as st

from fourfold.description import scalars
from fourfold.description.node import Written
from fourfold.description.read import Loaded
from fourfold.errors import Problem

from .studies import SMALL

Read = Callable[[str], Loaded]
Changed = Callable[..., Problem]

# The text, and what YAML 1.1 would have made of it.
TRAPS: list[tuple[str, Any]] = [
    ("no", False),
    ("No", False),
    ("yes", True),
    ("on", True),
    ("off", False),
    ("true", True),
    ("1:30", 90),
    ("22:30:00", 81000),
    ("007", 7),
    ("010", 8),
    ("0x1F", 31),
    ("0b11", 3),
    ("1_000", 1000),
    ("1.50", 1.5),
    ("2021-01-01", date(2021, 1, 1)),
    ("~", None),
    ("null", None),
    (".inf", float("inf")),
    ("+1", 1),
]


@pytest.mark.parametrize(("text", "trapped"), TRAPS)
def test_a_level_is_the_text_written(read: Read, text: str, trapped: Any) -> None:
    assert yaml.safe_load(text) == trapped
    description = read(
        SMALL.replace("levels: [North, South]", f"levels: [{text}, South], reference: {text}").replace(
            "smoker: {kind: binary, present: yes}", f"smoker: {{kind: binary, present: {text}}}"
        )
        + f"exclusions: [{{reason: r, where: {{variable: smoker, is: {text}}}}}]\n"
    ).description
    assert description.variables["ward"].levels == [text, "South"]
    assert description.variables["ward"].reference == text
    assert description.variables["smoker"].present == text
    assert description.exclusions[0].where.is_ == text


@pytest.mark.parametrize(("text", "trapped"), TRAPS)
def test_a_code_for_missing_is_the_text_written(read: Read, text: str, trapped: Any) -> None:
    assert yaml.safe_load(text) == trapped
    text_of_all = SMALL.replace("infection.csv}", f'infection.csv, missing: ["", {text}]}}').replace(
        "present: yes", "present: ja"
    )
    description = read(text_of_all).description
    assert description.data.missing == ["", text]


def test_variables_may_be_called_no_and_on(read: Read) -> None:
    text = SMALL.replace("  seen:", "  no: {kind: quantity}\n  on: {kind: quantity}\n  seen:")
    description = read(text.replace("[age, ward]", "[no, on]")).description
    assert [role.variable for role in description.covariates] == ["no", "on"]


def test_quotation_marks_change_nothing_about_a_level(read: Read) -> None:
    text = SMALL.replace("[North, South]", """["North", 'South'], reference: North""")
    assert read(text).description.variables["ward"].levels == ["North", "South"]


@given(
    text=st.text(
        st.characters(exclude_categories=("Cs", "Cc", "Zl", "Zp"), exclude_characters="\ufeff\ufffe\uffff"),
        min_size=1,
        max_size=20,
    ).filter(lambda text: bool(text.strip()))
)
@settings(deadline=None, suppress_health_check=[HealthCheck.function_scoped_fixture], max_examples=60)
@example(text="'")
@example(text='"')
@example(text="# not a comment")
@example(text=" leading and trailing ")
def test_any_quoted_level_survives(read: Read, text: str) -> None:
    if any(not character.isprintable() and not character.isspace() for character in text):
        return  # invisible characters are refused; a test of their own says so
    quoted = "'" + text.replace("'", "''") + "'"
    # No value means 'not recorded' here, so that NA is a level like any other.
    small = SMALL.replace("infection.csv}", "infection.csv, missing: []}")
    found = read(small.replace("[North, South]", f"[{quoted}, zzz zzz]")).description
    assert found.variables["ward"].levels == [text, "zzz zzz"]


@pytest.mark.parametrize(
    ("text", "value"), [("10", 10.0), ("2.5", 2.5), ("1e3", 1000.0), (".5", 0.5), ("1.", 1.0), ("5e-1", 0.5)]
)
def test_numbers(read: Read, text: str, value: float) -> None:
    # 1e3 is a text to YAML 1.1 (it wants 1.0e+3); under a key that takes a number it is meant as one.
    assert isinstance(yaml.safe_load("1e3"), str)
    description = read(SMALL.replace("{kind: quantity}", f"{{kind: quantity, per: {text}}}")).description
    assert description.variables["age"].per == value


@pytest.mark.parametrize(
    ("text", "advice"),
    [
        ("007", "without leading zeros"),
        ("010", "without leading zeros"),
        ("1:30", "in one unit"),
        ("1_000", "thousands separators"),
        ("'1,000,000'", "thousands separators"),
        ("'2,5'", "after a point"),
        ("10%", "without the percent sign"),
        ("10 years", "belongs under `unit:`"),
        ("10y", "belongs under `unit:`"),
        ('"10"', "Write 10 without quotation marks."),
        ("ten", "Write digits"),
        (".inf", "Write digits"),
        (".nan", "Write digits"),
        ("0x1F", ""),
        ("1e999", "larger than"),
        ("yes", "Write digits"),
        ("~", "Give it a value"),
        ("", "Give it a value"),
        ("[1]", ""),
        ("{a: b}", ""),
        ("2021-01-01", "Write digits"),
    ],
)
def test_what_is_no_number_is_told_how_to_become_one(changed: Changed, text: str, advice: str) -> None:
    problem = changed("{kind: quantity}", f"{{kind: quantity, per: {text}}}")
    assert problem.what.startswith("`per` expects a number; found ")
    assert advice in problem.advice
    assert problem.where is not None
    assert problem.where.line == 6


def test_a_number_may_not_be_zero_or_below(changed: Changed) -> None:
    for text in ("0", "-10"):
        problem = changed("{kind: quantity}", f"{{kind: quantity, per: {text}}}", at=f"{text}}}")
        assert "must be above 0" in problem.what


@pytest.mark.parametrize(
    ("key", "text", "said"),
    [
        ("groups", "10.5", "a whole number"),
        ("groups", "ten", "a whole number"),
        ("groups", "2", "between 3 and 1,000"),
        ("groups", "1" + "0" * 5000, "a whole number"),
        ("groups", "1e1", "a whole number"),
        ("groups", "010", "a whole number"),
    ],
)
def test_whole_numbers(refused: Any, key: str, text: str, said: str) -> None:
    problems = refused(SMALL + f"assessment: {{{key}: {text}}}\n")
    assert len(problems) == 1
    assert said in problems[0].what


@pytest.mark.parametrize(("text", "value"), [("true", True), ("yes", True), ("No", False), ("false", False)])
def test_yes_and_no_where_they_are_meant(read: Read, text: str, value: bool) -> None:
    assert read(SMALL + f"disclosure: {{hide_zero: {text}}}\n").description.disclosure.hide_zero is value


@pytest.mark.parametrize("text", ["1", "on", "y", "maybe", "~", "[true]"])
def test_no_other_word_is_yes_or_no(refused: Any, text: str) -> None:
    problems = refused(SMALL + f"disclosure: {{hide_zero: {text}}}\n")
    assert "expects true or false" in problems[0].what


@pytest.mark.parametrize(
    ("text", "advice"),
    [
        ("01/02/2021", "as in 2023-01-31"),
        ("2021-2-1", "as in 2023-01-31"),
        ("2021-02-30", "no such day"),
        ("2021", "as in 2023-01-31"),
        ("2021-01-01T00:00:00", "as in 2023-01-31"),
    ],
)
def test_dates(changed: Changed, text: str, advice: str) -> None:
    problem = changed("purpose: association", f"purpose: association, period: {{from: {text}}}")
    assert "`from` expects a date" in problem.what
    assert advice in problem.advice


def test_a_period_that_ends_before_it_begins(changed: Changed) -> None:
    period = "period: {from: 2022-01-01, to: 2021-01-01}"
    problem = changed("purpose: association", f"purpose: association, {period}", at="period")
    assert "before it begins" in problem.what


@pytest.mark.parametrize("text", ["", "~", "null", '""', '"  "'])
def test_a_key_without_a_value_is_told_to_get_one(changed: Changed, text: str) -> None:
    problem = changed("title: Wound infection in Quillmere", f"title: {text}")
    assert problem.what.startswith("`title` expects text; found ")
    assert problem.advice == "Give it a value, or remove the line."


def test_an_empty_level_is_sent_to_missing(changed: Changed) -> None:
    problem = changed("[North, South]", '[North, ""]', at='""')
    assert "`missing:`" in problem.advice


@pytest.mark.parametrize("escape", ["\\e[31m", "\\0", "\\x7f", "\\u202e", "\\ud800"])
def test_invisible_characters_are_refused_and_never_repeated(changed: Changed, escape: str) -> None:
    problem = changed("title: Wound infection in Quillmere", f'title: "Wound{escape}"')
    assert "control character" in problem.what
    assert str(problem).isascii()
    assert "\x1b" not in str(problem)


def test_names_with_escapes_do_not_reach_the_terminal(refused: Any) -> None:
    names = (r'"\e[31m": x', r'"\e[31m": {"\e[2J": [1]}', r'"\e[31m": ANSWER', r'"\e[31m": ["\e"]')
    for name in names:
        for text in (
            SMALL + name,
            SMALL.replace("  seen:", f"  {name}\n  seen:"),
            SMALL + f"report: {{{name}}}",
        ):
            for problem in refused(text):
                assert str(problem).replace("\n    ", "").isprintable()


def test_a_text_of_any_length_is_not_repeated_in_the_message(changed: Changed) -> None:
    problem = changed("kind: quantity", "kind: " + "q" * 5000)
    assert len(problem.what) < 250
    problem = changed("title: Wound infection in Quillmere", "title: " + "q" * 10_001)
    assert "10,001 characters" in problem.what


@given(st.floats(allow_nan=False, allow_infinity=False))
def test_every_float_is_read_as_it_is_printed(value: float) -> None:
    assert scalars.number(Written(repr(value), plain=True)) == value


@given(st.integers(min_value=-(10**17), max_value=10**17))
def test_every_whole_number_is_read_as_it_is_printed(value: int) -> None:
    assert scalars.whole(Written(str(value), plain=True)) == value


@given(st.dates())
def test_every_date_is_read_as_it_is_printed(value: date) -> None:
    assert scalars.day(Written(value.isoformat(), plain=True)) == value
    assert scalars.number_or_day(Written(value.isoformat(), plain=True)) == value
