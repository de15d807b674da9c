"""Which columns of a design can be computed from the others."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from fourfold.models.blocks import Blocks
from fourfold.models.centring import Centring, centring
from fourfold.models.lanes import THREADS_PAY_FROM, over_lanes
from fourfold.models.triangle import triangular_factor

Array = NDArray[np.float64]

TOLERANCE = 1e-7
"""A column is dependent if less than this share of its spread is left when the others are known."""

CLEAR_PIVOT = 1e-9
"""A pivot of the correlation matrix above this leaves no doubt in double precision."""


def dependent(
    blocks: Blocks, counts: NDArray[np.int64] | NDArray[np.float64] | None = None
) -> list[tuple[int, ...]]:
    """Find groups of columns that depend on each other exactly, up to rounding.

    The correlation matrix settles the usual case in one pass. Where it leaves doubt, the pivoted
    QR decomposition decides: W^(1/2) X has the rank of X, for weights are positive, so that the
    answer holds for the fit too.

    Parameters
    ----------
    blocks : Blocks of p columns
    counts : (n,) array, optional
        Rows that stand for no one are left out.

    Returns
    -------
    list of tuples of int
        Each a smallest set of columns of which any one can be computed from the rest; a column
        that is zero throughout stands alone, one with a single value stands with the intercept.
        Empty if all columns are independent.

    References
    ----------
    Golub & Van Loan (2013). Matrix Computations, 4th ed., section 5.4.
    """
    return sorted({tuple(sorted((column, *others))) for column, others in _relations(blocks, counts)})


def independent(blocks: Blocks, counts: NDArray[np.int64] | NDArray[np.float64] | None = None) -> list[int]:
    """Choose columns that are independent and from which all others can be computed, in order."""
    left_out = {column for column, _ in _relations(blocks, counts)}
    return [column for column in range(blocks.p) if column not in left_out]


def _relations(
    blocks: Blocks, counts: NDArray[np.int64] | NDArray[np.float64] | None
) -> list[tuple[int, tuple[int, ...]]]:
    """Each dependent column with the columns it is computed from."""
    if counts is not None and bool((counts == 0).any()):
        blocks = blocks.rows(counts > 0)
    if blocks.n == 0:
        return [(column, ()) for column in range(blocks.p)]
    centred = centring(blocks, always=True)
    mean, products = _moments(blocks, centred)
    centre = np.zeros(blocks.p) if centred is None else centred.centre + mean
    if centred is not None:
        products = products - np.outer(mean, mean)
        centred = Centring(centre, centred.intercept, centred.constant)
    spread = np.sqrt(np.maximum(np.diagonal(products), 0))
    size = np.sqrt(spread**2 + centre**2)
    if centred is not None:
        spread[centred.intercept] = abs(centred.constant)
        products[centred.intercept, :] = products[:, centred.intercept] = 0
        products[centred.intercept, centred.intercept] = centred.constant**2
    rounding = 64 * np.finfo(float).eps * size
    constant = spread <= rounding
    if not constant.any() and _clearly_independent(products / np.outer(spread, spread)):
        return []
    scale = np.where(constant, 0.0, 1 / np.where(constant, 1.0, spread)) / np.sqrt(blocks.n)
    if centred is not None:
        scale[centred.intercept] = 0.0
    factor = triangular_factor(blocks, centred, scale)
    tolerance = np.maximum(TOLERANCE, 64 * np.finfo(float).eps * size / np.where(constant, 1, spread))
    return _read_relations(factor, scale * np.sqrt(blocks.n), centred, tolerance)


def _moments(blocks: Blocks, centred: Centring | None) -> tuple[Array, Array]:
    """Means and mean products of the columns less the centre, in one pass."""
    p = blocks.p

    def lane(these: range, _: None) -> tuple[Array, Array]:
        total, products = np.zeros(p), np.zeros((p, p))
        for block in these:
            rows = blocks.array[block, :, : blocks.rows_in(block)]
            if centred is not None:
                rows = rows - centred.centre[:, None]
            total += rows.sum(axis=1)
            products += rows @ rows.T
        return total, products

    threads = 1 if blocks.n * p < THREADS_PAY_FROM else None
    lanes = over_lanes(lane, blocks.n_blocks, lambda: None, threads=threads)
    mean = sum((total for total, _ in lanes), np.zeros(p)) / blocks.n
    return mean, sum((products for _, products in lanes), np.zeros((p, p))) / blocks.n


def _clearly_independent(correlation: Array) -> bool:
    try:
        factor = np.linalg.cholesky(correlation)
    except np.linalg.LinAlgError:
        return False
    return bool(np.diagonal(factor).min() ** 2 > CLEAR_PIVOT)


def _read_relations(
    factor: Array, scale: Array, centred: Centring | None, tolerance: Array
) -> list[tuple[int, tuple[int, ...]]]:
    """Read the dependent columns off the triangular factor of the scaled columns."""
    from scipy.linalg import qr, solve_triangular

    _, reduced, order = qr(factor, mode="economic", pivoting=True)
    left = np.abs(np.diagonal(reduced))
    rank = int(np.argmax(left < tolerance[order])) if bool((left < tolerance[order]).any()) else len(left)
    independent = [int(column) for column in order[:rank]]
    relations = []
    for place in range(rank, len(order)):
        column = int(order[place])
        if centred is not None and column == centred.intercept:
            continue
        makes_up = solve_triangular(reduced[:rank, :rank], reduced[:rank, place]) if rank else np.zeros(0)
        # In units of spread: what is smaller than this is rounding.
        members = [
            int(other) for other, share in zip(independent, makes_up, strict=True) if abs(share) > 1e-6
        ]
        if centred is not None and _needs_intercept(column, independent, makes_up, scale, centred):
            members.append(centred.intercept)
        relations.append((column, tuple(members)))
    return relations


def _needs_intercept(
    column: int, independent: list[int], makes_up: Array, scale: Array, centred: Centring
) -> bool:
    """Whether a constant is part of the relation between the columns."""
    if scale[column] == 0:
        return bool(centred.centre[column] != 0)
    raw = makes_up * scale[independent] / scale[column]
    parts = raw * centred.centre[independent]
    size = abs(centred.centre[column]) + np.abs(parts).sum()
    return bool(abs(centred.centre[column] - parts.sum()) > 1e-6 * size)
