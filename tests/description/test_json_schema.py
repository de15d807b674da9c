"""The JSON Schema: descriptions that load conform to it, and altered ones do not.

The check is written out here for the words that the schema uses, after the JSON Schema draft
2020-12 (core, sections 8 and 10; validation, section 6); an unknown word fails the test.
"""

from __future__ import annotations

import json
from datetime import date
from pathlib import Path
from typing import Any

import pytest
import yaml

from fourfold.description import keys
from fourfold.description.outline import outline

from .studies import FULL, SMALL

NOTES = {"title", "description", "examples", "default", "$schema", "$defs", "format"}
TYPES: dict[str, tuple[type, ...]] = {
    "object": (dict,),
    "array": (list,),
    "string": (str,),
    "boolean": (bool,),
    "null": (type(None),),
    "integer": (int,),
    "number": (int, float),
}
EXAMPLES = sorted((Path(__file__).parents[2] / "examples").glob("*/*.yaml"))


def faults(value: Any, schema: dict[str, Any], root: dict[str, Any], at: str = "") -> list[str]:
    """Where ``value`` does not conform to ``schema``."""
    found: list[str] = []
    for word, wanted in schema.items():
        if word in NOTES or (word in ("properties", "additionalProperties") and not isinstance(value, dict)):
            continue
        if word == "$ref":
            found += faults(value, root["$defs"][wanted.removeprefix("#/$defs/")], root, at)
        elif word == "type":
            right = isinstance(value, TYPES[wanted]) and (wanted == "boolean" or not isinstance(value, bool))
            found += [] if right else [f"{at}: {value!r} is no {wanted}"]
        elif word in ("anyOf", "oneOf"):
            fitting = [part for part in wanted if not faults(value, part, root, at)]
            right = len(fitting) == 1 if word == "oneOf" else bool(fitting)
            found += [] if right else [f"{at}: {value!r} fits none"]
        elif word == "enum":
            found += [] if value in wanted else [f"{at}: {value!r} is none of {wanted}"]
        elif word == "const":
            found += [] if value == wanted else [f"{at}: {value!r} is not {wanted!r}"]
        elif word == "properties":
            for name in value.keys() & wanted.keys():
                found += faults(value[name], wanted[name], root, f"{at}.{name}")
        elif word == "additionalProperties":
            extra = value.keys() - schema.get("properties", {}).keys()
            if wanted is False:
                found += [f"{at}: {name} is not known" for name in extra]
            else:
                for name in extra:
                    found += faults(value[name], wanted, root, f"{at}.{name}")
        elif word == "required":
            missing = [name for name in wanted if isinstance(value, dict) and name not in value]
            found += [f"{at}: {name} is missing" for name in missing]
        elif word == "items":
            for place, item in enumerate(value if isinstance(value, list) else []):
                found += faults(item, wanted, root, f"{at}[{place}]")
        elif word in ("minItems", "maxItems", "minLength"):
            if isinstance(value, str if word == "minLength" else list):
                right = len(value) <= wanted if word == "maxItems" else len(value) >= wanted
                found += [] if right else [f"{at}: {word} {wanted}"]
        elif word in ("minimum", "maximum", "exclusiveMinimum", "exclusiveMaximum"):
            if isinstance(value, int | float):
                right = {
                    "minimum": value >= wanted,
                    "maximum": value <= wanted,
                    "exclusiveMinimum": value > wanted,
                    "exclusiveMaximum": value < wanted,
                }[word]
                found += [] if right else [f"{at}: {word} {wanted}"]
        else:
            raise AssertionError(f"the schema uses {word}, which this test does not know")
    return found


def as_json(text: str) -> Any:
    """A description as an editor's JSON Schema sees it: dates are texts, keys are texts."""

    def plain(value: Any) -> Any:
        if isinstance(value, dict):
            return {str(key): plain(part) for key, part in value.items()}
        if isinstance(value, list):
            return [plain(part) for part in value]
        return value.isoformat() if isinstance(value, date) else value

    return plain(yaml.safe_load(text))


@pytest.mark.parametrize("text", [FULL, SMALL, *(path.read_text() for path in EXAMPLES)])
def test_descriptions_that_load_conform(text: str) -> None:
    schema = keys.schema()
    assert faults(as_json(text), schema, schema) == []


@pytest.mark.parametrize(
    ("old", "new", "fault"),
    [
        ("covariates:", "covariate:", ": covariate is not known"),
        ("kind: date", "kind: time", ".variables.seen.kind: 'time' fits none"),
        ("kind: quantity", "kind: quantity, per: ten", ".variables.age.per: 'ten' is no number"),
        ("kind: quantity", "kind: quantity, plausible: [1]", ".variables.age.plausible: minItems 2"),
        ("outcome: infection\n", "", ": outcome is missing"),
        ("outcome:", "analysis: {confidence: 100}\noutcome:", ".analysis.confidence: exclusiveMaximum 100"),
        ("[North, South]", "North", ".variables.ward.levels: 'North' is no array"),
        ("design: cohort", "design: external validation", "external validation"),
        ("[age, ward]", "[age, {name: ward}]", ".covariates[1]"),
        ("kind: quantity", "label: , kind: quantity", ".variables.age.label: None is no string"),
    ],
)
def test_altered_descriptions_do_not(old: str, new: str, fault: str) -> None:
    schema = keys.schema()
    found = faults(as_json(SMALL.replace(old, new, 1)), schema, schema)
    assert any(fault.removesuffix(" fits none") in one for one in found), found


def test_the_schema_is_draft_2020_12_without_an_id_and_is_json() -> None:
    schema = keys.schema()
    assert schema["$schema"] == "https://json-schema.org/draft/2020-12/schema"
    assert "$id" not in schema
    assert json.loads(json.dumps(schema)) == schema


def test_every_key_stands_in_the_schema_with_an_example() -> None:
    schema = keys.schema()
    sections = {"(top)": schema, **schema["$defs"]}
    described = 0
    for section in sections.values():
        section = section["anyOf"][1] if "anyOf" in section else section
        for name, key in section.get("properties", {}).items():
            described += 1
            assert key["examples"] != [None], name
            for example in key["examples"]:
                assert faults(example, key, schema, name) == []
    named = {(*key.inside[:-1], key.name) for key in outline().values()}
    # exposures, predictors and covariates share the three keys of a role.
    assert described == len(named) - 2 * 3
