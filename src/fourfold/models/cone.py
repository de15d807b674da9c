"""Directions in which the likelihood never falls, found by linear programming.

With s = 2y - 1, moving along b lowers no row's likelihood if s x'b >= 0 for every row. These
directions form a cone; it holds nothing but zero exactly where the maximum likelihood estimate
exists. Columns are centred and scaled here, so that tolerances mean the same for all of them.
"""

from __future__ import annotations

from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray

from fourfold.models.blocks import Blocks
from fourfold.models.centring import Centring, centring

Array = NDArray[np.float64]

FEASIBLE = 1e-10
"""What the solver may violate, in columns whose largest value is 1 and directions of at most 1."""

POSITIVE = 1e-8
"""A row moves along a direction if its linear predictor changes by more than this."""

WORKING_ROWS = 4000
"""Rows the programme starts with; those it violates are added until there are none."""


@dataclass(slots=True)
class Cone:
    """The cone of a design and outcome.

    Attributes
    ----------
    blocks : Blocks
    sign : (n,) float array
        +1 for an event, -1 for none.
    """

    blocks: Blocks
    sign: Array
    centred: Centring | None = field(init=False)
    scale: Array = field(init=False)
    rows: Array = field(init=False)
    known: set[int] = field(init=False)

    def __post_init__(self) -> None:
        self.centred = centring(self.blocks, always=True)
        self.scale = self._largest()
        self.known = set()
        self.rows = np.empty((0, self.blocks.p))
        n = self.blocks.n
        # Spread evenly, so that a sorted file gives rows of every kind.
        self._add(np.unique(np.linspace(0, n - 1, min(n, WORKING_ROWS)).astype(np.intp)))

    def _largest(self) -> Array:
        largest = np.zeros(self.blocks.p)
        for block in range(self.blocks.n_blocks):
            values = self.blocks.array[block, :, : self.blocks.rows_in(block)]
            if self.centred is not None:
                values = values - self.centred.centre[:, None]
            largest = np.maximum(largest, np.abs(values).max(axis=1))
        return np.where(largest > 0, largest, 1.0)

    def _add(self, index: NDArray[np.intp]) -> None:
        """Take rows into the programme; identical rows once."""
        width = self.blocks.width
        rows = self.blocks.array[index // width, :, index % width]
        if self.centred is not None:
            rows = rows - self.centred.centre
        rows = rows / self.scale * self.sign[index, None]
        self.known.update(index.tolist())
        self.rows = np.unique(np.vstack([self.rows, rows]), axis=0)

    def to_user(self, direction: Array) -> Array:
        """A direction in the user's columns from one in the scaled ones."""
        raw = direction / self.scale
        return raw if self.centred is None else self.centred.outward(raw)

    def movement(self, direction: Array) -> Array:
        """s x'b of every row: positive where the likelihood rises; shape (n,)."""
        raw = direction / self.scale
        if self.centred is None:
            return np.asarray(self.sign * self.blocks.product(raw))
        constant = float(self.centred.centre @ raw)
        # Centring each block first would be exact too, at the cost of a copy of it.
        moved = np.empty(self.blocks.n)
        width = self.blocks.width
        for block in range(self.blocks.n_blocks):
            here = slice(block * width, block * width + self.blocks.rows_in(block))
            values = self.blocks.array[block, :, : self.blocks.rows_in(block)]
            if abs(constant) > 100:
                moved[here] = raw @ (values - self.centred.centre[:, None])
            else:
                moved[here] = raw @ values - constant
        return np.asarray(self.sign * moved)

    def sum_of(self, mask: NDArray[np.bool_]) -> Array:
        """Sum of s x over rows, in the scaled columns: the objective of Konis's programme."""
        weight = np.where(mask, self.sign, 0.0)
        total = np.zeros(self.blocks.p)
        width = self.blocks.width
        for block in range(self.blocks.n_blocks):
            rows = self.blocks.rows_in(block)
            part = weight[block * width : block * width + rows]
            total += self.blocks.array[block, :, :rows] @ part
        if self.centred is not None:
            total -= self.centred.centre * weight.sum()
        return total / self.scale

    def coordinate(self, column: int) -> Array:
        """Objective that is the user's coefficient of a column, up to a positive factor."""
        objective = np.zeros(self.blocks.p)
        objective[column] = 1.0
        if self.centred is not None and column == self.centred.intercept:
            objective = self.centred.change()[column] / self.scale
            objective /= np.abs(objective).max()
        return objective

    def furthest(self, objective: Array) -> Array | None:
        """Direction of the cone, within the unit box, that goes furthest; None if none goes anywhere.

        References
        ----------
        Konis (2007). Linear programming algorithms for detecting separated data in binary
        logistic regression models. Thesis, University of Oxford.
        """
        from scipy.optimize import linprog

        size = np.abs(objective).max()
        if size == 0:
            return None
        while True:
            answer = linprog(
                -objective / size,
                A_ub=-self.rows,
                b_ub=np.zeros(len(self.rows)),
                bounds=(-1, 1),
                method="highs",
                options={"primal_feasibility_tolerance": FEASIBLE, "dual_feasibility_tolerance": FEASIBLE},
            )
            if answer.x is None:
                raise ArithmeticError(f"the linear programme for separation stopped: {answer.message}")
            direction = np.asarray(answer.x)
            # A cone reaches the side of the box unless it is zero; rounding alone does not.
            if float(objective @ direction) / size <= POSITIVE or np.abs(direction).max() < 0.5:
                return None
            movement = self.movement(direction)
            wrong = np.flatnonzero(movement < -POSITIVE / 2)
            new = np.array([row for row in wrong.tolist() if row not in self.known], dtype=np.intp)
            if len(new) == 0:
                return direction
            self._add(new[np.argsort(movement[new], kind="stable")[:WORKING_ROWS]])
