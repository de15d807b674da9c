"""Counts, a quadratic with a stated comparison, a doubling and 90% limits, against statsmodels.

One invented study through the whole flow. The reference writes every row out as often as its count
says, fits statsmodels' Logit and finds each limit as the root of the profile deviance, with the
comparison made a coefficient of its own.
"""

from __future__ import annotations

import math
from pathlib import Path

import numpy as np
import pandas as pd
import pytest
import statsmodels.api as sm
from scipy.optimize import brentq
from scipy.stats import chi2
from sklearn.metrics import brier_score_loss, roc_auc_score

from fourfold.data.prepare import prepare
from fourfold.description.read import load
from fourfold.pipeline.analyse import results_of
from fourfold.pipeline.progress import Silent
from fourfold.results import tree

CLOSE = 1e-8

STUDY = """
study: {title: Fever after the fair, design: cohort, purpose: association}
data: {file: rows.csv, counts: people}
variables:
  fever: {label: Fever, kind: binary, present: "yes"}
  tent: {label: Slept in a tent, kind: binary, present: "yes"}
  age: {label: Age, kind: quantity, unit: years, shape: quadratic, reference: 50, compare: [[50, 70]]}
  protein: {label: Protein, kind: quantity, unit: mg/L, shape: log2}
  field: {label: Field, kind: category, levels: [a, b, c], reference: b}
outcome: fever
exposures: [tent]
covariates: [age, protein, field]
analysis: {confidence: 90}
disclosure: {smallest_count: 0}
"""

# Columns: intercept, tent, age - 50, its square, log2 protein, field a, field c (against b).
CONTRASTS = {
    ("tent", None): [0, 1, 0, 0, 0, 0, 0],
    ("age", None): [0, 0, 20, 400, 0, 0, 0],
    ("protein", None): [0, 0, 0, 0, 1, 0, 0],
    ("field", "a"): [0, 0, 0, 0, 0, 1, 0],
    ("field", "c"): [0, 0, 0, 0, 0, 0, 1],
}


@pytest.fixture(scope="module")
def study(tmp_path_factory) -> tuple[tree.Results, np.ndarray, np.ndarray]:
    """Results, and design and outcome with each row written out."""
    draw = np.random.default_rng(3)
    n = 700
    age = draw.normal(50, 12, n).round(1)
    protein = np.exp(draw.normal(1, 0.8, n)).round(2) + 0.01
    field = draw.choice(["a", "b", "c"], n)
    tent = draw.random(n) < 0.4
    log_odds = -1 + 0.6 * tent + 0.0015 * (age - 50) ** 2 + 0.3 * np.log2(protein) + 0.4 * (field == "b")
    fever = draw.random(n) < 1 / (1 + np.exp(-log_odds))
    people = draw.integers(1, 4, n)
    folder: Path = tmp_path_factory.mktemp("fair")
    words = {"fever": np.where(fever, "yes", "no"), "tent": np.where(tent, "yes", "no")}
    rows = pd.DataFrame({**words, "age": age, "protein": protein, "field": field, "people": people})
    rows.to_csv(folder / "rows.csv", index=False)
    (folder / "study.yaml").write_text(STUDY, encoding="utf-8")
    loaded = load(folder / "study.yaml")
    columns = [np.ones(n), tent, age - 50, (age - 50) ** 2, np.log2(protein), field == "a", field == "c"]
    design = np.repeat(np.column_stack(columns).astype(float), people, axis=0)
    return results_of(loaded, prepare(loaded), Silent()), design, np.repeat(fever, people).astype(float)


def profile_limit(design: np.ndarray, outcome: np.ndarray, contrast: list[int], side: int) -> float:
    fit = sm.Logit(outcome, design).fit(disp=0, tol=1e-12, maxiter=100)
    c = np.array(contrast, dtype=float)
    place = int(np.argmax(np.abs(c)))
    change = np.eye(c.size)
    change[place] = c
    moved = design @ np.linalg.inv(change)
    error = math.sqrt(c @ fit.cov_params() @ c)

    def above(value: float) -> float:
        rest = sm.GLM(
            outcome,
            np.delete(moved, place, axis=1),
            family=sm.families.Binomial(),
            offset=moved[:, place] * value,
        ).fit(tol=1e-12)
        return float(2 * (fit.llf - rest.llf) - chi2.ppf(0.90, 1))

    centre = float(c @ fit.params)
    return float(brentq(above, centre + side * 0.3 * error, centre + side * 4 * error, xtol=1e-12))


@pytest.mark.parametrize("key", CONTRASTS, ids=str)
def test_estimate_and_limits(study, key):
    results, design, outcome = study
    found = {(estimate.term, estimate.level): estimate for estimate in results.estimates.adjusted}[key]
    fit = sm.Logit(outcome, design).fit(disp=0, tol=1e-12, maxiter=100)
    contrast = np.array(CONTRASTS[key], dtype=float)
    error = math.sqrt(contrast @ fit.cov_params() @ contrast)
    assert found.log_odds_ratio == pytest.approx(contrast @ fit.params, rel=CLOSE)
    assert found.standard_error == pytest.approx(error, rel=CLOSE)
    limits = [profile_limit(design, outcome, CONTRASTS[key], side) for side in (-1, 1)]
    assert [math.log(found.lower), math.log(found.upper)] == pytest.approx(limits, rel=CLOSE)


def test_people_not_rows_are_counted(study):
    results, design, outcome = study
    assert results.participants.analysed == outcome.size
    assert results.participants.events == outcome.sum()
    tent = next(estimate for estimate in results.estimates.adjusted if estimate.term == "tent")
    assert (tent.events, tent.total) == ((design[:, 1] * outcome).sum(), design[:, 1].sum())
    age = next(row for row in results.descriptives.by_outcome.rows if row.variable == "age")
    assert age.overall.median == np.median(design[:, 2] + 50)
    assert age.overall.sd == pytest.approx(design[:, 2].std(ddof=1), rel=CLOSE)


def test_performance_with_counts(study):
    results, design, outcome = study
    fit = sm.Logit(outcome, design).fit(disp=0, tol=1e-12, maxiter=100)
    risk = fit.predict(design)
    assert results.model.log_likelihood == pytest.approx(fit.llf, rel=1e-12)
    assert results.discrimination.auc == pytest.approx(roc_auc_score(outcome, risk), rel=1e-12)
    assert results.calibration.brier == pytest.approx(brier_score_loss(outcome, risk), rel=1e-10)


def test_departure_from_a_straight_line_is_the_square_alone(study):
    results, design, outcome = study
    fit = sm.Logit(outcome, design).fit(disp=0, tol=1e-12, maxiter=100)
    straight = sm.Logit(outcome, np.delete(design, 3, axis=1)).fit(disp=0, tol=1e-12, maxiter=100)
    (test,) = (test for test in results.term_tests if test.part == "non-linearity")
    assert (test.term, test.df) == ("age", 1)
    assert test.statistic == pytest.approx(2 * (fit.llf - straight.llf), rel=CLOSE)
