"""The models' JSON Schema as an editor wants it: what stands in a file, with examples."""

from __future__ import annotations

from datetime import date
from typing import Any

import yaml

_NULL = {"type": "null"}


def without_python(schema: dict[str, Any]) -> dict[str, Any]:
    """The schema of the models with what matters only in Python taken out.

    Null goes (a key that is not wanted is left out of the file, never left empty), and each
    key's example becomes a value.
    """
    tidied = {name: part for name, part in schema.items() if name not in ("properties", "$defs")}
    tidied["properties"] = {name: _key(name, part) for name, part in schema["properties"].items()}
    tidied["$defs"] = {name: _section(part) for name, part in schema["$defs"].items()}
    return tidied


def _section(section: dict[str, Any]) -> dict[str, Any]:
    section = dict(section)
    if "anyOf" in section:
        section["anyOf"] = [_section(part) for part in section["anyOf"]]
    if "properties" in section:
        section["properties"] = {name: _key(name, part) for name, part in section["properties"].items()}
    return section


def _key(name: str, key: dict[str, Any]) -> dict[str, Any]:
    key = dict(key)
    example, otherwise = key.pop("example"), key.pop("otherwise")
    if key.get("default", ...) is None:
        del key["default"]
    kinds = [kind for kind in key.get("anyOf", []) if kind != _NULL]
    if kinds:
        del key["anyOf"]
        key = {**key, **(kinds[0] if len(kinds) == 1 else {"anyOf": kinds})}
    if otherwise:
        # A key that says the same as its section leaves the description to the section.
        key["description"] = f"{key.get('description', '')} If absent: {otherwise}".strip()
    return {**key, "examples": [_as_json(_found(name, yaml.safe_load(example)))]}


def _found(name: str, example: Any) -> Any:
    """The value of the key ``name`` in an example, wherever it stands."""
    if isinstance(example, dict):
        if name in example:
            return example[name]
        example = list(example.values())
    if isinstance(example, list):
        for part in example:
            value = _found(name, part)
            if value is not None:
                return value
    return None


def _as_json(value: Any) -> Any:
    if isinstance(value, dict):
        return {str(key): _as_json(part) for key, part in value.items()}
    if isinstance(value, list):
        return [_as_json(part) for part in value]
    return value.isoformat() if isinstance(value, date) else value
