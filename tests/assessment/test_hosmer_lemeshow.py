"""Hosmer-Lemeshow: R's cases, the rule for its groups, and when it says nothing."""

from __future__ import annotations

from typing import Any

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from hypothesis.extra import numpy as hnp
from scipy.stats import chi2

from fourfold.assessment.hosmer_lemeshow import RULE, RULE_BY_SIZE, groups_by_size, hosmer_lemeshow
from fourfold.measures.proportion import wilson


def agrees(expected: dict[str, Any], risk: np.ndarray, event: np.ndarray, new_data: bool) -> None:
    test, table = hosmer_lemeshow(risk, event, expected["groups"], new_data)
    assert test.statistic == pytest.approx(expected["statistic"], rel=1e-9)
    assert test.df == expected["df"]
    assert test.p_value == pytest.approx(expected["p_value"], rel=1e-8)
    assert test.groups == len(table) == len(expected["table"])
    for mine, theirs in zip(table, expected["table"], strict=True):
        assert (mine.n, mine.observed) == (theirs["n"], theirs["observed"])
        assert mine.expected == pytest.approx(theirs["expected"], rel=1e-10)


def test_fitting_data(fitted: Any):
    # Base R 4.2.2: hosmer_lemeshow of birthwt.json and bacteria.json, on groups - 2 df.
    agrees(fitted.expected["hosmer_lemeshow"], fitted.risk, fitted.event, new_data=False)


def test_new_data(equation: Any):
    # Base R 4.2.2: equation.json, on as many df as groups.
    agrees(equation.expected["hosmer_lemeshow"], equation.risk, equation.event, new_data=True)


def test_other_numbers_of_groups(birthwt: Any):
    # Base R 4.2.2: hosmer_lemeshow_by_groups of birthwt.json (5, 8, 10, 12).
    for row in birthwt.expected["hosmer_lemeshow_by_groups"]:
        test, _ = hosmer_lemeshow(birthwt.risk, birthwt.event, row["groups"])
        assert test.statistic == pytest.approx(row["statistic"], rel=1e-9)
        assert test.df == row["df"]
        assert test.p_value == pytest.approx(row["p_value"], rel=1e-8)
    around = hosmer_lemeshow(birthwt.risk, birthwt.event)[0].by_groups
    assert [row.groups for row in around] == [8, 9, 10, 11, 12]
    by_r = {row["groups"]: row["statistic"] for row in birthwt.expected["hosmer_lemeshow_by_groups"]}
    for row in around:
        if row.groups in by_r:
            assert row.statistic == pytest.approx(by_r[row.groups], rel=1e-9)


def test_statistic_by_hand():
    # Two groups of four: (O-E)^2 / (E (1 - E/n)) = 1/1.5 twice over... worked on paper:
    # E = 1, n = 4, O = 2: 1/.75; E = 3, n = 4, O = 3: 0.
    risk = np.repeat([0.25, 0.75], 4)
    event = np.array([1, 1, 0, 0, 1, 1, 1, 0], dtype=bool)
    test, table = hosmer_lemeshow(risk, event, 2, new_data=True)
    assert test.statistic == pytest.approx(1 / 0.75)
    assert test.df == 2
    assert test.p_value == pytest.approx(chi2.sf(1 / 0.75, 2))
    assert [group.observed for group in table] == [2, 3]


def test_groups_carry_wilson_intervals(birthwt: Any):
    _, table = hosmer_lemeshow(birthwt.risk, birthwt.event, confidence=90)
    for group in table:
        interval = wilson(group.observed, group.n, 90)
        assert (group.lower, group.upper) == (interval.lower, interval.upper)
        assert group.proportion == group.observed / group.n
        assert group.mean_risk == pytest.approx(group.expected / group.n)
        inside = (birthwt.risk >= group.lowest - 1e-9) & (birthwt.risk <= group.highest + 1e-9)
        assert inside.sum() == group.n


def test_equal_patterns_stay_together_whatever_their_last_bits(birthwt: Any):
    # The convention: 12 significant digits. Noise below them must change nothing.
    noise = 1 + 1e-15 * np.random.default_rng(1).normal(size=birthwt.risk.size)
    assert hosmer_lemeshow(birthwt.risk * noise, birthwt.event) == hosmer_lemeshow(
        birthwt.risk, birthwt.event
    )


def test_number_of_groups_by_size():
    # Paul, Pennell & Lemeshow 2013: n 4,000 with 400 events gives 130 (formula worked in base R).
    assert groups_by_size(4_000, 400) == 130
    assert groups_by_size(1_000, 300) == 10
    assert groups_by_size(4_000, 30) == 15
    assert groups_by_size(4_000, 3_990) == 10
    assert groups_by_size(2_000, 1_000) == 34


def test_rule_is_stated_when_size_chooses():
    rng = np.random.default_rng(2)
    risk = rng.uniform(0.05, 0.6, 2_000)
    event = rng.random(2_000) < risk
    chosen, _ = hosmer_lemeshow(risk, event, None)
    assert chosen.groups == 34
    assert chosen.rule == RULE_BY_SIZE
    asked, _ = hosmer_lemeshow(risk, event, 10)
    assert asked.groups == 10
    assert asked.rule == RULE
    assert chosen.verdict is None


def test_few_groups_give_no_verdict():
    risk = np.repeat([0.2, 0.4, 0.6], 50)
    event = np.tile(np.arange(50) < 20, 3)
    test, table = hosmer_lemeshow(risk, event)
    assert len(table) == 3
    assert test.verdict == "few groups"
    assert test.df == 1
    assert [row.groups for row in test.by_groups] == [3]


def test_two_patterns_leave_no_degree_of_freedom():
    risk = np.repeat([0.2, 0.6], 50)
    test, _ = hosmer_lemeshow(risk, np.tile(np.arange(50) < 20, 2))
    assert test.df is None
    assert test.p_value is None


def test_thin_groups_give_no_verdict():
    risk = np.linspace(0.001, 0.9, 100)
    event = np.random.default_rng(4).random(100) < risk
    test, table = hosmer_lemeshow(risk, event)
    assert table[0].expected < 1
    assert test.verdict == "thin groups"


def test_large_samples_give_no_verdict():
    rng = np.random.default_rng(6)
    risk = rng.uniform(0.1, 0.9, 25_001)
    test, _ = hosmer_lemeshow(risk, rng.random(risk.size) < risk)
    assert test.verdict == "large n"
    assert hosmer_lemeshow(risk[:25_000], rng.random(25_000) < 0.4)[0].verdict is None


def test_certain_risks_that_are_right_add_nothing():
    # Under separation some fitted risks are 0 or 1 exactly.
    middle = np.linspace(0.2, 0.8, 180)
    risk = np.concatenate([np.zeros(20), middle, np.ones(20)])
    event = np.concatenate(
        [np.zeros(20, bool), np.random.default_rng(1).random(180) < middle, np.ones(20, bool)]
    )
    test, _ = hosmer_lemeshow(risk, event, 11)
    assert np.isfinite(test.statistic)
    assert test.verdict == "thin groups"
    wrong = event.copy()
    wrong[0] = True
    assert hosmer_lemeshow(risk, wrong, 11)[0].statistic is None


@given(
    hnp.arrays(np.int64, st.integers(10, 120), elements=st.integers(1, 40)),
    st.integers(2, 12),
    st.data(),
)
@settings(max_examples=60)
def test_totals_add_up(values: np.ndarray, groups: int, data: st.DataObject):
    # Properties: groups add to everybody; counts are repeated rows.
    event = data.draw(hnp.arrays(np.bool_, values.size))
    counts = data.draw(hnp.arrays(np.int64, values.size, elements=st.integers(1, 3)))
    risk = values / 41
    test, table = hosmer_lemeshow(risk, event, groups, counts=counts)
    assert sum(group.n for group in table) == counts.sum()
    assert sum(group.observed for group in table) == counts[event].sum()
    assert sum(group.expected for group in table) == pytest.approx(counts @ risk, rel=1e-10)
    again = hosmer_lemeshow(np.repeat(risk, counts), np.repeat(event, counts), groups)
    assert again[0].statistic == pytest.approx(test.statistic, rel=1e-9, abs=1e-12)
    assert [g.n for g in again[1]] == [g.n for g in table]
