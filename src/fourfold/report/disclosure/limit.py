"""The rule of the description: which counts are small."""

from __future__ import annotations

from dataclasses import dataclass

from fourfold.results import tree


@dataclass(frozen=True, slots=True)
class Limit:
    """Counts from ``least`` to ``smallest - 1`` are hidden.

    ``smallest`` of 0 or 1 hides nothing. Zero is shown unless ``hide_zero``.
    """

    smallest: int
    hide_zero: bool = False

    @classmethod
    def of(cls, analysis: tree.Analysis) -> Limit:
        return cls(analysis.smallest_count, analysis.hide_zero)

    @property
    def active(self) -> bool:
        return self.smallest > 1

    @property
    def least(self) -> int:
        """The smallest count that is hidden."""
        return 0 if self.hide_zero else 1

    @property
    def most(self) -> int:
        """The largest count that is hidden."""
        return self.smallest - 1

    def small(self, value: float | None) -> bool:
        """Must this count be hidden?"""
        return self.active and value is not None and self.least <= value <= self.most

    def open(self, value: int | None) -> bool:
        """May this count be shown?"""
        return value is not None and not self.small(value)
