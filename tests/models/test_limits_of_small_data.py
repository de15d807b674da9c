"""Limits in small and awkward data: by their definition, with fits that hold the coefficient."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import example, given, settings
from hypothesis import strategies as st
from scipy.stats import chi2

from fourfold.models import limits, logistic, profile, rank, separation
from fourfold.models import tests as model_tests
from fourfold.models.blocks import Blocks

QUANTILE = chi2.ppf(0.95, 1)
BOUNDED = {0: (True, True), 1: (True, False), -1: (False, True), 2: (False, False)}


def small_study(seed: int) -> tuple[np.ndarray, np.ndarray]:
    """Ten to sixty rows, strong effects, rare levels: often separated, or nearly so."""
    rng = np.random.default_rng(seed)
    n, k = int(rng.integers(10, 60)), int(rng.integers(1, 5))
    columns = [np.ones(n)]
    for _ in range(k):
        if rng.random() < 0.4:
            columns.append(rng.normal(size=n))
        else:
            columns.append((rng.random(n) < rng.uniform(0.05, 0.6)).astype(float))
    x = np.column_stack(columns)
    return x, rng.random(n) < 1 / (1 + np.exp(-(x @ rng.normal(0, 1.5, k + 1))))


@settings(max_examples=150, deadline=None)
@given(st.integers(0, 2**32 - 1))
# Standard errors in the thousands, fitted odds beyond 1e17: Newton steps alone get lost here.
@example(535)
@example(895)
@example(422)
@example(939)
@example(21772)
@example(22384)
def test_limits_are_where_the_deviance_is_the_quantile(seed: int) -> None:
    x, event = small_study(seed)
    blocks = Blocks.from_matrix(x, 16)
    if event.all() or not event.any() or rank.dependent(blocks):
        return
    columns = list(range(x.shape[1]))
    found = separation.detect(blocks, event)
    fit = logistic.fit(blocks, event) if found.kind is None else limits.fit_at_limit(blocks, event, found)
    assert fit.converged
    bounds = profile.profile_limits(blocks, event, fit, columns, separation=found)
    for column in columns:
        ends = (bounds.lower[column], bounds.upper[column])
        assert tuple(np.isfinite(ends).tolist()) == BOUNDED[int(found.direction[column])]
        others = Blocks.from_matrix(np.delete(x, column, axis=1), 16)
        for end in ends:
            if np.isfinite(end):
                drop = 2 * (fit.log_likelihood - highest(others, event, end * x[:, column]))
                assert drop == pytest.approx(QUANTILE, abs=2e-8)
    tests = model_tests.likelihood_ratio(blocks, event, fit, [(column,) for column in columns])
    for column, test in enumerate(tests):
        others = Blocks.from_matrix(np.delete(x, column, axis=1), 16)
        drop = 2 * (fit.log_likelihood - highest(others, event, None))
        assert test.statistic == pytest.approx(drop, abs=2e-8)


def highest(blocks: Blocks, event: np.ndarray, offset: np.ndarray | None) -> float:
    """Maximum or supremum of the log-likelihood with an offset, by rows that remain uncertain."""
    found = separation.detect(blocks, event)
    if found.kind is None:
        # Where the offset runs to hundreds, a start that takes most of it back saves many steps.
        start = None if offset is None else -np.linalg.lstsq(blocks.matrix(), offset)[0]
        held = logistic.fit(blocks, event, offset=offset, start=start)
        assert held.converged
        return held.log_likelihood
    left = ~found.certain
    if not left.any():
        return 0.0
    x = blocks.matrix()[left]
    # Any independent columns will do; numpy's singular vectors make some.
    _, size, right = np.linalg.svd(x, full_matrices=False)
    basis = x @ right[size > 1e-9 * size[0]].T if size[0] > 0 else x[:, :0]
    shift = np.zeros(int(left.sum())) if offset is None else offset[left]
    if basis.shape[1] == 0:
        return float(-np.logaddexp(0, np.where(event[left], -shift, shift)).sum())
    # No intercept may be among them, so the fit goes straight to the maximum.
    from scipy.optimize import minimize

    sign = np.where(event[left], 1.0, -1.0)

    @np.errstate(over="ignore")
    def loss(b: np.ndarray) -> tuple[float, np.ndarray]:
        t = sign * (basis @ b + shift)
        return float(np.logaddexp(0, -t).sum()), -(basis.T @ (sign / (1 + np.exp(t))))

    @np.errstate(over="ignore")
    def curvature(b: np.ndarray) -> np.ndarray:
        risk = 1 / (1 + np.exp(-(basis @ b + shift)))
        return (basis.T * (risk * (1 - risk))) @ basis

    start = np.zeros(basis.shape[1])
    answer = minimize(loss, start, jac=True, hess=curvature, method="trust-exact", options={"gtol": 1e-10})
    return -float(answer.fun)
