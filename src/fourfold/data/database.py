"""Tables of sqlite and duckdb files, opened for reading only."""

from __future__ import annotations

import sqlite3
from collections.abc import Sequence
from typing import Any
from urllib.request import pathname2url

import pyarrow as pa

from fourfold.data.nearest import nearest
from fourfold.data.raw import UnusableType, from_objects, normalise
from fourfold.data.source import Content, Request


def read_sqlite(request: Request) -> Content:
    """Read a table (or view) of a sqlite file.

    Raises
    ------
    DataError
        If it is not a sqlite file, or `table:` is missing or unknown.
    """
    # Opening would create a file that is not there; this asks for it first.
    request.path.open("rb").close()
    address = f"file:{pathname2url(str(request.path.resolve()))}?mode=ro"
    try:
        connection = sqlite3.connect(address, uri=True)
        try:
            tables = [
                row[0]
                for row in connection.execute(
                    "select name from sqlite_master where type in ('table', 'view') "
                    "and name not like 'sqlite_%' order by name"
                )
            ]
            table = _chosen_table(request, tables)
            available = [row[1] for row in connection.execute(f"pragma table_info({_quoted(table)})")]
            chosen = request.choose(available)
            selected = ", ".join(_quoted(name) for name in chosen)
            rows = connection.execute(f"select {selected} from {_quoted(table)}").fetchall()
        finally:
            connection.close()
    except sqlite3.Error as error:
        raise request.error(f"the file cannot be read as a sqlite database ({error}).") from None
    by_column = list(zip(*rows, strict=True)) if rows else [()] * len(chosen)
    columns = {}
    for name, values in zip(chosen, by_column, strict=True):
        try:
            columns[name] = from_objects(list(values))
        except UnusableType:
            raise _bytes(request, name) from None
    return Content(columns=columns, available=available, rows=len(rows))


def read_duckdb(request: Request) -> Content:
    """Read a table (or view) of a duckdb file. Views that look outside the file are refused.

    Raises
    ------
    DataError
        If duckdb is not installed, it is not a duckdb file, or `table:` is missing or unknown.
    """
    try:
        import duckdb
    except ImportError:
        raise request.error(
            "reading duckdb files needs the duckdb library, which is not installed.",
            "Install it with: pip install 'fourfold[sql]'",
        ) from None
    request.path.open("rb").close()
    try:
        connection = duckdb.connect(
            str(request.path), read_only=True, config={"enable_external_access": "false"}
        )
        try:
            found = connection.execute(
                "select table_name from information_schema.tables where table_schema = 'main' order by 1"
            ).fetchall()
            table = _chosen_table(request, [row[0] for row in found])
            described = connection.execute(f"describe {_quoted(table)}").fetchall()
            available = [str(row[0]) for row in described]
            chosen = request.choose(available)
            selected = ", ".join(_quoted(name) for name in chosen)
            read: Any = connection.sql(f"select {selected} from {_quoted(table)}").to_arrow_table()
        finally:
            connection.close()
    except duckdb.Error as error:
        first = str(error).splitlines()[0]
        raise request.error(f"the file cannot be read as a duckdb database ({first}).") from None
    columns = {}
    for name in chosen:
        try:
            columns[name] = normalise(read.column(name))
        except (UnusableType, pa.ArrowException):
            raise _bytes(request, name) from None
    return Content(columns=columns, available=available, rows=read.num_rows)


def _chosen_table(request: Request, tables: Sequence[str]) -> str:
    wanted = request.options.table
    there = ", ".join(tables) or "none"
    if wanted is None and len(tables) == 1:
        return tables[0]
    if wanted is None:
        raise request.error(f"the file has these tables: {there}.", "Name one with `table:` under `data:`.")
    if wanted not in tables:
        raise request.error(
            f"there is no table {wanted!r}; the file has {there}.{nearest(wanted, tables)}",
            "Correct `table:` under `data:`.",
        )
    return wanted


def _quoted(name: str) -> str:
    return '"' + name.replace('"', '""') + '"'


def _bytes(request: Request, name: str) -> Exception:
    return request.error(
        f"column {name!r} holds bytes or lists, not numbers, words or dates.", "Turn them into plain values."
    )
