"""Speed of profile-likelihood limits, as ratios within one run.

Run with ``pytest -m benchmark -n 0 -s tests/benchmarks/test_profile_speed.py`` on a quiet machine.
"""

from __future__ import annotations

import time

import numpy as np
import pytest
import statsmodels.api as sm
from scipy.optimize import brentq
from scipy.stats import chi2

from fourfold.models import logistic, profile
from fourfold.models.blocks import Blocks

pytestmark = pytest.mark.benchmark

ROWS, TERMS = 10_000, 15
ROUNDS = 15


def study() -> tuple[np.ndarray, np.ndarray]:
    rng = np.random.default_rng(1)
    x = np.empty((ROWS, TERMS + 1))
    x[:, 0] = 1
    x[:, 1:9] = rng.normal(size=(ROWS, 8))
    x[:, 9:] = rng.random((ROWS, 7)) < np.linspace(0.1, 0.6, 7)
    truth = rng.normal(size=TERMS + 1) * 0.3
    truth[0] = -1.5
    return x, rng.random(ROWS) < 1 / (1 + np.exp(-(x @ truth)))


def limits_by_cold_roots(
    x: np.ndarray, event: np.ndarray, fit: logistic.Fit, library: str
) -> tuple[np.ndarray, np.ndarray]:
    """Both limits of each coefficient: scipy's brentq, and a fit from cold at every step.

    The fits hold the coefficient through an offset: by statsmodels Logit (Newton), or by our own
    fit without the column.
    """
    y = event.astype(float)
    quantile = chi2.ppf(0.95, 1)
    lower, upper = [], []
    for column in range(1, TERMS + 1):
        others = np.delete(x, column, axis=1)
        blocks = Blocks.from_matrix(others)
        estimate, se = fit.coefficients[column], fit.covariance[column, column] ** 0.5

        def excess(
            value: float, others: np.ndarray = others, blocks: Blocks = blocks, column: int = column
        ) -> float:
            offset = value * x[:, column]
            if library == "statsmodels":
                held = sm.Logit(y, others, offset=offset).fit(method="newton", disp=0).llf
            else:
                held = logistic.fit(blocks, event, offset=offset, engine="numpy").log_likelihood
            return 2 * (fit.log_likelihood - held) - quantile

        # To a billionth of a standard error: what the joint advance reaches.
        lower.append(brentq(excess, estimate - 3 * se, estimate, xtol=1e-9 * se))
        upper.append(brentq(excess, estimate, estimate + 3 * se, xtol=1e-9 * se))
    return np.array(lower), np.array(upper)


def test_all_limits_of_fifteen_coefficients() -> None:
    x, event = study()
    blocks = Blocks.from_matrix(x)
    columns = list(range(1, TERMS + 1))
    fit = logistic.fit(blocks, event)
    best = {"fit": np.inf, "limits": np.inf}
    for _ in range(ROUNDS):
        start = time.perf_counter()
        logistic.fit(blocks, event, engine="numpy")
        middle = time.perf_counter()
        limits = profile.profile_limits(blocks, event, fit, columns)
        end = time.perf_counter()
        best["fit"] = min(best["fit"], middle - start)
        best["limits"] = min(best["limits"], end - middle)
    se = np.sqrt(np.diagonal(fit.covariance))[1:]
    cold = {}
    for library in ("statsmodels", "our own fit"):
        start = time.perf_counter()
        lower, upper = limits_by_cold_roots(x, event, fit, library)
        cold[library] = time.perf_counter() - start
        assert (limits.lower - lower) / se == pytest.approx(np.zeros(TERMS), abs=1e-7)
        assert (limits.upper - upper) / se == pytest.approx(np.zeros(TERMS), abs=1e-7)
    print(
        f"\n30 limits cost {best['limits'] / best['fit']:.1f} fits; "
        + "; ".join(
            f"{seconds / best['limits']:.0f} times as fast as roots over {library} from cold"
            for library, seconds in cold.items()
        )
    )
    assert best["limits"] <= 10 * best["fit"]
    assert cold["statsmodels"] >= 100 * best["limits"]
