"""The numbers in findings, against published figures and counts by hand."""

from __future__ import annotations

import math
from typing import Any

import pytest
from tests.findings import alter, cases_design, cases_fit, cases_flow, cases_reading

from fourfold.findings.catalogue import CATALOGUE
from fourfold.results import tree


def values(id: str, results: tree.Results) -> dict[str, Any]:
    (finding,) = CATALOGUE[id].notice(results)
    return finding.values


@pytest.mark.parametrize(("baseline", "odds"), [(0.2, 8 / 3), (0.3, 3.5)])
def test_odds_ratio_becomes_the_risk_ratio_of_zhang_and_yu(baseline, odds):
    # Zhang & Yu 1998, JAMA 280:1690-1: a risk ratio of 2 at a baseline of 20% and 30% is an odds ratio of
    # 2.667 and 3.5.
    unexposed = (round(1800 * baseline), 1800 - round(1800 * baseline))
    (found,) = values("OR-not-risk", cases_reading.common(odds, unexposed))["found"]
    assert found["risks"] == pytest.approx(2.0)
    assert found["baseline"] == pytest.approx(100 * baseline)


def test_relative_standard_error_of_a_count():
    # 100 / sqrt(16) = 25 percent, as in reliability rules of health departments.
    assert values("SML-unreliable", alter.people(events=16, non_events=2984))["error"] == pytest.approx(25.0)


def test_false_alarms_expected_among_many_exposures():
    # 20 intervals of 95%: one leaves 1 out by chance; of 90%: two.
    results = alter.exposures(20)
    assert values("MUL-many", results)["expected"] == pytest.approx(1.0)
    at_90 = alter.analysis(confidence=90.0).analysis
    assert values("MUL-many", tree_with(results, analysis=at_90))["expected"] == pytest.approx(2.0)


def tree_with(results: tree.Results, **parts: Any) -> tree.Results:
    from dataclasses import replace

    return replace(results, **parts)


def test_wald_p_against_the_normal_table():
    # Two-sided P of z = 2.5 is 0.01242 (table of the normal distribution).
    (found,) = values("EST-hauck-donner", cases_fit.strong(4.0, 1.6, 0.001))["found"]
    assert found["wald_p"] == pytest.approx(0.01242, abs=5e-6)


def test_wald_limits_beside_the_profile():
    (found,) = values("EST-wald-profile-differ", cases_fit.limits(1.0, 0.5, -0.3, 1.98))["found"]
    assert found["wald_lower"] == pytest.approx(math.exp(1 - 1.959964 * 0.5), rel=1e-6)
    assert found["wald_upper"] == pytest.approx(math.exp(1 + 1.959964 * 0.5), rel=1e-6)
    assert found["lower"] == pytest.approx(math.exp(-0.3))


def test_separation_names_the_group_without_events_or_without_others():
    exposed = cases_fit.separated("stove", "separated upward", 40, 40, lower=7.5)
    (found,) = values("SEP-infinite", exposed)["found"]
    assert (found["group"], found["lacks"], found["total"]) == ("yes", "others", 40)
    assert (found["direction"], found["bound"]) == ("upward", 7.5)
    (found,) = values("SEP-infinite", cases_fit.unexposed_without_event())["found"]
    # 0 events and 1,630 others without a stove.
    assert (found["group"], found["lacks"], found["total"]) == ("no", "events", 1630)
    (found,) = values("SEP-infinite", cases_fit.settled_curve())["found"]
    assert (found["group"], found["lacks"], found["direction"]) == (None, None, None)


def test_flow_says_what_is_stated_and_what_the_other_boxes_give():
    steps = values("FLW-adds", alter.people(analysed=2999))["steps"]
    # 3,000 eligible less 0 incomplete; 2,999 analysed less 2,640 without the event; 3,000 in the model.
    assert [(one["step"], one["stated"], one["computed"]) for one in steps] == [
        ("analysed", 2999, 3000),
        ("events", 360, 359),
        ("model", 3000, 2999),
    ]


def test_share_lost():
    assert values("MIS-dropped", cases_flow.lost(601))["share"] == pytest.approx(100 * 601 / 3000)


def test_only_what_was_not_adjusted_for_is_named_as_missing():
    found = values("DSN-matching-ignored", alter.analysis(matched_on=["Age", "sex"]))
    assert found["missing"] == ["sex"]


def test_the_checklist_follows_the_purpose():
    bare = alter.study(stated={})
    assert values("REP-checklist", bare)["standard"] == "STROBE"
    assert values("REP-checklist", alter.prediction(bare))["standard"] == "TRIPOD+AI"


def test_the_smallest_expected_count_is_of_events_or_of_others():
    # 300 people and 296 events expected: 4 others.
    assert values("CAL-hl-thin", cases_reading.thin(296.0, None))["smallest"] == pytest.approx(4.0)


def test_exposures_of_a_study_are_those_that_follow_up_may_favour():
    assert values("DSN-immortal-time", alter.analysis(exposure_measured="during follow-up"))["names"] == [
        "stove"
    ]
    assert "lower" in values("DSN-follow-up-varies", cases_design.watched(120.0, 365.0))
