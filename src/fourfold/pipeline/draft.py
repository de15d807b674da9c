"""A first study description from a data file."""

from __future__ import annotations

import os
from pathlib import Path

from fourfold.data import draft as guessing
from fourfold.errors import RenderingError, UsageError


def draft(data: Path, table: str | None = None) -> str:
    """The YAML text of a first description; guesses and open questions are marked.

    Raises
    ------
    DataError
        If the file cannot be read.
    """
    return guessing.guess(data, table)


def save(text: str, output: Path) -> None:
    """Write the draft; an existing file is never overwritten.

    Raises
    ------
    UsageError
        If ``output`` exists.
    RenderingError
        If it cannot be written.
    """
    try:
        with output.open("x", encoding="utf-8", newline="\n") as file:
            file.write(text)
            file.flush()
            os.fsync(file.fileno())
    except FileExistsError:
        raise UsageError(f"{output} exists already.", "Name another file with --output.") from None
    except OSError as error:
        raise RenderingError(f"{output} could not be written: {error.strerror}.") from None
