"""Raw values: what a file holds, before a description says what the values mean.

Every reader ends here, so that the same data coded from a csv file, a workbook or a database give
the same columns. Values stay in one of six Arrow types; text keeps its spelling.
"""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass
from datetime import date, datetime, time
from decimal import Decimal
from typing import Any

import numpy as np
import pyarrow as pa
import pyarrow.compute as pc
from numpy.typing import NDArray

WHOLE_LIMIT = 2.0**53


@dataclass(frozen=True, slots=True)
class RawTable:
    """The columns that were read, and where each row stood in the file.

    Attributes
    ----------
    file : str
        Name for messages.
    columns : dict
        Column name -> Arrow array of large_string, float64, int64, bool, date32 or null.
    lines : (n,) int64 array
        Line of a text file, or row of a sheet or table, counted from 1.
    line_word : str
        ``line`` or ``row``.
    available : tuple of str
        Every column of the file, read or not.
    sha256 : str
    decimal : str
        Decimal sign of numbers written as text.
    day_zero : date or None
        What a number in a date column counts days from, where the format says so.
    """

    file: str
    columns: dict[str, Any]
    lines: NDArray[np.int64]
    line_word: str
    available: tuple[str, ...]
    sha256: str
    decimal: str = "."
    day_zero: date | None = None

    @property
    def n(self) -> int:
        return int(self.lines.size)


class UnusableType(Exception):
    """A column of a type that has no place in a data table (lists, bytes)."""


def normalise(values: Any) -> Any:
    """Bring an Arrow array to one of the raw types.

    Single-precision numbers are taken at their shortest decimal: 0.1 stays 0.1. Dates with a time
    become days where every time is midnight, else text. NaN becomes null.
    """
    if isinstance(values, pa.ChunkedArray):
        values = _one_piece(values)
    kind = values.type
    if pa.types.is_dictionary(kind):
        return normalise(values.dictionary_decode())
    if pa.types.is_null(kind) or pa.types.is_boolean(kind) or pa.types.is_date32(kind):
        return values
    if pa.types.is_string(kind) or pa.types.is_large_string(kind) or kind == pa.string_view():
        return values.cast(pa.large_string())
    if pa.types.is_uint64(kind):
        return normalise(values.cast(pa.float64(), safe=False))
    if pa.types.is_integer(kind):
        return values.cast(pa.int64())
    if pa.types.is_float16(kind) or pa.types.is_float32(kind):
        return normalise(values.cast(pa.float32()).cast(pa.string()).cast(pa.float64()))
    if pa.types.is_float64(kind):
        return pc.if_else(pc.is_nan(values), pa.scalar(None, pa.float64()), values)
    if pa.types.is_decimal(kind):
        return values.cast(pa.string()).cast(pa.float64())
    if pa.types.is_date64(kind):
        return values.cast(pa.date32())
    if pa.types.is_timestamp(kind):
        return _days_or_text(values)
    if pa.types.is_time(kind) or pa.types.is_duration(kind):
        return values.cast(pa.large_string())
    raise UnusableType(str(kind))


def _one_piece(values: Any) -> Any:
    kind = values.type
    if pa.types.is_string(kind):
        # Offsets of 32 bits cannot hold more than 2 GB of text in one piece.
        values = values.cast(pa.large_string())
    return values.combine_chunks() if values.num_chunks != 1 else values.chunk(0)


def _days_or_text(values: Any) -> Any:
    if values.type.tz is not None:
        values = pc.local_timestamp(values)
    days = pc.floor_temporal(values, unit="day")
    if pc.all(pc.equal(days, values), min_count=0).as_py():
        return values.cast(pa.date32())
    return pc.strftime(values.cast(pa.timestamp("s"), safe=False), "%Y-%m-%dT%H:%M:%S").cast(
        pa.large_string()
    )


def from_objects(values: list[Any]) -> Any:
    """Arrow array of Python values, as workbooks and databases give them; mixed kinds become text."""
    kinds = {type(value) for value in values} - {type(None)}
    if not kinds:
        return pa.nulls(len(values))
    if kinds <= {int, float}:
        return normalise(
            pa.array([None if value is None else float(value) for value in values], pa.float64())
        )
    if len(kinds) == 1 or kinds <= {date, datetime}:
        only = next(iter(kinds))
        if only is str:
            return pa.array(values, pa.large_string())
        if only is bool:
            return pa.array(values, pa.bool_())
        if kinds <= {date, datetime} and all(_is_day(value) for value in values if value is not None):
            return pa.array([None if value is None else _day(value) for value in values], pa.date32())
    return pa.array([None if value is None else _written(value) for value in values], pa.large_string())


def _is_day(value: date | datetime) -> bool:
    return not isinstance(value, datetime) or value.time() == time(0)


def _day(value: date | datetime) -> date:
    return value.date() if isinstance(value, datetime) else value


def _written(value: Any) -> str:
    if isinstance(value, bool):
        return "true" if value else "false"
    if isinstance(value, float | Decimal):
        number = float(value)
        return str(int(number)) if number.is_integer() and abs(number) < WHOLE_LIMIT else repr(number)
    if isinstance(value, datetime):
        return value.date().isoformat() if _is_day(value) else value.isoformat()
    if isinstance(value, date | time):
        return value.isoformat()
    if isinstance(value, bytes | bytearray | memoryview):
        raise UnusableType("bytes")
    return str(value)


def text(values: Any) -> Any:
    """The values as trimmed text: whole numbers without decimals, dates as 2024-01-31.

    White space at either end of a cell never counts; an empty cell is null.
    """
    kind = values.type
    if pa.types.is_null(kind):
        return pa.nulls(len(values), pa.large_string())
    if pa.types.is_float64(kind):
        whole = pc.and_(pc.equal(pc.floor(values), values), pc.less(pc.abs(values), WHOLE_LIMIT))
        integers = pc.if_else(whole, values, 0.0).cast(pa.int64()).cast(pa.large_string())
        return pc.if_else(whole, integers, values.cast(pa.large_string()))
    if not pa.types.is_large_string(kind):
        return values.cast(pa.large_string())
    trimmed = pc.utf8_trim_whitespace(values)
    return pc.if_else(pc.equal(trimmed, ""), pa.scalar(None, pa.large_string()), trimmed)


def is_in(values: Any, wanted: Iterable[str]) -> Any:
    """Which texts are among ``wanted``; null is not."""
    return pc.is_in(values, value_set=pa.array(list(wanted), pa.large_string()), skip_nulls=True)


def to_bool(mask: Any) -> NDArray[np.bool_]:
    """A numpy mask of an Arrow mask; null counts as false."""
    answer: NDArray[np.bool_] = pc.fill_null(mask, False).to_numpy(zero_copy_only=False)
    return answer
