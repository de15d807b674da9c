"""Newton's method with step-halving, stopped by the Newton decrement."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from fourfold.models.likelihood import Sums

Array = NDArray[np.float64]
Evaluate = Callable[[Array], Sums]

ITERATIONS = 50
HALVINGS = 30

SINGULAR = 1e-14
"""Pivots of a scaled information matrix below this are rounding: the columns depend on each other
to 1e-7 of their spread (``rank.TOLERANCE``)."""


@dataclass(frozen=True, slots=True)
class Curvature:
    """An information matrix scaled to a unit diagonal and factored: D I D = L L'.

    Scaling first makes the factor as accurate for grams beside years as for alike columns.
    """

    scale: Array
    factor: Array

    @classmethod
    def of(cls, information: Array) -> Curvature | None:
        """Factor an information matrix; None if it is singular but for rounding."""
        diagonal = np.diagonal(information)
        if not bool(np.all(diagonal > 0) and np.all(np.isfinite(information))):
            return None
        scale = np.asarray(1 / np.sqrt(diagonal), dtype=np.float64)
        try:
            factor = np.linalg.cholesky(information * scale[:, None] * scale)
        except np.linalg.LinAlgError:
            return None
        if float(np.diagonal(factor).min()) ** 2 < SINGULAR:
            return None
        return cls(scale, np.asarray(factor, dtype=np.float64))

    def whiten(self, vector: Array) -> Array:
        """L^-1 D v: its square is v' I^-1 v."""
        return np.asarray(np.linalg.solve(self.factor, vector * self.scale))

    def solve(self, vector: Array) -> Array:
        """I^-1 v."""
        return np.asarray(np.linalg.solve(self.factor.T, self.whiten(vector)) * self.scale)

    def inverse(self) -> Array:
        """I^-1, exactly symmetric."""
        half = np.linalg.inv(self.factor)
        return np.asarray((half.T @ half) * self.scale[:, None] * self.scale)

    @property
    def smallest_pivot(self) -> float:
        """Least share of a column's information that the columns before it leave to it."""
        return float(np.diagonal(self.factor).min() ** 2)


@dataclass(frozen=True, slots=True)
class Optimum:
    """Where Newton's method stopped.

    Attributes
    ----------
    coefficients : (p,) float array
    sums : Sums
        Log-likelihood, gradient and information there.
    decrement : float
        U' I^-1 U there: twice the rise of the log-likelihood still to be had; NaN if the
        information is singular.
    iterations : int
        Evaluations of the information.
    converged : bool
    """

    coefficients: Array
    sums: Sums
    decrement: float
    iterations: int
    converged: bool


def maximise(
    evaluate: Evaluate,
    start: Array,
    people: float,
    *,
    free: NDArray[np.intp] | None = None,
    iterations: int = ITERATIONS,
    enough: float | None = None,
    settled: float = 1e-22,
) -> Optimum:
    """Climb to the maximum of a concave log-likelihood.

    Stops when the decrement U' I^-1 U is below 1e-12 max(1, |l|), which no change of units
    moves. One step more is taken where the decrement is above ``settled`` times the number of
    people: the information is then still off by about the square root of ``settled``.

    Parameters
    ----------
    start : (p,) float array
    people : float
        Rows, counted by their frequency.
    free : array of int or None
        Coefficients that may move; None for all.
    enough : float or None
        A looser bound on the decrement, for a first approach.
    """
    everywhere = np.arange(len(start)) if free is None else free
    coefficients = start.copy()
    sums = evaluate(coefficients)
    extra_step_taken = False
    for iteration in range(1, iterations + 1):
        gradient = sums.gradient[everywhere]
        curvature = Curvature.of(sums.information[np.ix_(everywhere, everywhere)])
        if curvature is None:
            return Optimum(coefficients, sums, np.nan, iteration, False)
        whitened = curvature.whiten(gradient)
        decrement = float(whitened @ whitened)
        bound = 1e-12 * max(1.0, abs(sums.log_likelihood))
        if enough is not None and decrement < enough:
            return Optimum(coefficients, sums, decrement, iteration, True)
        # The information moves by about sqrt(decrement / people) from here to the maximum.
        if decrement < bound and (decrement < settled * people or extra_step_taken):
            return Optimum(coefficients, sums, decrement, iteration, True)
        extra_step_taken = decrement < bound
        step = np.zeros_like(coefficients)
        step[everywhere] = curvature.solve(gradient)
        moved = _halve_until_it_rises(evaluate, coefficients, step, sums)
        if moved is None:
            return Optimum(coefficients, sums, decrement, iteration, decrement < bound)
        coefficients, sums = moved
    return Optimum(coefficients, sums, decrement, iterations, False)


def _halve_until_it_rises(
    evaluate: Evaluate, coefficients: Array, step: Array, sums: Sums
) -> tuple[Array, Sums] | None:
    """Take the step, or the first of its halves that does not lower the log-likelihood."""
    rounding = 1e-13 * max(1.0, abs(sums.log_likelihood))
    for _ in range(HALVINGS):
        candidate = coefficients + step
        there = evaluate(candidate)
        if there.log_likelihood >= sums.log_likelihood - rounding:
            return candidate, there
        step = step / 2
    return None
