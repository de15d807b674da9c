"""Parts of a description that contradict each other are told apart, at the place to mend."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

import pytest

from fourfold.description.read import Loaded
from fourfold.errors import Problem

from .studies import SMALL

Read = Callable[[str], Loaded]
Changed = Callable[..., Problem]


@pytest.mark.parametrize(
    ("old", "new", "at", "said", "advice"),
    [
        # the outcome
        ("outcome: infection", "outcome: infektion", "infektion", "not a described variable", "'infection'"),
        (
            "outcome: infection",
            "outcome: seen",
            "seen\nexp",
            "is of kind: date; an outcome is binary",
            "binary",
        ),
        # roles
        ("exposures: [smoker]", "exposures: [smokre]", "smokre", "not a described variable", "'smoker'"),
        ("[age, ward]", "[age, zzz]", "zzz]", "`covariates` names 'zzz'", "Describe it"),
        ("[age, ward]", "[age, {variable: wad}]", "wad}", "`covariates` names 'wad'", "'ward'"),
        (
            "[age, ward]",
            "[smoker, age]",
            "smoker, age]",
            "is an exposure already; a variable has one role",
            "one of",
        ),
        ("[age, ward]", "[age, infection]", "infection]", "is the outcome already", "one of"),
        ("[age, ward]", "[age, age]", "age]\n", "listed twice under `covariates:`", "one of"),
        ("[age, ward]", "[age, seen]", "seen]", "dates never enter a model", "quantity"),
        # purpose
        ("exposures: [smoker]\n", "", "association", "needs `exposures:`", "`exposures:`"),
        ("exposures: [smoker]", "exposures: []", "exposures", "needs `exposures:`", "`exposures:`"),
        ("exposures: [smoker]", "predictors: [smoker]", "predictors", "does not go with", "`exposures:`"),
        # kinds and their keys
        ("{kind: date}", "{label: Seen}", "seen:", "has no `kind:`", "kind: quantity"),
        ("{kind: quantity}", "{kind: binary}", "age:", "no `present:`", "present:"),
        ("{kind: date}", "{kind: date, per: 10}", "per", "`per` does not go with kind: date", ""),
        (
            "kind: category,",
            "kind: category, unit: cm,",
            "unit",
            "`unit` does not go with kind: category",
            "",
        ),
        ("kind: category,", "kind: category, per: 2,", "per", "it belongs to quantity", "kind"),
        ("{kind: quantity}", "{kind: quantity, levels: [a, b]}", "levels: [a", "does not go with", "`cut:`"),
        (
            "{kind: quantity}",
            "{kind: quantity, present: yes}",
            "present: yes}\n  ward",
            "does not go with",
            "",
        ),
        ("{kind: date}", "{kind: date, shape: log2}", "shape", "`shape` does not go with kind: date", ""),
        ("{kind: quantity}", "{kind: quantity, shape: log2, per: 2}", "per", "shape: log2", "per doubling"),
        (
            "{kind: quantity}",
            "{kind: quantity, shape: {spline: {}}, per: 2}",
            "per",
            "shape: spline",
            "compare",
        ),
        ("{kind: quantity}", "{kind: quantity, cut_chosen: beforehand}", "cut_chosen", "without `cut:`", ""),
        # levels, reference, missing
        ("[North, South]", "[North, South], reference: north", "north}", "not among the levels", "'North'"),
        (
            "[North, South]",
            "[North, South], reference: East",
            "East}",
            "not among the levels",
            "North, South",
        ),
        (
            "[North, South]",
            "[North, South], missing: [South]",
            "South], miss",
            "'not recorded'",
            "variable's",
        ),
        (
            "infection.csv}",
            "infection.csv, missing: [South]}",
            "South]}\n  seen",
            "'not recorded'",
            "`data:`",
        ),
        (
            "{kind: quantity}",
            "{kind: quantity, plausible: [18, 105], reference: 5}",
            "5}",
            "lies outside `plausible` (18 to 105)",
            "Correct",
        ),
        (
            "{kind: binary, present: yes}\n  smoker",
            "{kind: binary, levels: [a, b, c], present: a}\n  smoker",
            "levels: [a",
            "a binary variable has two",
            "category",
        ),
        (
            "{kind: binary, present: yes}\n  smoker",
            "{kind: binary, levels: [No, Yes], present: yes}\n  smoker",
            "yes}\n  smoker",
            "not among the levels",
            "'Yes'",
        ),
        # bands
        ("{kind: date}", "{from: aeg, cut: [50]}", "aeg", "`from` names 'aeg'", "'age'"),
        ("{kind: date}", "{from: ward, cut: [50]}", "ward, cut", "'ward' is of kind: category", "quantity"),
        ("{kind: date}", "{from: seen, cut: [50]}", "seen, cut", "is cut into bands itself", "quantity"),
        ("{kind: date}", "{from: age}", "seen:", "need the values at which they are cut", "cut: [50"),
        ("{kind: date}", "{from: age, cut: []}", "cut", "need the values at which they are cut", "cut: [50"),
        ("{kind: date}", "{cut: [50]}", "cut", "without `from:`", "from:"),
        ("{kind: date}", "{from: age, cut: [65, 50]}", "cut", "must increase", "order"),
        ("{kind: date}", "{from: age, cut: [50, 50]}", "cut", "must increase", "order"),
        (
            "{kind: date}",
            "{from: age, cut: [50], kind: quantity}",
            "quantity}\noutcome",
            "cannot be of kind",
            "",
        ),
        ("{kind: date}", "{from: age, cut: [50], levels: [a, b]}", "levels: [a", "go with bands", "`cut:`"),
        ("{kind: date}", "{from: age, cut: [50], column: X}", "column", "go with bands", "`from:`"),
        # dates of measurement
        ("{kind: quantity}", "{kind: quantity, dated_by: sen}", "sen}", "`dated_by` names 'sen'", "'seen'"),
        ("{kind: quantity}", "{kind: quantity, dated_by: ward}", "ward}", "which is no date", "kind: date"),
        # follow-up, counts
        ("outcome:", "follow_up: {variable: agee}\noutcome:", "agee", "`follow_up.variable` names", "'age'"),
        ("outcome:", "follow_up: {variable: ward}\noutcome:", "ward}", "is no quantity", "follow-up"),
        ("infection.csv}", "infection.csv, counts: age}", "age, ward]", "also holds the `counts:`", "counts"),
        (
            "kind: quantity",
            "label: Const, kind: quantity}\n  (intercept): {kind: date",
            "(inter",
            "constant",
            "",
        ),
    ],
)
def test_each_contradiction(changed: Changed, old: str, new: str, at: str, said: str, advice: str) -> None:
    problem = changed(old, new, at)
    assert said in problem.what
    assert advice in problem.advice


def test_a_column_name_is_answered_with_the_variables_name(changed: Changed) -> None:
    text = SMALL.replace("{kind: quantity}", "{kind: quantity, column: AGE_YRS}")
    problem = changed("[age, ward]", "[AGE_YRS, ward]", "AGE_YRS, ward", text=text)
    assert problem.advice == "Its name in the description is 'age'."


def test_prediction_takes_predictors_alone(refused: Any, read: Read) -> None:
    text = SMALL.replace("purpose: association", "purpose: prediction")
    said = [problem.what for problem in refused(text)]
    assert said == [
        "`exposures` does not go with purpose: prediction.",
        "`covariates` does not go with purpose: prediction, where every variable of the model is a "
        "predictor.",
    ]
    bare = text.replace("exposures: [smoker]\ncovariates: [age, ward]\n", "")
    assert "needs `predictors:`" in refused(bare)[0].what
    described = read(bare + "predictors: [smoker, age, ward]\n").description
    assert [role.variable for role in described.predictors] == ["smoker", "age", "ward"]


@pytest.mark.parametrize(
    ("condition", "at", "said"),
    [
        ("{variable: age}", "{variable: age}", "holds no test"),
        ("{variable: age, below: 18, above: 90}", "{variable: age", "2 tests (below, above)"),
        ("{below: 18}", "{below", "names no variable"),
        ("{variable: age, all: [{variable: age, below: 3}]}", "{variable: age, all", "beside `all:`"),
        ("{all: []}", "{all", "empty `all:`"),
        ("{any: []}", "{any", "empty `any:`"),
        ("{variable: ward, in: []}", "{variable: ward", "empty `in:`"),
        ("{variable: ward, in: North}", "North}", "`in` expects a list"),
        ("{variable: aeg, below: 18}", "aeg", "'aeg', which is not a described variable"),
        ("{variable: age, bellow: 18}", "bellow", "`bellow` is not a known key"),
        ("{variable: age, below: 2021-01-01}", "2021", "compares 'age', a quantity, with '2021-01-01'"),
        ("{variable: seen, above: 18}", "18}", "compares 'seen', a date, with '18"),
        ("{variable: ward, below: 18}", "18}", "has levels such as 'North'"),
        ("{variable: smoker, above: 0}", "0}", "is of kind: binary"),
        ("{variable: ward, is: north}", "north", "'north' is not among the levels of 'ward'"),
        ("{variable: ward, in: [South, Nort]}", "Nort]", "'Nort' is not among the levels"),
        ("{variable: age, is: old}", "old}", "'age' is a quantity; 'old' is no value of it"),
        ("{variable: seen, is_not: May}", "May}", "'seen' is a date; 'May' is no value of it"),
        ("{any: [{all: [{variable: ward, is: south}]}]}", "south", "'south' is not among the levels"),
        ("{variable: age, missing: perhaps}", "perhaps", "expects true or false"),
        ("{variable: age, below: eighteen}", "eighteen", "expects a number or a date"),
    ],
)
def test_conditions(changed: Changed, condition: str, at: str, said: str) -> None:
    added = f"outcome: infection\nexclusions:\n  - reason: r\n    where: {condition}\n"
    if at == condition or at.startswith("{"):
        # A mapping under a key is pointed at by its key.
        at = "where"
    assert said in changed("outcome: infection\n", added, at).what


def test_conditions_that_are_right(read: Read) -> None:
    text = SMALL.replace("[North, South]", "[1, 2]")
    for condition in (
        "{variable: ward, is: not known}",  # not listed: just what is to be left out
        "{variable: ward, above: 1}",  # levels that are numbers
        "{variable: theatre, is: 3}",  # another column of the file
        "{variable: seen, below: 2021-01-01}",
        "{variable: age, missing: no}",
        "{variable: smoker, is: maybe}",
    ):
        loaded = read(text + f"exclusions: [{{reason: r, where: {condition}}}]\n")
        assert loaded.description.exclusions[0].reason == "r"


def test_a_fault_in_one_part_does_not_make_more_of_them(changed: Changed) -> None:
    # What is misspelt counts as given: no second message that it is missing.
    assert (
        "expects" in changed("kind: binary, present: yes}\n  age", "kind: binry, present: yes}\n  age").what
    )
    assert "`present`" in changed("present: yes}\n  age", "present: }\n  age").what
    assert "`cut`" in changed("{kind: date}", "{from: age, cut: 50}").what
    assert "`purpose`" in changed("purpose: association", "purpose: asociation").what
