"""Calibration: the proportion observed against the risk fitted, in groups and as a smooth curve."""

from __future__ import annotations

from collections.abc import Sequence

from fourfold.report.figures import axes, curves, lettering, marks, risk_distribution, scales
from fourfold.report.figures.canvas import SMALL, Canvas
from fourfold.report.figures.figure import Figure, Setting
from fourfold.results import tree

_PANEL = axes.Panel(56, 24, 352, 320)
_STRIP = axes.Panel(56, 332, 352, 414)
_KEY = 372.0


def draw(calibration: tree.Calibration, bins: Sequence[tree.RiskBin], setting: Setting) -> Figure | None:
    """Draw the calibration plot with the distribution of risks below; None where all is hidden.

    Parameters
    ----------
    calibration : tree.Calibration
    bins : sequence of tree.RiskBin
        Distribution of fitted risks; empty leaves the strip out.
    setting : Setting
    """
    groups = [
        one
        for one in calibration.groups
        if one.mean_risk is not None and one.proportion is not None and one.observed is not None
    ]
    curve = curves.drawable(calibration.curve)
    if not groups and len(curve) < 2:
        return None
    bins = [one for one in bins if one.events or one.non_events or one.hidden]
    strip = any(one.events or one.non_events for one in bins)
    panel = _PANEL
    bottom = _STRIP.bottom if strip else panel.bottom
    canvas = Canvas(_KEY + 158, bottom)
    reach = [0.01]
    for one in groups:
        reach += [value for value in (one.mean_risk, one.proportion, one.upper) if value is not None]
    reach += [value for point in curve for value in (point.x, point.y)]
    reach += [one.upper for one in bins if strip]
    across = scales.probability(0, max(reach), panel.left, panel.right)
    upward = scales.probability(0, max(reach), panel.bottom, panel.top)

    axes.beside(canvas, panel, upward, setting.say("calibration.observed"))
    axes.below(
        canvas,
        axes.Panel(panel.left, panel.top, panel.right, bottom),
        across,
        setting.say("calibration.fitted"),
        grid=True,
    )
    if strip:
        canvas.line((panel.left, panel.bottom), (panel.right, panel.bottom), "axis")
    canvas.line((panel.left, panel.bottom), (panel.right, panel.top), "outline", stroke_dasharray="4 3")
    curves.band(canvas, curve, across, upward)
    curves.line(canvas, curve, across, upward)
    for one in groups:
        assert one.mean_risk is not None
        assert one.proportion is not None
        x = across.held(one.mean_risk)
        if one.lower is not None and one.upper is not None:
            canvas.line((x, upward.held(one.lower)), (x, upward.held(one.upper)), "rule", stroke_width=1.1)
        canvas.path(marks.circle((x, upward.held(one.proportion)), 3.4), "point", stroke_width=1.4)
    if strip:
        risk_distribution.mirrored(canvas, _STRIP, across, bins, setting, labels=_KEY)
    _key(canvas, setting, bool(groups), bool(curve))

    numbers = setting.words.numbers
    values = {
        "groups": [
            (
                numbers.percent(100 * (one.mean_risk or 0.0)),
                setting.share(one.observed, one.n),
            )
            for one in groups
        ],
        "hidden": any(one.hidden for one in calibration.groups),
        "on_fitting_data": calibration.basis == "fitting data",
        "method": calibration.curve_method,
        "curve": len(curve) > 1,
        "strip": strip,
        "dotted": strip and any(one.hidden for one in bins),
    }
    alternative = setting.say("calibration.alt", **values)
    return Figure(
        "calibration",
        setting.say("calibration.title"),
        canvas.svg(alternative),
        alternative,
        setting.say("calibration.caption", **values),
    )


def _key(canvas: Canvas, setting: Setting, groups: bool, curve: bool) -> None:
    """Write what each mark is, right of the panel."""
    y = _PANEL.top + 12
    entries = [("groups", groups), ("smooth", curve), ("agreement", True)]
    for name, shown in entries:
        if not shown:
            continue
        if name == "groups":
            canvas.line((_KEY + 10, y - 9), (_KEY + 10, y + 9), "rule", stroke_width=1.1)
            canvas.path(marks.circle((_KEY + 10, y), 3.4), "point", stroke_width=1.4)
        elif name == "smooth":
            canvas.rect(_KEY, y - 6, 20, 12, "band")
            canvas.line((_KEY, y), (_KEY + 20, y), "accent-line", stroke_width=2.0)
        else:
            canvas.line((_KEY, y), (_KEY + 20, y), "outline", stroke_dasharray="4 3")
        words = lettering.block(setting.say(f"calibration.key.{name}"), 124, most=4, size=SMALL)
        words.write(canvas, (_KEY + 28, y + SMALL * 0.35), "muted")
        y += max(words.height, SMALL * lettering.LEADING) + 10
