"""Scales from data to px, with ticks at round numbers.

Tick labels are written here, not by the module that rounds printed numbers: a tick is a round
number by construction and nothing is rounded to print it.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

MINUS = "\u2212"


@dataclass(frozen=True, slots=True)
class Tick:
    """A round ``value`` of the data with the words that stand at it."""

    value: float
    label: str


@dataclass(frozen=True, slots=True)
class Scale:
    """A monotone map from data to px.

    Attributes
    ----------
    low, high : float
        Ends of the data's range, low < high (both > 0 where ``log``).
    start, end : float
        Their places in px; ``end`` may lie below ``start``.
    ticks : tuple of Tick
        In increasing order, all within the range.
    log : bool
    """

    low: float
    high: float
    start: float
    end: float
    ticks: tuple[Tick, ...]
    log: bool = False

    def __call__(self, value: float) -> float:
        """Give the place of ``value``, px; may lie outside the ends."""
        if self.log:
            share = math.log(value / self.low) / math.log(self.high / self.low)
        else:
            share = (value - self.low) / (self.high - self.low)
        return self.start + share * (self.end - self.start)

    def holds(self, value: float | None) -> bool:
        """Say whether ``value`` exists and lies within the ends."""
        return value is not None and self.low <= value <= self.high

    def held(self, value: float) -> float:
        """Give the place of ``value`` moved to the nearer end where it lies outside."""
        return self(min(max(value, self.low), self.high))


def linear(low: float, high: float, start: float, end: float, *, count: int = 5, widen: bool = True) -> Scale:
    """Make a linear scale with about ``count`` ticks; ``widen`` moves the ends to ticks."""
    low, high = _apart(low, high)
    step = _step((high - low) / max(count, 1))
    if widen:
        low, high = _widened(low, high, step)
    values = _multiples(low, high, step)
    return Scale(low, high, start, end, _labelled(values, step))


def probability(low: float, high: float, start: float, end: float, *, count: int = 5) -> Scale:
    """Make a scale of probabilities labelled in percent, its ends at ticks within 0 and 1.

    Parameters
    ----------
    low, high : float
        Range to hold, between 0 and 1.
    """
    low, high = _apart(max(low, 0.0), min(high, 1.0))
    step = _step((high - low) / max(count, 1))
    low, high = _widened(low, high, step)
    low, high = max(0.0, low), min(1.0, high)
    ticks = tuple(Tick(value, plain(100 * value, 100 * step) + "%") for value in _multiples(low, high, step))
    return Scale(low, high, start, end, ticks)


def log(low: float, high: float, start: float, end: float, *, most: int = 9) -> Scale:
    """Make a logarithmic scale; ``low`` and ``high`` (both > 0) stay its ends.

    Ticks are the finest of several series (tenths near 1; 1, 2, 5; decades; every second decade
    and so on) that puts no more than ``most`` of them within the ends.
    """
    if not 0 < low < high:
        middle = low if low > 0 else 1.0
        low, high = middle / 1.5, middle * 1.5
    ticks: Sequence[float] = ()
    for series in _log_series(low, high):
        ticks = [value for value in series if low * (1 - 1e-9) <= value <= high * (1 + 1e-9)]
        if len(ticks) <= most:
            break
    return Scale(low, high, start, end, _labelled(ticks), log=True)


def _labelled(values: Sequence[float], step: float | None = None) -> tuple[Tick, ...]:
    # Thousands are set apart on the whole axis or not at all; below 10,000 they may be years.
    grouped = any(abs(value) >= 10_000 for value in values)
    return tuple(Tick(value, plain(value, step, grouped)) for value in values)


def plain(value: float, step: float | None = None, grouped: bool | None = None) -> str:
    """Write a round number with as many decimals as ``step`` needs, and a true minus sign.

    Thousands are set apart where ``grouped``; by default from 10,000 on.
    """
    if value == 0:
        return "0"
    size = abs(value)
    if size >= 1e7 or size < 1e-6:
        text = f"{size:.3g}".replace("e+0", "e").replace("e-0", "e-").replace("e+", "e")
        text = text.replace("-", MINUS)
    else:
        places = _places(step if step is not None else size)
        apart = size >= 10_000 if grouped is None else grouped
        text = f"{size:,.{places}f}" if apart else f"{size:.{places}f}"
    return (MINUS if value < 0 else "") + text


def _places(step: float) -> int:
    """Give the decimals needed to write a round number exactly, at most eight."""
    for places in range(9):
        if abs(round(step, places) - step) <= 1e-9 * abs(step):
            return places
    return 8


def _apart(low: float, high: float) -> tuple[float, float]:
    """Open a range that has no length, around its only value."""
    if high > low:
        return low, high
    room = abs(low) * 0.1 or 0.5
    return low - room, low + room


def _widened(low: float, high: float, step: float) -> tuple[float, float]:
    """Move the ends out to multiples of ``step``, never inwards by a rounding error."""
    return (
        min(low, math.floor(low / step + 1e-9) * step),
        max(high, math.ceil(high / step - 1e-9) * step),
    )


def _step(raw: float) -> float:
    """Give the round step (1, 2 or 5 times a power of ten) at or above ``raw``."""
    power = 10.0 ** math.floor(math.log10(raw))
    for multiple in (1, 2, 5):
        if raw <= multiple * power * (1 + 1e-9):
            return multiple * power
    return 10 * power


def _multiples(low: float, high: float, step: float) -> list[float]:
    first = math.ceil(low / step - 1e-9)
    last = math.floor(high / step + 1e-9)
    # Rounding to the step's own decimals: 3 * 0.1 must be the tick 0.3, not 0.30000000000000004.
    places = max(0, 12 - math.floor(math.log10(abs(step))))
    return [round(index * step, min(places, 15)) for index in range(first, last + 1)]


def _log_series(low: float, high: float) -> list[list[float]]:
    first, last = math.floor(math.log10(low)), math.ceil(math.log10(high))
    decades = range(first, last + 1)

    def within(multiples: Sequence[float], every: int = 1) -> list[float]:
        return [
            float(f"{multiple}e{decade}")
            for decade in decades
            if decade % every == 0
            for multiple in multiples
        ]

    near_one = [0.8, 0.85, 0.9, 0.95, 1.0, 1.05, 1.1, 1.15, 1.2, 1.25]
    tenths = [0.5, 0.6, 0.7, 0.8, 0.9, 1.0, 1.1, 1.2, 1.3, 1.4, 1.5, 1.6, 1.8, 2.0]
    series = []
    if low > 0.78 and high < 1.28:
        series.append(near_one)
    if low > 0.48 and high < 2.05:
        series.append(tenths)
    series += [within((1, 1.5, 2, 3, 4, 5, 7)), within((1, 2, 5)), within((1, 3)), within((1,))]
    series += [within((1,), every) for every in (2, 3, 5, 10, 25, 50, 100)]
    return series
