"""Data at the edge: no contrast, unlike scales, near dependence, few rows."""

from __future__ import annotations

import numpy as np
import pytest
from tests.models.model_cases import birthwt, random_design

from fourfold.errors import EstimationError
from fourfold.models import logistic, profile, rank, separation
from fourfold.models import tests as model_tests
from fourfold.models.blocks import Blocks


@pytest.mark.parametrize(("event", "who"), [(np.zeros(30, bool), "No one"), (np.ones(30, bool), "Everyone")])
def test_outcome_that_does_not_vary(event: np.ndarray, who: str) -> None:
    with pytest.raises(EstimationError, match=f"{who} of the 30"):
        logistic.fit(Blocks.from_matrix(np.ones((30, 1))), event)


def test_events_that_stand_for_no_one() -> None:
    event = np.arange(30) < 5
    with pytest.raises(EstimationError, match="No one of the 25"):
        logistic.fit(Blocks.from_matrix(np.ones((30, 1))), event, counts=(~event).astype(np.int64))


def test_no_row_at_all() -> None:
    with pytest.raises(EstimationError, match="No one is left"):
        logistic.fit(Blocks.from_matrix(np.ones((0, 1))), np.zeros(0, bool))


def test_dependent_columns_are_refused() -> None:
    x, event = random_design(1)
    with pytest.raises(EstimationError, match="computed from the others"):
        logistic.fit(Blocks.from_matrix(np.column_stack([x, 2 * x[:, 1]])), event)


def test_fewer_rows_than_columns_are_refused() -> None:
    rng = np.random.default_rng(0)
    x = np.column_stack([np.ones(5), rng.normal(size=(5, 7))])
    with pytest.raises(EstimationError):
        logistic.fit(Blocks.from_matrix(x), np.array([True, False, True, False, True]))


def test_shapes_that_do_not_belong_together() -> None:
    x, event = random_design(2)
    with pytest.raises(ValueError, match="event has shape"):
        logistic.fit(Blocks.from_matrix(x), event[:-1])
    with pytest.raises(ValueError, match="do not hold"):
        Blocks(np.zeros((1, 2, 8)), 9)
    with pytest.raises(ValueError, match="expected numpy, compiled or auto"):
        logistic.fit(Blocks.from_matrix(x), event, engine="fast")


def test_intercept_alone() -> None:
    event = np.arange(40) < 11
    blocks = Blocks.from_matrix(np.ones((40, 1)), 16)
    fit = logistic.fit(blocks, event)
    assert fit.coefficients[0] == pytest.approx(np.log(11 / 29), rel=1e-12)
    assert fit.covariance[0, 0] == pytest.approx(1 / 11 + 1 / 29, rel=1e-12)
    assert fit.log_likelihood == pytest.approx(fit.null_log_likelihood, rel=1e-14)
    limits = profile.profile_limits(blocks, event, fit, [0])
    for limit in (limits.lower[0], limits.upper[0]):
        at_limit = 11 * limit - 40 * np.logaddexp(0, limit)
        assert 2 * (fit.log_likelihood - at_limit) == pytest.approx(3.841458820694124, abs=1e-9)


def test_single_column_without_intercept() -> None:
    rng = np.random.default_rng(3)
    x = rng.normal(size=(200, 1))
    event = rng.random(200) < 1 / (1 + np.exp(-x[:, 0]))
    blocks = Blocks.from_matrix(x, 64)
    fit = logistic.fit(blocks, event)
    assert (event - 1 / (1 + np.exp(-x[:, 0] * fit.coefficients[0]))) @ x[:, 0] == pytest.approx(0, abs=1e-10)
    (ratio,) = model_tests.likelihood_ratio(blocks, event, fit, [(0,)])
    assert ratio.statistic == pytest.approx(2 * (fit.log_likelihood + 200 * np.log(2)), rel=1e-11)


@pytest.mark.parametrize("scale", [1e-8, 1e-4, 1.0, 1e4, 1e8])
def test_scale_of_a_column(scale: float) -> None:
    case = birthwt()
    names = case.expected["parameters"]
    x = np.column_stack([case.columns[name] for name in names])
    x[:, 2] *= scale
    blocks = Blocks.from_matrix(x, 64)
    assert rank.dependent(blocks) == []
    assert separation.detect(blocks, case.event).kind is None
    fit = logistic.fit(blocks, case.event)
    unit = np.ones(9)
    unit[2] = scale
    assert fit.coefficients * unit == pytest.approx(case.expected["coefficients"], rel=1e-9)
    covariance = fit.covariance * np.outer(unit, unit)
    assert covariance == pytest.approx(np.array(case.expected["covariance"]), rel=1e-8, abs=1e-15)
    limits = profile.profile_limits(blocks, case.event, fit, range(9))
    assert limits.lower * unit == pytest.approx(case.expected["profile_lower"], rel=1e-8)
    assert limits.upper * unit == pytest.approx(case.expected["profile_upper"], rel=1e-8)


@pytest.mark.parametrize("origin", [1e3, 1e6, 1e8])
def test_origin_far_away(origin: float) -> None:
    # Ages added to a large number keep their estimate; the numbers hold them to origin * 2^-53.
    case = birthwt()
    names = case.expected["parameters"]
    x = np.column_stack([case.columns[name] for name in names])
    x[:, 1] += origin
    blocks = Blocks.from_matrix(x, 64)
    assert rank.dependent(blocks) == []
    fit = logistic.fit(blocks, case.event)
    assert fit.coefficients[1:] == pytest.approx(case.expected["coefficients"][1:], rel=1e-9)
    assert np.sqrt(np.diagonal(fit.covariance))[1:] == pytest.approx(
        case.expected["standard_errors"][1:], rel=1e-9
    )
    limits = profile.profile_limits(blocks, case.event, fit, range(1, 9))
    assert limits.lower == pytest.approx(case.expected["profile_lower"][1:], rel=1e-8)
    shifted = case.expected["coefficients"][0] - origin * case.expected["coefficients"][1]
    assert fit.coefficients[0] == pytest.approx(shifted, rel=1e-8)
    tests = model_tests.likelihood_ratio(blocks, case.event, fit, [(1,), (5,)])
    statistics = {test["term"]: test["statistic"] for test in case.expected["term_tests"]}
    assert [test.statistic for test in tests] == pytest.approx(
        [statistics["age"], statistics["smoke"]], rel=1e-8
    )


@pytest.mark.parametrize("share", [1e-2, 1e-4, 1e-6])
def test_nearly_dependent_columns(share: float) -> None:
    # The same model in columns that are not alike: (x, x + share z) against (x, z).
    rng = np.random.default_rng(3)
    n = 2000
    x, z = rng.normal(size=(2, n))
    event = rng.random(n) < 1 / (1 + np.exp(-(x - 0.5 + 0.3 * z)))
    near = np.column_stack([np.ones(n), x, x + share * z])
    apart = np.column_stack([np.ones(n), x, (near[:, 2] - x) / share])
    plain = logistic.fit(Blocks.from_matrix(apart, 512), event)
    fit = logistic.fit(Blocks.from_matrix(near, 512), event)
    change = np.array([[1, 0, 0], [0, 1, -1 / share], [0, 0, 1 / share]])
    assert fit.converged
    assert fit.coefficients == pytest.approx(change @ plain.coefficients, rel=1e-8)
    assert fit.covariance == pytest.approx(change @ plain.covariance @ change.T, rel=1e-7)
    assert fit.log_likelihood == pytest.approx(plain.log_likelihood, rel=1e-12)
    one = profile.profile_limits(Blocks.from_matrix(near, 512), event, fit, [2])
    two = profile.profile_limits(Blocks.from_matrix(apart, 512), event, plain, [2])
    assert one.lower * share == pytest.approx(two.lower, rel=1e-8)
    assert one.upper * share == pytest.approx(two.upper, rel=1e-8)


def test_strong_effect_from_a_bad_start() -> None:
    # A full Newton step from here overshoots; halving brings it back.
    rng = np.random.default_rng(6)
    x = np.column_stack([np.ones(500), rng.normal(size=500)])
    event = rng.random(500) < 1 / (1 + np.exp(-(8 * x[:, 1] - 4)))
    blocks = Blocks.from_matrix(x, 128)
    plain = logistic.fit(blocks, event)
    far = logistic.fit(blocks, event, start=np.array([5.0, -6.0]))
    assert plain.converged
    assert far.converged
    assert far.coefficients == pytest.approx(plain.coefficients, rel=1e-9)


def test_rare_events() -> None:
    rng = np.random.default_rng(9)
    n = 20_000
    x = np.column_stack([np.ones(n), rng.normal(size=n)])
    event = np.zeros(n, dtype=bool)
    event[np.argsort(x[:, 1] + rng.normal(0, 2, n))[-9:]] = True
    blocks = Blocks.from_matrix(x)
    assert separation.detect(blocks, event).kind is None
    fit = logistic.fit(blocks, event)
    assert fit.converged
    fitted = 1 / (1 + np.exp(-(x @ fit.coefficients)))
    assert fitted.sum() == pytest.approx(9, rel=1e-10)


def test_likelihood_is_exact_far_from_zero() -> None:
    # log(1 + exp(-t)) by numpy's logaddexp in extended precision where the platform has it.
    from fourfold.models.likelihood import LogLikelihood, Observed

    x = np.linspace(-700, 700, 281)[:, None]
    event = np.arange(281) % 3 == 0
    sums = LogLikelihood(Observed(Blocks.from_matrix(x, 100), event))(np.ones(1))
    signed = np.where(event, x[:, 0], -x[:, 0]).astype(np.longdouble)
    assert sums.log_likelihood == pytest.approx(float(-np.logaddexp(0, -signed).sum()), rel=1e-15)
    tail = LogLikelihood(Observed(Blocks.from_matrix(np.full((5, 1), 40.0)), np.ones(5, bool)))(np.ones(1))
    assert tail.log_likelihood == pytest.approx(-5 * np.exp(-40.0), rel=1e-14)
    assert tail.gradient[0] == pytest.approx(5 * 40 * np.exp(-40.0), rel=1e-14)
    assert tail.information[0, 0] == pytest.approx(5 * 1600 * np.exp(-40.0), rel=1e-14)
