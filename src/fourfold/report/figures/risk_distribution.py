"""How fitted risks are spread: people with the event above a line, people without below it."""

from __future__ import annotations

import math
from collections.abc import Sequence

from fourfold.report.figures import axes, lettering, scales
from fourfold.report.figures.canvas import SMALL, Canvas, number
from fourfold.report.figures.figure import Figure, Setting
from fourfold.report.figures.scales import Scale
from fourfold.results import tree

_HIDDEN = 5.0
"""Height of the dotted mark of a hidden count: the same for all, so that it tells nothing."""


def draw(bins: Sequence[tree.RiskBin], setting: Setting) -> Figure | None:
    """Draw the distribution; None where no bin has a count that may be shown."""
    if not any(one.events or one.non_events for one in bins):
        return None
    canvas = Canvas(640, 208)
    panel = axes.Panel(44, 10, 508, 196)
    last = max(one.upper for one in bins if _filled(one))
    across = scales.probability(0, last, panel.left, panel.right, count=6)
    mirrored(canvas, panel, across, bins, setting, labels=panel.right + 14)
    axes.below(canvas, panel, across, setting.say("risk_distribution.axis"))
    alternative = setting.say("risk_distribution.alt", **told(bins, setting))
    return Figure(
        "risk-distribution",
        setting.say("risk_distribution.title"),
        canvas.svg(alternative),
        alternative,
        setting.say("risk_distribution.caption", hidden=any(one.hidden for one in bins)),
    )


def mirrored(
    canvas: Canvas,
    panel: axes.Panel,
    across: Scale,
    bins: Sequence[tree.RiskBin],
    setting: Setting,
    *,
    labels: float,
) -> None:
    """Draw the two mirrored histograms into a panel, each side on its own scale of counts.

    ``labels`` is where the words right of the panel begin, px.
    """
    middle = panel.middle[1]
    for field, edge, style in (("events", panel.top, "event"), ("non_events", panel.bottom, "area")):
        counts = [getattr(one, field) for one in bins]
        most = max((count for count in counts if count), default=0)
        scale = scales.linear(0, most or 1, middle, edge, count=4)
        data = ""
        for one, count in zip(bins, counts, strict=True):
            if count and across.holds(one.lower):
                left, right = across(one.lower), across.held(one.upper)
                data += _bar(left + 0.5, right - 0.5, middle, scale(count))
        canvas.path(data, style)
        canvas.path(_hidden(bins, field, across, middle, edge), "outline", stroke_dasharray="1 1.5")
        # Two rows of labels need room; a side with no count shown has no scale.
        if most:
            top = scale.ticks[-1]
            canvas.path(f"M{number(panel.left)} {number(edge)}h-4", "axis")
            y = scale(top.value) + SMALL * 0.35
            canvas.text((panel.left - 7, y), top.label, "muted", anchor="end", size=SMALL)
        label = lettering.block(setting.say(f"risk_distribution.{field}"), 116, most=2, size=SMALL)
        label.write_centred(canvas, (labels, (middle + edge) / 2), "event" if field == "events" else "muted")
    canvas.text((panel.left - 7, middle + SMALL * 0.35), "0", "muted", anchor="end", size=SMALL)
    canvas.path(f"M{number(panel.left - 4)} {number(middle)}H{number(panel.right)}", "axis")
    canvas.path(f"M{number(panel.left)} {number(panel.top)}V{number(panel.bottom)}", "axis")


def told(bins: Sequence[tree.RiskBin], setting: Setting) -> dict[str, object]:
    """Give what an alternative text says of the bins: the fullest one of each side and the range."""
    numbers = setting.words.numbers
    # Edges are told apart: decimals go by the width of a bin.
    width = 100 * min((one.upper - one.lower for one in bins if one.upper > one.lower), default=0.01)
    digits = max(0, math.ceil(-math.log10(width)) + 1)

    def edge(value: float) -> str:
        return numbers.number(100 * value, digits) + "%"

    values: dict[str, object] = {"hidden": any(one.hidden for one in bins)}
    for field in ("events", "non_events"):
        shown = [one for one in bins if getattr(one, field)]
        fullest = max(shown, key=lambda one: getattr(one, field), default=None)
        values[f"most_{field}"] = (
            None
            if fullest is None
            else {
                "count": numbers.count(getattr(fullest, field)),
                "low": edge(fullest.lower),
                "high": edge(fullest.upper),
                "first": edge(shown[0].lower),
                "last": edge(shown[-1].upper),
            }
        )
    return values


def _filled(one: tree.RiskBin) -> bool:
    return bool(one.events or one.non_events or one.hidden)


def _bar(left: float, right: float, base: float, tip: float) -> str:
    wide = max(right - left, 0.6)
    return f"M{number(left)} {number(base)}h{number(wide)}V{number(tip)}h-{number(wide)}z"


def _hidden(bins: Sequence[tree.RiskBin], field: str, across: Scale, middle: float, edge: float) -> str:
    tip = middle + (_HIDDEN if edge > middle else -_HIDDEN)
    return "".join(
        _bar(across(one.lower) + 1, across.held(one.upper) - 1, middle, tip)
        for one in bins
        if field in one.hidden and across.holds(one.lower)
    )
