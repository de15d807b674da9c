"""YAML that cannot be read is explained in plain words, where the fault is."""

from __future__ import annotations

from collections.abc import Callable

import pytest

from fourfold.errors import Problem

from .studies import SMALL

Changed = Callable[..., Problem]


@pytest.mark.parametrize(
    ("old", "new", "at", "said", "advice"),
    [
        ("title: Wound infection", "title: Wound: infection", None, "colon", "quotation marks"),
        ("kind: quantity", "kind: 'quantity", "'quantity", "quotation mark is opened", "Close it"),
        ("[North, South]", "[North, South", "[North", "bracket or brace is opened", "commas"),
        ("exposures: [smoker]", "exposures: @smoker", "@", "cannot begin with '@'", "quotation marks"),
        ("exposures: [smoker]", "exposures: `smoker`", "`", "cannot begin with '`'", "quotation marks"),
        ("kind: quantity", "unit: %, kind: quantity", "%", "cannot begin with '%'", '"%"'),
        ("[North, South]", "[<65, >65]", ">65", "cannot begin with '>'", "quotation marks"),
        ("outcome: infection", "outcome: >65", "65\n", "cannot begin with '>'", '">65"'),
        ("outcome: infection", "outcome: *", "*", "cannot begin with '*'", "quotation marks"),
        ("outcome: infection", 'outcome: "a\\data"', 'data"', "backslash", "'...'"),
        ("outcome: infection", 'outcome: "a" b', "b\n", "does not fit", "quotation mark"),
        ("outcome: infection", "outcome: - infection", "- infection", "dash", "line of its own"),
        ("outcome: infection", "outcome:infection", "outcome:", "without its colon", "space after the colon"),
        ("variables:\n", "variables\n", "variables", "without its colon", "space after the colon"),
        ("study:\n", "study\n", "study", "has no colon", "Write `study:`."),
        ("outcome: infection", "% outcome", "", "cannot begin with '%'", "#"),
    ],
)
def test_each_slip_has_its_words(
    changed: Changed, old: str, new: str, at: str | None, said: str, advice: str
) -> None:
    # Written in block style, where a person meets these.
    text = SMALL.replace("study: {title: ", "study:\n  title: ").replace(
        ", design: cohort, purpose: association}", "\n  design: cohort\n  purpose: association"
    )
    problem = changed(old, new, None, text)
    assert said in problem.what
    assert advice in problem.advice
    if at and at.strip():
        altered = text.replace(old, new, 1)
        assert problem.where is not None
        assert problem.where.line == altered.count("\n", 0, altered.index(new) + new.index(at.strip())) + 1


def test_a_comma_inside_an_unquoted_label(changed: Changed) -> None:
    problem = changed("age: {kind", "age: {label: Age, in years, kind", at="in years")
    assert "`in years` is not a known key" in problem.what
    assert 'label: "Age, years"' in problem.advice


def test_a_missing_space_after_the_colon_in_braces(changed: Changed) -> None:
    problem = changed("{kind: quantity}", "{kind: quantity, unit:years}", at="unit:years")
    assert "Put a space after the colon" in problem.advice


def test_a_list_or_nothing_in_place_of_a_key(changed: Changed) -> None:
    assert "list or mapping" in changed("{kind: quantity}", "{kind: quantity, [a]: b}", at="[a]").what
    assert "missing before the colon" in changed("outcome: infection", 'outcome: infection\n"": b').what
