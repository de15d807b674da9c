"""The canvas writes sound SVG, and words are measured and broken as the font would set them."""

from __future__ import annotations

import math
from xml.etree import ElementTree

import pytest
from fontTools.ttLib import TTFont
from hypothesis import given
from hypothesis import strategies as st

from fourfold.report import assets
from fourfold.report.figures import advances, lettering
from fourfold.report.figures.canvas import Canvas, clean, escape, number


@pytest.mark.parametrize(
    ("value", "text"),
    [(1.0, "1"), (1.006, "1.01"), (-0.001, "0"), (12.30, "12.3"), (100.0, "100"), (-2.5, "-2.5"), (0.0, "0")],
)
def test_coordinates_are_trimmed_to_two_decimals(value: float, text: str) -> None:
    assert number(value) == text


@pytest.mark.parametrize("value", [math.nan, math.inf, -math.inf])
def test_a_place_that_does_not_exist_is_refused(value: float) -> None:
    with pytest.raises(ValueError, match="finite"):
        number(value)


@given(st.text())
def test_any_words_give_well_formed_xml_that_reads_back(words: str) -> None:
    canvas = Canvas(10, 10)
    canvas.text((1, 1), words)
    root = ElementTree.fromstring(canvas.svg(words))
    texts = [element.text or "" for element in root.iter("{http://www.w3.org/2000/svg}text")]
    assert texts[:1] == ([clean(words)] if clean(words) else [""])
    assert len(list(root)) == 2


def test_markup_in_words_stays_words() -> None:
    assert escape("<b onload='x'>&\"") == "&lt;b onload=&#39;x&#39;&gt;&amp;&quot;"


def test_characters_that_xml_forbids_or_that_reorder_are_dropped() -> None:
    assert clean("a\x00b\x1b\u202ec\ud800 \n\t d\u2066") == "abc d"


@pytest.mark.parametrize(("weight", "table"), [(400, advances.REGULAR), (600, advances.SEMIBOLD)])
def test_widths_are_those_of_the_shipped_fonts(weight: int, table: dict[str, int]) -> None:
    # Read from the font files with fontTools, independently of the table.
    expected: dict[str, int] = {}
    for script in ("latin", "latin-ext", "symbols", "greek"):
        font = TTFont(assets.templates() / "fonts" / f"ibm-plex-sans-{script}-{weight}.woff2")
        for code, name in font.getBestCmap().items():
            expected.setdefault(chr(code), font["hmtx"][name][0])
    assert {letter: expected.get(letter) for letter in table} == table
    assert {letter for letter in expected if letter.isalnum()} <= table.keys()


def test_width_of_a_line_is_the_sum_of_its_letters() -> None:
    assert lettering.width("00", 10) == pytest.approx(2 * 10 * 0.600)
    assert lettering.width("", 10) == 0


@given(st.text(alphabet=st.characters(codec="latin-1"), max_size=120), st.floats(min_value=30, max_value=300))
def test_lines_never_exceed_their_room_nor_their_number(words: str, room: float) -> None:
    block = lettering.block(words, room, most=2)
    assert len(block.lines) <= 2
    assert all(lettering.width(line) <= room + 0.01 for line in block.lines)
    shown = "".join(block.lines).replace(" ", "")
    if block.full is None:
        assert shown == clean(words).replace(" ", "")
    else:
        assert block.full == clean(words)
        assert shown.endswith("…")


def test_words_without_room_are_kept_in_a_title() -> None:
    canvas = Canvas(100, 50)
    lettering.block("One two three four five six seven", 40, most=1).write(canvas, (0, 10))
    root = ElementTree.fromstring(canvas.svg("alt"))
    group = root.find("{http://www.w3.org/2000/svg}g")
    assert group is not None
    assert group[0].text == "One two three four five six seven"
    assert (group[1].text or "").endswith("…")
