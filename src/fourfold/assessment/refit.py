"""Exact refits of a logistic model without one person, started from the one-step answer.

Many such refits are advanced together: each pass over the rows serves all of them.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy.special import expit

Array = NDArray[np.float64]
Integers = NDArray[np.int64]

CHUNK = 65_536
# Below this much arithmetic a pass, every refit has its own exact information matrix.
SMALL = 20_000_000
# Below this, one last pass for the exact information at the end is worth its time.
AFFORDABLE = 1_000_000_000
# A standard error a hundred times that of the whole fit: without this person the data separate.
LEAST_INFORMATION = 1e-4


@dataclass(frozen=True, slots=True)
class Refits:
    """Coefficients and covariances without each left-out person; nan where none was reached."""

    coefficients: Array
    covariances: Array
    converged: NDArray[np.bool_]


def refit_without(
    X: Array,
    event: Array,
    people: Array,
    offset: Array,
    rows: Integers,
    start: Array,
    information: Array,
) -> Refits:
    """Refit with one person of each of ``rows`` left out.

    Parameters
    ----------
    X : (n, p) array
    event, people, offset : (n,) array
    rows : (r,) int array
    start : (r, p) array
        Warm start of each refit.
    information : (p, p) array
        X'WX of the whole fit.

    Returns
    -------
    Refits
        To a decrement of 1e-16: Newton for small data; for large data its step uses the whole
        fit's information less the person's own, which one person hardly changes.
    """
    b = start.copy()
    p = X.shape[1]
    exact = rows.size * X.shape[0] * p * p <= SMALL
    weight = _weight(X[rows], offset[rows], b)
    held = information - weight[:, None, None] * X[rows][:, :, None] * X[rows][:, None, :]
    done = np.zeros(rows.size, dtype=bool)
    for _ in range(60):
        score, own = _pass(X, event, people, offset, rows, b, exact)
        if exact:
            held = own
        step = _solve(held, score)
        decrement = np.einsum("ri,ri->r", score, step)
        # Near separation without that person a step may overshoot: hold it to a few log odds.
        size = np.sqrt(np.maximum(np.einsum("ri,ij,rj->r", step, information, step), 0.0))
        b = b + step * np.minimum(1.0, 20.0 / np.maximum(size, 1e-300))[:, None]
        done = (decrement >= 0) & (decrement < 1e-16)
        if done.all():
            break
    exact = rows.size * X.shape[0] * p * p <= AFFORDABLE
    final = _pass(X, event, people, offset, rows, b, True)[1] if exact else held
    done &= _determined(final, information)
    covariances = np.full_like(final, np.nan)
    covariances[done] = np.linalg.inv(final[done])
    b[~done] = np.nan
    return Refits(b, covariances, done)


def _determined(final: Array, information: Array) -> NDArray[np.bool_]:
    """Is there a finite estimate: does every direction keep some of the whole fit's information?"""
    half = np.linalg.inv(np.linalg.cholesky(information))
    relative = half @ final @ half.T
    finite = np.isfinite(relative).all(axis=(1, 2))
    least = np.zeros(finite.size)
    least[finite] = np.linalg.eigvalsh(relative[finite])[:, 0]
    return np.asarray(least > LEAST_INFORMATION)


def _weight(x: Array, offset: Array, b: Array) -> Array:
    risk = expit(offset + np.einsum("ri,ri->r", x, b))
    return np.asarray(risk * (1 - risk))


def _pass(
    X: Array, event: Array, people: Array, offset: Array, rows: Integers, b: Array, exact: bool
) -> tuple[Array, Array]:
    p = X.shape[1]
    score = np.zeros((rows.size, p))
    information = np.zeros((rows.size, p, p)) if exact else np.zeros((0, p, p))
    for begin in range(0, X.shape[0], CHUNK):
        part = slice(begin, begin + CHUNK)
        x = X[part]
        risk = expit(x @ b.T + offset[part, None])
        score += ((event[part, None] - risk) * people[part, None]).T @ x
        if exact:
            for place in range(rows.size):
                w = risk[:, place] * (1 - risk[:, place]) * people[part]
                information[place] += (x * w[:, None]).T @ x
    x = X[rows]
    risk = expit(np.einsum("ri,ri->r", x, b) + offset[rows])
    score -= x * (event[rows] - risk)[:, None]
    if exact:
        information -= (risk * (1 - risk))[:, None, None] * x[:, :, None] * x[:, None, :]
    return score, information


def _solve(matrices: Array, right: Array) -> Array:
    try:
        return np.asarray(np.linalg.solve(matrices, right[:, :, None])[:, :, 0])
    except np.linalg.LinAlgError:
        return np.asarray(np.einsum("rij,rj->ri", np.linalg.pinv(matrices, hermitian=True), right))
