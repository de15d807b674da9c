"""The composed YAML of a description: what was written, and where each part of it stands.

A scalar keeps the text of its source. Which kind of value it is (number, date, yes or no) is
decided by the key it is written for, never by how it looks: ``no`` under ``levels:`` is the
level ``no``, and ``007`` keeps its zeros.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass, field
from typing import Any

from fourfold.errors import Position

Path = tuple[str | int, ...]


class Written(str):
    """Text of a scalar as it stands in the file, and whether it stood there without quotation marks."""

    plain: bool
    refused: bool

    def __new__(cls, text: str, *, plain: bool, refused: bool = False) -> Written:
        self = super().__new__(cls, text)
        self.plain = plain
        self.refused = refused
        return self


@dataclass(slots=True)
class Node:
    """One value of the file; ``line`` and ``column`` count from 1.

    Attributes
    ----------
    value : Written, list of Node, or dict of str to Node
    flow : bool
        Written in brackets or braces.
    refused : bool
        Already reported (an alias, a tag); nothing below it is worth a second message.
    keys : dict of str to (line, column)
        Where each key of a mapping stands.
    """

    value: Written | list[Node] | dict[str, Node]
    line: int
    column: int
    flow: bool = False
    refused: bool = False
    keys: dict[str, tuple[int, int]] = field(default_factory=dict)

    def child(self, step: str | int) -> Node | None:
        """The value under a key, or the item with an index; None if there is none."""
        if isinstance(step, str) and isinstance(self.value, dict):
            return self.value.get(step)
        if isinstance(step, int) and isinstance(self.value, list) and 0 <= step < len(self.value):
            return self.value[step]
        return None

    def plain_data(self) -> Any:
        """The same as dictionaries, lists and ``Written`` texts."""
        if isinstance(self.value, dict):
            return {key: child.plain_data() for key, child in self.value.items()}
        if isinstance(self.value, list):
            return [child.plain_data() for child in self.value]
        return self.value


@dataclass(frozen=True, slots=True)
class Positions:
    """Where the parts of a description stand in its file."""

    file: str
    root: Node | None

    def find(self, *path: str | int) -> Position:
        """Where the value at ``path`` stands, or the nearest part around it that exists.

        A single value is pointed at itself; a mapping or list by its key, since its own first
        character is often on the next line. Steps that are not there are passed over.
        """
        marks = [(1, 1), *self._marks(path)]
        return Position(self.file, *marks[-1])

    def key(self, *path: str | int) -> Position:
        """Where the last key of ``path`` stands."""
        above, last = self.node(*path[:-1]), path[-1]
        if above is not None and isinstance(last, str) and last in above.keys:
            return Position(self.file, *above.keys[last])
        return self.find(*path)

    def node(self, *path: str | int) -> Node | None:
        """The part at exactly this path."""
        here = self.root
        for step in path:
            if here is None:
                return None
            here = here.child(step)
        return here

    def real(self, path: Path) -> Path:
        """``path`` without the steps that do not exist in the file."""
        here, steps = self.root, list[str | int]()
        for step in path:
            below = here.child(step) if here is not None else None
            if below is not None:
                here = below
                steps.append(step)
        return tuple(steps)

    def refused(self, path: Path) -> bool:
        """Whether this part, or one around it, was already reported as unusable."""
        here = self.root
        for step in path:
            below = here.child(step) if here is not None else None
            if below is not None:
                here = below
                if here.refused:
                    return True
        return False

    def _marks(self, path: Path) -> Iterator[tuple[int, int]]:
        here = self.root
        for step in path:
            below = here.child(step) if here is not None else None
            if here is None or below is None:
                continue
            if isinstance(below.value, Written) or isinstance(step, int):
                yield below.line, below.column
            else:
                yield here.keys[str(step)]
            here = below
