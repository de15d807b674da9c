"""Progress on a terminal, silence anywhere else."""

from __future__ import annotations

import sys
from collections.abc import Iterator
from contextlib import contextmanager

from fourfold.pipeline.progress import Progress, Silent


class _Bar:
    """A line that names the stage at work, cleared at the end."""

    def __init__(self) -> None:
        from rich.console import Console
        from rich.progress import BarColumn, TextColumn, TimeElapsedColumn
        from rich.progress import Progress as Display

        self.display = Display(
            TextColumn("{task.description}"), BarColumn(), TimeElapsedColumn(),
            console=Console(stderr=True), transient=True,
        )  # fmt: skip
        self.task = self.display.add_task("starting", total=None)

    def begin(self, stage: str) -> None:
        self.display.update(self.task, description=stage)

    def end(self, stage: str) -> None:
        self.display.advance(self.task)


@contextmanager
def shown(quiet: bool) -> Iterator[Progress]:
    """A bar on standard error when that is a terminal and nobody asked for quiet."""
    if quiet or not sys.stderr.isatty():
        yield Silent()
        return
    bar = _Bar()
    with bar.display:
        yield bar
