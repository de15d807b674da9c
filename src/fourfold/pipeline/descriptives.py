"""Characteristics of the participants by outcome, and by exposure for cohorts and surveys."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from fourfold.data.columns import Column, Rows
from fourfold.data.prepare import Prepared
from fourfold.results import tree

BY_EXPOSURE = ("cohort", "survey")


def descriptives_of(prepared: Prepared, design: str) -> tree.Descriptives:
    """Tables over the eligible rows, so that what is missing shows; no P-values."""
    rows = prepared.eligible
    described = [variable for variable in prepared.variables if variable.kind != "date"]
    outcome = next(variable for variable in described if variable.role == "outcome")
    by_exposure = []
    if design in BY_EXPOSURE:
        by_exposure = [
            _table(rows, exposure, described)
            for exposure in described
            if exposure.role == "exposure" and exposure.kind in ("binary", "category", "ordered")
        ]
    return tree.Descriptives(by_outcome=_table(rows, outcome, described), by_exposure=by_exposure)


def _table(rows: Rows, by: tree.Variable, variables: Sequence[tree.Variable]) -> tree.DescriptiveTable:
    column = rows.columns[by.name]
    groups = _groups(column, by)
    known = ~np.isnan(column.values)
    described: list[tree.Descriptive] = []
    for variable in variables:
        if variable.name != by.name:
            described += _describe(rows, variable, known, groups)
    return tree.DescriptiveTable(
        by=by.name,
        by_label=by.label,
        groups=[name for name, _ in groups],
        group_sizes=[rows.count(mask) for _, mask in groups],
        rows=described,
    )


def _groups(column: Column, variable: tree.Variable) -> list[tuple[str, NDArray[np.bool_]]]:
    if variable.kind == "binary":
        return [
            (variable.present or "present", column.values == 1),
            (variable.reference or "absent", column.values == 0),
        ]
    return [(level, column.values == place) for place, level in enumerate(column.levels)]


def _describe(
    rows: Rows,
    variable: tree.Variable,
    known: NDArray[np.bool_],
    groups: Sequence[tuple[str, NDArray[np.bool_]]],
) -> list[tree.Descriptive]:
    column = rows.columns[variable.name]
    if variable.kind == "quantity":
        cells = [_moments(rows, column, mask, name) for name, mask in [("overall", known), *groups]]
        return [_descriptive(variable, column, None, cells)]
    levels: list[tuple[str, NDArray[np.bool_]]]
    if variable.kind == "binary":
        levels = [(variable.present or "present", column.values == 1)]
    else:
        levels = [(level, column.values == place) for place, level in enumerate(column.levels)]
    return [
        _descriptive(
            variable,
            column,
            level,
            [_share(rows, column, mask, inside, name) for name, mask in [("overall", known), *groups]],
        )
        for level, inside in levels
    ]


def _descriptive(
    variable: tree.Variable, column: Column, level: str | None, cells: list[tree.DescriptiveCell]
) -> tree.Descriptive:
    return tree.Descriptive(
        variable=variable.name,
        label=variable.label,
        kind=variable.kind,
        level=level,
        unit=variable.unit,
        decimals=column.decimals,
        overall=cells[0],
        groups=cells[1:],
    )


def _share(
    rows: Rows, column: Column, group: NDArray[np.bool_], inside: NDArray[np.bool_], name: str
) -> tree.DescriptiveCell:
    present = group & ~np.isnan(column.values)
    total = rows.count(present)
    count = rows.count(present & inside)
    return tree.DescriptiveCell(
        group=name,
        count=count,
        total=total,
        percent=100 * count / total if total else None,
        missing=rows.count(group) - total,
    )


def _moments(rows: Rows, column: Column, group: NDArray[np.bool_], name: str) -> tree.DescriptiveCell:
    present = group & ~np.isnan(column.values)
    x = column.values[present]
    if rows.counts is not None:
        x = np.repeat(x, rows.counts[present])
    total = int(x.size)
    quartiles = [float(q) for q in np.quantile(x, [0.25, 0.5, 0.75])] if total else [None] * 3
    return tree.DescriptiveCell(
        group=name,
        total=total,
        mean=float(x.mean()) if total else None,
        sd=float(x.std(ddof=1)) if total > 1 else None,
        lower_quartile=quartiles[0],
        median=quartiles[1],
        upper_quartile=quartiles[2],
        missing=rows.count(group) - total,
    )
