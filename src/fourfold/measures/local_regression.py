"""Local quadratic regression of a proportion on a score (tricube weights, nearest neighbours)."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from fourfold.measures.tally import Tally

Array = NDArray[np.float64]

# Cells of the weight matrix held at a time: 4 MB of doubles for each of a handful of arrays.
CELLS = 500_000


@dataclass(frozen=True, slots=True)
class LocalFit:
    """Fitted values and, for a variance, the squared weights of the data in each of them."""

    fitted: Array
    variance: Array


def local_regression(
    tally: Tally,
    at: Array,
    span: float = 0.75,
    degree: int = 2,
    spread: Array | None = None,
) -> LocalFit:
    """Smooth the proportion with the event at the points ``at``, solved directly at each.

    Parameters
    ----------
    tally : Tally
        At least two distinct values.
    at : (k,) array
    span : float
        Share of people in each neighbourhood.
    degree : int
        Of the local polynomial.
    spread : (m,) array, optional
        Variance of one person's outcome at each value of ``tally``, for the fitted values'
        variance; without it the variance is nan.

    References
    ----------
    Cleveland & Devlin (1988). J Am Stat Assoc 83, 596-610.
    """
    x, people = tally.values, tally.people.astype(np.float64)
    share = tally.events / people
    reach = _reach(tally, at, max(int(tally.total * span + 1e-5), 1))
    fitted, variance = np.empty(at.size), np.full(at.size, np.nan)
    for part in _parts(at.size, x.size):
        t = (x[None, :] - at[part, None]) / reach[part, None]
        weight = np.clip(1 - np.abs(t) ** 3, 0.0, None) ** 3 * people
        powers = np.stack([t**power for power in range(degree + 1)], axis=1)
        weighted = powers * weight[:, None, :]
        moments = weighted @ powers.transpose(0, 2, 1)
        scale = moments[:, 0, 0].copy()
        # Few distinct values in reach leave the polynomial undetermined: the shortest solution.
        inverse = np.linalg.pinv(moments / scale[:, None, None], rcond=1e-10, hermitian=True)
        own = np.einsum("ir,irm->im", inverse[:, 0, :], weighted) / scale[:, None]
        fitted[part] = own @ share
        if spread is not None:
            variance[part] = own**2 @ (spread / people)
    return LocalFit(fitted, variance)


def _reach(tally: Tally, at: Array, nearest: int) -> Array:
    """Distance from each point to its ``nearest``-th nearest person."""
    total = tally.total
    nearest = min(nearest, total)
    # The nearest people are neighbours in order: the window whose two ends are equally far is
    # found by one search among the windows' midpoints.
    ordered = np.repeat(tally.values, tally.people)
    first, last = ordered[: total - nearest + 1], ordered[nearest - 1 :]
    place = np.searchsorted((first + last) / 2, at)
    candidates = np.stack([np.clip(place - 1, 0, first.size - 1), np.clip(place, 0, first.size - 1)])
    ends = np.maximum(at - first[candidates], last[candidates] - at)
    reach = ends.min(axis=0)
    # All the nearest tied with the point itself: reach to the next distinct value instead.
    tied = reach <= 0
    if tied.any():
        distance = np.abs(tally.values[None, :] - at[tied, None])
        distance[distance == 0] = np.inf
        reach[tied] = distance.min(axis=1)
    return np.asarray(reach)


def _parts(points: int, values: int) -> Iterator[slice]:
    size = max(1, CELLS // max(values, 1))
    for start in range(0, points, size):
        yield slice(start, min(points, start + size))
