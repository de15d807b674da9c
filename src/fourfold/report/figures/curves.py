"""Smooth curves with their bands, kept within a panel and to few points."""

from __future__ import annotations

import math
from collections.abc import Sequence
from typing import TypeVar

from fourfold.report.figures.canvas import Canvas, Point, polyline
from fourfold.report.figures.scales import Scale
from fourfold.results import tree

MOST_POINTS = 160

Item = TypeVar("Item")


def thinned(items: Sequence[Item], most: int = MOST_POINTS) -> list[Item]:
    """Keep at most ``most`` items, evenly spread, always the first and the last; move none."""
    if len(items) <= most:
        return list(items)
    step = (len(items) - 1) / (most - 1)
    return [items[round(index * step)] for index in range(most)]


def drawable(curve: Sequence[tree.CurvePoint], positive: bool = False) -> list[tree.CurvePoint]:
    """Keep the points that have a place, in the order of x; ``positive`` for a log axis."""
    kept = [
        point
        for point in curve
        if math.isfinite(point.x) and math.isfinite(point.y) and (point.y > 0 or not positive)
    ]
    return thinned(sorted(kept, key=lambda point: point.x))


def band(canvas: Canvas, curve: Sequence[tree.CurvePoint], across: Scale, upward: Scale) -> None:
    """Shade between the limits, each stretch of points that has both; cut at the panel's edges."""
    stretch: list[tuple[float, float, float]] = []
    for point in [*curve, None]:
        if point is not None and point.lower is not None and point.upper is not None:
            lower = _at(upward, point.lower)
            upper = _at(upward, point.upper)
            stretch.append((across.held(point.x), lower, upper))
            continue
        if len(stretch) > 1:
            edge: list[Point] = [(x, upper) for x, _, upper in stretch]
            edge += [(x, lower) for x, lower, _ in reversed(stretch)]
            canvas.path(polyline(edge, close=True), "band")
        stretch = []


def line(canvas: Canvas, curve: Sequence[tree.CurvePoint], across: Scale, upward: Scale) -> None:
    """Draw the curve itself, broken where it leaves the panel."""
    stretch: list[Point] = []
    for point in [*curve, None]:
        if point is not None and upward.holds(point.y) and across.holds(point.x):
            stretch.append((across(point.x), upward(point.y)))
            continue
        if len(stretch) > 1:
            canvas.path(polyline(stretch), "accent-line", stroke_width=2.0, stroke_linejoin="round")
        stretch = []


def _at(scale: Scale, value: float) -> float:
    """Give the place of a limit that may be zero or unbounded: the panel's edge then."""
    if math.isnan(value) or value == -math.inf or (scale.log and value <= 0):
        return scale.start
    if value == math.inf:
        return scale.end
    return scale.held(value)
