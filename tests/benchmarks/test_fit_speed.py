"""Speed and memory of the fit with covariance, as ratios within one run.

Run with ``pytest -m benchmark -n 0 -s tests/benchmarks/test_fit_speed.py`` on a quiet machine, in an
environment that does not hold the linear algebra library to an older processor's code.
"""

from __future__ import annotations

import ctypes
import gc
import time
import tracemalloc
import warnings
from collections.abc import Callable
from pathlib import Path

import numpy as np
import pytest
import statsmodels.api as sm
from sklearn.linear_model import LogisticRegression

from fourfold.models import logistic
from fourfold.models.blocks import Blocks

pytestmark = pytest.mark.benchmark

ROWS, COLUMNS = 1_000_000, 30
GRADIENT = 1e-10
"""Largest element of the mean gradient that every solver has to reach."""

ROUNDS = 5

LOOSENESS = (1e-2, 1e-3, 1e-4, 1e-5, 1e-6, 1e-7, 1e-8, 1e-10, 1e-12)

Solver = Callable[[float], np.ndarray]


def large_study() -> tuple[np.ndarray, np.ndarray]:
    """An intercept, quantities and 0/1 columns, half and half; a fifth or so have the event."""
    rng = np.random.default_rng(1)
    x = np.empty((ROWS, COLUMNS))
    x[:, 0] = 1
    x[:, 1:16] = rng.normal(size=(ROWS, 15))
    x[:, 16:] = rng.random((ROWS, 14)) < np.linspace(0.1, 0.6, 14)
    truth = rng.normal(size=COLUMNS) * 0.3
    truth[0] = -1.5
    return x, rng.random(ROWS) < 1 / (1 + np.exp(-(x @ truth)))


def mean_gradient(x: np.ndarray, event: np.ndarray, coefficients: np.ndarray) -> float:
    risk = 1 / (1 + np.exp(-(x @ coefficients)))
    return float(np.abs(x.T @ (event - risk)).max() / len(x))


def loosest(solve: Solver, reached: Callable[[np.ndarray], float]) -> float:
    """The loosest setting with which a solver reaches the gradient: nobody is timed for more."""
    for looseness in LOOSENESS:
        if reached(solve(looseness)) <= GRADIENT:
            return looseness
    raise AssertionError("no setting reaches the gradient")


def test_fit_of_a_million_rows() -> None:
    x, event = large_study()
    blocks = Blocks.from_matrix(x)
    y = event.astype(float)

    def statsmodels(looseness: float) -> np.ndarray:
        fitted = sm.Logit(y, x).fit(method="newton", disp=0, tol=looseness, maxiter=100)
        fitted.cov_params()
        return np.asarray(fitted.params)

    def sklearn(looseness: float) -> np.ndarray:
        model = LogisticRegression(
            C=np.inf, solver="newton-cholesky", fit_intercept=False, tol=looseness, max_iter=100
        )
        return model.fit(x, event).coef_[0]

    def reached(coefficients: np.ndarray) -> float:
        return mean_gradient(x, event, coefficients)

    with warnings.catch_warnings():
        warnings.simplefilter("ignore")
        settings = {"statsmodels": loosest(statsmodels, reached), "scikit-learn": loosest(sklearn, reached)}
        solvers: dict[str, Callable[[], object]] = {
            "numpy": lambda: logistic.fit(blocks, event, engine="numpy"),
            "compiled": lambda: logistic.fit(blocks, event, engine="compiled"),
            "statsmodels": lambda: statsmodels(settings["statsmodels"]),
            "scikit-learn": lambda: sklearn(settings["scikit-learn"]),
            # The least that any method does: read every number once, twice as many as threads.
            "one product": lambda: blocks.product(np.ones(COLUMNS)),
        }
        ours = {name: logistic.fit(blocks, event, engine=name) for name in ("numpy", "compiled")}
        best = dict.fromkeys(solvers, np.inf)
        for _ in range(ROUNDS):
            for name, solve in solvers.items():
                start = time.perf_counter()
                solve()
                best[name] = min(best[name], time.perf_counter() - start)
    for name, fit in ours.items():
        gradient = reached(fit.coefficients)
        print(
            f"\n{name}: {best['statsmodels'] / best[name]:.1f} times as fast as statsmodels Logit "
            f"(tol {settings['statsmodels']:g}), {best['scikit-learn'] / best[name]:.1f} times as fast as "
            f"scikit-learn newton-cholesky (tol {settings['scikit-learn']:g}, no covariance); "
            f"{best[name] / best['one product']:.1f} times one product of the design with a vector; "
            f"mean gradient {gradient:.1e}, {fit.iterations} information matrices",
            end="",
        )
        assert gradient <= GRADIENT
    print()
    gap = np.abs(ours["numpy"].coefficients / ours["compiled"].coefficients - 1).max()
    print(f"largest relative difference between the engines' coefficients: {gap:.1e}")
    assert gap < 1e-12
    assert best["statsmodels"] >= 10 * best["numpy"]
    assert best["scikit-learn"] >= 4.5 * best["numpy"]
    assert best["statsmodels"] >= 15 * best["compiled"]
    assert best["scikit-learn"] >= 7 * best["compiled"]


def resident(field: str) -> float:
    """Resident memory of this process in MB: ``VmRSS`` now, ``VmHWM`` at its highest."""
    status = Path("/proc/self/status").read_text(encoding="ascii")
    line = next(line for line in status.splitlines() if line.startswith(field))
    return int(line.split()[1]) * 1024 / 1e6


@pytest.mark.parametrize("engine", ["numpy", "compiled"])
def test_memory_of_the_fit_beside_the_data(engine: str) -> None:
    x, event = large_study()
    blocks = Blocks.from_matrix(x)
    del x
    small = Blocks.from_matrix(blocks.matrix()[:60_000])
    logistic.fit(small, event[:60_000], engine=engine)  # libraries and threads are there before
    # Free memory that the process still holds would hide what the fit takes: give it back first.
    del small
    gc.collect()
    ctypes.CDLL(None).malloc_trim(0)
    # Linux sets the highest mark back to the present on this.
    Path("/proc/self/clear_refs").write_text("5", encoding="ascii")
    before = resident("VmRSS")
    logistic.fit(blocks, event, engine=engine)
    beside = resident("VmHWM") - before
    tracemalloc.start()
    logistic.fit(blocks, event, engine=engine)
    traced = tracemalloc.get_traced_memory()[1] / 1e6
    tracemalloc.stop()
    print(
        f"\n{engine}: {beside:.1f} MB resident ({traced:.1f} MB of arrays) beside "
        f"{blocks.array.nbytes / 1e6:.0f} MB of data"
    )
    assert 0 < traced <= 10
    assert beside <= 10
