"""The PDF, read back: tags, alternative texts, language, bookmarks, attachments, bytes."""

from __future__ import annotations

import builtins
import datetime
import io
import os
import time
from functools import cache
from typing import Any

import pdfplumber
import pikepdf
import pytest
from tests.report import sample
from weasyprint.urls import FatalURLFetchingError

from fourfold.errors import RenderingError
from fourfold.report import build, html, page, pdf
from fourfold.report.writer import Writer
from fourfold.results import json_file


@cache
def made() -> bytes:
    return build.render(sample.cohort(), ["pdf"]).files["report.pdf"]


@pytest.fixture
def document():
    with pikepdf.open(io.BytesIO(made())) as opened:
        yield opened


def elements(node: Any) -> list[Any]:
    """Every element of a structure tree, in reading order."""
    found = []
    if isinstance(node, pikepdf.Array):
        for child in node:
            found += elements(child)
    elif isinstance(node, pikepdf.Dictionary):
        if "/S" in node:
            found.append(node)
        if "/K" in node:
            found += elements(node.K)
    return found


def test_it_says_that_it_is_pdf_ua(document):
    # ISO 14289-1: pdfuaid:part 1 in the metadata, document marked as tagged, title shown, language.
    with document.open_metadata() as metadata:
        assert metadata["pdfuaid:part"] == "1"
        assert metadata["dc:title"] == "Smoking and low birth weight, Tarn Valley"
    assert document.Root.MarkInfo.Marked
    assert document.Root.ViewerPreferences.DisplayDocTitle
    assert str(document.Root.Lang) == "en"
    assert str(document.docinfo.Title) == "Smoking and low birth weight, Tarn Valley"


def test_structure_tree_has_tables_with_headers_and_figures_with_words(document):
    found = elements(document.Root.StructTreeRoot.K)
    kinds = [str(element.S) for element in found]
    assert {"/H1", "/H2", "/H3", "/Table", "/TH", "/TD", "/Figure", "/Caption", "/L"} <= set(kinds)
    headers = [element for element in found if str(element.S) == "/TH"]
    cells = [element for element in found if str(element.S) == "/TD" and "/A" in element]
    assert all("/ID" in header for header in headers)
    assert len(cells) > 100
    drawn = [element for element in found if str(element.S) == "/Figure" and "/Alt" in element]
    texts = [str(element.Alt) for element in drawn]
    assert any(text.startswith("Flow of participants. Read: 214.") for text in texts)
    # birthwt.json: adjusted odds ratio of smoke 2.5177 (1.1614 to 5.6448), area 0.746 (0.666 to 0.813).
    assert any("Mother smoked: 2.52 (1.16 to 5.64)" in text for text in texts)
    assert any("0.75" in text and "0.67 to 0.81" in text for text in texts)
    assert len(texts) == 7


def test_bookmarks_follow_the_sections(document):
    with document.open_outline() as outline:
        tops = [item.title for item in outline.root]
        inner = [item.title for item in outline.root[0].children]
    assert tops == ["Smoking and low birth weight, Tarn Valley"]
    assert inner == [
        "Answer", "Participants", "Main results", "Other analyses", "Can the model be trusted?",
        "Methods as run", "Results in sentences", "Findings", "Reporting checklist", "Cautions", "Provenance",
    ]  # fmt: skip


def test_results_and_description_are_attached(document):
    attached = {name: file.get_file().read_bytes() for name, file in document.attachments.items()}
    assert set(attached) == {"results.json", "births.yaml"}
    assert attached["results.json"].decode() == json_file.dumps(sample.cohort())
    assert json_file.loads(attached["results.json"].decode()) == sample.cohort()
    assert attached["births.yaml"].decode() == sample.DESCRIPTION


def test_every_page_has_title_caution_and_number():
    with pdfplumber.open(io.BytesIO(made())) as opened:
        texts = [one.extract_text() for one in opened.pages]
        sizes = {(round(one.width), round(one.height)) for one in opened.pages}
        overflowing = [
            word["text"]
            for one in opened.pages
            for word in one.extract_words()
            # 18 mm margins of an A4 page 595 points wide; half a point for rounding.
            if word["x1"] > one.width - 18 / 25.4 * 72 + 0.5 or word["x0"] < 18 / 25.4 * 72 - 0.5
        ]
    assert sizes == {(595, 842)}
    assert overflowing == []
    for number, text in enumerate(texts, start=1):
        assert "Statistical results, not for individual clinical decisions." in text
        assert f"{number} / {len(texts)}" in text
        if number > 1:
            assert text.startswith("Smoking and low birth weight, Tarn Valley")


def test_fonts_are_the_shipped_ones():
    with pikepdf.open(io.BytesIO(made())) as opened:
        names = {
            str(one.BaseFont).split("+")[-1]
            for one in opened.objects
            if isinstance(one, pikepdf.Dictionary) and one.get("/Type") == "/Font" and "/BaseFont" in one
        }
    assert names
    assert all("Source-Serif-4" in name or "IBM-Plex-Sans" in name for name in names), names


def test_same_results_give_the_same_bytes_at_any_time(monkeypatch):
    monkeypatch.delenv("SOURCE_DATE_EPOCH", raising=False)
    first = build.render(sample.shaped(), ["pdf"]).files["report.pdf"]
    # Time stamps in PDF and in fonts count seconds: let one pass.
    time.sleep(1.1)
    monkeypatch.setenv("TZ", "Pacific/Auckland")
    time.tzset()
    second = build.render(sample.shaped(), ["pdf"]).files["report.pdf"]
    monkeypatch.undo()
    time.tzset()
    assert first == second
    assert str(datetime.date.today().year).encode() not in first[-2000:]
    assert "SOURCE_DATE_EPOCH" not in os.environ


def test_nothing_but_the_reports_fonts_may_be_fetched(tmp_path):
    fetcher = pdf.own_fonts_only()
    secret = tmp_path / "secret.txt"
    secret.write_text("x", encoding="utf-8")
    fonts = page_fonts()
    for address in (
        "http://127.0.0.1:9/x",
        "https://x.example/x.css",
        "ftp://x.example/x",
        "data:text/css,body{}",
        secret.as_uri(),
        fonts.as_uri() + "/../page.html.j2",
        "file://elsewhere" + (fonts / "ibm-plex-sans-latin-400.woff2").as_posix(),
    ):
        with pytest.raises(FatalURLFetchingError, match="may not fetch"):
            fetcher.fetch(address)
    served = fetcher.fetch((fonts / "ibm-plex-sans-latin-400.woff2").as_uri())
    assert served.read()[:4] == b"wOF2"


def page_fonts():
    from fourfold.report import assets

    return (assets.templates() / "fonts").resolve()


def test_a_page_that_asks_for_something_makes_no_pdf(tmp_path):
    picture = tmp_path / "x.png"
    picture.write_bytes(b"")
    with pytest.raises(RenderingError, match="asked for something outside the report"):
        pdf.pdf(f'<html lang="en"><title>x</title><img alt="x" src="{picture.as_uri()}"></html>', {})


@pytest.mark.parametrize("error", [OSError("cannot load library 'libpango-1.0-0'"), ImportError("no module")])
def test_without_pango_the_page_stands_and_the_package_is_named(monkeypatch, error):
    genuine = builtins.__import__

    def failing(name: str, *arguments: Any, **named: Any) -> Any:
        if name == "weasyprint":
            raise error
        return genuine(name, *arguments, **named)

    monkeypatch.setattr(builtins, "__import__", failing)
    rendered = build.render(sample.cohort(), ["pdf"])
    assert list(rendered.files) == ["report.html"]
    (problem,) = rendered.problems
    assert str(error) in problem.what
    for package in ("libpango-1.0-0", "libpangoft2-1.0-0", "brew install pango", "mingw-w64-x86_64-pango"):
        assert package in problem.advice
    with pytest.raises(RenderingError) as caught:
        pdf.pdf(html.html(page.page(Writer.of(sample.cohort())), for_print=True), {})
    assert caught.value.exit_code == 6


def test_a_failure_of_the_renderer_leaves_the_page(monkeypatch):
    import weasyprint

    def failing(*arguments: Any, **named: Any) -> bytes:
        raise TypeError("min-content width for TextBox not handled yet")

    monkeypatch.setattr(weasyprint.HTML, "write_pdf", failing)
    rendered = build.render(sample.cohort())
    assert list(rendered.files) == ["report.html"]
    assert "min-content width for TextBox not handled yet" in rendered.problems[0].what
