"""The look at the rows before any fit: each thing it notices, and where it stays silent."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

import numpy as np
import pytest

from fourfold.data.columns import Column, Rows
from fourfold.data.lookalikes import looks_like_date, looks_like_identifier, negative_word
from fourfold.data.prepare import Prepared, prepare
from fourfold.data.suspected_codes import suspected_codes
from fourfold.description.read import Loaded

Study = Callable[..., Loaded]
YES = {"kind": "binary", "present": "yes"}
N = 200


def audited(study: Study, columns: dict[str, Any], variables: dict[str, Any], **keys: Any) -> Prepared:
    """Prepare N people with a random outcome and exposure, and the columns given."""
    random = np.random.default_rng(42)
    table = {
        "fever": random.choice(["yes", "no"], N),
        "exposed": random.choice(["yes", "no"], N),
        **{name: np.asarray(values) for name, values in columns.items()},
    }
    lines = [",".join(table), *(",".join(map(str, row)) for row in zip(*table.values(), strict=True))]
    described = {"fever": YES, "exposed": YES, **variables}
    keys.setdefault("covariates", [name for name in variables if variables[name].get("kind") != "date"])
    return prepare(study("\n".join(lines), variables=described, **keys))


def quantity(values: np.ndarray) -> Rows:
    return Rows({"x": Column("x", "x", "quantity", values)}, None, np.arange(values.size))


AGES = np.random.default_rng(1).integers(18, 95, N)


def test_implausible_values(study: Study) -> None:
    age = AGES.copy()
    age[[3, 4, 5]] = [150, 3, 130]
    age[[6, 7]] = [18, 105]
    plausible = {"age": {"kind": "quantity", "plausible": [18, 105]}}
    (found,) = audited(study, {"age": age}, plausible).audit.implausible
    assert (found.variable, found.below, found.above) == ("age", 1, 2)
    assert (found.lowest, found.highest, found.limits) == (3, 150, [18, 105])
    assert audited(study, {"age": AGES}, plausible).audit.implausible == []


@pytest.mark.parametrize(
    ("values", "codes"),
    [
        (np.append(AGES, [999, 999]), {999: 2}),
        (np.append(AGES, [999]), {}),
        (np.append(AGES, [-1, -1, -9, -9, -9]), {-9: 3, -1: 2}),
        # 99 beside ages that reach 94: only a tower of them is suspect.
        (np.append(AGES, [99, 99]), {}),
        (np.append(AGES, [99] * 60), {99: 60}),
        # A count from 0 to 5 with 9 for not known.
        (np.append(np.tile(np.arange(6), 20), [9] * 4), {9: 4}),
        # Scores that truly run over the codes.
        (np.tile(np.arange(-10, 11), 10), {}),
        (np.tile(np.arange(0, 100), 3), {}),
        (np.tile([0, 1], 30), {}),
    ],
)
def test_suspected_codes(values: np.ndarray, codes: dict[float, int]) -> None:
    found = suspected_codes("x", quantity(values.astype(float)))
    assert {code.value: code.count for code in found} == codes


def test_constant_and_nearly_constant_columns(study: Study) -> None:
    rare = np.where(np.arange(N) < 1, "yes", "no")
    less_rare = np.where(np.arange(N) < 2, "yes", "no")
    columns = {"same": np.full(N, 7), "rare": rare, "less": less_rare}
    variables = {"same": {"kind": "quantity"}, "rare": YES, "less": YES}
    audit = audited(study, columns, variables).audit
    # 199 of 200 is above 99%; 198 of 200 is 99% and not above it.
    assert (audit.constant, audit.near_constant) == (["same"], ["rare"])


def test_columns_that_hold_the_same(study: Study) -> None:
    random = np.random.default_rng(9)
    weight, ward = random.normal(70, 10, N).round(3), random.choice(["N", "S", "E"], N)
    columns = {
        "kilograms": weight,
        "pounds": weight * 2.2046,
        "lightness": -weight,
        "other": random.permutation(weight),
        "ward": ward,
        "building": np.where(ward == "N", "a", np.where(ward == "S", "b", "c")),
        "site": np.where(ward == "N", "a", "b"),
    }
    words = {"kind": "category"}
    kinds: dict[str, Any] = {name: {"kind": "quantity"} for name in list(columns)[:4]}
    kinds |= {"ward": words, "building": words, "site": words}
    audit = audited(study, columns, kinds).audit
    assert audit.duplicated_columns == [["kilograms", "pounds", "lightness"], ["ward", "building"]]


def test_events_at_every_level_and_unused_levels(study: Study) -> None:
    ward = np.array(["N", "S"])[np.arange(N) % 2]
    levels = {"ward": {"kind": "category", "levels": ["S", "W", "N"], "reference": "N"}}
    prepared = audited(study, {"ward": ward}, levels)
    assert prepared.audit.unused_levels == {"ward": ["W"]}
    found = {(row.level, row.reference): (row.events, row.non_events) for row in prepared.audit.levels[2:]}
    event = prepared.outcome
    expected = {
        ("S", False): ((event & (ward == "S")).sum(), (~event & (ward == "S")).sum()),
        ("W", False): (0, 0),
        ("N", True): ((event & (ward == "N")).sum(), (~event & (ward == "N")).sum()),
    }
    assert found == expected
    assert [(row.variable, row.level, row.reference) for row in prepared.audit.levels[:2]] == [
        ("exposed", "no", True),
        ("exposed", "yes", False),
    ]


def test_identifiers_and_dates_among_covariates(study: Study) -> None:
    columns = {
        "person": np.arange(5001, 5001 + N),
        "name": [f"P{place}" for place in range(N)],
        "admitted": [f"2024-01-{1 + place % 28:02}" for place in range(N)],
        "compact": [20240101 + place % 28 for place in range(N)],
        "age": AGES,
    }
    variables = {
        "person": {"kind": "quantity"},
        "name": {"kind": "category"},
        "admitted": {"kind": "category"},
        "compact": {"kind": "quantity"},
        "age": {"kind": "quantity"},
    }
    audit = audited(study, columns, variables).audit
    assert audit.looks_like_identifier == ["person", "name"]
    assert audit.looks_like_date == ["admitted", "compact"]


def test_the_declared_identifier_as_a_covariate(study: Study) -> None:
    variables = {"person": {"kind": "quantity"}}
    audit = audited(study, {"person": AGES}, variables, data={"identifier": "person"}).audit
    assert audit.looks_like_identifier == ["person"]


@pytest.mark.parametrize(
    ("values", "identifier", "date"),
    [
        (np.random.default_rng(2).normal(70, 9, 50).round(1), False, False),
        (np.random.default_rng(2).permutation(50) * 3, False, False),
        (np.random.default_rng(2).permutation(50), True, False),
        (np.arange(19.0), False, False),
        (np.full(50, 45_000.0), False, False),
    ],
)
def test_quantities_that_are_or_are_not(values: np.ndarray, identifier: bool, date: bool) -> None:
    column = Column("weight", "Weight", "quantity", values.astype(float))
    assert (looks_like_identifier(column), looks_like_date(column)) == (identifier, date)


def test_day_counts_need_a_name_that_speaks_of_dates() -> None:
    assert looks_like_date(Column("admission_date", "", "quantity", np.full(50, 45_000.0)))


@pytest.mark.parametrize(
    "word", ["no", "No", "0", "absent", "none", "non-smoker", "not ill", "control", "alive"]
)
def test_words_that_say_no(word: str) -> None:
    assert negative_word(word)


@pytest.mark.parametrize("word", ["yes", "1", "nose", "north", "noted", "positive", "case", "dead", "nausea"])
def test_words_that_do_not(word: str) -> None:
    assert not negative_word(word)


def test_an_outcome_whose_event_says_no(study: Study) -> None:
    reversed_outcome = {"fever": {"kind": "binary", "present": "no"}}
    assert audited(study, {}, reversed_outcome, covariates=[]).audit.outcome_reversed == "no"
    assert audited(study, {}, {}, covariates=[]).audit.outcome_reversed is None


def test_dates_after_the_outcome(study: Study) -> None:
    columns = {
        "ill": np.full(N, "2024-03-10"),
        "weighed": np.where(np.arange(N) < 7, "2024-03-11", "2024-03-10"),
        "weight": AGES,
    }
    variables = {
        "fever": {**YES, "dated_by": "ill"},
        "ill": {"kind": "date"},
        "weighed": {"kind": "date"},
        "weight": {"kind": "quantity", "dated_by": "weighed"},
    }
    (found,) = audited(study, columns, variables, covariates=["weight"]).audit.date_order
    assert (found.covariate, found.outcome, found.count) == ("weight", "fever", 7)
    columns["weighed"] = columns["ill"]
    assert audited(study, columns, variables, covariates=["weight"]).audit.date_order == []


def test_repeated_identifiers_and_rows(study: Study) -> None:
    weight = np.random.default_rng(3).normal(70, 10, N).round(4)
    person = np.arange(N)
    person[[10, 11, 12]] = 9
    variables = {"weight": {"kind": "quantity"}}
    columns = {"weight": weight, "person": person}
    flow = audited(study, columns, variables, data={"identifier": "person"}).participants
    assert (flow.duplicated_identifiers, flow.duplicated_rows) == (3, 0)
    lines = "fever,exposed,weight,person\nyes,yes,1,1\nno,no,2,2\nyes,yes,1,1\nno,no,2,3\n"
    described = {"fever": YES, "exposed": YES, **variables}
    flow = prepare(study(lines, variables=described, data={"identifier": "person"})).participants
    assert (flow.duplicated_identifiers, flow.duplicated_rows) == (1, 1)


def test_rows_alike_by_chance_are_not_called_duplicates(study: Study) -> None:
    # Two binary columns: many of 200 people agree in both.
    assert audited(study, {}, {}, covariates=[]).participants.duplicated_rows == 0
    weight = np.random.default_rng(3).normal(70, 10, N).round(4)
    assert (
        audited(study, {"weight": weight}, {"weight": {"kind": "quantity"}}).participants.duplicated_rows == 0
    )


def test_rows_alike_beyond_chance_are_called_duplicates(study: Study) -> None:
    weight = np.random.default_rng(3).normal(70, 10, 50).round(4)
    lines = [
        f"{'yes' if place % 2 else 'no'},{'yes' if place % 3 else 'no'},{w}" for place, w in enumerate(weight)
    ]
    content = "\n".join(["fever,exposed,weight", *lines, *lines[:4]])
    described = {"fever": YES, "exposed": YES, "weight": {"kind": "quantity"}}
    assert prepare(study(content, variables=described)).participants.duplicated_rows == 4
