"""The odds ratio of a quantity along its range, against a reference value."""

from __future__ import annotations

from fourfold.report.figures import axes, curves, lettering, scales
from fourfold.report.figures.canvas import SMALL, Canvas, number
from fourfold.report.figures.figure import Figure, Setting, slug
from fourfold.results import tree

_PANEL = axes.Panel(56, 24, 520, 274)
_BEYOND = 4.0
"""The band may stretch the axis to this many times the curve's own range, not further."""


def draw(one: tree.OddsRatioCurve, setting: Setting) -> Figure | None:
    """Draw the curve with its band, the reference and the knots; None for an empty curve."""
    curve = curves.drawable(one.curve, positive=True)
    if len(curve) < 2:
        return None
    panel = _PANEL
    canvas = Canvas(panel.right + 20, panel.bottom)
    across = scales.linear(curve[0].x, curve[-1].x, panel.left, panel.right, count=7, widen=False)
    low, high = min([1.0, *(p.y for p in curve)]), max([1.0, *(p.y for p in curve)])
    lowers = [p.lower for p in curve if p.lower is not None and p.lower > 0]
    uppers = [p.upper for p in curve if p.upper is not None and p.upper < float("inf")]
    low = min(max(min([low, *lowers]), low / _BEYOND), 0.8)
    high = max(min(max([high, *uppers]), high * _BEYOND), 1.25)
    room = (high / low) ** 0.03
    upward = scales.log(low / room, high * room, panel.bottom, panel.top)

    axes.beside(canvas, panel, upward, setting.say("odds_ratio_curve.axis"))
    axes.below(canvas, panel, across, axis_title(one.label, one.unit))
    curves.band(canvas, curve, across, upward)
    if upward.holds(1.0):
        canvas.line((panel.left, upward(1.0)), (panel.right, upward(1.0)), "rule", stroke_width=1.0)
    curves.line(canvas, curve, across, upward)
    knots = "".join(
        f"M{number(across(knot))} {number(panel.bottom)}v-8" for knot in one.knots if across.holds(knot)
    )
    canvas.path(knots, "rule", stroke_width=1.6)
    if across.holds(one.reference) and upward.holds(1.0):
        _reference(canvas, setting, one, (across(one.reference), upward(1.0)), panel)

    values = told(one, curve, setting)
    alternative = setting.say("odds_ratio_curve.alt", **values)
    return Figure(
        slug("odds-ratio-curve", one.term),
        setting.say("odds_ratio_curve.title", **values),
        canvas.svg(alternative),
        alternative,
        setting.say("odds_ratio_curve.caption", **values),
    )


def axis_title(label: str, unit: str | None) -> str:
    """Name a quantity on its axis, with its unit."""
    return f"{label} ({unit})" if unit else label


def _reference(
    canvas: Canvas, setting: Setting, one: tree.OddsRatioCurve, place: tuple[float, float], panel: axes.Panel
) -> None:
    x, y = place
    words = setting.say("odds_ratio_curve.reference", value=scales.plain(one.reference), unit=one.unit or "")
    canvas.path(f"M{number(x)} {number(panel.top)}V{number(panel.bottom)}", "outline", stroke_dasharray="2 2")
    canvas.circle((x, y), 4.0, "accent-hollow", stroke_width=1.8)
    # The words stand at the end of the dotted line that is farther from the curve, which is at 1 here.
    upper = y - panel.top > panel.bottom - y
    height = panel.top + 10 if upper else panel.bottom - 16
    right = x + 6 + lettering.width(words, SMALL) < panel.right
    canvas.text(
        (x + 6 if right else x - 6, height), words, "muted", anchor="start" if right else "end", size=SMALL
    )


def told(one: tree.OddsRatioCurve, curve: list[tree.CurvePoint], setting: Setting) -> dict[str, object]:
    """Give what the words say: odds ratios at places spread over the curve."""
    numbers = setting.words.numbers
    digits = digits_for(curve[0].x, curve[-1].x)
    return {
        "label": one.label,
        "unit": one.unit or "",
        "shape": one.shape,
        "reference": scales.plain(one.reference),
        "knots": [scales.plain(knot) for knot in one.knots],
        "places": [
            (
                numbers.number(point.x, digits),
                numbers.odds_ratio(point.y),
                numbers.interval(point.lower, point.upper, point.y),
            )
            for point in curves.thinned(curve, 4)
        ],
    }


def digits_for(low: float, high: float) -> int:
    """Give the decimals by which a value is told apart within a range: a hundredth of it."""
    span = high - low
    for digits, least in enumerate((50, 5, 0.5, 0.05)):
        if span >= least:
            return digits
    return 4
