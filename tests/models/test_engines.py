"""The engines give the same numbers, on any number of cores, within ten megabytes beside the data."""

from __future__ import annotations

import tracemalloc

import numpy as np
import pytest
from tests.models.model_cases import random_design

from fourfold.models import batch, engine, lanes, logistic, profile
from fourfold.models.blocks import Blocks
from fourfold.models.likelihood import LogLikelihood, Observed, Part


def large(n: int = 70_000, p: int = 9, seed: int = 12) -> tuple[Blocks, np.ndarray]:
    rng = np.random.default_rng(seed)
    x = rng.normal(size=(n, p))
    x[:, 0] = 1
    x[:, 5:] = rng.random((n, p - 5)) < 0.3
    event = rng.random(n) < 1 / (1 + np.exp(-(x @ rng.normal(0, 0.3, p) - 1)))
    return Blocks.from_matrix(x), event


def close(found: np.ndarray, expected: np.ndarray) -> None:
    """Equal to 1e-12 of the largest, and no worse anywhere than rounding of sums."""
    assert np.abs(found - expected).max() <= 1e-12 * np.abs(expected).max()


@pytest.mark.parametrize("p", [1, 2, 3, 4, 5, 6, 7, 8, 9])
@pytest.mark.parametrize("weighted", [False, True])
def test_compiled_pass_equals_numpy(p: int, weighted: bool) -> None:
    rng = np.random.default_rng(p)
    n = 1777
    blocks = Blocks.from_matrix(rng.normal(size=(n, p)) * 3, 600)
    event = rng.random(n) < 0.4
    counts = rng.integers(0, 5, n) if weighted else None
    offset = rng.normal(size=n) * 200 if weighted else None
    observed = Observed(blocks, event, counts, offset)
    point = rng.normal(size=p)
    plain = LogLikelihood(observed)(point)
    swept = LogLikelihood(observed, engine="compiled")(point)
    assert swept.log_likelihood == pytest.approx(plain.log_likelihood, rel=1e-13)
    close(swept.gradient, plain.gradient)
    close(swept.information, plain.information)
    assert (swept.information == swept.information.T).all()
    light = LogLikelihood(observed, engine="compiled")(point, information=False)
    assert (light.gradient == swept.gradient).all()
    part = Part(100, 2)
    one = LogLikelihood(observed, part=part)(point)
    two = LogLikelihood(observed, part=part, engine="compiled")(point)
    close(two.information, one.information)


def test_compiled_exponential_is_exact() -> None:
    from fourfold.models import compiled

    size = np.concatenate([np.linspace(0, 2, 100), np.linspace(2, 707, 156)])
    e, log1p_e, power = np.empty(256), np.empty(256), np.empty(256)
    compiled._exp_and_log1p(size, e, log1p_e, power, power.view(np.int64), 256)
    assert e == pytest.approx(np.exp(-size), rel=4e-16)
    assert log1p_e == pytest.approx(np.log1p(np.exp(-size)), rel=6e-16)


def test_fit_is_the_same_by_both_engines() -> None:
    blocks, event = large()
    one = logistic.fit(blocks, event, engine="numpy")
    two = logistic.fit(blocks, event, engine="compiled")
    se = np.sqrt(np.diagonal(one.covariance))
    assert np.abs((two.coefficients - one.coefficients) / se).max() < 1e-10
    assert two.coefficients == pytest.approx(one.coefficients, rel=1e-12)
    close(two.covariance, one.covariance)
    assert two.log_likelihood == pytest.approx(one.log_likelihood, rel=1e-14)


def test_warm_start_arrives_where_the_cold_start_does(monkeypatch: pytest.MonkeyPatch) -> None:
    blocks, event = large()
    warm = logistic.fit(blocks, event, engine="numpy")
    monkeypatch.setattr(logistic, "WARM_FROM", 10**9)
    cold = logistic.fit(blocks, event, engine="numpy")
    assert warm.iterations < cold.iterations
    assert warm.decrement < 1e-12 * abs(warm.log_likelihood)
    se = np.sqrt(np.diagonal(cold.covariance))
    assert np.abs((warm.coefficients - cold.coefficients) / se).max() < 1e-7
    assert warm.covariance == pytest.approx(cold.covariance, rel=1e-7, abs=1e-12)


@pytest.mark.parametrize("order", ["by outcome", "by level", "level in one block"])
def test_sorted_files_are_fitted_like_shuffled_ones(order: str) -> None:
    blocks, event = large()
    x = blocks.matrix()
    if order == "by outcome":
        rows = np.argsort(event, kind="stable")
    elif order == "by level":
        rows = np.argsort(x[:, 5], kind="stable")
    else:
        # All who have it beyond the part that gives the start.
        x[:, 5] = 0
        x[3000:3300, 5] = 1
        rows = np.arange(len(x))
    plain = logistic.fit(Blocks.from_matrix(x), event)
    found = logistic.fit(Blocks.from_matrix(x[rows]), event[rows])
    se = np.sqrt(np.diagonal(plain.covariance))
    assert found.converged
    assert np.abs((found.coefficients - plain.coefficients) / se).max() < 1e-7


def test_number_of_cores_moves_no_bit(monkeypatch: pytest.MonkeyPatch) -> None:
    blocks, event = large()
    monkeypatch.setattr("fourfold.models.likelihood.THREADS_PAY_FROM", 0)
    fits = []
    for cores in (1, 2, 5):
        monkeypatch.setattr(lanes, "cores", lambda cores=cores: cores)
        fits.append(logistic.fit(blocks, event, engine="numpy"))
    for fit in fits[1:]:
        assert (fit.coefficients == fits[0].coefficients).all()
        assert (fit.covariance == fits[0].covariance).all()


def test_together_is_one_by_one() -> None:
    # The batch and the single pass are written apart.
    x, event = random_design(21)
    counts = np.arange(len(event)) % 4
    offset = np.linspace(-1, 1, len(event))
    observed = Observed(Blocks.from_matrix(x, 100), event, counts, offset)
    fit = logistic.fit(observed.blocks, event, counts=counts, offset=offset)
    standardised = batch.Standardised.of(observed, fit.covariance)
    rng = np.random.default_rng(0)
    inner = standardised.inward(fit.coefficients) + 0.1 * rng.normal(size=(5, x.shape[1]))
    together = standardised.sums(inner, information=True)
    assert together.information is not None
    for row in range(5):
        alone = LogLikelihood(observed)(standardised.change @ inner[row])
        assert together.log_likelihood[row] == pytest.approx(alone.log_likelihood, rel=1e-11)
        gradient = standardised.change.T @ alone.gradient
        assert together.gradient[row] == pytest.approx(gradient, rel=1e-8, abs=1e-8)
        information = standardised.change.T @ alone.information @ standardised.change
        assert together.information[row] == pytest.approx(information, rel=1e-7, abs=1e-7)


def test_groups_of_limits_are_the_limits(monkeypatch: pytest.MonkeyPatch) -> None:
    x, event = random_design(22)
    blocks = Blocks.from_matrix(x, 256)
    fit = logistic.fit(blocks, event)
    columns = list(range(x.shape[1]))
    whole = profile.profile_limits(blocks, event, fit, columns)
    monkeypatch.setattr(batch, "GROUP_NUMBERS", 3 * x.shape[1] ** 2)
    split = profile.profile_limits(blocks, event, fit, columns)
    assert split.lower == pytest.approx(whole.lower, rel=1e-9)
    assert split.upper == pytest.approx(whole.upper, rel=1e-9)


def test_bracketing_finds_the_same_limits(monkeypatch: pytest.MonkeyPatch) -> None:
    x, event = random_design(23)
    blocks = Blocks.from_matrix(x, 256)
    fit = logistic.fit(blocks, event)
    columns = list(range(x.shape[1]))
    advanced = profile.profile_limits(blocks, event, fit, columns)
    monkeypatch.setattr(profile, "PASSES", 0)
    bracketed = profile.profile_limits(blocks, event, fit, columns)
    se = np.sqrt(np.diagonal(fit.covariance))
    assert (bracketed.lower - advanced.lower) / se == pytest.approx(np.zeros(len(se)), abs=1e-8)
    assert (bracketed.upper - advanced.upper) / se == pytest.approx(np.zeros(len(se)), abs=1e-8)


def test_engine_is_chosen_by_size(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.delitem(engine.sys.modules, engine.COMPILED, raising=False)
    assert not engine.choose("auto", 30_000_000)
    assert engine.choose("auto", engine.LOADING_PAYS_FROM)
    monkeypatch.setitem(engine.sys.modules, engine.COMPILED, engine)
    assert engine.choose("auto", engine.LOADED_PAYS_FROM)
    assert not engine.choose("auto", engine.LOADED_PAYS_FROM - 1)
    monkeypatch.setattr(engine, "installed", lambda: False)
    assert not engine.choose("auto", 10**10)
    with pytest.raises(ValueError, match="needs numba"):
        engine.choose("compiled", 10**10)


@pytest.mark.parametrize("which", ["numpy", "compiled"])
def test_memory_beside_the_data(which: str) -> None:
    # 96 MB of data; numpy's and our own allocations are traced, buffers of BLAS are not.
    blocks, event = large(n=400_000, p=30)
    logistic.fit(*large(), engine=which)  # what is loaded once is not counted
    tracemalloc.start()
    try:
        logistic.fit(blocks, event, engine=which)
        peak = tracemalloc.get_traced_memory()[1]
    finally:
        tracemalloc.stop()
    assert peak < 10e6
