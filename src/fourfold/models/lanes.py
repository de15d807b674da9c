"""Sums over blocks on all cores, in an order that does not depend on how many there are.

Blocks are shared out to a fixed number of lanes; threads take whole lanes, and the lanes' sums
are added in their own order. The same data therefore give the same bits on one core or on many.
"""

from __future__ import annotations

import functools
import itertools
import os
from collections.abc import Callable, Iterator
from concurrent.futures import ThreadPoolExecutor
from contextlib import contextmanager
from queue import SimpleQueue
from typing import TypeVar

from threadpoolctl import ThreadpoolController

T = TypeVar("T")
W = TypeVar("W")

LANES = 16
THREADS_PAY_FROM = 1_000_000
"""Numbers in the design from which starting threads is worth its cost."""


@functools.cache
def _controller() -> ThreadpoolController:
    return ThreadpoolController()


@contextmanager
def single_threaded_blas() -> Iterator[None]:
    """Keep the linear algebra library on one thread: matrices here are small, threads are ours."""
    with _controller().limit(limits=1, user_api="blas"):
        yield


def cores() -> int:
    """Processors this process may use."""
    if hasattr(os, "sched_getaffinity"):
        return len(os.sched_getaffinity(0))
    return os.cpu_count() or 1


def lanes_of(n_blocks: int) -> list[range]:
    """Contiguous ranges of blocks, at most ``LANES`` of them."""
    n_lanes = min(LANES, n_blocks)
    edges = [n_blocks * lane // n_lanes for lane in range(n_lanes + 1)]
    return [range(a, b) for a, b in itertools.pairwise(edges)]


def over_lanes(
    task: Callable[[range, W], T], n_blocks: int, make_workspace: Callable[[], W], *, threads: int | None
) -> list[T]:
    """Run ``task(blocks, workspace)`` for every lane and return the answers in the lanes' order.

    Parameters
    ----------
    make_workspace : callable
        Makes the scratch memory of one thread.
    threads : int or None
        None for one per core.
    """
    lanes = lanes_of(n_blocks)
    workers = min(len(lanes), cores() if threads is None else threads)
    if workers <= 1:
        workspace = make_workspace()
        with single_threaded_blas():
            return [task(lane, workspace) for lane in lanes]
    workspaces: SimpleQueue[W] = SimpleQueue()
    for _ in range(workers):
        workspaces.put(make_workspace())

    def run(lane: range) -> T:
        workspace = workspaces.get()
        try:
            return task(lane, workspace)
        finally:
            workspaces.put(workspace)

    with single_threaded_blas(), ThreadPoolExecutor(workers) as pool:
        return list(pool.map(run, lanes))
