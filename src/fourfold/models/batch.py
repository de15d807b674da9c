"""The likelihood at many coefficient vectors at once: matrix by matrix instead of one by one.

Profile limits and tests need the same rows at dozens of nearby points. Reading a chunk of rows once
for all of them, and multiplying matrices rather than vectors, costs a fraction of as many passes.
"""

from __future__ import annotations

from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray

from fourfold.models.blocks import aligned
from fourfold.models.centring import Centring, centring
from fourfold.models.lanes import THREADS_PAY_FROM, over_lanes
from fourfold.models.likelihood import Chunk, Observed, Part, Sums

Array = NDArray[np.float64]

CHUNK_NUMBERS = 32_768
"""Numbers of one scratch matrix: four of them and the design's chunk stay in the second-level cache."""


GROUP_NUMBERS = 250_000
"""Numbers in the information matrices of the points taken together, to bound memory."""


def groups(k: int, p: int) -> list[slice]:
    """Split k points of p coefficients into groups whose information matrices fit in memory."""
    together = max(1, GROUP_NUMBERS // (p * p))
    return [slice(start, min(k, start + together)) for start in range(0, k, together)]


@dataclass(slots=True)
class BatchSums:
    """Log-likelihoods (k,), gradients (k, p) and informations (k, p, p) at k points."""

    log_likelihood: Array
    gradient: Array
    information: Array | None


@dataclass(frozen=True, slots=True)
class Standardised:
    """Observed rows with columns centred (where a column is constant) and scaled.

    Coefficients ``inner`` of the standardised columns and ``outer`` of the user's are related by
    outer = change @ inner.

    Attributes
    ----------
    observed : Observed
    centred : Centring or None
    scale : (p,) float array
        What a centred column is multiplied by.
    change : (p, p) float array
    """

    observed: Observed
    centred: Centring | None
    scale: Array
    change: Array

    @classmethod
    def of(cls, observed: Observed, covariance: Array) -> Standardised:
        """Standardise so that the diagonal of the information is about 1 at a fit.

        Parameters
        ----------
        covariance : (p, p) float array
            Of the fit, on the user's scale.
        """
        centred = centring(observed.blocks, always=True)
        inward = np.eye(len(covariance)) if centred is None else np.linalg.inv(centred.change())
        inner = inward @ covariance @ inward.T
        scale = np.sqrt(np.diagonal(inner))
        change = np.diag(scale) if centred is None else centred.change() * scale
        return cls(observed, centred, scale, change)

    @classmethod
    def plain(cls, observed: Observed) -> Standardised:
        """Standardise by the spread of the columns, where there is no fit."""
        centred = centring(observed.blocks, always=True)
        matrix = observed.blocks.matrix()
        if centred is not None:
            matrix = matrix - centred.centre
        size = np.sqrt((matrix**2).mean(axis=0))
        scale = 1 / np.where(size > 0, size, 1.0)
        change = np.diag(scale) if centred is None else centred.change() * scale
        return cls(observed, centred, scale, change)

    def inward(self, coefficients: Array) -> Array:
        """Inner coefficients from the user's."""
        moved = coefficients if self.centred is None else self.centred.inward(coefficients)
        return moved / self.scale

    def inward_covariance(self, covariance: Array) -> Array:
        """Covariance of the inner coefficients from that of the user's."""
        inverse = np.linalg.inv(self.change)
        return np.asarray(inverse @ covariance @ inverse.T)

    def sums(self, points: Array, *, information: bool) -> BatchSums:
        """Evaluate the likelihood at several points.

        Parameters
        ----------
        points : (k, p) float array
            Inner coefficients.
        information : bool
            Whether the information matrices are wanted too; they cost as much again.
        """
        k, p = points.shape
        blocks = self.observed.blocks
        pairs = np.triu_indices(p)

        def lane(these: range, work: Workspace) -> BatchSums:
            total = BatchSums(
                np.zeros(k), np.zeros((k, p)), np.zeros((k, len(pairs[0]))) if information else None
            )
            for whole in self.observed.chunks(these, Part(blocks.width)):
                for chunk in _pieces(whole, work.width):
                    self._add(total, chunk, points, work)
            return total

        width = _width(k, p, information)
        threads = 1 if k * blocks.n * p < THREADS_PAY_FROM else None
        lanes = over_lanes(
            lane,
            blocks.n_blocks,
            lambda: Workspace(k, p, min(width, blocks.width), information),
            threads=threads,
        )
        matrices = None
        if information:
            matrices = np.zeros((k, p, p))
            upper = sum(
                (each.information for each in lanes if each.information is not None),
                np.zeros((k, len(pairs[0]))),
            )
            matrices[:, pairs[0], pairs[1]] = upper
            matrices[:, pairs[1], pairs[0]] = upper
        return BatchSums(
            sum((each.log_likelihood for each in lanes), np.zeros(k)),
            sum((each.gradient for each in lanes), np.zeros((k, p))),
            matrices,
        )

    def one(self, point: Array) -> Sums:
        """Evaluate the likelihood at one point, with its information."""
        sums = self.sums(point[None, :], information=True)
        if sums.information is None:
            raise AssertionError("the information was asked for")
        return Sums(float(sums.log_likelihood[0]), sums.gradient[0], sums.information[0])

    def bound(self) -> Array:
        """X'CX / 4 of the standardised columns, which no information matrix exceeds."""
        plain = Observed(self.observed.blocks, self.observed.event, self.observed.counts)
        at_zero = Standardised(plain, self.centred, self.scale, self.change)
        return at_zero.one(np.zeros(len(self.scale))).information

    def _add(self, total: BatchSums, chunk: Chunk, points: Array, work: Workspace) -> None:
        p, m = chunk.x.shape
        x = work.x[:, :m]
        if self.centred is None:
            np.multiply(chunk.x, self.scale[:, None], out=x)
        else:
            np.subtract(chunk.x, self.centred.centre[:, None], out=x)
            x *= self.scale[:, None]
        t, smaller, larger, scratch = (flat[: len(points) * m].reshape(len(points), m) for flat in work.flat)
        np.matmul(points, x, out=t)
        if chunk.offset is not None:
            t += chunk.offset
        sign = np.where(chunk.event, 1.0, -1.0)
        t *= sign
        np.abs(t, out=smaller)
        np.negative(smaller, out=smaller)
        np.exp(smaller, out=smaller)
        np.log1p(smaller, out=larger)
        np.minimum(t, 0.0, out=scratch)
        scratch -= larger
        total.log_likelihood += scratch.sum(axis=1) if chunk.counts is None else scratch @ chunk.counts
        np.add(smaller, 1.0, out=larger)
        np.divide(1.0, larger, out=larger)
        smaller *= larger
        if total.information is not None and work.pairs is not None:
            weight = np.multiply(smaller, larger, out=scratch)
            if chunk.counts is not None:
                weight *= chunk.counts
            pairs = work.pairs[:, :m]
            first = 0
            for column in range(p):
                np.multiply(x[column:], x[column], out=pairs[first : first + p - column])
                first += p - column
            total.information += weight @ pairs.T
        # smaller + larger is 1: the probability of what did not happen, without a branch.
        np.less_equal(t, 0.0, out=t)
        larger -= smaller
        larger *= t
        larger += smaller
        larger *= sign if chunk.counts is None else sign * chunk.counts
        total.gradient += larger @ x.T


@dataclass(slots=True)
class Workspace:
    """Scratch memory of one thread."""

    k: int
    p: int
    width: int
    with_pairs: bool
    x: Array = field(init=False)
    flat: Array = field(init=False)
    pairs: Array | None = field(init=False, default=None)

    def __post_init__(self) -> None:
        self.x = aligned(self.p, self.width)
        self.flat = aligned(4, self.k * self.width)
        if self.with_pairs:
            self.pairs = aligned(self.p * (self.p + 1) // 2, self.width)


def _width(k: int, p: int, information: bool) -> int:
    """Rows taken together, a multiple of 64 unless the block is shorter."""
    numbers = CHUNK_NUMBERS // k
    if information:
        numbers = min(numbers, 4 * CHUNK_NUMBERS // (p * (p + 1) // 2))
    return max(64, numbers // 64 * 64)


def _pieces(chunk: Chunk, width: int) -> list[Chunk]:
    rows = chunk.x.shape[1]
    return [
        Chunk(
            chunk.x[:, here],
            chunk.event[here],
            None if chunk.counts is None else chunk.counts[here],
            None if chunk.offset is None else chunk.offset[here],
        )
        for here in (slice(start, min(rows, start + width)) for start in range(0, rows, width))
    ]
