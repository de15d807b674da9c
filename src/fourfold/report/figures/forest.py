"""The forest of odds ratios: adjusted estimates with their intervals, crude ones beside them.

The axis is logarithmic, with a line at 1. Limits beyond the axis, and limits that do not exist, end
in an arrow; a term that separates the outcome has no mark, only its bound with an arrow. Colour
tells adjusted from crude and nothing else: no mark changes with a P value.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from typing import TypeGuard

from fourfold.report.figures import axes, lettering, marks, scales
from fourfold.report.figures.canvas import SIZE, SMALL, Canvas
from fourfold.report.figures.figure import Figure, Setting
from fourfold.report.figures.scales import Scale
from fourfold.results import tree

_WIDTH = 640.0
_LABELS = 206.0
_NUMBERS = 142.0
_TOP = 34.0
_BEYOND = 6.0
"""An interval may stretch the axis to this many times the outermost estimate, not further."""
MOST_ROWS = 52
"""More rows than fit a page are left to the table, and the caption says so."""


@dataclass(frozen=True, slots=True)
class Row:
    """One line of the figure: a heading, a reference level, or an estimate with its crude one."""

    kind: str
    label: str
    indent: bool = False
    adjusted: tree.Estimate | None = None
    crude: tree.Estimate | None = None


def draw(
    estimates: tree.Estimates, setting: Setting, roles: Sequence[str] = ("exposure", "predictor", "covariate")
) -> Figure | None:
    """Draw the estimates of the terms with these roles; None where there is none.

    Parameters
    ----------
    estimates : tree.Estimates
    setting : Setting
    roles : sequence of str
        In the order in which they stand; each role has its heading where there are several.
    """
    every = _rows(estimates, setting, roles)
    rows = every[:MOST_ROWS]
    if not any(row.kind == "estimate" for row in rows):
        return None
    pitch = 24.0 if len(rows) <= 30 else 18.0
    bottom = _TOP + pitch * len(rows) + 6
    panel = axes.Panel(_LABELS + 8, _TOP, _WIDTH - _NUMBERS - 12, bottom)
    scale = _axis([row for row in rows if row.adjusted], panel)
    canvas = Canvas(_WIDTH, bottom)
    has_crude = any(row.crude and row.crude.odds_ratio is not None for row in rows)
    _headings(canvas, setting, panel, has_crude)
    axes.below(canvas, panel, scale, setting.say("forest.axis"), grid=True)
    if scale.holds(1.0):
        canvas.line((scale(1.0), _TOP - 2), (scale(1.0), bottom), "rule", stroke_width=1.0)
    for index, row in enumerate(rows):
        _draw_row(canvas, setting, row, scale, panel, _TOP + pitch * (index + 0.5), pitch)

    told = [row for row in rows if row.adjusted is not None]
    values = {
        "rows": [f"{_full_label(row, setting)}: {_estimate_words(row.adjusted, setting)}" for row in told],
        "crude": has_crude,
        "left_out": sum(row.kind == "estimate" for row in every[MOST_ROWS:]),
        "single": len(told) == 1,
        "separated": any((row.adjusted.note or "").startswith("separated") for row in told if row.adjusted),
    }
    alternative = setting.say("forest.alt", **values)
    return Figure(
        "forest" if "exposure" in roles or "predictor" in roles else "forest-" + "-".join(roles),
        setting.say("forest.title", **values),
        canvas.svg(alternative),
        alternative,
        setting.say("forest.caption", **values),
    )


def _rows(estimates: tree.Estimates, setting: Setting, roles: Sequence[str]) -> list[Row]:
    crude = {(one.term, one.level, tuple(one.contrast or ())): one for one in estimates.crude}
    present = [role for role in roles if any(one.role == role for one in estimates.adjusted)]
    rows: list[Row] = []
    for role in present:
        if len(present) > 1:
            rows.append(Row("heading", setting.say(f"forest.roles.{role}")))
        for term, members in _by_term([one for one in estimates.adjusted if one.role == role]):
            first = members[0]
            levels = first.level is not None
            if levels:
                rows.append(Row("term", first.label))
                if first.reference is not None:
                    rows.append(Row("reference", first.reference, indent=True))
            elif len(members) > 1:
                rows.append(Row("term", first.label))
            for one in members:
                matching = crude.get((term, one.level, tuple(one.contrast or ())))
                rows.append(
                    Row(
                        "estimate",
                        _label(one, setting, len(members) > 1),
                        levels or len(members) > 1,
                        one,
                        matching,
                    )
                )
    return rows


def _by_term(members: Sequence[tree.Estimate]) -> list[tuple[str, list[tree.Estimate]]]:
    grouped: dict[str, list[tree.Estimate]] = {}
    for one in members:
        grouped.setdefault(one.term, []).append(one)
    return list(grouped.items())


def _label(one: tree.Estimate, setting: Setting, several: bool) -> str:
    """Name an estimate: its level, its contrast, or the term with the step it stands for."""
    if one.level is not None:
        return one.level
    if one.contrast is not None and len(one.contrast) == 2:
        start, end = (scales.plain(value) for value in one.contrast)
        words = setting.say("forest.contrast", start=start, end=end, unit=one.unit or "")
        return words if several else f"{one.label}, {words}"
    if one.per is not None and (one.unit or one.per != 1):
        step = scales.plain(one.per)
        return f"{one.label}, {setting.say('forest.per', step=step, unit=one.unit or '')}"
    return one.label


def _full_label(row: Row, setting: Setting) -> str:
    one = row.adjusted
    assert one is not None
    if one.level is not None:
        return setting.say("forest.level", label=one.label, level=one.level, reference=one.reference or "")
    return f"{one.label}, {row.label}" if row.indent else row.label


def _axis(rows: Sequence[Row], panel: axes.Panel) -> Scale:
    """Choose the axis: every estimate, 1, and the limits as far as they stay near the estimates."""
    centres, limits = [1.0], []
    for row in rows:
        one, crude = row.adjusted, row.crude
        if one is None:
            continue
        centres += [v for v in (one.odds_ratio, crude.odds_ratio if crude else None) if _drawable(v)]
        bounds = [v for v in (one.lower, one.upper) if _drawable(v)]
        if crude is not None and crude.odds_ratio is not None:
            limits += [v for v in (crude.lower, crude.upper) if _drawable(v)]
        if one.odds_ratio is None:
            centres += bounds
        limits += bounds
    low, high = min(centres), max(centres)
    low = max(min([low, *limits]), low / _BEYOND)
    high = min(max([high, *limits]), high * _BEYOND)
    low, high = min(low, 0.8), max(high, 1.25)
    room = (high / low) ** 0.05
    return scales.log(low / room, high * room, panel.left, panel.right)


def _drawable(value: float | None) -> TypeGuard[float]:
    return value is not None and math.isfinite(value) and value > 0


def _finite(value: float | None) -> float | None:
    return value if value is not None and math.isfinite(value) else None


def _headings(canvas: Canvas, setting: Setting, panel: axes.Panel, has_crude: bool) -> None:
    y = _TOP - 16
    x = panel.left
    canvas.path(marks.square((x + 5, y - 3.5), 4.2), "accent")
    words = setting.say("forest.adjusted")
    canvas.text((x + 14, y), words, "muted", size=SMALL)
    if has_crude:
        x += 14 + lettering.width(words, SMALL) + 16
        canvas.path(marks.circle((x + 4, y - 3.5), 2.8), "crude", stroke_width=1.2)
        canvas.text((x + 12, y), setting.say("forest.crude"), "muted", size=SMALL)
    heading = lettering.block(setting.say("forest.column"), _NUMBERS, most=2, size=SMALL)
    heading.write(canvas, (_WIDTH, y - heading.height + heading.size * lettering.LEADING), "muted", "end")


def _draw_row(
    canvas: Canvas, setting: Setting, row: Row, scale: Scale, panel: axes.Panel, y: float, pitch: float
) -> None:
    indent = 14.0 if row.indent else 0.0
    bold = row.kind == "heading"
    size = SIZE if pitch > 20 else SMALL
    # The label may run on over the plot's empty part where its own row has no mark.
    room = (panel.right if row.kind in ("heading", "term") else _LABELS) - indent
    label = lettering.block(row.label, room, most=2 if pitch > 20 and not bold else 1, size=size, bold=bold)
    if len(label.lines) > 1:
        label = lettering.block(row.label, room, most=2, size=SMALL - 0.5, bold=bold)
    style = "muted" if row.kind == "reference" else "ink"
    label.write_centred(canvas, (indent, y), style)
    if row.kind == "reference":
        canvas.path(marks.square((scale(1.0), y), 2.6), "crude", stroke_width=1.2)
        canvas.text(
            (_WIDTH, y + size * 0.35), setting.say("forest.reference"), "muted", anchor="end", size=size
        )
    if row.adjusted is None:
        return
    has_crude = row.crude is not None and row.crude.odds_ratio is not None
    shift = pitch * 0.15 if has_crude else 0.0
    if row.crude is not None and has_crude:
        _interval(canvas, row.crude, scale, y + shift + 1.5, "outline", 1.0)
        if scale.holds(row.crude.odds_ratio):
            canvas.path(
                marks.circle((scale(row.crude.odds_ratio or 1.0), y + shift + 1.5), 2.8),
                "crude",
                stroke_width=1.2,
            )
    _interval(canvas, row.adjusted, scale, y - shift, "accent-line", 1.6)
    if row.adjusted.odds_ratio is not None and scale.holds(row.adjusted.odds_ratio):
        canvas.path(marks.square((scale(row.adjusted.odds_ratio), y - shift), 4.2), "accent")
    words = _estimate_words(row.adjusted, setting)
    numbers = lettering.block(words, _NUMBERS, most=2, size=size)
    if len(numbers.lines) > 1:
        numbers = lettering.block(words, _NUMBERS, most=2, size=SMALL - 0.5)
    numbers.write_centred(canvas, (_WIDTH, y), "ink", "end")


def _interval(canvas: Canvas, one: tree.Estimate, scale: Scale, y: float, style: str, thick: float) -> None:
    """Draw the line between the limits; an arrow where a limit lies beyond the axis or nowhere."""
    lower, upper = one.lower, one.upper
    separated = (one.note or "").startswith("separated")
    if lower is None and upper is None:
        return
    if one.odds_ratio is None and not separated:
        return
    start = scale.held(lower) if _drawable(lower) else scale.start
    end = scale.held(upper) if _drawable(upper) else scale.end
    canvas.line((start, y), (end, y), style, stroke_width=thick)
    head = "accent" if style == "accent-line" else "muted"
    for inside, place, direction in ((scale.holds(lower), start, -1), (scale.holds(upper), end, 1)):
        if inside and style == "accent-line":
            canvas.line((place, y - 3), (place, y + 3), style, stroke_width=thick)
        elif not inside:
            canvas.path(marks.arrow_head((place + direction * 3, y), direction), head)


def _estimate_words(one: tree.Estimate | None, setting: Setting) -> str:
    """Write an estimate as the tables do, or why there is none."""
    assert one is not None
    numbers = setting.words.numbers
    note = one.note or ""
    if one.odds_ratio is not None:
        limits = numbers.interval(_finite(one.lower), _finite(one.upper), one.odds_ratio)
        return f"{numbers.odds_ratio(one.odds_ratio)} ({limits})"
    if note == "separated upward" and one.lower is not None:
        return setting.say("forest.at_least", bound=numbers.odds_ratio(one.lower))
    if note == "separated downward" and one.upper is not None:
        return setting.say("forest.at_most", bound=numbers.odds_ratio(one.upper))
    if note.startswith("separated"):
        return setting.say("forest.none")
    return setting.say("forest.hidden" if note == "hidden" or one.hidden else "forest.none")
