"""The design: coded variables written straight into blocks of rows that fit the cache."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from fourfold.data.coding import written
from fourfold.data.columns import Column, Rows
from fourfold.data.shapes import columns_of
from fourfold.results import tree

Array = NDArray[np.float64]
INTERCEPT = "(intercept)"


@dataclass(frozen=True, slots=True)
class DesignTerm:
    """A variable as it enters a model.

    Attributes
    ----------
    variable, kind : str
    columns : tuple of int
        Its columns of the design.
    levels : tuple of str or None
        The level that each column stands for; None for a quantity and for a binary.
    reference : str or None
        The level that has no column; for a quadratic, the value it is centred at.
    shape : str
    knots : tuple of float
    places : tuple of int
        For a category or ordered variable, the code of each column's level.
    """

    variable: str
    kind: str
    columns: tuple[int, ...]
    levels: tuple[str | None, ...]
    reference: str | None
    shape: str
    knots: tuple[float, ...]
    places: tuple[int, ...] = ()


@dataclass(frozen=True, slots=True)
class Design:
    """The design matrix.

    Attributes
    ----------
    blocks : (n_blocks, p, width) array
        Each block holds ``width`` rows, one column after the other; zero beyond row n.
    n : int
    parameters : tuple of str
        Names of the columns; the first is ``(intercept)``.
    terms : tuple of DesignTerm
    coding : tuple of str
        What a column is, in words.
    """

    blocks: Array
    n: int
    parameters: tuple[str, ...]
    terms: tuple[DesignTerm, ...]
    coding: tuple[str, ...]

    def matrix(self) -> Array:
        """The design as one (n, p) array."""
        p = self.blocks.shape[1]
        return np.ascontiguousarray(self.blocks.transpose(0, 2, 1).reshape(-1, p)[: self.n])

    def subset(self, variables: Sequence[str]) -> Design:
        """The design with the intercept and the terms of ``variables`` only."""
        kept = [0]
        terms = []
        for term in self.terms:
            if term.variable in variables:
                places = tuple(range(len(kept), len(kept) + len(term.columns)))
                kept += term.columns
                terms.append(
                    DesignTerm(
                        term.variable, term.kind, places, term.levels, term.reference, term.shape, term.knots,
                        term.places,
                    )
                )  # fmt: skip
        return Design(
            blocks=np.ascontiguousarray(self.blocks[:, kept, :]),
            n=self.n,
            parameters=tuple(self.parameters[place] for place in kept),
            terms=tuple(terms),
            coding=tuple(self.coding[place] for place in kept),
        )

    def basis(self, term: DesignTerm, x: Array) -> Array:
        """Columns of ``term`` at given values.

        Parameters
        ----------
        x : (m,) array
            Values of the quantity; 0 or 1 of a binary; codes of levels.

        Returns
        -------
        (m, k) array
        """
        return _term_columns(term, np.asarray(x, dtype=float))


def build(rows: Rows, variables: Sequence[tree.Variable], width: int = 4096) -> Design:
    """Write the design of ``variables`` over complete rows.

    A level without a row has no column. Knots and references are those of the variables.
    """
    terms: list[DesignTerm] = []
    names, coding = [INTERCEPT], ["1 in every row"]
    for variable in variables:
        term = _term(variable, rows.columns[variable.name], len(names))
        terms.append(term)
        names += _names(variable, term)
        coding += _coding(variable, term)
    blocks = np.zeros((max(1, -(-rows.n // width)), len(names), width))
    _write(blocks, 0, np.ones(rows.n))
    for term in terms:
        values = rows.columns[term.variable].values
        if term.places:
            for column, place in zip(term.columns, term.places, strict=True):
                _write(blocks, column, values == place)
        elif len(term.columns) == 1 and term.shape == "linear":
            _write(blocks, term.columns[0], values)
        else:
            for column, vector in zip(term.columns, _term_columns(term, values).T, strict=True):
                _write(blocks, column, vector)
    return Design(blocks, rows.n, tuple(names), tuple(terms), tuple(coding))


def _term(variable: tree.Variable, column: Column, start: int) -> DesignTerm:
    if variable.kind in ("category", "ordered"):
        used = np.bincount(column.values.astype(int), minlength=len(column.levels)) > 0
        places = tuple(
            place for place, level in enumerate(column.levels) if used[place] and level != variable.reference
        )
        if not places:
            # Nothing to compare: the one level becomes a column of ones, which the check for dependent
            # columns then names.
            places = tuple(int(place) for place in np.flatnonzero(used))
        return DesignTerm(
            variable.name,
            variable.kind,
            tuple(range(start, start + len(places))),
            tuple(column.levels[place] for place in places),
            variable.reference,
            "linear",
            (),
            places,
        )
    shape = variable.shape if variable.kind == "quantity" else "linear"
    number = {"quadratic": 2, "spline": len(variable.knots) - 1}.get(shape, 1)
    return DesignTerm(
        variable.name,
        variable.kind,
        tuple(range(start, start + number)),
        (None,) * number,
        variable.reference,
        shape,
        tuple(variable.knots) if shape == "spline" else (),
    )


def _term_columns(term: DesignTerm, x: Array) -> Array:
    if term.kind in ("category", "ordered"):
        return np.asarray(x[:, None] == np.asarray(term.places), dtype=float)
    centre = float(term.reference or 0) if term.shape == "quadratic" else 0.0
    return columns_of(x, term.shape, centre=centre, knots=term.knots)


def _write(blocks: Array, column: int, vector: NDArray[np.float64] | NDArray[np.bool_]) -> None:
    width = blocks.shape[2]
    full = vector.size // width
    blocks[:full, column, :] = vector[: full * width].reshape(full, width)
    if full < blocks.shape[0]:
        blocks[full, column, : vector.size - full * width] = vector[full * width :]


def _names(variable: tree.Variable, term: DesignTerm) -> list[str]:
    name = variable.name
    if term.kind in ("category", "ordered"):
        return [f"{name}: {level}" for level in term.levels]
    if term.shape == "log2":
        return [f"{name} (log2)"]
    if term.shape == "quadratic":
        return [name, f"{name} (squared)"]
    return [name, *(f"{name} (spline {place})" for place in range(2, len(term.columns) + 1))]


def _coding(variable: tree.Variable, term: DesignTerm) -> list[str]:
    unit = f" {variable.unit}" if variable.unit else ""
    if term.kind in ("category", "ordered"):
        return [f"1 for {level}, 0 otherwise; reference {term.reference}" for level in term.levels]
    if term.kind == "binary":
        return [f"1 for {variable.present}, 0 for {variable.reference}"]
    if term.shape == "log2":
        return [f"logarithm to base 2 of the value{' in' + unit if unit else ''}: 1 more for each doubling"]
    if term.shape == "quadratic":
        centre = written(float(term.reference or 0))
        return [f"value less {centre}{unit}", f"square of the value less {centre}{unit}"]
    if term.shape == "spline":
        knots = ", ".join(written(knot) for knot in term.knots)
        curved = f"restricted cubic spline with knots at {knots}{unit}"
        return [f"value{' in' + unit if unit else ''}", *(
            f"{curved}, column {place}" for place in range(2, len(term.columns) + 1)
        )]  # fmt: skip
    return [f"value{' in' + unit if unit else ''}"]
