"""``fourfold keys``: help for each key, and a schema that the examples conform to."""

from __future__ import annotations

import json
import subprocess
from pathlib import Path
from typing import Any

import pytest
import yaml
from tests.cli.conftest import FOURFOLD

EXAMPLES = sorted((Path(__file__).parents[2] / "examples").glob("*/*.yaml"))


def test_the_list_names_every_section(run):
    ran = run("keys")
    assert (ran.returncode, ran.stderr) == (0, "")
    for key in ("study", "data", "variables", "outcome", "exposures", "exclusions", "disclosure"):
        assert f"\n{key} " in ran.stdout


@pytest.mark.parametrize(
    ("key", "words"),
    [
        ("per", ["variables.NAME.per", "a number", "per: 10"]),
        ("analysis.confidence", ["analysis.confidence", "95"]),
        ("age_band", ["cut", "from"]),
        ("cohort", ["study.design"]),
    ],
)
def test_a_key_is_explained_with_an_example(run, key, words):
    ran = run("keys", key)
    assert (ran.returncode, ran.stderr) == (0, "")
    assert "example" in ran.stdout
    for word in words:
        assert word in ran.stdout


def test_an_unknown_key_is_answered_with_the_nearest(run):
    ran = run("keys", "expsures")
    assert ran.returncode == 2
    assert ran.stdout == ""
    assert ran.stderr.startswith("error: ")
    assert "'exposures'" in ran.stderr


TYPES: dict[str, Any] = {
    "object": dict, "array": list, "string": str, "boolean": bool,
    "integer": int, "number": (int, float), "null": type(None),
}  # fmt: skip


def conforms(value: Any, schema: dict[str, Any], root: dict[str, Any]) -> bool:
    """The structure alone: types, keys, choices (JSON Schema draft 2020-12)."""
    if "$ref" in schema:
        return conforms(value, root["$defs"][schema["$ref"].rsplit("/", 1)[1]], root)
    for word in ("anyOf", "oneOf"):
        if word in schema and not any(conforms(value, part, root) for part in schema[word]):
            return False
    if "enum" in schema and value not in schema["enum"]:
        return False
    if "const" in schema and value != schema["const"]:
        return False
    if "type" in schema and not isinstance(value, TYPES[schema["type"]]):
        return False
    if isinstance(value, dict):
        known = schema.get("properties", {})
        extra = schema.get("additionalProperties", True)
        if not set(schema.get("required", [])) <= set(value):
            return False
        for key, part in value.items():
            if key in known:
                if not conforms(part, known[key], root):
                    return False
            elif extra is False or (isinstance(extra, dict) and not conforms(part, extra, root)):
                return False
    if isinstance(value, list) and "items" in schema:
        return all(conforms(part, schema["items"], root) for part in value)
    return True


def described(path: Path) -> Any:
    """A description as JSON would hold it: dates as texts."""
    return json.loads(json.dumps(yaml.safe_load(path.read_text(encoding="utf-8")), default=str))


@pytest.fixture(scope="module")
def schema() -> dict[str, Any]:
    shown = subprocess.run([*FOURFOLD, "keys", "--schema"], capture_output=True, text=True, check=True)
    found: dict[str, Any] = json.loads(shown.stdout)
    return found


@pytest.mark.parametrize("path", EXAMPLES, ids=lambda path: path.stem)
def test_the_examples_conform_to_the_schema(schema, path):
    assert conforms(described(path), schema, schema)


@pytest.mark.parametrize("path", EXAMPLES, ids=lambda path: path.stem)
def test_what_is_altered_does_not_conform(schema, path):
    whole = described(path)
    for altered in (
        {**whole, "nonsense": 1},
        {key: part for key, part in whole.items() if key != "study"},
        {**whole, "study": {**whole["study"], "design": "guesswork"}},
        {**whole, "variables": ["age"]},
    ):
        assert not conforms(altered, schema, schema)


def test_there_are_three_examples():
    assert [path.stem for path in EXAMPLES] == ["harvest-supper", "readmission", "wound-infection"]
