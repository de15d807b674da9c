"""A table as data: every format renders these, and one template macro makes them HTML."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field


@dataclass(frozen=True, slots=True)
class Heading:
    """Head of a column. ``width`` is relative to the other columns'."""

    text: str
    width: float
    numeric: bool = True


@dataclass(frozen=True, slots=True)
class Cell:
    """``kind`` is value, reference, hidden or words; it never carries meaning by itself."""

    text: str
    kind: str = "value"


@dataclass(frozen=True, slots=True)
class Row:
    """``kind`` is plain, group (heads the rows that follow), level (belongs to one) or total."""

    header: str
    cells: Sequence[Cell]
    kind: str = "plain"
    detail: str | None = None


@dataclass(frozen=True, slots=True)
class Table:
    """``notes`` stand beneath, each a sentence; ``wide`` tables may use the full page."""

    id: str
    caption: str
    headings: Sequence[Heading]
    rows: Sequence[Row]
    notes: Sequence[str] = field(default_factory=tuple)
    wide: bool = False

    @property
    def widths(self) -> list[int]:
        """Widths in whole percent, never more than 100 together: layout is fixed."""
        total = sum(heading.width for heading in self.headings)
        return [int(100 * heading.width / total) for heading in self.headings]
