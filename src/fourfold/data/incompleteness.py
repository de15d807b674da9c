"""Who is incomplete, in what, and whether that goes with the outcome."""

from __future__ import annotations

import math
from collections.abc import Sequence
from statistics import NormalDist

import numpy as np
from numpy.typing import NDArray

from fourfold.data.columns import Rows
from fourfold.results import tree

Mask = NDArray[np.bool_]
SMALL_EXPECTED = 5.0
"""Below this expected count Fisher's test replaces chi-squared (common practice)."""


def missing_by_variable(rows: Rows, names: Sequence[str]) -> list[tree.MissingVariable]:
    """People without a value of each variable, in the order of ``names``."""
    answer = []
    for name in names:
        column = rows.columns[name]
        count = rows.count(column.missing)
        answer.append(
            tree.MissingVariable(
                variable=name,
                label=column.label,
                count=count,
                percent=100 * count / rows.people if rows.people else None,
            )
        )
    return answer


def missing_patterns(rows: Rows, names: Sequence[str]) -> list[tree.MissingPattern]:
    """Which variables are missing together, most frequent first; complete rows are left out."""
    holed = [name for name in names if rows.columns[name].missing.any()]
    if not holed:
        return []
    packed = np.packbits(np.column_stack([rows.columns[name].missing for name in holed]), axis=1)
    patterns, which = np.unique(packed, axis=0, return_inverse=True)
    weights = np.ones(rows.n) if rows.counts is None else rows.counts
    counts = np.bincount(which.ravel(), weights=weights).astype(int)
    bits = np.unpackbits(patterns, axis=1, count=len(holed)).astype(bool)
    found = [
        tree.MissingPattern(
            variables=[name for name, lacks in zip(holed, row, strict=True) if lacks], count=int(count)
        )
        for row, count in zip(bits, counts, strict=True)
        if row.any() and count
    ]
    return sorted(found, key=lambda pattern: (-(pattern.count or 0), pattern.variables))


def associations_with_outcome(
    rows: Rows, outcome: str, names: Sequence[str], confidence: float = 95.0
) -> list[tree.MissingAssociation]:
    """Is lacking a value associated with the outcome? One 2 x 2 table for each incomplete variable.

    Over the rows whose outcome is known. The odds ratio (incomplete against complete) has Woolf's
    limits of ``confidence`` percent, and none where a cell is zero.
    """
    values = rows.columns[outcome].values
    known, event = ~np.isnan(values), values == 1
    answer = []
    for name in names:
        lacks = rows.columns[name].missing
        if name == outcome or not (lacks & known).any():
            continue
        a, b = rows.count(lacks & event), rows.count(lacks & known & ~event)
        c, d = rows.count(~lacks & event), rows.count(~lacks & known & ~event)
        p_value, test = compare(a, b, c, d)
        odds_ratio, lower, upper = woolf(a, b, c, d, confidence)
        answer.append(
            tree.MissingAssociation(
                variable=name,
                events_incomplete=a,
                incomplete=a + b,
                events_complete=c,
                complete=c + d,
                odds_ratio=odds_ratio,
                lower=lower,
                upper=upper,
                p_value=p_value,
                test=test,
            )
        )
    return answer


def woolf(
    a: int, b: int, c: int, d: int, confidence: float = 95.0
) -> tuple[float | None, float | None, float | None]:
    """Odds ratio of a 2 x 2 table with Woolf's limits; None where a zero cell leaves none.

    References
    ----------
    Woolf (1955). Annals of Human Genetics 19, 251-253.
    """
    if min(a, b, c, d) == 0:
        return None, None, None
    log_odds_ratio = math.log(a) - math.log(b) - math.log(c) + math.log(d)
    half = NormalDist().inv_cdf((1 + confidence / 100) / 2) * math.sqrt(1 / a + 1 / b + 1 / c + 1 / d)
    return math.exp(log_odds_ratio), math.exp(log_odds_ratio - half), math.exp(log_odds_ratio + half)


def compare(a: int, b: int, c: int, d: int) -> tuple[float | None, str]:
    """P-value and test of a 2 x 2 table: chi-squared without correction, Fisher's where a count is
    expected to be under 5; None where a margin is zero.
    """
    n = a + b + c + d
    rows, columns = (a + b, c + d), (a + c, b + d)
    if min(*rows, *columns) == 0:
        return None, "none"
    if min(rows) * min(columns) / n < SMALL_EXPECTED:
        return fisher(a, b, c, d), "Fisher exact"
    from scipy.special import chdtrc

    statistic = (a * d - b * c) ** 2 / (rows[0] * rows[1]) * (n / (columns[0] * columns[1]))
    return float(chdtrc(1, statistic)), "chi-squared"


def fisher(a: int, b: int, c: int, d: int) -> float:
    """Two-sided exact P: the sum of the probabilities not above that of the table seen.

    Ties are taken with a relative tolerance of 1e-7, so that rounding does not part them.
    """
    from scipy.special import gammaln

    row, column, n = a + b, a + c, a + b + c + d
    seen = np.arange(max(0, row + column - n), min(row, column) + 1, dtype=float)

    def log_choose(total: float, part: NDArray[np.float64]) -> NDArray[np.float64]:
        answer: NDArray[np.float64] = gammaln(total + 1.0) - gammaln(part + 1.0) - gammaln(total - part + 1.0)
        return answer

    log_p = log_choose(column, seen) + log_choose(n - column, row - seen)
    log_p -= log_p.max()
    p = np.exp(log_p)
    p /= p.sum()
    own = p[int(a - seen[0])]
    return float(min(1.0, p[p <= own * (1 + 1e-7)].sum()))
