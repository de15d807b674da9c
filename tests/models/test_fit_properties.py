"""Identities that hold for every logistic fit by maximum likelihood."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from tests.models.model_cases import random_design

from fourfold.models import logistic, profile
from fourfold.models import tests as model_tests
from fourfold.models.blocks import Blocks

SEEDS = st.integers(0, 2**32 - 1)


def risks(x: np.ndarray, fit: logistic.Fit) -> np.ndarray:
    return 1 / (1 + np.exp(-(x @ fit.coefficients)))


@settings(max_examples=40, deadline=None)
@given(SEEDS)
def test_fitted_events_equal_observed_events(seed: int) -> None:
    x, event = random_design(seed)
    fit = logistic.fit(Blocks.from_matrix(x, 256), event)
    fitted = risks(x, fit)
    assert fitted.sum() == pytest.approx(event.sum(), rel=1e-10)
    # And so for every column: the score is zero.
    assert fitted @ x == pytest.approx(event @ x, rel=1e-9, abs=1e-8 * np.abs(x).sum())


@settings(max_examples=30, deadline=None)
@given(SEEDS)
def test_reference_level_moves_no_risk(seed: int) -> None:
    rng = np.random.default_rng(seed)
    n = 400
    level = rng.integers(0, 4, n)
    quantity = rng.normal(size=n)
    event = rng.random(n) < 1 / (1 + np.exp(-(0.3 * level - 0.6 + 0.5 * quantity)))
    fits, designs = [], []
    for reference in (0, 2):
        others = [value for value in range(4) if value != reference]
        x = np.column_stack([np.ones(n), quantity, *(level == value for value in others)]).astype(float)
        designs.append(x)
        fits.append(logistic.fit(Blocks.from_matrix(x, 128), event))
    assert fits[0].log_likelihood == pytest.approx(fits[1].log_likelihood, rel=1e-12)
    assert risks(designs[0], fits[0]) == pytest.approx(risks(designs[1], fits[1]), rel=1e-9)
    joint = [
        model_tests.likelihood_ratio(Blocks.from_matrix(x, 128), event, fit, [(2, 3, 4)])[0].statistic
        for x, fit in zip(designs, fits, strict=True)
    ]
    assert joint[0] == pytest.approx(joint[1], rel=1e-8, abs=1e-9)
    # Level 2 against level 0 is minus level 0 against level 2, limits included.
    one = profile.profile_limits(Blocks.from_matrix(designs[0], 128), event, fits[0], [3])
    two = profile.profile_limits(Blocks.from_matrix(designs[1], 128), event, fits[1], [2])
    assert one.lower[0] == pytest.approx(-two.upper[0], rel=1e-8, abs=1e-9)
    assert one.upper[0] == pytest.approx(-two.lower[0], rel=1e-8, abs=1e-9)


@settings(max_examples=30, deadline=None)
@given(SEEDS, st.integers(2, 5))
def test_multiplied_frequencies_divide_the_variance(seed: int, factor: int) -> None:
    x, event = random_design(seed)
    blocks = Blocks.from_matrix(x, 256)
    once = logistic.fit(blocks, event)
    often = logistic.fit(blocks, event, counts=np.full(len(event), factor))
    assert often.coefficients == pytest.approx(once.coefficients, rel=1e-9, abs=1e-10)
    assert often.covariance * factor == pytest.approx(once.covariance, rel=1e-8, abs=1e-14)
    assert often.log_likelihood == pytest.approx(factor * once.log_likelihood, rel=1e-11)
    assert (often.n, often.events) == (factor * once.n, factor * once.events)


@settings(max_examples=30, deadline=None)
@given(SEEDS)
def test_counts_are_repeated_rows(seed: int) -> None:
    x, event = random_design(seed)
    counts = np.random.default_rng(seed).integers(0, 4, len(event))
    grouped, rows = Blocks.from_matrix(x, 256), Blocks.from_matrix(np.repeat(x, counts, axis=0), 256)
    repeated = np.repeat(event, counts)
    by_count = logistic.fit(grouped, event, counts=counts)
    by_row = logistic.fit(rows, repeated)
    assert by_count.coefficients == pytest.approx(by_row.coefficients, rel=1e-8, abs=1e-9)
    assert by_count.covariance == pytest.approx(by_row.covariance, rel=1e-8, abs=1e-14)
    assert by_count.log_likelihood == pytest.approx(by_row.log_likelihood, rel=1e-11)
    assert by_count.null_log_likelihood == pytest.approx(by_row.null_log_likelihood, rel=1e-11)
    columns = [1]
    one = profile.profile_limits(grouped, event, by_count, columns, counts=counts)
    two = profile.profile_limits(rows, repeated, by_row, columns)
    assert one.lower == pytest.approx(two.lower, rel=1e-7, abs=1e-8)
    first = model_tests.likelihood_ratio(grouped, event, by_count, [(1,)], counts=counts)[0]
    second = model_tests.likelihood_ratio(rows, repeated, by_row, [(1,)])[0]
    assert first.statistic == pytest.approx(second.statistic, rel=1e-7, abs=1e-8)


@settings(max_examples=30, deadline=None)
@given(SEEDS)
def test_swapped_events_negate(seed: int) -> None:
    x, event = random_design(seed)
    blocks = Blocks.from_matrix(x, 256)
    one, two = logistic.fit(blocks, event), logistic.fit(blocks, ~event)
    assert two.coefficients == pytest.approx(-one.coefficients, rel=1e-9, abs=1e-10)
    assert two.covariance == pytest.approx(one.covariance, rel=1e-8, abs=1e-14)
    assert two.log_likelihood == pytest.approx(one.log_likelihood, rel=1e-12)


@settings(max_examples=50, deadline=None)
@given(st.lists(st.integers(1, 400), min_size=4, max_size=4))
def test_saturated_model_is_the_fourfold_table(cells: list[int]) -> None:
    a, b, c, d = cells
    x = np.array([[1.0, 1.0], [1.0, 1.0], [1.0, 0.0], [1.0, 0.0]])
    fit = logistic.fit(Blocks.from_matrix(x), np.array([True, False, True, False]), counts=np.array(cells))
    assert fit.coefficients == pytest.approx([np.log(c / d), np.log(a * d / (b * c))], rel=1e-9, abs=1e-10)
    # Woolf's variance.
    assert fit.covariance[1, 1] == pytest.approx(1 / a + 1 / b + 1 / c + 1 / d, rel=1e-9)
    assert fit.n == sum(cells)
    # The likelihood-ratio chi-squared of the table, from observed and expected counts.
    table = np.array([[a, b], [c, d]], dtype=float)
    expected = table.sum(axis=1, keepdims=True) * table.sum(axis=0) / table.sum()
    statistic = 2 * (table * np.log(table / expected)).sum()
    (ratio,) = model_tests.likelihood_ratio(
        Blocks.from_matrix(x), np.array([True, False, True, False]), fit, [(1,)], counts=np.array(cells)
    )
    assert ratio.statistic == pytest.approx(statistic, rel=1e-7, abs=1e-8)


@settings(max_examples=30, deadline=None)
@given(SEEDS, st.floats(-2, 2))
def test_offset_along_a_column_shifts_its_coefficient(seed: int, shift: float) -> None:
    x, event = random_design(seed)
    blocks = Blocks.from_matrix(x, 256)
    spread = x[:, 1].std()
    plain = logistic.fit(blocks, event)
    moved = logistic.fit(blocks, event, offset=shift / spread * x[:, 1])
    expected = plain.coefficients.copy()
    expected[1] -= shift / spread
    se = np.sqrt(np.diagonal(plain.covariance))
    assert (moved.coefficients - expected) / se == pytest.approx(np.zeros(len(se)), abs=1e-8)
    assert moved.covariance == pytest.approx(plain.covariance, rel=1e-7, abs=1e-14)
    assert moved.log_likelihood == pytest.approx(plain.log_likelihood, rel=1e-11)


@settings(max_examples=30, deadline=None)
@given(SEEDS, st.floats(0.01, 100), st.floats(-1000, 1000))
def test_units_and_origin_of_a_quantity_move_only_its_own_numbers(
    seed: int, factor: float, origin: float
) -> None:
    x, event = random_design(seed)
    moved = x.copy()
    moved[:, 1] = factor * x[:, 1] + origin
    one, two = (logistic.fit(Blocks.from_matrix(each, 256), event) for each in (x, moved))
    assert two.coefficients[1] * factor == pytest.approx(one.coefficients[1], rel=1e-7, abs=1e-10)
    assert two.coefficients[2:] == pytest.approx(one.coefficients[2:], rel=1e-7, abs=1e-8)
    assert two.log_likelihood == pytest.approx(one.log_likelihood, rel=1e-11)
    assert two.covariance[1, 1] * factor**2 == pytest.approx(one.covariance[1, 1], rel=1e-7)


@settings(max_examples=30, deadline=None)
@given(SEEDS, st.permutations(range(8)))
def test_order_of_columns_and_rows_does_not_matter(seed: int, order: list[int]) -> None:
    x, event = random_design(seed)
    columns = [column for column in order if column < x.shape[1]]
    rows = np.random.default_rng(seed).permutation(len(x))
    one = logistic.fit(Blocks.from_matrix(x, 256), event)
    two = logistic.fit(Blocks.from_matrix(x[rows][:, columns], 256), event[rows])
    se = np.sqrt(np.diagonal(two.covariance))
    assert (two.coefficients - one.coefficients[columns]) / se == pytest.approx(np.zeros(len(se)), abs=1e-8)
    assert two.covariance == pytest.approx(one.covariance[np.ix_(columns, columns)], rel=1e-7, abs=1e-12)


@settings(max_examples=30, deadline=None)
@given(SEEDS)
def test_limits_hold_the_estimate_and_the_test_agrees_with_them(seed: int) -> None:
    x, event = random_design(seed)
    blocks = Blocks.from_matrix(x, 256)
    fit = logistic.fit(blocks, event)
    columns = list(range(x.shape[1]))
    limits = profile.profile_limits(blocks, event, fit, columns)
    assert (limits.lower < fit.coefficients).all()
    assert (fit.coefficients < limits.upper).all()
    results = model_tests.likelihood_ratio(blocks, event, fit, [(column,) for column in columns])
    for column, result in enumerate(results):
        excluded = not limits.lower[column] <= 0 <= limits.upper[column]
        assert excluded == (result.p_value < 0.05)
