"""Exclusions: what each condition means, and that the flow always adds up."""

from __future__ import annotations

import json
from collections.abc import Callable
from typing import Any

import numpy as np
import pytest
import yaml
from hypothesis import assume, given
from hypothesis import strategies as st

from fourfold.data.coding import Coded, code, levelled
from fourfold.data.conditions import satisfied
from fourfold.data.prepare import prepare
from fourfold.data.raw import RawTable, from_objects
from fourfold.description.model import Condition, Variable
from fourfold.description.read import Loaded, load

Study = Callable[..., Loaded]
YES = {"kind": "binary", "present": "yes"}
AGES = [10, 18, None, 40, 65]
WARDS = ["North", None, "South", "1", "1.0"]
DAYS = ["2024-01-01", "2024-02-01", None, "2024-03-01", "2024-03-02T08:00"]


def coded() -> dict[str, Coded]:
    columns = {"age": from_objects(AGES), "ward": from_objects(WARDS), "seen": from_objects(DAYS)}
    table = RawTable("rows.csv", columns, np.arange(5), "line", tuple(columns), "")
    variables = {"age": "quantity", "ward": "category", "seen": "date"}
    found = {name: code(name, Variable(kind=kind), table, []) for name, kind in variables.items()}
    found["undescribed"] = levelled("undescribed", "category", columns["age"], [], [])
    return found


@pytest.mark.parametrize(
    ("condition", "rows"),
    [
        # The limit itself is neither below nor above; a missing value is neither.
        ({"variable": "age", "below": 18}, [0]),
        ({"variable": "age", "above": 18}, [3, 4]),
        ({"variable": "age", "is": "18"}, [1]),
        ({"variable": "age", "is": "18.0"}, [1]),
        ({"variable": "age", "is_not": "18"}, [0, 3, 4]),
        ({"variable": "age", "in": ["10", "65", "7"]}, [0, 4]),
        ({"variable": "age", "missing": True}, [2]),
        ({"variable": "age", "missing": False}, [0, 1, 3, 4]),
        ({"variable": "ward", "is": "North"}, [0]),
        ({"variable": "ward", "is_not": "North"}, [2, 3, 4]),
        # Spelled alike wins; 1.0 is another spelling that the data keep apart.
        ({"variable": "ward", "is": "1"}, [3]),
        ({"variable": "ward", "in": ["South", "West"]}, [2]),
        ({"variable": "ward", "is": "West"}, []),
        ({"variable": "ward", "is_not": "West"}, [0, 2, 3, 4]),
        ({"variable": "ward", "missing": True}, [1]),
        ({"variable": "seen", "below": "2024-02-01"}, [0]),
        ({"variable": "seen", "above": "2024-02-01"}, [3, 4]),
        ({"variable": "seen", "is": "2024-03-02"}, [4]),
        ({"variable": "undescribed", "below": 18}, [0]),
        ({"variable": "undescribed", "above": 17.5}, [1, 3, 4]),
        ({"variable": "undescribed", "is": "40"}, [3]),
        ({"all": [{"variable": "age", "above": 10}, {"variable": "ward", "missing": False}]}, [3, 4]),
        ({"any": [{"variable": "age", "missing": True}, {"variable": "ward", "missing": True}]}, [1, 2]),
        (
            {"any": [{"variable": "age", "is": "10"}, {"all": [{"variable": "age", "above": 1}] * 2}]},
            [0, 1, 3, 4],
        ),
    ],
)
def test_what_a_condition_means(condition: dict[str, Any], rows: list[int]) -> None:
    found = satisfied(Condition.model_validate(condition), coded())
    assert np.flatnonzero(found).tolist() == rows


def test_what_is_excluded_need_not_be_right(study: Study) -> None:
    """A level, a word in a quantity or a third value is refused only where its row stays."""
    content = (
        "fever,exposed,age,ward\nyes,yes,1,A\nno,no,2,B\nno,yes,4,A\nyes,no,3,B\nyes,unclear,old,Closed\n"
    )
    keys = {
        "variables": {
            "fever": YES,
            "exposed": YES,
            "age": {"kind": "quantity"},
            "ward": {"kind": "category", "levels": ["A", "B", "Closed"]},
        },
        "covariates": ["age", "ward"],
        "exclusions": [{"reason": "Ward closed", "where": {"variable": "ward", "is": "Closed"}}],
    }
    flow = prepare(study(content, **keys)).participants
    assert (flow.read, flow.exclusions[0].count, flow.analysed) == (5, 1, 4)


def test_missing_codes_everywhere_and_by_variable(study: Study) -> None:
    content = (
        "fever,exposed,age,parity\nyes,yes,999,9\nno, no ,20,1\nno,yes,9,2.0\nyes,no,999.0,\nyes,?,30,NA\n"
    )
    keys = {
        "variables": {
            "fever": YES,
            "exposed": YES,
            "age": {"kind": "quantity"},
            "parity": {"kind": "category", "missing": [9]},
        },
        "data": {"missing": [999, "?", "NA"]},
    }
    rows = prepare(study(content, **keys)).eligible
    assert np.array_equal(rows.columns["age"].values, [np.nan, 20, 9, np.nan, 30], equal_nan=True)
    assert rows.columns["parity"].levels == ("1", "2.0")
    assert np.isnan(rows.columns["parity"].values).tolist() == [True, False, False, True, True]
    # White space at the ends of a cell does not count.
    assert np.array_equal(rows.columns["exposed"].values, [1, 0, 1, 0, np.nan], equal_nan=True)


def test_lines_are_those_of_the_file(study: Study) -> None:
    content = 'fever,exposed,age\r\n\r\nyes,yes,"1"\r\n\r\n"n\r\no",no,2\r\nno,no,3\r\n'
    keys = {"variables": {"fever": YES, "exposed": YES}}
    out = [{"reason": "Odd", "where": {"variable": "age", "is": 2}}]
    assert prepare(study(content, exclusions=out, **keys)).eligible.lines.tolist() == [3, 7]


YES_NO = ("yes", "no")
VALUES = st.tuples(
    st.sampled_from(["yes", "no", ""]),
    st.sampled_from(["yes", "no", "NA"]),
    st.one_of(st.just(""), st.integers(0, 12).map(str)),
    st.sampled_from(["A", "B", ""]),
)
TESTS = st.one_of(
    st.builds(lambda x: {"variable": "age", "below": x}, st.integers(0, 6)),
    st.builds(lambda x: {"variable": "age", "above": x}, st.integers(6, 12)),
    st.builds(lambda x: {"variable": "age", "missing": x}, st.just(True)),
    st.builds(lambda x: {"variable": "ward", "is": x}, st.sampled_from(["A", "B"])),
    st.builds(lambda x: {"variable": "ward", "in": [x]}, st.sampled_from(["A", "B"])),
    st.builds(lambda x: {"variable": "exposed", "is_not": x}, st.sampled_from(["yes", "no"])),
)
CONDITIONS = st.one_of(
    TESTS,
    st.builds(lambda a, b: {"all": [a, b]}, TESTS, TESTS),
    st.builds(lambda a, b: {"any": [a, b]}, TESTS, TESTS),
)


def holds(condition: dict[str, Any], row: dict[str, str]) -> bool:
    """The meaning of a condition for one row, in plain Python."""
    if "all" in condition:
        return all(holds(part, row) for part in condition["all"])
    if "any" in condition:
        return any(holds(part, row) for part in condition["any"])
    value = row[condition["variable"]]
    if "missing" in condition:
        return value in ("", "NA")
    if value in ("", "NA"):
        return False
    if "below" in condition:
        return int(value) < condition["below"]
    if "above" in condition:
        return int(value) > condition["above"]
    if "is_not" in condition:
        return value != condition["is_not"]
    return value == condition["is"] if "is" in condition else value in condition["in"]


@given(rows=st.lists(VALUES, max_size=40), conditions=st.lists(CONDITIONS, max_size=4), counted=st.booleans())
def test_the_flow_adds_up(
    tmp_path_factory: pytest.TempPathFactory,
    rows: list[tuple[str, str, str, str]],
    conditions: list[dict[str, Any]],
    counted: bool,
) -> None:
    """For random rows and exclusions: boxes add, and equal a count row by row."""
    names = ["fever", "exposed", "age", "ward"]
    # Every combination once, so that few exclusions leave nobody or one outcome only.
    rows = [
        *rows,
        *((y, e, str(age), ward) for y in YES_NO for e in YES_NO for age in range(13) for ward in "AB"),
    ]
    table = [dict(zip(names, row, strict=True)) for row in rows]
    weights = [place % 4 if counted else 1 for place in range(len(table))]
    folder = tmp_path_factory.mktemp("flow")
    lines = [",".join([*names, "people"])]
    lines += [f"{','.join(row)},{weight}" for row, weight in zip(rows, weights, strict=True)]
    (folder / "rows.csv").write_text("\n".join(lines))
    description = {
        "study": {"title": "Flow", "design": "cohort", "purpose": "association"},
        "data": {"file": "rows.csv", **({"counts": "people"} if counted else {})},
        "variables": {
            "fever": dict(YES),
            "exposed": dict(YES),
            "age": {"kind": "quantity"},
            "ward": {"kind": "category", "levels": ["A", "B"]},
        },
        "outcome": "fever",
        "exposures": ["exposed"],
        "covariates": ["age", "ward"],
        "exclusions": [{"reason": f"Step {place}", "where": c} for place, c in enumerate(conditions)],
    }
    left = [(row, weight) for row, weight in zip(table, weights, strict=True) if weight]
    steps = []
    for condition in conditions:
        out = [weight for row, weight in left if holds(condition, row)]
        left = [(row, weight) for row, weight in left if not holds(condition, row)]
        steps.append(sum(out))
    complete = [
        (row, weight) for row, weight in left if not any(value in ("", "NA") for value in row.values())
    ]
    # Anything else is refused, as other tests show: an outcome or exposure that does not vary.
    assume({row["fever"] for row, _ in complete} == {"yes", "no"})
    assume({"yes", "no"} <= {row["exposed"] for row in table})
    path = folder / "study.yaml"
    path.write_text(yaml.safe_dump(json.loads(json.dumps(description))))
    flow = prepare(load(path)).participants
    assert [step.count for step in flow.exclusions] == steps
    assert flow.read == sum(weights) == sum(steps) + (flow.eligible or 0)
    assert flow.eligible == sum(weight for _, weight in left) == (flow.incomplete or 0) + (flow.analysed or 0)
    assert flow.analysed == sum(weight for _, weight in complete)
    assert flow.events == sum(weight for row, weight in complete if row["fever"] == "yes")
    assert flow.analysed == (flow.events or 0) + (flow.non_events or 0)
    assert sum(pattern.count or 0 for pattern in flow.patterns) == flow.incomplete
