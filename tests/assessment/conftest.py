"""Reference cases as arrays: data, the fit computed in base R, and what R makes of it."""

from __future__ import annotations

import csv
import json
from dataclasses import dataclass
from pathlib import Path
from typing import Any

import numpy as np
import pytest

REFERENCE = Path(__file__).parents[1] / "reference"


@dataclass(frozen=True)
class Case:
    """A design with R's coefficients; ``expected`` is the whole reference file."""

    X: np.ndarray
    event: np.ndarray
    coefficients: np.ndarray
    covariance: np.ndarray
    expected: dict[str, Any]

    @property
    def log_odds(self) -> np.ndarray:
        return self.X @ self.coefficients

    @property
    def risk(self) -> np.ndarray:
        return 1 / (1 + np.exp(-self.log_odds))


def expected_of(name: str) -> dict[str, Any]:
    found: dict[str, Any] = json.loads((REFERENCE / f"{name}.json").read_text(encoding="utf-8"))
    return found


def rows_of(name: str) -> list[dict[str, str]]:
    with (REFERENCE / f"{name}.csv").open(encoding="utf-8", newline="") as file:
        return list(csv.DictReader(file))


def columns(rows: list[dict[str, str]], *coding: tuple[str, str | None]) -> np.ndarray:
    """Intercept, then each variable as a number (None) or as an indicator of a value."""
    parts = [np.ones(len(rows))]
    for name, value in coding:
        parts.append(np.array([float(r[name]) if value is None else float(r[name] == value) for r in rows]))
    return np.column_stack(parts)


def case(name: str, outcome: str, *coding: tuple[str, str | None]) -> Case:
    rows, expected = rows_of(name), expected_of(name)
    return Case(
        columns(rows, *coding),
        np.array([row[outcome] == "yes" for row in rows]),
        np.array(expected["coefficients"]),
        np.array(expected["covariance"]),
        expected,
    )


@pytest.fixture(scope="session")
def birthwt() -> Case:
    return case(
        "birthwt", "low", ("age", None), ("lwt", None), ("race", "black"), ("race", "other"),
        ("smoke", "yes"), ("ptl", None), ("ht", "yes"), ("ui", "yes"),
    )  # fmt: skip


@pytest.fixture(scope="session")
def bacteria() -> Case:
    return case("bacteria", "present", ("treatment", "drug"), ("treatment", "drug+"), ("week", None))


@pytest.fixture(scope="session")
def equation() -> Case:
    """Invented data and an equation that was not fitted to them."""
    rows, expected = rows_of("equation"), expected_of("equation")
    X = columns(rows, ("age", None), ("marker", None), ("fever", "yes"))
    names = ("intercept", "age", "marker", "fever_yes")
    return Case(
        X,
        np.array([row["relapse"] == "yes" for row in rows]),
        np.array([expected["equation"][name] for name in names]),
        np.full((4, 4), np.nan),
        expected,
    )


@pytest.fixture(params=["birthwt", "bacteria"])
def fitted(request: pytest.FixtureRequest) -> Case:
    """Each model that was fitted to its own data."""
    found: Case = request.getfixturevalue(request.param)
    return found
