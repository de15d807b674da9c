"""Where a description's data file is, and whether it may be read."""

from __future__ import annotations

from pathlib import Path

from fourfold.description.wording import did_you_mean, quoted
from fourfold.errors import Position, Problem

MOST_NAMES = 20_000


def data_file_problem(
    description: Path, file: str, where: Position, *, allow_outside: bool = False
) -> Problem | None:
    """What is wrong with the data file that a description names; None if nothing is.

    A file outside the description's folder is refused unless ``allow_outside``, links followed:
    a description may come from a stranger.
    """
    folder = description.parent
    named = folder / file
    try:
        base = folder.resolve()
        actual = named.resolve()
        if not allow_outside and not actual.is_relative_to(base):
            linked = not Path(file).is_absolute() and ".." not in Path(file).parts
            how = " is a link that leads" if linked else " lies"
            return Problem(
                f"The data file {quoted(file)}{how} outside the folder of the description.",
                "Move it beside the description, or run with --allow-outside if you trust the description.",
                where,
            )
        if actual.is_dir():
            return Problem(
                f"{quoted(file)} is a folder; expected a data file.", "Name the file in it.", where
            )
        if actual.is_file():
            return None
        if actual.exists():
            return Problem(f"{quoted(file)} is not an ordinary file.", "Name a data file.", where)
    except (OSError, ValueError, RuntimeError) as error:
        reason = (
            error.strerror if isinstance(error, OSError) and error.strerror else "its name cannot be used"
        )
        return Problem(
            f"The data file {quoted(file)} cannot be looked up: {reason}.", "Check the name.", where
        )
    return Problem(f"There is no data file {quoted(file)}.", _nearest(named, file), where)


def _nearest(named: Path, file: str) -> str:
    try:
        names = [entry.name for entry, _ in zip(named.parent.iterdir(), range(MOST_NAMES), strict=False)]
    except OSError:
        return f"The folder {quoted(str(Path(file).parent))} is not there either."
    # The same name with another ending is nearer than any other name.
    same = [name for name in names if Path(name).stem.lower() == named.stem.lower()]
    same = [name for name in same if Path(name).suffix not in (".yaml", ".yml")]
    hint = f"Did you mean {quoted(same[0])}?" if same else did_you_mean(named.name, names)
    return hint or "It is looked for beside the description; write its name or the folder and name below it."
