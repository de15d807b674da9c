"""How wide words are, and how they are broken to fit a width."""

from __future__ import annotations

import unicodedata
from dataclasses import dataclass

from fourfold.report.figures.advances import REGULAR, SEMIBOLD
from fourfold.report.figures.canvas import SIZE, Canvas, Point, clean

ELLIPSIS = "\u2026"
LEADING = 1.2
"""Distance of two baselines, in sizes."""


def width(words: str, size: float = SIZE, bold: bool = False) -> float:
    """Give the width of one line, px; letters that the font lacks count as wide as the widest kind."""
    table = SEMIBOLD if bold else REGULAR
    return sum(table.get(letter) or _guess(letter) for letter in words) * size / 1000


def _guess(letter: str) -> int:
    if unicodedata.combining(letter):
        return 0
    return 1000 if unicodedata.east_asian_width(letter) in "WF" else 650


@dataclass(frozen=True, slots=True)
class Block:
    """Words broken into lines.

    Attributes
    ----------
    lines : tuple of str
    full : str or None
        All the words, where the lines had no room for them.
    size : float
    bold : bool
    """

    lines: tuple[str, ...]
    full: str | None
    size: float = SIZE
    bold: bool = False

    @property
    def height(self) -> float:
        """Height of the lines together, px."""
        return len(self.lines) * self.size * LEADING

    @property
    def width(self) -> float:
        """Width of the longest line, px."""
        return max((width(line, self.size, self.bold) for line in self.lines), default=0.0)

    def write(self, canvas: Canvas, place: Point, style: str = "ink", anchor: str = "start") -> None:
        """Write the lines with the first baseline at ``place``."""
        x, y = place
        with canvas.titled(self.full):
            for index, line in enumerate(self.lines):
                canvas.text(
                    (x, y + index * self.size * LEADING),
                    line,
                    style,
                    anchor=anchor,
                    size=self.size,
                    bold=self.bold,
                )

    def write_centred(self, canvas: Canvas, place: Point, style: str = "ink", anchor: str = "start") -> None:
        """Write the lines so that their middle is at the height of ``place``."""
        x, y = place
        first = y - (len(self.lines) - 1) * self.size * LEADING / 2 + self.size * 0.35
        self.write(canvas, (x, first), style, anchor)


def block(words: str, room: float, *, most: int = 2, size: float = SIZE, bold: bool = False) -> Block:
    """Break words at spaces into at most ``most`` lines of width ``room`` (px).

    A word wider than the room is broken inside. What doesn't fit ends in an ellipsis, and the
    block keeps the full words for a title.
    """
    words = clean(words)
    lines: list[str] = []
    line = ""
    for word in words.split(" "):
        joined = f"{line} {word}" if line else word
        if width(joined, size, bold) <= room:
            line = joined
            continue
        if line:
            lines.append(line)
        line = word
        while width(line, size, bold) > room and len(line) > 1:
            kept = _head(line, room, size, bold)
            lines.append(kept)
            line = line[len(kept) :]
    if line:
        lines.append(line)
    if len(lines) <= most:
        return Block(tuple(lines), None, size, bold)
    last = _head(f"{lines[most - 1]} {lines[most]}", room - width(ELLIPSIS, size, bold), size, bold)
    return Block((*lines[: most - 1], last.rstrip() + ELLIPSIS), words, size, bold)


def _head(words: str, room: float, size: float, bold: bool) -> str:
    """Give the longest beginning that fits, at least one letter."""
    end = len(words)
    while end > 1 and width(words[:end], size, bold) > room:
        end -= 1
    return words[:end]
