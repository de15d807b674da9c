"""References numbered in the order in which the report first cites them."""

from __future__ import annotations

import re

from markupsafe import Markup, escape

from fourfold.report.words import CITE_CLOSE, CITE_OPEN, Words

_MARK = re.compile(f"{CITE_OPEN}([a-z0-9,]+){CITE_CLOSE}")


class Citations:
    """Numbers of the references; reading the texts in order gives the order of the list."""

    def __init__(self, words: Words) -> None:
        self._words = words
        self._numbers: dict[str, int] = {}

    def number(self, key: str) -> int:
        """Number of a reference, the next free one on its first citation."""
        return self._numbers.setdefault(key, len(self._numbers) + 1)

    def plain(self, text: str) -> str:
        """``text`` with citations as `` [1,2]``, for a manuscript or a terminal."""
        return _MARK.sub(
            lambda found: f" [{','.join(str(self.number(key)) for key in found[1].split(','))}]", text
        )

    def linked(self, text: str) -> Markup:
        """``text`` escaped, with citations as links into the list of references."""

        def links(found: re.Match[str]) -> str:
            numbers = [self.number(key) for key in found[1].split(",")]
            inside = ",".join(f'<a href="#reference-{number}">{number}</a>' for number in numbers)
            return f'<span class="cite"> [{inside}]</span>'

        # The escaped text has no markup of its own, so the marks are the only thing replaced.
        return Markup(_MARK.sub(links, str(escape(text))))

    @property
    def references(self) -> list[tuple[int, str]]:
        """Number and text of each reference cited so far."""
        return [
            (number, self._words.say(f"methods.references.{key}")) for key, number in self._numbers.items()
        ]
