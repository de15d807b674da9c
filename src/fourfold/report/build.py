"""Results in, files out: the HTML page and the PDF."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from contextlib import contextmanager
from dataclasses import dataclass, field
from typing import Protocol

from fourfold.errors import Problem, RenderingError
from fourfold.report import html, page, pdf
from fourfold.report.writer import Writer
from fourfold.results import json_file, tree

FORMATS = ("html", "pdf")


class Progress(Protocol):
    """Receives the name of each stage as it begins and ends."""

    def begin(self, stage: str) -> None: ...

    def end(self, stage: str) -> None: ...


@dataclass(frozen=True, slots=True)
class Rendered:
    """Finished files by name, and why a format that was asked for is not among them."""

    files: dict[str, bytes]
    problems: tuple[Problem, ...] = field(default_factory=tuple)


def render(
    results: tree.Results, formats: Sequence[str] = FORMATS, progress: Progress | None = None
) -> Rendered:
    """Render a report from the results alone; same results and versions, same bytes.

    Parameters
    ----------
    results : Results
        After the hiding pass.
    formats : sequence of str
        ``html``, ``pdf``.
    progress : Progress or None

    Returns
    -------
    Rendered
        A PDF that cannot be made leaves the HTML standing (made even if only the PDF was asked
        for) and a problem that says what is missing.

    Raises
    ------
    RenderingError
        If a format is unknown, or the installation lacks its templates.
    """
    unknown = [name for name in formats if name not in FORMATS]
    if unknown:
        raise RenderingError(
            f"Unknown report format: {', '.join(unknown)}.", f"Formats are: {', '.join(FORMATS)}."
        )
    with _stage(progress, "writing the page"):
        content = page.page(Writer.of(results))
    files: dict[str, bytes] = {}
    problems: list[Problem] = []
    if "pdf" in formats:
        with _stage(progress, "making the PDF"):
            try:
                files["report.pdf"] = _pdf(results, content)
            except RenderingError as error:
                problems += error.problems
    if "html" in formats or problems:
        with _stage(progress, "writing the page"):
            files["report.html"] = html.html(content).encode("utf-8")
    return Rendered(files, tuple(problems))


def _pdf(results: tree.Results, content: page.Page) -> bytes:
    provenance = results.provenance
    # The attached description is the text as it was read, not the marked-up text of the page.
    attachments = {
        "results.json": (json_file.dumps(results), "The results that this report was made from"),
        _file_name(provenance.description_file): (provenance.description, "The study description"),
    }
    return pdf.pdf(html.html(content, for_print=True), attachments)


def _file_name(name: str) -> str:
    """A description's file name, freed of anything that is not plain."""
    plain = "".join(letter if letter.isalnum() or letter in "-_." else "-" for letter in name)
    return "study.yaml" if plain in ("", "results.json") else plain


@contextmanager
def _stage(progress: Progress | None, name: str) -> Iterator[None]:
    if progress is not None:
        progress.begin(name)
    try:
        yield
    finally:
        if progress is not None:
            progress.end(name)
