"""The participant flow: everyone read, who left and why in order, who was analysed."""

from __future__ import annotations

from fourfold.report.figures import lettering
from fourfold.report.figures.canvas import SIZE, Canvas, Point
from fourfold.report.figures.figure import Figure, Setting
from fourfold.report.figures.marks import arrow_head
from fourfold.results import tree

_WIDTH = 620.0
_MAIN = 220.0
_ASIDE = 300.0
_PAD = 10.0
_GAP = 26.0
_MOST = 24


def draw(participants: tree.Participants, setting: Setting) -> Figure:
    """Draw the flow of participants; hidden counts appear as the words that hide them."""
    numbers = setting.words.numbers

    def count(field: str) -> str:
        return numbers.count(getattr(participants, field), participants.hidden.get(field))

    leaving = [
        setting.say("flow.excluded", reason=exclusion.reason, n=_left(exclusion, setting))
        for exclusion in participants.exclusions[:_MOST]
    ]
    if len(participants.exclusions) > _MOST:
        leaving.append(setting.say("flow.more", n=len(participants.exclusions) - _MOST))
    values = {
        name: count(name) for name in ("read", "eligible", "incomplete", "analysed", "events", "non_events")
    }

    plan = _Column()
    plan.main(setting.say("flow.read"), values["read"])
    if leaving:
        plan.aside(setting.say("flow.excluded_heading"), leaving)
        plan.main(setting.say("flow.eligible"), values["eligible"])
    if participants.incomplete != 0:
        plan.aside("", [setting.say("flow.incomplete", n=values["incomplete"])])
    plan.main(setting.say("flow.analysed"), values["analysed"])
    plan.split(
        (setting.say("flow.events"), values["events"]),
        (setting.say("flow.non_events"), values["non_events"]),
    )
    alternative = setting.say("flow.alt", leaving=leaving, **values)
    return Figure(
        "participant-flow",
        setting.say("flow.title"),
        plan.finished().svg(alternative),
        alternative,
        setting.say("flow.caption", **values),
    )


def _left(exclusion: tree.Exclusion, setting: Setting) -> str:
    return setting.words.numbers.count(exclusion.count, exclusion.hidden.get("count"))


class _Column:
    """Boxes laid out downwards, each as high as its words need."""

    def __init__(self) -> None:
        self._canvas = Canvas(_WIDTH, 10)
        self._y = 1.0
        self._stem: float | None = None

    def main(self, label: str, number: str) -> None:
        """Add a box of the main column."""
        if self._stem is not None:
            self._y += _GAP
            _down(self._canvas, 1.0 + _MAIN / 2, self._stem, self._y)
        self._y += _box(self._canvas, (1.0, self._y), _MAIN, label, [number], big=True)
        self._stem = self._y

    def aside(self, label: str, lines: list[str]) -> None:
        """Add a box of those who leave, at the right of the stem."""
        top = self._y + 12
        height = _box(self._canvas, (_WIDTH - _ASIDE - 1, top), _ASIDE, label, lines, big=False)
        middle = top + height / 2
        stem = 1.0 + _MAIN / 2
        end = _WIDTH - _ASIDE - 1
        self._canvas.line((stem, middle), (end - 4, middle), "axis")
        self._canvas.path(arrow_head((end, middle), 1), "muted")
        self._y = top + height - 12

    def split(self, first: tuple[str, str], second: tuple[str, str]) -> None:
        """Add the two boxes at the end of the column, side by side."""
        assert self._stem is not None
        stem, start = 1.0 + _MAIN / 2, self._stem
        wide = _MAIN / 2 + 40
        lefts = (1.0, 1.0 + wide + 14)
        bar = start + 13
        top = start + _GAP
        self._canvas.line((stem, start), (stem, bar), "axis")
        centres = [left + wide / 2 for left in lefts]
        self._canvas.line((centres[0], bar), (centres[1], bar), "axis")
        height = 0.0
        for left, centre, (label, number) in zip(lefts, centres, (first, second), strict=True):
            _down(self._canvas, centre, bar, top)
            height = max(height, _box(self._canvas, (left, top), wide, label, [number], big=True))
        self._y = top + height

    def finished(self) -> Canvas:
        """Give the canvas, as high as its boxes need."""
        self._canvas.height = self._y + 1
        return self._canvas


def _down(canvas: Canvas, x: float, start: float, end: float) -> None:
    canvas.line((x, start), (x, end - 4), "axis")
    canvas.path(f"M{x:g} {end:g}l-3-5.2h6z", "muted")


def _box(canvas: Canvas, corner: Point, width: float, label: str, lines: list[str], *, big: bool) -> float:
    """Draw a box with a label and lines, and give its height, px."""
    x, y = corner
    room = width - 2 * _PAD
    blocks = [lettering.block(label, room, most=2)] if label else []
    blocks += [lettering.block(line, room, most=3, bold=big) for line in lines]
    height = sum(one.height for one in blocks) + 2 * _PAD - 3
    canvas.rect(x, y, width, height, "box")
    baseline = y + _PAD + SIZE * 0.8
    for index, one in enumerate(blocks):
        one.write(canvas, (x + _PAD, baseline), "muted" if label and index == 0 else "ink")
        baseline += one.height
    return height
