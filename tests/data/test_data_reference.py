"""Participants and coding on open data, against counts computed elsewhere."""

from __future__ import annotations

import csv
import json
from collections import Counter
from collections.abc import Callable
from pathlib import Path
from typing import Any

import numpy as np
import pytest

from fourfold.data import design
from fourfold.data.prepare import Prepared, prepare
from fourfold.description.read import Loaded

Study = Callable[..., Loaded]
YES = {"kind": "binary", "present": "yes"}
BIRTHS: dict[str, Any] = {
    "variables": {
        "low": YES,
        "smoke": YES,
        "ht": YES,
        "ui": YES,
        "age": {"kind": "quantity", "unit": "years"},
        "lwt": {"kind": "quantity", "unit": "lb"},
        "race": {"kind": "category", "reference": "white"},
    },
    "outcome": "low",
    "exposures": ["smoke"],
    "covariates": ["age", "lwt", "race", "ht", "ui"],
}


def births(study: Study, reference: Path, file: str = "birthwt.csv", **keys: Any) -> Prepared:
    described = {**BIRTHS, **keys, "data": {"identifier": "id", **keys.get("data", {})}}
    return prepare(study((reference / file).read_bytes(), file=file, **described))


def rows_of(reference: Path, file: str = "birthwt.csv") -> list[dict[str, str]]:
    with (reference / file).open(newline="") as lines:
        return list(csv.DictReader(lines))


def test_complete_births(study: Study, reference: Path) -> None:
    # n and events: Hosmer & Lemeshow (1989), low birth weight study, as in R MASS::birthwt.
    expected = json.loads((reference / "birthwt.json").read_text())
    flow = births(study, reference).participants
    assert (flow.read, flow.analysed, flow.events) == (189, expected["n"], expected["events"])
    assert (flow.incomplete, flow.exclusions, flow.patterns, flow.missing_associations) == (0, [], [], [])
    assert flow.non_events == 130
    assert (flow.duplicated_identifiers, flow.duplicated_rows) == (0, 0)


def test_incomplete_births(study: Study, reference: Path) -> None:
    # Counts computed in base R: tests/reference/incomplete.json.
    expected = json.loads((reference / "incomplete.json").read_text())
    prepared = births(study, reference, "incomplete.csv")
    flow = prepared.participants
    assert flow.incomplete == expected["incomplete_rows"]
    assert flow.analysed == expected["complete_cases"]["n"]
    assert flow.events == expected["complete_cases"]["events"]
    assert {row.variable: row.count for row in flow.missing} == expected["missing_counts"]
    assert [row.variable for row in flow.missing] == ["low", "smoke", "age", "lwt", "race", "ht", "ui"]
    assert flow.crude_rows == {"smoke": 189 - 19}
    assert sum(pattern.count or 0 for pattern in flow.patterns) == flow.incomplete
    rows = rows_of(reference, "incomplete.csv")
    lacking = Counter(tuple(name for name in ("smoke", "lwt") if row[name] in ("", "NA")) for row in rows)
    assert {tuple(pattern.variables): pattern.count for pattern in flow.patterns} == {
        which: count for which, count in lacking.items() if which
    }


def test_flow_of_exclusions_in_order(study: Study, reference: Path) -> None:
    exclusions = [
        {"reason": "Under 18", "where": {"variable": "age", "below": 18}},
        {"reason": "Hypertension", "where": {"variable": "ht", "is": "yes"}},
        {
            "reason": "Light, and black or other",
            "where": {
                "all": [{"variable": "lwt", "below": 100}, {"variable": "race", "in": ["black", "other"]}]
            },
        },
        {"reason": "Three visits or more", "where": {"variable": "ftv", "above": 2}},
    ]
    flow = births(study, reference, exclusions=exclusions).participants
    rows, counts = rows_of(reference), []
    # The same in plain Python, row by row.
    for out in (
        lambda row: int(row["age"]) < 18,
        lambda row: row["ht"] == "yes",
        lambda row: int(row["lwt"]) < 100 and row["race"] in ("black", "other"),
        lambda row: int(row["ftv"]) > 2,
    ):
        counts.append(sum(map(out, rows)))
        rows = [row for row in rows if not out(row)]
    assert [step.count for step in flow.exclusions] == counts
    assert all(counts)
    assert flow.eligible == flow.exclusions[-1].remaining == len(rows)
    assert flow.events == sum(row["low"] == "yes" for row in rows)


def test_the_design_reproduces_the_published_fit(study: Study, reference: Path) -> None:
    """Newton's method on the design lands on the coefficients of base R: the coding is the same."""
    expected = json.loads((reference / "incomplete.json").read_text())["complete_cases"]
    prepared = births(study, reference, "incomplete.csv")
    by_name = {variable.name: variable for variable in prepared.variables}
    order = ["age", "lwt", "race", "smoke", "ht", "ui"]
    built = design.build(prepared.analysis, [by_name[name] for name in order], width=32)
    assert built.parameters == (
        "(intercept)",
        "age",
        "lwt",
        "race: black",
        "race: other",
        "smoke",
        "ht",
        "ui",
    )
    X, y = built.matrix(), prepared.outcome
    b = np.zeros(X.shape[1])
    for _ in range(25):
        risk = 1 / (1 + np.exp(-X @ b))
        b += np.linalg.solve(X.T * (risk * (1 - risk)) @ X, X.T @ (y - risk))
    # Both are converged to rounding; 1e-9 is far above it and far below any change of coding.
    assert b == pytest.approx(expected["coefficients"], rel=1e-9)


def test_the_most_frequent_level_is_the_reference(study: Study, reference: Path) -> None:
    variables = {**BIRTHS["variables"], "race": {"kind": "category"}}
    race = births(study, reference, variables=variables).variables[4]
    assert (race.name, race.reference, race.reference_rule) == ("race", "white", "most frequent")
    assert Counter(row["race"] for row in rows_of(reference)).most_common(1)[0][0] == "white"


def test_the_first_listed_of_equally_frequent_levels_is_the_reference(study: Study) -> None:
    content = "fever,exposed,age,ward\nyes,yes,1,B\nno,no,2,A\nyes,no,3,A\nno,yes,4,B\nno,yes,4,C\n"
    ward = {"kind": "category", "levels": ["C", "B", "A"]}
    variables = {"fever": YES, "exposed": YES, "age": {"kind": "quantity"}, "ward": ward}
    prepared = prepare(study(content, variables=variables, covariates=["ward"]))
    assert prepared.variables[2].reference == "B"


def test_a_stated_reference_has_no_rule(study: Study, reference: Path) -> None:
    race = births(study, reference).variables[4]
    assert (race.reference, race.reference_rule) == ("white", None)


def test_roles_come_in_order_with_their_reasons(study: Study, reference: Path) -> None:
    covariates = [{"variable": "age", "reason": "Goes with both", "planned": True}, "race"]
    variables = births(study, reference, covariates=covariates).variables
    assert [(variable.name, variable.role) for variable in variables] == [
        ("low", "outcome"), ("smoke", "exposure"), ("age", "covariate"), ("race", "covariate"),
        ("ht", "other"), ("lwt", "other"), ("ui", "other"),
    ]  # fmt: skip
    assert (variables[2].reason, variables[2].planned) == ("Goes with both", True)
    assert (variables[0].present, variables[0].reference) == ("yes", "no")


def test_rows_counted_for_many_equal_rows_written_out(study: Study, reference: Path) -> None:
    """A counts column gives the participants, references and knots of the file with rows repeated."""
    rows = rows_of(reference, "incomplete.csv")
    counts = np.random.default_rng(7).integers(0, 4, len(rows))
    names = list(rows[0])
    line = [",".join(row[name] for name in names) for row in rows]
    grouped = "\n".join(
        [",".join([*names, "people"]), *(f"{text},{count}" for text, count in zip(line, counts, strict=True))]
    )
    written = "\n".join(
        [",".join(names), *(text for text, count in zip(line, counts, strict=True) for _ in range(count))]
    )
    spline = {"kind": "quantity", "unit": "lb", "shape": {"spline": {"knots": 4}}}
    keys = {
        **BIRTHS,
        "variables": {**BIRTHS["variables"], "lwt": spline, "race": {"kind": "category"}},
        "exclusions": [{"reason": "Under 18", "where": {"variable": "age", "below": 18}}],
    }
    many = prepare(study(grouped, data={"counts": "people"}, **keys))
    single = prepare(study(written, file="written.csv", **keys))
    assert many.participants.read == counts.sum() == single.participants.read
    # Repeated rows are a way of writing in one file and look like slips in the other.
    assert many.participants.duplicated_rows == 0
    for name in ("exclusions", "eligible", "incomplete", "analysed", "events", "missing", "patterns"):
        assert getattr(many.participants, name) == getattr(single.participants, name)
    assert many.participants.missing_associations == single.participants.missing_associations
    assert many.audit.levels == single.audit.levels
    knots = {variable.name: variable.knots for variable in single.variables}["lwt"]
    assert len(knots) == 4
    assert {variable.name: variable.knots for variable in many.variables}["lwt"] == pytest.approx(knots)
    assert many.rows_read == len(rows)
    assert many.analysis.people == single.analysis.n
