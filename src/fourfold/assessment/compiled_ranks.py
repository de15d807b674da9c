"""Compiled partition and merge for the area under the ROC curve of long data (needs numba)."""

from __future__ import annotations

import math
from collections.abc import Callable

import numba
import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]


def _split_rows(score: Array, event: NDArray[np.bool_], events: int) -> tuple[Array, Array]:
    # One spare place each: both are written at every row, so that no branch is mispredicted.
    with_event = np.empty(events + 1)
    without = np.empty(score.size - events + 1)
    i = j = 0
    for row in range(score.size):
        with_event[i] = score[row]
        without[j] = score[row]
        here = int(event[row])
        i += here
        j += 1 - here
    return with_event[:events], without[: score.size - events]


def _merge_sorted(with_event: Array, without: Array) -> tuple[float, float, float, float]:
    """Sums and sums of squares of placements about the middle, doubled (ties count one)."""
    m, n = with_event.size, without.size
    i = j = 0
    total = squares = other = other_squares = 0.0
    while i < m and j < n:
        x, y = with_event[i], without[j]
        if x < y:
            placed = float(2 * j - n)
            total += placed
            squares += placed * placed
            i += 1
        elif y < x:
            placed = float(2 * (m - i) - m)
            other += placed
            other_squares += placed * placed
            j += 1
        else:
            first, start = i, j
            while i < m and with_event[i] == x:
                i += 1
            while j < n and without[j] == x:
                j += 1
            placed = float(start + j - n)
            total += (i - first) * placed
            squares += (i - first) * placed * placed
            placed = float(2 * m - first - i - m)
            other += (j - start) * placed
            other_squares += (j - start) * placed * placed
    # What is left of one sample lies beyond the whole of the other.
    total += float(m - i) * n
    squares += float(m - i) * n * n
    other -= float(n - j) * m
    other_squares += float(n - j) * m * m
    return total, squares, other, other_squares


_split: Callable[[Array, NDArray[np.bool_], int], tuple[Array, Array]] = numba.njit(cache=True)(_split_rows)
_merge: Callable[[Array, Array], tuple[float, float, float, float]] = numba.njit(cache=True)(_merge_sorted)


def area(score: Array, event: NDArray[np.bool_], events: int) -> tuple[float, float]:
    """Area under the ROC curve and DeLong's standard error (nan with a single person in a group)."""
    with_event, without = _split(score, event, events)
    with_event.sort()
    without.sort()
    m, n = with_event.size, without.size
    total, squares, other, other_squares = _merge(with_event, without)
    estimate = 0.5 + total / m / (2 * n)
    if m < 2 or n < 2:
        return estimate, math.nan
    spread = (squares - total * total / m) / (4.0 * n * n)
    other_spread = (other_squares - other * other / n) / (4.0 * m * m)
    return estimate, math.sqrt(max(spread / (m - 1) / m + other_spread / (n - 1) / n, 0.0))
