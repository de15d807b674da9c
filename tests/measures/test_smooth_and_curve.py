"""Smoothed proportions, bins, local regression and odds-ratio curves."""

from __future__ import annotations

import itertools

import numpy as np
import pytest
import statsmodels.api as sm
from scipy.interpolate import CubicSpline
from scipy.stats import norm

from fourfold.measures.binomial_fit import binomial_fit
from fourfold.measures.curve import odds_ratio_curve
from fourfold.measures.local_regression import local_regression
from fourfold.measures.proportion import wilson
from fourfold.measures.smoothed_proportion import bins, smooth
from fourfold.measures.tally import tally


def natural_basis(x: np.ndarray, knots: np.ndarray) -> np.ndarray:
    """Cubic between knots, straight beyond, built from SciPy's natural interpolants."""
    columns = []
    for place in range(knots.size):
        spline = CubicSpline(knots, np.eye(knots.size)[place], bc_type="natural")
        inner = np.clip(x, knots[0], knots[-1])
        columns.append(spline(inner) + spline(inner, 1) * (x - inner))
    return np.column_stack(columns)


@pytest.fixture
def bent() -> tuple[np.ndarray, np.ndarray]:
    rng = np.random.default_rng(8)
    x = rng.normal(50, 12, 600)
    return x, rng.random(600) < 1 / (1 + np.exp(-(-1.5 + ((x - 50) / 12) ** 2 * 0.8)))


def test_smooth_is_a_natural_spline_logit(bent: tuple[np.ndarray, np.ndarray]):
    # statsmodels GLM on a natural spline basis built another way (SciPy's CubicSpline); knots at
    # numpy.quantile .05 .35 .65 .95. Curve and band depend on the space alone.
    x, event = bent
    curve = smooth(x, event)
    knots = np.quantile(x, [0.05, 0.35, 0.65, 0.95])
    theirs = sm.GLM(event.astype(float), natural_basis(x, knots), family=sm.families.Binomial()).fit(
        tol=1e-14
    )
    at = np.array([point.x for point in curve])
    assert at[0] == pytest.approx(np.quantile(x, 0.01))
    assert at[-1] == pytest.approx(np.quantile(x, 0.99))
    rows = natural_basis(at, knots)
    eta = rows @ theirs.params
    half = norm.ppf(0.975) * np.sqrt(np.einsum("ij,jk,ik->i", rows, theirs.cov_params(), rows))
    assert [p.y for p in curve] == pytest.approx(1 / (1 + np.exp(-eta)), rel=1e-7)
    assert [p.lower for p in curve] == pytest.approx(1 / (1 + np.exp(half - eta)), rel=1e-6)
    assert [p.upper for p in curve] == pytest.approx(1 / (1 + np.exp(-half - eta)), rel=1e-6)


def test_smooth_with_counts_equals_repeated_rows():
    rng = np.random.default_rng(4)
    x, event, counts = rng.integers(20, 60, 200) * 1.0, rng.random(200) < 0.4, rng.integers(1, 6, 200)
    counted, repeated = smooth(x, event, counts), smooth(np.repeat(x, counts), np.repeat(event, counts))
    assert [p.y for p in counted] == pytest.approx([p.y for p in repeated], rel=1e-12)
    assert bins(x, event, counts) == bins(np.repeat(x, counts), np.repeat(event, counts))


def test_smooth_falls_back_with_few_values():
    # Three distinct values bear a straight line only: statsmodels GLM on the value itself.
    rng = np.random.default_rng(6)
    x = rng.integers(0, 3, 300) * 1.0
    event = rng.random(300) < 0.2 + 0.15 * x
    theirs = sm.GLM(event.astype(float), sm.add_constant(x), family=sm.families.Binomial()).fit(tol=1e-14)
    curve = smooth(x, event, points=3)
    assert [p.x for p in curve] == [0.0, 1.0, 2.0]
    assert [p.y for p in curve] == pytest.approx(
        theirs.predict(sm.add_constant(np.array([0.0, 1.0, 2.0]))), rel=1e-8
    )


@pytest.mark.parametrize(
    ("x", "event"),
    [
        (np.repeat([1.0, 2.0], 20), np.tile([True, False], 20)),
        (np.arange(40.0), np.zeros(40, dtype=bool)),
        (np.arange(40.0), np.arange(40) >= 20),
    ],
    ids=["two values", "no event", "separated"],
)
def test_no_curve_where_none_exists(x: np.ndarray, event: np.ndarray):
    assert smooth(x, event) == []


def test_gathered_curve_stays_close(bent: tuple[np.ndarray, np.ndarray]):
    # 30,000 distinct values are gathered into 2,000 groups; statsmodels GLM on every row.
    rng = np.random.default_rng(2)
    x = rng.normal(size=30_000)
    event = rng.random(30_000) < 1 / (1 + np.exp(-(x - 1)))
    knots = np.quantile(x, [0.05, 0.35, 0.65, 0.95])
    theirs = sm.GLM(event.astype(float), natural_basis(x, knots), family=sm.families.Binomial()).fit()
    curve = smooth(x, event)
    exact = theirs.predict(natural_basis(np.array([p.x for p in curve]), knots))
    assert [p.y for p in curve] == pytest.approx(exact, abs=1e-3)


def test_bins_hold_everybody_once(bent: tuple[np.ndarray, np.ndarray]):
    x, event = bent
    found = bins(np.round(x), event, groups=8)
    assert sum(each.total or 0 for each in found) == x.size
    assert sum(each.events or 0 for each in found) == event.sum()
    for each, following in itertools.pairwise(found):
        assert each.upper < following.lower
    for each in found:
        inside = (np.round(x) >= each.lower) & (np.round(x) <= each.upper)
        assert each.total == inside.sum()
        assert each.mean == pytest.approx(np.round(x)[inside].mean())
        interval = wilson(int(event[inside].sum()), int(inside.sum()))
        assert (each.proportion_lower, each.proportion_upper) == (interval.lower, interval.upper)


def test_local_regression_by_hand():
    # numpy.polyfit with tricube weights over the nearest three quarters, point by point.
    rng = np.random.default_rng(11)
    x, event = rng.random(120), rng.random(120) < 0.4
    at = np.linspace(0.05, 0.95, 7)
    fitted = local_regression(tally(x, event), at).fitted
    for point, mine in zip(at, fitted, strict=True):
        distance = np.abs(x - point)
        reach = np.sort(distance)[90 - 1]
        weight = np.clip(1 - (distance / reach) ** 3, 0, None) ** 3
        expected = np.polyfit(x - point, event.astype(float), 2, w=np.sqrt(weight))[-1]
        assert mine == pytest.approx(expected, rel=1e-9)


def test_local_regression_with_heavy_ties():
    # Everybody near a point tied there: the fit is the mean of the tied, and nothing is nan.
    x = np.concatenate([np.full(90, 0.2), np.full(10, 0.6)])
    event = np.concatenate([np.arange(90) < 30, np.arange(10) < 5])
    found = local_regression(tally(x, event), np.array([0.2, 0.4, 0.6]))
    assert np.isfinite(found.fitted).all()
    assert found.fitted[0] == pytest.approx(1 / 3)


@pytest.mark.parametrize("seed", range(10))
def test_small_fit_against_statsmodels(seed: int):
    # statsmodels GLM, binomial with counts and an offset.
    rng = np.random.default_rng(seed)
    X = np.column_stack([np.ones(60), rng.normal(size=(60, 2))])
    people = rng.integers(1, 9, 60)
    offset = rng.normal(size=60)
    events = rng.binomial(people, 1 / (1 + np.exp(-(offset + X @ [-0.3, 0.6, -0.2]))))
    theirs = sm.GLM(
        np.column_stack([events, people - events]), X, family=sm.families.Binomial(), offset=offset
    ).fit(tol=1e-14, maxiter=100)
    found = binomial_fit(X, events, people, offset)
    assert found.converged
    assert found.coefficients == pytest.approx(theirs.params, rel=1e-9, abs=1e-10)
    assert np.sqrt(np.diag(found.covariance)) == pytest.approx(theirs.bse, rel=1e-6)


def test_small_fit_sees_separation():
    x = np.arange(20.0) / 10
    found = binomial_fit(np.column_stack([np.ones(20), x]), x > 1, np.ones(20))
    assert not found.converged


def test_odds_ratio_curve_of_a_quadratic():
    # By hand: log odds ratio against 40 of b1 (x-40) + b2 (x-40)^2, delta-method variance.
    b, V = np.array([0.05, -0.002]), np.array([[4e-4, -1e-6], [-1e-6, 9e-8]])
    x = np.array([30.0, 40.0, 55.0])
    basis = np.column_stack([x - 40, (x - 40) ** 2])
    curve = odds_ratio_curve(x, basis, np.zeros(2), b, V)
    for point, u in zip(curve, x - 40, strict=True):
        error = np.sqrt(u**2 * V[0, 0] + 2 * u**3 * V[0, 1] + u**4 * V[1, 1])
        middle = b[0] * u + b[1] * u * u
        assert np.log([point.y, point.lower, point.upper]) == pytest.approx(
            [middle, middle - norm.ppf(0.975) * error, middle + norm.ppf(0.975) * error], abs=1e-12
        )
    assert (curve[1].y, curve[1].lower, curve[1].upper) == (1.0, 1.0, 1.0)
