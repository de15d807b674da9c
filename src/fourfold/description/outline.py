"""Every key of a description in one tree, read off the models: for messages, help and schema."""

from __future__ import annotations

import types
import typing
from collections.abc import Iterator
from dataclasses import dataclass
from functools import cache
from typing import Annotated, Any, Literal, Union, get_args, get_origin

from pydantic import BaseModel
from pydantic.fields import FieldInfo

from fourfold.description import scalars
from fourfold.description.model import StudyDescription
from fourfold.description.wording import listed

NAME = "*"
"""Step of a path that stands for a name which the writer chooses."""

Pattern = tuple[str, ...]


@dataclass(frozen=True, slots=True)
class Key:
    """One key.

    Attributes
    ----------
    path : tuple of str
        Keys from the top, list items passed over; ``*`` for a chosen name.
    kind : str
        What its value is, in words.
    words : tuple of str
        The words it may take, where it takes words.
    inside : tuple of str
        Path below which its own keys stand: its own, or that of the same section met before.
    """

    path: Pattern
    kind: str
    means: str
    example: str
    otherwise: str
    required: bool
    words: tuple[str, ...]
    has_keys: bool
    inside: Pattern

    @property
    def name(self) -> str:
        """The key as it is written."""
        return self.path[-1]

    @property
    def dotted(self) -> str:
        """The path with dots; NAME where the writer chooses a name."""
        return ".".join("NAME" if step == NAME else step for step in self.path)


@cache
def outline() -> dict[Pattern, Key]:
    """All keys by path, in the order of the models."""
    return {key.path: key for key in _keys(StudyDescription, (), ())}


def below(pattern: Pattern) -> dict[str, Key]:
    """The keys that may stand directly under ``pattern``."""
    start = outline()[pattern].inside if pattern in outline() else pattern
    return {
        key.name: key for path, key in outline().items() if path[:-1] == start and len(path) == len(start) + 1
    }


def pattern_of(path: tuple[str | int, ...]) -> Pattern:
    """The pattern of a place in a file; steps that are no keys (list items, marks) are passed over."""
    here: Pattern = ()
    for step in path:
        start = outline()[here].inside if here in outline() else here
        if not isinstance(step, str):
            continue
        if (*start, step) in outline():
            here = (*start, step)
        elif any(known[: len(start) + 1] == (*start, NAME) for known in outline()):
            here = (*start, NAME)
    return here


def _keys(model: type[BaseModel], path: Pattern, around: tuple[tuple[type, Pattern], ...]) -> Iterator[Key]:
    around = (*around, (model, path))
    for name, field in model.model_fields.items():
        here = (*path, field.alias or name)
        section, named = _section(field.annotation)
        seen = next((place for known, place in around if known is section), None)
        inside = seen if seen is not None else here
        yield _key(here, field, section is not None and not named, inside)
        if section is not None and seen is None:
            yield from _keys(section, (*here, NAME) if named else here, around)


def _key(path: Pattern, field: FieldInfo, has_keys: bool, inside: Pattern) -> Key:
    about = field.json_schema_extra
    assert isinstance(about, dict)
    annotation = Annotated[field.annotation, *field.metadata] if field.metadata else field.annotation
    return Key(
        path=path,
        kind=_kind(annotation),
        means=field.description or "",
        example=str(about["example"]),
        otherwise=str(about["otherwise"]),
        required=field.is_required(),
        words=_words(annotation),
        has_keys=has_keys,
        inside=inside,
    )


def _section(annotation: Any) -> tuple[type[BaseModel] | None, bool]:
    """The section that a key holds, if any, and whether it holds several under chosen names."""
    if isinstance(annotation, type) and issubclass(annotation, BaseModel):
        return annotation, False
    named = get_origin(annotation) is dict
    for part in get_args(annotation):
        found, deeper = _section(part)
        if found is not None:
            return found, named or deeper
    return None, False


def _words(annotation: Any) -> tuple[str, ...]:
    if get_origin(annotation) is Literal:
        return tuple(str(word) for word in get_args(annotation))
    return tuple(word for part in get_args(annotation) for word in _words(part))


_SINGLE = (
    (scalars.Text, "text"),
    (scalars.Level, "a value as it stands in the data"),
    (scalars.Code, "a value as it stands in the data, or the empty text"),
    (scalars.Number, "a number"),
    (scalars.Whole, "a whole number"),
    (scalars.Truth, "true or false"),
    (scalars.Day, "a date (2023-01-31)"),
    (scalars.NumberOrDay, "a number or a date (2023-01-31)"),
    (scalars.Pair, "a list of two numbers"),
)
_BARE = {
    str: "a value as it stands in the data",
    int: "a whole number",
    float: "a number",
    bool: "true or false",
}


def _kind(annotation: Any) -> str:
    """What a value is, in words."""
    for known, words in _SINGLE:
        if annotation == known:
            return words
    origin, parts = get_origin(annotation), get_args(annotation)
    if origin is Annotated:
        first = _kind(parts[0])
        for known, words in _SINGLE:
            if set(get_args(known)[1:]) & {part for part in parts[1:] if part.__hash__}:
                return words
        return first
    if origin is Literal:
        return "one word: " + listed(str(word) for word in parts)
    if origin in (Union, types.UnionType, typing.Union):
        kinds = list(dict.fromkeys(_kind(part) for part in parts if part is not type(None)))
        if set(parts) - {type(None)} == {str, int, float}:
            return _BARE[str]
        return ", or ".join(kinds)
    if origin is list:
        section, _ = _section(parts[0])
        if section is not None and section.__name__ == "Role":
            return "a list of variables, each a bare name or a mapping"
        if section is not None:
            return "a list of mappings"
        return "a list, each item " + _kind(parts[0])
    if origin is dict:
        return "a mapping from names to " + ("mappings" if _section(parts[1])[0] else _kind(parts[1]))
    if isinstance(annotation, type) and issubclass(annotation, BaseModel):
        return "a mapping"
    return _BARE.get(annotation, "a value")
