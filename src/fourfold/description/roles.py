"""The part a variable plays in the model, and who is left out of it."""

from __future__ import annotations

from typing import Any

from pydantic import GetJsonSchemaHandler, model_validator
from pydantic_core import CoreSchema

from fourfold.description.scalars import Level, NumberOrDay, Text, Truth, refusal
from fourfold.description.section import Section, key

TESTS = ("is", "is_not", "in", "below", "above", "missing")


class Role(Section):
    """A variable in the model, with why it is there. Written as a bare name or as a mapping."""

    variable: Text = key("Name of a described variable.", example="covariates:\n  - {variable: age}")
    reason: Text | None = key(
        "Why the variable is in the model; printed beside it.",
        example="covariates:\n  - {variable: age, reason: Older people smoke less and heal more slowly}",
        default=None,
        otherwise="The report says that no reason was stated.",
    )
    planned: Truth | None = key(
        "Whether it was decided before the data were seen.",
        example="covariates:\n  - {variable: age, planned: true}",
        default=None,
        otherwise="The report says that it is not stated.",
    )

    @model_validator(mode="before")
    @classmethod
    def _bare_name(cls, value: Any) -> Any:
        return {"variable": value} if isinstance(value, str) else value

    @classmethod
    def __get_pydantic_json_schema__(cls, core: CoreSchema, handler: GetJsonSchemaHandler) -> dict[str, Any]:
        mapping = handler.resolve_ref_schema(handler(core))
        named = {name: mapping[name] for name in mapping if name not in ("title", "description")}
        return {
            "title": "Role",
            "description": str(cls.__doc__),
            "anyOf": [{"type": "string", "minLength": 1}, named],
        }


class Condition(Section):
    """One structured condition; exactly one test, or all:/any: of several."""

    variable: Text | None = key(
        "The variable that is looked at: a described one, or a column of the data file.",
        example="exclusions:\n  - {reason: Under 18, where: {variable: age, below: 18}}",
        default=None,
        otherwise="Required with a test.",
    )
    is_: Level | None = key(
        "True where the value is exactly this one.",
        example="exclusions:\n  - {reason: Emergency operation, where: {variable: urgency, is: emergency}}",
        default=None,
        alias="is",
    )
    is_not: Level | None = key(
        "True where a value is recorded and is not this one.",
        example="exclusions:\n  - {reason: Not elective, where: {variable: urgency, is_not: elective}}",
        default=None,
    )
    in_: list[Level] | None = key(
        "True where the value is one of these.",
        example="exclusions:\n  - {reason: Other wards, where: {variable: ward, in: [South, East]}}",
        default=None,
        alias="in",
    )
    below: NumberOrDay | None = key(
        "True where the quantity (or date) is below this value.",
        example="exclusions:\n  - {reason: Under 18, where: {variable: age, below: 18}}",
        default=None,
    )
    above: NumberOrDay | None = key(
        "True where the quantity (or date) is above this value.",
        example="exclusions:\n  - {reason: Over 90, where: {variable: age, above: 90}}",
        default=None,
    )
    missing: Truth | None = key(
        "True where the value is not recorded; with false, where it is recorded.",
        example="exclusions:\n  - {reason: Age not recorded, where: {variable: age, missing: true}}",
        default=None,
    )
    all: list[Condition] | None = key(
        "True where every one of these conditions is.",
        example="exclusions:\n  - reason: Young emergency\n    where:\n      all:\n"
        "        - {variable: urgency, is: emergency}\n        - {variable: age, below: 30}",
        default=None,
    )
    any: list[Condition] | None = key(
        "True where at least one of these conditions is.",
        example="exclusions:\n  - reason: Outside the ages studied\n    where:\n      any:\n"
        "        - {variable: age, below: 18}\n        - {variable: age, above: 90}",
        default=None,
    )

    @model_validator(mode="after")
    def _one_test(self) -> Condition:
        given = [_written(name) for name in self.model_fields_set if name != "variable"]
        given.sort(key=(*TESTS, "all", "any").index)
        tests = ", ".join(f"`{name}:`" for name in (*TESTS, "all", "any"))
        if len(given) != 1:
            what = f"holds {len(given)} tests ({', '.join(given)})" if given else "holds no test"
            raise refusal(
                f"{what}; exactly one is expected: {tests}.", "Join several conditions by `all:` or `any:`."
            )
        if given[0] in ("all", "any"):
            if self.variable is not None:
                raise refusal(
                    f"gives `variable:` beside `{given[0]}:`, whose conditions each name their own.",
                    "Move `variable:` into the conditions.",
                )
            if not (self.all or self.any):
                raise refusal(f"holds an empty `{given[0]}:`.", "List one or more conditions.")
        elif self.variable is None:
            raise refusal(
                f"tests `{given[0]}:` but names no variable.", f"Write {{variable: age, {given[0]}: ...}}."
            )
        if self.in_ is not None and not self.in_:
            raise refusal("holds an empty `in:`.", "List one or more values.")
        return self


def _written(name: str) -> str:
    return name.rstrip("_")


class Exclusion(Section):
    """Rows that are left out, and why; applied in order and counted in the participant flow."""

    reason: Text = key(
        "Why these rows are left out; printed in the participant flow.",
        example="exclusions:\n  - {reason: Under 18, where: {variable: age, below: 18}}",
    )
    where: Condition = key(
        "Which rows are left out.",
        example="exclusions:\n  - {reason: Under 18, where: {variable: age, below: 18}}",
    )
