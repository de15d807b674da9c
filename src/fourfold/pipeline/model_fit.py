"""One logistic model of the analysis: separation looked for first, then the fit that exists."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from fourfold.data.design import Design
from fourfold.errors import EstimationError, Problem
from fourfold.models import limits, logistic, rank, separation
from fourfold.models.blocks import Blocks

Array = NDArray[np.float64]


@dataclass(frozen=True, slots=True)
class FittedModel:
    """A design with its fit. ``fit`` lies on the boundary where the data are separated."""

    design: Design
    blocks: Blocks
    event: NDArray[np.bool_]
    counts: NDArray[np.int64] | None
    fit: logistic.Fit
    separation: separation.Separation

    @property
    def separated(self) -> bool:
        return self.separation.kind is not None

    @property
    def finite_columns(self) -> NDArray[np.intp]:
        """Columns whose coefficient has a finite estimate."""
        return np.flatnonzero(self.separation.direction == 0)

    def linear_predictor(self) -> Array:
        """Log odds of each row, shape (n,); infinite where the boundary fit is certain."""
        if self.separated:
            return limits.linear_predictor(self.blocks, self.event, self.fit, self.separation)
        return np.asarray(self.design.matrix() @ self.fit.coefficients)


def fit_model(design: Design, event: NDArray[np.bool_], counts: NDArray[np.int64] | None) -> FittedModel:
    """Fit ``design`` to ``event``.

    Raises
    ------
    EstimationError
        If columns depend on each other, naming them, or the outcome does not vary.
    """
    blocks = Blocks(design.blocks, design.n)
    dependent = rank.dependent(blocks, counts)
    if dependent:
        raise EstimationError([_dependence(design, group) for group in dependent])
    found = separation.detect(blocks, event, counts)
    if found.kind is None:
        fit = logistic.fit(blocks, event, counts=counts)
    else:
        fit = limits.fit_at_limit(blocks, event, found, counts)
    return FittedModel(design, blocks, event, counts, fit, found)


def _dependence(design: Design, group: tuple[int, ...]) -> Problem:
    names = [design.parameters[column] for column in group if design.parameters[column] != "(intercept)"]
    owners = [term.variable for term in design.terms if any(column in term.columns for column in group)]
    if len(names) == 1:
        return Problem(
            f"{names[0]} has the same value in every row of the analysis set, so it has no estimate.",
            f"Remove {owners[0]} from the model, or look at the exclusions and missing values that "
            "left one value only.",
        )
    return Problem(
        f"{', '.join(names)} carry the same information: one can be computed exactly from the others.",
        f"Remove one of: {', '.join(owners)}.",
    )
