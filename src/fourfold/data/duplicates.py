"""Rows that come twice: by identifier, and by everything."""

from __future__ import annotations

from collections.abc import Iterable
from typing import Any

import numpy as np
import pyarrow.compute as pc
from numpy.typing import NDArray

from fourfold.data.raw import text, to_bool

Mask = NDArray[np.bool_]


def repeated_identifiers(identifiers: Any, kept: Mask) -> int:
    """How many of the rows kept repeat an identifier that an earlier row has; an empty one never does."""
    words = text(identifiers).filter(kept)
    return int(to_bool(words.is_valid()).sum()) - int(pc.count_distinct(words, mode="only_valid").as_py())


def identical_rows(columns: Iterable[Any], kept: Mask, *, identified: bool) -> int:
    """How many of the rows kept equal an earlier row in every column read.

    Without an identifier, people may agree in everything by chance: identical rows are then counted only
    where they are more than twice the pairs to be expected, were the columns independent, and one.
    """
    n = int(kept.sum())
    if n < 2:
        return 0
    together = np.zeros(n, dtype=np.int64)
    agree = 1.0
    for column in columns:
        encoded = text(column).filter(kept).dictionary_encode()
        codes = pc.fill_null(encoded.indices, len(encoded.dictionary)).to_numpy(zero_copy_only=False)
        totals = np.bincount(codes).astype(float)
        agree *= float((totals * (totals - 1)).sum()) / (n * (n - 1))
        # Renumbered after each column, so that the code of a combination never overflows.
        together = np.unique(together * (int(codes.max()) + 1) + codes, return_inverse=True)[1]
        if int(together.max()) == n - 1:
            return 0
    found = n - int(together.max()) - 1
    expected = agree * n * (n - 1) / 2
    return found if identified or found > 2 * expected + 1 else 0
