"""Overall accuracy of fitted risks: Brier score, Spiegelhalter's z, and measures like R squared."""

from __future__ import annotations

import math

import numpy as np
from numpy.typing import NDArray
from scipy.special import ndtr

from fourfold.results import tree

Array = NDArray[np.float64]
Integers = NDArray[np.int64]


def brier(risk: Array, event: NDArray[np.bool_], counts: Integers | None = None) -> float:
    """Mean squared distance of fitted risk from outcome.

    References
    ----------
    Brier (1950). Mon Weather Rev 78, 1-3.
    """
    return float(np.average((event - risk) ** 2, weights=counts))


def scaled_brier(risk: Array, event: NDArray[np.bool_], counts: Integers | None = None) -> float | None:
    """One less the Brier score over that of the overall share; None if the outcome never varies."""
    share = float(np.average(event, weights=counts))
    if share in (0.0, 1.0):
        return None
    return 1 - brier(risk, event, counts) / (share * (1 - share))


def spiegelhalter(
    risk: Array, event: NDArray[np.bool_], counts: Integers | None = None
) -> tuple[float | None, float | None]:
    """Spiegelhalter's z of the Brier score and its two-sided P.

    None where every risk is 0, 1 or one half: the score then has no variance to compare with.

    References
    ----------
    Spiegelhalter (1986). Stat Med 5, 421-433.
    """
    weight = np.ones(risk.size) if counts is None else counts
    tilt = 1 - 2 * risk
    variance = float(weight @ (tilt**2 * risk * (1 - risk)))
    if variance <= 0:
        return None, None
    z = float(weight @ ((event - risk) * tilt)) / math.sqrt(variance)
    return z, float(2 * ndtr(-abs(z)))


def r_squared(
    log_likelihood: float,
    null_log_likelihood: float,
    people: int,
    risk: Array,
    event: NDArray[np.bool_],
    counts: Integers | None = None,
) -> tree.RSquared:
    """Cox-Snell, Nagelkerke, McFadden and Tjur.

    References
    ----------
    Nagelkerke (1991). Biometrika 78, 691-692.
    Tjur (2009). Am Stat 63, 366-372.
    """
    ratio = 2 * (log_likelihood - null_log_likelihood)
    cox_snell = -math.expm1(-ratio / people)
    largest = -math.expm1(2 * null_log_likelihood / people)
    weight = np.ones(risk.size) if counts is None else counts
    with_event = float(np.average(risk, weights=weight * event))
    without = float(np.average(risk, weights=weight * ~event))
    return tree.RSquared(
        cox_snell=cox_snell,
        nagelkerke=cox_snell / largest,
        mcfadden=1 - log_likelihood / null_log_likelihood,
        tjur=with_event - without,
    )
