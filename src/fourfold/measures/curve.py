"""The odds ratio of a shaped quantity along its range, against one reference value."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from fourfold.measures.proportion import normal_quantile
from fourfold.results import tree

Array = NDArray[np.float64]


def odds_ratio_curve(
    at: Array,
    basis: Array,
    basis_reference: Array,
    coefficients: Array,
    covariance: Array,
    confidence: float = 95.0,
) -> list[tree.CurvePoint]:
    """Odds at each value against odds at the reference, with a pointwise Wald band.

    Parameters
    ----------
    at : (m,) array
        Values of the quantity, in its unit.
    basis : (m, k) array
        Columns of the shaped term at those values.
    basis_reference : (k,) or (1, k) array
        The same columns at the reference value.
    coefficients : (k,) array
    covariance : (k, k) array
        Of the term's coefficients alone.
    confidence : float
        In percent.

    Returns
    -------
    list of tree.CurvePoint
        ``y``, ``lower`` and ``upper`` are odds ratios; all are 1 at the reference itself.
    """
    step = np.asarray(basis, dtype=np.float64) - np.reshape(basis_reference, (1, -1))
    log_ratio = step @ coefficients
    # A quadratic form can come out at -1e-20 beside the reference.
    variance = np.maximum(np.einsum("ij,jk,ik->i", step, covariance, step), 0.0)
    half = normal_quantile(confidence) * np.sqrt(variance)
    with np.errstate(over="ignore"):
        ratio, lower, upper = np.exp(log_ratio), np.exp(log_ratio - half), np.exp(log_ratio + half)
    return [
        tree.CurvePoint(
            x=float(x),
            y=float(y),
            lower=float(low) if np.isfinite(low) else None,
            upper=float(high) if np.isfinite(high) else None,
        )
        for x, y, low, high in zip(at, ratio, lower, upper, strict=True)
        if np.isfinite(y)
    ]
