"""The linked counts of a study: what stands where in the tree, and which counts add up to which.

The same count may stand in several places (a cell of a fourfold table is also the events of an
estimate and of a level in the audit); it has one key here, so that it is hidden in all or none.
Counts that stand nowhere but can be had by subtraction are in the ledger too.
"""

from __future__ import annotations

import math
from collections.abc import Iterable
from dataclasses import dataclass, field

from fourfold.report.disclosure.limit import Limit
from fourfold.results.tree import Hidden

Key = tuple[str, ...]
Path = tuple[str | int, ...]
"""Way through the tree: names of fields, places in lists, and `Item` for a key of a mapping."""


class Item(str):
    """A key of a mapping, as a step of a path."""

    __slots__ = ()


SMALL, SUBTRACTION, DERIVED = "small", "subtraction", "derived"


@dataclass(slots=True)
class Count:
    """One count.

    Attributes
    ----------
    value : int or None
        None if an earlier pass hid it, or if nothing that stands in the tree tells it.
    cost : float
        What a reader loses when it is hidden, against an inner cell of a table.
    stands : bool
        Whether the tree holds it anywhere.
    guarded : bool
        Whether it must not become known when small though it stands nowhere.
    hidden : str or None
        ``small``, ``subtraction``, or what an earlier pass said.
    """

    value: int | None = None
    cost: float = 1.0
    stands: bool = False
    guarded: bool = False
    hidden: str | None = None

    @property
    def shown(self) -> bool:
        return self.stands and self.hidden is None and self.value is not None


@dataclass(slots=True)
class Ledger:
    """All linked counts of one tree.

    Attributes
    ----------
    counts : dict
    relations : list of dict
        Key -> coefficient; the weighted counts of a relation sum to 0.
    at : dict
        Where in the tree a count stands -> its key.
    derived : dict
        Where a figure stands -> the counts from which it is computed.
    rounded : dict
        Where a figure stands that gives counts away by its last digits only -> those counts and
        the decimals that may stay.
    """

    limit: Limit
    counts: dict[Key, Count] = field(default_factory=dict)
    relations: list[dict[Key, int]] = field(default_factory=list)
    at: dict[Path, Key] = field(default_factory=dict)
    derived: dict[Path, set[Key]] = field(default_factory=dict)
    rounded: dict[Path, tuple[set[Key], int]] = field(default_factory=dict)
    _stated: set[frozenset[tuple[Key, int]]] = field(default_factory=set)

    def place(self, path: Path, value: int | None, hidden: Hidden, key: Key, cost: float = 1.0) -> Key:
        """Enter the count that stands at ``path``; returns its key.

        A value that contradicts what stands elsewhere under the same key is another count and is
        entered under a key of its own: a tree that does not add up is still hidden place by place.
        """
        reason = hidden.get(_field_of(path)) if value is None else None
        if value is None and reason is None:
            return key
        known = self.counts.get(key)
        if known is not None and known.value is not None and value is not None and known.value != value:
            key = (*key, *(str(part) for part in path))
        count = self.counts.setdefault(key, Count())
        count.stands = True
        count.cost = max(count.cost, cost * _size(value))
        if value is not None:
            count.value, count.hidden = value, None
        elif count.value is None:
            count.hidden = reason
        self.at[path] = key
        return key

    def guard(self, *keys: Key) -> None:
        """These counts are not to become known when small, though they stand nowhere."""
        for key in keys:
            self.counts.setdefault(key, Count()).guarded = True

    def relate(self, whole: Key, parts: Iterable[Key]) -> None:
        """State that ``parts`` add up to ``whole``."""
        relation = {whole: -1}
        for part in parts:
            relation[part] = relation.get(part, 0) + 1
        for key in relation:
            self.counts.setdefault(key, Count())
        stated = frozenset(relation.items())
        if len(relation) > 1 and stated not in self._stated:
            self._stated.add(stated)
            self.relations.append(relation)

    def nobody(self, key: Key) -> None:
        """State that there are no such people; it stands nowhere but follows from what is shown."""
        self.counts.setdefault(key, Count())
        self.relations.append({key: 1})

    def derive(self, path: Path, keys: Iterable[Key]) -> None:
        """State that the figure at ``path`` is computed from these counts."""
        self.derived.setdefault(path, set()).update(keys)

    def round_off(self, path: Path, keys: Iterable[Key], decimals: int) -> None:
        """State that only the last digits of the figure at ``path`` give these counts away."""
        self.rounded[path] = (set(keys), decimals)

    def is_hidden(self, key: Key) -> bool:
        """Is this count withheld from the reader?"""
        count = self.counts.get(key)
        return count is not None and count.stands and not count.shown

    def settle(self) -> None:
        """Work out counts that stand nowhere; drop relations that the tree contradicts."""
        waiting = list(self.relations)
        contradicted: list[dict[Key, int]] = []
        progress = True
        while progress:
            progress = False
            for relation in list(waiting):
                unknown = [key for key in relation if self.counts[key].value is None]
                if len(unknown) > 1:
                    continue
                waiting.remove(relation)
                rest = sum(
                    by * (self.counts[key].value or 0) for key, by in relation.items() if key not in unknown
                )
                if not unknown:
                    if rest != 0:
                        contradicted.append(relation)
                    continue
                value = -rest // relation[unknown[0]]
                if value < 0:
                    contradicted.append(relation)
                elif not self.counts[unknown[0]].stands:
                    self.counts[unknown[0]].value = value
                    progress = True
        dropped = {id(relation) for relation in contradicted}
        self.relations = [relation for relation in self.relations if id(relation) not in dropped]


def _size(value: int | None) -> float:
    # Among cells of a kind the smallest is hidden: it tells a reader least.
    return 1 + math.log1p(value or 0) / 20


def _field_of(path: Path) -> str:
    """Name under which the owner's ``hidden`` mapping would hold this place."""
    *_, last = (part for part in path if isinstance(part, str) and not isinstance(part, Item))
    return last
