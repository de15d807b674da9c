"""What a catalogued finding is made of: a rule that looks, and what is known of its values."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, field
from typing import Any

from fourfold.results import tree

REMARK, CONCERN, SERIOUS = "remark", "concern", "serious"
GRADES = (SERIOUS, CONCERN, REMARK)
SECTIONS = ("participants", "results", "trust", "methods")


@dataclass(frozen=True, slots=True)
class Noticed:
    """What a rule saw: how grave it is, the numbers that its words need, the variables concerned."""

    grade: str
    values: dict[str, Any] = field(default_factory=dict)
    about: list[str] = field(default_factory=list)


Rule = Callable[[tree.Results], Noticed | None]
"""Looks at a results tree; None is silence."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Entry:
    """One finding that the program can make.

    Attributes
    ----------
    id : str
        Family and name, such as ``SIZ-epp``; the key of its words.
    section : str
        Section of the report that it belongs to.
    source : str
        Publication behind it, or ``common practice``.
    rule : callable
    counts : tuple of str
        Where counts of people stand in the values: ``rows``, or ``found[].count`` for the count of
        every item of a list. They are hidden when small.
    derived : tuple of str
        Where figures stand that a count could be worked out from.
    """

    id: str
    section: str
    source: str
    rule: Rule
    counts: tuple[str, ...] = ()
    derived: tuple[str, ...] = ()

    def notice(self, results: tree.Results) -> list[tree.Finding]:
        """The finding, alone in a list, or an empty list."""
        noticed = self.rule(results)
        if noticed is None:
            return []
        return [
            tree.Finding(
                id=self.id,
                grade=noticed.grade,
                section=self.section,
                values=noticed.values,
                source=self.source,
                about=noticed.about,
            )
        ]
