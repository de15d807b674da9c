"""The Hosmer-Lemeshow test, its table, and when it may speak."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy.special import chdtrc

from fourfold.measures.proportion import wilson_limits
from fourfold.measures.tally import Tally, significant, tally
from fourfold.results import tree

Array = NDArray[np.float64]
Integers = NDArray[np.int64]

RULE = "cut at type-7 quantiles of fitted risk, upper ends included, equal risks kept together"
RULE_BY_SIZE = RULE + "; number of groups by the size of the sample"
FEWEST_GROUPS = 6
LARGE = 25_000


@dataclass(frozen=True, slots=True)
class _Grouping:
    people: Integers
    observed: Integers
    expected: Array
    lowest: Array
    highest: Array

    @property
    def groups(self) -> int:
        return int(self.people.size)

    def statistic(self) -> float:
        n, e = self.people, self.expected
        spread = e * (1 - e / n)
        gap = (self.observed - e) ** 2
        # Certain risks (0 or 1, under separation) add nothing where they are right.
        with np.errstate(divide="ignore", invalid="ignore"):
            parts = np.where((spread <= 0) & (gap == 0), 0.0, gap / spread)
        return float(parts.sum())


def groups_by_size(people: int, events: int) -> int:
    """Number of groups that keeps the power of the test steady as samples grow.

    10 up to 1,000 people; beyond, the rule of Paul, Pennell and Lemeshow, made for fewer than
    25,000.

    References
    ----------
    Paul, Pennell & Lemeshow (2013). Stat Med 32, 67-80.
    """
    if people <= 1_000:
        return 10
    most = 2 + 8 * (people / 1_000) ** 2
    return int(max(10, min(events / 2, (people - events) / 2, most)))


def hosmer_lemeshow(
    risk: Array,
    event: NDArray[np.bool_],
    groups: int | None = 10,
    new_data: bool = False,
    counts: Integers | None = None,
    confidence: float = 95.0,
) -> tuple[tree.HosmerLemeshow, list[tree.CalibrationGroup]]:
    """Compare observed with expected events in groups of fitted risk.

    Parameters
    ----------
    risk : (n,) float array
        Fitted risks, rounded here to 12 significant digits, so that equal patterns are tied.
    event : (n,) bool array
    groups : int or None
        None chooses by :func:`groups_by_size`, and ``rule`` says so if that is not 10.
    new_data : bool
        False on the data of the fit (df = groups - 2), True on other data (df = groups).
    counts : (n,) int array, optional
    confidence : float
        Of the Wilson interval of each observed proportion, in percent.

    Returns
    -------
    test, table
        ``test.verdict`` says why the result supports no verdict: ``few groups`` (fewer than
        six), ``thin groups`` (fewer than one event or non-event expected in some group) or
        ``large n`` (more than 25,000 people: differences too small to matter are found).

    References
    ----------
    Hosmer & Lemeshow (1980). Commun Stat A9, 1043-1069.
    """
    found = tally(significant(risk), event, counts)
    people = found.total
    rule = RULE
    if groups is None:
        groups = groups_by_size(people, int(found.events.sum()))
        rule = RULE_BY_SIZE if groups != 10 else RULE
    grouping = _grouped(found, groups)
    by_groups = [
        _row(grouping if number == groups else _grouped(found, number), new_data)
        for number in range(max(2, groups - 2), groups + 3)
    ]
    own = _row(grouping, new_data)
    test = tree.HosmerLemeshow(
        statistic=own.statistic,
        df=own.df if own.df > 0 else None,
        p_value=own.p_value,
        groups=own.groups,
        rule=rule,
        verdict=_verdict(grouping, people),
        by_groups=_distinct(by_groups),
    )
    return test, _table(grouping, confidence)


def _grouped(found: Tally, groups: int) -> _Grouping:
    starts = found.equal_groups(groups)
    ends = np.append(starts[1:], found.values.size) - 1
    return _Grouping(
        people=np.add.reduceat(found.people, starts),
        observed=np.add.reduceat(found.events, starts),
        expected=np.add.reduceat(found.people * found.values, starts),
        lowest=found.values[starts],
        highest=found.values[ends],
    )


def _row(grouping: _Grouping, new_data: bool) -> tree.HosmerLemeshowRow:
    df = grouping.groups - (0 if new_data else 2)
    statistic = grouping.statistic()
    finite = bool(np.isfinite(statistic))
    return tree.HosmerLemeshowRow(
        groups=grouping.groups,
        statistic=statistic if finite else None,
        df=df,
        p_value=float(chdtrc(df, statistic)) if df > 0 and finite else None,
    )


def _distinct(rows: list[tree.HosmerLemeshowRow]) -> list[tree.HosmerLemeshowRow]:
    """Drop repetitions: with many ties two requests can end in the same groups."""
    answer: list[tree.HosmerLemeshowRow] = []
    for row in rows:
        if row not in answer:
            answer.append(row)
    return answer


def _verdict(grouping: _Grouping, people: int) -> str | None:
    if grouping.groups < FEWEST_GROUPS:
        return "few groups"
    if min(grouping.expected.min(), (grouping.people - grouping.expected).min()) < 1:
        return "thin groups"
    return "large n" if people > LARGE else None


def _table(grouping: _Grouping, confidence: float) -> list[tree.CalibrationGroup]:
    lower, upper = wilson_limits(grouping.observed, grouping.people, confidence)
    return [
        tree.CalibrationGroup(
            n=int(n),
            expected=float(grouping.expected[g]),
            observed=int(grouping.observed[g]),
            mean_risk=float(grouping.expected[g] / n),
            proportion=float(grouping.observed[g] / n),
            lower=float(lower[g]),
            upper=float(upper[g]),
            lowest=float(grouping.lowest[g]),
            highest=float(grouping.highest[g]),
        )
        for g, n in enumerate(grouping.people)
    ]
