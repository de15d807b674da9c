"""Distinct values, equal-sized groups and quantiles, with and without counts."""

from __future__ import annotations

import itertools

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from hypothesis.extra import numpy as hnp

from fourfold.measures.tally import significant, tally

VALUES = hnp.arrays(np.int64, st.integers(2, 80), elements=st.integers(0, 12))


def cut_groups(values: np.ndarray, groups: int) -> list[list[float]]:
    """Groups by the definition: type-7 cut points from NumPy, right-closed, equal cuts merged."""
    # Rounded: NumPy places 3/7 of 49 at 20.999..., just short of the value that is the cut.
    cuts = np.unique(np.round(np.quantile(values, np.arange(1, groups) / groups), 9))
    place = np.searchsorted(cuts, values, side="left")
    return [sorted(values[place == k]) for k in range(cuts.size + 1) if (place == k).any()]


@given(VALUES, st.integers(2, 15))
def test_equal_groups_follow_their_definition(values: np.ndarray, groups: int):
    # numpy.quantile (method "linear", which is type 7).
    x = values * 8.0
    found = tally(x, np.zeros(x.size, dtype=bool))
    starts = [*found.equal_groups(groups), found.values.size]
    mine = [list(np.repeat(found.values[a:b], found.people[a:b])) for a, b in itertools.pairwise(starts)]
    assert mine == cut_groups(x, groups)


@given(VALUES)
def test_quantiles_are_type_7(values: np.ndarray):
    # numpy.quantile, method "linear".
    probabilities = np.array([0, 0.01, 0.25, 0.5, 0.9, 1])
    found = tally(values, np.zeros(values.size, dtype=bool)).quantiles(probabilities)
    assert found == pytest.approx(np.quantile(values, probabilities), abs=1e-12)


@given(VALUES, st.data())
def test_counts_are_repeated_rows(values: np.ndarray, data: st.DataObject):
    # Property: a row that stands for k people tells what k equal rows tell.
    counts = data.draw(hnp.arrays(np.int64, values.size, elements=st.integers(0, 4)))
    event = data.draw(hnp.arrays(np.bool_, values.size))
    counted = tally(values, event, counts)
    repeated = tally(np.repeat(values, counts), np.repeat(event, counts))
    assert np.array_equal(counted.values, repeated.values)
    assert np.array_equal(counted.people, repeated.people)
    assert np.array_equal(counted.events, repeated.events)
    assert counted.total == counts.sum()


def test_gathering_keeps_people_events_and_mean():
    rng = np.random.default_rng(3)
    found = tally(rng.normal(size=5_000), rng.random(5_000) < 0.3)
    gathered = found.gathered(100)
    assert gathered.values.size == 100
    assert gathered.people.sum() == 5_000
    assert gathered.events.sum() == found.events.sum()
    assert np.average(gathered.values, weights=gathered.people) == pytest.approx(
        np.average(found.values, weights=found.people), rel=1e-12
    )


def test_significant_digits():
    # Python's own formatting to 12 significant digits.
    rng = np.random.default_rng(5)
    x = np.concatenate([rng.normal(size=500) * 10.0 ** rng.integers(-20, 20, 500), [0.0, np.inf, -np.inf]])
    assert significant(x) == pytest.approx([float(f"{v:.12g}") for v in x], rel=1e-15)


def test_significant_ties_what_rounding_parted():
    parted = np.array([0.1 + 0.2, 0.3, 0.09999999999999999, 0.1])
    found = significant(parted)
    assert found[0] == found[1]
    assert found[2] == found[3]
