"""Newton's method with step-halving, stopped by the Newton decrement.

Far from the maximum hardly a row may carry information, and Newton steps lead nowhere. A quarter of
X'CX bounds the information everywhere; steps with that bound in its place always climb.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from fourfold.models.likelihood import Sums

Array = NDArray[np.float64]
Evaluate = Callable[[Array], Sums]

ITERATIONS = 200
HALVINGS = 6

SHARES_OF_BOUND = (0.0, 1e-9, 1e-5, 1e-2)
"""How much of the bound on the information is added, from plain Newton steps to careful ones."""

ENOUGH_RISE = 1e-4
"""A step must bring this share of what the gradient promises."""

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
    bound: Callable[[], Array],
    *,
    held: Array | None = None,
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
    bound : callable
        Gives a (p, p) matrix that no information exceeds, X'CX / 4; asked for only when a Newton
        step fails.
    held : (p,) float array, optional
        A contrast c: c'b keeps the value it has at the start. A maximum whose information is
        singular is then accepted, as only its height is wanted.
    enough : float, optional
        A looser bound on the decrement, for a first approach.

    References
    ----------
    Boehning & Lindsay (1988). Annals of the Institute of Statistical Mathematics 40, 641-663.
    (the bound)
    """
    point, here = start.copy(), evaluate(start)
    within = None if held is None else _across(held)
    limit: Array | None = None
    extra_step_taken = False
    for iteration in range(1, iterations + 1):
        step = _step(here, here.information, within)
        regular = step is not None
        if step is None:
            limit = bound() if limit is None else limit
            step = _step(here, here.information + SHARES_OF_BOUND[1] * limit, within)
        if step is None:
            return Optimum(point, here, np.nan, iteration, False)
        direction, decrement = step
        small = 1e-12 * max(1.0, abs(here.log_likelihood))
        acceptable = regular or held is not None
        if enough is not None and decrement < enough:
            return Optimum(point, here, decrement, iteration, acceptable)
        # The information moves by about sqrt(decrement / people) from here to the maximum.
        if decrement < small and acceptable and (decrement < settled * people or extra_step_taken):
            return Optimum(point, here, decrement, iteration, True)
        extra_step_taken = decrement < small
        moved = _halve_until_it_rises(evaluate, point, direction, decrement, here) if regular else None
        if moved is None and not extra_step_taken:
            limit = bound() if limit is None else limit
            moved = _careful_step(evaluate, point, here, limit, within)
        if moved is None:
            return Optimum(point, here, decrement, iteration, acceptable and extra_step_taken)
        point, here = moved
    return Optimum(point, here, decrement, iterations, False)


def _across(contrast: Array) -> Array:
    """Orthonormal directions that leave c'b as it is: the columns of a (p, p - 1) matrix."""
    basis = np.linalg.qr(contrast[:, None], mode="complete").Q
    return np.asarray(basis[:, 1:])


def _step(here: Sums, information: Array, within: Array | None) -> tuple[Array, float] | None:
    """The step to the maximum of the quadratic model, and twice the rise that it promises.

    ``within`` has the directions that may be gone as its columns; None for all. None is returned
    where the information is singular, or so small that the step overflows.
    """
    gradient = here.gradient
    if within is not None:
        if within.shape[1] == 0:
            return np.zeros(len(within)), 0.0
        gradient, information = within.T @ gradient, within.T @ information @ within
    curvature = Curvature.of(information)
    if curvature is None:
        return None
    with np.errstate(over="ignore", invalid="ignore"):
        step = curvature.solve(gradient)
        promised = float(gradient @ step)
        step = step if within is None else within @ step
    if not (np.isfinite(promised) and bool(np.isfinite(step).all())):
        return None
    return step, max(promised, 0.0)


def _careful_step(
    evaluate: Evaluate, point: Array, here: Sums, limit: Array, within: Array | None
) -> tuple[Array, Sums] | None:
    """A step with more and more of the bound in place of the information, until one rises."""
    matrices = [here.information + share * limit for share in SHARES_OF_BOUND[1:]]
    for matrix in [*matrices, limit]:
        step = _step(here, matrix, within)
        if step is not None:
            moved = _halve_until_it_rises(evaluate, point, *step, here)
            if moved is not None:
                return moved
    return None


def _halve_until_it_rises(
    evaluate: Evaluate, point: Array, step: Array, decrement: float, here: Sums
) -> tuple[Array, Sums] | None:
    """Take the step, or the first of its halves that raises the log-likelihood as it should."""
    rounding = 1e-13 * max(1.0, abs(here.log_likelihood))
    length = 1.0
    for _ in range(HALVINGS):
        candidate = point + length * step
        there = evaluate(candidate)
        if there.log_likelihood >= here.log_likelihood + ENOUGH_RISE * length * decrement - rounding:
            return candidate, there
        length /= 2
    return None
