"""Whether the conditions of exclusions fit the variables that they look at."""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from datetime import date

from pydantic_core import PydanticCustomError

from fourfold.description.agreement_variables import kind_of
from fourfold.description.legible import Legible
from fourfold.description.model import Condition
from fourfold.description.node import Path, Positions
from fourfold.description.scalars import day, number
from fourfold.description.wording import did_you_mean, nearest, quoted
from fourfold.errors import Problem


def check_exclusions(parts: Legible, positions: Positions) -> Iterator[Problem]:
    """Problems of the exclusions' conditions."""
    if parts.variables is None:
        return
    variables = parts.variables.values()
    columns = frozenset(part.section.column for part in variables if part is not None and part.section.column)
    for place, exclusion in parts.exclusions:
        yield from _condition(exclusion.where, ("exclusions", place, "where"), parts, positions, columns)


def _condition(
    condition: Condition, path: Path, parts: Legible, positions: Positions, columns: frozenset[str]
) -> Iterator[Problem]:
    for several in ("all", "any"):
        for place, inner in enumerate(getattr(condition, several) or []):
            yield from _condition(inner, (*path, several, place), parts, positions, columns)
    name, variables = condition.variable, parts.variables or {}
    if name is None:
        return
    if name not in variables:
        if name not in columns:
            yield from _near_miss(name, path, variables, positions)
        return
    part, kind = variables[name], kind_of(variables[name])
    if kind is None or part is None:
        return
    for key, bound in (("below", condition.below), ("above", condition.above)):
        if bound is not None:
            yield from _bound(name, kind, part.section.levels, key, bound, path, positions)
    tested = [("is", condition.is_), ("is_not", condition.is_not)]
    values = [(value, (*path, key)) for key, value in tested if value is not None]
    values += [(value, (*path, "in", place)) for place, value in enumerate(condition.in_ or [])]
    levels = frozenset(part.section.levels)
    for value, at in values:
        if kind in ("category", "ordered") and levels and value not in levels:
            # A value that is not listed may be just what is to be left out; a near miss is a slip.
            close = nearest(value, levels, 0.85)
            if close is not None:
                yield Problem(
                    f"{quoted(value)} is not among the levels of {quoted(name)}.",
                    f"Did you mean {quoted(close)}? If the data hold both, list both under `levels:`.",
                    positions.find(*at),
                )
        elif kind in ("quantity", "date") and not _reads_as(kind, value):
            yield Problem(
                f"{quoted(name)} is a {kind}; {quoted(value)} is no value of it.",
                "Write a number." if kind == "quantity" else "Write a date, as in 2023-01-31.",
                positions.find(*at),
            )


def _bound(
    name: str, kind: str, levels: list[str], key: str, bound: float | date, path: Path, positions: Positions
) -> Iterator[Problem]:
    where = positions.find(*path, key)
    wanted = date if kind == "date" else float
    if kind in ("bands", "binary"):
        shown = "is cut into bands" if kind == "bands" else f"is of kind: {kind}"
        yield Problem(
            f"`{key}` compares quantities and dates; {quoted(name)} {shown}.",
            "Use `is:`." if kind == "binary" else "Test the quantity that the bands are cut from.",
            where,
        )
    elif kind in ("category", "ordered"):
        # Levels that are numbers can be compared; which they are shows when the data are read.
        words = [level for level in levels if not (_reads_as("quantity", level) or _reads_as("date", level))]
        if words:
            yield Problem(
                f"`{key}` compares numbers and dates; {quoted(name)} has levels such as {quoted(words[0])}.",
                "Use `is:` or `in:`.",
                where,
            )
    elif not isinstance(bound, wanted):
        yield Problem(
            f"`{key}` compares {quoted(name)}, a {kind}, with {quoted(str(bound))}.",
            "Write a date, as in 2023-01-31." if kind == "date" else "Write a number.",
            where,
        )


def _near_miss(name: str, path: Path, variables: Iterable[str], positions: Positions) -> Iterator[Problem]:
    """A name that is no variable may be a column of the file, but a near miss is a slip of the pen."""
    close = did_you_mean(name, variables)
    if close:
        yield Problem(
            f"`variable` names {quoted(name)}, which is not a described variable.",
            f"{close} If it is another column of the data file, describe it under `variables:`.",
            positions.find(*path, "variable"),
        )


def _reads_as(kind: str, value: str) -> bool:
    try:
        if kind == "quantity":
            number(value)
        else:
            day(value)
    except PydanticCustomError:
        return False
    return True
