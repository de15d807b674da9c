"""What a column probably is, judged from its name and all of its values."""

from __future__ import annotations

import re
from dataclasses import dataclass
from typing import Any

import numpy as np
import pyarrow as pa
from numpy.typing import NDArray

from fourfold.data.coding import code, days_since_1970
from fourfold.data.columns import Column, Rows
from fourfold.data.levels import in_order, is_plain_number
from fourfold.data.lookalikes import IDENTIFIER_NAME, looks_like_date, looks_like_identifier, negative_word
from fourfold.data.raw import RawTable, text
from fourfold.data.suspected_codes import suspected_codes
from fourfold.description.model import Variable

MISSING_WORDS = ("N/A", "n/a", "na", "NaN", "nan", "NULL", "null", "None", ".", "-", "--", "?")
"""Beside NA and the empty cell, what often stands for 'not recorded' (common practice)."""

YES = ("yes", "y", "true", "1", "present", "positive", "case", "dead", "died", "ja", "oui", "si", "sí")
MOST_LEVELS = 30
ORDERS = (
    ("low", "medium", "high"),
    ("low", "middle", "high"),
    ("low", "moderate", "high"),
    ("none", "mild", "moderate", "severe"),
    ("never", "former", "current"),
    ("never", "sometimes", "often"),
    ("small", "medium", "large"),
    ("i", "ii", "iii", "iv", "v"),
)
UNITS = (
    (r"age|alter", "years"),
    (r"bmi", "kg/m2"),
    (r"weight_?kg|kg", "kg"),
    (r"height_?cm|cm", "cm"),
    (r"lbs?|pounds", "lb"),
    (r"sbp|dbp|systolic|diastolic|blood_?pressure|mmhg", "mmHg"),
    (r"minutes?|mins?", "minutes"),
    (r"hours?|hrs?", "hours"),
    (r"days?|nights?", "days"),
    (r"weeks?", "weeks"),
    (r"months?", "months"),
    (r"years?|yrs?", "years"),
    (r"temp|temperature", "°C"),
)


@dataclass(frozen=True, slots=True)
class Guess:
    """What a column probably is.

    ``kind`` is one of the kinds of a variable, ``identifier``, or ``left out``; ``why`` says it in
    words.
    """

    column: str
    kind: str
    why: str
    present: str | None = None
    levels: tuple[str, ...] = ()
    unit: str | None = None
    missing: tuple[str, ...] = ()


def guess_column(name: str, table: RawTable, missing: list[str]) -> Guess:
    """Guess what a column is.

    Parameters
    ----------
    missing : list of str
        Words that mean 'not recorded' everywhere in the file.
    """
    words = [word for word in _words(table.columns[name]) if word not in missing]
    if not words:
        return Guess(name, "left out", "every row is empty")
    if len(words) == 1:
        return Guess(name, "left out", "every row holds the same value")
    if len(words) == 2:
        return _two_values(name, words)
    if all(not np.isnan(days_since_1970(word)) for word in words):
        return Guess(name, "date", "every value is a date")
    numbers = code(name, Variable(kind="quantity", column=name, missing=missing), table, [])
    if numbers.unreadable is None:
        return _numbers(name, numbers.values, words)
    if len(words) > table.n / 2 and table.n >= 20:
        if len(words) == table.n or IDENTIFIER_NAME.search(name):
            return Guess(name, "identifier", "nearly every row has a value of its own")
        return Guess(name, "left out", f"free text: {len(words)} different values")
    if len(words) > MOST_LEVELS:
        return Guess(name, "left out", f"{len(words)} different words are too many levels")
    return _category(name, words)


def missing_words(table: RawTable) -> list[str]:
    """Words that mean 'not recorded', as far as the file holds them."""
    held = {word for values in table.columns.values() for word in _words(values, most=100_000)}
    return [word for word in ("NA", *MISSING_WORDS) if word in held]


def decimal_sign(table: RawTable) -> str:
    """A comma, where columns are numbers only if a comma is taken for the decimal sign."""
    for values in table.columns.values():
        words = _words(values, most=100_000)
        with_comma = [word for word in words if "," in word]
        if with_comma and all(is_plain_number(word.replace(",", ".")) for word in with_comma):
            return ","
    return "."


def _words(values: Any, most: int | None = None) -> list[str]:
    if pa.types.is_null(values.type):
        return []
    different = text(values if most is None else values.slice(0, most)).unique().drop_null()
    words: list[str] = different.to_pylist()
    return words


def _two_values(name: str, words: list[str]) -> Guess:
    ordered = in_order(words)
    yes = [word for word in ordered if word.casefold() in YES]
    if len(yes) != 1:
        no = [word for word in ordered if negative_word(word)]
        yes = [word for word in ordered if word not in no] if len(no) == 1 else []
    shown = " and ".join(ordered)
    if len(yes) == 1:
        return Guess(name, "binary", f"two values, {shown}", present=yes[0])
    return Guess(name, "category", f"two values, {shown}; neither says yes", levels=tuple(ordered))


def _numbers(name: str, values: NDArray[np.float64], words: list[str]) -> Guess:
    known = values[~np.isnan(values)]
    column = Column(name, name, "quantity", known)
    if looks_like_date(column):
        return Guess(name, "left out", "the numbers look like dates; write them as 2024-01-31 to use them")
    complete = known.size == values.size
    if complete and (
        looks_like_identifier(column) or (IDENTIFIER_NAME.search(name) and len(words) == known.size)
    ):
        return Guess(name, "identifier", "every row has a number of its own")
    if IDENTIFIER_NAME.search(name) and (known == np.floor(known)).all():
        return Guess(name, "left out", "by its name and values it numbers people or groups")
    different = np.unique(known)
    in_sequence = different[0] == 1 and different.size <= 7 and different[-1] == different.size
    if in_sequence and all(is_plain_number(word) for word in words):
        levels = tuple(in_order(words))
        return Guess(
            name, "category", f"whole numbers from 1 to {different.size}: codes or counts?", levels=levels
        )
    rows = Rows({name: Column(name, name, "quantity", values)}, None, np.arange(values.size))
    codes = tuple(f"{found.value:g}" for found in suspected_codes(name, rows))
    unit = next((unit for pattern, unit in UNITS if _names(pattern, name)), None)
    why = f"numbers, {different.size} different"
    if unit is not None:
        why += "; unit from the name"
    if codes:
        why += f"; {', '.join(codes)} may mean 'not recorded'"
    return Guess(name, "quantity", why, unit=unit, missing=codes)


def _names(pattern: str, name: str) -> bool:
    return re.search(rf"(^|[_\W\d])({pattern})($|[_\W\d])", name, re.IGNORECASE) is not None


def _category(name: str, words: list[str]) -> Guess:
    by_fold = {word.casefold(): word for word in words}
    for order in ORDERS:
        # Three words at least, or the order is no more than a coincidence.
        if len(words) >= 3 and set(by_fold) <= set(order):
            levels = tuple(by_fold[word] for word in order if word in by_fold)
            return Guess(name, "ordered", f"{len(levels)} words with an order", levels=levels)
    return Guess(name, "category", f"{len(words)} words", levels=tuple(in_order(words)))
