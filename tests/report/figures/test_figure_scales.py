"""Scales put data where they belong and ticks at round numbers."""

from __future__ import annotations

import math

import pytest
from hypothesis import given
from hypothesis import strategies as st

from fourfold.report.figures import scales

finite = st.floats(min_value=-1e6, max_value=1e6, allow_nan=False)


def read_back(label: str) -> float:
    return float(label.replace(",", "").replace(scales.MINUS, "-").rstrip("%"))


@given(finite, st.floats(min_value=1e-3, max_value=1e6), st.integers(min_value=2, max_value=9))
def test_linear_ticks_are_round_within_the_ends_and_say_their_value(
    low: float, span: float, count: int
) -> None:
    scale = scales.linear(low, low + span, 0, 100, count=count)
    values = [tick.value for tick in scale.ticks]
    assert values == sorted(set(values))
    assert 2 <= len(values) <= 2 * count + 3
    assert scale.low <= low + 1e-9 * abs(low) + 1e-9
    assert scale.high >= low + span - 1e-9 * abs(low + span) - 1e-9
    step = values[1] - values[0]
    mantissa = step / 10 ** math.floor(math.log10(step) + 1e-9)
    assert min(abs(mantissa - m) for m in (1, 2, 5, 10)) < 1e-3
    for tick in scale.ticks:
        assert read_back(tick.label) == pytest.approx(tick.value, rel=1e-9, abs=1e-9 * step)


@pytest.mark.parametrize(
    ("low", "high", "labels"),
    [
        (0, 1, ["0", "0.2", "0.4", "0.6", "0.8", "1.0"]),
        (-3, 4, ["−4", "−2", "0", "2", "4"]),
        (0, 12_000, ["0", "5,000", "10,000", "15,000"]),
        (1990, 2024, ["1990", "2000", "2010", "2020", "2030"]),
    ],
)
def test_linear_labels(low: float, high: float, labels: list[str]) -> None:
    assert [tick.label for tick in scales.linear(low, high, 0, 1).ticks] == labels


@pytest.mark.parametrize(
    ("high", "last"), [(1.0, "100%"), (0.61, "80%"), (0.004, "0.4%"), (0.00003, "0.003%"), (0.25, "25%")]
)
def test_probability_axis_is_trimmed_to_its_data(high: float, last: str) -> None:
    scale = scales.probability(0, high, 0, 100)
    assert scale.low == 0
    assert high <= scale.high <= 1
    assert scale.ticks[0].label == "0%"
    assert scale.ticks[-1].label == last


@given(
    st.floats(min_value=1e-9, max_value=1e9, allow_nan=False),
    st.floats(min_value=1.6, max_value=1e9, allow_nan=False),
)
def test_log_ticks_lie_within_the_ends_and_are_few(low: float, ratio: float) -> None:
    scale = scales.log(low, low * ratio, 0, 100)
    assert len(scale.ticks) <= 9
    assert all(scale.low * 0.999999 <= tick.value <= scale.high * 1.000001 for tick in scale.ticks)
    places = [scale(tick.value) for tick in scale.ticks]
    assert places == sorted(places)


@pytest.mark.parametrize(
    ("low", "high", "labels"),
    [
        (0.85, 1.2, ["0.85", "0.9", "0.95", "1", "1.05", "1.1", "1.15", "1.2"]),
        (0.4, 12, ["0.5", "1", "2", "5", "10"]),
        (0.001, 20_000, ["0.001", "0.01", "0.1", "1", "10", "100", "1,000", "10,000"]),
    ],
)
def test_log_labels(low: float, high: float, labels: list[str]) -> None:
    assert [tick.label for tick in scales.log(low, high, 0, 1).ticks] == labels


@given(st.floats(min_value=0.01, max_value=0.99), st.floats(min_value=1.01, max_value=500))
def test_a_log_axis_around_one_marks_one(low: float, high: float) -> None:
    assert any(tick.value == 1 for tick in scales.log(low, high, 0, 100).ticks)


def test_equal_ratios_are_equal_lengths_on_a_log_scale() -> None:
    scale = scales.log(0.1, 10, 0, 200)
    assert scale(1) == pytest.approx(100)
    assert scale(2) - scale(1) == pytest.approx(scale(1) - scale(0.5))


@pytest.mark.parametrize("value", [0.0, 5.0, -2.0, 1e-12])
def test_a_range_without_length_still_makes_a_scale(value: float) -> None:
    scale = scales.linear(value, value, 0, 100)
    assert scale.low < scale.high
    assert 0 <= scale(value) <= 100


def test_values_outside_are_held_at_the_nearer_end() -> None:
    scale = scales.linear(0, 10, 0, 100)
    assert scale.held(-5) == 0
    assert scale.held(99) == 100
    assert not scale.holds(10.5)
    assert not scale.holds(None)
