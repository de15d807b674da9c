"""Calibration, put together: groups, curve, overall error, and what the design withholds."""

from __future__ import annotations

import math

import numpy as np
from numpy.typing import NDArray
from scipy.special import logit

from fourfold.assessment import overall
from fourfold.assessment.hosmer_lemeshow import hosmer_lemeshow
from fourfold.assessment.recalibration import in_the_large, observed_expected, recalibrate, slope
from fourfold.assessment.smooth_calibration import smooth_curve
from fourfold.results import tree

Array = NDArray[np.float64]
Integers = NDArray[np.int64]

__all__ = [
    "calibration",
    "in_the_large",
    "observed_expected",
    "recalibrate",
    "slope",
    "smooth_curve",
]


def calibration(
    risk: Array,
    event: NDArray[np.bool_],
    counts: Integers | None = None,
    *,
    groups: int | None = 10,
    confidence: float = 95.0,
    new_data: bool = False,
    log_odds: Array | None = None,
    withheld: str | None = None,
) -> tree.Calibration:
    """Everything about calibration that the data at hand can tell.

    Parameters
    ----------
    risk : (n,) float array
        Fitted risks.
    event : (n,) bool array
    counts : (n,) int array, optional
    groups : int or None
        For Hosmer-Lemeshow; None chooses by the size of the sample.
    confidence : float
        In percent.
    new_data : bool
        True for data that did not fit the model: in the large and slope are then given.
    log_odds : (n,) float array, optional
        Of the risks; computed from them where not given.
    withheld : str, optional
        Why absolute risk means nothing here (sampling by outcome). Brier score, Spiegelhalter's
        z, in the large and the curve are then left out; the groups remain as a check of fit.
    """
    test, table = hosmer_lemeshow(risk, event, groups, new_data, counts, confidence)
    basis = "new data" if new_data else "fitting data"
    large = stretch = None
    if new_data:
        eta = logit(risk) if log_odds is None else log_odds
        found = recalibrate(eta, event, counts)
        stretch = _known(found.slope)
        large = _known(found.in_the_large) if withheld is None else None
    if withheld is not None:
        return tree.Calibration(
            basis=basis,
            brier=None,
            scaled_brier=None,
            spiegelhalter_z=None,
            spiegelhalter_p=None,
            in_the_large=None,
            slope=stretch,
            groups=table,
            hosmer_lemeshow=test,
            curve=[],
            curve_method="",
            withheld=withheld,
        )
    curve = smooth_curve(risk, event, counts, confidence=confidence)
    z, p = overall.spiegelhalter(risk, event, counts)
    return tree.Calibration(
        basis=basis,
        brier=overall.brier(risk, event, counts),
        scaled_brier=overall.scaled_brier(risk, event, counts),
        spiegelhalter_z=z,
        spiegelhalter_p=p,
        in_the_large=large,
        slope=stretch,
        groups=table,
        hosmer_lemeshow=test,
        curve=curve.curve,
        curve_method=curve.method,
        ici=curve.ici,
        e50=curve.e50,
        e90=curve.e90,
        emax=curve.emax,
    )


def _known(value: float) -> float | None:
    return value if math.isfinite(value) else None
