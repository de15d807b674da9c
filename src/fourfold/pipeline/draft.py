"""A first study description from a data file."""

from __future__ import annotations

import json
import os
from pathlib import Path

from fourfold.data import draft as guessing
from fourfold.errors import RenderingError, UsageError

ADVICE = "Name a file in a folder that exists and can be written to with --output."


def draft(data: Path, table: str | None = None, output: Path | None = None) -> str:
    """The YAML text of a first description; guesses and open questions are marked.

    A description names its data from its own folder: with ``output`` in another folder than the
    data, the name leads there.

    Raises
    ------
    DataError
        If the file cannot be read.
    """
    text = guessing.guess(data, table)
    if output is None or output.resolve().parent == data.resolve().parent:
        return text
    lines = text.split("\n")
    place = next(i for i, line in enumerate(lines) if line.startswith("  file: "))
    lines[place] = f"  file: {json.dumps(_way(data, output), ensure_ascii=False)}"
    return "\n".join(lines)


def leads_outside(data: Path, output: Path) -> bool:
    """Whether the data lie outside the folder that the description will be in."""
    return not data.resolve().is_relative_to(output.resolve().parent)


def _way(data: Path, output: Path) -> str:
    target, start = data.resolve(), output.resolve().parent
    try:
        return Path(os.path.relpath(target, start)).as_posix()
    except ValueError:  # another drive of Windows
        return target.as_posix()


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
        file = output.open("x", encoding="utf-8", newline="\n")
    except FileExistsError:
        raise UsageError(f"{output} exists already.", "Name another file with --output.") from None
    except OSError as error:
        raise RenderingError(f"{output} could not be written: {error.strerror}.", ADVICE) from None
    try:
        with file:
            file.write(text)
            file.flush()
            os.fsync(file.fileno())
    except OSError as error:
        # The file is this run's own: a half is worth nothing and would stop the next run.
        output.unlink(missing_ok=True)
        raise RenderingError(f"{output} could not be written: {error.strerror}.", ADVICE) from None
