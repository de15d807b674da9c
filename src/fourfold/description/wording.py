"""How the messages quote what they found and name the nearest word that would have been right."""

from __future__ import annotations

import difflib
from collections.abc import Iterable
from itertools import islice
from typing import Any

LONGEST_QUOTE = 60
# Comparing words is slow; a description with more names than this still gets its errors at once.
MOST_COMPARED = 500
NO_VALUE = ("", "~", "null", "Null", "NULL")


def visible(text: str) -> str:
    """``text`` on one line, with every character that a terminal would act on spelled out."""
    return "".join(
        character
        if character.isprintable()
        else character.encode("unicode_escape", "surrogatepass").decode("ascii")
        for character in text
    )


def quoted(text: str) -> str:
    """``text`` in quotation marks, shortened where it is long."""
    if len(text) > LONGEST_QUOTE:
        text = text[: LONGEST_QUOTE - 3] + "..."
    return f"'{visible(text)}'"


def found(value: Any) -> str:
    """What stands in the file, in words."""
    if isinstance(value, str):
        return quoted(value) if value else "nothing"
    if value is None:
        return "nothing"
    if isinstance(value, dict):
        return "a mapping (`key: value`)" if value else "an empty mapping"
    if isinstance(value, list | tuple):
        return "a list" if value else "an empty list"
    return quoted(str(value))


def listed(words: Iterable[str], last: str = "or") -> str:
    """The words as a phrase: one, two or three."""
    words = list(words)
    if len(words) < 2:
        return "".join(words)
    return f"{', '.join(words[:-1])} {last} {words[-1]}"


def nearest(word: str, known: Iterable[str], alike: float = 0.6) -> str | None:
    """The known word that ``word`` most likely stands for; None if none is near."""
    by_lower = {candidate.lower(): candidate for candidate in islice(known, MOST_COMPARED)}
    close = difflib.get_close_matches(word.lower()[:200], [name[:200] for name in by_lower], 1, alike)
    return by_lower.get(close[0]) if close else None


def did_you_mean(word: str, known: Iterable[str]) -> str:
    """``Did you mean 'x'?``, or nothing where no known word is near."""
    close = nearest(word, known)
    return f"Did you mean {quoted(close)}?" if close is not None and close != word else ""
