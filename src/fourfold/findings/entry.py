"""What a catalogued finding is."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

from fourfold.results import tree

GRADES = ("serious", "concern", "remark")


@dataclass(frozen=True, slots=True, kw_only=True)
class Entry:
    """One thing the program can notice.

    Attributes
    ----------
    id : str
        Family and word, like ``SEP-infinite``.
    section : str
        Where it is shown: participants, results, trust or methods.
    source : str
        Published source, or ``common practice``.
    notice : callable
        Results to findings; never raises on empty, withheld or hidden parts of the tree.
    counts : tuple of str
        Paths in ``values`` that are counts of people and fall under the smallest-count rule:
        ``rows``, or ``items[].count`` for each mapping in a list.
    derived : tuple of str
        Paths computed from such counts.
    """

    id: str
    section: str
    source: str
    notice: Callable[[tree.Results], list[tree.Finding]]
    counts: tuple[str, ...] = ()
    derived: tuple[str, ...] = ()


def found(entry: Entry, grade: str, about: list[str] | None = None, **values: object) -> tree.Finding:
    """Make a finding of a catalogued kind."""
    return tree.Finding(
        id=entry.id, grade=grade, section=entry.section, values=dict(values), source=entry.source, about=about or []
    )
