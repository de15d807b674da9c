"""The fourfold table against R's worked cases, SciPy, and what must not change under swaps."""

from __future__ import annotations

import csv
import json
import math
from pathlib import Path
from typing import Any

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy import stats

from fourfold.measures.conversion import risk_ratio_from_odds_ratio
from fourfold.measures.fourfold_table import fourfold_table
from fourfold.measures.hypergeometric import conditional_limits, fisher
from fourfold.results import tree

REFERENCE = Path(__file__).parents[1] / "reference"


def read(name: str) -> Any:
    return json.loads((REFERENCE / name).read_text(encoding="utf-8"))


def limits(interval: tree.Interval | None) -> tuple[float | None, float | None]:
    assert interval is not None
    return interval.lower, interval.upper


def cells_of_birthwt(stratum: str | None = None) -> tuple[int, int, int, int]:
    with (REFERENCE / "birthwt.csv").open(encoding="utf-8", newline="") as file:
        rows = [row for row in csv.DictReader(file) if stratum in (None, row["race"])]
    count = {
        (smoke, low): sum(row["smoke"] == smoke and row["low"] == low for row in rows)
        for smoke in ("yes", "no")
        for low in ("yes", "no")
    }
    return count["yes", "yes"], count["yes", "no"], count["no", "yes"], count["no", "no"]


def test_smoking_and_low_birth_weight():
    # Base R 4.2.2: birthwt.json, fourfold_smoke.
    expected = read("birthwt.json")["fourfold_smoke"]
    found = fourfold_table(*cells_of_birthwt())
    assert (found.a, found.b, found.c, found.d) == (30, 44, 29, 86)
    assert found.odds_ratio is not None
    assert found.risk_ratio is not None
    assert found.risk_difference is not None
    assert found.odds_ratio.estimate == pytest.approx(expected["odds_ratio"], rel=1e-12)
    assert limits(found.odds_ratio) == pytest.approx(expected["woolf_interval"], rel=1e-12)
    assert found.risk_ratio.estimate == pytest.approx(expected["risk_ratio"], rel=1e-12)
    assert limits(found.risk_ratio) == pytest.approx(expected["risk_ratio_interval"], rel=1e-12)
    assert found.risk_difference.estimate == pytest.approx(expected["risk_difference"], rel=1e-12)
    assert limits(found.risk_difference) == pytest.approx(expected["risk_difference_newcombe"], rel=1e-12)
    for side in ("exposed", "unexposed"):
        risk = getattr(found, f"risk_{side}")
        assert risk.estimate == pytest.approx(expected[f"risk_{side}"], rel=1e-12)
        assert limits(risk) == pytest.approx(expected[f"risk_{side}_wilson"], rel=1e-12)
    assert found.chi_squared == pytest.approx(expected["chi_squared"], rel=1e-12)
    assert found.chi_squared_p == pytest.approx(expected["chi_squared_p"], rel=1e-10)
    assert found.fisher_p == pytest.approx(expected["fisher_p"], rel=1e-10)
    assert found.note is None


def test_smoking_by_race_as_printed():
    # Hosmer & Lemeshow, Applied Logistic Regression, 2nd ed. 2000, stratified analysis (from
    # memory), in published-values.json: crude 2.02, white 5.76, black 3.30, other 1.25.
    case = next(
        v for v in read("published-values.json")["values"] if v["id"] == "birth-weight-smoking-by-race"
    )
    for name, stratum in (("crude", None), ("white", "white"), ("black", "black"), ("other", "other")):
        found = fourfold_table(*cells_of_birthwt(stratum)).odds_ratio
        assert found is not None
        assert found.estimate == pytest.approx(case["printed"][name], abs=5.1e-3)
        assert found.estimate == pytest.approx(case["computed"][name], rel=1e-12)


def test_worked_check_of_the_methods():
    # Computed in base R 4.2.2 and SciPy 1.17: 12, 28, 5, 55.
    found = fourfold_table(12, 28, 5, 55)
    assert found.odds_ratio is not None
    assert found.odds_ratio.estimate == pytest.approx(4.714286, abs=5e-7)
    assert limits(found.odds_ratio) == pytest.approx((1.510465, 14.713672), abs=5e-7)
    assert found.risk_ratio is not None
    assert found.risk_ratio.estimate == pytest.approx(3.6)
    assert limits(found.risk_ratio) == pytest.approx((1.373584, 9.435172), abs=5e-7)
    assert limits(found.risk_difference) == pytest.approx((0.062721, 0.378028), abs=5e-7)
    assert found.chi_squared == pytest.approx(7.984881, abs=5e-7)
    assert found.fisher_p == pytest.approx(0.006559453, abs=5e-10)
    assert found.smallest_expected == pytest.approx(40 * 17 / 100)


def test_zero_cell_has_no_woolf_interval():
    # Base R 4.2.2: separated.json, fourfold_exposed. R finds exact limits with a coarse
    # root-finder, hence 1e-3; SciPy's below is compared closely.
    expected = read("separated.json")["fourfold_exposed"]
    found = fourfold_table(7, 5, 0, 8)
    assert found.note == "zero cell"
    assert found.odds_ratio is not None
    assert found.odds_ratio.estimate is None
    assert found.odds_ratio.method == "conditional exact"
    assert found.odds_ratio.upper is None
    assert found.odds_ratio.lower == pytest.approx(expected["conditional_exact_interval"][0], rel=1e-3)
    theirs = stats.contingency.odds_ratio([[7, 5], [0, 8]]).confidence_interval(0.95)
    assert found.odds_ratio.lower == pytest.approx(theirs.low, rel=1e-9)
    assert found.risk_ratio is not None
    assert found.risk_ratio.estimate is None
    assert limits(found.risk_exposed) == pytest.approx(expected["risk_exposed_wilson"], rel=1e-12)
    assert limits(found.risk_unexposed) == pytest.approx(expected["risk_unexposed_wilson"], rel=1e-12)
    assert limits(found.risk_difference) == pytest.approx(expected["risk_difference_newcombe"], rel=1e-12)
    assert found.chi_squared == pytest.approx(expected["chi_squared"], rel=1e-12)
    assert found.chi_squared_p == pytest.approx(expected["chi_squared_p"], rel=1e-10)
    assert found.fisher_p == pytest.approx(expected["fisher_p"], rel=1e-10)


def test_zero_exposed_events_has_an_upper_limit_only():
    # The same table with rows exchanged: the limit is the reciprocal.
    found, turned = fourfold_table(0, 8, 7, 5).odds_ratio, fourfold_table(7, 5, 0, 8).odds_ratio
    assert found is not None
    assert turned is not None
    assert found.lower is None
    assert found.upper is not None
    assert turned.lower is not None
    assert found.upper == pytest.approx(1 / turned.lower, rel=1e-10)


@pytest.mark.parametrize("cells", [(0, 0, 4, 6), (4, 6, 0, 0), (0, 5, 0, 7), (5, 0, 7, 0)])
def test_empty_margin_has_no_association(cells: tuple[int, int, int, int]):
    found = fourfold_table(*cells)
    assert found.note == "empty margin"
    assert found.odds_ratio is None
    assert found.risk_ratio is None
    assert found.chi_squared is None
    assert found.fisher_p is None
    assert found.smallest_expected == 0


def test_case_control_has_the_odds_ratio_alone():
    found = fourfold_table(12, 28, 5, 55, "case-control")
    assert found.odds_ratio is not None
    assert found.risk_exposed is None
    assert found.risk_unexposed is None
    assert found.risk_ratio is None
    assert found.risk_difference is None
    assert found.fisher_p is not None


@pytest.mark.parametrize("seed", range(50))
def test_against_scipy(seed: int):
    # scipy.stats.fisher_exact, chi2_contingency(correction=False), contingency.relative_risk
    # and contingency.odds_ratio(kind="conditional").
    rng = np.random.default_rng(seed)
    a, b, c, d = (int(v) for v in rng.integers(1, rng.choice([8, 60, 400]), 4))
    table = np.array([[a, b], [c, d]])
    found = fourfold_table(a, b, c, d)
    assert found.fisher_p == pytest.approx(stats.fisher_exact(table).pvalue, rel=1e-8)
    chi = stats.chi2_contingency(table, correction=False)
    assert found.chi_squared == pytest.approx(chi.statistic, rel=1e-10, abs=1e-12)
    assert found.chi_squared_p == pytest.approx(chi.pvalue, rel=1e-9)
    assert found.smallest_expected == pytest.approx(chi.expected_freq.min())
    ratio = stats.contingency.relative_risk(a, a + b, c, c + d)
    theirs = ratio.confidence_interval(0.95)
    assert found.risk_ratio is not None
    assert found.risk_ratio.estimate == pytest.approx(ratio.relative_risk, rel=1e-12)
    assert limits(found.risk_ratio) == pytest.approx((theirs.low, theirs.high), rel=1e-10)
    exact = stats.contingency.odds_ratio(table).confidence_interval(0.95)
    assert conditional_limits(a, b, c, d) == pytest.approx((exact.low, exact.high), rel=1e-7)


def test_fisher_counts_equally_likely_tables():
    # Symmetric margins: the mirrored table is exactly as likely; scipy.stats.fisher_exact.
    assert fisher(2, 8, 8, 2) == pytest.approx(stats.fisher_exact([[2, 8], [8, 2]]).pvalue, rel=1e-12)
    assert fisher(5, 5, 5, 5) == pytest.approx(1.0)


def test_fisher_of_large_tables():
    # The two-sided P of a large table nears that of the uncorrected chi-squared test.
    found = fourfold_table(500_300, 1_499_700, 499_000, 1_501_000)
    assert found.fisher_p == pytest.approx(found.chi_squared_p, rel=5e-3)
    extreme = fourfold_table(900_000, 100_000, 100_000, 900_000)
    assert extreme.fisher_p == 0.0
    assert extreme.chi_squared_p == 0.0


CELL = st.integers(1, 300)


@given(CELL, CELL, CELL, CELL)
def test_swaps(a: int, b: int, c: int, d: int):
    # Property: turning exposure round inverts odds ratio and risk ratio and negates the
    # difference; turning the outcome round inverts the odds ratio; tests do not change.
    found, rows, columns = (
        fourfold_table(a, b, c, d),
        fourfold_table(c, d, a, b),
        fourfold_table(b, a, d, c),
    )
    for turned in (rows, columns):
        assert turned.chi_squared == pytest.approx(found.chi_squared, rel=1e-12, abs=1e-12)
        assert turned.fisher_p == pytest.approx(found.fisher_p, rel=1e-9)
        assert turned.odds_ratio is not None
        assert found.odds_ratio is not None
        assert turned.odds_ratio.estimate == pytest.approx(1 / found.odds_ratio.estimate, rel=1e-12)
        assert turned.odds_ratio.lower == pytest.approx(1 / found.odds_ratio.upper, rel=1e-12)
    assert rows.risk_ratio is not None
    assert found.risk_ratio is not None
    assert rows.risk_ratio.upper == pytest.approx(1 / found.risk_ratio.lower, rel=1e-12)
    assert rows.risk_difference is not None
    assert found.risk_difference is not None
    assert rows.risk_difference.lower == pytest.approx(-found.risk_difference.upper, abs=1e-12)


@given(CELL, CELL, CELL, CELL)
def test_doubling_every_count(a: int, b: int, c: int, d: int):
    # Property: the odds ratio stays, its log variance halves.
    once, twice = fourfold_table(a, b, c, d).odds_ratio, fourfold_table(2 * a, 2 * b, 2 * c, 2 * d).odds_ratio
    assert once is not None
    assert twice is not None
    assert twice.estimate == pytest.approx(once.estimate, rel=1e-12)
    width = [math.log(each.upper / each.lower) for each in (once, twice)]
    assert width[1] ** 2 == pytest.approx(width[0] ** 2 / 2, rel=1e-9)


@pytest.mark.parametrize(("baseline", "odds"), [(0.1, 2.25), (0.2, 8 / 3), (0.3, 3.5)])
def test_conversion_of_an_odds_ratio(baseline: float, odds: float):
    # Zhang & Yu 1998: risk ratio 2 at baseline .1, .2, .3 is odds ratio 2.25, 2.667, 3.5.
    assert risk_ratio_from_odds_ratio(odds, baseline) == pytest.approx(2.0)


def test_conversion_refuses_nonsense():
    with pytest.raises(ValueError, match="between 0 and 1"):
        risk_ratio_from_odds_ratio(2.0, 1.2)
