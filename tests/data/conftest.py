"""Small studies for the tests of the data stage."""

from __future__ import annotations

import json
from collections.abc import Callable
from pathlib import Path
from typing import Any

import pytest
import yaml

from fourfold.description.read import Loaded, load

REFERENCE = Path(__file__).parent.parent / "reference"
VARIABLES = {
    "fever": {"kind": "binary", "present": "yes"},
    "exposed": {"kind": "binary", "present": "yes"},
    "age": {"kind": "quantity", "unit": "years"},
}

Study = Callable[..., Loaded]


@pytest.fixture
def reference() -> Path:
    """The folder of open data and reference results."""
    return REFERENCE


@pytest.fixture
def study(tmp_path: Path) -> Study:
    """Write a data file (text or bytes; None for one that is there) and a description of it; load it.

    Whatever is not given is a small cohort: fever by exposure, and age.
    """

    def make(content: str | bytes | None, *, file: str = "rows.csv", **keys: Any) -> Loaded:
        if content is not None:
            (tmp_path / file).write_bytes(content.encode() if isinstance(content, str) else content)
        description = {
            "study": {"title": "Fever in Ashmere", "design": "cohort", "purpose": "association"},
            "variables": VARIABLES,
            "outcome": "fever",
            "exposures": ["exposed"],
            **keys,
            "data": {"file": file, **keys.get("data", {})},
        }
        path = tmp_path / "study.yaml"
        # By way of JSON, so that the writer of YAML makes no aliases of parts that are the same object.
        text = yaml.safe_dump(json.loads(json.dumps(description)), allow_unicode=True)
        path.write_text(text, encoding="utf-8")
        return load(path, allow_outside=True)

    return make
