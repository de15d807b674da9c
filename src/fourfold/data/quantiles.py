"""Quantiles and spline knots of a quantity, each row counted as the people it stands for."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from fourfold.errors import DataError

Array = NDArray[np.float64]

PLACES = {
    3: (0.10, 0.50, 0.90),
    4: (0.05, 0.35, 0.65, 0.95),
    5: (0.05, 0.275, 0.50, 0.725, 0.95),
    6: (0.05, 0.23, 0.41, 0.59, 0.77, 0.95),
    7: (0.025, 0.1833, 0.3417, 0.50, 0.6583, 0.8167, 0.975),
}
"""Quantiles at which knots stand: Harrell, Regression Modeling Strategies (2015), table 2.3."""

SMALL = 100
"""With fewer people the outer knots stand at the fifth smallest and fifth largest value."""


def quantile(values: Array, places: Sequence[float], counts: NDArray[np.int64] | None = None) -> Array:
    """Quantiles of type 7 (linear between order statistics) of the values repeated ``counts`` times."""
    if counts is None:
        return np.asarray(np.quantile(values, places))
    order = np.argsort(values, kind="stable")
    ranked, ends = values[order], np.cumsum(counts[order])
    at = (int(ends[-1]) - 1) * np.asarray(places, dtype=float)
    below = np.floor(at)
    low = ranked[np.searchsorted(ends, below, side="right")]
    high = ranked[np.searchsorted(ends, np.minimum(below + 1, ends[-1] - 1), side="right")]
    return np.asarray(low + (at - below) * (high - low))


def spline_knots(
    name: str, values: Array, number: int, counts: NDArray[np.int64] | None = None
) -> tuple[float, ...]:
    """Knots of a restricted cubic spline.

    Raises
    ------
    DataError
        If the values are too few to tell the knots apart.

    References
    ----------
    Harrell (2015). Regression Modeling Strategies, 2nd edition, section 2.4.6.
    """
    people = values.size if counts is None else int(counts.sum())
    places = list(PLACES[number])
    if 2 * 5 <= people < SMALL:
        places[0], places[-1] = 4 / (people - 1), (people - 5) / (people - 1)
    knots = quantile(values, places, counts)
    # With fewer different values than knots the columns would depend on each other.
    if np.any(np.diff(knots) <= 0) or np.unique(values).size < number:
        raise DataError(
            f"{name}: a spline with {number} knots needs more different values: its knots would stand at "
            f"{', '.join(f'{knot:g}' for knot in knots)}.",
            "State fewer knots, give their places as a list, or use another shape.",
        )
    return tuple(float(knot) for knot in knots)
