"""Can the model be trusted: discrimination, calibration, sample size, influence, collinearity."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray
from scipy.special import expit

from fourfold.assessment import (
    calibration,
    collinearity,
    discrimination,
    hosmer_lemeshow,
    influence,
    overall,
    risk_distribution,
    sample_size,
)
from fourfold.pipeline.model_fit import FittedModel
from fourfold.results import tree

CASE_CONTROL = "case-control"


def fitted_risk(model: FittedModel) -> NDArray[np.float64]:
    """Fitted probability of each row; exactly 0 or 1 where separation makes it certain."""
    return np.asarray(expit(model.linear_predictor()), dtype=np.float64)
