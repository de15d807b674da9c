"""Text files of rows: csv and tsv. Everything is read as text, so that ``01`` stays ``01``."""

from __future__ import annotations

import codecs
import csv
import io
from collections.abc import Iterator
from itertools import islice
from typing import Any

import numpy as np
import pyarrow as pa
import pyarrow.csv as arrow_csv
from numpy.typing import NDArray

from fourfold.data.source import Content, Request

NAMES = {",": "comma", ";": "semicolon", "\t": "tab", "|": "bar"}
ENCODINGS = {
    "utf-8": "utf-8",
    "utf-8-sig": "utf-8",
    "utf-16": "utf-16",
    "utf-16-le": "utf-16-le",
    "utf-16-be": "utf-16-be",
    "cp1252": "cp1252",
    "iso8859-1": "latin-1",
    "iso8859-15": "iso8859-15",
}
MARKS = ((codecs.BOM_UTF8, "utf-8"), (codecs.BOM_UTF16_LE, "utf-16-le"), (codecs.BOM_UTF16_BE, "utf-16-be"))
SNIFFED_ROWS = 50


def read(request: Request) -> Content:
    """Read a delimited text file.

    Raises
    ------
    DataError
        For an empty file, bytes that are not text, rows of unequal length, or columns that are
        missing or named twice; with the line.
    """
    data = _utf8(request, request.path.read_bytes())
    if not data.strip():
        raise request.error("the file is empty.", "Check that the right file is named.")
    data = _with_line_feeds(data)
    start = str(data[: 1 << 18], "utf-8", "ignore")
    delimiter = _delimiter(request, start)
    names = next(csv.reader(io.StringIO(start, newline=""), delimiter=delimiter))
    shown = [name.strip() or f"(column {place})" for place, name in enumerate(names, 1)]
    if not any(name.strip() for name in names):
        raise request.error("the first line names no column.", "Give each column a name.", 1)
    chosen = request.choose(shown)
    if request.wanted is None:
        # Programs that write row numbers leave their column without a name.
        chosen = [name for place, name in enumerate(chosen) if names[place].strip()]
    raw_name = dict(zip(shown, names, strict=True))
    table = _parse(request, data, delimiter, [raw_name[name] for name in chosen], len(names))
    _refuse_open_quote(request, data, delimiter)
    columns = {name: _in_one_piece(table.column(place)) for place, name in enumerate(chosen)}
    return Content(
        columns=columns,
        available=shown,
        rows=table.num_rows,
        lines=_lines(data, table.num_rows),
        line_word="line",
    )


def _utf8(request: Request, data: bytes) -> bytes:
    """The file as UTF-8. A byte-order mark decides; else `encoding:`; else it must be UTF-8."""
    encoding = _stated_encoding(request)
    for mark, marked in MARKS:
        if data.startswith(mark):
            data, encoding = data[len(mark) :], marked
            break
    if encoding in ("utf-8", None) and data.isascii():
        return _without_nul(request, data)
    try:
        text = data.decode(encoding or "utf-8")
    except UnicodeDecodeError as error:
        wide = 2 if encoding and encoding.startswith("utf-16") else 1
        line = data.count(b"\n\x00" if encoding == "utf-16-le" else b"\n", 0, error.start) + 1
        advice = "Save the file as UTF-8, or state what it is with `encoding: cp1252` under `data:`."
        raise request.error(
            f"byte {error.start + 1} of the file ({data[error.start : error.start + wide].hex()} in "
            f"hexadecimal) is not {encoding or 'utf-8'} text.",
            advice,
            line,
        ) from None
    return _without_nul(request, data if encoding in ("utf-8", None) else text.encode("utf-8"))


def _without_nul(request: Request, data: bytes) -> bytes:
    place = data.find(b"\x00")
    if place >= 0:
        raise request.error(
            f"byte {place + 1} of the file is zero: this is not a text file, or it is damaged.",
            "Export the data again, or name the format by the file's ending.",
            data.count(b"\n", 0, place) + 1,
        )
    return data


def _stated_encoding(request: Request) -> str | None:
    stated = request.options.encoding
    if stated is None:
        return None
    try:
        name = codecs.lookup(stated).name
    except LookupError:
        name = ""
    if name not in ENCODINGS:
        raise request.error(
            f"`encoding: {stated}` is not known; expected one of utf-8, utf-16, cp1252, latin-1, iso8859-15.",
            "Save the file as UTF-8 if it is in another encoding.",
        )
    return ENCODINGS[name]


def _with_line_feeds(data: bytes) -> bytes:
    # Old spreadsheet programs end lines with a carriage return alone.
    return data if b"\n" in data else data.replace(b"\r", b"\n")


def _delimiter(request: Request, start: str) -> str:
    """The stated delimiter, or the one that cuts the first rows into equally many cells."""
    if request.options.delimiter is not None:
        return request.options.delimiter
    if request.path.suffix.lower() in (".tsv", ".tab"):
        return "\t"
    best, best_score = ",", (0.0, 0)
    for delimiter in NAMES:
        rows = [row for row in islice(_records(start, delimiter), SNIFFED_ROWS) if row]
        width = len(rows[0]) if rows else 1
        if width == 1:
            continue
        alike = sum(len(row) == width for row in rows) / len(rows)
        if (alike, width) > best_score:
            best, best_score = delimiter, (alike, width)
    return best


def _records(text: str, delimiter: str) -> Iterator[list[str]]:
    reader = csv.reader(io.StringIO(text, newline=""), delimiter=delimiter)
    try:
        yield from reader
    except csv.Error:
        return


def _parse(request: Request, data: bytes, delimiter: str, wanted: list[str], width: int) -> Any:
    try:
        return arrow_csv.read_csv(
            pa.BufferReader(data),
            read_options=arrow_csv.ReadOptions(block_size=1 << 24),
            parse_options=arrow_csv.ParseOptions(
                delimiter=delimiter, newlines_in_values=b'"' in data, ignore_empty_lines=width > 1
            ),
            convert_options=arrow_csv.ConvertOptions(
                column_types={name: pa.large_string() for name in wanted},
                include_columns=wanted,
                strings_can_be_null=False,
                check_utf8=False,
            ),
        )
    except pa.ArrowInvalid as error:
        ragged = list(islice(_ragged(data, delimiter, width), 6))
        if not ragged:
            raise request.error(f"the file cannot be read as rows of cells ({error}).") from None
        shown = "; ".join(f"line {line} has {cells}" for line, cells in ragged[:5])
        raise request.error(
            f"the column names are {width}, but {shown}{' and so on' if len(ragged) > 5 else ''} "
            f"(cells separated by {NAMES[delimiter]}).",
            "Put a value that holds the separator in double quotes, complete the row, or state `delimiter:`.",
            ragged[0][0],
        ) from None


def _ragged(data: bytes, delimiter: str, width: int) -> Iterator[tuple[int, int]]:
    """Lines whose row has another number of cells than the header; only run after a failure."""
    csv.field_size_limit(len(data) + 1)
    reader = csv.reader(io.StringIO(data.decode("utf-8"), newline=""), delimiter=delimiter)
    line = 1
    for row in reader:
        if row and len(row) != width:
            yield line, len(row)
        line = reader.line_num + 1


def _refuse_open_quote(request: Request, data: bytes, delimiter: str) -> None:
    # A quote that is never closed swallows the rows after it without any other sign.
    if data.count(b'"') % 2 == 0:
        return
    csv.field_size_limit(len(data) + 1)
    reader = csv.reader(io.StringIO(data.decode("utf-8"), newline=""), delimiter=delimiter, strict=True)
    line = 1
    try:
        for _ in reader:
            line = reader.line_num + 1
    except csv.Error as error:
        if "unexpected end" in str(error):
            raise request.error(
                "a double quote is opened and never closed.",
                "Close it, or double it if it belongs to the value.",
                line,
            ) from None


def _in_one_piece(column: Any) -> Any:
    return column.combine_chunks() if column.num_chunks != 1 else column.chunk(0)


def _lines(data: bytes, rows: int) -> NDArray[np.int64]:
    """The line on which each row starts."""
    ends = data.count(b"\n") - (1 if data.endswith(b"\n") else 0)
    if ends == rows:
        return np.arange(2, rows + 2, dtype=np.int64)
    # Blank lines, or line breaks inside quotes: find the line feeds outside quotes.
    bytes_ = np.frombuffer(data, dtype=np.uint8)
    feeds = np.flatnonzero(bytes_ == 10)
    inside = np.searchsorted(np.flatnonzero(bytes_ == 34), feeds) % 2 == 1
    starts = np.concatenate([[0], feeds[~inside] + 1])
    stops = np.append(starts[1:], len(data) + 1) - 1
    lengths = stops - starts
    lengths -= (lengths > 0) & (bytes_[np.minimum(np.maximum(stops - 1, 0), len(data) - 1)] == 13)
    line = np.searchsorted(feeds, starts) + 1
    found = line[lengths > 0][1:]
    # Quotes in the middle of a value can mislead the count; rows are then numbered in order.
    return found.astype(np.int64) if found.size == rows else np.arange(2, rows + 2, dtype=np.int64)
