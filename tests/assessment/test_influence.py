"""Influence: R's one-step figures, statsmodels' leverages, and refits done one by one."""

from __future__ import annotations

from typing import Any

import numpy as np
import pytest
import statsmodels.api as sm
from scipy.stats import norm

from fourfold.assessment import influence as module
from fourfold.assessment.influence import Watched, influence, row_diagnostics
from fourfold.assessment.refit import refit_without


def simulated(seed: int, n: int = 80) -> tuple[np.ndarray, np.ndarray, Any]:
    rng = np.random.default_rng(seed)
    X = np.column_stack([np.ones(n), rng.random(n) < 0.4, rng.standard_t(4, size=n)])
    event = rng.random(n) < 1 / (1 + np.exp(-(X @ [-0.5, 0.6, 0.5])))
    return X, event, glm(X, event)


def glm(X: np.ndarray, event: np.ndarray, **more: Any) -> Any:
    model = sm.GLM(event.astype(float), X, family=sm.families.Binomial(), **more)
    return model.fit(tol=1e-14, tol_criterion="params", maxiter=200)


def test_figures_of_the_fitted_models(fitted: Any):
    # Base R 4.2.2: influence of birthwt.json and bacteria.json (one step, Pregibon 1981).
    expected = fitted.expected["influence"]
    p = fitted.X.shape[1]
    rows = row_diagnostics(fitted.X, fitted.event, fitted.log_odds, fitted.covariance, range(p))
    assert rows.leverage.max() == pytest.approx(expected["max_leverage"], rel=1e-9)
    assert rows.leverage.sum() == pytest.approx(expected["sum_leverage"], rel=1e-9)
    assert np.abs(rows.pearson).max() == pytest.approx(expected["max_abs_pearson_residual"], rel=1e-9)
    assert np.abs(rows.deviance).max() == pytest.approx(expected["max_abs_deviance_residual"], rel=1e-9)
    assert rows.cook.max() == pytest.approx(expected["max_cook_distance"], rel=1e-9)
    assert rows.cook.argmax() + 1 == expected["row_of_max_cook"]
    assert np.abs(rows.change).max(axis=0) == pytest.approx(expected["max_abs_dfbeta"], rel=1e-9)
    errors = np.sqrt(np.diag(fitted.covariance))
    assert np.abs(rows.change / errors).max(axis=0) == pytest.approx(
        expected["max_abs_dfbeta_over_se"], rel=1e-9
    )
    found = influence(fitted.X, fitted.event, fitted.coefficients, fitted.covariance, [])
    assert found.largest_leverage == pytest.approx(expected["max_leverage"], rel=1e-9)
    assert found.mean_leverage == pytest.approx(p / fitted.event.size, rel=1e-9)
    assert found.largest_pearson == pytest.approx(expected["max_abs_pearson_residual"], rel=1e-9)
    assert found.largest_deviance_residual == pytest.approx(expected["max_abs_deviance_residual"], rel=1e-9)
    assert found.largest_cook == pytest.approx(expected["max_cook_distance"], rel=1e-9)
    assert found.terms == []


def test_row_that_moves_smoking_most(birthwt: Any):
    # Computed in base R 4.2.2: -0.10072058 at row 57, counted from 1.
    rows = row_diagnostics(birthwt.X, birthwt.event, birthwt.log_odds, birthwt.covariance, [5])
    place = np.abs(rows.change[:, 0]).argmax()
    assert place + 1 == 57
    assert rows.change[place, 0] == pytest.approx(-0.10072058, abs=5e-9)


@pytest.mark.parametrize("seed", range(10))
def test_rows_against_statsmodels(seed: int):
    # statsmodels GLMInfluence: hat matrix diagonal, Cook's distance, and its residuals.
    X, event, theirs = simulated(seed)
    other = theirs.get_influence()
    rows = row_diagnostics(X, event, X @ theirs.params, theirs.cov_params(), [1])
    assert rows.leverage == pytest.approx(other.hat_matrix_diag, rel=1e-6)
    assert rows.cook == pytest.approx(other.cooks_distance[0], rel=1e-5)
    assert rows.pearson == pytest.approx(theirs.resid_pearson, rel=1e-8)
    assert rows.deviance == pytest.approx(theirs.resid_deviance, rel=1e-8)


@pytest.mark.parametrize("seed", range(5))
def test_largest_refitted_change_by_refitting_every_row(seed: int):
    # statsmodels GLM refitted without each row in turn.
    X, event, theirs = simulated(seed)
    error = np.sqrt(theirs.cov_params()[1, 1])
    z = norm.ppf(0.975)

    def side(fit: Any) -> int:
        b, e = fit.params[1], np.sqrt(fit.cov_params()[1, 1])
        return int(b - z * e > 0) - int(b + z * e < 0)

    changes, sides = [], []
    for row in range(event.size):
        rest = np.arange(event.size) != row
        without = glm(X[rest], event[rest])
        changes.append((theirs.params[1] - without.params[1]) / error)
        sides.append(side(without))
    found = influence(X, event, theirs.params, theirs.cov_params(), [Watched("x", "x", 1)])
    assert found.terms[0].largest_change_refitted == pytest.approx(max(changes, key=abs), rel=1e-6)
    assert found.terms[0].crosses_one == any(s != side(theirs) for s in sides)


def crossing() -> tuple[np.ndarray, np.ndarray]:
    """One exposed event carries the interval across 1."""
    X = np.column_stack([np.ones(60), np.arange(60) < 20])
    event = np.zeros(60, dtype=bool)
    event[:10], event[20:29] = True, True
    return X, event


def test_crossing_one_is_noticed():
    # By Woolf's interval of the saturated table: 10/10 v 9/31 excludes 1 (1.09 to 10.9), 9/10 v
    # 9/31 does not (0.97 to 9.96).
    X, event = crossing()
    fit = glm(X, event)
    found = influence(X, event, fit.params, fit.cov_params(), [Watched("x", "x", 1)])
    assert found.terms[0].crosses_one
    firm = influence(
        np.repeat(X, 4, axis=0),
        np.repeat(event, 4),
        fit.params,
        fit.cov_params() / 4,
        [Watched("x", "x", 1)],
    )
    assert not firm.terms[0].crosses_one


def test_separated_without_one_person_counts_as_crossing():
    # A single unexposed event: without that person nobody unexposed has the event.
    X = np.column_stack([np.ones(40), np.arange(40) < 20])
    event = np.arange(40) < 12
    event[30] = True
    fit = glm(X, event)
    found = influence(X, event, fit.params, fit.cov_params(), [Watched("x", "x", 1)])
    assert found.terms[0].crosses_one
    assert found.terms[0].largest_change_refitted is not None


def test_one_person_of_a_counted_row_is_left_out():
    # Property: counts tell what repeated rows tell.
    X, event, _ = simulated(3, 60)
    counts = np.random.default_rng(1).integers(1, 4, 60)
    whole_X, whole_event = np.repeat(X, counts, axis=0), np.repeat(event, counts)
    fit = glm(whole_X, whole_event)
    watched = [Watched("x", "x", 1), Watched("t", "t", 2)]
    counted = influence(X, event, fit.params, fit.cov_params(), watched, counts)
    repeated = influence(whole_X, whole_event, fit.params, fit.cov_params(), watched)
    assert counted.mean_leverage == pytest.approx(repeated.mean_leverage, rel=1e-10)
    assert counted.high_leverage == repeated.high_leverage
    assert counted.large_residuals == repeated.large_residuals
    assert counted.largest_cook == pytest.approx(repeated.largest_cook, rel=1e-10)
    for mine, theirs in zip(counted.terms, repeated.terms, strict=True):
        assert mine.largest_change == pytest.approx(theirs.largest_change, rel=1e-10)
        assert mine.largest_change_refitted == pytest.approx(theirs.largest_change_refitted, rel=1e-8)


def test_rows_decided_by_separation_have_no_influence():
    # The separated column is taken out, its rows given infinite log odds: what is left is the
    # fit of the other rows alone (statsmodels GLM on those).
    X, event, _ = simulated(5, 90)
    event[60:] = False
    rest = np.arange(90) < 60
    fit = glm(X[rest], event[rest])
    log_odds = np.where(rest, X @ fit.params, -np.inf)
    watched = [Watched("x", "x", 1)]
    found = influence(X, event, fit.params, fit.cov_params(), watched, log_odds=log_odds)
    alone = influence(X[rest], event[rest], fit.params, fit.cov_params(), watched)
    assert found.largest_leverage == pytest.approx(alone.largest_leverage, rel=1e-12)
    assert found.largest_cook == pytest.approx(alone.largest_cook, rel=1e-12)
    assert found.terms[0].largest_change == pytest.approx(alone.terms[0].largest_change, rel=1e-12)
    assert found.terms[0].largest_change_refitted == pytest.approx(
        alone.terms[0].largest_change_refitted, rel=1e-8
    )


def test_held_information_reaches_the_same_refits(monkeypatch: pytest.MonkeyPatch):
    # The way of long data, forced on short: same coefficients as Newton's.
    X, event, fit = simulated(2, 400)
    rows = np.array([3, 50, 200])
    start = np.repeat(fit.params[None, :], 3, axis=0)
    given = (
        X,
        event.astype(float),
        np.ones(400),
        np.zeros(400),
        rows,
        start,
        np.linalg.inv(fit.cov_params()),
    )
    exact = refit_without(*given)
    monkeypatch.setattr("fourfold.assessment.refit.SMALL", 0)
    held = refit_without(*given)
    assert held.converged.all()
    assert held.coefficients == pytest.approx(exact.coefficients, rel=1e-6)
    assert held.covariances == pytest.approx(exact.covariances, rel=2e-2)
    for place, row in enumerate(rows):
        rest = np.arange(400) != row
        assert exact.coefficients[place] == pytest.approx(glm(X[rest], event[rest]).params, rel=1e-8)


def test_long_data_are_taken_in_chunks(monkeypatch: pytest.MonkeyPatch):
    # Property: the size of a chunk changes nothing.
    X, event, fit = simulated(4, 300)
    watched = [Watched("x", "x", 1)]
    whole = influence(X, event, fit.params, fit.cov_params(), watched)
    monkeypatch.setattr(module, "CHUNK", 64)
    monkeypatch.setattr("fourfold.assessment.refit.CHUNK", 64)
    parts = influence(X, event, fit.params, fit.cov_params(), watched)
    assert parts.largest_cook == pytest.approx(whole.largest_cook, rel=1e-12)
    assert parts.terms[0].largest_change_refitted == pytest.approx(
        whole.terms[0].largest_change_refitted, rel=1e-9
    )
