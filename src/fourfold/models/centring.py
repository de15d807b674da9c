"""Centring of columns, so that a year or a time stamp does not drown its own variation.

Needed only where a column's mean is large beside its spread: products of such columns lose the
spread in rounding. Scaling needs no centring: Newton steps are scaled where they are solved.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from fourfold.models.blocks import Blocks

Array = NDArray[np.float64]

LOOK_AT_ROWS = 4096
"""Rows looked at, spread over all blocks; centring changes accuracy, not the result."""

LARGE_MEAN = 1e3
"""Means this many times the spread are taken off."""


@dataclass(frozen=True, slots=True)
class Centring:
    """Columns less ``centre``; what is taken off goes into the coefficient of a constant column.

    Attributes
    ----------
    centre : (p,) float array
        Zero for the constant column.
    intercept : int
        The constant column.
    constant : float
        Its value.
    """

    centre: Array
    intercept: int
    constant: float

    def inward(self, coefficients: Array) -> Array:
        """Coefficients of the centred columns from those of the user's."""
        moved = coefficients.copy()
        moved[self.intercept] += self.centre @ coefficients / self.constant
        return moved

    def outward(self, coefficients: Array) -> Array:
        """Coefficients of the user's columns from those of the centred ones."""
        moved = coefficients.copy()
        moved[self.intercept] -= self.centre @ coefficients / self.constant
        return moved

    def outward_covariance(self, covariance: Array) -> Array:
        """Covariance of the user's coefficients from that of the centred ones."""
        change = self.change()
        return np.asarray(change @ covariance @ change.T)

    def change(self) -> Array:
        """The matrix that takes coefficients of the centred columns to the user's."""
        change = np.eye(len(self.centre))
        change[self.intercept] -= self.centre / self.constant
        return change


def constant_column(blocks: Blocks) -> int | None:
    """First column with the same value, other than zero, in every row; usually the intercept."""
    array = blocks.array
    for column in np.flatnonzero(np.ptp(array[0, :, : blocks.rows_in(0)], axis=1) == 0):
        value = array[0, column, 0]
        last = blocks.n_blocks - 1
        if (
            value != 0
            and bool((array[:last, column, :] == value).all())
            and bool((array[last, column, : blocks.rows_in(last)] == value).all())
        ):
            return int(column)
    return None


def centring(blocks: Blocks, *, always: bool = False) -> Centring | None:
    """Choose what to take off the columns; None if nothing needs it, or no column is constant.

    Parameters
    ----------
    always : bool
        Centre even where no mean is large.
    """
    rows = max(1, min(blocks.width, LOOK_AT_ROWS // blocks.n_blocks))
    sample = blocks.array[:, :, :rows].transpose(1, 0, 2).reshape(blocks.p, -1)
    if rows > blocks.rows_in(blocks.n_blocks - 1):
        sample = sample[:, : (blocks.n_blocks - 1) * rows + blocks.rows_in(blocks.n_blocks - 1)]
    mean = sample.mean(axis=1)
    spread = sample.std(axis=1)
    if not always and not bool(np.any(np.abs(mean[spread > 0]) > LARGE_MEAN * spread[spread > 0])):
        return None
    intercept = constant_column(blocks)
    if intercept is None:
        return None
    constant = float(blocks.array[0, intercept, 0])
    mean[intercept] = 0.0
    return Centring(mean, intercept, constant)
