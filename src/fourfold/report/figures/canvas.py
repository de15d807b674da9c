"""A sheet on which marks are put one after the other, and which becomes one SVG element.

Everything that reaches the file passes here: words are escaped and freed of characters that XML
forbids, numbers are finite and written with at most two decimals, attributes keep the order in
which they were given. The same marks give the same bytes.
"""

from __future__ import annotations

import math
import unicodedata
from collections.abc import Iterator, Sequence
from contextlib import contextmanager

from fourfold.report.figures import palette

FAMILY = "IBM Plex Sans,IBM Plex Sans Extended,IBM Plex Sans Greek,IBM Plex Sans Signs,sans-serif"
"""Families as an attribute of SVG: no quotes, no spaces after commas, which PDF renderers take literally."""
SIZE = 11.0
"""Size of the words in a figure, in px at the figure's own width; 8.25 pt in print."""
SMALL = 10.0

Point = tuple[float, float]

# These reorder or join what stands around them, so a label could make another label lie.
_REORDERING = set("\u200e\u200f\u202a\u202b\u202c\u202d\u202e\u2066\u2067\u2068\u2069")


def number(value: float) -> str:
    """Write a coordinate: at most two decimals, no trailing zeros, never ``-0``.

    Raises
    ------
    ValueError
        If ``value`` is not finite: a mark without a place must not be drawn.
    """
    if not math.isfinite(value):
        raise ValueError(f"a coordinate must be finite, not {value!r}")
    text = f"{value:.2f}".rstrip("0").rstrip(".")
    return "0" if text in ("-0", "") else text


def clean(text: str) -> str:
    """Make words from outside safe for one line: no control characters, single spaces."""
    kept = (
        " " if character.isspace() else character
        for character in text
        if character.isspace()
        or (unicodedata.category(character) not in ("Cc", "Cs", "Cn") and character not in _REORDERING)
    )
    return " ".join("".join(kept).split())


def escape(text: str) -> str:
    """Escape words for the text or an attribute of an XML element."""
    return (
        clean(text)
        .replace("&", "&amp;")
        .replace("<", "&lt;")
        .replace(">", "&gt;")
        .replace('"', "&quot;")
        .replace("'", "&#39;")
    )


def polyline(points: Sequence[Point], close: bool = False) -> str:
    """Give the path data of straight lines through ``points`` (px), closed on request."""
    steps = [f"{number(x)} {number(y)}" for x, y in points]
    return "M" + "L".join(steps) + ("Z" if close else "")


class Canvas:
    """Marks of one figure, ``width`` by ``height`` px."""

    def __init__(self, width: float, height: float) -> None:
        self.width = width
        self.height = height
        self._parts: list[str] = []

    def _put(self, tag: str, attributes: dict[str, str | float], style: str | None, inner: str = "") -> None:
        written = dict(attributes)
        if style is not None:
            written = {**palette.attributes(style), **written}
        text = "".join(
            f' {name.replace("_", "-")}="{escape(value) if isinstance(value, str) else number(value)}"'
            for name, value in written.items()
        )
        self._parts.append(f"<{tag}{text}>{inner}</{tag}>" if inner else f"<{tag}{text}/>")

    def line(self, start: Point, end: Point, style: str, **attributes: str | float) -> None:
        """Draw a straight line."""
        self._put("path", {"d": polyline([start, end]), **attributes}, style)

    def path(self, data: str, style: str, **attributes: str | float) -> None:
        """Draw path data; an empty path draws nothing."""
        if data:
            self._put("path", {"d": data, **attributes}, style)

    def rect(
        self, x: float, y: float, width: float, height: float, style: str, **attributes: str | float
    ) -> None:
        """Draw a rectangle; one without area is left out."""
        if width > 0 and height > 0:
            self._put("rect", {"x": x, "y": y, "width": width, "height": height, **attributes}, style)

    def circle(self, centre: Point, radius: float, style: str, **attributes: str | float) -> None:
        """Draw a circle."""
        self._put("circle", {"cx": centre[0], "cy": centre[1], "r": radius, **attributes}, style)

    def text(
        self,
        place: Point,
        words: str,
        style: str = "ink",
        *,
        anchor: str = "start",
        size: float = SIZE,
        bold: bool = False,
    ) -> None:
        """Write words with their baseline at ``place``."""
        attributes: dict[str, str | float] = {"x": place[0], "y": place[1]}
        if anchor != "start":
            attributes["text_anchor"] = anchor
        if size != SIZE:
            attributes["font_size"] = size
        if bold:
            attributes["font_weight"] = 600.0
        self._put("text", attributes, style, escape(words))

    @contextmanager
    def titled(self, full: str | None) -> Iterator[None]:
        """Group what is drawn inside under a title that shows ``full``; None groups nothing."""
        if full is None:
            yield
            return
        self._parts.append(f"<g><title>{escape(full)}</title>")
        yield
        self._parts.append("</g>")

    def svg(self, alternative: str) -> str:
        """Give the whole element; ``alternative`` is what it shows, in words."""
        return self._element(f' role="img"><title>{escape(alternative)}</title>')

    def ornament(self) -> str:
        """Give the element as an ornament that screen readers pass over."""
        return self._element(' aria-hidden="true" focusable="false">')

    def _element(self, opening: str) -> str:
        width, height = number(self.width), number(self.height)
        return (
            f'<svg xmlns="http://www.w3.org/2000/svg" class="{palette.PREFIX}figure" width="{width}" '
            f'height="{height}" viewBox="0 0 {width} {height}" font-family="{FAMILY}" '
            f'font-size="{number(SIZE)}"{opening}' + "".join(self._parts) + "</svg>"
        )
