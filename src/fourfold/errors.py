"""Errors a person can act on: what was found, what was expected, what to do, and where.

This is the lowest layer: everything may raise these, and only the command line prints them.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass


@dataclass(frozen=True, slots=True)
class Position:
    """A place in a text file; line and column count from 1."""

    file: str
    line: int | None = None
    column: int | None = None

    def __str__(self) -> str:
        parts = [self.file]
        if self.line is not None:
            parts.append(str(self.line))
            if self.column is not None:
                parts.append(str(self.column))
        return ":".join(parts)


@dataclass(frozen=True, slots=True)
class Problem:
    """One thing that is wrong.

    Attributes
    ----------
    what : str
        What was found and what was expected, in one sentence.
    advice : str
        What to do about it; may be empty.
    where : Position or None
    """

    what: str
    advice: str = ""
    where: Position | None = None

    def __str__(self) -> str:
        place = f"{self.where}: " if self.where is not None else ""
        advice = f"\n    {self.advice}" if self.advice else ""
        return f"{place}{self.what}{advice}"


class FourfoldError(Exception):
    """Base of every error meant for the user; carries one or more problems."""

    exit_code = 1

    def __init__(self, problems: Problem | str | Sequence[Problem], advice: str = "") -> None:
        if isinstance(problems, str):
            problems = Problem(problems, advice)
        if isinstance(problems, Problem):
            problems = [problems]
        self.problems: tuple[Problem, ...] = tuple(problems)
        super().__init__("\n".join(str(problem) for problem in self.problems))


class UsageError(FourfoldError):
    """The command was called wrongly."""

    exit_code = 2


class DescriptionError(FourfoldError):
    """The study description is wrong; all its problems are reported at once."""

    exit_code = 3


class DataError(FourfoldError):
    """The data file cannot be read as the description says."""

    exit_code = 4


class EstimationError(FourfoldError):
    """Nothing can be fitted."""

    exit_code = 5


class RenderingError(FourfoldError):
    """A report, or a format of it, could not be written."""

    exit_code = 6
