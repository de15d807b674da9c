"""Coverage of the intervals by simulation: a campaign, run on purpose.

2,000 repetitions; the standard error of an observed coverage of 95% is then 0.49 percentage
points. Profile-likelihood intervals must lie within four of them of 95%.
"""

from __future__ import annotations

import math

import numpy as np
import pytest

from fourfold.measures.fourfold_table import odds_ratio
from fourfold.models import logistic, profile
from fourfold.models.blocks import Blocks
from fourfold.models.separation import detect

REPETITIONS = 2000
STANDARD_ERROR = math.sqrt(0.95 * 0.05 / REPETITIONS)

SCENARIOS = {
    "200 rows, 30% events, 4 terms": (200, -0.9, [0.7, -0.4, 0.3, 0.0]),
    "500 rows, 10% events, 4 terms": (500, -2.4, [0.7, -0.4, 0.3, 0.0]),
    "1,000 rows, 20% events, 8 terms": (1000, -1.5, [0.7, -0.4, 0.3, 0.0, 0.2, -0.2, 0.1, 0.5]),
}


@pytest.mark.campaign
@pytest.mark.parametrize("name", SCENARIOS)
def test_coverage_of_profile_and_wald_intervals(name, capsys):
    n, intercept, slopes = SCENARIOS[name]
    draw = np.random.default_rng(20260101)
    truth = np.array(slopes)
    profile_holds, wald_holds = np.zeros(truth.size), np.zeros(truth.size)
    separated = 0
    columns = list(range(1, truth.size + 1))
    for _ in range(REPETITIONS):
        x = draw.normal(size=(n, truth.size))
        x[:, 0] = draw.random(n) < 0.35
        event = draw.random(n) < 1 / (1 + np.exp(-(intercept + x @ truth)))
        blocks = Blocks.from_matrix(np.column_stack([np.ones(n), x]))
        if detect(blocks, event).kind is not None:
            separated += 1
            continue
        fit = logistic.fit(blocks, event)
        limits = profile.profile_limits(blocks, event, fit, columns)
        profile_holds += (limits.lower <= truth) & (truth <= limits.upper)
        half = 1.959963984540054 * np.sqrt(np.diag(fit.covariance)[1:])
        wald_holds += np.abs(fit.coefficients[1:] - truth) <= half
    used = REPETITIONS - separated
    by_profile, by_wald = (100 * holds / used for holds in (profile_holds, wald_holds))
    with capsys.disabled():
        print(
            f"\n{name}: profile {by_profile.min():.1f} to {by_profile.max():.1f}%, "
            f"Wald {by_wald.min():.1f} to {by_wald.max():.1f}%, separated {separated}"
        )
    coverage = profile_holds / used
    assert np.abs(coverage - 0.95).max() < 4 * STANDARD_ERROR


@pytest.mark.campaign
def test_coverage_of_the_fourfold_odds_ratio(capsys):
    draw = np.random.default_rng(20260102)
    exposed, unexposed, risk_1, risk_0 = 120, 180, 0.30, 0.18
    truth = risk_1 / (1 - risk_1) / (risk_0 / (1 - risk_0))
    holds = 0
    for _ in range(REPETITIONS):
        a, c = int(draw.binomial(exposed, risk_1)), int(draw.binomial(unexposed, risk_0))
        found = odds_ratio(a, exposed - a, c, unexposed - c)
        assert found.lower is not None
        assert found.upper is not None
        holds += found.lower <= truth <= found.upper
    with capsys.disabled():
        print(f"\nWoolf, 120 and 180 people: {100 * holds / REPETITIONS:.1f}%")
    # Woolf's interval is slightly conservative at these sizes (common practice).
    assert 0.95 - 4 * STANDARD_ERROR < holds / REPETITIONS < 0.985
