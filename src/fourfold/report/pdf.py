"""The report as a tagged PDF (PDF/UA-1), with the results and the description attached.

Nothing is fetched but the report's own fonts, and no clock is read: same page, same bytes.
"""

from __future__ import annotations

import os
from collections.abc import Iterator
from contextlib import contextmanager
from datetime import UTC, datetime
from pathlib import Path
from typing import TYPE_CHECKING, Any
from urllib.parse import unquote, urlsplit

from fourfold.errors import RenderingError
from fourfold.report import assets

if TYPE_CHECKING:
    from weasyprint import HTML

NO_TIME = datetime(1970, 1, 1, tzinfo=UTC)
"""Stands where PDF wants a date; the time of a run is not part of a report."""

RENDERER_FAILURES = (TypeError, ValueError, AttributeError, LookupError, AssertionError, RecursionError)
"""What a layout engine raises on a layout that it does not know; the page must survive that."""

PANGO = (
    "The PDF needs the library Pango, which is missing or cannot be loaded. On Debian or Ubuntu: "
    "apt install libpango-1.0-0 libpangoft2-1.0-0 libharfbuzz-subset0. On macOS: brew install pango. "
    "On Windows: install MSYS2, then in its shell: pacman -S mingw-w64-x86_64-pango."
)


def pdf(page: str, attachments: dict[str, tuple[str, str]]) -> bytes:
    """Make the PDF of a page laid out for print.

    Parameters
    ----------
    page : str
        HTML, from `fourfold.report.html.html` with ``for_print``.
    attachments : dict
        File name -> (content, what it is).

    Raises
    ------
    RenderingError
        If WeasyPrint, or the Pango library that it needs, cannot be loaded, or the page asks for
        anything that the report did not make.
    """
    try:
        import weasyprint
    except (ImportError, OSError) as error:
        # OSError is what the binding raises where the shared library is not found.
        raise RenderingError(f"The PDF could not be made: {_first_line(error)}.", PANGO) from error
    document: HTML = weasyprint.HTML(string=page, url_fetcher=own_fonts_only(), media_type="print")
    attached = [
        weasyprint.Attachment(
            string=content,
            name=name,
            description=what,
            created=NO_TIME,
            modified=NO_TIME,
            relationship="Data",
        )
        for name, (content, what) in sorted(attachments.items())
    ]
    from weasyprint.urls import FatalURLFetchingError

    try:
        with _no_clock():
            made = document.write_pdf(pdf_variant="pdf/ua-1", attachments=attached)
    except RENDERER_FAILURES as error:
        raise RenderingError(
            f"The PDF renderer failed: {type(error).__name__}, {_first_line(error)}.",
            "The HTML report holds everything. Please report the failure, with the description if you can.",
        ) from error
    except FatalURLFetchingError as error:
        raise RenderingError(
            f"The PDF was not made, because its page asked for something outside the report: {error}.",
            "A report is whole in itself; a template that was changed is the likely cause.",
        ) from error
    return bytes(made)


def own_fonts_only() -> Any:
    """A fetcher that serves the report's fonts and refuses everything else.

    The renderer ignores an address that is merely refused; this one stops it, so that a
    page that asks for anything is never quietly rendered without it.
    """
    from weasyprint.urls import FatalURLFetchingError, URLFetcher

    folder = (assets.templates() / "fonts").resolve()

    class OwnFontsOnly(URLFetcher):  # type: ignore[misc]  # the library has no type information
        def fetch(self, url: str, headers: Any = None) -> Any:
            parts = urlsplit(url)
            path = Path(_local_path(parts.path)) if parts.scheme == "file" and not parts.netloc else None
            if path is None or path.resolve().parent != folder:
                raise FatalURLFetchingError(f"the report may not fetch {url[:200]}")
            return super().fetch(url, headers)

    return OwnFontsOnly(allowed_protocols={"file"}, allow_redirects=False)


def _local_path(path: str) -> str:
    """Path of a ``file:`` address; on Windows without the slash before the drive."""
    plain = unquote(path)
    return plain[1:] if os.name == "nt" and plain.startswith("/") else plain


@contextmanager
def _no_clock() -> Iterator[None]:
    # Font subsetting stamps its files with the time of day unless this variable says otherwise.
    before = os.environ.get("SOURCE_DATE_EPOCH")
    os.environ["SOURCE_DATE_EPOCH"] = "0"
    try:
        yield
    finally:
        if before is None:
            del os.environ["SOURCE_DATE_EPOCH"]
        else:
            os.environ["SOURCE_DATE_EPOCH"] = before


def _first_line(error: Exception) -> str:
    lines = str(error).strip().splitlines()
    return (lines[0] if lines else type(error).__name__).rstrip(".")
