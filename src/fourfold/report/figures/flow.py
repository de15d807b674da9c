"""The participant flow: everyone read, who left and why in order, who was analysed."""

from __future__ import annotations

from collections.abc import Sequence

from fourfold.report.figures import lettering
from fourfold.report.figures.canvas import SIZE, Canvas, Point
from fourfold.report.figures.figure import Figure, Setting
from fourfold.report.figures.marks import arrow_head
from fourfold.results import tree

_WIDTH = 640.0
_MAIN = 220.0
_ASIDE = 330.0
_PAD = 10.0
_GAP = 26.0
_MOST = 24

Line = tuple[str, str]
"""Words, and the number that belongs to them ("" for none)."""


def draw(participants: tree.Participants, setting: Setting) -> Figure:
    """Draw the flow of participants; hidden counts appear as the words that hide them."""
    numbers = setting.words.numbers

    def count(field: str) -> str:
        return numbers.count(getattr(participants, field), participants.hidden.get(field))

    leaving = [
        (exclusion.reason, numbers.count(exclusion.count, exclusion.hidden.get("count")))
        for exclusion in participants.exclusions
    ]
    fields = ("read", "eligible", "incomplete", "analysed", "events", "non_events")
    values = {field: count(field) for field in fields}

    column = _Column()
    column.main(setting.say("flow.read"), values["read"])
    if leaving:
        shown: list[Line] = leaving[:_MOST]
        if len(leaving) > _MOST:
            shown = [*shown, (setting.say("flow.more", n=len(leaving) - _MOST), "")]
        column.aside(setting.say("flow.excluded_heading"), shown)
        column.main(setting.say("flow.eligible"), values["eligible"])
    if participants.incomplete != 0:
        column.aside("", [(setting.say("flow.incomplete"), values["incomplete"])])
    column.main(setting.say("flow.analysed"), values["analysed"])
    column.split(
        (setting.say("flow.events"), values["events"]),
        (setting.say("flow.non_events"), values["non_events"]),
    )
    alternative = setting.say("flow.alt", leaving=leaving, **values)
    return Figure(
        "participant-flow",
        setting.say("flow.title"),
        column.finished().svg(alternative),
        alternative,
        setting.say("flow.caption", leaving=leaving),
    )


class _Column:
    """Boxes laid out downwards, each as high as its words need."""

    def __init__(self) -> None:
        self._canvas = Canvas(_WIDTH, 10)
        self._y = 1.0
        self._stem: float | None = None

    def main(self, label: str, count: str) -> None:
        """Add a box of the main column."""
        if self._stem is not None:
            self._y += _GAP
            _down(self._canvas, 1.0 + _MAIN / 2, self._stem, self._y)
        self._y += _box(self._canvas, (1.0, self._y), _MAIN, label, count)
        self._stem = self._y

    def aside(self, label: str, lines: Sequence[Line]) -> None:
        """Add a box of those who leave, at the right of the stem."""
        top, left = self._y + 12, _WIDTH - _ASIDE - 1
        height = _list(self._canvas, (left, top), _ASIDE, label, lines)
        middle = top + height / 2
        self._canvas.line((1.0 + _MAIN / 2, middle), (left - 4, middle), "axis")
        self._canvas.path(arrow_head((left, middle), 1), "muted")
        self._y = top + height - 12

    def split(self, first: Line, second: Line) -> None:
        """Add the two boxes at the end of the column, side by side."""
        stem, bar, top = 1.0 + _MAIN / 2, self._y + 13, self._y + _GAP
        self._canvas.line((stem, self._y), (stem, bar), "axis")
        wide = _MAIN / 2 + 40
        lefts = (1.0, 1.0 + wide + 14)
        centres = [left + wide / 2 for left in lefts]
        self._canvas.line((centres[0], bar), (centres[1], bar), "axis")
        height = 0.0
        for left, centre, (label, count) in zip(lefts, centres, (first, second), strict=True):
            _down(self._canvas, centre, bar, top)
            height = max(height, _box(self._canvas, (left, top), wide, label, count))
        self._y = top + height

    def finished(self) -> Canvas:
        """Give the canvas, as high as its boxes need."""
        self._canvas.height = self._y + 1
        return self._canvas


def _down(canvas: Canvas, x: float, start: float, end: float) -> None:
    canvas.line((x, start), (x, end - 4), "axis")
    canvas.path(f"M{x:g} {end:g}l-3-5.2h6z", "muted")


def _box(canvas: Canvas, corner: Point, width: float, label: str, count: str) -> float:
    """Draw a box with a label and its count beneath, and give its height, px."""
    x, y = corner
    words = lettering.block(label, width - 2 * _PAD)
    figure = lettering.block(count, width - 2 * _PAD, bold=True)
    height = words.height + figure.height + 2 * _PAD - 3
    canvas.rect(x, y, width, height, "box")
    baseline = y + _PAD + SIZE * 0.8
    words.write(canvas, (x + _PAD, baseline), "muted")
    figure.write(canvas, (x + _PAD, baseline + words.height))
    return height


def _list(canvas: Canvas, corner: Point, width: float, label: str, lines: Sequence[Line]) -> float:
    """Draw a box of lines whose counts stand in a column at the right; give its height, px."""
    x, y = corner
    widest = max(lettering.width(count, bold=True) for _, count in lines)
    room = width - 2 * _PAD - widest - 12
    written = [(lettering.block(words, room, most=3), count) for words, count in lines]
    heading = lettering.block(label, width - 2 * _PAD) if label else None
    height = sum(words.height for words, _ in written) + 2 * _PAD - 3
    height += heading.height + 2 if heading else 0.0
    canvas.rect(x, y, width, height, "box")
    baseline = y + _PAD + SIZE * 0.8
    if heading:
        heading.write(canvas, (x + _PAD, baseline), "muted")
        baseline += heading.height + 2
    for words, count in written:
        words.write(canvas, (x + _PAD, baseline))
        if count:
            canvas.text((x + width - _PAD, baseline), count, anchor="end", bold=True)
        baseline += words.height
    return height
