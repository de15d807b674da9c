"""Area under the ROC curve against R, scikit-learn, SciPy, and its own definition."""

from __future__ import annotations

import csv
import json
from pathlib import Path
from typing import Any

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from hypothesis.extra import numpy as hnp
from scipy import stats
from sklearn.metrics import roc_auc_score, roc_curve

from fourfold.assessment import discrimination as module
from fourfold.assessment.discrimination import auc, discrimination
from fourfold.errors import EstimationError

REFERENCE = Path(__file__).parents[1] / "reference"


def delong_by_pairs(score: np.ndarray, event: np.ndarray) -> tuple[float, float]:
    """Area and standard error from every pair, as DeLong et al. 1988 define them."""
    x, y = score[event][:, None], score[~event][None, :]
    kernel = (x > y) + 0.5 * (x == y)
    v10, v01 = kernel.mean(axis=1), kernel.mean(axis=0)
    variance = v10.var(ddof=1) / v10.size + v01.var(ddof=1) / v01.size
    return float(kernel.mean()), float(np.sqrt(variance))


def drawn(seed: int, n: int = 300, ties: bool = True) -> tuple[np.ndarray, np.ndarray]:
    rng = np.random.default_rng(seed)
    event = rng.random(n) < rng.choice([0.1, 0.3, 0.5, 0.8])
    event[:2], event[2:4] = True, False
    score = rng.normal(size=n) + event * rng.uniform(-0.5, 2)
    return (np.round(score, 1) if ties else score), event


def test_area_of_the_fitted_models(fitted: Any):
    # Base R 4.2.2, agreed by NumPy: discrimination of birthwt.json and bacteria.json.
    expected = fitted.expected["discrimination"]
    found = discrimination(fitted.log_odds, fitted.event)
    assert found.auc == pytest.approx(expected["auc"], rel=1e-12)
    assert found.standard_error == pytest.approx(expected["standard_error"], rel=1e-10)
    assert (found.lower, found.upper) == pytest.approx(expected["logit_interval"], rel=1e-10)
    assert found.method == "DeLong, logit scale"


def test_area_of_an_equation_on_new_data(equation: Any):
    # Base R 4.2.2: equation.json.
    expected = equation.expected["discrimination"]
    found = discrimination(equation.risk, equation.event)
    assert found.auc == pytest.approx(expected["auc"], rel=1e-12)
    assert found.standard_error == pytest.approx(expected["standard_error"], rel=1e-10)
    assert (found.lower, found.upper) == pytest.approx(expected["logit_interval"], rel=1e-10)


def test_area_of_each_completed_copy():
    # Base R 4.2.2: incomplete.json, five completed copies with their fits.
    expected = json.loads((REFERENCE / "incomplete.json").read_text())["per_imputation"]
    with (REFERENCE / "incomplete-completed.csv").open(newline="") as file:
        rows = list(csv.DictReader(file))
    for copy, coefficients in enumerate(expected["coefficients"]):
        mine = [row for row in rows if row["imputation"] == str(copy + 1)]
        X = np.array(
            [
                [1, float(r["age"]), float(r["lwt"]), r["race"] == "black", r["race"] == "other"]
                + [r[name] == "yes" for name in ("smoke", "ht", "ui")]
                for r in mine
            ],
            dtype=float,
        )
        found = discrimination(X @ coefficients, np.array([r["low"] == "yes" for r in mine]))
        assert found.auc == pytest.approx(expected["auc"][copy], rel=1e-10)
        assert found.standard_error == pytest.approx(expected["auc_standard_error"][copy], rel=1e-10)


def test_interval_on_the_logit():
    # Computed in base R 4.2.2: A .80, se .035 gives .722631 to .859969. Scores with
    # exactly that area; the error is put in its place.
    class Fixed:
        estimate, standard_error, events, non_events = 0.8, 0.035, 50, 100

    with pytest.MonkeyPatch.context() as patch:
        patch.setattr(module, "auc", lambda *_: Fixed)
        found = discrimination(np.array([0.2, 0.4]), np.array([True, False]))
    assert (found.lower, found.upper) == pytest.approx((0.722631, 0.859969), abs=5e-7)


@pytest.mark.parametrize("engine", ["numpy", "compiled"])
@pytest.mark.parametrize("ties", [True, False])
@pytest.mark.parametrize("seed", range(50))
def test_area_against_other_libraries(seed: int, ties: bool, engine: str):
    # sklearn.metrics.roc_auc_score, scipy.stats.mannwhitneyu, and DeLong's kernel over all pairs.
    score, event = drawn(seed, ties=ties)
    found = auc(score, event, engine=engine)
    assert found.estimate == pytest.approx(roc_auc_score(event, score), rel=1e-12)
    u = stats.mannwhitneyu(score[event], score[~event]).statistic
    assert found.estimate == pytest.approx(u / (found.events * found.non_events), rel=1e-12)
    area, error = delong_by_pairs(score, event)
    assert found.estimate == pytest.approx(area, rel=1e-12)
    assert found.standard_error == pytest.approx(error, rel=1e-10)


@pytest.mark.parametrize("seed", range(10))
def test_counts_are_people(seed: int):
    # Property: as the repeated rows; sklearn with sample weights for the area.
    score, event = drawn(seed)
    counts = np.random.default_rng(seed).integers(0, 5, score.size)
    counts[:4] = 2
    found = auc(score, event, counts)
    repeated = auc(np.repeat(score, counts), np.repeat(event, counts))
    assert found.estimate == pytest.approx(repeated.estimate, rel=1e-12)
    assert found.standard_error == pytest.approx(repeated.standard_error, rel=1e-10)
    assert (found.events, found.non_events) == (repeated.events, repeated.non_events)
    assert found.estimate == pytest.approx(roc_auc_score(event, score, sample_weight=counts), rel=1e-12)


def test_engines_agree_on_long_data():
    # The compiled merge and NumPy's ranks, to rounding; infinite scores are scores.
    rng = np.random.default_rng(0)
    event = rng.random(300_000) < 0.2
    score = rng.normal(size=event.size) + event
    score[:50], score[50:70] = np.inf, -np.inf
    for each in (score, np.round(score, 2)):
        one, other = auc(each, event, engine="numpy"), auc(each, event, engine="compiled")
        assert one.estimate == pytest.approx(other.estimate, rel=1e-12)
        assert one.standard_error == pytest.approx(other.standard_error, rel=1e-11)


SCORES = hnp.arrays(np.int64, st.integers(4, 60), elements=st.integers(-6, 6))


@given(SCORES, st.data())
def test_area_is_mann_whitney_and_turns_over(score: np.ndarray, data: st.DataObject):
    # Properties: the area is the Mann-Whitney statistic; of the negated score it is 1 - A, with
    # the same error; any increasing change of scale leaves both.
    event = data.draw(hnp.arrays(np.bool_, score.size))
    event[:2], event[2:4] = True, False
    for engine in ("numpy", "compiled"):
        found = auc(score.astype(float), event, engine=engine)
        area, error = delong_by_pairs(score, event)
        assert found.estimate == pytest.approx(area, abs=1e-13)
        assert found.standard_error == pytest.approx(error, abs=1e-9)
        turned = auc(-score.astype(float), event, engine=engine)
        assert turned.estimate == pytest.approx(1 - area, abs=1e-13)
        assert turned.standard_error == pytest.approx(found.standard_error, abs=1e-9)
        stretched = auc(np.exp(score / 3.0), event, engine=engine)
        assert stretched.estimate == found.estimate


def test_all_pairs_ordered_has_a_one_sided_bound():
    # By hand: ten disjoint pairs are all ordered with probability A^10 at most; .05 = A^10 at the bound.
    score, event = np.arange(30.0), np.arange(30) >= 20
    found = discrimination(score, event)
    assert found.auc == 1.0
    assert found.lower == pytest.approx(0.05**0.1)
    assert found.upper is None
    assert found.method == "all pairs ordered, one-sided bound"
    turned = discrimination(-score, event)
    assert turned.auc == 0.0
    assert turned.lower is None
    assert turned.upper == pytest.approx(1 - 0.05**0.1)


def test_a_single_event_has_no_interval():
    found = discrimination(np.arange(10.0), np.arange(10) == 6)
    assert found.auc == pytest.approx(6 / 9)
    assert found.standard_error is None
    assert found.lower is None


@pytest.mark.parametrize("event", [np.zeros(5, dtype=bool), np.ones(5, dtype=bool)])
def test_no_contrast_is_an_error(event: np.ndarray):
    with pytest.raises(EstimationError, match="cannot be measured"):
        auc(np.arange(5.0), event)
    with pytest.raises(EstimationError, match="cannot be measured"):
        auc(np.arange(5.0), event, np.ones(5, dtype=np.int64))


def test_curve_has_every_corner():
    # sklearn.metrics.roc_curve without dropping points.
    score, event = drawn(7, n=150)
    found = discrimination(score, event).curve
    fpr, tpr, _ = roc_curve(event, score, drop_intermediate=False)
    assert [1 - p.specificity for p in found] == pytest.approx(fpr, abs=1e-12)
    assert [p.sensitivity for p in found] == pytest.approx(tpr, abs=1e-12)


def test_thinned_curve_keeps_true_points():
    score, event = drawn(9, n=4_000, ties=False)
    found = discrimination(score, event).curve
    fpr, tpr, _ = roc_curve(event, score, drop_intermediate=False)
    true = set(zip(np.round(fpr, 12), np.round(tpr, 12), strict=True))
    assert 100 < len(found) <= 201
    assert all((round(1 - p.specificity, 12), round(p.sensitivity, 12)) in true for p in found)
    assert (found[0].specificity, found[0].sensitivity) == (1.0, 0.0)
    assert (found[-1].specificity, found[-1].sensitivity) == (0.0, 1.0)


def test_thinned_curve_shows_no_small_step():
    score, event = drawn(3, n=800, ties=False)
    found = discrimination(score, event, least=5).curve
    m, n = event.sum(), (~event).sum()
    with_event = np.rint(np.diff([p.sensitivity for p in found]) * m)
    without = np.rint(np.diff([1 - p.specificity for p in found]) * n)
    assert all(step == 0 or step >= 5 for step in [*with_event, *without])
    assert with_event.sum() == m
    assert without.sum() == n
