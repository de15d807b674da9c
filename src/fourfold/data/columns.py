"""Coded columns and the rows they make up."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]


@dataclass(frozen=True, slots=True)
class Column:
    """One variable, coded as numbers.

    Attributes
    ----------
    name, label : str
    kind : str
        quantity, category, ordered, binary or date; bands cut from a quantity are ordered.
    values : (n,) float array
        NaN is missing. A binary is 0 or 1, a category or ordered variable the place of its level in
        ``levels``, a date the days since 1970-01-01.
    levels : tuple of str
        Level labels in order; for a binary (absent, present); empty for a quantity or date.
    decimals : int
        How finely a quantity was recorded.
    """

    name: str
    label: str
    kind: str
    values: Array
    levels: tuple[str, ...] = ()
    decimals: int = 0

    @property
    def missing(self) -> NDArray[np.bool_]:
        return np.isnan(self.values)

    def take(self, rows: NDArray[np.bool_]) -> Column:
        return Column(self.name, self.label, self.kind, self.values[rows], self.levels, self.decimals)


@dataclass(frozen=True, slots=True)
class Rows:
    """Rows of coded columns.

    Attributes
    ----------
    columns : dict of str to Column
    counts : (n,) int array or None
        How many people each row stands for; None where each is one.
    lines : (n,) int array
        Where each row stood in the file.
    """

    columns: dict[str, Column]
    counts: NDArray[np.int64] | None
    lines: NDArray[np.int64]

    @property
    def n(self) -> int:
        """Number of rows."""
        return int(self.lines.size)

    @property
    def people(self) -> int:
        """Number of people: the sum of the counts."""
        return self.n if self.counts is None else int(self.counts.sum())

    def count(self, inside: NDArray[np.bool_]) -> int:
        """Number of people in the rows where ``inside`` is true."""
        return int(np.count_nonzero(inside)) if self.counts is None else int(self.counts[inside].sum())

    def take(self, rows: NDArray[np.bool_]) -> Rows:
        """The rows where the mask is true."""
        return Rows(
            {name: column.take(rows) for name, column in self.columns.items()},
            None if self.counts is None else self.counts[rows],
            self.lines[rows],
        )
