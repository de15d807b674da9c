"""From raw values to numbers, variable by variable, before any row is excluded.

What cannot be read (a word in a quantity, a level that the description does not list) is only marked
here: an exclusion may yet remove it. ``settle`` raises for what is left.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from datetime import date, timedelta
from itertools import pairwise
from typing import Any

import numpy as np
import pyarrow as pa
import pyarrow.compute as pc
from numpy.typing import NDArray

from fourfold.data.levels import in_order, is_plain_number, match, spelled
from fourfold.data.raw import RawTable, is_in, text, to_bool
from fourfold.description.model import Scalar, Variable

Array = NDArray[np.float64]
Mask = NDArray[np.bool_]
LEVELLED = ("category", "ordered", "binary")


@dataclass(frozen=True, slots=True)
class Coded:
    """A variable over every row read.

    Attributes
    ----------
    values : (n,) float array
        NaN where missing or unreadable; the place in ``labels`` for a levelled kind.
    unreadable : (n,) bool array or None
        Cells that hold something that is not a value of this kind; None where there is none.
    labels : tuple of str
        The levels the description lists, in its order, then any others that the data hold.
    listed : int or None
        How many of ``labels`` the description lists; None where it lists none.
    found : tuple of bool
        Whether each label occurs in the data.
    source : Arrow array or None
        The text of the cells, for messages.
    decimal : str
        Decimal sign of numbers among ``labels``.
    """

    name: str
    kind: str
    values: Array
    unreadable: Mask | None = None
    labels: tuple[str, ...] = ()
    listed: int | None = None
    found: tuple[bool, ...] = ()
    source: Any = None
    decimal: str = "."

    @property
    def missing(self) -> Mask:
        empty = np.isnan(self.values)
        return empty if self.unreadable is None else empty & ~self.unreadable


def code(name: str, variable: Variable, table: RawTable, missing: Sequence[Scalar | None]) -> Coded:
    """Code one described variable.

    Parameters
    ----------
    missing : sequence
        Codes that mean 'not recorded' in every column; the variable's own are added. An empty cell
        is always missing.
    """
    values = table.columns[variable.column or name]
    codes = [spelled(value) for value in [*missing, *variable.missing] if value is not None]
    kind = variable.kind or "category"
    if kind == "quantity":
        return _quantity(name, values, codes, table.decimal)
    if kind == "date":
        return _date(name, values, codes, table.day_zero)
    listed = [spelled(level) for level in variable.levels]
    return levelled(name, kind, values, codes, listed, table.decimal)


def levelled(
    name: str, kind: str, values: Any, codes: Sequence[str], listed: Sequence[str], decimal: str = "."
) -> Coded:
    """Code a category, ordered or binary variable by the text of its cells."""
    encoded = text(values).dictionary_encode()
    words: list[str] = encoded.dictionary.to_pylist()
    absent = {found for code in codes if (found := match(code, words, decimal)) is not None}
    present = [word for word in words if word not in absent]
    label_of: dict[str, str] = {}
    for level in listed:
        found = match(level, [word for word in present if word not in label_of], decimal)
        if found is not None:
            label_of[found] = level
    others = in_order(word for word in present if word not in label_of)
    labels = [*listed, *others]
    place = {label: index for index, label in enumerate(labels)}
    lookup = np.full(len(words) + 1, np.nan)
    for index, word in enumerate(words):
        if word not in absent:
            lookup[index] = place[label_of.get(word, word)]
    indices = pc.fill_null(encoded.indices, len(words)).to_numpy(zero_copy_only=False)
    occurring = {label_of.get(word, word) for word in present}
    return Coded(
        name=name,
        kind=kind,
        values=lookup[indices],
        labels=tuple(labels),
        listed=len(listed) if listed else None,
        found=tuple(label in occurring for label in labels),
        decimal=decimal,
    )


def _quantity(name: str, values: Any, codes: Sequence[str], decimal: str) -> Coded:
    kind = values.type
    if pa.types.is_float64(kind) or pa.types.is_int64(kind):
        numbers = _numpy(values.cast(pa.float64(), safe=False))
        return _finite(name, _without_codes(numbers, codes), None, values)
    if pa.types.is_null(kind):
        return Coded(name, "quantity", np.full(len(values), np.nan))
    words = text(values)
    if codes:
        words = pc.if_else(is_in(words, codes), pa.scalar(None, pa.large_string()), words)
    if pa.types.is_boolean(kind) or pa.types.is_date32(kind):
        return Coded(name, "quantity", np.full(len(words), np.nan), to_bool(words.is_valid()), source=words)
    readable = words
    if decimal == ",":
        # A point in such a file groups thousands or is a slip: never guessed.
        pointed = pc.match_substring(words, ".")
        readable = pc.if_else(pointed, "?", pc.replace_substring(words, ",", "."))
    try:
        numbers = _numpy(readable.cast(pa.float64()))
    except pa.ArrowInvalid:
        numbers = _numbers_of_each_word(readable)
    unreadable = np.isnan(numbers) & to_bool(words.is_valid())
    return _finite(name, _without_codes(numbers, codes), unreadable if unreadable.any() else None, words)


def _finite(name: str, numbers: Array, unreadable: Mask | None, source: Any) -> Coded:
    infinite = np.isinf(numbers)
    if infinite.any():
        numbers = np.where(infinite, np.nan, numbers)
        unreadable = infinite if unreadable is None else infinite | unreadable
    return Coded(name, "quantity", numbers, unreadable, source=source)


def _numbers_of_each_word(words: Any) -> Array:
    """Parse different words once; NaN where one is no number."""
    encoded = words.dictionary_encode()
    return _looked_up(encoded, [_number(word) for word in encoded.dictionary.to_pylist()])


def _looked_up(encoded: Any, parsed: list[float]) -> Array:
    indices = pc.fill_null(encoded.indices, len(parsed)).to_numpy(zero_copy_only=False)
    values: Array = np.array([*parsed, np.nan])[indices]
    return values


def _number(word: str) -> float:
    # float() would take 1_000 and non-Latin digits, which no data file means as a number.
    if "_" in word or not word.isascii():
        return float("nan")
    try:
        return float(word)
    except ValueError:
        return float("nan")


def _without_codes(numbers: Array, codes: Sequence[str]) -> Array:
    wanted = [float(code) for code in codes if is_plain_number(code)]
    return np.where(np.isin(numbers, wanted), np.nan, numbers) if wanted else numbers


def _numpy(values: Any) -> Array:
    numbers: Array = values.to_numpy(zero_copy_only=False)
    return np.asarray(numbers, dtype=np.float64)


def _date(name: str, values: Any, codes: Sequence[str], day_zero: date | None) -> Coded:
    kind = values.type
    if pa.types.is_date32(kind):
        days = _numpy(values.cast(pa.int32()).cast(pa.float64()))
        dropped = is_in(text(values), codes) if codes else None
        return Coded(name, "date", days if dropped is None else np.where(to_bool(dropped), np.nan, days))
    if day_zero is not None and (pa.types.is_float64(kind) or pa.types.is_int64(kind)):
        numbers = _without_codes(_numpy(values.cast(pa.float64(), safe=False)), codes)
        return Coded(name, "date", np.floor(numbers) + (day_zero - date(1970, 1, 1)).days)
    words = text(values)
    if codes:
        words = pc.if_else(is_in(words, codes), pa.scalar(None, pa.large_string()), words)
    encoded = words.dictionary_encode()
    days = _looked_up(encoded, [days_since_1970(word) for word in encoded.dictionary.to_pylist()])
    unreadable = np.isnan(days) & to_bool(words.is_valid())
    return Coded(name, "date", days, unreadable if unreadable.any() else None, source=words)


def days_since_1970(word: str) -> float:
    """Days of a date written as 2024-01-31, with or without a time; NaN if it is not one."""
    try:
        # The first ten characters are the day; a time after them is left aside.
        day = date.fromisoformat(word[:10])
    except ValueError:
        return float("nan")
    if len(word) < 10 or (len(word) > 10 and word[10] not in "T "):
        return float("nan")
    return float((day - date(1970, 1, 1)) // timedelta(days=1))


def band(name: str, cuts: Sequence[float], labels: Sequence[str], quantity: Coded) -> Coded:
    """Cut a quantity into left-closed bands: a value equal to a cut belongs to the band above it."""
    places = np.searchsorted(np.asarray(cuts, dtype=float), quantity.values, side="right").astype(float)
    places[np.isnan(quantity.values)] = np.nan
    used = np.unique(places[~np.isnan(places)]).astype(int)
    return Coded(
        name=name,
        kind="ordered",
        values=places,
        labels=tuple(labels),
        listed=len(labels),
        found=tuple(index in used for index in range(len(labels))),
    )


def band_labels(cuts: Sequence[float]) -> list[str]:
    """Words for left-closed bands: ``under 50``, ``50 to under 65``, ``65 and over``."""
    shown = [written(cut) for cut in cuts]
    middle = [f"{low} to under {high}" for low, high in pairwise(shown)]
    return [f"under {shown[0]}", *middle, f"{shown[-1]} and over"]


def written(number: float) -> str:
    """A number without needless decimals."""
    return str(int(number)) if float(number).is_integer() and abs(number) < 2**53 else repr(float(number))
