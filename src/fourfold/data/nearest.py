"""The nearest word to one that was not found, for messages."""

from __future__ import annotations

import difflib
from collections.abc import Iterable


def nearest(word: str, known: Iterable[str]) -> str:
    """A sentence `` Did you mean 'age'?``, or nothing where no word is near."""
    by_fold = {candidate.casefold(): candidate for candidate in known}
    close = difflib.get_close_matches(word.casefold(), list(by_fold), n=1, cutoff=0.6)
    return f" Did you mean {by_fold[close[0]]!r}?" if close else ""
