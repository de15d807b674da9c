"""Calibration in the large, slope, curve and overall accuracy."""

from __future__ import annotations

import math
from typing import Any

import numpy as np
import pytest
import statsmodels.api as sm
from hypothesis import given, settings
from hypothesis import strategies as st
from sklearn.metrics import brier_score_loss

from fourfold.assessment import overall
from fourfold.assessment.calibration import (
    calibration,
    in_the_large,
    observed_expected,
    recalibrate,
    slope,
    smooth_curve,
)
from fourfold.measures.binomial_fit import binomial_fit


def test_recalibration_of_an_equation(equation: Any):
    # Base R 4.2.2: calibration of equation.json. R keeps the weights of the step before the last
    # for its standard errors, hence 1e-6 there (statsmodels below is compared closely).
    expected = equation.expected["calibration"]
    found = recalibrate(equation.log_odds, equation.event)
    assert found.in_the_large == pytest.approx(expected["in_the_large"], rel=1e-10)
    assert found.in_the_large_error == pytest.approx(expected["in_the_large_se"], rel=1e-6)
    assert found.slope == pytest.approx(expected["slope"], rel=1e-10)
    assert found.slope_error == pytest.approx(expected["slope_se"], rel=1e-6)
    assert found.intercept == pytest.approx(expected["intercept_beside_slope"], rel=1e-10)
    likelihoods = expected["recalibration_log_likelihoods"]
    assert found.original == pytest.approx(likelihoods["original"], rel=1e-12)
    assert found.moved == pytest.approx(likelihoods["intercept"], rel=1e-12)
    assert found.stretched == pytest.approx(likelihoods["intercept_and_slope"], rel=1e-12)
    assert found.statistic == pytest.approx(expected["unreliability_statistic"], rel=1e-10)
    assert found.p_value == pytest.approx(expected["unreliability_p"], rel=1e-9)
    assert observed_expected(equation.risk, equation.event) == pytest.approx(
        expected["observed_expected"], rel=1e-12
    )
    assert in_the_large(equation.log_odds, equation.event) == (
        found.in_the_large,
        found.in_the_large_error,
    )
    assert slope(equation.log_odds, equation.event) == (found.slope, found.slope_error)


def test_standard_errors_of_recalibration(equation: Any):
    # statsmodels GLM run to convergence.
    X = sm.add_constant(equation.log_odds)
    theirs = sm.GLM(equation.event.astype(float), X, family=sm.families.Binomial()).fit(
        tol=1e-15, tol_criterion="params", maxiter=100
    )
    assert slope(equation.log_odds, equation.event)[1] == pytest.approx(theirs.bse[1], rel=1e-9)


def test_fitting_data_say_nothing(fitted: Any):
    # Base R 4.2.2 and identity: 0 and 1 on the data of a maximum likelihood fit.
    found = recalibrate(fitted.log_odds, fitted.event)
    assert found.in_the_large == pytest.approx(0, abs=1e-10)
    assert found.slope == pytest.approx(1, abs=1e-10)
    assert found.slope_error == pytest.approx(fitted.expected["calibration"]["slope_se"], rel=1e-8)
    assert observed_expected(fitted.risk, fitted.event) == pytest.approx(1, rel=1e-10)


@given(st.integers(0, 10_000))
@settings(max_examples=40, deadline=None)
def test_slope_one_on_any_fitting_data(seed: int):
    # Property: whatever the design, after maximum likelihood intercept 0 and slope 1.
    rng = np.random.default_rng(seed)
    X = np.column_stack([np.ones(200), rng.normal(size=(200, 3))])
    event = rng.random(200) < 1 / (1 + np.exp(-(X @ rng.uniform(-0.7, 0.7, 4))))
    fit = binomial_fit(X, event, np.ones(200))
    assert fit.converged
    found = recalibrate(X @ fit.coefficients, event)
    assert found.in_the_large == pytest.approx(0, abs=1e-9)
    assert found.slope == pytest.approx(1, abs=1e-8)


def test_counts_are_people_in_recalibration(equation: Any):
    counts = np.random.default_rng(3).integers(1, 4, equation.event.size)
    counted = recalibrate(equation.log_odds, equation.event, counts)
    repeated = recalibrate(np.repeat(equation.log_odds, counts), np.repeat(equation.event, counts))
    assert counted.slope == pytest.approx(repeated.slope, rel=1e-10)
    assert counted.in_the_large == pytest.approx(repeated.in_the_large, rel=1e-10)


def test_perfect_order_has_no_slope():
    found = recalibrate(np.linspace(-2, 2, 40), np.linspace(-2, 2, 40) > 0)
    assert math.isnan(found.slope)
    assert math.isfinite(found.in_the_large)


def test_one_risk_for_all_has_no_slope():
    assert math.isnan(slope(np.full(40, -1.0), np.arange(40) < 10)[0])


def agrees_with_loess(expected: dict[str, float], risk: np.ndarray, event: np.ndarray) -> None:
    found = smooth_curve(risk, event)
    for name in ("ici", "e50", "e90", "emax"):
        assert getattr(found, name) == pytest.approx(expected[name], rel=1e-6)


def test_smooth_calibration_agrees_with_loess(birthwt: Any, equation: Any):
    # Base R 4.2.2 loess, span .75, degree 2, surface "direct", cut to 0-1: smooth_calibration of
    # birthwt.json and equation.json. R sets weights within 1/1000 of the reach to 1, hence 1e-6.
    for case in (birthwt, equation):
        agrees_with_loess(case.expected["smooth_calibration"], case.risk, case.event)


def test_smooth_calibration_with_heavy_ties(bacteria: Any):
    # Base R 4.2.2 loess as above on 220 people of 15 distinct risks; printed to 12 digits.
    found = smooth_curve(bacteria.risk, bacteria.event)
    assert found.ici == pytest.approx(0.0414027802945, rel=1e-6)
    assert found.e50 == pytest.approx(0.0323479600056, rel=1e-6)
    assert found.e90 == pytest.approx(0.0875467477278, rel=1e-6)
    assert found.emax == pytest.approx(0.1365729576289, rel=1e-6)


def test_curve_stays_between_percentiles_and_bounds(equation: Any):
    found = smooth_curve(equation.risk, equation.event)
    xs = [point.x for point in found.curve]
    assert xs[0] == pytest.approx(np.quantile(equation.risk, 0.01))
    assert xs[-1] == pytest.approx(np.quantile(equation.risk, 0.99))
    assert len(xs) <= 200
    for point in found.curve:
        assert 0 <= point.lower <= point.y <= point.upper <= 1


def test_curve_band_covers_the_truth():
    # Simulation, seed fixed: pointwise 95% bands hold a straight truth about 95% of the time.
    inside = []
    rng = np.random.default_rng(12)
    for _ in range(200):
        risk = rng.uniform(0.1, 0.6, 400)
        event = rng.random(400) < 0.05 + 0.9 * risk
        for point in smooth_curve(risk, event, points=5).curve:
            inside.append(point.lower <= 0.05 + 0.9 * point.x <= point.upper)
    assert 0.92 < np.mean(inside) < 0.97


def test_counts_are_people_in_the_curve(equation: Any):
    counts = np.random.default_rng(5).integers(1, 4, equation.event.size)
    counted = smooth_curve(equation.risk, equation.event, counts)
    repeated = smooth_curve(np.repeat(equation.risk, counts), np.repeat(equation.event, counts))
    assert counted.ici == pytest.approx(repeated.ici, rel=1e-10)
    assert counted.e90 == pytest.approx(repeated.e90, rel=1e-10)
    assert [p.upper for p in counted.curve] == pytest.approx([p.upper for p in repeated.curve], rel=1e-9)


def test_gathered_curve_is_close_and_says_so():
    # Against the same smoother over every distinct risk (its own definition, not gathered).
    rng = np.random.default_rng(7)
    risk = rng.beta(2, 5, 4_000)
    event = rng.random(4_000) < risk**1.3
    found = smooth_curve(risk, event)
    assert "1,500 groups" in found.method
    with pytest.MonkeyPatch.context() as patch:
        patch.setattr("fourfold.assessment.smooth_calibration.MOST_RISKS", 10_000)
        whole = smooth_curve(risk, event)
    assert "1,500" not in whole.method
    assert found.ici == pytest.approx(whole.ici, rel=1e-3)
    assert found.e90 == pytest.approx(whole.e90, rel=1e-3)
    # One extreme person decides it; a thousandth of risk is the last digit ever printed.
    assert found.emax == pytest.approx(whole.emax, abs=1e-3)
    assert [p.y for p in found.curve] == pytest.approx([p.y for p in whole.curve], abs=5e-4)


def test_few_risks_have_no_curve():
    found = smooth_curve(np.repeat([0.1, 0.2, 0.4], 20), np.tile(np.arange(20) < 5, 3))
    assert found.curve == []
    assert found.ici is None


def test_overall_accuracy(fitted: Any):
    # Base R 4.2.2: Brier score, Spiegelhalter's z and the four R squared of each case.
    expected = fitted.expected
    assert overall.brier(fitted.risk, fitted.event) == pytest.approx(expected["brier"], rel=1e-12)
    assert overall.scaled_brier(fitted.risk, fitted.event) == pytest.approx(
        expected["scaled_brier"], rel=1e-10
    )
    z, p = overall.spiegelhalter(fitted.risk, fitted.event)
    assert z == pytest.approx(expected["calibration"]["spiegelhalter_z"], rel=1e-9)
    assert p == pytest.approx(expected["calibration"]["spiegelhalter_p"], rel=1e-9)
    found = overall.r_squared(
        expected["log_likelihood"],
        expected["null_log_likelihood"],
        expected["n"],
        fitted.risk,
        fitted.event,
    )
    for name, value in expected["r_squared"].items():
        assert getattr(found, name) == pytest.approx(value, rel=1e-10)


def test_overall_accuracy_on_new_data(equation: Any):
    # Base R 4.2.2: equation.json.
    expected = equation.expected
    assert overall.brier(equation.risk, equation.event) == pytest.approx(expected["brier"], rel=1e-12)
    assert overall.scaled_brier(equation.risk, equation.event) == pytest.approx(
        expected["scaled_brier"], rel=1e-10
    )
    z, p = overall.spiegelhalter(equation.risk, equation.event)
    assert z == pytest.approx(expected["calibration"]["spiegelhalter_z"], rel=1e-10)
    assert p == pytest.approx(expected["calibration"]["spiegelhalter_p"], rel=1e-9)


@pytest.mark.parametrize("seed", range(50))
def test_brier_against_scikit_learn(seed: int):
    # sklearn.metrics.brier_score_loss, with and without weights.
    rng = np.random.default_rng(seed)
    risk = rng.random(80)
    event, counts = rng.random(80) < risk, rng.integers(1, 5, 80)
    assert overall.brier(risk, event) == pytest.approx(brier_score_loss(event, risk), rel=1e-12)
    assert overall.brier(risk, event, counts) == pytest.approx(
        brier_score_loss(event, risk, sample_weight=counts), rel=1e-12
    )
    repeated = np.repeat(risk, counts), np.repeat(event, counts)
    assert overall.scaled_brier(risk, event, counts) == pytest.approx(overall.scaled_brier(*repeated))
    assert overall.spiegelhalter(risk, event, counts) == pytest.approx(overall.spiegelhalter(*repeated))


def test_certain_risks_have_no_z():
    assert overall.spiegelhalter(np.array([0.0, 1.0]), np.array([False, True])) == (None, None)


def test_assembled_on_fitting_data_hides_what_is_by_construction(birthwt: Any):
    found = calibration(birthwt.risk, birthwt.event)
    assert found.basis == "fitting data"
    assert found.in_the_large is None
    assert found.slope is None
    assert found.brier == pytest.approx(birthwt.expected["brier"], rel=1e-12)
    assert found.hosmer_lemeshow is not None
    assert len(found.groups) == 10
    assert "span 0.75" in found.curve_method


def test_assembled_on_new_data(equation: Any):
    # Base R 4.2.2: equation.json.
    found = calibration(equation.risk, equation.event, new_data=True)
    assert found.slope == pytest.approx(equation.expected["calibration"]["slope"], rel=1e-9)
    assert found.in_the_large == pytest.approx(equation.expected["calibration"]["in_the_large"], rel=1e-9)
    assert found.hosmer_lemeshow is not None
    assert found.hosmer_lemeshow.df == 10


def test_assembled_with_absolute_risk_withheld(birthwt: Any):
    found = calibration(birthwt.risk, birthwt.event, withheld="sampled by outcome")
    assert found.withheld == "sampled by outcome"
    assert found.brier is None
    assert found.spiegelhalter_z is None
    assert found.ici is None
    assert found.curve == []
    assert found.hosmer_lemeshow is not None
    assert len(found.groups) == 10
