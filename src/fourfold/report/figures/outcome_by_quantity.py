"""The outcome along a quantity before any adjustment: a smoothed proportion, and binned points."""

from __future__ import annotations

from collections.abc import Sequence

from fourfold.report.figures import axes, curves, lettering, marks, scales
from fourfold.report.figures.canvas import SMALL, Canvas
from fourfold.report.figures.figure import Figure, Setting, slug
from fourfold.report.figures.odds_ratio_curve import axis_title, digits_for
from fourfold.results import tree

_PANEL = axes.Panel(52, 24, 520, 264)
_MOST_PEOPLE = 400


def draw(one: tree.OutcomeByQuantity, setting: Setting) -> Figure | None:
    """Draw the proportion against the quantity; None where nothing may be shown."""
    curve = curves.drawable(one.curve)
    bins = [
        each
        for each in one.bins
        if each.mean is not None and each.proportion is not None and each.events is not None
    ]
    if len(curve) < 2 and not bins:
        return None
    people = curves.thinned(one.points, _MOST_PEOPLE)
    panel = _PANEL
    canvas = Canvas(panel.right + 20, panel.bottom)
    places = [point.x for point in curve] + [each.mean for each in bins if each.mean is not None]
    places += [person.x for person in people]
    across = scales.linear(min(places), max(places), panel.left, panel.right, count=7, widen=not curve)
    reach = [point.y for point in curve] + [each.proportion or 0.0 for each in bins]
    reach += [each.proportion_upper for each in bins if each.proportion_upper is not None]
    top = 1.0 if people else max([0.01, *reach])
    upward = scales.probability(0, top, panel.bottom, panel.top)

    axes.beside(canvas, panel, upward, setting.say("outcome_by_quantity.axis"))
    axes.below(canvas, panel, across, axis_title(one.label, one.unit))
    groups = _people(canvas, people, across, upward)
    curves.band(canvas, curve, across, upward)
    curves.line(canvas, curve, across, upward)
    for each in bins:
        assert each.mean is not None
        assert each.proportion is not None
        x = across.held(each.mean)
        if each.proportion_lower is not None and each.proportion_upper is not None:
            ends = (x, upward.held(each.proportion_lower)), (x, upward.held(each.proportion_upper))
            canvas.line(*ends, "rule", stroke_width=1.1)
        canvas.path(marks.circle((x, upward.held(each.proportion)), 3.4), "point", stroke_width=1.4)
    if groups:
        _key(canvas, one.group_label or "", groups, panel)

    numbers = setting.words.numbers
    places_told: Sequence[tree.CurvePoint] = curves.thinned(curve, 3)
    digits = digits_for(across.low, across.high)
    values = {
        "label": one.label,
        "unit": one.unit or "",
        "places": [
            (numbers.number(point.x, digits), numbers.percent(100 * point.y)) for point in places_told
        ],
        "bins": [
            (numbers.number(each.mean, digits), setting.share(each.events, each.total)) for each in bins
        ],
        "hidden": any(each.hidden for each in one.bins),
        "people": len(people),
        "thinned": len(one.points) > len(people),
        "groups": [name for name, _ in groups],
        "group_label": one.group_label or "",
    }
    alternative = setting.say("outcome_by_quantity.alt", **values)
    return Figure(
        slug("outcome-by", one.term),
        setting.say("outcome_by_quantity.title", **values),
        canvas.svg(alternative),
        alternative,
        setting.say("outcome_by_quantity.caption", **values),
    )


def _people(
    canvas: Canvas, people: Sequence[tree.JitteredPoint], across: scales.Scale, upward: scales.Scale
) -> list[tuple[str, int]]:
    """Draw the moved points, a shape and colour for each group; give the groups with their shape."""
    names = sorted({person.group or "" for person in people})
    last = len(marks.SHAPES) - 1
    for index in range(min(len(names), last + 1)):
        members = {name for place, name in enumerate(names) if min(place, last) == index}
        shape = marks.SHAPES[index]
        data = "".join(
            shape((across.held(person.x), upward.held(person.y)), 2.0)
            for person in people
            if (person.group or "") in members
        )
        canvas.path(data, f"series-{index + 1}", stroke_width=0.8, stroke_opacity=0.75)
    return [(name, min(place, last)) for place, name in enumerate(names) if name]


def _key(canvas: Canvas, label: str, groups: Sequence[tuple[str, int]], panel: axes.Panel) -> None:
    """Write the groups' shapes in a row above the panel, from the right."""
    x = panel.right
    y = panel.top - 10
    for name, index in reversed(groups[:4]):
        words = lettering.block(name, 84, most=1, size=SMALL)
        x -= words.width
        words.write(canvas, (x, y), "muted")
        x -= 9
        canvas.path(marks.SHAPES[index]((x, y - 3.5), 2.6), f"series-{index + 1}", stroke_width=1.0)
        x -= 14
    if label:
        lettering.block(label, 110, most=1, size=SMALL).write(canvas, (x + 4, y), "muted", "end")
