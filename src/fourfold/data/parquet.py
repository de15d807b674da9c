"""Parquet files: only the columns that are needed are read."""

from __future__ import annotations

import pyarrow as pa

from fourfold.data.raw import UnusableType, normalise
from fourfold.data.source import Content, Request


def read(request: Request) -> Content:
    """Read a parquet file.

    Raises
    ------
    DataError
        If it is not a parquet file, or a column holds lists or bytes.
    """
    import pyarrow.parquet as arrow_parquet

    try:
        file = arrow_parquet.ParquetFile(request.path)
        available = list(file.schema_arrow.names)
        chosen = request.choose(available)
        table = file.read(columns=chosen)
    except pa.ArrowException as error:
        raise request.error(f"the file cannot be read as parquet ({error}).", "Write it again.") from None
    columns = {}
    for name in chosen:
        try:
            columns[name] = normalise(table.column(name))
        except UnusableType as error:
            raise request.error(
                f"column {name!r} holds values of type {error}, not numbers, words or dates.",
                "Turn them into plain values.",
            ) from None
    return Content(columns=columns, available=available, rows=table.num_rows)
