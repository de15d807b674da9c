"""Collinearity, and bins of fitted risk."""

from __future__ import annotations

from typing import Any

import numpy as np
import pytest
import statsmodels.api as sm

from fourfold.assessment.collinearity import Term, collinearity
from fourfold.assessment.risk_distribution import bins

TERMS = {
    "birthwt": [
        Term("age", "Age", (1,)),
        Term("lwt", "Weight", (2,)),
        Term("race", "Race", (3, 4)),
        Term("smoke", "Smoking", (5,)),
        Term("ptl", "Labours", (6,)),
        Term("ht", "Hypertension", (7,)),
        Term("ui", "Irritability", (8,)),
    ],
    "bacteria": [Term("treatment", "Treatment", (1, 2)), Term("week", "Week", (3,))],
}


def test_fitted_models(fitted: Any):
    # Base R 4.2.2: collinearity of birthwt.json and bacteria.json.
    expected = fitted.expected["collinearity"]
    found = collinearity(fitted.covariance, TERMS[fitted.expected["name"]])
    for mine, theirs in zip(found.gvif, expected["gvif"], strict=True):
        assert (mine.term, mine.df) == (theirs["term"], theirs["df"])
        assert mine.gvif == pytest.approx(theirs["gvif"], rel=1e-9)
        assert mine.scaled == pytest.approx(theirs["gvif_scaled"], rel=1e-9)
    assert found.condition_index == pytest.approx(expected["max_condition_index"], rel=1e-9)
    assert found.shared_terms == []


def weighted_design(seed: int, closeness: float) -> tuple[np.ndarray, np.ndarray]:
    rng = np.random.default_rng(seed)
    x = rng.normal(size=300)
    X = np.column_stack([np.ones(300), x, x + closeness * rng.normal(size=300), rng.normal(size=300)])
    event = rng.random(300) < 1 / (1 + np.exp(-0.3 * x))
    fit = sm.GLM(event.astype(float), X, family=sm.families.Binomial()).fit(tol=1e-14)
    w = fit.fittedvalues * (1 - fit.fittedvalues)
    return X * np.sqrt(w)[:, None], fit.cov_params()


@pytest.mark.parametrize("seed", range(10))
def test_against_the_weighted_design(seed: int):
    # numpy.linalg.cond of W^(1/2) X with unit columns; inflation as the inverse of the correlation
    # of the columns after the weighted intercept is taken out by least squares.
    weighted, covariance = weighted_design(seed, 0.3)
    terms = [Term(name, name, (place,)) for place, name in enumerate("abc", start=1)]
    found = collinearity(covariance, terms)
    scaled = weighted / np.linalg.norm(weighted, axis=0)
    assert found.condition_index == pytest.approx(np.linalg.cond(scaled), rel=1e-6)
    first, rest = weighted[:, :1], weighted[:, 1:]
    rest = rest - first @ np.linalg.lstsq(first, rest, rcond=None)[0]
    scaled = rest / np.linalg.norm(rest, axis=0)
    inflation = np.diag(np.linalg.inv(scaled.T @ scaled))
    assert [each.gvif for each in found.gvif] == pytest.approx(inflation, rel=1e-6)


def test_terms_that_share_are_named():
    # Two columns a fiftieth of a standard deviation apart: index above 30, both shares near 1.
    _, covariance = weighted_design(1, 0.02)
    found = collinearity(
        covariance, [Term(name, name, (place,)) for place, name in enumerate("abc", start=1)]
    )
    assert found.condition_index > 30
    assert found.shared_terms == ["a", "b"]


def test_columns_of_one_term_are_not_held_against_it():
    _, covariance = weighted_design(1, 0.02)
    found = collinearity(covariance, [Term("shaped", "Shaped", (1, 2)), Term("c", "c", (3,))])
    assert found.condition_index > 30
    assert found.shared_terms == []


def test_a_single_term_has_no_inflation():
    found = collinearity(np.array([[0.04, -0.02], [-0.02, 0.05]]), [Term("x", "x", (1,))])
    assert found.gvif[0].gvif == pytest.approx(1.0)


def test_risk_bins_hold_everybody(birthwt: Any):
    # numpy.histogram with the same edges.
    found = bins(birthwt.risk, birthwt.event)
    edges = np.array([each.lower for each in found] + [found[-1].upper])
    assert np.diff(edges) == pytest.approx(np.full(len(found), 0.05))
    assert [each.events for each in found] == list(np.histogram(birthwt.risk[birthwt.event], edges)[0])
    assert [each.non_events for each in found] == list(np.histogram(birthwt.risk[~birthwt.event], edges)[0])
    assert sum(each.events + each.non_events for each in found) == 189


def test_edges_belong_to_the_upper_bin():
    risk = np.array([0.0, 0.05, 0.15, 0.3, 0.35, 1.0])
    found = bins(risk, np.zeros(6, dtype=bool))
    filled = [each.lower for each in found for _ in range(each.non_events)]
    assert filled == pytest.approx([0.0, 0.05, 0.15, 0.3, 0.35, 0.95])


def test_low_risks_get_finer_bins():
    found = bins(np.linspace(0.0001, 0.02, 200), np.arange(200) < 20)
    assert 8 <= len(found) <= 41
    assert found[0].upper - found[0].lower == pytest.approx(0.002)


def test_counts_are_people_in_bins():
    rng = np.random.default_rng(2)
    risk, event, counts = rng.random(50), rng.random(50) < 0.4, rng.integers(0, 4, 50)
    assert bins(risk, event, counts) == bins(np.repeat(risk, counts), np.repeat(event, counts))
