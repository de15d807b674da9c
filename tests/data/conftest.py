"""Small studies for the tests of the data stage."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from pathlib import Path
from typing import Any

import pytest

from fourfold.description.model import StudyDescription

REFERENCE = Path(__file__).parent.parent / "reference"
VARIABLES = {
    "fever": {"kind": "binary", "present": "yes"},
    "exposed": {"kind": "binary", "present": "yes"},
    "age": {"kind": "quantity", "unit": "years"},
}


@dataclass(frozen=True)
class Described:
    """A description in memory with the folder its data file is looked for in."""

    description: StudyDescription
    path: Path


Study = Callable[..., Any]


@pytest.fixture
def study(tmp_path: Path) -> Study:
    """Write a data file (text or bytes; None for one that is there) and describe it."""

    def make(content: str | bytes | None, *, file: str = "rows.csv", folder: Path = tmp_path, **keys: Any) -> Any:
        if content is not None:
            (folder / file).write_bytes(content.encode() if isinstance(content, str) else content)
        header = {"title": "Fever in Ashmere", "design": "cohort", "purpose": "association"}
        description = {
            "study": header,
            "variables": VARIABLES,
            "outcome": "fever",
            "exposures": ["exposed"],
            "covariates": [],
            **keys,
            "data": {"file": file, **keys.get("data", {})},
        }
        return Described(StudyDescription.model_validate(description), folder / "study.yaml")

    return make
