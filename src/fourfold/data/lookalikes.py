"""Columns that are probably not what the description calls them: identifiers and dates as covariates,
and words that say no.
"""

from __future__ import annotations

import re

import numpy as np

from fourfold.data.coding import days_since_1970
from fourfold.data.columns import Column

FEWEST_ROWS = 20
IDENTIFIER_NAME = re.compile(
    r"(^|[_\s.-])(id|ident|identifier|number|no|nr|code|key|record|case_?id)($|[_\s.-])|id$", re.I
)
DATE_NAME = re.compile(r"(^|[_\s.-])(date|day_of|dob|born|on)($|[_\s.-])|date$|_on$", re.I)
NEGATIVE = re.compile(
    r"(no|none|not|n|0|absent|absence|negative|neg|false|never|without|free|healthy|well|alive|control|"
    r"unaffected)([\s_].*)?|(non|not|no|without)[\s_-].*|.*[\s_-](free|absent|negative)",
    re.I,
)


def negative_word(word: str) -> bool:
    """Does a value's own word say that something is not so: no, 0, absent, control?"""
    return NEGATIVE.fullmatch(word.strip()) is not None


def looks_like_identifier(column: Column) -> bool:
    """A category with about as many levels as rows, or whole numbers that number the rows."""
    n = column.values.size
    if n < FEWEST_ROWS:
        return False
    if column.kind in ("category", "ordered"):
        return np.unique(column.values).size > n / 2
    if column.kind != "quantity" or (column.values != np.floor(column.values)).any():
        return False
    different = np.unique(column.values)
    if different.size < n:
        return False
    in_sequence = different[-1] - different[0] == n - 1
    return bool(in_sequence or (np.diff(column.values) > 0).all() or IDENTIFIER_NAME.search(column.name))


def looks_like_date(column: Column) -> bool:
    """A date kind, words that are dates, or numbers such as 20240131 or a spreadsheet's day count."""
    if column.kind == "date":
        return True
    if column.kind in ("category", "ordered"):
        return bool(column.levels) and all(not np.isnan(days_since_1970(level)) for level in column.levels)
    if column.kind != "quantity" or column.values.size == 0:
        return False
    values = column.values
    if (values != np.floor(values)).any():
        return False
    year, month, day = values // 10_000, values // 100 % 100, values % 100
    compact = (year >= 1900) & (year <= 2100) & (month >= 1) & (month <= 12) & (day >= 1) & (day <= 31)
    if compact.all():
        return True
    # 1954 to 2064 in the day count of spreadsheets.
    serial = (values >= 20_000) & (values <= 60_000)
    return bool(serial.all() and DATE_NAME.search(column.name))
