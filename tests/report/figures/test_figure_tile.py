"""The fourfold tile: areas are counts, words follow the design, hidden cells draw nothing."""

from __future__ import annotations

from typing import Any
from xml.etree import ElementTree

import pytest
from hypothesis import given
from hypothesis import strategies as st
from tests.report.figures.figure_samples import HOSTILE, setting, table

from fourfold.report.figures import tile
from fourfold.report.figures.figure import Figure

SVG = "{http://www.w3.org/2000/svg}"
counts = st.integers(min_value=0, max_value=100_000)


def drawn(*cells: int, **more: Any) -> Figure:
    figure = tile.draw(table(*cells, **more), setting())
    assert figure is not None
    return figure


def areas(figure: Figure) -> tuple[float, float, float, float]:
    """Areas of the exposed events, exposed others, unexposed events, unexposed others, in px squared.

    Measured from the rectangles: the square, and the parts with the event, by their own edges.
    """
    rects = [
        (r.get("class"), *(float(r.get(name, "nan")) for name in ("x", "y", "width", "height")))
        for r in ElementTree.fromstring(figure.svg).iter(f"{SVG}rect")
    ]
    (_, left, _, side, _), *_ = [r for r in rects if r[0] == "ff-tint"]
    parts = [r for r in rects if r[0] == "ff-event"]
    first = next(r for r in parts if r[1] == left)
    second = next(r for r in parts if r[1] > left)
    upright = first[3]
    return (
        first[3] * first[4],
        upright * side - first[3] * first[4],
        second[3] * second[4],
        (side - upright) * side - second[3] * second[4],
    )


@pytest.mark.parametrize("cells", [(45, 147, 61, 420), (1, 1, 1, 1), (300, 20, 4, 50), (7, 1000, 3, 900)])
def test_four_areas_are_proportional_to_four_counts(cells: tuple[int, int, int, int]) -> None:
    measured = areas(drawn(*cells))
    # Coordinates have two decimals on a side of 196 px: an area is off by 2 px squared at most.
    for area, count in zip(measured, cells, strict=True):
        assert area == pytest.approx(196**2 * count / sum(cells), abs=2.0)


@given(counts, counts, counts, counts)
def test_cuts_give_the_counts_back(a: int, b: int, c: int, d: int) -> None:
    where = tile.cuts(table(a, b, c, d))
    if a + b + c + d == 0:
        assert where is None
        return
    assert where is not None
    n = a + b + c + d
    first, second = where.events_exposed or 0.0, where.events_unexposed or 0.0
    assert where.exposed * first * n == pytest.approx(a, abs=1e-6)
    assert (1 - where.exposed) * second * n == pytest.approx(c, abs=1e-6)
    assert (where.events_exposed is None) == (a + b == 0)


def test_alternative_text_and_title_element_say_the_counts_and_risks() -> None:
    figure = drawn(45, 147, 61, 420)
    for words in ("45 events", "147 non-events", "61 events", "420 non-events", "23.4%", "12.7%"):
        assert words in figure.alt
    title = ElementTree.fromstring(figure.svg).find(f"{SVG}title")
    assert title is not None
    assert title.text == figure.alt


def test_case_control_says_sampling_and_never_risk() -> None:
    figure = tile.draw(table(18, 7, 12, 41, risks=False), setting("case-control"))
    assert figure is not None
    assert "sampled" in figure.caption
    assert "18 cases" in figure.alt
    assert "41 controls" in figure.svg
    for text in (figure.alt, figure.caption, figure.svg, figure.title):
        assert "risk" not in text.lower()
        assert "prevalence" not in text.lower()


def test_cross_sectional_says_prevalence() -> None:
    figure = tile.draw(table(), setting("cross-sectional"))
    assert figure is not None
    assert "prevalence of 23.4%" in figure.alt
    assert "risk" not in figure.alt


@pytest.mark.parametrize("cell", ["a", "b", "c", "d"])
def test_a_hidden_cell_draws_nothing(cell: str) -> None:
    hidden = {cell: None}
    one = table(**{"a": 45, "b": 147, "c": 61, "d": 420, **hidden}, hidden={cell: "small"})
    assert tile.draw(one, setting()) is None
    assert tile.mark(one) == tile.mark(None)


def test_a_cell_named_as_hidden_is_not_drawn_even_if_its_count_is_there() -> None:
    assert tile.draw(table(hidden={"c": "subtraction"}), setting()) is None


def test_small_groups_have_counts_but_no_percentage() -> None:
    figure = drawn(3, 9, 61, 420)
    assert "3 of 12" in figure.alt
    assert "25%" not in figure.svg


def test_one_event_is_singular_and_empty_parts_are_allowed() -> None:
    assert "1 event and" in drawn(1, 30, 5, 40).alt
    assert "0 events" in drawn(0, 30, 5, 40).alt
    assert "0 people" in drawn(0, 0, 5, 40).svg


def test_a_bare_level_is_named_with_its_variable() -> None:
    figure = drawn(45, 147, 61, 420, exposed="yes", unexposed="no")
    assert "Current smoker: yes: 45 events" in figure.alt
    assert ">Current smoker: no<" in figure.svg
    assert "Current smoker: Current smoker" not in drawn(45, 147, 61, 420).alt


def test_hostile_labels_stay_words() -> None:
    figure = drawn(45, 147, 61, 420, label=HOSTILE, exposed=HOSTILE)
    assert "<script" not in figure.svg
    assert "\u202e" not in figure.svg + figure.alt + figure.caption
    assert "\x1b" not in figure.alt
    ElementTree.fromstring(figure.svg)


def test_the_mark_is_a_wordless_ornament() -> None:
    root = ElementTree.fromstring(tile.mark(table()))
    assert root.get("aria-hidden") == "true"
    assert {element.tag for element in root.iter()} <= {f"{SVG}svg", f"{SVG}rect", f"{SVG}path"}
    assert tile.mark(table()) != tile.mark(None)
