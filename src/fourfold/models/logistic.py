"""Maximum likelihood for the logistic model."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from fourfold.errors import EstimationError
from fourfold.models import rank
from fourfold.models.blocks import Blocks
from fourfold.models.centring import Centring, centring, constant_column
from fourfold.models.likelihood import LogLikelihood, Observed, Part
from fourfold.models.newton import ITERATIONS, Curvature, Optimum, maximise
from fourfold.models.triangle import triangular_factor

Array = NDArray[np.float64]
Counts = NDArray[np.int64] | NDArray[np.float64]

WARM_FROM = 50_000
"""Rows from which a fit to a part of them gives the start."""

PART = 16
"""The part is one row in so many."""

EVENTS_PER_COLUMN = 5
"""Rows with, and rows without the event, needed too."""

NEARLY_DEPENDENT = 1e-6
"""Pivots of the scaled information below this cost more digits than an answer should lose."""

ROWS_PER_COLUMN = 100
"""Rows of the part needed for each column: with few, its estimate is a worse start than none."""


@dataclass(frozen=True, slots=True)
class Fit:
    """A fitted logistic model.

    Attributes
    ----------
    coefficients : (p,) float array
        Log odds ratios per unit of each column. At the boundary (see ``limits``): +inf or -inf for a
        column without finite estimate, NaN where it has no direction.
    covariance : (p, p) float array
        Inverse of the information at the optimum; NaN for columns without finite estimate.
    log_likelihood : float
        Of the Bernoulli form, so that grouped rows and single rows agree.
    null_log_likelihood : float
        Of the intercept alone (and the offset, if there is one).
    n : int
        People: rows counted by their frequency.
    events : int
        People with the event.
    converged : bool
    iterations : int
        Evaluations of the information matrix over all rows.
    decrement : float
        U' I^-1 U at the coefficients.
    limit_point : (p,) float array or None
        At the boundary: finite coefficients that give the rows not fitted with certainty their
        linear predictor.
    """

    coefficients: Array
    covariance: Array
    log_likelihood: float
    null_log_likelihood: float
    n: int
    events: int
    converged: bool
    iterations: int
    decrement: float
    limit_point: Array | None = None


def fit(
    blocks: Blocks,
    event: NDArray[np.bool_],
    *,
    counts: Counts | None = None,
    offset: Array | None = None,
    start: Array | None = None,
    engine: str = "auto",
) -> Fit:
    """Fit a logistic model by maximum likelihood.

    Newton's method over chunks of rows; stops when U' I^-1 U < 1e-12 max(1, |l|). The caller has made
    sure that columns are independent (``rank``) and that an estimate exists (``separation``).

    Parameters
    ----------
    blocks : Blocks of p columns
    event : (n,) bool array
    counts : (n,) array, optional
        Frequency weights: how many people each row stands for.
    offset : (n,) float array, optional
        Added to the linear predictor, on the log odds scale.
    start : (p,) float array, optional
    engine : str
        ``numpy``, ``compiled`` or ``auto``: compiled where it is installed and pays.

    Raises
    ------
    EstimationError
        If everyone or no one has the event, or the columns are so dependent that no step exists.
    """
    observed = Observed(blocks, event, counts, offset)
    check_contrast(observed)
    centred = centring(blocks)
    optimum = climb(observed, centred, start, engine=engine)
    if not optimum.converged and rank.dependent(blocks, counts):
        raise EstimationError(
            "No estimate exists: some columns of the model can be computed from the others.",
            "Remove variables that carry the same information.",
        )
    return finished(observed, optimum, centred)


def climb(
    observed: Observed,
    centred: Centring | None,
    start: Array | None = None,
    *,
    iterations: int = ITERATIONS,
    engine: str = "auto",
) -> Optimum:
    """The maximum in terms of the centred columns, from a start on the user's scale."""
    evaluate = LogLikelihood(observed, None if centred is None else centred.centre, engine=engine)
    if start is None:
        first = _start(observed, evaluate)
    else:
        first = start if centred is None else centred.inward(start)
    # Eleven digits of the covariance where passes are cheap, nine where they are not.
    settled = 1e-22 if observed.blocks.n < WARM_FROM else 1e-18
    return maximise(evaluate, first, observed.people, evaluate.bound, iterations=iterations, settled=settled)


def check_contrast(observed: Observed) -> None:
    """Refuse data in which everyone or no one has the event."""
    events, people = observed.events, observed.people
    if people <= 0:
        raise EstimationError(
            "No one is left to analyse.",
            "Look at the exclusions and at missing values in the flow of participants.",
        )
    if events in (0, people):
        who = "No one" if events == 0 else "Everyone"
        raise EstimationError(
            f"{who} of the {people:.0f} in the analysis set has the event: no odds ratio can be estimated.",
            "Check how the outcome is coded and which rows the exclusions and missing values leave.",
        )


def _start(observed: Observed, evaluate: LogLikelihood) -> Array:
    """Coefficients to start from: a fit to part of the rows where there are many."""
    cold = np.zeros(observed.blocks.p)
    intercept = constant_column(observed.blocks)
    if intercept is not None:
        cold[intercept] = _log_odds_less_offset(observed) / observed.blocks.array[0, intercept, 0]
    part = _part(observed.blocks)
    if part is None:
        return cold
    rows, events = observed.size_of(part)
    if min(events, rows - events) < EVENTS_PER_COLUMN * observed.blocks.p:
        return cold
    share_of_rows = observed.blocks.n / rows
    of_part = LogLikelihood(observed, evaluate.centre, part, evaluate.engine)
    people = observed.people / share_of_rows
    approach = maximise(of_part, cold, people, of_part.bound, enough=0.1, iterations=15)
    curvature = Curvature.of(approach.sums.information * share_of_rows)
    if not approach.converged or curvature is None:
        return cold
    return _approach(evaluate, approach.coefficients, curvature, observed.people)


def _log_odds_less_offset(observed: Observed) -> float:
    """The intercept of the null model, but for the offset's spread."""
    share = observed.events / observed.people
    log_odds = float(np.log(share / (1 - share)))
    if observed.offset is None:
        return log_odds
    return log_odds - float(np.average(observed.offset, weights=observed.counts))


def _part(blocks: Blocks) -> Part | None:
    """Which rows give the start; None if all should."""
    if blocks.n < WARM_FROM or blocks.n // PART < ROWS_PER_COLUMN * blocks.p:
        return None
    rows = min(blocks.width, max(512, blocks.width // PART))
    return Part(rows, max(1, PART * rows // blocks.width))


def _approach(evaluate: LogLikelihood, start: Array, curvature: Curvature, people: float) -> Array:
    """Go on with the part's curvature and the gradient of all rows: cheap passes, good steps."""
    best, last = start, np.inf
    coefficients = start
    for _ in range(4):
        gradient = evaluate(coefficients, information=False).gradient
        whitened = curvature.whiten(gradient)
        decrement = float(whitened @ whitened)
        if not decrement < last / 2:
            return best
        best = coefficients
        coefficients = coefficients + curvature.solve(gradient)
        rate = min(1.0, decrement / last) if np.isfinite(last) else 0.01
        # From here one step with all rows' own curvature reaches the maximum to nine digits.
        if decrement * rate < 1e-9 * people:
            return coefficients
        last = decrement
    return coefficients


def finished(observed: Observed, optimum: Optimum, centred: Centring | None) -> Fit:
    """The fit at an optimum, back on the scale of the user's columns."""
    coefficients = optimum.coefficients
    covariance = _covariance(observed, optimum, centred)
    if centred is not None:
        coefficients = centred.outward(coefficients)
        covariance = centred.outward_covariance(covariance)
    return Fit(
        coefficients=coefficients,
        covariance=covariance,
        log_likelihood=optimum.sums.log_likelihood,
        null_log_likelihood=null_log_likelihood(observed),
        n=round(observed.people),
        events=round(observed.events),
        converged=optimum.converged,
        iterations=optimum.iterations,
        decrement=optimum.decrement,
    )


def _covariance(observed: Observed, optimum: Optimum, centred: Centring | None) -> Array:
    """Inverse information in terms of the centred columns.

    Where columns are nearly dependent, the information has lost digits that the rows still have:
    then it is rebuilt from the triangular factor of the weighted rows.
    """
    information = optimum.sums.information
    curvature = Curvature.of(information)
    if curvature is not None and curvature.smallest_pivot > NEARLY_DEPENDENT:
        return curvature.inverse()
    diagonal = np.diagonal(information)
    if not bool(np.all(diagonal > 0)):
        return np.full(information.shape, np.nan)
    blocks = observed.blocks
    outer = optimum.coefficients if centred is None else centred.outward(optimum.coefficients)

    def root_weight(block: int) -> Array:
        rows = slice(block * blocks.width, block * blocks.width + blocks.rows_in(block))
        eta = outer @ blocks.array[block, :, : blocks.rows_in(block)]
        if observed.offset is not None:
            eta = eta + observed.offset[rows]
        smaller = np.exp(-np.abs(eta))
        root = np.sqrt(smaller) / (1 + smaller)
        return np.asarray(root if observed.counts is None else root * np.sqrt(observed.counts[rows]))

    scale = 1 / np.sqrt(diagonal)
    factor = triangular_factor(blocks, centred, scale, root_weight)
    try:
        half = np.linalg.inv(factor) * scale[:, None]
    except np.linalg.LinAlgError:
        return np.full(information.shape, np.nan)
    return np.asarray(half @ half.T)


def null_log_likelihood(observed: Observed) -> float:
    """Log-likelihood of the intercept alone: d log(d/n) + (n - d) log(1 - d/n) without an offset."""
    if observed.offset is None:
        d, n = observed.events, observed.people
        if d in (0, n):
            return 0.0
        return float(d * np.log(d / n) + (n - d) * np.log1p(-d / n))
    alone = Observed(
        Blocks.from_matrix(np.ones((observed.blocks.n, 1))), observed.event, observed.counts, observed.offset
    )
    start = np.array([_log_odds_less_offset(observed)])
    evaluate = LogLikelihood(alone)
    return maximise(evaluate, start, observed.people, evaluate.bound).sums.log_likelihood
