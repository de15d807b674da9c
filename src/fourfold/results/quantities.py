"""Curves and bins along a quantity."""

from __future__ import annotations

from dataclasses import dataclass, field

from fourfold.results.hidden import Hidden


@dataclass(frozen=True, slots=True, kw_only=True)
class CurvePoint:
    """A point of a smooth curve with its pointwise band."""

    x: float
    y: float
    lower: float | None
    upper: float | None


@dataclass(frozen=True, slots=True, kw_only=True)
class OddsRatioCurve:
    """Odds ratio of a shaped quantity against ``reference``; ``curve.y`` is the odds ratio."""

    term: str
    label: str
    unit: str | None
    shape: str
    reference: float
    knots: list[float]
    curve: list[CurvePoint]


@dataclass(frozen=True, slots=True, kw_only=True)
class QuantityBin:
    lower: float
    upper: float
    mean: float | None
    events: int | None
    total: int | None
    proportion: float | None
    proportion_lower: float | None
    proportion_upper: float | None
    hidden: Hidden = field(default_factory=dict)


@dataclass(frozen=True, slots=True, kw_only=True)
class JitteredPoint:
    """A person, moved at random; only where the description's disclosure rules allow it."""

    x: float
    y: float
    event: bool
    group: str | None


@dataclass(frozen=True, slots=True, kw_only=True)
class OutcomeByQuantity:
    """Smoothed proportion with the event against a quantity, before any adjustment."""

    term: str
    label: str
    unit: str | None
    curve: list[CurvePoint]
    bins: list[QuantityBin]
    points: list[JitteredPoint] = field(default_factory=list)
    group_label: str | None = None
    hidden: Hidden = field(default_factory=dict)
