"""Axes: ticks, their labels, light grid lines, and a title set level so that it reads at once."""

from __future__ import annotations

from dataclasses import dataclass

from fourfold.report.figures import lettering
from fourfold.report.figures.canvas import SMALL, Canvas, Point, number
from fourfold.report.figures.scales import Scale

TICK = 4.0


@dataclass(frozen=True, slots=True)
class Panel:
    """The part of a figure in which data are drawn; edges in px, ``top`` above ``bottom``."""

    left: float
    top: float
    right: float
    bottom: float

    @property
    def middle(self) -> Point:
        """Centre, px."""
        return (self.left + self.right) / 2, (self.top + self.bottom) / 2


def below(canvas: Canvas, panel: Panel, scale: Scale, title: str = "", *, grid: bool = False) -> None:
    """Draw the axis under a panel, with its title beneath the labels; the canvas grows to hold them."""
    if grid:
        data = "".join(_step(scale(t.value), panel.top, "V", panel.bottom) for t in scale.ticks)
        canvas.path(data, "grid")
    canvas.path(
        _step(panel.left, panel.bottom, "H", panel.right)
        + "".join(_step(scale(t.value), panel.bottom, "V", panel.bottom + TICK) for t in scale.ticks),
        "axis",
    )
    edge = -1e9
    for tick in scale.ticks:
        x, half = scale(tick.value), lettering.width(tick.label, SMALL) / 2
        # A label that would touch its neighbour is left out; its tick stays.
        if x - half < edge + 3:
            continue
        edge = x + half
        canvas.text((x, panel.bottom + 15), tick.label, "muted", anchor="middle", size=SMALL)
    if title:
        room = panel.right - panel.left + 60
        words = lettering.block(title, room, most=2)
        words.write(canvas, (panel.middle[0], panel.bottom + 32), "ink", "middle")
        canvas.height = max(canvas.height, panel.bottom + 24 + words.height)


def beside(canvas: Canvas, panel: Panel, scale: Scale, title: str = "", *, grid: bool = True) -> None:
    """Draw the axis left of a panel, with its title above it, left-aligned with the labels."""
    if grid:
        data = "".join(_step(panel.left, scale(t.value), "H", panel.right) for t in scale.ticks)
        canvas.path(data, "grid")
    canvas.path(
        _step(panel.left, panel.top, "V", panel.bottom)
        + "".join(_step(panel.left, scale(t.value), "H", panel.left - TICK) for t in scale.ticks),
        "axis",
    )
    for tick in scale.ticks:
        y = scale(tick.value) + SMALL * 0.35
        canvas.text((panel.left - TICK - 3, y), tick.label, "muted", anchor="end", size=SMALL)
    if title:
        widest = max((lettering.width(tick.label, SMALL) for tick in scale.ticks), default=0.0)
        start = panel.left - TICK - 3 - widest
        words = lettering.block(title, panel.right - start, most=2)
        words.write(canvas, (start, panel.top - 10 - words.height + words.size * lettering.LEADING))


def margin(scale: Scale) -> float:
    """Give the room that the labels left of a panel take, px."""
    return max((lettering.width(tick.label, SMALL) for tick in scale.ticks), default=0.0) + TICK + 4


def _step(x: float, y: float, way: str, to: float) -> str:
    return f"M{number(x)} {number(y)}{way}{number(to)}"
