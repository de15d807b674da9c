"""Numbers in a quantity that look like a code for 'not recorded': 9, 99, 999, -1 and the like."""

from __future__ import annotations

import numpy as np

from fourfold.data.columns import Rows
from fourfold.results import tree

CODES = np.array(
    [sign * float(digit * length) for digit in "789" for length in range(1, 7) for sign in (1, -1)]
    + [-1.0, -2.0]
)
FEWEST = 2
SPIKE = 4
"""A code next to the other values must be this many times as frequent as the most frequent of them."""


def suspected_codes(name: str, rows: Rows) -> list[tree.SuspectedCode]:
    """Values made of 7, 8 or 9 alone, or -1 or -2, that repeat and lie apart from the rest.

    Apart means beyond every other value, and either further away than half the range of the others,
    on the other side of zero from all of them, or so frequent that it towers over the outer tenth.
    """
    values = rows.columns[name].values
    known = ~np.isnan(values)
    different, place = np.unique(values[known], return_inverse=True)
    if different.size < 3:
        return []
    totals = np.bincount(place, weights=None if rows.counts is None else rows.counts[known]).astype(int)
    candidate = np.isin(different, CODES) & (totals >= FEWEST)
    rest, rest_totals = different[~candidate], totals[~candidate]
    if rest.size < 2:
        return []
    return [
        tree.SuspectedCode(variable=name, value=float(value), count=int(total))
        for value, total in zip(different[candidate], totals[candidate], strict=True)
        if _apart(float(value), int(total), rest, rest_totals)
    ]


def _apart(value: float, total: int, rest: np.ndarray, totals: np.ndarray) -> bool:
    low, high = rest[0], rest[-1]
    if low <= value <= high:
        return False
    if value < 0 <= low:
        return True
    gap = value - high if value > high else low - value
    if gap > (high - low) / 2:
        return True
    outer = rest >= np.quantile(rest, 0.9) if value > high else rest <= np.quantile(rest, 0.1)
    return total >= 5 and total >= SPIKE * int(totals[outer].max())
