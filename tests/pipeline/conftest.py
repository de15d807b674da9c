"""Studies of the reference cases, described as a user would."""

from __future__ import annotations

import json
import shutil
from collections.abc import Callable
from pathlib import Path
from typing import Any

import pytest
import yaml

from fourfold.data.prepare import prepare
from fourfold.description.read import load
from fourfold.pipeline.analyse import results_of
from fourfold.pipeline.progress import Silent
from fourfold.results import tree

REFERENCE = Path(__file__).parents[1] / "reference"

BINARY = {"kind": "binary", "present": "yes"}

BIRTHWT: dict[str, Any] = {
    "study": {"title": "Low birth weight", "design": "cohort", "purpose": "association"},
    "data": {"file": "birthwt.csv", "identifier": "id"},
    "variables": {
        "low": {"label": "Low birth weight", **BINARY},
        "smoke": {"label": "Smoking", **BINARY},
        "age": {"label": "Age", "kind": "quantity", "unit": "years"},
        "lwt": {"label": "Weight", "kind": "quantity", "unit": "pounds"},
        "race": {
            "label": "Race",
            "kind": "category",
            "levels": ["white", "black", "other"],
            "reference": "white",
        },
        "ptl": {"label": "Premature labours", "kind": "quantity", "unit": "labours"},
        "ht": {"label": "Hypertension", **BINARY},
        "ui": {"label": "Uterine irritability", **BINARY},
    },
    "outcome": "low",
    "exposures": ["smoke"],
    "covariates": ["age", "lwt", "race", "ptl", "ht", "ui"],
    "disclosure": {"smallest_count": 0},
}


def reference(name: str) -> dict[str, Any]:
    """Reference results of a case, computed in base R 4.2.2 (see tests/reference/README.md)."""
    found: dict[str, Any] = json.loads((REFERENCE / f"{name}.json").read_text(encoding="utf-8"))
    return found


Analysed = Callable[[dict[str, Any]], tree.Results]


@pytest.fixture
def write_study(tmp_path: Path) -> Callable[[dict[str, Any]], Path]:
    """Write a description, with the reference data it names, into an empty folder."""

    def write(description: dict[str, Any]) -> Path:
        source = REFERENCE / description["data"]["file"]
        if source.exists():
            shutil.copy(source, tmp_path / source.name)
        path = tmp_path / "study.yaml"
        path.write_text(yaml.safe_dump(description, sort_keys=False), encoding="utf-8")
        return path

    return write


@pytest.fixture
def analysed(write_study: Callable[[dict[str, Any]], Path]) -> Analysed:
    """The full results of a description, nothing hidden."""

    def run(description: dict[str, Any]) -> tree.Results:
        loaded = load(write_study(description))
        return results_of(loaded, prepare(loaded), Silent())

    return run
