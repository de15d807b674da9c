"""Rows of people put together where they are few: groups of fitted risk, bins of a quantity.

A row with few events, or few without, is joined with its neighbour rather than hidden: the
proportion in the joined row is still worth reading, and no sum gives the parts away.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import replace
from math import sqrt
from statistics import NormalDist
from typing import TypeVar

from fourfold.report.disclosure.ledger import SMALL
from fourfold.report.disclosure.limit import Limit
from fourfold.results import tree

Row = TypeVar("Row", tree.CalibrationGroup, tree.QuantityBin)


def calibration(found: tree.Calibration, limit: Limit, confidence: float) -> tree.Calibration:
    """Join neighbouring groups of fitted risk until none has few events or few without."""

    def counts(group: tree.CalibrationGroup) -> tuple[int, int] | None:
        return (
            None if group.n is None or group.observed is None else (group.observed, group.n - group.observed)
        )

    def join(group: tree.CalibrationGroup, other: tree.CalibrationGroup) -> tree.CalibrationGroup:
        assert group.n is not None
        assert other.n is not None
        assert group.observed is not None
        assert other.observed is not None
        n, observed = group.n + other.n, group.observed + other.observed
        expected = _added(group.expected, other.expected)
        lower, upper = wilson(observed, n, confidence)
        return replace(
            group,
            n=n,
            observed=observed,
            expected=expected,
            mean_risk=None if expected is None else expected / n,
            proportion=observed / n,
            lower=lower,
            upper=upper,
            highest=other.highest,
        )

    joined = together(found.groups, counts, join, limit)
    if joined is None or len(joined) == len(found.groups):
        return found
    return replace(found, groups=joined, hidden={**found.hidden, "groups": SMALL})


def outcome_by_quantity(
    found: tree.OutcomeByQuantity, limit: Limit, confidence: float
) -> tree.OutcomeByQuantity:
    """Join neighbouring bins of a quantity until none has few events or few without."""

    def counts(one: tree.QuantityBin) -> tuple[int, int] | None:
        return None if one.events is None or one.total is None else (one.events, one.total - one.events)

    def join(one: tree.QuantityBin, other: tree.QuantityBin) -> tree.QuantityBin:
        assert one.events is not None
        assert one.total is not None
        assert other.events is not None
        assert other.total is not None
        events, total = one.events + other.events, one.total + other.total
        lower, upper = wilson(events, total, confidence) if total else (None, None)
        means = [(mean, n) for mean, n in ((one.mean, one.total), (other.mean, other.total)) if n]
        known = [(mean, n) for mean, n in means if mean is not None]
        return replace(
            one,
            upper=other.upper,
            events=events,
            total=total,
            mean=sum(mean * n for mean, n in known) / total if known and len(known) == len(means) else None,
            proportion=events / total if total else None,
            proportion_lower=lower,
            proportion_upper=upper,
        )

    joined = together(found.bins, counts, join, limit)
    if joined is None or len(joined) == len(found.bins):
        return found
    return replace(found, bins=joined, hidden={**found.hidden, "bins": SMALL})


def together(
    rows: Sequence[Row],
    counts: Callable[[Row], tuple[int, int] | None],
    join: Callable[[Row, Row], Row],
    limit: Limit,
) -> list[Row] | None:
    """Rows joined with neighbours until both counts of each may be shown; None if not all are known."""
    done: list[Row] = []
    for row in rows:
        if counts(row) is None:
            return None
        if done and not _open(counts(done[-1]), limit):
            done[-1] = join(done[-1], row)
        else:
            done.append(row)
    while len(done) > 1 and not _open(counts(done[-1]), limit):
        last = done.pop()
        done[-1] = join(done[-1], last)
    return done


def wilson(k: int, n: int, confidence: float) -> tuple[float, float]:
    """Wilson limits of a proportion, again for a joined row.

    References
    ----------
    Wilson (1927). J Am Stat Assoc 22, 209-212.
    """
    z = NormalDist().inv_cdf((1 + confidence / 100) / 2)
    centre, spread = k + z * z / 2, z * sqrt(k * (n - k) / n + z * z / 4)
    return max(0.0, (centre - spread) / (n + z * z)), min(1.0, (centre + spread) / (n + z * z))


def _open(counts: tuple[int, int] | None, limit: Limit) -> bool:
    return counts is not None and all(limit.open(count) for count in (*counts, sum(counts)))


def _added(one: float | None, other: float | None) -> float | None:
    return None if one is None or other is None else one + other
