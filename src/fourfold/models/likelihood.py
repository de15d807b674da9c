"""The logistic log-likelihood with its gradient and information, as sums over rows.

Every fit, test and profile only adds up what :func:`add_chunk` gives for a chunk of rows.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray

from fourfold.models.blocks import Blocks, aligned
from fourfold.models.engine import choose, compiled_pass
from fourfold.models.lanes import THREADS_PAY_FROM, over_lanes

Array = NDArray[np.float64]

CACHE_NUMBERS = 131_072
"""Numbers of a chunk of the design: 1 MiB, half of a usual second-level cache."""

TILE = 512
"""Rows multiplied at once for the information: two tiles of the design fit the cache twice."""


@dataclass(frozen=True, slots=True)
class Observed:
    """The rows a likelihood is summed over.

    Attributes
    ----------
    blocks : Blocks
    event : (n,) bool array
    counts : (n,) array or None
        Frequency weights: row i stands for ``counts[i]`` people.
    offset : (n,) float array or None
        Added to the linear predictor.
    """

    blocks: Blocks
    event: NDArray[np.bool_]
    counts: NDArray[np.float64] | NDArray[np.int64] | None = None
    offset: Array | None = None

    def __post_init__(self) -> None:
        for name in ("event", "counts", "offset"):
            values = getattr(self, name)
            if values is not None and values.shape != (self.blocks.n,):
                raise ValueError(f"{name} has shape {values.shape}; the design has {self.blocks.n} rows")

    @property
    def people(self) -> float:
        return float(self.blocks.n if self.counts is None else self.counts.sum())

    @property
    def events(self) -> float:
        return float(self.event.sum() if self.counts is None else self.counts[self.event].sum())

    def size_of(self, part: Part) -> tuple[int, int]:
        """Rows of a part, and rows of it with the event."""
        rows = events = 0
        for block in range(0, self.blocks.n_blocks, part.stride):
            first = block * self.blocks.width
            here = self.event[first : first + min(part.rows, self.blocks.rows_in(block))]
            rows += len(here)
            events += int(here.sum())
        return rows, events

    def chunks(self, blocks: range, part: Part) -> Iterator[Chunk]:
        """Chunks of the given blocks that fit the cache."""
        source = self.blocks
        width = chunk_width(source)
        for block in blocks:
            if block % part.stride:
                continue
            rows = min(source.rows_in(block), part.rows)
            first = block * source.width
            for start in range(0, rows, width):
                stop = min(rows, start + width)
                here = slice(first + start, first + stop)
                yield Chunk(
                    source.array[block, :, start:stop],
                    self.event[here],
                    None if self.counts is None else self.counts[here],
                    None if self.offset is None else self.offset[here],
                )


@dataclass(frozen=True, slots=True)
class Part:
    """A part of the rows spread over the whole: the first ``rows`` of every ``stride``-th block."""

    rows: int
    stride: int = 1


@dataclass(frozen=True, slots=True)
class Chunk:
    """Rows used together: ``x`` is (p, m), the rest (m,)."""

    x: Array
    event: NDArray[np.bool_]
    counts: NDArray[np.float64] | NDArray[np.int64] | None
    offset: Array | None


@dataclass(slots=True)
class Sums:
    """Log-likelihood, gradient (p,) and information (p, p), added up in place."""

    log_likelihood: float
    gradient: Array
    information: Array

    @classmethod
    def zero(cls, p: int) -> Sums:
        return cls(0.0, np.zeros(p), np.zeros((p, p)))

    def add(self, other: Sums) -> None:
        self.log_likelihood += other.log_likelihood
        self.gradient += other.gradient
        self.information += other.information


def chunk_width(blocks: Blocks) -> int:
    """Rows of a chunk: a whole block, or fewer if there are many columns."""
    fitting = CACHE_NUMBERS // max(1, blocks.p) // TILE * TILE
    return min(blocks.width, max(TILE, fitting))


@dataclass(slots=True)
class Workspace:
    """Scratch memory of one thread for chunks of up to ``width`` rows of ``p`` columns."""

    p: int
    width: int
    rows: Array = field(init=False)
    weighted: Array = field(init=False)
    centred: Array | None = field(init=False, default=None)
    products: Array = field(init=False)

    def __post_init__(self) -> None:
        self.rows = aligned(5, self.width)
        self.weighted = aligned(self.p, self.width)
        self.products = np.empty((max(1, self.width // TILE), self.p, self.p))

    def centre(self, x: Array, centre: Array) -> Array:
        if self.centred is None:
            self.centred = aligned(self.p, self.width)
        return np.subtract(x, centre[:, None], out=self.centred[:, : x.shape[1]])


def add_chunk(
    sums: Sums,
    chunk: Chunk,
    coefficients: Array,
    centre: Array | None,
    work: Workspace,
    information: bool = True,
) -> None:
    """Add a chunk's log-likelihood, gradient and information at ``coefficients`` to ``sums``.

    With t = (2y - 1) eta, the linear predictor signed by what happened, the log-likelihood of a
    row is min(t, 0) - log1p(exp(-|t|)): exact however far t is from zero.
    """
    m = chunk.x.shape[1]
    x = chunk.x if centre is None else work.centre(chunk.x, centre)
    sign, t, smaller, larger, scratch = (row[:m] for row in work.rows)
    np.matmul(coefficients, x, out=t)
    if chunk.offset is not None:
        t += chunk.offset
    np.multiply(chunk.event, 2.0, out=sign)
    sign -= 1.0
    t *= sign
    np.abs(t, out=smaller)
    np.negative(smaller, out=smaller)
    np.exp(smaller, out=smaller)
    np.minimum(t, 0.0, out=scratch)
    np.log1p(smaller, out=larger)
    scratch -= larger
    sums.log_likelihood += float(scratch.sum() if chunk.counts is None else scratch @ chunk.counts)
    # The larger and the smaller of pi and 1 - pi, neither by subtraction.
    np.add(smaller, 1.0, out=larger)
    np.divide(1.0, larger, out=larger)
    smaller *= larger
    weight = np.multiply(smaller, larger, out=scratch)
    # Of the two, what happened had the other one's complement: its probability of not happening,
    # chosen without a branch (smaller + larger is 1).
    np.less_equal(t, 0.0, out=t)
    larger -= smaller
    larger *= t
    larger += smaller
    residual = np.multiply(larger, sign, out=sign)
    if chunk.counts is not None:
        residual *= chunk.counts
        weight *= chunk.counts
    sums.gradient += x @ residual
    if information:
        add_information(sums.information, x, weight, work)


def add_information(total: Array, x: Array, weight: Array, work: Workspace) -> None:
    """Add X W X' of a chunk, tile by tile so that both factors stay close to the processor."""
    p, m = x.shape
    weighted = np.multiply(x, weight, out=work.weighted[:, :m])
    tiles = m // TILE
    if tiles:
        left = weighted[:, : tiles * TILE].reshape(p, tiles, TILE).transpose(1, 0, 2)
        right = x[:, : tiles * TILE].reshape(p, tiles, TILE).transpose(1, 2, 0)
        total += np.matmul(left, right, out=work.products[:tiles]).sum(axis=0)
    if tiles * TILE < m:
        total += weighted[:, tiles * TILE :] @ x[:, tiles * TILE :].T


@dataclass(frozen=True, slots=True)
class LogLikelihood:
    """The log-likelihood of observed rows as a function of the coefficients.

    Attributes
    ----------
    centre : (p,) float array or None
        Taken off every column first.
    part : Part or None
        None for all rows.
    engine : str
        ``numpy``, ``compiled`` or ``auto``; centred columns are always summed by numpy.
    """

    observed: Observed
    centre: Array | None = None
    part: Part | None = None
    engine: str = "numpy"

    def __call__(self, coefficients: Array, information: bool = True) -> Sums:
        """Log-likelihood, gradient and, unless it is not wanted, information."""
        blocks = self.observed.blocks
        part = self.part if self.part is not None else Part(blocks.width)
        p, width = blocks.p, chunk_width(blocks)
        numbers = part.rows * blocks.n_blocks // part.stride * p
        threads = 1 if numbers < THREADS_PAY_FROM else None
        compiled = choose(self.engine, blocks.n * p) and self.centre is None

        def lane(these: range, work: Workspace) -> Sums:
            sums = Sums.zero(p)
            for chunk in self.observed.chunks(these, part):
                add_chunk(sums, chunk, coefficients, self.centre, work, information)
            return sums

        total = Sums.zero(p)
        if compiled:
            lanes = self._compiled_lanes(coefficients, information, part, threads)
        else:
            lanes = over_lanes(lane, blocks.n_blocks, lambda: Workspace(p, width), threads=threads)
        for sums in lanes:
            total.add(sums)
        return total

    def bound(self) -> Array:
        """X'CX / 4, which no information matrix exceeds: the information at zero without offset."""
        plain = Observed(self.observed.blocks, self.observed.event, self.observed.counts)
        at_zero = LogLikelihood(plain, self.centre, self.part, self.engine)
        return at_zero(np.zeros(self.observed.blocks.p)).information

    def _compiled_lanes(
        self, coefficients: Array, information: bool, part: Part, threads: int | None
    ) -> list[Sums]:
        blocks = self.observed.blocks
        add_blocks = compiled_pass()
        counts = np.empty(0, dtype=np.int64) if self.observed.counts is None else self.observed.counts
        offset = np.empty(0) if self.observed.offset is None else self.observed.offset
        array = np.ascontiguousarray(blocks.array)

        def lane(these: range, _: None) -> Sums:
            sums = Sums.zero(blocks.p)
            sums.log_likelihood = add_blocks(
                array, blocks.n, these.start, these.stop, part.rows, part.stride, self.observed.event,
                counts, offset, coefficients, information, sums.gradient, sums.information,
            )  # fmt: skip
            lower = np.tril(sums.information)
            sums.information = lower + np.tril(lower, -1).T
            return sums

        return over_lanes(lane, blocks.n_blocks, lambda: None, threads=threads)
