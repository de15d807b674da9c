"""The report's two families, shipped with the program so that every machine prints the same.

Source Serif 4 sets the text, IBM Plex Sans the tables and figures (both SIL Open Font Licence; the
licences lie beside the files). Each family comes in parts by script: only the parts whose
characters occur in a text need to travel with it.

Each part goes by a family name of its own, and the stacks list the parts in order: a PDF renderer
that tells fonts apart by name, weight and style alone would otherwise print the glyphs of one part
with the numbers of another.
"""

from __future__ import annotations

import base64
from collections.abc import Sequence
from dataclasses import dataclass

from fourfold.report import assets

# Ranges of the parts as their publishers cut them.
_RANGES = {
    "latin": "U+0-FF,U+131,U+152-153,U+2BB-2BC,U+2C6,U+2DA,U+2DC,U+304,U+308,U+329,U+2000-206F,U+20AC,"
    "U+2122,U+2212",
    "latin-ext": "U+100-130,U+132-151,U+154-2BA,U+2BD-2C5,U+2C7-2CC,U+2CE-2D7,U+2DD-2FF,U+1D00-1DBF,"
    "U+1E00-1E9F,U+1EF2-1EFF,U+20A0-20AB,U+20AD-20C0,U+2113,U+2C60-2C7F,U+A720-A7FF",
    "greek": "U+370-3FF",
    "symbols": "U+2032-2033,U+2070-2089,U+2116,U+2126,U+212E,U+2150-215E,"
    "U+2190-21FF,U+2202-2211,U+2215-2265,U+25CA,U+2713",
}


@dataclass(frozen=True, slots=True)
class Part:
    """One font file: a family's characters of one script in one weight and style."""

    family: str
    weight: int
    style: str
    script: str

    @property
    def name(self) -> str:
        """Family name of the part in style sheets."""
        return self.family + _SUFFIXES[self.script]

    @property
    def file(self) -> str:
        """File name under templates/fonts."""
        return self._file(self.script)

    @property
    def print_file(self) -> str:
        """File for a PDF renderer, which sets the space after a sign in the sign's own font.

        The part of signs has no space and would print an empty box there; the whole font has one.
        """
        return self._file("whole" if self.script == "symbols" else self.script)

    def _file(self, script: str) -> str:
        family = self.family.lower().replace(" ", "-")
        italic = "-italic" if self.style == "italic" else ""
        return f"{family}-{script}-{self.weight}{italic}.woff2"

    def serves(self, text: str) -> bool:
        """Say whether any character of ``text`` lies in this part."""
        return self.script == "latin" or any(
            low <= code <= high for code in {ord(letter) for letter in text} for low, high in self.ranges
        )

    @property
    def ranges(self) -> list[tuple[int, int]]:
        """Code points of the part, as inclusive ranges."""
        ends = (piece[2:].split("-") for piece in _RANGES[self.script].split(","))
        return [(int(end[0], 16), int(end[-1], 16)) for end in ends]


SANS, SERIF = "IBM Plex Sans", "Source Serif 4"
_SUFFIXES = {"latin": "", "latin-ext": " Extended", "greek": " Greek", "symbols": " Signs"}

SERIF_FAMILIES = (SERIF, f"{SERIF} Extended", f"{SERIF} Greek", f"{SANS} Signs", "Georgia", "serif")
"""Families for text, in order; Plex lends the mathematical signs that the serif lacks."""

SANS_FAMILIES = (SANS, f"{SANS} Extended", f"{SANS} Greek", f"{SANS} Signs", "Arial", "sans-serif")
"""Families for tables and figures, in order."""


def stack(families: Sequence[str]) -> str:
    """Write families as the value of ``font-family`` in a style sheet."""
    return ",".join(f'"{family}"' if " " in family else family for family in families)


PARTS: tuple[Part, ...] = (
    Part(SERIF, 400, "normal", "latin"),
    Part(SERIF, 600, "normal", "latin"),
    Part(SERIF, 400, "italic", "latin"),
    Part(SANS, 400, "normal", "latin"),
    Part(SANS, 600, "normal", "latin"),
    Part(SANS, 400, "normal", "symbols"),
    Part(SANS, 600, "normal", "symbols"),
    Part(SERIF, 400, "normal", "greek"),
    Part(SERIF, 600, "normal", "greek"),
    Part(SERIF, 400, "italic", "greek"),
    Part(SANS, 400, "normal", "greek"),
    Part(SANS, 600, "normal", "greek"),
    Part(SERIF, 400, "normal", "latin-ext"),
    Part(SERIF, 600, "normal", "latin-ext"),
    Part(SERIF, 400, "italic", "latin-ext"),
    Part(SANS, 400, "normal", "latin-ext"),
    Part(SANS, 600, "normal", "latin-ext"),
)
"""Every font file that the report may use."""


def css(embed: bool = True, text: str | None = None) -> str:
    """Give the ``@font-face`` rules of the report's families.

    Parameters
    ----------
    embed : bool
        Put the files into the rules as base64 data, for a page that stands alone; else name them by
        ``file:`` address, for a PDF renderer.
    text : str, optional
        Everything the page says. Parts of scripts that do not occur in it are left out; None
        keeps all parts.
    """
    folder = assets.templates() / "fonts"
    rules = []
    for part in PARTS:
        if text is not None and not part.serves(text):
            continue
        path = folder / (part.file if embed else part.print_file)
        if embed:
            address = "data:font/woff2;base64," + base64.b64encode(path.read_bytes()).decode("ascii")
        else:
            address = path.resolve().as_uri()
        rules.append(
            f'@font-face{{font-family:"{part.name}";font-style:{part.style};font-weight:{part.weight};'
            f'font-display:block;src:url("{address}") format("woff2");'
            f"unicode-range:{_RANGES[part.script]}}}"
        )
    return "\n".join(rules) + "\n"
