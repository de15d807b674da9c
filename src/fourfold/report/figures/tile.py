"""The fourfold tile: a fourfold table drawn so that areas are counts.

A square is cut once upright, at the exposed share; each part is cut once across, at its own share
of events, which lie at the bottom. The four areas are then proportional to the four counts, and
the heights of the two lower areas are the two shares of events.
"""

from __future__ import annotations

from dataclasses import dataclass

from fourfold.report.figures import lettering
from fourfold.report.figures.canvas import SMALL, Canvas
from fourfold.report.figures.figure import Figure, Setting, slug
from fourfold.results import tree

_SIDE = 196.0
_LEFT = 150.0


@dataclass(frozen=True, slots=True)
class Cuts:
    """Where the square is cut, as shares of its side between 0 and 1.

    ``exposed`` is the share of people exposed; the other two are the shares of events, None in a
    part that holds no one.
    """

    exposed: float
    events_exposed: float | None
    events_unexposed: float | None


def cuts(table: tree.FourfoldTable) -> Cuts | None:
    """Give the cuts of a table; None where a cell is hidden or the table is empty."""
    cells = _cells(table)
    if cells is None or sum(cells) <= 0:
        return None
    a, b, c, d = cells
    return Cuts(
        (a + b) / (a + b + c + d),
        a / (a + b) if a + b else None,
        c / (c + d) if c + d else None,
    )


def draw(table: tree.FourfoldTable, setting: Setting) -> Figure | None:
    """Draw the tile of one binary exposure; None where a cell is hidden."""
    where = cuts(table)
    cells = _cells(table)
    if where is None or cells is None:
        return None
    a, b, c, d = cells
    parts = [_part(table.label, level, setting) for level in (table.exposed_label, table.unexposed_label)]
    headings = [lettering.block(part, _LEFT - 14, most=3, bold=True) for part in parts]
    top = max(heading.height for heading in headings) + 22
    canvas = Canvas(2 * _LEFT + _SIDE, top + _SIDE + 6)
    _square(canvas, where, _LEFT, top, _SIDE)
    risks = table.risk_exposed is not None and table.risk_unexposed is not None
    _side(canvas, setting, headings[0], top, (a, b), where.events_exposed, risks, left=True)
    _side(canvas, setting, headings[1], top, (c, d), where.events_unexposed, risks, left=False)

    values = {
        "label": table.label,
        "exposed": parts[0],
        "unexposed": parts[1],
        "cells": {
            "a": setting.say("tile.events", n=a),
            "b": setting.say("tile.others", n=b),
            "c": setting.say("tile.events", n=c),
            "d": setting.say("tile.others", n=d),
        },
        "shares": risks and a + b > 0 and c + d > 0,
        "share_exposed": setting.share(a, a + b),
        "share_unexposed": setting.share(c, c + d),
    }
    alternative = setting.say("tile.alt", **values)
    return Figure(
        slug("tile", table.exposure),
        setting.say("tile.title", **values),
        canvas.svg(alternative),
        alternative,
        setting.say("tile.caption", **values),
    )


def mark(table: tree.FourfoldTable | None, side: float = 44.0) -> str:
    """Draw the small wordless tile of a heading, as an ornament.

    Without a table, or with a hidden cell, the square stays uncut but for the cross that names
    the program: equal quarters in outline, which claim nothing.
    """
    canvas = Canvas(side, side)
    where = cuts(table) if table is not None else None
    if where is None:
        half = side / 2
        canvas.rect(0.5, 0.5, side - 1, side - 1, "outline")
        canvas.line((half, 0.5), (half, side - 0.5), "outline")
        canvas.line((0.5, half), (side - 0.5, half), "outline")
    else:
        _square(canvas, where, 0.5, 0.5, side - 1)
    return canvas.ornament()


def _part(label: str, level: str, setting: Setting) -> str:
    """Name a part of the square: a bare level such as ``yes`` says nothing without its variable."""
    if label.casefold() in level.casefold():
        return level
    return setting.say("tile.part", label=label, level=level)


def _cells(table: tree.FourfoldTable) -> tuple[int, int, int, int] | None:
    a, b, c, d = table.a, table.b, table.c, table.d
    if a is None or b is None or c is None or d is None or table.hidden.keys() & {"a", "b", "c", "d"}:
        return None
    return a, b, c, d


def _square(canvas: Canvas, where: Cuts, left: float, top: float, side: float) -> None:
    canvas.rect(left, top, side, side, "tint")
    upright = left + where.exposed * side
    parts = (
        (left, upright - left, where.events_exposed),
        (upright, left + side - upright, where.events_unexposed),
    )
    for x, width, share in parts:
        if share is not None:
            canvas.rect(x, top + side * (1 - share), width, side * share, "event")
    # The cuts lie on the borders; one that would hide a thin area is left out.
    thick = 2.0 if side > 100 else 1.0
    for x, width, share in parts:
        if share is not None and min(share, 1 - share) * side > 2 * thick:
            y = top + side * (1 - share)
            canvas.line((x, y), (x + width, y), "cut", stroke_width=thick)
    if min(where.exposed, 1 - where.exposed) * side > 2 * thick:
        canvas.line((upright, top), (upright, top + side), "cut", stroke_width=thick)
    canvas.rect(left, top, side, side, "outline")


def _side(
    canvas: Canvas,
    setting: Setting,
    heading: lettering.Block,
    top: float,
    counts: tuple[int, int],
    share: float | None,
    risks: bool,
    *,
    left: bool,
) -> None:
    """Write one part's label and counts at its own side of the square, at the height of its areas."""
    events, others = counts
    x = _LEFT - 12 if left else _LEFT + _SIDE + 12
    anchor = "end" if left else "start"
    heading.write(canvas, (x, top - 22 - heading.height + heading.size * lettering.LEADING), anchor=anchor)
    total = setting.say("tile.people", n=events + others)
    canvas.text((x, top - 7), total, "muted", anchor=anchor, size=SMALL)
    if share is None:
        return
    upper = top + _SIDE * (1 - share) / 2
    lower = top + _SIDE * (1 - share / 2)
    # The two labels keep clear of each other and of the square's ends, however thin their areas.
    lower = min(max(lower, top + 46), top + _SIDE - 10)
    upper = min(max(upper, top + 10), lower - 40)
    canvas.text((x, upper + 4), setting.say("tile.others", n=others), anchor=anchor)
    canvas.text((x, lower - 2), setting.say("tile.events", n=events), "event", anchor=anchor, bold=True)
    percent = setting.words.numbers.percent(100 * share, events + others)
    if risks and percent:
        canvas.text(
            (x, lower + 12), setting.say("tile.risk", share=percent), "muted", anchor=anchor, size=SMALL
        )
