"""Separation, the fit at the limit and the limits that remain finite."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy.optimize import brentq, linprog
from scipy.stats import chi2
from tests.models.model_cases import birthwt, random_design, separated

from fourfold.models import limits, logistic, profile, separation
from fourfold.models import tests as model_tests
from fourfold.models.blocks import Blocks

NAMES = ["(Intercept)", "exposedyes", "age"]


def test_separated_case_is_named() -> None:
    # By construction: no unexposed person has the event (tests/reference/separated.json).
    case = separated()
    found = separation.detect(case.blocks(NAMES, 8), case.event)
    assert found.kind == case.expected["separation"]["kind"]
    assert found.direction.tolist() == [-1, 1, 0]
    assert (found.certain == (case.columns["exposedyes"] == 0)).all()


def test_separated_case_against_reference() -> None:
    # Supremum, likelihood ratio and profile limit from R 4.2.2 (tests/reference/separated.json).
    case = separated()
    divergent = case.expected["divergent"]
    blocks = case.blocks(NAMES, 8)
    found = separation.detect(blocks, case.event)
    fit = limits.fit_at_limit(blocks, case.event, found)
    assert fit.log_likelihood == pytest.approx(divergent["supremum_log_likelihood"], rel=1e-12)
    assert fit.coefficients[:2].tolist() == [-np.inf, np.inf]
    assert np.isnan(fit.covariance[:2]).all()
    assert np.isnan(fit.covariance[:, :2]).all()
    bounds = profile.profile_limits(blocks, case.event, fit, [1], separation=found)
    assert bounds.lower[0] == pytest.approx(divergent["finite_profile_limit"], rel=1e-10)
    assert bounds.upper[0] == np.inf
    (ratio,) = model_tests.likelihood_ratio(blocks, case.event, fit, [(1,)])
    assert ratio.statistic == pytest.approx(divergent["likelihood_ratio"], rel=1e-11)
    assert ratio.p_value == pytest.approx(divergent["likelihood_ratio_p"], rel=1e-11)


def test_finite_coefficient_beside_a_separated_one() -> None:
    # The likelihood's supremum over the unexposed is 1, so age is fitted among the exposed alone.
    case = separated()
    blocks = case.blocks(NAMES, 8)
    found = separation.detect(blocks, case.event)
    fit = limits.fit_at_limit(blocks, case.event, found)
    exposed = case.columns["exposedyes"] == 1
    alone = Blocks.from_matrix(np.column_stack([np.ones(exposed.sum()), case.columns["age"][exposed]]))
    inner = logistic.fit(alone, case.event[exposed])
    assert fit.coefficients[2] == pytest.approx(inner.coefficients[1], rel=1e-10)
    assert fit.covariance[2, 2] == pytest.approx(inner.covariance[1, 1], rel=1e-9)
    expected = profile.profile_limits(alone, case.event[exposed], inner, [1])
    bounds = profile.profile_limits(blocks, case.event, fit, [2], separation=found)
    assert bounds.lower[0] == pytest.approx(expected.lower[0], rel=1e-9)
    assert bounds.upper[0] == pytest.approx(expected.upper[0], rel=1e-9)
    contrast = profile.profile_contrast(blocks, case.event, fit, np.array([0.0, 0.0, 10.0]), separation=found)
    assert contrast.lower[0] == pytest.approx(10 * expected.lower[0], rel=1e-9)
    (ratio,) = model_tests.likelihood_ratio(blocks, case.event, fit, [(2,)])
    assert contrast.p_value[0] == pytest.approx(ratio.p_value, rel=1e-9)
    eta = limits.linear_predictor(blocks, case.event, fit, found)
    assert (eta[~exposed] == -np.inf).all()
    assert eta[exposed] == pytest.approx(alone.product(inner.coefficients), rel=1e-9)


def test_finite_limit_is_where_the_deviance_is_the_quantile() -> None:
    # Direct check with an offset: fits at a held value exist, since age alone is not separated.
    case = separated()
    blocks = case.blocks(NAMES, 8)
    found = separation.detect(blocks, case.event)
    fit = limits.fit_at_limit(blocks, case.event, found)
    for confidence in (80.0, 95.0, 99.0):
        bounds = profile.profile_limits(blocks, case.event, fit, [1, 0], confidence, separation=found)
        for column, value in ((1, bounds.lower[0]), (0, bounds.upper[1])):
            others = [name for name in NAMES if name != NAMES[column]]
            offset = value * case.columns[NAMES[column]]
            held = logistic.fit(case.blocks(others), case.event, offset=offset)
            drop = 2 * (fit.log_likelihood - held.log_likelihood)
            assert drop == pytest.approx(chi2.ppf(confidence / 100, 1), abs=1e-9)


def test_downward_separation_mirrors_upward() -> None:
    case = separated()
    blocks = case.blocks(NAMES, 8)
    mirrored = separation.detect(blocks, ~case.event)
    assert mirrored.direction.tolist() == [1, -1, 0]
    fit = limits.fit_at_limit(blocks, ~case.event, mirrored)
    bounds = profile.profile_limits(blocks, ~case.event, fit, [1], separation=mirrored)
    assert bounds.upper[0] == pytest.approx(-case.expected["divergent"]["finite_profile_limit"], rel=1e-10)
    assert bounds.lower[0] == -np.inf


def test_counts_separate_as_their_rows_do() -> None:
    case = separated()
    x = np.column_stack([case.columns[name] for name in NAMES])
    counts = np.arange(20) % 3
    present = np.repeat(np.arange(20), counts)
    by_count = separation.detect(Blocks.from_matrix(x, 8), case.event, counts)
    by_row = separation.detect(Blocks.from_matrix(x[present], 8), case.event[present])
    assert by_count.kind == by_row.kind
    assert by_count.direction.tolist() == by_row.direction.tolist()
    one = limits.fit_at_limit(Blocks.from_matrix(x, 8), case.event, by_count, counts)
    two = limits.fit_at_limit(Blocks.from_matrix(x[present], 8), case.event[present], by_row)
    assert one.log_likelihood == pytest.approx(two.log_likelihood, rel=1e-12)
    assert one.coefficients == pytest.approx(two.coefficients, rel=1e-9)
    first = profile.profile_limits(
        Blocks.from_matrix(x, 8), case.event, one, [1, 2], counts=counts, separation=by_count
    )
    second = profile.profile_limits(
        Blocks.from_matrix(x[present], 8), case.event[present], two, [1, 2], separation=by_row
    )
    assert first.lower == pytest.approx(second.lower, rel=1e-8)
    assert first.upper == pytest.approx(second.upper, rel=1e-8)


def test_complete_separation() -> None:
    x = np.column_stack([np.ones(10), np.arange(10.0)])
    event = np.arange(10) > 6
    found = separation.detect(Blocks.from_matrix(x), event)
    assert found.kind == "complete"
    # The slope must grow; the intercept must fall, as the threshold lies at 6 to 7.
    assert found.direction.tolist() == [-1, 1]
    fit = limits.fit_at_limit(Blocks.from_matrix(x), event, found)
    assert fit.log_likelihood == 0
    assert fit.events == 3
    bounds = profile.profile_limits(Blocks.from_matrix(x), event, fit, [0, 1], separation=found)
    held = logistic.fit(Blocks.from_matrix(x[:, :1]), event, offset=bounds.lower[1] * x[:, 1])
    assert -2 * held.log_likelihood == pytest.approx(chi2.ppf(0.95, 1), abs=1e-9)
    assert bounds.upper[1] == np.inf
    assert bounds.lower[0] == -np.inf


def test_complete_separation_without_direction() -> None:
    # Centred at the threshold the intercept may go either way.
    x = np.column_stack([np.ones(10), np.arange(10.0) - 6.5])
    event = np.arange(10) > 6
    found = separation.detect(Blocks.from_matrix(x), event)
    assert found.direction.tolist() == [2, 1]
    fit = limits.fit_at_limit(Blocks.from_matrix(x), event, found)
    assert np.isnan(fit.coefficients[0])
    bounds = profile.profile_limits(Blocks.from_matrix(x), event, fit, [0], separation=found)
    assert [bounds.lower[0], bounds.upper[0]] == [-np.inf, np.inf]


def test_every_separated_column_is_named_not_only_those_of_one_solution() -> None:
    # Two levels of a category and a second factor, each without an event of its own.
    rng = np.random.default_rng(5)
    n = 300
    level = rng.integers(0, 5, n)
    other = rng.random(n) < 0.1
    event = (rng.random(n) < 0.4) & (level != 2) & ~other
    event |= (level == 4) & ~other
    x = np.column_stack([np.ones(n), *(level == k for k in range(1, 5)), other, rng.normal(size=n)])
    found = separation.detect(Blocks.from_matrix(x.astype(float), 64), event)
    # Level 2 has no event; level 4 has none without; neither has the other factor.
    assert found.kind == "quasi-complete"
    assert found.direction.tolist() == [0, 0, -1, 0, 1, -1, 0]


@pytest.mark.parametrize("seed", range(12))
def test_fit_proves_what_the_programme_finds(seed: int) -> None:
    # The proof by a converged fit and the linear programme are independent of each other.
    x, event = random_design(seed)
    blocks = Blocks.from_matrix(x, 256)
    assert separation.detect(blocks, event).kind is None
    assert separation.detect(blocks, event, fit=logistic.fit(blocks, event)).kind is None
    assert separation._by_programme(blocks, event).kind is None


@settings(max_examples=60, deadline=None)
@given(st.integers(0, 2**32 - 1))
def test_small_data_against_the_textbook_programme(seed: int) -> None:
    # Konis's programme written out plainly for scipy's linprog, on data that are often separated.
    rng = np.random.default_rng(seed)
    n = int(rng.integers(8, 25))
    x = np.column_stack([np.ones(n), rng.integers(0, 2, n), rng.integers(-2, 3, n), rng.integers(0, 2, n)])
    x = x.astype(float)
    event = rng.random(n) < 1 / (1 + np.exp(-(x @ np.array([-0.5, 1.5, 1.0, 0.0]))))
    if event.all() or not event.any() or np.linalg.matrix_rank(x) < 4:
        return
    z = x * np.where(event, 1.0, -1.0)[:, None]
    found = separation.detect(Blocks.from_matrix(x, 8), event)
    plain = linprog(-z.sum(axis=0), A_ub=-z, b_ub=np.zeros(n), bounds=(-1, 1), method="highs")
    assert (found.kind is not None) == (-plain.fun > 1e-7)
    complete = linprog(np.zeros(4), A_ub=-z, b_ub=-np.ones(n), bounds=(None, None), method="highs")
    assert (found.kind == "complete") == (complete.status == 0)
    for column in range(4):
        objective = np.eye(4)[column]
        furthest = [
            -linprog(-side * objective, A_ub=-z, b_ub=np.zeros(n), bounds=(-1, 1), method="highs").fun > 1e-7
            for side in (1, -1)
        ]
        sign = {(False, False): 0, (True, False): 1, (False, True): -1, (True, True): 2}
        assert found.direction[column] == sign[tuple(furthest)]
    if found.kind is not None:
        check_supremum(x, event, found)


def check_supremum(x: np.ndarray, event: np.ndarray, found: separation.Separation) -> None:
    """The supremum, against the likelihood far out along the direction that the rows allow."""
    blocks = Blocks.from_matrix(x, 8)
    fit = limits.fit_at_limit(blocks, event, found)
    z = x * np.where(event, 1.0, -1.0)[:, None]
    n = len(event)
    # A direction that moves every row fitted with certainty by at least 1 and no other row back.
    far = linprog(
        np.zeros(4), A_ub=-z, b_ub=-found.certain.astype(float), bounds=(None, None), method="highs"
    )
    assert far.status == 0
    assert fit.limit_point is not None
    point = fit.limit_point + 60 * far.x
    reached = -np.logaddexp(0, -(z @ point)).sum()
    assert reached == pytest.approx(fit.log_likelihood, abs=1e-9)
    # And no ascent from there: the gradient over the remaining rows is zero.
    left = ~found.certain
    gradient = z[left].T @ (1 / (1 + np.exp(z[left] @ point)))
    assert gradient == pytest.approx(np.zeros(4), abs=1e-6 * n)


def test_large_data_with_one_separated_level() -> None:
    rng = np.random.default_rng(8)
    n = 60_000
    x = rng.normal(size=(n, 6))
    x[:, 0] = 1
    rare = rng.random(n) < 4e-4
    x[:, 3] = rare
    event = rng.random(n) < 1 / (1 + np.exp(-(x @ np.full(6, 0.2))))
    event[rare] = True
    blocks = Blocks.from_matrix(x)
    found = separation.detect(blocks, event)
    assert found.direction.tolist() == [0, 0, 0, 1, 0, 0]
    assert (found.certain == rare).all()
    event[np.flatnonzero(rare)[0]] = False
    assert separation.detect(blocks, event).kind is None


def test_limit_of_a_separated_level_beside_another_separated_one() -> None:
    # With one of two levels without events held, the other is still separated.
    case = birthwt()
    x = np.column_stack([case.columns[name] for name in case.expected["parameters"]])
    first, second = np.zeros(189), np.zeros(189)
    no_event = np.flatnonzero(~case.event)
    first[no_event[:9]] = 1
    second[no_event[20:31]] = 1
    blocks = Blocks.from_matrix(np.column_stack([x, first, second]), 64)
    found = separation.detect(blocks, case.event)
    assert found.direction.tolist() == [0] * 9 + [-1, -1]
    fit = limits.fit_at_limit(blocks, case.event, found)
    bounds = profile.profile_limits(blocks, case.event, fit, [9, 10, 5], separation=found)
    assert bounds.lower[:2].tolist() == [-np.inf, -np.inf]
    # The second level's rows fall out; the first is held by an offset.
    left = second == 0
    inner = Blocks.from_matrix(x[left])

    def excess(value: float) -> float:
        held = logistic.fit(inner, case.event[left], offset=value * first[left])
        return 2 * (fit.log_likelihood - held.log_likelihood) - chi2.ppf(0.95, 1)

    assert bounds.upper[0] == pytest.approx(brentq(excess, -10, 5, xtol=1e-13), abs=1e-9)
    kept = (first == 0) & (second == 0)
    plain = logistic.fit(Blocks.from_matrix(x[kept]), case.event[kept])
    expected = profile.profile_limits(Blocks.from_matrix(x[kept]), case.event[kept], plain, [5])
    assert bounds.lower[2] == pytest.approx(expected.lower[0], rel=1e-9)
    assert fit.coefficients[:9] == pytest.approx(plain.coefficients, rel=1e-9)
