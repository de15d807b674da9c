"""Levels: which value of the data a level of the description means.

The rule: a level matches the value spelled the same way. Only where no value is spelled so, a number
matches a value equal to it (``1`` and ``1.0``), if that is one value only and has no leading zero;
and ``true`` or ``false`` match however they are capitalised. ``01`` is therefore never ``1``.
"""

from __future__ import annotations

import re
from collections.abc import Iterable, Sequence
from datetime import date

from fourfold.description.model import Scalar

PLAIN_NUMBER = re.compile(r"-?(0|[1-9]\d*)(\.\d+)?")


def spelled(value: Scalar | date) -> str:
    """A value of the description as text."""
    if isinstance(value, bool):
        return "true" if value else "false"
    if isinstance(value, date):
        return value.isoformat()
    return str(value).strip()


def is_plain_number(word: str) -> bool:
    """Is it a number without leading zero, exponent or sign of plus?"""
    return PLAIN_NUMBER.fullmatch(word) is not None


def match(level: str, values: Iterable[str], decimal: str = ".") -> str | None:
    """The value that ``level`` means, or None; ``decimal`` is the decimal sign of the values."""
    known = list(values)
    if level in known:
        return level
    if is_plain_number(level):
        pointed = {value: value.replace(decimal, ".") for value in known}
        equal = [
            value for value, word in pointed.items() if is_plain_number(word) and float(word) == float(level)
        ]
        return equal[0] if len(equal) == 1 else None
    if level.casefold() in ("true", "false"):
        alike = [value for value in known if value.casefold() == level.casefold()]
        return alike[0] if len(alike) == 1 else None
    return None


def in_order(values: Iterable[str]) -> list[str]:
    """Levels that the description does not list: by number if all are numbers, else by letter."""
    known = list(values)
    if all(is_plain_number(value) for value in known):
        return sorted(known, key=lambda value: (float(value), value))
    return sorted(known, key=lambda value: (value.casefold(), value))


def numbered(labels: Sequence[str], decimal: str = ".") -> list[float] | None:
    """The labels as numbers, or None if one of them is none."""
    try:
        return [float(label.replace(decimal, ".")) for label in labels]
    except ValueError:
        return None
