"""Compiled partition and merge for the area under the ROC curve of long data (needs numba)."""

from __future__ import annotations

import math
from collections.abc import Callable

import numba
import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]
# Sum of doubled placements of events about the middle, their squares, and the squares of those
# of non-events (whose sum is tied to the first).
Sums = tuple[float, float, float]


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


def _merge_part(with_event: Array, without: Array, i: int, last_i: int, j: int, last_j: int) -> Sums:
    """Merge one stretch of both samples, ties and all."""
    m, n = with_event.size, without.size
    total = squares = other = 0.0
    while i < last_i and j < last_j:
        x, y = with_event[i], without[j]
        if x < y:
            placed = float(2 * j - n)
            total += placed
            squares += placed * placed
            i += 1
        elif y < x:
            placed = float(m - 2 * i)
            other += placed * placed
            j += 1
        else:
            first, start = i, j
            while i < last_i and with_event[i] == x:
                i += 1
            while j < last_j and without[j] == x:
                j += 1
            placed = float(start + j - n)
            total += (i - first) * placed
            squares += (i - first) * placed * placed
            placed = float(m - first - i)
            other += (j - start) * placed * placed
    # What is left of one sample's stretch lies beyond the other's.
    placed = float(2 * j - n)
    total += (last_i - i) * placed
    squares += (last_i - i) * placed * placed
    placed = float(m - 2 * i)
    other += (last_j - j) * placed * placed
    return total, squares, other


def _merge_sorted(with_event: Array, without: Array) -> Sums:
    m, n = with_event.size, without.size
    # Each step of a merge waits for the last, so two stretches are merged side by side, without
    # branches, as long as neither meets a tie. The second starts at the value that halves the work.
    low, high = 0, n - 1
    while low < high:
        half = (low + high) // 2
        if half + np.searchsorted(with_event, without[half]) < (m + n) // 2:
            low = half + 1
        else:
            high = half
    last_i, last_j = np.searchsorted(with_event, without[low]), np.searchsorted(without, without[low])
    i, j, k, el = 0, 0, last_i, last_j
    total = squares = other = 0.0
    while i < last_i and j < last_j and k < m and el < n:
        x, y, z, w = with_event[i], without[j], with_event[k], without[el]
        if x == y or z == w:
            break
        before = int(x < y)
        placed, mirrored = 2 * j - n, m - 2 * i
        total += float(placed * before)
        squares += float(placed * before) * placed
        other += float(mirrored * (1 - before)) * mirrored
        i += before
        j += 1 - before
        before = int(z < w)
        placed, mirrored = 2 * el - n, m - 2 * k
        total += float(placed * before)
        squares += float(placed * before) * placed
        other += float(mirrored * (1 - before)) * mirrored
        k += before
        el += 1 - before
    first = _merge_stretch(with_event, without, i, last_i, j, last_j)
    second = _merge_stretch(with_event, without, k, m, el, n)
    return total + first[0] + second[0], squares + first[1] + second[1], other + first[2] + second[2]


_split: Callable[..., tuple[Array, Array]] = numba.njit(cache=True)(_split_rows)
_merge_stretch: Callable[..., Sums] = numba.njit(cache=True)(_merge_part)
_merge: Callable[..., Sums] = numba.njit(cache=True)(_merge_sorted)


def area(score: Array, event: NDArray[np.bool_], events: int) -> tuple[float, float]:
    """Area under the ROC curve and DeLong's standard error (nan with a single person in a group).

    Parameters
    ----------
    score : (n,) float array
        Contiguous, no nan.
    event : (n,) bool array
        Contiguous, with both outcomes.
    events : int
        How many have the event.
    """
    with_event, without = _split(score, event, events)
    with_event.sort()
    without.sort()
    m, n = with_event.size, without.size
    total, squares, other = _merge(with_event, without)
    mean = total / m
    estimate = 0.5 + mean / (2 * n)
    if m < 2 or n < 2:
        return estimate, math.nan
    spread = (squares - m * mean * mean) / (4.0 * n * n)
    # Placements of both groups have the same mean, the area.
    mirrored = mean * m / n
    other_spread = (other - n * mirrored * mirrored) / (4.0 * m * m)
    return estimate, math.sqrt(max(spread / (m - 1) / m + other_spread / (n - 1) / n, 0.0))
