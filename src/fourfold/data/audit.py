"""A look at the coded rows before any fit: what a careful reader of the data would ask about."""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Container, Mapping, Sequence
from dataclasses import dataclass
from hashlib import sha256

import numpy as np
from numpy.typing import NDArray

from fourfold.data.columns import Column, Rows
from fourfold.data.lookalikes import looks_like_date, looks_like_identifier, negative_word
from fourfold.data.suspected_codes import suspected_codes
from fourfold.data.variables import MODEL_ROLES
from fourfold.description.model import StudyDescription
from fourfold.results import tree

Mask = NDArray[np.bool_]
NEARLY_ALL = 0.99
FEW_VALUES = 20
"""A quantity with at most this many different values is compared with other columns as a category."""


def audit(
    description: StudyDescription,
    variables: Sequence[tree.Variable],
    eligible: Rows,
    analysis: Rows,
    event: Mask,
) -> tree.Audit:
    """Everything the rows bring to light.

    Values (implausible, suspected codes, dates) are looked at in the eligible rows; columns as the
    model will use them in the analysis set.
    """
    in_model = [variable for variable in variables if variable.role in MODEL_ROLES]
    values = {variable.name: different_values(analysis.columns[variable.name]) for variable in in_model}
    shares = {name: largest_share(analysis, different) for name, different in values.items()}
    identifier = description.data.identifier
    return tree.Audit(
        implausible=[found for variable in variables for found in _implausible(variable, eligible)],
        suspected_codes=[
            found
            for variable in variables
            if variable.kind == "quantity"
            for found in suspected_codes(variable.name, eligible)
        ],
        constant=[name for name, share in shares.items() if share == 1],
        near_constant=[name for name, share in shares.items() if NEARLY_ALL < share < 1],
        duplicated_columns=duplicated_columns(values, {v.name for v in in_model if v.kind == "quantity"}),
        levels=[row for variable in in_model for row in _levels(variable, analysis, event)],
        unused_levels={
            variable.name: unused
            for variable in in_model
            if (unused := _unused(analysis.columns[variable.name]))
        },
        looks_like_identifier=[
            variable.name
            for variable in in_model
            if (description.variables[variable.name].column or variable.name) == identifier
            or looks_like_identifier(analysis.columns[variable.name])
        ],
        looks_like_date=[
            variable.name for variable in in_model if looks_like_date(analysis.columns[variable.name])
        ],
        outcome_reversed=_reversed(variables[0]),
        date_order=_date_order(description, in_model, eligible),
    )


def _implausible(variable: tree.Variable, rows: Rows) -> list[tree.ImplausibleValues]:
    if variable.plausible is None or variable.kind != "quantity":
        return []
    low, high = variable.plausible
    values = rows.columns[variable.name].values
    below, above = rows.count(values < low), rows.count(values > high)
    if below + above == 0:
        return []
    outside = values[(values < low) | (values > high)]
    return [
        tree.ImplausibleValues(
            variable=variable.name,
            below=below,
            above=above,
            lowest=float(outside.min()) if below else None,
            highest=float(outside.max()) if above else None,
            limits=[low, high],
        )
    ]


@dataclass(frozen=True, slots=True)
class Different:
    """The different values of a column in increasing order: how many, and which one each row has."""

    number: int
    places: NDArray[np.intp]


def different_values(column: Column) -> Different:
    """Find the different values of a complete column."""
    if column.kind in ("quantity", "date"):
        values, places = np.unique(column.values, return_inverse=True)
        return Different(values.size, places)
    # Codes of levels need no sorting, only numbering without gaps.
    codes = column.values.astype(np.intp)
    used = np.bincount(codes) > 0
    return Different(int(used.sum()), (np.cumsum(used) - 1)[codes])


def largest_share(rows: Rows, different: Different) -> float:
    """Share of people who have the most frequent value."""
    totals = np.bincount(different.places, weights=rows.counts)
    # Ratios of whole numbers: a constant column gives exactly 1.
    return float(totals.max() / rows.people)


def duplicated_columns(values: Mapping[str, Different], quantities: Container[str]) -> list[list[str]]:
    """Groups of variables that hold the same information: each value of one goes with one of the other.

    Quantities with many values must rank the rows alike, or exactly the other way round.
    """
    groups: defaultdict[bytes, list[str]] = defaultdict(list)
    for name, different in values.items():
        # Constant columns are named for that alone.
        if different.number > 1:
            groups[_signature(different, ranked=name in quantities)].append(name)
    return [group for group in groups.values() if len(group) > 1]


def _signature(different: Different, *, ranked: bool) -> bytes:
    """What two columns share exactly if they hold the same information."""
    places, number = different.places, different.number
    if ranked and number > FEW_VALUES:
        turned = number - 1 - places
        # Of the two directions, the one that starts lower: the first place that is not its own mirror.
        differing = np.flatnonzero(places != turned)
        first = differing[0]
        numbered = places if places[first] < turned[first] else turned
        kind = b"ranks"
    else:
        first_row = np.empty(number, dtype=np.intp)
        first_row[places[::-1]] = np.arange(places.size)[::-1]
        by_appearance = np.empty(number, dtype=np.intp)
        by_appearance[np.argsort(first_row)] = np.arange(number)
        numbered, kind = by_appearance[places], b"words"
    return kind + sha256(numbered.tobytes()).digest()


def _levels(variable: tree.Variable, rows: Rows, event: Mask) -> list[tree.SparseLevel]:
    column = rows.columns[variable.name]
    if column.kind not in ("binary", "category", "ordered"):
        return []
    return [
        tree.SparseLevel(
            variable=variable.name,
            level=level,
            events=rows.count((column.values == place) & event),
            non_events=rows.count((column.values == place) & ~event),
            reference=level == variable.reference,
        )
        for place, level in enumerate(column.levels)
    ]


def _unused(column: Column) -> list[str]:
    if column.kind not in ("category", "ordered"):
        return []
    used = np.bincount(column.values.astype(int), minlength=len(column.levels)) > 0
    return [level for place, level in enumerate(column.levels) if not used[place]]


def _reversed(outcome: tree.Variable) -> str | None:
    """The value called present, where its own word says no and the other's does not."""
    present, absent = outcome.present or "", outcome.reference or ""
    return present if negative_word(present) and not negative_word(absent) else None


def _date_order(
    description: StudyDescription, in_model: Sequence[tree.Variable], rows: Rows
) -> list[tree.DateOrder]:
    outcome_date = description.variables[description.outcome].dated_by
    if outcome_date is None:
        return []
    happened = rows.columns[outcome_date].values
    answer = []
    for variable in in_model:
        measured_by = description.variables[variable.name].dated_by
        if measured_by is not None and measured_by != outcome_date:
            after = rows.count(rows.columns[measured_by].values > happened)
            if after:
                answer.append(
                    tree.DateOrder(covariate=variable.name, outcome=description.outcome, count=after)
                )
    return answer
