"""Characteristics of the participants by outcome and by exposure."""

from __future__ import annotations

from dataclasses import dataclass, field

from fourfold.results.hidden import Hidden


@dataclass(frozen=True, slots=True, kw_only=True)
class DescriptiveCell:
    """One group's summary of one row: a count for a level, or moments for a quantity."""

    group: str
    count: int | None = None
    total: int | None = None
    percent: float | None = None
    mean: float | None = None
    sd: float | None = None
    median: float | None = None
    lower_quartile: float | None = None
    upper_quartile: float | None = None
    missing: int | None = None
    hidden: Hidden = field(default_factory=dict)


@dataclass(frozen=True, slots=True, kw_only=True)
class Descriptive:
    """One row of the characteristics table, over eligible rows; ``level`` None for a quantity.

    Percentages are of the non-missing in the group (``total``). ``decimals`` is how finely a
    quantity was recorded.
    """

    variable: str
    label: str
    kind: str
    level: str | None
    unit: str | None
    decimals: int
    overall: DescriptiveCell
    groups: list[DescriptiveCell]


@dataclass(frozen=True, slots=True, kw_only=True)
class DescriptiveTable:
    """Characteristics by ``by`` (a variable's name); ``groups`` are level labels in order."""

    by: str
    by_label: str
    groups: list[str]
    group_sizes: list[int | None]
    rows: list[Descriptive]
    hidden: Hidden = field(default_factory=dict)


@dataclass(frozen=True, slots=True, kw_only=True)
class Descriptives:
    by_outcome: DescriptiveTable | None = None
    by_exposure: list[DescriptiveTable] = field(default_factory=list)
