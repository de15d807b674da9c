"""What a flow says while it works; the command line decides whether anybody sees it."""

from __future__ import annotations

import time
from collections.abc import Iterator
from contextlib import contextmanager
from typing import Protocol


class Progress(Protocol):
    """Receives the name of each stage as it begins and ends."""

    def begin(self, stage: str) -> None: ...

    def end(self, stage: str) -> None: ...


class Silent:
    """Says nothing."""

    def begin(self, stage: str) -> None: ...

    def end(self, stage: str) -> None: ...


class Stopwatch:
    """Keeps the seconds each stage took, for benchmarks."""

    def __init__(self) -> None:
        self.seconds: dict[str, float] = {}
        self._started: dict[str, float] = {}

    def begin(self, stage: str) -> None:
        self._started[stage] = time.perf_counter()

    def end(self, stage: str) -> None:
        spent = time.perf_counter() - self._started.pop(stage)
        self.seconds[stage] = self.seconds.get(stage, 0.0) + spent


@contextmanager
def stage(progress: Progress, name: str) -> Iterator[None]:
    """Announce a stage around the work done inside."""
    progress.begin(name)
    try:
        yield
    finally:
        progress.end(name)
