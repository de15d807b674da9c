"""Missing values: tests of association with the outcome, patterns."""

from __future__ import annotations

from collections import Counter

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy import stats

from fourfold.data.columns import Column, Rows
from fourfold.data.incompleteness import (
    associations_with_outcome,
    compare,
    fisher,
    missing_patterns,
    woolf,
)

CELL = st.integers(0, 60)


def test_worked_table() -> None:
    # 12 28 / 5 55, computed in base R 4.2.2: Woolf 4.714286 (1.510465 to 14.713672), Fisher 0.006559453,
    # chi-squared without correction 7.984881.
    assert woolf(12, 28, 5, 55) == pytest.approx((4.714286, 1.510465, 14.713672), abs=5e-7)
    assert fisher(12, 28, 5, 55) == pytest.approx(0.006559453, abs=5e-10)
    p_value, test = compare(12, 28, 5, 55)
    assert (test, p_value) == ("chi-squared", pytest.approx(stats.chi2.sf(7.984881, 1), rel=1e-6))


@given(CELL, CELL, CELL, CELL)
def test_fisher_against_scipy(a: int, b: int, c: int, d: int) -> None:
    if min(a + b, c + d, a + c, b + d) == 0:
        assert compare(a, b, c, d) == (None, "none")
        return
    # Log-gamma against SciPy's own route: 1e-9 leaves room for the rounding of both.
    assert fisher(a, b, c, d) == pytest.approx(stats.fisher_exact([[a, b], [c, d]])[1], rel=1e-9)


@given(CELL, CELL, CELL, CELL)
def test_the_test_chosen_and_its_p_value(a: int, b: int, c: int, d: int) -> None:
    if min(a + b, c + d, a + c, b + d) == 0:
        return
    expected = stats.contingency.expected_freq([[a, b], [c, d]])
    p_value, test = compare(a, b, c, d)
    if expected.min() < 5:
        assert test == "Fisher exact"
    else:
        chi2 = stats.chi2_contingency([[a, b], [c, d]], correction=False)
        assert (test, p_value) == ("chi-squared", pytest.approx(chi2.pvalue, rel=1e-9))


def test_limits_at_another_level() -> None:
    # Closed form: exp(log 4.7142857 -/+ 1.6448536 x 0.580714592).
    assert woolf(12, 28, 5, 55, 90) == pytest.approx((4.714286, 1.813769, 12.253210), rel=1e-6)


def test_no_odds_ratio_beside_an_empty_cell() -> None:
    assert woolf(0, 28, 5, 55) == (None, None, None)


def test_associations_are_counted_over_known_outcomes() -> None:
    event = np.array([1, 1, 1, 0, 0, 0, np.nan, np.nan])
    x = np.array([np.nan, np.nan, 3, 4, 5, np.nan, np.nan, 8])
    columns = {
        "fever": Column("fever", "fever", "binary", event, ("no", "yes")),
        "x": Column("x", "x", "quantity", x),
        "full": Column("full", "full", "quantity", np.arange(8.0)),
    }
    counts = np.array([2, 1, 1, 1, 1, 3, 50, 50])
    (found,) = associations_with_outcome(Rows(columns, counts, np.arange(8)), "fever", ["fever", "x", "full"])
    assert found.variable == "x"
    assert (found.events_incomplete, found.incomplete) == (3, 6)
    assert (found.events_complete, found.complete) == (1, 3)
    # Closed form: (3 x 2) / (3 x 1).
    assert found.odds_ratio == pytest.approx(2.0)


@given(st.lists(st.tuples(st.booleans(), st.booleans(), st.booleans()), max_size=80), st.booleans())
def test_patterns_partition_the_incomplete_rows(lacks: list[tuple[bool, bool, bool]], counted: bool) -> None:
    table = np.array(lacks, dtype=float).reshape(len(lacks), 3)
    values = np.where(table == 1, np.nan, 0.0)
    columns = {name: Column(name, name, "quantity", values[:, place]) for place, name in enumerate("abc")}
    weights = np.arange(1, len(lacks) + 1) if counted else None
    found = missing_patterns(Rows(columns, weights, np.arange(len(lacks))), ["a", "b", "c"])
    expected: Counter[tuple[str, ...]] = Counter()
    for place, row in enumerate(lacks):
        if any(row):
            which = tuple(name for name, lack in zip("abc", row, strict=True) if lack)
            expected[which] += place + 1 if counted else 1
    assert {tuple(pattern.variables): pattern.count for pattern in found} == expected
    totals = [pattern.count or 0 for pattern in found]
    assert totals == sorted(totals, reverse=True)
