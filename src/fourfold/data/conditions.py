"""Structured conditions of exclusions. A missing value satisfies ``missing`` and nothing else."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from datetime import date

import numpy as np
from numpy.typing import NDArray

from fourfold.data.coding import Coded, days_since_1970, written
from fourfold.data.levels import match, numbered, spelled
from fourfold.description.model import Condition, Scalar
from fourfold.errors import DataError

Array = NDArray[np.float64]
Mask = NDArray[np.bool_]


def satisfied(condition: Condition, variables: Mapping[str, Coded]) -> Mask:
    """Which rows satisfy the condition.

    ``is``, ``is_not``, ``in``, ``below`` and ``above`` are about recorded values: a row whose value is
    missing satisfies none of them, ``is_not`` included. ``below`` and ``above`` do not include the
    limit itself.

    Raises
    ------
    DataError
        If a value is compared that the variable cannot have.
    """
    if condition.all is not None:
        every: Mask = np.logical_and.reduce([satisfied(part, variables) for part in condition.all])
        return every
    if condition.any is not None:
        some: Mask = np.logical_or.reduce([satisfied(part, variables) for part in condition.any])
        return some
    assert condition.variable is not None
    coded = variables[condition.variable]
    if condition.missing is not None:
        return coded.missing if condition.missing else ~coded.missing
    known = ~np.isnan(coded.values)
    if condition.below is not None:
        values, limit = _scale(coded, condition.below)
        return known & (values < limit)
    if condition.above is not None:
        values, limit = _scale(coded, condition.above)
        return known & (values > limit)
    if condition.is_ is not None:
        return known & _equal(coded, [condition.is_])
    if condition.is_not is not None:
        return known & ~_equal(coded, [condition.is_not])
    return known & _equal(coded, condition.in_ or [])


def _equal(coded: Coded, wanted: Sequence[Scalar]) -> Mask:
    if coded.kind == "quantity":
        return np.isin(coded.values, [_as_number(coded, value) for value in wanted])
    if coded.kind == "date":
        return np.isin(coded.values, [_as_day(coded, value) for value in wanted])
    places = [_place(coded, spelled(value)) for value in wanted]
    return np.isin(coded.values, [place for place in places if place is not None])


def _place(coded: Coded, level: str) -> int | None:
    found = match(level, coded.labels, coded.decimal)
    if found is not None:
        return coded.labels.index(found)
    alike = [label for label in coded.labels if label.casefold() == level.casefold()]
    if alike:
        # Not the same spelling, but surely meant: leaving it would exclude nobody without a sign.
        raise DataError(
            f"an exclusion compares {coded.name} with {level!r}; the data spell it {alike[0]!r}.",
            "Write the value as the data spell it.",
        )
    return None


def _scale(coded: Coded, limit: float | date) -> tuple[Array, float]:
    """Values and limit as comparable numbers: days for dates, the numbers of numbered levels."""
    if coded.kind == "date":
        return coded.values, _as_day(coded, limit)
    if coded.kind == "quantity":
        return coded.values, _as_number(coded, limit)
    numbers: list[float] | None
    if isinstance(limit, date):
        days = [days_since_1970(label) for label in coded.labels]
        numbers, bound = (None if np.isnan(days).any() else days), _as_day(coded, limit)
    else:
        numbers, bound = numbered(coded.labels, coded.decimal), float(limit)
    if numbers is None:
        raise DataError(
            f"an exclusion compares {coded.name} with {spelled_limit(limit)} by `below:` or `above:`, but "
            "its values are not all numbers or dates.",
            "Describe it as a quantity or a date, or use `is:` or `in:`.",
        )
    scale = np.array([*numbers, np.nan])
    places = np.where(np.isnan(coded.values), len(numbers), coded.values).astype(int)
    return scale[places], bound


def spelled_limit(limit: float | date) -> str:
    """A limit as it would be written."""
    return limit.isoformat() if isinstance(limit, date) else written(limit)


def _as_number(coded: Coded, value: Scalar | date) -> float:
    try:
        if isinstance(value, bool | date):
            raise ValueError
        return float(value)
    except ValueError:
        raise DataError(
            f"an exclusion compares {coded.name}, a quantity, with {spelled(value)!r}, which is no number.",
            "Write a number.",
        ) from None


def _as_day(coded: Coded, value: Scalar | date) -> float:
    day = days_since_1970(spelled(value))
    if np.isnan(day):
        raise DataError(
            f"an exclusion compares {coded.name}, a date, with {spelled(value)!r}, which is not a date.",
            "Write it as 2024-01-31.",
        )
    return day
