"""The fit in the limit: what separated data still determine.

Where some coefficients have no finite estimate, the log-likelihood still has a finite supremum.
It is approached along a direction that fits some rows with certainty; the other rows are fitted
as usual, less the columns that no longer vary freely among them, and every coefficient that the
direction leaves alone has its ordinary estimate there.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from fourfold.models import rank
from fourfold.models.blocks import Blocks
from fourfold.models.centring import centring
from fourfold.models.likelihood import Observed
from fourfold.models.logistic import Fit, climb, finished, null_log_likelihood
from fourfold.models.separation import Separation

Array = NDArray[np.float64]
Counts = NDArray[np.int64] | NDArray[np.float64]


@dataclass(frozen=True, slots=True)
class Remainder:
    """The rows and columns that a separated model still fits.

    Attributes
    ----------
    observed : Observed
        Rows not fitted with certainty, and independent columns of theirs.
    columns : list of int
        Those columns' places in the whole design.
    """

    observed: Observed
    columns: list[int]

    def fit(self) -> Fit:
        """The ordinary fit of the remainder."""
        centred = centring(self.observed.blocks)
        return finished(self.observed, climb(self.observed, centred), centred)


def remainder(
    blocks: Blocks, event: NDArray[np.bool_], separation: Separation, counts: Counts | None = None
) -> Remainder | None:
    """Rows and columns left to fit; None if every row is fitted with certainty, or no column is left."""
    rows = ~separation.certain
    if not rows.any():
        return None
    left = blocks.rows(rows)
    columns = rank.independent(left)
    if not columns:
        return None
    observed = Observed(left.columns(columns), event[rows], None if counts is None else counts[rows])
    return Remainder(observed, columns)


def fit_at_limit(
    blocks: Blocks, event: NDArray[np.bool_], separation: Separation, counts: Counts | None = None
) -> Fit:
    """Fit a separated model at its supremum.

    Parameters
    ----------
    blocks : Blocks of p columns
    event : (n,) bool array
    separation : Separation
        As found by ``separation.detect`` in these data.
    counts : (n,) array, optional

    Returns
    -------
    Fit
        ``log_likelihood`` is the supremum. Coefficients without finite estimate are +inf, -inf, or
        NaN where no direction can be stated; their rows and columns of the covariance are NaN.

    References
    ----------
    Albert & Anderson (1984). Biometrika 71, 1-10.
    """
    whole = Observed(blocks, event, counts)
    p = blocks.p
    point = np.zeros(p)
    covariance = np.full((p, p), np.nan)
    left = remainder(blocks, event, separation, counts)
    if left is None:
        undecided = ~separation.certain
        tossed = undecided.sum() if counts is None else counts[undecided].sum()
        # Rows whose columns are all zero have risk 1/2 whatever the coefficients.
        log_likelihood, iterations, decrement, converged = -float(tossed) * np.log(2.0), 0, 0.0, True
    else:
        inner = left.fit()
        point[left.columns] = inner.coefficients
        covariance[np.ix_(left.columns, left.columns)] = inner.covariance
        log_likelihood, iterations = inner.log_likelihood, inner.iterations
        decrement, converged = inner.decrement, inner.converged
    infinite = separation.direction != 0
    covariance[infinite, :] = covariance[:, infinite] = np.nan
    coefficients = np.where(infinite, _infinite(separation.direction), point)
    return Fit(
        coefficients=coefficients,
        covariance=covariance,
        log_likelihood=log_likelihood,
        null_log_likelihood=null_log_likelihood(whole),
        n=round(whole.people),
        events=round(whole.events),
        converged=converged,
        iterations=iterations,
        decrement=decrement,
        limit_point=point,
    )


def _infinite(direction: NDArray[np.int8]) -> Array:
    return np.select([direction == 1, direction == -1], [np.inf, -np.inf], np.nan)


def linear_predictor(blocks: Blocks, event: NDArray[np.bool_], fit: Fit, separation: Separation) -> Array:
    """Log odds of every row in the limit, shape (n,); infinite where the fit is certain."""
    point = fit.coefficients if fit.limit_point is None else fit.limit_point
    eta = blocks.product(point)
    return np.where(separation.certain, np.where(event, np.inf, -np.inf), eta)
