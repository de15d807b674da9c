"""The shipped fonts: complete, licensed, embedded without change, and used by the PDF renderer."""

from __future__ import annotations

import base64
import io
import re

import pdfplumber
import pikepdf
import pytest
import weasyprint
from fontTools.ttLib import TTFont
from tests.report.figures.figure_samples import estimates, setting, table

from fourfold.report import assets
from fourfold.report.figures import canvas, fonts, forest, palette, tile


@pytest.mark.parametrize("part", fonts.PARTS, ids=lambda part: part.file)
def test_each_part_is_a_font_of_its_family_weight_and_style(part: fonts.Part) -> None:
    for name in (part.file, part.print_file):
        font = TTFont(assets.templates() / "fonts" / name)
        assert part.family in font["name"].getDebugName(1)
        assert font["OS/2"].usWeightClass == part.weight
        assert bool(font["head"].macStyle & 2) == (part.style == "italic")


@pytest.mark.parametrize("part", fonts.PARTS, ids=lambda part: part.file)
def test_every_letter_of_a_file_is_served_by_a_part_that_has_it(part: fonts.Part) -> None:
    kin = [
        one
        for one in fonts.PARTS
        if (one.family, one.weight, one.style) == (part.family, part.weight, part.style)
    ]
    held = {one.file: TTFont(assets.templates() / "fonts" / one.file).getBestCmap().keys() for one in kin}
    served = {
        code
        for one in kin
        for low, high in one.ranges
        for code in range(low, high + 1)
        if code in held[one.file]
    }
    assert {chr(code) for code in held[part.file] if chr(code).isalpha()} <= {chr(code) for code in served}


@pytest.mark.parametrize("name", ["OFL-source-serif-4.txt", "OFL-ibm-plex-sans.txt"])
def test_licences_lie_beside_the_fonts(name: str) -> None:
    text = (assets.templates() / "fonts" / name).read_text(encoding="utf-8")
    assert "SIL Open Font License" in text or "SIL OPEN FONT LICENSE" in text
    assert "Version 1.1" in text


def test_embedded_rules_carry_the_files_byte_for_byte() -> None:
    sheet = fonts.css(embed=True)
    carried = [base64.b64decode(data) for data in re.findall(r"base64,([^\"]+)\"", sheet)]
    assert carried == [(assets.templates() / "fonts" / part.file).read_bytes() for part in fonts.PARTS]
    assert sheet == fonts.css(embed=True)


def test_parts_whose_characters_do_not_occur_stay_at_home() -> None:
    plain = fonts.css(text="Plain English, 1.84 (1.17 to 2.86) – “so”")
    assert plain.count("@font-face") == 5
    assert len(plain) < 160_000
    assert '"Source Serif 4 Extended"' in fonts.css(text="Łódź")
    assert '"IBM Plex Sans Signs"' in fonts.css(text="≥ 5")
    assert '"Source Serif 4 Greek"' in fonts.css(text="χ")


def test_no_rule_names_an_address_elsewhere() -> None:
    assert "http" not in fonts.css(embed=True)
    assert set(re.findall(r'url\("([a-z]+):', fonts.css(embed=False))) == {"file"}


def test_stacks_and_figures_name_every_part() -> None:
    assert {part.name for part in fonts.PARTS if part.family == fonts.SANS} <= set(fonts.SANS_FAMILIES)
    assert {part.name for part in fonts.PARTS if part.family == fonts.SERIF} <= set(fonts.SERIF_FAMILIES)
    assert {part.name for part in fonts.PARTS if part.family == fonts.SANS} <= set(canvas.FAMILY.split(","))
    assert fonts.stack(("A b", "serif")) == '"A b",serif'


@pytest.fixture(scope="module")
def pdf() -> bytes:
    figures = [tile.draw(table(exposed="Łódź ≥ 5 χ"), setting()), forest.draw(estimates(), setting())]
    body = "".join(
        f"<figure>{one.svg}<figcaption>{one.caption}</figcaption></figure>" for one in figures if one
    )
    faces = fonts.css(embed=False, text=body)
    page = (
        f'<!doctype html><html lang="en"><head><title>Figures</title><style>{faces}'
        f"{palette.css()} body{{font-family:{fonts.stack(fonts.SERIF_FAMILIES)}}}</style></head>"
        f"<body>{body}</body></html>"
    )
    return bytes(weasyprint.HTML(string=page).write_pdf(pdf_variant="pdf/ua-1"))


def test_pdf_sets_figures_in_the_shipped_fonts_only(pdf: bytes) -> None:
    with pdfplumber.open(io.BytesIO(pdf)) as document:
        used = {letter["fontname"].partition("+")[2] for page in document.pages for letter in page.chars}
    assert used
    assert all(name.startswith(("IBM-Plex-Sans", "Source-Serif-4")) for name in used), used
    # Parts of a family stay separate fonts; merged under one name their glyphs would be exchanged.
    assert {"IBM-Plex-Sans-Extended-Semi-Bold", "IBM-Plex-Sans-Signs-Semi-Bold"} <= used


def test_pdf_carries_the_alternative_texts_in_its_structure(pdf: bytes) -> None:
    with pikepdf.open(io.BytesIO(pdf)) as document:
        alternatives = [
            str(item.Alt)
            for item in document.objects
            if isinstance(item, pikepdf.Dictionary) and "/Alt" in item and item.get("/S") == "/Figure"
        ]
    told = [tile.draw(table(exposed="Łódź ≥ 5 χ"), setting()), forest.draw(estimates(), setting())]
    for one in told:
        assert one is not None
        assert one.alt in alternatives


def test_pdf_words_read_back_in_order(pdf: bytes) -> None:
    with pdfplumber.open(io.BytesIO(pdf)) as document:
        text = "\n".join(page.extract_text(x_tolerance=1) or "" for page in document.pages)
    assert "1.84 (1.17 to 2.86)" in text
    assert "Łódź ≥ 5 χ" in text
