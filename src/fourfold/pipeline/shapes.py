"""Quantities looked at closely: odds-ratio curves of shaped terms, and the outcome against each."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from fourfold.data.columns import Rows
from fourfold.description.model import StudyDescription
from fourfold.measures import smoothed_proportion
from fourfold.measures.curve import odds_ratio_curve
from fourfold.pipeline.model_fit import FittedModel
from fourfold.results import tree

Array = NDArray[np.float64]

SHAPED = ("quadratic", "spline")
POINTS = 101


def comparisons(
    variables: Sequence[tree.Variable], description: StudyDescription, rows: Rows
) -> dict[str, list[tuple[float, float]]]:
    """The pairs of values whose odds are compared: as declared, else lower with upper quartile."""
    pairs = {}
    for variable in variables:
        if variable.shape in SHAPED:
            declared = description.variables[variable.name].compare
            pairs[variable.name] = list(declared) or [_quartiles(_people(rows, variable.name))]
    return pairs


def odds_ratio_curves(
    model: FittedModel,
    variables: Sequence[tree.Variable],
    rows: Rows,
    analysis: tree.Analysis,
) -> list[tree.OddsRatioCurve]:
    """Curve of the adjusted odds ratio of each shaped quantity, 1st to 99th percentile."""
    by_name = {variable.name: variable for variable in variables}
    curves = []
    for term in model.design.terms:
        columns = list(term.columns)
        if term.shape not in SHAPED or (model.separation.direction[columns] != 0).any():
            continue
        variable = by_name[term.variable]
        # Stated, or the median that the data stage settled on: what is printed and drawn is one value.
        reference = float(variable.reference or 0.0)
        low, high = np.quantile(_people(rows, variable.name), [0.01, 0.99])
        at = np.unique(np.append(np.linspace(min(low, reference), max(high, reference), POINTS), reference))
        curves.append(
            tree.OddsRatioCurve(
                term=variable.name,
                label=variable.label,
                unit=variable.unit,
                shape=variable.shape,
                reference=reference,
                knots=list(variable.knots),
                curve=odds_ratio_curve(
                    at,
                    model.design.basis(term, at),
                    model.design.basis(term, np.array([reference])),
                    model.fit.coefficients[columns],
                    model.fit.covariance[np.ix_(columns, columns)],
                    analysis.confidence,
                ),
            )
        )
    return curves


def outcome_by_quantity(
    rows: Rows,
    event: NDArray[np.bool_],
    variables: Sequence[tree.Variable],
    analysis: tree.Analysis,
    seed: int,
) -> list[tree.OutcomeByQuantity]:
    """Smoothed share with the event against each quantity of the model, unadjusted."""
    group = next((found for found in variables if found.role == "exposure" and found.kind == "binary"), None)
    looked = []
    for variable in variables:
        if variable.kind != "quantity" or variable.role not in ("exposure", "predictor", "covariate"):
            continue
        x = rows.columns[variable.name].values
        shown = analysis.show_people and analysis.smallest_count <= 1 and rows.counts is None
        looked.append(
            tree.OutcomeByQuantity(
                term=variable.name,
                label=variable.label,
                unit=variable.unit,
                curve=smoothed_proportion.smooth(x, event, rows.counts, confidence=analysis.confidence),
                bins=smoothed_proportion.bins(x, event, rows.counts, confidence=analysis.confidence),
                points=_jittered(rows, x, event, group, variable.name, seed) if shown else [],
                group_label=group.label if shown and group is not None else None,
            )
        )
    return looked


def _jittered(
    rows: Rows, x: Array, event: NDArray[np.bool_], group: tree.Variable | None, name: str, seed: int
) -> list[tree.JitteredPoint]:
    # A stream for each quantity, so that adding one does not move the points of another.
    draw = np.random.default_rng([seed, *name.encode()])
    order = draw.permutation(rows.n)[:1000]
    spread = (float(np.max(x)) - float(np.min(x))) / 200 or 1.0
    across = x[order] + draw.uniform(-spread, spread, order.size)
    height = draw.uniform(0.0, 1.0, order.size)
    names: list[str | None] = [None] * rows.n
    if group is not None:
        present, absent = group.present or "present", group.reference or "absent"
        names = [present if value == 1 else absent for value in rows.columns[group.name].values]
    return [
        tree.JitteredPoint(x=float(across[i]), y=float(height[i]), event=bool(event[row]), group=names[row])
        for i, row in enumerate(order)
    ]


def _people(rows: Rows, name: str) -> Array:
    """Values of a quantity, one for each person."""
    x = rows.columns[name].values
    return x if rows.counts is None else np.repeat(x, rows.counts)


def _quartiles(x: Array) -> tuple[float, float]:
    low, high = np.quantile(x, [0.25, 0.75], method="nearest")
    return float(low), float(high)
