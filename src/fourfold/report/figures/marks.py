"""Small shapes: the marks of points, each telling by its outline what it stands for."""

from __future__ import annotations

from collections.abc import Callable, Sequence

from fourfold.report.figures.canvas import Point, number


def circle(centre: Point, radius: float) -> str:
    """Give path data of a circle (px)."""
    x, y = centre
    r, d = number(radius), number(2 * radius)
    return f"M{number(x - radius)} {number(y)}a{r} {r} 0 1 0 {d} 0a{r} {r} 0 1 0-{d} 0"


def square(centre: Point, radius: float) -> str:
    """Give path data of a square with about the area of the circle of that radius."""
    side = 1.77 * radius
    x, y, d = centre[0] - side / 2, centre[1] - side / 2, number(side)
    return f"M{number(x)} {number(y)}h{d}v{d}h-{d}z"


def diamond(centre: Point, radius: float) -> str:
    """Give path data of a square standing on a corner."""
    x, y, r = centre[0], centre[1], 1.3 * radius
    n = number(r)
    return f"M{number(x)} {number(y - r)}l{n} {n}-{n} {n}-{n}-{n}z"


def triangle(centre: Point, radius: float) -> str:
    """Give path data of a triangle standing on its base."""
    x, y, r = centre[0], centre[1], 1.35 * radius
    return f"M{number(x)} {number(y - r)}l{number(r)} {number(1.75 * r)}h-{number(2 * r)}z"


SHAPES: Sequence[Callable[[Point, float], str]] = (circle, square, triangle, diamond)
"""Shapes of groups, in the order of the series colours."""


def arrow_head(tip: Point, direction: int, size: float = 4.0) -> str:
    """Give path data of an arrow head that points right (``direction`` 1) or left (-1)."""
    x, y = tip
    back = number(-direction * size * 1.3)
    half = number(size * 0.75)
    return f"M{number(x)} {number(y)}l{back}-{half}v{number(size * 1.5)}z"
