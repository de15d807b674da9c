"""The report as one self-contained HTML file: no script, no network, nothing beside it."""

from __future__ import annotations

import base64
import hashlib
import re

from jinja2 import FileSystemLoader, StrictUndefined, select_autoescape
from jinja2.sandbox import ImmutableSandboxedEnvironment
from markupsafe import Markup

from fourfold.report import assets
from fourfold.report.citations import Citations
from fourfold.report.figures import fonts, palette
from fourfold.report.figures.figure import Figure
from fourfold.report.page import SECTIONS, Page
from fourfold.report.writer import Writer

SHEETS = ("page", "table", "figure", "print")
STYLE_MARK, POLICY_MARK = "\ue002", "\ue003"
"""Where the style sheet and its hash go; cleaned text never holds these characters."""

PRINT_SCALE = 0.88
"""Figures on paper against their size on the screen: their words then match the captions'."""

TITLE_LENGTH = 90
"""Characters of a title in the running head of a printed page."""


def html(page: Page, *, for_print: bool = False) -> str:
    """Lay out a page.

    Parameters
    ----------
    page : Page
    for_print : bool
        For the PDF renderer: fonts are named by address, not embedded, and only what paper
        shows is in the style sheet.
    """
    environment = _environment(page.writer)
    environment.filters["drawn"] = _drawn_for_print if for_print else drawn
    citations = Citations(page.writer.words)
    environment.filters["cited"] = citations.linked
    # Methods are read first, so that references are numbered in the order of the methods.
    for paragraph in page.methods:
        citations.plain(paragraph.text)
    template = environment.get_template("page.html.j2")
    text = template.render(
        page=page,
        tables=page.tables,
        plates=page.plates,
        results=page.writer.results,
        w=page.writer,
        say=page.writer.say,
        sections=SECTIONS,
        citations=citations,
        running_title=shortened(page.writer.results.study.title),
        for_print=for_print,
        marker=Markup(STYLE_MARK),
        policy=Markup(POLICY_MARK),
    )
    style = _style(text, for_print)
    return text.replace(STYLE_MARK, style, 1).replace(POLICY_MARK, _policy(style), 1)


def shortened(title: str) -> str:
    """A title cut at a word, with an ellipsis, for the head of a printed page."""
    if len(title) <= TITLE_LENGTH:
        return title
    cut = title[: TITLE_LENGTH - 1]
    return (cut.rsplit(" ", 1)[0] if " " in cut[TITLE_LENGTH // 2 :] else cut) + "…"


def _style(text: str, for_print: bool) -> str:
    parts = [fonts.css(embed=not for_print, text=text)]
    # Figures are drawn in the colours of paper; only a screen recolours them.
    parts.append(palette.css())
    parts += [assets.style(name) for name in SHEETS]
    # Layout is fixed, so each column says its width; a class, as the policy allows no style attribute.
    widths = sorted({int(width) for width in re.findall(r'<col class="w(\d+)">', text)})
    parts += [f"col.w{width}{{width:{width}%}}" for width in widths]
    return _smaller("\n".join(parts))


def _smaller(css: str) -> str:
    """Style sheets without comments and indentation."""
    without_comments = re.sub(r"/\*.*?\*/", "", css, flags=re.DOTALL)
    return "\n".join(line.strip() for line in without_comments.splitlines() if line.strip())


def _policy(style: str) -> str:
    digest = base64.b64encode(hashlib.sha256(style.encode()).digest()).decode("ascii")
    return (
        f"default-src 'none'; style-src 'sha256-{digest}'; font-src data:; img-src data:; "
        "base-uri 'none'; form-action 'none'"
    )


def _environment(writer: Writer) -> ImmutableSandboxedEnvironment:
    environment = ImmutableSandboxedEnvironment(
        loader=FileSystemLoader(assets.templates()),
        autoescape=select_autoescape(default=True, default_for_string=True),
        undefined=StrictUndefined,
        trim_blocks=True,
        lstrip_blocks=True,
    )
    environment.globals["language"] = writer.results.analysis.language
    return environment


def drawn(figure: Figure | str) -> Markup:
    """The SVG of a figure, which its writer has escaped already."""
    return Markup(figure if isinstance(figure, str) else figure.svg)


_SIZE = re.compile(r' width="([0-9.]+)" height="([0-9.]+)" ')


def _drawn_for_print(figure: Figure | str) -> Markup:
    """The SVG at the size of paper; its viewBox, and so all that is in it, stays."""

    def smaller(found: re.Match[str]) -> str:
        width, height = (f"{float(side) * PRINT_SCALE:.1f}" for side in found.groups())
        return f' width="{width}" height="{height}" '

    return Markup(_SIZE.sub(smaller, str(drawn(figure)), count=1))
