"""Can the model be trusted: discrimination, calibration, sample size, influence, collinearity."""

from __future__ import annotations

import math
from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray
from scipy.special import chdtrc, expit

from fourfold.assessment import (
    calibration,
    collinearity,
    discrimination,
    influence,
    overall,
    risk_distribution,
    sample_size,
)
from fourfold.pipeline.model_fit import FittedModel
from fourfold.results import tree

Array = NDArray[np.float64]

CASE_CONTROL = "case-control"
WITHHELD = "sampled by outcome"
"""Why a case-control study has no intercept, no risk and nothing computed from risk."""

DEFAULT_GROUPS = 10


def model_of(model: FittedModel, log_odds: Array, design: str) -> tree.Model:
    """The adjusted model as the results file holds it; no intercept for a case-control study."""
    fit, built = model.fit, model.design
    withheld = WITHHELD if design == CASE_CONTROL else None
    kept = [place for place, name in enumerate(built.parameters) if not (withheld and name == "(intercept)")]
    owner = {column: term.variable for term in built.terms for column in term.columns}
    statistic = 2 * (fit.log_likelihood - fit.null_log_likelihood)
    parameters = len(built.parameters)
    people = int(fit.n)
    squared = overall.r_squared(
        fit.log_likelihood, fit.null_log_likelihood, people, expit(log_odds), model.event, model.counts
    )
    if withheld:
        squared = tree.RSquared(
            cox_snell=squared.cox_snell, nagelkerke=squared.nagelkerke, mcfadden=squared.mcfadden, tjur=None
        )
    return tree.Model(
        parameters=[built.parameters[place] for place in kept],
        terms=[owner.get(place, "(intercept)") for place in kept],
        coding=[built.coding[place] for place in kept],
        coefficients=[_finite(fit.coefficients[place]) for place in kept],
        covariance=[[_finite(fit.covariance[row, column]) for column in kept] for row in kept],
        n=people,
        events=int(fit.events),
        log_likelihood=fit.log_likelihood,
        null_log_likelihood=fit.null_log_likelihood,
        deviance=-2 * fit.log_likelihood,
        aic=-2 * fit.log_likelihood + 2 * parameters,
        bic=-2 * fit.log_likelihood + parameters * math.log(people),
        likelihood_ratio=statistic,
        likelihood_ratio_df=parameters - 1,
        likelihood_ratio_p=float(chdtrc(parameters - 1, max(statistic, 0.0))) if parameters > 1 else None,
        converged=bool(fit.converged),
        iterations=int(fit.iterations),
        decrement=_finite(fit.decrement),
        estimator="maximum likelihood",
        r_squared=squared,
        separated=[built.parameters[place] for place in kept if model.separation.direction[place] != 0],
        separation=model.separation.kind,
        withheld=withheld,
    )


def discrimination_of(model: FittedModel, log_odds: Array, analysis: tree.Analysis) -> tree.Discrimination:
    """AUC and ROC curve of the fitted log odds on the fitting data."""
    return discrimination.discrimination(log_odds, model.event, model.counts, analysis.confidence)


def calibration_of(
    model: FittedModel, log_odds: Array, analysis: tree.Analysis, design: str, groups: int | None
) -> tree.Calibration:
    """Calibration on the fitting data; ``groups`` None lets the size of the sample decide.

    The number of groups by size keeps the power of Hosmer and Lemeshow's test steady, but with few
    events it makes groups too thin for the test: ten are then used.
    """

    def judged(number: int | None) -> tree.Calibration:
        return calibration.calibration(
            expit(log_odds),
            model.event,
            model.counts,
            groups=number,
            confidence=analysis.confidence,
            log_odds=log_odds,
            withheld=WITHHELD if design == CASE_CONTROL else None,
        )

    found = judged(groups)
    test = found.hosmer_lemeshow
    if groups is None and test is not None and test.verdict == "thin groups" and test.groups > DEFAULT_GROUPS:
        return judged(DEFAULT_GROUPS)
    return found


def risk_distribution_of(model: FittedModel, log_odds: Array, design: str) -> list[tree.RiskBin]:
    """Fitted risks by outcome; none where people were sampled by outcome."""
    if design == CASE_CONTROL:
        return []
    return risk_distribution.bins(expit(log_odds), model.event, model.counts)


def sample_size_of(model: FittedModel, analysis: tree.Analysis, design: str) -> tree.SampleSize:
    """What the size supports, counted on candidate parameters."""
    fitted = len(model.design.parameters) - 1
    return sample_size.assess(
        int(model.fit.n),
        int(model.fit.events),
        max(analysis.candidates or 0, fitted),
        fitted,
        2 * (model.fit.log_likelihood - model.fit.null_log_likelihood),
        absolute_risk=design != CASE_CONTROL,
    )


def influence_of(
    model: FittedModel, log_odds: Array, variables: Sequence[tree.Variable], analysis: tree.Analysis
) -> tree.Influence | None:
    """Influence on the exposures (or predictors); none where nothing has a finite estimate."""
    finite = model.finite_columns
    if finite.size == 0:
        return None
    led = {variable.name for variable in variables if variable.role in ("exposure", "predictor")}
    place_of = {int(column): place for place, column in enumerate(finite)}
    watched = [
        influence.Watched(model.design.parameters[column], term.variable, place_of[column])
        for term in model.design.terms
        if term.variable in led
        for column in term.columns
        if column in place_of
    ]
    return influence.influence(
        np.ascontiguousarray(model.blocks.matrix()[:, finite]),
        model.event,
        model.fit.coefficients[finite],
        model.fit.covariance[np.ix_(finite, finite)],
        watched,
        model.counts,
        log_odds=log_odds,
        confidence=analysis.confidence,
    )


def collinearity_of(model: FittedModel, variables: Sequence[tree.Variable]) -> tree.Collinearity | None:
    """Generalised variance inflation and condition index of the columns with a finite estimate."""
    finite = model.finite_columns
    place_of = {int(column): place for place, column in enumerate(finite)}
    if 0 not in place_of or finite.size < 3:
        return None
    labels = {variable.name: variable.label for variable in variables}
    terms = []
    for term in model.design.terms:
        columns = tuple(place_of[column] for column in term.columns if column in place_of)
        if columns:
            terms.append(collinearity.Term(term.variable, labels[term.variable], columns))
    return collinearity.collinearity(model.fit.covariance[np.ix_(finite, finite)], terms)


def _finite(value: float) -> float | None:
    return float(value) if math.isfinite(value) else None
