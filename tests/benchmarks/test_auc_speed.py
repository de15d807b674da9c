"""Speed of the area under the ROC curve with DeLong's error, as ratios within one run.

Run with ``pytest -m benchmark -n 0 tests/benchmarks/test_auc_speed.py -s`` on a quiet machine.
"""

from __future__ import annotations

import time
from collections.abc import Callable

import numpy as np
import pytest
from sklearn.metrics import roc_auc_score

from fourfold.assessment.discrimination import auc

pytestmark = pytest.mark.benchmark

ROWS = 1_000_000
ROUNDS = 40


def shortest(rounds: int, *jobs: Callable[[], object]) -> list[float]:
    """Shortest time of each job, taken in turn, so that a busy moment strikes all alike."""
    best = [float("inf")] * len(jobs)
    for _ in range(rounds):
        for place, job in enumerate(jobs):
            start = time.perf_counter()
            job()
            best[place] = min(best[place], time.perf_counter() - start)
    return best


@pytest.mark.parametrize("share", [0.1, 0.3, 0.5])
def test_area_costs_little_more_than_a_sort(share: float):
    rng = np.random.default_rng(20)
    event = rng.random(ROWS) < share
    score = rng.normal(size=ROWS) + 0.8 * event
    compiled, plain = auc(score, event, engine="compiled"), auc(score, event, engine="numpy")
    assert plain.estimate == pytest.approx(roc_auc_score(event, score), rel=1e-12)
    assert compiled.standard_error == pytest.approx(plain.standard_error, rel=1e-10)
    order, in_numpy, in_numba = shortest(
        ROUNDS,
        lambda: np.argsort(score),
        lambda: auc(score, event, engine="numpy"),
        lambda: auc(score, event, engine="compiled"),
    )
    theirs, beside = shortest(
        5, lambda: roc_auc_score(event, score), lambda: auc(score, event, engine="numpy")
    )
    print(
        f"\n{share:.0%} with the event: argsort {order * 1e3:.1f} ms; numpy {in_numpy / order:.2f} and "
        f"compiled {in_numba / order:.2f} of it; scikit-learn's area {theirs / beside:.1f} times numpy's"
    )
    assert in_numpy <= 1.5 * order
    assert in_numba <= 0.5 * order
    assert theirs >= 3.5 * beside
