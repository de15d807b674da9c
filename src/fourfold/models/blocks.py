"""Rows held as blocks of columns: the one layout every likelihood is summed over.

A block holds a few thousand rows, column by column, so that it stays in the second-level cache
while it is used several times, and memory does not grow with the number of passes.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]

WIDTH = 4096


def aligned(*shape: int) -> Array:
    """Uninitialised array on a cache line: vector instructions run a third slower across lines."""
    size = int(np.prod(shape))
    memory = np.empty(size + 8)
    start = (-memory.ctypes.data % 64) // 8
    return memory[start : start + size].reshape(shape)


@dataclass(frozen=True, slots=True)
class Blocks:
    """A design matrix as blocks of columns.

    Attributes
    ----------
    array : (n_blocks, p, width) float array
        ``array[b, j, r]`` is column ``j`` of row ``b * width + r``; zero beyond row ``n``.
    n : int
        Number of rows.
    """

    array: Array
    n: int

    def __post_init__(self) -> None:
        if self.array.ndim != 3 or self.array.dtype != np.float64:
            raise ValueError("blocks are a float64 array of shape (blocks, columns, width)")
        n_blocks, _, width = self.array.shape
        if not n_blocks * width >= self.n > (n_blocks - 1) * width and self.n != 0:
            raise ValueError(f"{n_blocks} blocks of {width} rows do not hold {self.n} rows")

    @classmethod
    def from_matrix(cls, matrix: Array, width: int = WIDTH) -> Blocks:
        """Copy an (n, p) matrix into blocks of ``width`` rows."""
        matrix = np.asarray(matrix, dtype=np.float64)
        n, p = matrix.shape
        width = max(1, min(width, n))
        n_blocks = max(1, -(-n // width))
        array = aligned(n_blocks, p, width)
        array[-1] = 0.0
        for block in range(n_blocks):
            rows = matrix[block * width : (block + 1) * width]
            array[block, :, : len(rows)] = rows.T
        return cls(array, n)

    @property
    def p(self) -> int:
        """Number of columns."""
        return int(self.array.shape[1])

    @property
    def width(self) -> int:
        """Rows of a full block."""
        return int(self.array.shape[2])

    @property
    def n_blocks(self) -> int:
        return int(self.array.shape[0])

    def rows_in(self, block: int) -> int:
        """Rows that block number ``block`` really holds."""
        return min(self.width, self.n - block * self.width)

    def matrix(self) -> Array:
        """The design as an (n, p) matrix: a copy."""
        return np.ascontiguousarray(self.array.transpose(0, 2, 1).reshape(-1, self.p)[: self.n])

    def columns(self, index: Sequence[int] | NDArray[np.intp]) -> Blocks:
        """Blocks of some columns only: a copy."""
        return Blocks(np.ascontiguousarray(self.array[:, list(index), :]), self.n)

    def rows(self, mask: NDArray[np.bool_]) -> Blocks:
        """Blocks of some rows only: a copy.

        Parameters
        ----------
        mask : (n,) bool array
        """
        return Blocks.from_matrix(self.matrix()[mask], self.width)

    def product(self, coefficients: Array) -> Array:
        """Linear predictor of every row, shape (n,)."""
        return np.asarray(np.matmul(coefficients, self.array).reshape(-1)[: self.n])
