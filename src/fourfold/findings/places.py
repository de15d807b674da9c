"""Places inside the values of a finding, where lists of things hold counts of their own."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from typing import Any

Path = tuple[str | int, ...]


def paths(values: Mapping[str, Any], pattern: str) -> Iterator[Path]:
    """Every place that a pattern means and that the values have.

    ``rows`` is a value by itself, ``found[].count`` the count of each item of the list ``found``,
    ``counts[]`` each item of the list ``counts``.
    """
    yield from _within(values, _steps(pattern), ())


def value_at(values: Mapping[str, Any], path: Path) -> Any:
    """What stands at a place."""
    found: Any = values
    for step in path:
        found = found[step]
    return found


def with_value(values: Any, path: Path, value: Any) -> Any:
    """A copy of the values that holds ``value`` at the place; the original stays as it is."""
    if not path:
        return value
    first, rest = path[0], path[1:]
    if isinstance(values, Mapping):
        return {**values, first: with_value(values[str(first)], rest, value)}
    changed = list(values)
    place = int(first)
    changed[place] = with_value(changed[place], rest, value)
    return changed


def written(path: Path) -> str:
    """A place as text: ``found[0].count``."""
    text = ""
    for step in path:
        text += f"[{step}]" if isinstance(step, int) else f".{step}" if text else step
    return text


def _steps(pattern: str) -> list[str]:
    # "found[].count" becomes found, [], count.
    return [step for part in pattern.split(".") for step in part.replace("[]", " []").split()]


def _within(value: Any, steps: list[str], here: Path) -> Iterator[Path]:
    if not steps:
        yield here
        return
    first, rest = steps[0], steps[1:]
    if first == "[]":
        if isinstance(value, list):
            for place, item in enumerate(value):
                yield from _within(item, rest, (*here, place))
    elif isinstance(value, Mapping) and first in value:
        yield from _within(value[first], rest, (*here, first))


def numbers(value: Any, here: Path = ()) -> Iterator[tuple[Path, int | float]]:
    """Every number anywhere in the values, with its place; truth values are no numbers."""
    if isinstance(value, bool):
        return
    if isinstance(value, int | float):
        yield here, value
    elif isinstance(value, Mapping):
        for name, item in value.items():
            yield from numbers(item, (*here, name))
    elif isinstance(value, list | tuple):
        for place, item in enumerate(value):
            yield from numbers(item, (*here, place))
