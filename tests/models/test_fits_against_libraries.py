"""Fits of random designs against statsmodels (Newton) and scikit-learn (newton-cholesky, no penalty)."""

from __future__ import annotations

import numpy as np
import pytest
import statsmodels.api as sm
from scipy.optimize import brentq
from scipy.stats import chi2
from sklearn.linear_model import LogisticRegression
from tests.models.model_cases import random_design

from fourfold.models import logistic, profile
from fourfold.models.blocks import Blocks


@pytest.mark.parametrize("seed", range(50))
def test_random_design(seed: int) -> None:
    x, event = random_design(seed)
    fit = logistic.fit(Blocks.from_matrix(x, 256), event)
    other = sm.Logit(event.astype(float), x).fit(method="newton", disp=0, tol=1e-10, maxiter=50)
    se = np.asarray(other.bse)
    assert fit.converged
    # In standard errors: a coefficient near zero has no relative error worth the name.
    assert np.abs(fit.coefficients - other.params).max() < 1e-8 * np.abs(se).max()
    assert ((fit.coefficients - other.params) / se) == pytest.approx(np.zeros(len(se)), abs=1e-8)
    assert np.sqrt(np.diagonal(fit.covariance)) == pytest.approx(se, rel=1e-8)
    assert fit.log_likelihood == pytest.approx(other.llf, rel=1e-11)
    assert fit.null_log_likelihood == pytest.approx(other.llnull, rel=1e-9)


@pytest.mark.parametrize("seed", range(0, 50, 10))
def test_random_design_against_scikit_learn(seed: int) -> None:
    x, event = random_design(seed)
    centre, spread = x[:, 1:].mean(axis=0), x[:, 1:].std(axis=0)
    z = (x[:, 1:] - centre) / spread
    other = LogisticRegression(C=np.inf, solver="newton-cholesky", tol=1e-12, max_iter=100).fit(z, event)
    fit = logistic.fit(Blocks.from_matrix(np.column_stack([np.ones(len(z)), z]), 256), event)
    assert fit.coefficients[1:] == pytest.approx(other.coef_[0], rel=1e-6, abs=1e-8)
    assert fit.coefficients[0] == pytest.approx(other.intercept_[0], rel=1e-6, abs=1e-8)


@pytest.mark.parametrize("seed", range(100, 106))
def test_grouped_rows_against_statsmodels_binomial(seed: int) -> None:
    rng = np.random.default_rng(seed)
    x, event = random_design(seed)
    counts = rng.integers(0, 6, len(event))
    fit = logistic.fit(Blocks.from_matrix(x, 256), event, counts=counts)
    binomial = sm.GLM(event.astype(float), x, family=sm.families.Binomial(), freq_weights=counts)
    other = binomial.fit(tol=1e-14, maxiter=100)
    assert fit.n == counts.sum()
    assert fit.events == counts[event].sum()
    assert ((fit.coefficients - other.params) / other.bse) == pytest.approx(np.zeros(x.shape[1]), abs=1e-7)
    assert np.sqrt(np.diagonal(fit.covariance)) == pytest.approx(other.bse, rel=1e-7)
    assert fit.log_likelihood == pytest.approx(other.llf, rel=1e-10)


@pytest.mark.parametrize("seed", [3, 4, 11])
def test_profile_limits_against_root_finding_over_statsmodels(seed: int) -> None:
    # scipy's brentq over cold statsmodels fits that hold the coefficient through an offset.
    x, event = random_design(seed)
    y = event.astype(float)
    fit = logistic.fit(Blocks.from_matrix(x, 256), event)
    columns = list(range(1, x.shape[1]))
    limits = profile.profile_limits(Blocks.from_matrix(x, 256), event, fit, columns)
    quantile = chi2.ppf(0.95, 1)
    for place, column in enumerate(columns):
        others = np.delete(x, column, axis=1)
        estimate, se = fit.coefficients[column], fit.covariance[column, column] ** 0.5

        def excess(value: float, others: np.ndarray = others, column: int = column) -> float:
            held = sm.GLM(y, others, family=sm.families.Binomial(), offset=value * x[:, column])
            return 2 * (fit.log_likelihood - held.fit(tol=1e-13, maxiter=100).llf) - quantile

        lower = brentq(excess, estimate - 4 * se, estimate, xtol=1e-13 * max(1, abs(estimate)))
        upper = brentq(excess, estimate, estimate + 4 * se, xtol=1e-13 * max(1, abs(estimate)))
        assert (limits.lower[place] - lower) / se == pytest.approx(0, abs=1e-8)
        assert (limits.upper[place] - upper) / se == pytest.approx(0, abs=1e-8)
