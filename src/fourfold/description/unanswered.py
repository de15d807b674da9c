"""Questions of a drafted description that nobody has answered yet."""

from __future__ import annotations

from collections.abc import Iterator

from fourfold.description.node import Node, Written
from fourfold.errors import Position, Problem

PLACEHOLDER = "ANSWER"
"""What a draft puts where only a person can say."""


def unanswered(root: Node, file: str, key: str = "") -> Iterator[Problem]:
    """Report each placeholder, and mark it so that nothing else is said about it."""
    value = root.value
    if isinstance(value, dict):
        for name, child in value.items():
            yield from unanswered(child, file, name)
    elif isinstance(value, list):
        for child in value:
            yield from unanswered(child, file, key)
    elif value == PLACEHOLDER and value.plain:
        root.refused = True
        root.value = Written("", plain=True, refused=True)
        yield Problem(
            f"`{key}` is still to be answered; {PLACEHOLDER} stands here.",
            f"Put your answer in its place. `fourfold keys {key}` says what it means.",
            Position(file, root.line, root.column),
        )
