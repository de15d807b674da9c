"""The ROC curve, with the area under it."""

from __future__ import annotations

from fourfold.report.figures import axes, scales
from fourfold.report.figures.canvas import Canvas, Point, polyline
from fourfold.report.figures.curves import thinned
from fourfold.report.figures.figure import Figure, Setting
from fourfold.results import tree

_PANEL = axes.Panel(44, 24, 314, 294)
_MOST_STEPS = 202
"""The curve comes thinned; dropping more of its corners would cut them."""
_LANDMARKS = (0.90, 0.75, 0.50)


def draw(discrimination: tree.Discrimination, setting: Setting) -> Figure | None:
    """Draw the curve; None where it is hidden or has no point."""
    curve = discrimination.curve
    if len(curve) < 2:
        return None
    canvas = Canvas(_PANEL.right + 18, _PANEL.bottom)
    across = scales.probability(0, 1, _PANEL.left, _PANEL.right)
    upward = scales.probability(0, 1, _PANEL.bottom, _PANEL.top)
    axes.beside(canvas, _PANEL, upward, setting.say("roc.sensitivity"))
    axes.below(canvas, _PANEL, across, setting.say("roc.specificity"), grid=True)
    canvas.line((across(0), upward(0)), (across(1), upward(1)), "outline", stroke_dasharray="4 3")
    steps = sorted({(1 - point.specificity, point.sensitivity) for point in [*curve, *_ends()]})
    points: list[Point] = [(across(x), upward(y)) for x, y in thinned(steps, _MOST_STEPS)]
    canvas.path(polyline(points), "accent-line", stroke_width=2.0, stroke_linejoin="round")
    numbers = setting.words.numbers
    area = ""
    interval: tuple[str, str] | None = None
    if discrimination.auc is not None:
        area = numbers.number(discrimination.auc, 2)
        if discrimination.lower is not None and discrimination.upper is not None:
            interval = (
                f"{numbers.number(discrimination.lower, 2)}",
                f"{numbers.number(discrimination.upper, 2)}",
            )
    values = {
        "area": area,
        "interval": interval,
        "landmarks": [
            (f"{scales.plain(100 * at)}%", numbers.percent(100 * reached))
            for at in _LANDMARKS
            if (reached := _reached(curve, at)) is not None
        ],
    }
    if area:
        place = _PANEL.right - 8, _PANEL.bottom - 27
        canvas.text(place, setting.say("roc.label", **values), "muted", anchor="end")
        canvas.text((place[0], place[1] + 15), setting.say("roc.area", **values), bold=True, anchor="end")
    alternative = setting.say("roc.alt", **values)
    return Figure(
        "roc",
        setting.say("roc.title"),
        canvas.svg(alternative),
        alternative,
        setting.say("roc.caption", **values),
    )


def _ends() -> tuple[tree.RocPoint, tree.RocPoint]:
    return tree.RocPoint(specificity=1.0, sensitivity=0.0), tree.RocPoint(specificity=0.0, sensitivity=1.0)


def _reached(curve: list[tree.RocPoint], specificity: float) -> float | None:
    """Give the highest sensitivity among the curve's points at or above a specificity."""
    return max(
        (point.sensitivity for point in curve if point.specificity >= specificity - 1e-12), default=None
    )
