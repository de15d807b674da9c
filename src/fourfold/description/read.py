"""From a file to a checked description, or to every problem in it at once."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass
from itertools import islice
from pathlib import Path
from typing import TYPE_CHECKING

from fourfold.description.compose import compose
from fourfold.description.node import Positions
from fourfold.description.source_text import read_text
from fourfold.description.unanswered import unanswered
from fourfold.description.wording import visible
from fourfold.errors import DescriptionError, Position, Problem

if TYPE_CHECKING:
    from fourfold.description.model import StudyDescription

MOST_PROBLEMS = 100
MOST_COLLECTED = MOST_PROBLEMS + 20


@dataclass(frozen=True, slots=True)
class Loaded:
    """A description that was read, with what is needed to point back into its file.

    Attributes
    ----------
    description : StudyDescription
    path : Path
        The file, as it was named.
    text : str
        The file's text, without a byte-order mark.
    sha256 : str
        Of the file's bytes.
    positions : Positions
    """

    description: StudyDescription
    path: Path
    text: str
    sha256: str
    positions: Positions

    @property
    def data_path(self) -> Path:
        """The data file that the description names."""
        return self.path.parent / self.description.data.file

    def position(self, *path: str | int) -> Position:
        """Where a value stands, or the nearest part around it: ``position("variables", "age", "per")``."""
        return self.positions.find(*path)


def load(path: Path, *, allow_outside: bool = False) -> Loaded:
    """Read a study description.

    Parameters
    ----------
    path : Path
    allow_outside : bool
        Let the description name a data file outside its own folder.

    Raises
    ------
    DescriptionError
        With every problem of the file, each at its line and column.
    """
    path = Path(path)
    source = read_text(path)
    description, positions = parse(source.text, path, allow_outside=allow_outside)
    return Loaded(description, path, source.text, source.sha256, positions)


def parse(text: str, path: Path, *, allow_outside: bool = False) -> tuple[StudyDescription, Positions]:
    """Check the text of a description that stands, or would stand, at ``path``.

    Raises
    ------
    DescriptionError
    """
    root, problems = compose(text, str(path))
    # The models bring pydantic along; whoever only asks for help of the command line does without.
    from pydantic import ValidationError

    from fourfold.description.agreement import disagreements
    from fourfold.description.data_file import data_file_problem
    from fourfold.description.legible import legible
    from fourfold.description.model import StudyDescription
    from fourfold.description.refusals import problems_of

    problems += islice(unanswered(root, str(path)), MOST_COLLECTED)
    positions = Positions(str(path), root)
    data = root.plain_data()
    description = None
    try:
        description = StudyDescription.model_validate(data, by_alias=True, by_name=False)
    except ValidationError as error:
        problems += islice(problems_of(error, positions), MOST_COLLECTED)
    parts = legible(data)
    problems += islice(disagreements(parts, positions), MOST_COLLECTED)
    if parts.data is not None and "file" in parts.data.section.model_fields_set:
        where = positions.find("data", "file")
        missing = data_file_problem(path, parts.data.section.file, where, allow_outside=allow_outside)
        problems += [missing] if missing is not None else []
    if problems or description is None:
        raise DescriptionError(_in_order(problems, str(path)))
    return description, positions


def _in_order(problems: Iterable[Problem], file: str) -> list[Problem]:
    """By place in the file, without repeats and without characters a terminal acts on; a flood is cut off."""
    clean = (Problem(visible(each.what), visible(each.advice), each.where) for each in problems)
    ordered = sorted(dict.fromkeys(clean), key=_place)
    if len(ordered) > MOST_PROBLEMS:
        more = Problem(
            f"There are more than {MOST_PROBLEMS} problems; the first of them are listed.",
            "Mend these, and run again.",
            Position(file),
        )
        ordered = [*ordered[:MOST_PROBLEMS], more]
    return ordered


def _place(problem: Problem) -> tuple[int, int]:
    where = problem.where
    return (where.line or 0, where.column or 0) if where is not None else (0, 0)
