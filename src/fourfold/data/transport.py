"""SAS transport files (.xpt, version 5)."""

from __future__ import annotations

from datetime import date

import numpy as np
import pyarrow as pa

from fourfold.data.raw import from_objects, normalise
from fourfold.data.source import Content, Request

DAY_ZERO = date(1960, 1, 1)
"""Dates in transport files are numbers: days since the first of January 1960."""

READ_FOR_ZERO = 16.0**-65
"""The smallest number of the format, which pandas gives for the eight zero bytes that mean 0."""


def read(request: Request) -> Content:
    """Read a SAS transport file.

    Raises
    ------
    DataError
        If it is not a transport file of version 5.
    """
    import pandas as pd

    try:
        frame = pd.read_sas(request.path, format="xport", encoding=request.options.encoding or "utf-8")
    except (ValueError, KeyError, IndexError, TypeError, UnicodeDecodeError, EOFError) as error:
        raise request.error(
            f"the file cannot be read as a SAS transport file of version 5 ({error}).",
            "Export the data again, or as csv; state `encoding:` if its text is not utf-8.",
        ) from None
    available = [str(name) for name in frame.columns]
    columns = {}
    for name in request.choose(available):
        series = frame[name]
        if series.dtype.kind == "f":
            numbers = series.to_numpy()
            columns[name] = normalise(pa.array(np.where(numbers == READ_FOR_ZERO, 0.0, numbers)))
        else:
            columns[name] = from_objects([None if pd.isna(value) else value for value in series])
    return Content(columns=columns, available=available, rows=len(frame), day_zero=DAY_ZERO)
