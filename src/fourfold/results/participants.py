"""The flow of participants, what they lack, and what the look at the rows brought to light."""

from __future__ import annotations

from dataclasses import dataclass, field

from fourfold.results.hidden import Hidden


@dataclass(frozen=True, slots=True, kw_only=True)
class Exclusion:
    reason: str
    count: int | None
    remaining: int | None
    hidden: Hidden = field(default_factory=dict)


@dataclass(frozen=True, slots=True, kw_only=True)
class MissingVariable:
    """Missing values of one variable among the rows left after the exclusions."""

    variable: str
    label: str
    count: int | None
    percent: float | None
    hidden: Hidden = field(default_factory=dict)


@dataclass(frozen=True, slots=True, kw_only=True)
class MissingPattern:
    """Rows that lack exactly these variables."""

    variables: list[str]
    count: int | None
    hidden: Hidden = field(default_factory=dict)


@dataclass(frozen=True, slots=True, kw_only=True)
class MissingAssociation:
    """Is being incomplete in ``variable`` associated with the outcome (Fisher or chi-squared)?"""

    variable: str
    events_incomplete: int | None
    incomplete: int | None
    events_complete: int | None
    complete: int | None
    odds_ratio: float | None
    lower: float | None
    upper: float | None
    p_value: float | None
    test: str
    hidden: Hidden = field(default_factory=dict)


@dataclass(frozen=True, slots=True, kw_only=True)
class Participants:
    """The flow. read = sum of exclusions + eligible; eligible = incomplete + analysed.

    Counts are of rows, or of people where a ``counts`` column says so. ``crude_rows`` maps each
    exposure or predictor to the rows its crude model alone would have had.
    """

    read: int | None
    exclusions: list[Exclusion]
    eligible: int | None
    incomplete: int | None
    analysed: int | None
    events: int | None
    non_events: int | None
    crude_rows: dict[str, int | None] = field(default_factory=dict)
    missing: list[MissingVariable] = field(default_factory=list)
    patterns: list[MissingPattern] = field(default_factory=list)
    missing_associations: list[MissingAssociation] = field(default_factory=list)
    duplicated_identifiers: int | None = 0
    duplicated_rows: int | None = 0
    hidden: Hidden = field(default_factory=dict)


@dataclass(frozen=True, slots=True, kw_only=True)
class ImplausibleValues:
    variable: str
    below: int | None
    above: int | None
    lowest: float | None
    highest: float | None
    limits: list[float]
    hidden: Hidden = field(default_factory=dict)


@dataclass(frozen=True, slots=True, kw_only=True)
class SuspectedCode:
    """A value that repeats in a quantity far from the rest, like 99 or 999."""

    variable: str
    value: float
    count: int | None
    hidden: Hidden = field(default_factory=dict)


@dataclass(frozen=True, slots=True, kw_only=True)
class SparseLevel:
    """Events and non-events of a level of a categorical term in the analysis set."""

    variable: str
    level: str
    events: int | None
    non_events: int | None
    reference: bool
    hidden: Hidden = field(default_factory=dict)


@dataclass(frozen=True, slots=True, kw_only=True)
class DateOrder:
    """Rows where ``later`` (a covariate's date) falls after ``earlier`` (the outcome's date)."""

    covariate: str
    outcome: str
    count: int | None
    hidden: Hidden = field(default_factory=dict)


@dataclass(frozen=True, slots=True, kw_only=True)
class Audit:
    """What the look at the rows brought to light, before any fit."""

    implausible: list[ImplausibleValues] = field(default_factory=list)
    suspected_codes: list[SuspectedCode] = field(default_factory=list)
    constant: list[str] = field(default_factory=list)
    near_constant: list[str] = field(default_factory=list)
    duplicated_columns: list[list[str]] = field(default_factory=list)
    levels: list[SparseLevel] = field(default_factory=list)
    unused_levels: dict[str, list[str]] = field(default_factory=dict)
    looks_like_identifier: list[str] = field(default_factory=list)
    looks_like_date: list[str] = field(default_factory=list)
    outcome_reversed: str | None = None
    date_order: list[DateOrder] = field(default_factory=list)
