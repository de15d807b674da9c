"""A small logistic fit of few columns to counted rows: recalibration and smooth proportions.

The study's own models are fitted by :mod:`fourfold.models`; this serves curves and checks.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray
from scipy.special import expit

Array = NDArray[np.float64]

# Beyond this many log odds from one unit of a column to the next a coefficient is running away.
RUNAWAY_ERROR = 200.0


@dataclass(frozen=True, slots=True)
class BinomialFit:
    """Maximum likelihood fit; ``converged`` is False where no finite estimate was reached."""

    coefficients: Array
    covariance: Array
    log_likelihood: float
    converged: bool


def log_likelihood(eta: Array, events: Array, people: Array) -> float:
    """Bernoulli log-likelihood of counted rows at the log odds ``eta``."""
    return float(np.sum(events * eta - people * np.logaddexp(0.0, eta)))


def binomial_fit(
    columns: Array, events: ArrayLike, people: ArrayLike, offset: Array | float = 0.0
) -> BinomialFit:
    """Fit the log odds as ``offset + columns @ coefficients`` by Newton's method.

    Parameters
    ----------
    columns : (m, k) array
        In units near 1; the check for a runaway coefficient assumes it.
    events, people : (m,) array
    offset : (m,) array or float
    """
    d, n = np.asarray(events, dtype=np.float64), np.asarray(people, dtype=np.float64)
    b = np.zeros(columns.shape[1])
    value = log_likelihood(offset + columns @ b, d, n)
    covariance = np.full((b.size, b.size), np.nan)
    decrement = np.inf
    for _ in range(60):
        risk = expit(offset + columns @ b)
        score = columns.T @ (d - n * risk)
        information = columns.T @ (columns * (n * risk * (1 - risk))[:, None])
        try:
            step = np.linalg.solve(information, score)
            covariance = np.asarray(np.linalg.inv(information), dtype=np.float64)
        except np.linalg.LinAlgError:
            return BinomialFit(b, covariance, value, False)
        if not np.all(np.isfinite(step)) or np.any(np.diag(covariance) < 0):
            return BinomialFit(b, covariance, value, False)
        # The step after a decrement this small is exact to doubles; covariance is taken there.
        settled = decrement < 1e-12
        decrement = float(score @ step)
        if settled:
            break
        size = 1.0
        # Close to the optimum the likelihood no longer tells a good step from rounding.
        if decrement > 1e-9:
            while size > 1e-9 and log_likelihood(offset + columns @ (b + size * step), d, n) < value:
                size /= 2
        b = b + size * step
        value = log_likelihood(offset + columns @ b, d, n)
    errors = np.sqrt(np.diag(covariance))
    return BinomialFit(b, covariance, value, bool(decrement < 1e-9 and errors.max() < RUNAWAY_ERROR))
