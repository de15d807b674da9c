"""What can be read of a description although other parts of it are wrong.

Checks that compare parts with each other run on this, so that one misspelt key does not
postpone every other message to the next attempt.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from functools import cache
from typing import Annotated, Any, Generic, TypeVar, cast

from pydantic import TypeAdapter, ValidationError

from fourfold.description.model import DataSource, Exclusion, FollowUp, Role, StudyHeader, Variable
from fourfold.description.node import Path
from fourfold.description.section import Section

S = TypeVar("S", bound=Section)
ROLES = ("exposures", "predictors", "covariates")


@dataclass(frozen=True, slots=True)
class Part(Generic[S]):
    """A section with the values that are right; ``wrong`` names the keys whose values are not."""

    section: S
    wrong: frozenset[str] = frozenset()

    def given(self, *names: str) -> bool:
        """Whether one of these keys stands in the file, rightly or wrongly."""
        return bool(self.wrong & set(names)) or bool(self.section.model_fields_set & set(names))


@dataclass(frozen=True, slots=True)
class RoleAt:
    """A name in one of the role lists, with its place."""

    role: str
    name: str
    path: Path


@dataclass(frozen=True, slots=True)
class Legible:
    """The parts of a description; None, or absent, where a part cannot be read at all."""

    study: Part[StudyHeader] | None
    data: Part[DataSource] | None
    variables: dict[str, Part[Variable] | None] | None
    outcome: str | None
    roles: tuple[RoleAt, ...]
    lists_given: dict[str, int] = field(default_factory=dict)
    exclusions: tuple[tuple[int, Exclusion], ...] = ()
    follow_up: Part[FollowUp] | None = None


def legible(data: Any) -> Legible:
    """Read each part of a description on its own."""
    top: dict[str, Any] = data if isinstance(data, dict) else {}
    variables = top.get("variables")
    outcome = top.get("outcome")
    lists = {name: top[name] for name in ROLES if isinstance(top.get(name), list)}
    exclusions = top.get("exclusions")
    return Legible(
        study=_part(StudyHeader, top.get("study")),
        data=_part(DataSource, top.get("data")),
        variables={name: _part(Variable, value) for name, value in variables.items()}
        if isinstance(variables, dict)
        else None,
        outcome=str(outcome) if isinstance(outcome, str) and outcome else None,
        roles=tuple(at for name, items in lists.items() for at in _roles(name, items)),
        lists_given={name: len(items) for name, items in lists.items()},
        exclusions=tuple(_exclusions(exclusions if isinstance(exclusions, list) else [])),
        follow_up=_part(FollowUp, top.get("follow_up")),
    )


def _part(model: type[S], value: Any) -> Part[S] | None:
    if not isinstance(value, dict):
        return None
    try:
        return Part(model.model_validate(value))
    except ValidationError:
        pass
    right, wrong = dict[str, Any](), set[str]()
    for name, info in model.model_fields.items():
        written = info.alias or name
        if written not in value:
            continue
        try:
            right[name] = _adapter(model, name).validate_python(value[written])
        except ValidationError:
            wrong.add(name)
    return Part(cast(S, model.model_construct(**right)), frozenset(wrong))


@cache
def _adapter(model: type[Section], name: str) -> TypeAdapter[Any]:
    info = model.model_fields[name]
    annotation: Any = Annotated[info.annotation, *info.metadata] if info.metadata else info.annotation
    return TypeAdapter(annotation)


def _roles(role: str, items: list[Any]) -> list[RoleAt]:
    found = []
    for place, item in enumerate(items):
        part = _part(Role, {"variable": item} if isinstance(item, str) else item)
        if part is not None and "variable" in part.section.model_fields_set:
            path: Path = (role, place) if isinstance(item, str) else (role, place, "variable")
            found.append(RoleAt(role, part.section.variable, path))
    return found


def _exclusions(items: list[Any]) -> list[tuple[int, Exclusion]]:
    found = []
    for place, item in enumerate(items):
        try:
            found.append((place, Exclusion.model_validate(item)))
        except ValidationError:
            continue
    return found
