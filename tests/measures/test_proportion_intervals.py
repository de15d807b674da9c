"""Score intervals of one proportion and of a difference."""

from __future__ import annotations

import json
from pathlib import Path

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy import stats

from fourfold.measures.proportion import newcombe, normal_quantile, wilson, wilson_limits

REFERENCE = Path(__file__).parents[1] / "reference"


def test_wilson_published_examples():
    # Newcombe 1998, Stat Med 17:857-72, table I, score method without continuity correction
    # (printed to four decimals, from memory; the full digits computed in base R 4.2.2).
    values = json.loads((REFERENCE / "published-values.json").read_text())
    case = next(v for v in values["values"] if v["id"] == "proportion-score-interval")
    for text, printed, computed in zip(
        case["inputs"]["events_of_total"], case["printed"], case["computed"], strict=True
    ):
        events, people = (int(part) for part in text.split("/"))
        found = wilson(events, people)
        assert (found.lower, found.upper) == pytest.approx(printed, abs=5.1e-5)
        assert (found.lower, found.upper) == pytest.approx(computed, rel=1e-12)


def test_wilson_of_eight_in_ten():
    # Computed in base R and SciPy: .490162 to .943318.
    found = wilson(8, 10)
    assert (found.lower, found.upper) == pytest.approx((0.490162, 0.943318), abs=5e-7)


@pytest.mark.parametrize("confidence", [80.0, 90.0, 95.0, 99.0])
def test_wilson_agrees_with_scipy(confidence: float):
    # scipy.stats.binomtest(...).proportion_ci(method="wilson").
    rng = np.random.default_rng(1)
    for _ in range(50):
        people = int(rng.integers(1, 400))
        events = int(rng.integers(0, people + 1))
        theirs = stats.binomtest(events, people).proportion_ci(confidence / 100, method="wilson")
        found = wilson(events, people, confidence)
        assert found.lower == pytest.approx(theirs.low, abs=1e-12)
        assert found.upper == pytest.approx(theirs.high, abs=1e-12)


def test_wilson_without_people_has_no_estimate():
    found = wilson(0, 0)
    assert found.estimate is None
    assert found.lower is None
    assert found.upper is None
    assert np.isnan(wilson_limits([0], [0])).all()


@given(st.integers(1, 10_000).flatmap(lambda n: st.tuples(st.integers(0, n), st.just(n))))
def test_wilson_stays_inside_and_mirrors(pair: tuple[int, int]):
    # Property: limits hold the proportion, stay in 0 to 1, and swap with the outcome's sides.
    events, people = pair
    found, mirror = wilson(events, people), wilson(people - events, people)
    assert found.lower is not None
    assert found.upper is not None
    assert 0 <= found.lower <= events / people <= found.upper <= 1
    assert mirror.lower == pytest.approx(1 - found.upper, abs=1e-12)


def test_newcombe_published_example():
    # Newcombe 1998, Stat Med 17:873-90, example 56/70 - 48/80, method 10: .0524 to .3339
    # (printed to four decimals, from memory).
    found = newcombe(56, 70, 48, 80)
    assert found.estimate == pytest.approx(0.2)
    assert (found.lower, found.upper) == pytest.approx((0.0524, 0.3339), abs=5.1e-5)


def test_newcombe_without_a_group():
    assert newcombe(1, 5, 0, 0).lower is None


def test_normal_quantile_agrees_with_scipy():
    # scipy.stats.norm.ppf.
    assert normal_quantile(95) == pytest.approx(stats.norm.ppf(0.975), rel=1e-14)
