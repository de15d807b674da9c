"""Findings from rows to list: a sound file of rows gives no concern, and one slip in it is noticed."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path

import numpy as np
import pytest

from fourfold.data.prepare import prepare
from fourfold.description.read import load
from fourfold.pipeline.analyse import results_of
from fourfold.pipeline.progress import Silent
from fourfold.results import tree

DESCRIPTION = """
study:
  title: Wood stoves and night coughing in Alder Vale
  design: cohort
  purpose: association
  setting: Two villages
  period: {from: 2021-01-01, to: 2022-12-31}
data: {file: rows.csv, identifier: person}
variables:
  cough: {label: Night cough within a year, kind: binary, present: "yes"}
  stove: {label: Wood stove, kind: binary, present: "yes", expected: raises}
  age:
    label: Age
    kind: quantity
    unit: years
    plausible: [18, 100]
    shape: {spline: {knots: 3}}
    reference: 50
  village: {label: Village, kind: category, levels: [Upper, Lower], reference: Upper}
outcome: cough
exposures: [{variable: stove, planned: true}]
covariates:
  - {variable: age, planned: true, reason: Stoves and coughing both change with age}
  - {variable: village, planned: true, reason: The air differs between the villages}
selection: {method: beforehand}
follow_up: {statement: [equal], exposure_measured: at start}
"""
PEOPLE = 3000


def rows() -> list[list[str]]:
    draw = np.random.default_rng(5)
    age = np.clip(draw.normal(50, 14, PEOPLE), 18, 95).round().astype(int)
    stove, lower = draw.random(PEOPLE) < 0.4, draw.random(PEOPLE) < 0.45
    log_odds = -3.3 + 0.85 * stove + 0.022 * (age - 50) + 0.2 * lower
    cough = draw.random(PEOPLE) < 1 / (1 + np.exp(-log_odds))
    return [
        [
            f"A{i:04d}",
            "yes" if cough[i] else "no",
            "yes" if stove[i] else "no",
            str(age[i]),
            "Lower" if lower[i] else "Upper",
        ]
        for i in range(PEOPLE)
    ]


def analysed(folder: Path, data: list[list[str]], description: str = DESCRIPTION) -> tree.Results:
    lines = ["person,cough,stove,age,village", *(",".join(row) for row in data)]
    (folder / "rows.csv").write_text("\n".join(lines) + "\n", encoding="utf-8")
    (folder / "study.yaml").write_text(description, encoding="utf-8")
    loaded = load(folder / "study.yaml")
    return results_of(loaded, prepare(loaded), Silent())


def ids(results: tree.Results, *grades: str) -> set[str]:
    return {finding.id for finding in results.findings if not grades or finding.grade in grades}


def test_sound_rows_give_no_concern(tmp_path: Path):
    results = analysed(tmp_path, rows())
    assert ids(results, "serious", "concern") == set()
    assert ids(results) <= {"REP-checklist", "COLLAPSE", "LIN-not-straight"}


def repeated(data: list[list[str]]) -> None:
    data.append(list(data[7]))


def missing_codes(data: list[list[str]]) -> None:
    for row in data[:40]:
        row[3] = "999"


def lost(data: list[list[str]]) -> None:
    for row in data[:400]:
        row[3] = ""


def nobody_coughs_with_the_outcome(data: list[list[str]]) -> None:
    for row in data:
        if row[2] == "yes":
            row[1] = "yes"


SLIPS = {
    "DAT-duplicates": repeated,
    "DAT-missing-code": missing_codes,
    "DAT-implausible": missing_codes,
    "MIS-dropped": lost,
    "SEP-infinite": nobody_coughs_with_the_outcome,
}


@pytest.mark.parametrize("id", SLIPS)
def test_one_slip_in_the_rows_is_noticed(id: str, tmp_path: Path):
    slip: Callable[[list[list[str]]], None] = SLIPS[id]
    data = rows()
    slip(data)
    assert id in ids(analysed(tmp_path, data))


@pytest.mark.parametrize(
    ("id", "before", "after"),
    [
        ("SEL-p-values", "method: beforehand", "method: stepwise, candidates: 9"),
        ("DSN-immortal-time", "exposure_measured: at start", "exposure_measured: during follow-up"),
        ("DSN-censoring", "statement: [equal]", "statement: [censored]"),
        ("DAT-outcome-reversed", "expected: raises", "expected: lowers"),
        ("DAT-outcome-reversed", 'kind: binary, present: "yes"}', 'kind: binary, present: "no"}'),
        ("COD-unit", "    unit: years\n", ""),
        ("EXT-range", "reference: 50\n", "reference: 50\n    compare: [[50, 130]]\n"),
        ("OR-case-control-risk", "design: cohort", "design: case-control"),
        ("AUC-apparent", "purpose: association", "purpose: prediction"),
    ],
)
def test_what_the_description_states_is_noticed(id: str, before: str, after: str, tmp_path: Path):
    assert before in DESCRIPTION
    description = DESCRIPTION.replace(before, after, 1)
    if "prediction" in after:
        description = description.split("exposures:")[0] + "predictors: [stove, age, village]\n"
    if "case-control" in after:
        description = description.split("follow_up:")[0]
    assert id in ids(analysed(tmp_path, rows(), description))
