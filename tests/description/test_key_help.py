"""Help comes from the models: every key has it, its examples load, and words lead to the right key."""

from __future__ import annotations

import difflib
from collections.abc import Callable
from typing import Any

import pytest
import yaml

from fourfold.description import keys
from fourfold.description.outline import NAME, Key, outline
from fourfold.description.read import Loaded
from fourfold.errors import UsageError

Read = Callable[[str], Loaded]
KEYS = list(outline().values())

# What an example is put into; an example is a part of a description.
AROUND: dict[str, Any] = yaml.load(
    """
study: {title: Wound infection in Quillmere, design: cohort, purpose: association}
data: {file: wound-infection.csv}
variables:
  infection: {kind: binary, present: 'yes'}
  smoker: {kind: binary, present: 'yes'}
  age: {kind: quantity}
  bmi: {kind: quantity}
  ward: {kind: category, levels: [North, South, East]}
  urgency: {kind: category, levels: [elective, emergency]}
outcome: infection
""",
    Loader=yaml.BaseLoader,
)


def put_into(around: Any, part: Any) -> Any:
    if isinstance(around, dict) and isinstance(part, dict):
        return {**around, **{key: put_into(around.get(key), value) for key, value in part.items()}}
    return part


class Quoting(yaml.SafeDumper):
    """Writes the texts of ``BaseLoader`` back without tags, leaving numbers and words bare."""


Quoting.add_representer(str, lambda dumper, text: dumper.represent_scalar("tag:yaml.org,2002:str", text))
Quoting.yaml_implicit_resolvers = {}


@pytest.mark.parametrize("key", KEYS, ids=lambda key: key.dotted)
def test_each_example_is_accepted_and_holds_its_key(read: Read, folder: Any, key: Key) -> None:
    part = yaml.load(key.example, Loader=yaml.BaseLoader)
    whole = put_into(AROUND, part)
    if whole["study"]["purpose"] == "association":
        whole.setdefault("exposures", ["smoker"])
    for name in ("theatre.sqlite", "theatre.xlsx", "wound-infection-grouped.csv"):
        (folder / name).write_text("")
    read(yaml.dump(whole, Dumper=Quoting, allow_unicode=True))
    here = [part]
    for step in key.path:
        inside = [below for at in here for below in (at if isinstance(at, list) else [at])]
        maps = [at for at in inside if isinstance(at, dict)]
        here = [v for at in maps for v in (at.values() if step == NAME else [at[step]] if step in at else [])]
        if not here and key.path[0] in ("exposures", "predictors"):
            return  # the mapping of a role is shown once, under covariates
    assert here, f"the example of {key.dotted} does not show it"


@pytest.mark.parametrize("key", KEYS, ids=lambda key: key.dotted)
def test_each_key_says_what_it_means_and_what_holds_without_it(key: Key) -> None:
    assert key.means.endswith(".")
    assert key.kind != "a value"
    tests = {"is", "is_not", "in", "below", "above", "missing", "all", "any"}
    if not key.required and key.path[:2] != ("exclusions", "where"):
        assert key.otherwise.endswith((".", "]."))
    if key.required or (key.name in tests and key.path[0] == "exclusions"):
        assert not key.otherwise
    said = keys.explain(key.dotted)
    assert key.dotted in said
    assert key.example.splitlines()[-1] in said


def test_the_overview_lists_every_key() -> None:
    lines = keys.explain(None).splitlines()
    listed = [
        line.split("  ")[0 if not line.startswith(" ") else 1].removesuffix(" *") for line in lines if line
    ]
    for key in KEYS:
        steps = ["NAME" if step == NAME else step for step in key.path]
        assert ".".join(steps if len(steps) == 1 else steps[1:]) in listed
    assert max(map(len, lines)) <= 100
    required = [line for line in lines if " *" in line[:29]]
    assert any(line.startswith("study *") for line in required)
    assert not any(line.startswith("covariates *") for line in required)


@pytest.mark.parametrize(
    ("asked", "leads_to"),
    [
        ("cut", "variables.NAME.cut"),
        ("cut:", "variables.NAME.cut"),
        ("confidence", "analysis.confidence"),
        ("analysis.confidence", "analysis.confidence"),
        ("variables.age.per", "variables.NAME.per"),
        ("shape.spline.knots", "variables.NAME.shape.spline.knots"),
        ("where.any", "exclusions.where.any"),
        ("reason", "covariates.reason"),
        ("reason", "exclusions.reason"),
        ("missing", "data.missing"),
        ("missing", "variables.NAME.missing"),
        ("missing", "exclusions.where.missing"),
        ("OUTCOME", "outcome"),
    ],
)
def test_a_bare_word_is_found_wherever_it_stands(asked: str, leads_to: str) -> None:
    said = keys.explain(asked)
    assert leads_to in said
    assert "example" in said
    assert "is no key" not in said


@pytest.mark.parametrize(
    ("asked", "leads_to"),
    [
        ("age_band", ["variables.NAME.from", "variables.NAME.cut"]),
        ("age band", ["variables.NAME.from", "variables.NAME.cut"]),
        ("bmi_bands", ["variables.NAME.from", "variables.NAME.cut"]),
        ("cohort", ["study.design"]),
        ("spline", ["variables.NAME.shape.spline"]),
        ("log2", ["variables.NAME.shape"]),
        ("profile likelihood", ["analysis.intervals"]),
        ("matched case-control", ["study.design"]),
        ("robust", ["analysis.standard_errors"]),
        ("confounder", ["covariates"]),
        ("event", ["outcome", "variables.NAME.present"]),
        ("eligibility", ["exclusions"]),
        ("smoker", ["variables"]),
        ("effect_modifiers", ["effect_modifiers"]),
    ],
)
def test_words_that_are_no_keys_lead_to_the_keys_that_answer(asked: str, leads_to: list[str]) -> None:
    said = keys.explain(asked)
    for key in leads_to:
        assert key in said


def test_help_on_bands_is_enough_to_write_one() -> None:
    said = keys.explain("age_band")
    assert "age_band: {label: Age band, from: age, cut: [50, 65, 80]}" in said
    assert "each value begins a new band" in said


def test_keys_not_acted_on_are_explained_as_that() -> None:
    said = keys.explain("effect_modifiers")
    assert "not a key that this version acts on" in said


def test_an_unknown_word_names_the_nearest() -> None:
    with pytest.raises(UsageError) as caught:
        keys.explain("confidance")
    assert "Did you mean 'confidence'?" in str(caught.value)
    assert difflib.get_close_matches("confidance", ["confidence"])
    with pytest.raises(UsageError) as caught:
        keys.explain("qqqqqq")
    assert "`fourfold keys` lists all of them." in str(caught.value)


def test_help_shows_what_a_key_takes() -> None:
    assert "one word: cohort, case-control, cross-sectional or survey" in keys.explain("design")
    assert "a list of two numbers" in keys.explain("plausible")
    assert "a whole number, or a list, each item a number" in keys.explain("knots")
    assert "a value as it stands in the data" in keys.explain("present")
    assert "a number or a date" in keys.explain("below")
    assert "a list of variables, each a bare name or a mapping" in keys.explain("covariates")
