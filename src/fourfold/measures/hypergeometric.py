"""Exact inference in a fourfold table with fixed margins: Fisher's test and conditional limits.

Everything is kept in logs and relative to the likeliest table, so that neither large margins
nor extreme tables overflow.
"""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]

# Tables as likely as the observed one may come out a few units of rounding apart.
SAME_PROBABILITY = math.log1p(1e-7)


@dataclass(frozen=True, slots=True)
class Support:
    """Possible first cells ``first, first + 1, ...`` with their unnormalised log probabilities."""

    first: int
    log_probability: Array
    observed: int


def support(a: int, b: int, c: int, d: int, *, whole: bool = True) -> Support:
    """Tables with the margins of ``[[a, b], [c, d]]`` at an odds ratio of 1.

    Parameters
    ----------
    whole : bool
        False leaves out tables whose share is below any double (more than 60 standard
        deviations from the likeliest and further from it than the observed table).
    """
    row, column, other = a + b, a + c, c + d
    first, last = max(0, column - other), min(row, column)
    if not whole:
        total = row + other
        likeliest = (row + 1) * (column + 1) // (total + 2)
        share = column / total
        width = 60 * math.sqrt(max(row * share * (1 - share), 1.0)) + 60
        reach = max(abs(a - likeliest) + 1, int(width))
        first, last = max(first, likeliest - reach), min(last, likeliest + reach)
    x = np.arange(first, last, dtype=np.float64)
    steps = np.log((row - x) / (x + 1) * ((column - x) / (other - column + x + 1)))
    log_probability = np.concatenate([[0.0], np.cumsum(steps)])
    return Support(first, log_probability - log_probability.max(), a)


def fisher(a: int, b: int, c: int, d: int) -> float:
    """Two-sided P of Fisher's exact test: all tables no likelier than the observed one.

    References
    ----------
    Fisher (1935). J R Stat Soc 98, 39-82.
    """
    tables = support(a, b, c, d, whole=False)
    logs = tables.log_probability
    mine = logs[a - tables.first]
    counted = np.exp(logs[logs <= mine + SAME_PROBABILITY]).sum()
    return min(1.0, float(counted / np.exp(logs).sum()))


def conditional_limits(
    a: int, b: int, c: int, d: int, confidence: float = 95.0
) -> tuple[float | None, float | None]:
    """Exact limits of the odds ratio given the margins; None for a side without a bound.

    Each limit leaves half of the remaining probability in its tail.

    References
    ----------
    Cornfield (1956). Proc Third Berkeley Symp Math Stat Prob 4, 135-148.
    """
    tables = support(a, b, c, d)
    logs = tables.log_probability
    place, last = a - tables.first, logs.size - 1
    if last == 0:
        return None, None
    aim = math.log((1 - confidence / 100) / 2)
    cell = np.arange(logs.size, dtype=np.float64) - place

    def tail(inside: slice) -> Callable[[float], float]:
        def value(log_odds_ratio: float) -> float:
            tilted = logs + cell * log_odds_ratio
            return _log_sum(tilted[inside]) - _log_sum(tilted) - aim

        return value

    lower = None if place == 0 else math.exp(_root(tail(slice(place, None))))
    upper = None if place == last else math.exp(-_root(_mirrored(tail(slice(None, place + 1)))))
    return lower, upper


def _mirrored(value: Callable[[float], float]) -> Callable[[float], float]:
    return lambda log_odds_ratio: value(-log_odds_ratio)


def _log_sum(logs: Array) -> float:
    top = float(logs.max())
    return top + math.log(float(np.exp(logs - top).sum()))


def _root(value: Callable[[float], float]) -> float:
    """Root of an increasing function by bracketing and bisection to the last bits."""
    low, high = -1.0, 1.0
    while value(low) > 0:
        low *= 2
    while value(high) < 0:
        high *= 2
    while high - low > 1e-14 * max(1.0, abs(low), abs(high)):
        middle = (low + high) / 2
        if middle in (low, high):
            break
        if value(middle) < 0:
            low = middle
        else:
            high = middle
    return (low + high) / 2
