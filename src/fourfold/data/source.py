"""Reading the data file: the format by its ending, only the columns that the description needs."""

from __future__ import annotations

import hashlib
import os
from collections.abc import Callable, Iterator, Sequence
from contextlib import contextmanager
from dataclasses import dataclass, field
from datetime import date
from pathlib import Path
from typing import TYPE_CHECKING, Any

import numpy as np
from numpy.typing import NDArray

from fourfold.data.nearest import nearest
from fourfold.data.raw import RawTable
from fourfold.description.model import Condition, DataSource, StudyDescription
from fourfold.errors import DataError, Position, Problem

if TYPE_CHECKING:
    from fourfold.description.read import Loaded

ENDINGS = {
    ".csv": "delimited",
    ".tsv": "delimited",
    ".tab": "delimited",
    ".txt": "delimited",
    ".parquet": "parquet",
    ".xlsx": "xlsx",
    ".xlsm": "xlsx",
    ".ods": "ods",
    ".sqlite": "sqlite",
    ".sqlite3": "sqlite",
    ".db": "sqlite",
    ".duckdb": "duckdb",
    ".xpt": "transport",
}


@dataclass(frozen=True, slots=True)
class Content:
    """What a reader of one format gives back.

    ``columns`` maps the names asked for to Arrow arrays. ``available`` lists every column of the
    file. ``lines`` is where each row stands, by default 1, 2, 3...
    """

    columns: dict[str, Any]
    available: Sequence[str]
    rows: int
    lines: NDArray[np.int64] | None = None
    line_word: str = "row"
    day_zero: date | None = None


@dataclass(frozen=True, slots=True)
class Request:
    """What is asked of a reader: the file, its options, and which columns.

    ``wanted`` None asks for every column. ``name`` is how messages call the file.
    """

    path: Path
    name: str
    wanted: Sequence[str] | None
    options: DataSource
    asked_by: dict[str, str] = field(default_factory=dict)

    def error(self, what: str, advice: str = "", line: int | None = None) -> DataError:
        return DataError(Problem(what, advice, Position(self.name, line)))

    def choose(self, available: Sequence[str]) -> list[str]:
        """The columns to read.

        Raises
        ------
        DataError
            If the file repeats a name, or lacks a column that is asked for.
        """
        repeated = sorted({name for name in available if list(available).count(name) > 1})
        if repeated:
            raise self.error(
                f"several columns have the same name: {', '.join(repr(name) for name in repeated)}.",
                "Rename them in the file, so that it is clear which one is meant.",
            )
        if self.wanted is None:
            return list(available)
        known = set(available)
        problems = [
            Problem(
                f"there is no column {name!r}{self._asker(name)}; the file has "
                f"{_listed(available)}.{nearest(name, available)}",
                "Correct the name in the description, or give the name in the file with `column:`.",
                Position(self.name),
            )
            for name in self.wanted
            if name not in known
        ]
        if problems:
            raise DataError(problems)
        return list(self.wanted)

    def _asker(self, name: str) -> str:
        asker = self.asked_by.get(name)
        return f" (asked for by {asker})" if asker else ""


def _listed(names: Sequence[str], most: int = 40) -> str:
    shown = ", ".join(str(name) for name in names[:most])
    return shown if len(names) <= most else f"{shown} and {len(names) - most} more"


def read(loaded: Loaded) -> RawTable:
    """Read the columns that a description needs from its data file.

    Raises
    ------
    DataError
        If the file cannot be read as the description says, or changes while it is read.
    """
    description = loaded.description
    needed = columns_needed(description)
    request = Request(
        path=loaded.path.parent / description.data.file,
        name=description.data.file,
        wanted=list(needed),
        options=description.data,
        asked_by=needed,
    )
    return read_file(request)


def read_file(request: Request) -> RawTable:
    """Read what ``request`` asks for; the file must be the same before and after.

    Raises
    ------
    DataError
        If the file cannot be read.
    """
    path = request.path
    reader = _reader(request)
    with _as_data_errors(request):
        before = _state(path)
        content = reader(request)
        after = _state(path)
    if before != after:
        raise request.error(
            "the file changed while it was being read.",
            "Wait until whatever writes it has finished, and run again.",
        )
    if content.rows == 0:
        raise request.error("the file has column names but no rows.", "Check that the right file is named.")
    lines = content.lines if content.lines is not None else np.arange(1, content.rows + 1, dtype=np.int64)
    return RawTable(
        file=request.name,
        columns=content.columns,
        lines=lines,
        line_word=content.line_word,
        available=tuple(content.available),
        sha256=before.sha256,
        decimal=request.options.decimal,
        day_zero=content.day_zero,
    )


@dataclass(frozen=True, slots=True)
class _State:
    size: int
    modified: int
    inode: int
    sha256: str


def _state(path: Path) -> _State:
    # A pipe or a device would never end, and could not be read twice.
    if path.exists() and not path.is_file() and not path.is_dir():
        raise OSError("it is not an ordinary file")
    digest = hashlib.sha256()
    with path.open("rb") as file:
        while piece := file.read(1 << 20):
            digest.update(piece)
        status = os.fstat(file.fileno())
    return _State(status.st_size, status.st_mtime_ns, status.st_ino, digest.hexdigest())


@contextmanager
def _as_data_errors(request: Request) -> Iterator[None]:
    try:
        yield
    except FileNotFoundError:
        folder = request.path.parent
        there = [entry.name for entry in folder.iterdir() if entry.is_file()] if folder.is_dir() else []
        raise request.error(
            f"there is no such file.{nearest(request.path.name, there)}",
            "The file is looked for beside the description; correct `file:` under `data:`.",
        ) from None
    except IsADirectoryError:
        raise request.error("this is a folder, not a data file.", "Name the file in it.") from None
    except PermissionError:
        raise request.error("the file may not be read.", "Ask for permission to read it.") from None
    except MemoryError:
        raise request.error(
            "the file does not fit in this machine's memory.", "Store it as parquet, or on a larger machine."
        ) from None
    except OSError as error:
        raise request.error(f"the file cannot be read: {error.strerror or error}.") from None


def _reader(request: Request) -> Callable[[Request], Content]:
    # Each reader is imported when it is wanted: a csv file needs no workbook library.
    ending = request.path.suffix.lower()
    family = ENDINGS.get(ending)
    if family == "delimited":
        from fourfold.data import delimited

        return delimited.read
    if family == "parquet":
        from fourfold.data import parquet

        return parquet.read
    if family == "xlsx":
        from fourfold.data import workbook

        return workbook.read
    if family == "ods":
        from fourfold.data import opendocument

        return opendocument.read
    if family in ("sqlite", "duckdb"):
        from fourfold.data import database

        return database.read_sqlite if family == "sqlite" else database.read_duckdb
    if family == "transport":
        from fourfold.data import transport

        return transport.read
    raise request.error(
        f"the ending {ending!r} is not one that can be read; expected one of {', '.join(sorted(ENDINGS))}.",
        "Export the data as csv or parquet.",
    )


def columns_needed(description: StudyDescription) -> dict[str, str]:
    """Columns of the file that a description needs, each with what asks for it."""
    needed: dict[str, str] = {}
    for name, variable in description.variables.items():
        if variable.from_ is None:
            needed.setdefault(variable.column or name, f"variable {name}")
    data = description.data
    if data.identifier is not None:
        needed.setdefault(data.identifier, "data.identifier")
    if data.counts is not None:
        needed.setdefault(data.counts, "data.counts")
    for exclusion in description.exclusions:
        for name in named_in(exclusion.where):
            if name not in description.variables:
                needed.setdefault(name, f"the exclusion {exclusion.reason!r}")
    return needed


def named_in(condition: Condition) -> list[str]:
    """Variables that a condition looks at."""
    found = [condition.variable] if condition.variable is not None else []
    for part in [*(condition.all or []), *(condition.any or [])]:
        found += named_in(part)
    return found
