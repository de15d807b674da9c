"""From a description and a file to the numbers of the reference cases.

Values: base R 4.2.2 and code from the cited papers, see tests/reference/README.md. The tolerance
is 1e-6 relative: what the reference promises is tighter, what a reader could see is far wider.
"""

from __future__ import annotations

import copy
import math

import pytest
from tests.pipeline.conftest import BINARY, BIRTHWT, reference

CLOSE = 1e-6
# The order in which the reference lists coefficients, as (term, level) of ours.
BIRTHWT_TERMS = [
    ("age", None), ("lwt", None), ("race", "black"), ("race", "other"),
    ("smoke", None), ("ptl", None), ("ht", None), ("ui", None),
]  # fmt: skip


def by_term(estimates):
    return {(found.term, found.level): found for found in estimates}


@pytest.fixture
def birthwt(analysed):
    return analysed(BIRTHWT)


def test_birthwt_adjusted_estimates_with_profile_limits(birthwt):
    expected = reference("birthwt")
    found = by_term(birthwt.estimates.adjusted)
    for place, key in enumerate(BIRTHWT_TERMS, start=1):
        estimate = found[key]
        assert estimate.log_odds_ratio == pytest.approx(expected["coefficients"][place], rel=CLOSE)
        assert estimate.standard_error == pytest.approx(expected["standard_errors"][place], rel=CLOSE)
        assert math.log(estimate.lower) == pytest.approx(expected["profile_lower"][place], rel=CLOSE)
        assert math.log(estimate.upper) == pytest.approx(expected["profile_upper"][place], rel=CLOSE)
        assert estimate.odds_ratio == pytest.approx(expected["odds_ratios"][place], rel=CLOSE)


def test_birthwt_wald_limits_on_request(analysed):
    expected = reference("birthwt")
    description = copy.deepcopy(BIRTHWT)
    description["analysis"] = {"intervals": "Wald"}
    found = by_term(analysed(description).estimates.adjusted)
    for place, key in enumerate(BIRTHWT_TERMS, start=1):
        estimate = found[key]
        assert math.log(estimate.lower) == pytest.approx(expected["wald_lower"][place], rel=CLOSE)
        assert math.log(estimate.upper) == pytest.approx(expected["wald_upper"][place], rel=CLOSE)
        assert estimate.p_value == pytest.approx(expected["wald_p"][place], rel=CLOSE)
        assert (estimate.interval, estimate.test) == ("Wald", "Wald")


def test_birthwt_crude_estimates_on_the_same_rows(birthwt):
    found = by_term(birthwt.estimates.crude)
    for crude in reference("birthwt")["crude"]:
        if crude["term"] not in {term for term, _ in BIRTHWT_TERMS}:
            continue
        levels = [level for term, level in BIRTHWT_TERMS if term == crude["term"]]
        assert crude["n"] == birthwt.participants.analysed
        for level, coefficient, error in zip(
            levels, crude["coefficients"], crude["standard_errors"], strict=True
        ):
            assert found[crude["term"], level].log_odds_ratio == pytest.approx(coefficient, rel=CLOSE)
            assert found[crude["term"], level].standard_error == pytest.approx(error, rel=CLOSE)


def test_birthwt_term_tests(birthwt):
    found = {test.term: test for test in birthwt.term_tests}
    for expected in reference("birthwt")["term_tests"]:
        test = found[expected["term"]]
        assert test.df == expected["df"]
        assert test.statistic == pytest.approx(expected["statistic"], rel=CLOSE)
        assert test.p_value == pytest.approx(expected["p_value"], rel=CLOSE)


def test_birthwt_model_summaries(birthwt):
    expected, model = reference("birthwt"), birthwt.model
    assert (model.n, model.events) == (expected["n"], expected["events"])
    for name in ("log_likelihood", "null_log_likelihood", "deviance", "aic", "bic"):
        assert getattr(model, name) == pytest.approx(expected[name], rel=CLOSE)
    assert model.likelihood_ratio == pytest.approx(expected["model_likelihood_ratio"], rel=CLOSE)
    assert model.likelihood_ratio_p == pytest.approx(expected["model_p"], rel=CLOSE)
    for name in ("cox_snell", "nagelkerke", "mcfadden", "tjur"):
        assert getattr(model.r_squared, name) == pytest.approx(expected["r_squared"][name], rel=CLOSE)
    # The reference lists terms in another order: compare entry by entry through the names.
    ours = {("(intercept)", None): 0}
    for place, name in enumerate(model.parameters):
        ours[model.terms[place], name] = place
    order = [0] + [
        next(
            place
            for place, parameter in enumerate(model.parameters)
            if model.terms[place] == term and (level is None or level in parameter)
        )
        for term, level in BIRTHWT_TERMS
    ]
    for row, i in enumerate(order):
        for column, j in enumerate(order):
            assert model.covariance[i][j] == pytest.approx(
                expected["covariance"][row][column], rel=CLOSE, abs=1e-12
            )


def test_birthwt_trust(birthwt):
    expected = reference("birthwt")
    assert birthwt.discrimination.auc == pytest.approx(expected["discrimination"]["auc"], rel=CLOSE)
    assert birthwt.discrimination.standard_error == pytest.approx(
        expected["discrimination"]["standard_error"], rel=CLOSE
    )
    lower, upper = expected["discrimination"]["logit_interval"]
    assert birthwt.discrimination.lower == pytest.approx(lower, rel=CLOSE)
    assert birthwt.discrimination.upper == pytest.approx(upper, rel=CLOSE)
    calibration = birthwt.calibration
    assert calibration.brier == pytest.approx(expected["brier"], rel=CLOSE)
    assert calibration.scaled_brier == pytest.approx(expected["scaled_brier"], rel=CLOSE)
    assert calibration.spiegelhalter_z == pytest.approx(expected["calibration"]["spiegelhalter_z"], rel=CLOSE)
    test = calibration.hosmer_lemeshow
    assert test.statistic == pytest.approx(expected["hosmer_lemeshow"]["statistic"], rel=CLOSE)
    assert (test.df, test.groups) == (8, 10)
    assert test.p_value == pytest.approx(expected["hosmer_lemeshow"]["p_value"], rel=CLOSE)
    for group, row in zip(calibration.groups, expected["hosmer_lemeshow"]["table"], strict=True):
        assert (group.n, group.observed) == (row["n"], row["observed"])
        assert group.expected == pytest.approx(row["expected"], rel=CLOSE)
    for name in ("ici", "e50", "e90", "emax"):
        assert getattr(calibration, name) == pytest.approx(expected["smooth_calibration"][name], rel=CLOSE)
    # 1 and 0 by construction on the fitting data: never offered as evidence.
    assert calibration.slope is None
    assert calibration.in_the_large is None
    assert birthwt.sample_size.shrinkage == pytest.approx(expected["heuristic_shrinkage"], rel=CLOSE)
    assert birthwt.influence.largest_leverage == pytest.approx(
        expected["influence"]["max_leverage"], rel=CLOSE
    )
    assert birthwt.influence.largest_cook == pytest.approx(
        expected["influence"]["max_cook_distance"], rel=CLOSE
    )
    gvif = {found.term: found.gvif for found in birthwt.collinearity.gvif}
    for row in expected["collinearity"]["gvif"]:
        assert gvif[row["term"]] == pytest.approx(row["gvif"], rel=CLOSE)
    assert birthwt.collinearity.condition_index == pytest.approx(
        expected["collinearity"]["max_condition_index"], rel=CLOSE
    )


def test_birthwt_fourfold_table(birthwt):
    expected, table = reference("birthwt")["fourfold_smoke"], birthwt.tables[0]
    assert (table.a, table.b, table.c, table.d) == (
        expected["exposed_events"], expected["exposed_non_events"],
        expected["unexposed_events"], expected["unexposed_non_events"],
    )  # fmt: skip
    assert table.odds_ratio.estimate == pytest.approx(expected["odds_ratio"], rel=CLOSE)
    assert [table.odds_ratio.lower, table.odds_ratio.upper] == pytest.approx(
        expected["woolf_interval"], rel=CLOSE
    )
    assert table.risk_ratio.estimate == pytest.approx(expected["risk_ratio"], rel=CLOSE)
    assert [table.risk_difference.lower, table.risk_difference.upper] == pytest.approx(
        expected["risk_difference_newcombe"], rel=CLOSE
    )
    assert table.chi_squared == pytest.approx(expected["chi_squared"], rel=CLOSE)
    assert table.fisher_p == pytest.approx(expected["fisher_p"], rel=CLOSE)


@pytest.mark.parametrize("case", [0, 1, 2])
def test_birthwt_spline_of_weight(analysed, case):
    expected = reference("birthwt")["spline_lwt"][case]
    description = copy.deepcopy(BIRTHWT)
    description["variables"]["lwt"]["shape"] = {"spline": {"knots": expected["knots_number"]}}
    results = analysed(description)
    weight = next(found for found in results.variables if found.name == "lwt")
    assert weight.knots == pytest.approx(expected["knots"], rel=CLOSE)
    assert results.model.log_likelihood == pytest.approx(expected["log_likelihood"], rel=CLOSE)


def test_separated_exposure_has_its_one_limit_and_no_estimate(analysed):
    expected = reference("separated")
    results = analysed(
        {
            "study": {"title": "Separated", "design": "cohort", "purpose": "association"},
            "data": {"file": "separated.csv"},
            "variables": {
                "event": {"label": "Event", **BINARY},
                "exposed": {"label": "Exposed", **BINARY},
                "age": {"label": "Age", "kind": "quantity", "unit": "years"},
            },
            "outcome": "event",
            "exposures": ["exposed"],
            "covariates": ["age"],
            "disclosure": {"smallest_count": 0},
        }
    )
    exposed = by_term(results.estimates.adjusted)["exposed", None]
    assert exposed.note == "separated upward"
    assert exposed.odds_ratio is None
    assert exposed.standard_error is None
    assert exposed.upper is None
    assert math.log(exposed.lower) == pytest.approx(expected["divergent"]["finite_profile_limit"], rel=CLOSE)
    assert exposed.p_value == pytest.approx(expected["divergent"]["likelihood_ratio_p"], rel=CLOSE)
    assert results.model.separation == "quasi-complete"
    assert results.model.log_likelihood == pytest.approx(
        expected["divergent"]["supremum_log_likelihood"], rel=CLOSE
    )
    # The rest stands: age keeps a finite estimate.
    assert by_term(results.estimates.adjusted)["age", None].odds_ratio is not None


def test_incomplete_cases_are_counted_and_fitted(analysed):
    expected = reference("incomplete")
    description = copy.deepcopy(BIRTHWT)
    description["data"]["file"] = "incomplete.csv"
    del description["variables"]["ptl"]
    description["covariates"].remove("ptl")
    results = analysed(description)
    complete = expected["complete_cases"]
    assert results.participants.read == 189
    assert results.participants.analysed == complete["n"]
    found = by_term(results.estimates.adjusted)
    parameters = dict(zip(complete["parameters"], complete["coefficients"], strict=True))
    assert found["age", None].log_odds_ratio == pytest.approx(parameters["age"], rel=CLOSE)
    assert found["lwt", None].log_odds_ratio == pytest.approx(parameters["lwt"], rel=CLOSE)
