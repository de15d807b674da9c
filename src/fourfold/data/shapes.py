"""How a quantity enters a model: straight, squared too, by its logarithm, or as a spline."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]


def columns_of(x: Array, shape: str, *, centre: float = 0.0, knots: Sequence[float] = ()) -> Array:
    """Model columns of a quantity.

    Parameters
    ----------
    x : (m,) array
    shape : str
        ``linear``: x. ``log2``: log2 x. ``quadratic``: x - centre and its square. ``spline``: the
        restricted cubic spline with ``knots``.

    Returns
    -------
    (m, k) array
    """
    if shape == "log2":
        return np.log2(x)[:, None]
    if shape == "quadratic":
        return np.column_stack([x - centre, (x - centre) ** 2])
    if shape == "spline":
        return restricted_cubic_spline(x, knots)
    return np.asarray(x, dtype=float)[:, None]


def restricted_cubic_spline(x: Array, knots: Sequence[float]) -> Array:
    """Cubic between the knots, straight beyond the outer ones.

    Parameters
    ----------
    x : (m,) array
    knots : K increasing numbers, K >= 3

    Returns
    -------
    (m, K - 1) array
        x itself, then K - 2 curved columns in the unit of x.

    References
    ----------
    Harrell (2015). Regression Modeling Strategies, 2nd edition, section 2.4.5.
    """
    t = np.asarray(knots, dtype=float)
    last, before = t[-1], t[-2]
    cubes = np.maximum(x[:, None] - t, 0.0) ** 3
    first = t[:-2]
    curved = (
        cubes[:, :-2]
        - cubes[:, -2:-1] * ((last - first) / (last - before))
        + cubes[:, -1:] * ((before - first) / (last - before))
    ) / (last - t[0]) ** 2
    return np.column_stack([x, curved])
