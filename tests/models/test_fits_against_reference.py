"""Fits against base R ``glm`` (epsilon 1e-14) and the roots of R's profile deviance, as held in
``tests/reference``; the cases say in ``software`` what made them."""

from __future__ import annotations

import numpy as np
import pytest
from tests.models.model_cases import (
    BIRTHWT,
    Case,
    bacteria,
    births,
    birthwt,
    equation,
    expected,
    household,
    infert,
    table,
)

from fourfold.models import logistic, profile
from fourfold.models import tests as model_tests
from fourfold.models.blocks import Blocks

CLOSE = 1e-9


def check_block(case: Case, block: dict, width: int = 64) -> None:
    """Everything that a reference block of a logistic fit holds about the estimation."""
    names = block["parameters"]
    blocks = case.blocks(names, width)
    fit = logistic.fit(blocks, case.event)
    assert fit.converged
    assert fit.coefficients == pytest.approx(block["coefficients"], rel=CLOSE)
    assert np.sqrt(np.diagonal(fit.covariance)) == pytest.approx(block["standard_errors"], rel=CLOSE)
    if "covariance" in block:
        assert fit.covariance == pytest.approx(np.array(block["covariance"]), rel=CLOSE, abs=1e-15)
    if "log_likelihood" in block:
        assert fit.log_likelihood == pytest.approx(block["log_likelihood"], rel=1e-12)
    if "null_log_likelihood" in block:
        assert fit.null_log_likelihood == pytest.approx(block["null_log_likelihood"], rel=1e-12)
    columns = list(range(len(names)))
    if "profile_lower" in block:
        limits = profile.profile_limits(blocks, case.event, fit, columns)
        assert limits.lower == pytest.approx(block["profile_lower"], rel=CLOSE)
        assert limits.upper == pytest.approx(block["profile_upper"], rel=CLOSE)
    for test in block.get("term_tests", []):
        dropped = tuple(place for place in columns if names[place].startswith(test["term"]) and place)
        (ratio,) = model_tests.likelihood_ratio(blocks, case.event, fit, [dropped])
        assert ratio.df == test["df"]
        assert ratio.statistic == pytest.approx(test["statistic"], rel=CLOSE)
        assert ratio.p_value == pytest.approx(test["p_value"], rel=CLOSE)
        wald = model_tests.wald(fit, dropped)
        assert wald.statistic == pytest.approx(test["wald_statistic"], rel=CLOSE)
        assert wald.p_value == pytest.approx(test["wald_p_value"], rel=CLOSE)


@pytest.mark.parametrize("width", [7, 64, 4096])
def test_births_full_block(width: int) -> None:
    # R 4.2.2 glm and profile roots on MASS::birthwt, 189 births, 59 events.
    case = birthwt()
    check_block(case, case.expected, width)


def test_births_with_visits() -> None:
    case = birthwt()
    check_block(case, case.expected["with_ftv"])


def test_births_model_likelihood_ratio() -> None:
    case = birthwt()
    blocks = case.blocks(case.expected["parameters"])
    fit = logistic.fit(blocks, case.event)
    (whole,) = model_tests.likelihood_ratio(blocks, case.event, fit, [tuple(range(1, 9))])
    assert whole.statistic == pytest.approx(case.expected["model_likelihood_ratio"], rel=1e-11)
    assert whole.df == case.expected["model_df"]
    assert whole.p_value == pytest.approx(case.expected["model_p"], rel=1e-10)
    assert 2 * (fit.log_likelihood - fit.null_log_likelihood) == pytest.approx(whole.statistic, rel=1e-11)


def test_births_all_terms_tested_together_as_alone() -> None:
    case = birthwt()
    names = case.expected["parameters"]
    blocks = case.blocks(names)
    fit = logistic.fit(blocks, case.event)
    groups = [tuple(names.index(name) for name in members) for members in BIRTHWT.values()]
    together = model_tests.likelihood_ratio(blocks, case.event, fit, groups)
    by_term = {test["term"]: test["statistic"] for test in case.expected["term_tests"]}
    assert {term: test.statistic for term, test in zip(BIRTHWT, together, strict=True)} == pytest.approx(
        by_term, rel=CLOSE
    )


@pytest.mark.parametrize("place", range(8))
def test_births_crude(place: int) -> None:
    case = birthwt()
    crude = case.expected["crude"][place]
    blocks = case.blocks(["(Intercept)", *crude["parameters"]])
    fit = logistic.fit(blocks, case.event)
    columns = list(range(1, blocks.p))
    assert fit.coefficients[1:] == pytest.approx(crude["coefficients"], rel=CLOSE)
    assert np.sqrt(np.diagonal(fit.covariance))[1:] == pytest.approx(crude["standard_errors"], rel=CLOSE)
    limits = profile.profile_limits(blocks, case.event, fit, columns)
    assert limits.lower == pytest.approx(crude["profile_lower"], rel=CLOSE)
    assert limits.upper == pytest.approx(crude["profile_upper"], rel=CLOSE)
    (ratio,) = model_tests.likelihood_ratio(blocks, case.event, fit, [tuple(columns)])
    assert ratio.statistic == pytest.approx(crude["likelihood_ratio"], rel=CLOSE)
    assert ratio.p_value == pytest.approx(crude["likelihood_ratio_p"], rel=CLOSE)


def test_births_interaction() -> None:
    case = birthwt()
    block = case.expected["interaction_smoke_ui"]
    case.columns["smokeyes:uiyes"] = case.columns["smokeyes"] * case.columns["uiyes"]
    check_block(
        case, {key: block[key] for key in ("parameters", "coefficients", "standard_errors", "log_likelihood")}
    )
    blocks = case.blocks(block["parameters"])
    fit = logistic.fit(blocks, case.event)
    (ratio,) = model_tests.likelihood_ratio(blocks, case.event, fit, [(9,)])
    assert ratio.statistic == pytest.approx(block["multiplicative_likelihood_ratio"], rel=CLOSE)


@pytest.mark.parametrize("place", range(6))
def test_births_without_one_covariate(place: int) -> None:
    case = birthwt()
    left_out = case.expected["leave_one_covariate_out_smoke"][place]
    names = [name for name in case.expected["parameters"] if name not in BIRTHWT[left_out["left_out"]]]
    fit = logistic.fit(case.blocks(names), case.event)
    smoke = names.index("smokeyes")
    assert fit.coefficients[smoke] == pytest.approx(left_out["log_odds_ratio"], rel=CLOSE)
    assert fit.covariance[smoke, smoke] ** 0.5 == pytest.approx(left_out["standard_error"], rel=CLOSE)


def test_bacteria() -> None:
    case = bacteria()
    check_block(case, case.expected)


def test_complete_cases_of_incomplete_births() -> None:
    frame = table("incomplete").dropna()
    case = Case(births(frame), (frame.low == "yes").to_numpy(), {})
    check_block(case, expected("incomplete")["complete_cases"])


@pytest.mark.parametrize("copy", range(5))
def test_completed_copies_of_incomplete_births(copy: int) -> None:
    frame = table("incomplete-completed")
    frame = frame[frame.imputation == copy + 1]
    results = expected("incomplete")
    case = Case(births(frame), (frame.low == "yes").to_numpy(), {})
    fit = logistic.fit(case.blocks(results["pooled"]["parameters"]), case.event)
    copies = results["per_imputation"]
    assert fit.coefficients == pytest.approx(copies["coefficients"][copy], rel=CLOSE)
    assert np.sqrt(np.diagonal(fit.covariance)) == pytest.approx(copies["standard_errors"][copy], rel=CLOSE)


def test_matched_sets_fitted_wrongly_without_their_sets() -> None:
    case = infert()
    fit = logistic.fit(case.blocks(["(Intercept)", "spontaneous", "induced"]), case.event)
    assert fit.coefficients == pytest.approx(
        case.expected["unmatched_for_comparison"]["coefficients"], rel=CLOSE
    )


def test_survey_weights_as_frequencies_give_the_weighted_coefficients() -> None:
    # Only the coefficients are shared with survey::svyglm; its errors are not those of frequencies.
    case, weight = household()
    blocks = case.blocks(case.expected["parameters"])
    fit = logistic.fit(blocks, case.event, counts=weight)
    assert fit.coefficients == pytest.approx(case.expected["coefficients"], rel=1e-8)
    scaled = logistic.fit(blocks, case.event, counts=weight / weight.mean())
    assert scaled.coefficients == pytest.approx(fit.coefficients, rel=1e-9)


def test_offset_recalibrates_a_given_equation() -> None:
    # R glm with offset(linear predictor), and the profile roots of the slope, on the equation case.
    case, linear = equation()
    calibration = case.expected["calibration"]
    alone = case.blocks(["(Intercept)"])
    shift = logistic.fit(alone, case.event, offset=linear)
    assert shift.coefficients[0] == pytest.approx(calibration["in_the_large"], rel=CLOSE)
    # R keeps the weights of the step before the last; Newton's method in 40-digit decimal
    # arithmetic (Python's decimal) gives the first value.
    assert shift.covariance[0, 0] ** 0.5 == pytest.approx(0.11198980668186292, rel=1e-11)
    assert shift.covariance[0, 0] ** 0.5 == pytest.approx(calibration["in_the_large_se"], rel=1e-8)
    likelihoods = calibration["recalibration_log_likelihoods"]
    assert shift.log_likelihood == pytest.approx(likelihoods["intercept"], rel=1e-12)
    assert shift.null_log_likelihood == pytest.approx(shift.log_likelihood, rel=1e-12)
    (original,) = model_tests.likelihood_ratio(alone, case.event, shift, [(0,)], offset=linear)
    drop = 2 * (likelihoods["intercept"] - likelihoods["original"])
    assert original.statistic == pytest.approx(drop, rel=CLOSE)
    both = case.blocks(["(Intercept)", "linear"])
    fit = logistic.fit(both, case.event)
    assert fit.coefficients == pytest.approx(
        [calibration["intercept_beside_slope"], calibration["slope"]], rel=CLOSE
    )
    limits = profile.profile_limits(both, case.event, fit, [1])
    assert [limits.lower[0], limits.upper[0]] == pytest.approx(
        calibration["slope_profile_interval"], rel=CLOSE
    )


def test_profile_with_an_offset_is_the_profile_shifted() -> None:
    case = birthwt()
    blocks = case.blocks(case.expected["parameters"])
    shift = 0.3 * case.columns["smokeyes"]
    fit = logistic.fit(blocks, case.event, offset=shift)
    limits = profile.profile_limits(blocks, case.event, fit, [5, 2], offset=shift)
    assert limits.lower == pytest.approx(
        [case.expected["profile_lower"][5] - 0.3, case.expected["profile_lower"][2]], rel=CLOSE
    )
    assert limits.upper == pytest.approx(
        [case.expected["profile_upper"][5] - 0.3, case.expected["profile_upper"][2]], rel=CLOSE
    )


def test_contrast_of_one_coefficient_is_its_profile_and_test() -> None:
    case = birthwt()
    blocks = case.blocks(case.expected["parameters"])
    fit = logistic.fit(blocks, case.event)
    contrast = np.zeros(9)
    contrast[5] = 1.0
    found = profile.profile_contrast(blocks, case.event, fit, contrast)
    assert found.lower[0] == pytest.approx(case.expected["profile_lower"][5], rel=CLOSE)
    assert found.upper[0] == pytest.approx(case.expected["profile_upper"][5], rel=CLOSE)
    smoke = next(test for test in case.expected["term_tests"] if test["term"] == "smoke")
    assert found.statistic[0] == pytest.approx(smoke["statistic"], rel=CLOSE)
    assert found.p_value[0] == pytest.approx(smoke["p_value"], rel=CLOSE)


def test_contrast_of_levels_is_the_coefficient_after_recoding() -> None:
    # black against other is a coefficient once other is the reference: no second method needed.
    case = birthwt()
    names = case.expected["parameters"]
    blocks = case.blocks(names)
    fit = logistic.fit(blocks, case.event)
    contrast = np.zeros(9)
    contrast[[3, 4]] = 1.0, -1.0
    found = profile.profile_contrast(blocks, case.event, fit, contrast)
    case.columns["racewhite"] = 1 - case.columns["raceblack"] - case.columns["raceother"]
    recoded = Blocks.from_matrix(
        np.column_stack([case.columns[name] for name in [*names[:4], "racewhite", *names[5:]]]), 64
    )
    other = logistic.fit(recoded, case.event)
    limits = profile.profile_limits(recoded, case.event, other, [3])
    assert contrast @ fit.coefficients == pytest.approx(other.coefficients[3], rel=1e-10)
    assert found.lower[0] == pytest.approx(limits.lower[0], rel=CLOSE)
    assert found.upper[0] == pytest.approx(limits.upper[0], rel=CLOSE)


@pytest.mark.parametrize("confidence", [50.0, 90.0, 99.0, 99.9])
def test_deviance_at_the_limits_is_the_quantile(confidence: float) -> None:
    # The definition itself, by fits that hold the coefficient through an offset.
    from scipy.stats import chi2

    case = birthwt()
    names = case.expected["parameters"]
    blocks = case.blocks(names)
    fit = logistic.fit(blocks, case.event)
    limits = profile.profile_limits(blocks, case.event, fit, [2, 7], confidence)
    for place, column in enumerate((2, 7)):
        others = case.blocks([name for name in names if name != names[column]])
        for limit in (limits.lower[place], limits.upper[place]):
            held = logistic.fit(others, case.event, offset=limit * case.columns[names[column]])
            drop = 2 * (fit.log_likelihood - held.log_likelihood)
            assert drop == pytest.approx(chi2.ppf(confidence / 100, 1), abs=2e-9)
