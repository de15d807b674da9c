"""Sample size criteria, collinearity and the distribution of risk."""

from __future__ import annotations

import json
from pathlib import Path
from typing import Any

import numpy as np
import pytest

from fourfold.assessment.sample_size import assess, largest_r_squared, required, shrinkage

REFERENCE = Path(__file__).parents[1] / "reference"


def test_published_example():
    # Riley et al. 2020, BMJ 368:m441 (from memory, in published-values.json): 662 participants;
    # 622.31, 661.1 and 220.85 before rounding (computed in base R).
    values = json.loads((REFERENCE / "published-values.json").read_text())["values"]
    case = next(v for v in values if v["id"] == "minimum-sample-size-prediction-model")
    inputs = case["inputs"]
    found = required(inputs["outcome_proportion"], inputs["candidate_parameters"], inputs["cox_snell_r2"])
    assert found["c1"] == pytest.approx(622.31, abs=5e-3)
    assert found["c2"] == pytest.approx(661.1, abs=5e-2)
    assert found["c3"] == pytest.approx(220.85, abs=5e-3)
    assert np.ceil(max(found["c1"], found["c2"], found["c3"])) == case["printed"]["participants"]
    # van Smeden et al. 2019, mean absolute error .05: 801 (formula worked in base R).
    assert np.ceil(found["c4"]) == 801


def test_events_per_parameter_of_the_published_abstract():
    # Riley et al. 2019, abstract: 4.8 events per parameter at 662 participants.
    assert assess(662, round(662 * 0.174), 24, 24, 200.0).events_per_parameter == pytest.approx(4.8, abs=0.02)


def test_worked_example(birthwt: Any):
    # Base R 4.2.2: heuristic shrinkage and model likelihood ratio of birthwt.json.
    expected = birthwt.expected
    ratio = expected["model_likelihood_ratio"]
    found = assess(expected["n"], expected["events"], 8, 8, ratio)
    assert found.shrinkage == pytest.approx(expected["heuristic_shrinkage"], rel=1e-12)
    assert found.events_per_parameter == 59 / 8
    assert found.r_squared == pytest.approx(1 - np.exp(-found.shrinkage * ratio / 189), rel=1e-12)
    assert found.r_squared < expected["r_squared"]["cox_snell"]
    assert not found.r_squared_assumed
    assert [criterion.id for criterion in found.criteria] == ["c1", "c2", "c3", "c4"]
    assert found.required == max(criterion.required for criterion in found.criteria)
    assert found.shortfall == found.required - 189
    for criterion in found.criteria:
        assert criterion.shortfall == max(0, criterion.required - 189)


def test_shrinkage_of_the_second_case(bacteria: Any):
    # Base R 4.2.2: bacteria.json.
    assert shrinkage(bacteria.expected["model_likelihood_ratio"], 3) == pytest.approx(
        bacteria.expected["heuristic_shrinkage"], rel=1e-12
    )


def test_candidates_count_not_what_was_kept():
    few, many = assess(500, 100, 5, 5, 60.0), assess(500, 100, 20, 5, 60.0)
    assert few.events_per_parameter == 20
    assert many.events_per_parameter == 5
    assert many.shrinkage < few.shrinkage
    assert many.required > few.required


def test_weak_model_falls_back_on_an_assumption():
    # 15% of the largest R squared (Riley et al. 2020) where the shrinkage is not positive.
    found = assess(300, 60, 10, 10, 6.0)
    assert found.shrinkage is not None
    assert found.shrinkage < 0
    assert found.r_squared_assumed
    assert found.r_squared == pytest.approx(0.15 * largest_r_squared(0.2))
    assert assess(300, 60, 10, 10, 0.0).shrinkage is None


def test_largest_r_squared_of_the_worked_example(birthwt: Any):
    # Computed in base R: n 189, d 59, largest .711093; Nagelkerke's divisor.
    assert largest_r_squared(59 / 189) == pytest.approx(0.711093, abs=5e-7)
    r = birthwt.expected["r_squared"]
    assert largest_r_squared(59 / 189) == pytest.approx(r["cox_snell"] / r["nagelkerke"], rel=1e-12)


def test_rarer_side_counts():
    # Turning the outcome round changes neither events per parameter nor what is required.
    found, turned = assess(500, 80, 6, 6, 50.0), assess(500, 420, 6, 6, 50.0)
    assert found.events_per_parameter == turned.events_per_parameter
    assert [c.required for c in found.criteria] == [c.required for c in turned.criteria]


def test_sampling_by_outcome_leaves_the_criteria_out():
    found = assess(200, 100, 5, 5, 40.0, absolute_risk=False)
    assert found.criteria == []
    assert found.required is None
    assert found.r_squared is None
    assert found.events_per_parameter == 20
    assert found.shrinkage == pytest.approx(0.875)
