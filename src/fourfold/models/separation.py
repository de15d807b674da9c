"""Separation: data for which some coefficients have no finite maximum likelihood estimate."""

from __future__ import annotations

from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray

from fourfold.models.blocks import Blocks
from fourfold.models.centring import centring
from fourfold.models.cone import POSITIVE, Cone
from fourfold.models.likelihood import Observed
from fourfold.models.logistic import Fit, climb

Array = NDArray[np.float64]
Counts = NDArray[np.int64] | NDArray[np.float64]

NONE, UPWARD, DOWNWARD, UNDIRECTED = 0, 1, -1, 2

COORDINATE = 1e-6
"""A column takes part in a direction if its share exceeds this."""

ITERATIONS = 20
"""Newton steps before the linear programme is asked instead."""


@dataclass(frozen=True, slots=True)
class Separation:
    """What the data leave without a finite estimate.

    Attributes
    ----------
    kind : str or None
        None, ``complete`` or ``quasi-complete``.
    direction : (p,) int8 array
        0 where the estimate is finite, +1 where it grows without bound, -1 where it falls without
        bound, 2 where it does either, so that no direction can be stated.
    certain : (n,) bool array
        Rows whose outcome is fitted with certainty in the limit; rows that stand for no one count
        among them.
    """

    kind: str | None
    direction: NDArray[np.int8]
    certain: NDArray[np.bool_] = field(repr=False)


def detect(
    blocks: Blocks, event: NDArray[np.bool_], counts: Counts | None = None, *, fit: Fit | None = None
) -> Separation:
    """Find out which coefficients have a finite maximum likelihood estimate.

    A converged fit proves that all have (see :func:`_proved_finite`). Where it does not, linear
    programmes over the cone of directions that lower no row's likelihood decide, and name every
    column that can be non-zero in it, not only those of one solution.

    Parameters
    ----------
    blocks : Blocks of p independent columns
    event : (n,) bool array
    counts : (n,) array, optional
        Frequency weights.
    fit : Fit, optional
        A fit of these data by ``logistic.fit``, to save making one.

    References
    ----------
    Albert & Anderson (1984). Biometrika 71, 1-10.
    Konis (2007). Thesis, University of Oxford.
    """
    absent = np.zeros(blocks.n, dtype=bool) if counts is None else np.asarray(counts == 0)
    if absent.any() and counts is not None:
        present = ~absent
        inner = detect(blocks.rows(present), event[present], counts[present])
        certain = absent.copy()
        certain[present] = inner.certain
        return Separation(inner.kind, inner.direction, certain)
    if _proved_finite(Observed(blocks, event, counts), fit):
        return Separation(None, np.zeros(blocks.p, dtype=np.int8), absent)
    return _by_programme(blocks, event)


def _proved_finite(observed: Observed, fit: Fit | None) -> bool:
    """Whether a fit proves that the maximum likelihood estimate exists.

    Let q_i be the fitted probability of what did not happen to row i, c_i its count, and suppose
    some b had v_i = s_i x_i'b >= 0 for all rows, with largest value 1. The gradient is
    U = sum c q s x, so that S = b'U = sum c q v. By Cauchy and Schwarz S^2 <= (U'I^-1U)(b'Ib), and
    b'Ib = sum c q (1 - q) v^2 <= S. Hence S <= U'I^-1U, while S is at least min c q. A decrement
    below min c q therefore leaves no such b.
    """
    blocks = observed.blocks
    if fit is not None:
        coefficients, decrement = fit.coefficients, fit.decrement
        if not (fit.converged and bool(np.isfinite(coefficients).all())):
            return False
        eta = blocks.product(coefficients)
    else:
        if observed.events in (0, observed.people):
            return False
        centred = centring(blocks)
        optimum = climb(observed, centred, iterations=ITERATIONS)
        if not optimum.converged:
            return False
        decrement = optimum.decrement
        inner = optimum.coefficients
        eta = blocks.product(inner if centred is None else centred.outward(inner))
    least_count = 1.0 if observed.counts is None else float(observed.counts.min())
    eta *= np.where(observed.event, 1.0, -1.0)
    furthest = float(eta.max())
    # A thousand times closer than the proof asks, to stay clear of rounding in the gradient.
    return furthest < 25 and decrement < 1e-3 * least_count / (1 + np.exp(furthest))


def _by_programme(blocks: Blocks, event: NDArray[np.bool_]) -> Separation:
    cone = Cone(blocks, np.where(event, 1.0, -1.0))
    certain = np.zeros(blocks.n, dtype=bool)
    found: list[Array] = []
    # Each round asks for the rows that no direction found so far moves.
    while not certain.all():
        direction = cone.furthest(cone.sum_of(~certain))
        if direction is None:
            break
        moved = cone.movement(direction) > POSITIVE
        if not (moved & ~certain).any():
            break
        certain |= moved
        found.append(direction)
    if not found:
        return Separation(None, np.zeros(blocks.p, dtype=np.int8), certain)
    signs = np.array([_sign_of(cone, column, found) for column in range(blocks.p)], dtype=np.int8)
    return Separation("complete" if certain.all() else "quasi-complete", signs, certain)


def _sign_of(cone: Cone, column: int, found: list[Array]) -> int:
    """Direction of one column over the whole cone; directions met on the way are kept."""
    objective = cone.coordinate(column)
    reached = [False, False]
    for side, towards in enumerate((objective, -objective)):
        if any(float(towards @ direction) > COORDINATE for direction in found):
            reached[side] = True
            continue
        direction = cone.furthest(towards)
        if direction is not None and float(towards @ direction) > COORDINATE:
            found.append(direction)
            reached[side] = True
    if all(reached):
        return UNDIRECTED
    return UPWARD if reached[0] else DOWNWARD if reached[1] else NONE
