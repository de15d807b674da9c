"""What each variable became: role, levels, and the reference that was stated or chosen."""

from __future__ import annotations

from collections.abc import Mapping

import numpy as np

from fourfold.data.coding import written
from fourfold.data.columns import Column, Rows
from fourfold.data.levels import match
from fourfold.data.nearest import nearest
from fourfold.data.quantiles import quantile, spline_knots
from fourfold.description.model import Role, SplineShape, StudyDescription, Variable
from fourfold.errors import DataError
from fourfold.results import tree

MODEL_ROLES = ("exposure", "predictor", "covariate")


def in_order(description: StudyDescription) -> list[tuple[str, str, Role | None]]:
    """Name, role and role entry of each variable: outcome, exposures, predictors, covariates, others."""
    answer: list[tuple[str, str, Role | None]] = [(description.outcome, "outcome", None)]
    for role, entries in (
        ("exposure", description.exposures),
        ("predictor", description.predictors),
        ("covariate", description.covariates),
    ):
        answer += [(entry.variable, role, entry) for entry in entries]
    named = {name for name, _, _ in answer}
    answer += [(name, "other", None) for name in description.variables if name not in named]
    return answer


def resolve(description: StudyDescription, rows: Rows) -> list[tree.Variable]:
    """The variables as they are used, references and knots chosen on the analysis set ``rows``.

    Raises
    ------
    DataError
        If a stated reference has no row, a logarithm is asked of a value that is not positive, or
        knots cannot be told apart.
    """
    return [
        _variable(name, role, entry, description.variables[name], rows.columns[name], rows)
        for name, role, entry in in_order(description)
    ]


def _variable(
    name: str, role: str, entry: Role | None, described: Variable, column: Column, rows: Rows
) -> tree.Variable:
    shape, knots = "linear", tuple[float, ...]()
    reference: str | None = None
    rule: str | None = None
    if column.kind == "binary":
        reference = column.levels[0]
    elif column.kind in ("category", "ordered"):
        reference, rule = _reference_level(name, role, described, column, rows)
    elif column.kind == "quantity" and role in MODEL_ROLES:
        shape = "spline" if isinstance(described.shape, SplineShape) else described.shape
        if shape == "log2":
            _require_positive(name, column, rows)
        if isinstance(described.shape, SplineShape):
            knots = _knots(name, described.shape, column, rows)
        if shape != "linear":
            reference, rule = _reference_value(described, column, rows)
    return tree.Variable(
        name=name,
        label=column.label,
        role=role,
        kind=column.kind,
        unit=described.unit,
        per=described.per,
        levels=list(column.levels),
        reference=reference,
        reference_rule=rule,
        present=column.levels[1] if column.kind == "binary" else None,
        shape=shape,
        knots=list(knots),
        derived_from=described.from_,
        cuts=list(described.cut),
        cuts_chosen=described.cut_chosen,
        reason=entry.reason if entry else None,
        planned=entry.planned if entry else None,
        plausible=list(described.plausible) if described.plausible else None,
        expected=described.expected,
    )


def _reference_level(
    name: str, role: str, described: Variable, column: Column, rows: Rows
) -> tuple[str | None, str | None]:
    totals = level_totals(column, rows)
    if described.reference is not None:
        stated = str(described.reference)
        reference = match(stated, column.levels)
        if reference is None:
            raise DataError(
                f"{name}: the reference {stated!r} is not one of its levels: {', '.join(column.levels)}."
                f"{nearest(stated, column.levels)}",
                "Correct `reference:`.",
            )
        if role in MODEL_ROLES and totals[column.levels.index(reference)] == 0:
            others = ", ".join(level for level, total in zip(column.levels, totals, strict=True) if total)
            raise DataError(
                f"{name}: nobody in the analysis set has the reference level {reference!r}, so nothing can "
                f"be compared with it; levels with people are {others}.",
                "Choose another `reference:`.",
            )
        return reference, None
    if not column.levels:
        return None, None
    # The first of equals: argmax takes the earliest of the largest.
    return column.levels[int(np.argmax(totals))], "most frequent"


def level_totals(column: Column, rows: Rows) -> np.ndarray:
    """People at each level of a column of ``rows``; missing values are left out."""
    known = ~column.missing
    weights = None if rows.counts is None else rows.counts[known].astype(float)
    totals = np.bincount(column.values[known].astype(int), weights=weights, minlength=len(column.levels))
    return totals.astype(np.int64)


def _reference_value(described: Variable, column: Column, rows: Rows) -> tuple[str, str | None]:
    if described.reference is not None:
        return written(float(described.reference)), None
    median = float(quantile(column.values, [0.5], rows.counts)[0])
    return written(round(median, column.decimals + 1)), "median"


def _require_positive(name: str, column: Column, rows: Rows) -> None:
    wrong = np.flatnonzero(column.values <= 0)
    if wrong.size:
        shown = "; ".join(f"line {rows.lines[place]}: {written(column.values[place])}" for place in wrong[:5])
        raise DataError(
            f"{name}: the shape log2 needs values above 0; {wrong.size} in the analysis set are not: "
            f"{shown}.",
            "Correct the data, name a code that means 'not recorded' under `missing:`, or use another shape.",
        )


def _knots(name: str, shape: SplineShape, column: Column, rows: Rows) -> tuple[float, ...]:
    stated = shape.spline.knots
    if isinstance(stated, int):
        return spline_knots(name, column.values, stated, rows.counts)
    lowest, highest = float(column.values.min()), float(column.values.max())
    if stated[0] < lowest or stated[-1] > highest:
        raise DataError(
            f"{name}: the knots must lie among the values of the analysis set, which run from "
            f"{written(lowest)} to {written(highest)}; stated are "
            f"{', '.join(written(knot) for knot in stated)}.",
            "Move the knots inside.",
        )
    return tuple(float(knot) for knot in stated)


def by_name(variables: list[tree.Variable]) -> Mapping[str, tree.Variable]:
    """The variables under their names."""
    return {variable.name: variable for variable in variables}
