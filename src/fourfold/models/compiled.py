"""The likelihood pass compiled by numba: one sweep over the rows with everything still in registers.

Same formulas as ``likelihood.add_chunk``. Importing this module imports numba, so that only
``engine`` does it, and only where it pays. The compiled code is cached on disk.
"""

from __future__ import annotations

from collections.abc import Callable
from typing import TypeVar, cast

import numpy as np
from numba import njit
from numpy.typing import NDArray

Array = NDArray[np.float64]

TILE = 256
"""Rows swept together: a tile of the design and its weighted copy fit next to the processor."""

LOG2_E = 1.4426950408889634
LN_2_HIGH = 6.93147180369123816490e-01
LN_2_LOW = 1.90821492927058770002e-10
LN_2 = 0.6931471805599453

Function = TypeVar("Function", bound=Callable[..., object])


def kernel(*, may: set[str]) -> Callable[[Function], Function]:
    """Compile a function, keep the result on disk, and allow it the named liberties with sums."""

    def compile_(function: Function) -> Function:
        return cast(Function, njit(cache=True, nogil=True, error_model="numpy", fastmath=may)(function))

    return compile_


# Sums may be reordered here (that is what makes them fast); nothing else may be assumed.
REORDER = {"reassoc", "contract", "nsz"}


@kernel(may={"contract"})
def _exp_and_log1p(
    size: Array, e: Array, log1p_e: Array, power: Array, power_bits: NDArray[np.int64], m: int
) -> None:
    """e = exp(-size) and log(1 + e) for size >= 0, each right to the last digit or the one before.

    Written out, as calls to a mathematical library keep loops from being vectorised.
    """
    for r in range(m):
        x = -min(size[r], 708.0)
        k = np.floor(x * LOG2_E + 0.5)
        power_bits[r] = (np.int64(k) + 1023) << 52
        f = (x - k * LN_2_HIGH) - k * LN_2_LOW
        # Taylor series of exp on |f| <= log(2) / 2.
        s = 1.6059043836821613e-10
        s = s * f + 2.08767569878681e-09
        s = s * f + 2.505210838544172e-08
        s = s * f + 2.755731922398589e-07
        s = s * f + 2.7557319223985893e-06
        s = s * f + 2.48015873015873e-05
        s = s * f + 0.0001984126984126984
        s = s * f + 0.001388888888888889
        s = s * f + 0.008333333333333333
        s = s * f + 0.041666666666666664
        s = s * f + 0.16666666666666666
        s = s * f + 0.5
        s = s * f + 1.0
        e[r] = s * f + 1.0
    for r in range(m):
        e[r] *= power[r]
        # log(1 + e) = 2 artanh(z / (2 + z)), with 1 + z = 1 + e or (1 + e) / 2.
        large = e[r] > 0.41421356237309503
        z = (e[r] - 1.0) * 0.5 if large else e[r]
        u = z / (2.0 + z)
        v = u * u
        s = 1.0 / 23.0
        s = s * v + 1.0 / 21.0
        s = s * v + 1.0 / 19.0
        s = s * v + 1.0 / 17.0
        s = s * v + 1.0 / 15.0
        s = s * v + 1.0 / 13.0
        s = s * v + 1.0 / 11.0
        s = s * v + 1.0 / 9.0
        s = s * v + 1.0 / 7.0
        s = s * v + 1.0 / 5.0
        s = s * v + 1.0 / 3.0
        small_part = 2.0 * u + 2.0 * u * v * s
        log1p_e[r] = small_part + LN_2 if large else small_part


@kernel(may=REORDER)
def _linear_predictor(array: Array, block: int, start: int, coefficients: Array, t: Array, m: int) -> None:
    p = array.shape[1]
    for r in range(m):
        t[r] = 0.0
    j = 0
    while j + 4 <= p:
        x0 = array[block, j, start : start + m]
        x1 = array[block, j + 1, start : start + m]
        x2 = array[block, j + 2, start : start + m]
        x3 = array[block, j + 3, start : start + m]
        a, b, c, d = coefficients[j], coefficients[j + 1], coefficients[j + 2], coefficients[j + 3]
        for r in range(m):
            t[r] += a * x0[r] + b * x1[r] + c * x2[r] + d * x3[r]
        j += 4
    while j < p:
        x0 = array[block, j, start : start + m]
        a = coefficients[j]
        for r in range(m):
            t[r] += a * x0[r]
        j += 1


@kernel(may=REORDER)
def _add_gradient(array: Array, block: int, start: int, residual: Array, gradient: Array, m: int) -> None:
    p = array.shape[1]
    j = 0
    while j + 2 <= p:
        x0 = array[block, j, start : start + m]
        x1 = array[block, j + 1, start : start + m]
        a = 0.0
        b = 0.0
        for r in range(m):
            a += x0[r] * residual[r]
            b += x1[r] * residual[r]
        gradient[j] += a
        gradient[j + 1] += b
        j += 2
    if j < p:
        x0 = array[block, j, start : start + m]
        a = 0.0
        for r in range(m):
            a += x0[r] * residual[r]
        gradient[j] += a


@kernel(may=REORDER)
def _add_information(
    array: Array, block: int, start: int, weighted: Array, information: Array, m: int
) -> None:
    """Lower triangle of X W X' in tiles of 4 by 2: eight sums in registers for six loads."""
    p = array.shape[1]
    i = 0
    while i + 4 <= p:
        w0 = weighted[i, :m]
        w1 = weighted[i + 1, :m]
        w2 = weighted[i + 2, :m]
        w3 = weighted[i + 3, :m]
        j = 0
        while j < i + 4:
            x0 = array[block, j, start : start + m]
            x1 = array[block, j + 1, start : start + m]
            a0 = a1 = a2 = a3 = b0 = b1 = b2 = b3 = 0.0
            for r in range(m):
                a0 += w0[r] * x0[r]
                a1 += w1[r] * x0[r]
                a2 += w2[r] * x0[r]
                a3 += w3[r] * x0[r]
                b0 += w0[r] * x1[r]
                b1 += w1[r] * x1[r]
                b2 += w2[r] * x1[r]
                b3 += w3[r] * x1[r]
            information[i, j] += a0
            information[i + 1, j] += a1
            information[i + 2, j] += a2
            information[i + 3, j] += a3
            information[i, j + 1] += b0
            information[i + 1, j + 1] += b1
            information[i + 2, j + 1] += b2
            information[i + 3, j + 1] += b3
            j += 2
        i += 4
    while i + 2 <= p:
        w0 = weighted[i, :m]
        w1 = weighted[i + 1, :m]
        j = 0
        while j < i + 2:
            x0 = array[block, j, start : start + m]
            x1 = array[block, j + 1, start : start + m]
            a0 = a1 = b0 = b1 = 0.0
            for r in range(m):
                a0 += w0[r] * x0[r]
                a1 += w1[r] * x0[r]
                b0 += w0[r] * x1[r]
                b1 += w1[r] * x1[r]
            information[i, j] += a0
            information[i + 1, j] += a1
            information[i, j + 1] += b0
            information[i + 1, j + 1] += b1
            j += 2
        i += 2
    if i < p:
        w0 = weighted[i, :m]
        for j in range(p):
            x0 = array[block, j, start : start + m]
            a0 = 0.0
            for r in range(m):
                a0 += w0[r] * x0[r]
            information[i, j] += a0


@kernel(may=REORDER)
def _sum_of(values: Array, m: int) -> float:
    total = 0.0
    for r in range(m):
        total += values[r]
    return total


@kernel(may={"contract"})
def add_blocks(
    array: Array,
    n: int,
    first: int,
    last: int,
    rows: int,
    stride: int,
    event: NDArray[np.bool_],
    counts: NDArray[np.int64] | Array,
    offset: Array,
    coefficients: Array,
    with_information: bool,
    gradient: Array,
    information: Array,
) -> float:
    """Add the gradient and information of a range of blocks in place; return the log-likelihood.

    Parameters
    ----------
    array : (n_blocks, p, width) float array
    first, last : int
        Blocks ``first`` to ``last - 1``; the first ``rows`` rows of every ``stride``-th one.
    event : (n,) bool array
    counts, offset : (n,) arrays, or empty
    gradient : (p,) float array, added to
    information : (p, p) float array, its lower triangle added to
    """
    p, width = array.shape[1], array.shape[2]
    t = np.empty(TILE)
    sign = np.empty(TILE)
    e = np.empty(TILE)
    log1p_e = np.empty(TILE)
    power = np.empty(TILE)
    power_bits = power.view(np.int64)
    weight = np.empty(TILE)
    weighted = np.empty((p, TILE))
    log_likelihood = 0.0
    for block in range(first, last):
        if block % stride:
            continue
        in_block = min(rows, n - block * width)
        for start in range(0, in_block, TILE):
            m = min(TILE, in_block - start)
            row = block * width + start
            _linear_predictor(array, block, start, coefficients, t, m)
            if offset.size:
                for r in range(m):
                    t[r] += offset[row + r]
            for r in range(m):
                sign[r] = 1.0 if event[row + r] else -1.0
                t[r] *= sign[r]
                weight[r] = abs(t[r])
            _exp_and_log1p(weight, e, log1p_e, power, power_bits, m)
            for r in range(m):
                larger = 1.0 / (1.0 + e[r])
                smaller = e[r] * larger
                weight[r] = smaller * larger
                log1p_e[r] = min(t[r], 0.0) - log1p_e[r]
                sign[r] *= smaller if t[r] > 0.0 else larger
            if counts.size:
                for r in range(m):
                    weight[r] *= counts[row + r]
                    log1p_e[r] *= counts[row + r]
                    sign[r] *= counts[row + r]
            log_likelihood += _sum_of(log1p_e, m)
            _add_gradient(array, block, start, sign, gradient, m)
            if with_information:
                for j in range(p):
                    x0 = array[block, j, start : start + m]
                    w0 = weighted[j, :m]
                    for r in range(m):
                        w0[r] = x0[r] * weight[r]
                _add_information(array, block, start, weighted, information, m)
    return log_likelihood
