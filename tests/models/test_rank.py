"""Dependent columns: known by construction."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from fourfold.models import rank
from fourfold.models.blocks import Blocks


def design(n: int = 400) -> np.ndarray:
    rng = np.random.default_rng(2)
    level = rng.integers(0, 3, n)
    quantity = rng.normal(50, 12, n)
    dose = rng.normal(size=n)
    return np.column_stack([np.ones(n), quantity, level == 1, level == 2, dose]).astype(float)


@pytest.mark.parametrize("width", [64, 4096])
def test_independent_columns(width: int) -> None:
    assert rank.dependent(Blocks.from_matrix(design(), width)) == []


@pytest.mark.parametrize("width", [64, 4096])
def test_groups_are_named_apart(width: int) -> None:
    x = design()
    x = np.column_stack([
        x,
        1 - x[:, 2] - x[:, 3],  # 5: all levels beside the intercept
        2.54 * x[:, 1],  # 6: another unit
        np.full(len(x), 7.0),  # 7: one value
        np.zeros(len(x)),  # 8: nothing
    ])  # fmt: skip
    blocks = Blocks.from_matrix(x, width)
    assert rank.dependent(blocks) == [(0, 2, 3, 5), (0, 7), (1, 6), (8,)]
    left = rank.independent(blocks)
    assert len(left) == np.linalg.matrix_rank(x)
    assert np.linalg.matrix_rank(x[:, left]) == len(left)


def test_sum_of_other_columns() -> None:
    x = design()
    x = np.column_stack([x, 3 * x[:, 1] - 2 * x[:, 4] + 5])
    assert rank.dependent(Blocks.from_matrix(x, 64)) == [(0, 1, 4, 5)]


def test_without_intercept() -> None:
    x = design()
    levels = np.column_stack([x[:, 1:], 1 - x[:, 2] - x[:, 3]])
    assert rank.dependent(Blocks.from_matrix(levels, 64)) == []
    assert rank.dependent(Blocks.from_matrix(np.column_stack([levels, x[:, 4] * 2]), 64)) == [(3, 5)]


def test_fewer_rows_than_columns() -> None:
    rng = np.random.default_rng(0)
    x = np.column_stack([np.ones(4), rng.normal(size=(4, 6))])
    blocks = Blocks.from_matrix(x)
    groups = rank.dependent(blocks)
    assert len(groups) == 3
    assert len(rank.independent(blocks)) == 4


def test_rows_that_stand_for_no_one_do_not_count() -> None:
    x = design()
    copy = x[:, 4].copy()
    copy[:10] += 1.0
    blocks = Blocks.from_matrix(np.column_stack([x, copy]), 64)
    counts = np.ones(len(x), dtype=np.int64)
    assert rank.dependent(blocks, counts) == []
    counts[:10] = 0
    assert rank.dependent(blocks, counts) == [(4, 5)]


@pytest.mark.parametrize("share", [1e-3, 1e-5, 1e-6])
def test_nearly_dependent_is_not_dependent(share: float) -> None:
    x = design()
    rng = np.random.default_rng(1)
    near = x[:, 1] + share * x[:, 1].std() * rng.normal(size=len(x))
    assert rank.dependent(Blocks.from_matrix(np.column_stack([x, near]), 64)) == []


def test_seconds_and_hours_of_a_time_stamp() -> None:
    # Seconds since 1970 hold their variation in their last digits only.
    rng = np.random.default_rng(3)
    seconds = 1.7e9 + rng.normal(0, 3600, 500)
    x = np.column_stack([np.ones(500), seconds, seconds / 3600, rng.normal(size=500)])
    assert rank.dependent(Blocks.from_matrix(x, 64)) == [(1, 2)]
    assert rank.dependent(Blocks.from_matrix(x[:, [0, 1, 3]], 64)) == []


@settings(max_examples=40, deadline=None)
@given(st.integers(0, 2**32 - 1), st.floats(-8, 8), st.floats(-8, 8))
def test_units_do_not_matter(seed: int, first: float, second: float) -> None:
    rng = np.random.default_rng(seed)
    x = np.column_stack([np.ones(60), rng.normal(size=(60, 4))])
    x = np.column_stack([x, x[:, 1] + x[:, 2] * rng.choice([-1, 1])])
    scaled = x * 10.0 ** np.array([0, first, second, first, 0, second])
    assert rank.dependent(Blocks.from_matrix(scaled, 16)) == [(1, 2, 5)]
    assert rank.dependent(Blocks.from_matrix(scaled[:, :5], 16)) == []


def test_many_rows_against_matrix_rank() -> None:
    rng = np.random.default_rng(4)
    x = np.column_stack([np.ones(30_000), rng.normal(size=(30_000, 5))])
    assert rank.dependent(Blocks.from_matrix(x)) == []
    x = np.column_stack([x, x[:, 2] - x[:, 5]])
    assert rank.dependent(Blocks.from_matrix(x)) == [(2, 5, 6)]
