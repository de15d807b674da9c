"""Reference cases as designs: data and results made outside the project with R 4.2.2 (see
``tests/reference/README.md``), coded as each case's ``coding`` says."""

from __future__ import annotations

import json
from dataclasses import dataclass
from pathlib import Path
from typing import Any

import numpy as np
import pandas as pd

from fourfold.models.blocks import Blocks

REFERENCE = Path(__file__).resolve().parents[1] / "reference"

BIRTHWT = {
    "age": ["age"],
    "lwt": ["lwt"],
    "race": ["raceblack", "raceother"],
    "smoke": ["smokeyes"],
    "ptl": ["ptl"],
    "ht": ["htyes"],
    "ui": ["uiyes"],
}


@dataclass
class Case:
    """Columns by the reference's parameter names, the outcome, and what R found."""

    columns: dict[str, np.ndarray]
    event: np.ndarray
    expected: dict[str, Any]

    def blocks(self, parameters: list[str], width: int = 64) -> Blocks:
        """Blocks narrower than the data, so that sums really run over several."""
        return Blocks.from_matrix(np.column_stack([self.columns[name] for name in parameters]), width)


def expected(name: str) -> dict[str, Any]:
    return json.loads((REFERENCE / f"{name}.json").read_text(encoding="utf-8"))


def table(name: str) -> pd.DataFrame:
    return pd.read_csv(REFERENCE / f"{name}.csv")


def columns_of(
    frame: pd.DataFrame, quantities: list[str], levels: dict[str, list[str]]
) -> dict[str, np.ndarray]:
    found = {"(Intercept)": np.ones(len(frame))}
    for name in quantities:
        found[name] = frame[name].to_numpy(float)
    for name, wanted in levels.items():
        for level in wanted:
            found[name + level] = (frame[name] == level).to_numpy(float)
    return found


def births(frame: pd.DataFrame) -> dict[str, np.ndarray]:
    quantities = [name for name in ("age", "lwt", "ptl", "ftv") if name in frame]
    return columns_of(
        frame, quantities, {"race": ["black", "other"], "smoke": ["yes"], "ht": ["yes"], "ui": ["yes"]}
    )


def birthwt() -> Case:
    frame = table("birthwt")
    return Case(births(frame), (frame.low == "yes").to_numpy(), expected("birthwt"))


def bacteria() -> Case:
    frame = table("bacteria")
    columns = columns_of(frame, ["week"], {"treatment": ["drug", "drug+"]})
    return Case(columns, (frame.present == "yes").to_numpy(), expected("bacteria"))


def separated() -> Case:
    frame = table("separated")
    columns = columns_of(frame, ["age"], {"exposed": ["yes"]})
    return Case(columns, (frame.event == "yes").to_numpy(), expected("separated"))


def infert() -> Case:
    frame = table("infert")
    columns = columns_of(frame, ["spontaneous", "induced"], {})
    return Case(columns, (frame.case == "yes").to_numpy(), expected("infert"))


def household() -> tuple[Case, np.ndarray]:
    frame = table("household")
    columns = columns_of(frame, ["age"], {"region": ["hill", "plain"], "smoker": ["yes"]})
    return Case(columns, (frame.cough == "yes").to_numpy(), expected("household")), frame.weight.to_numpy(
        float
    )


def equation() -> tuple[Case, np.ndarray]:
    """The new data and the linear predictor of the given equation."""
    frame = table("equation")
    found = expected("equation")
    given = found["equation"]
    linear = (
        given["intercept"]
        + given["age"] * frame.age
        + given["marker"] * frame.marker
        + given["fever_yes"] * (frame.fever == "yes")
    ).to_numpy(float)
    columns = {"(Intercept)": np.ones(len(frame)), "linear": linear}
    return Case(columns, (frame.relapse == "yes").to_numpy(), found), linear


def random_design(seed: int) -> tuple[np.ndarray, np.ndarray]:
    """A design of unlike columns and an outcome that depends on them; never separated."""
    rng = np.random.default_rng(seed)
    n, k = int(rng.integers(200, 1500)), int(rng.integers(1, 8))
    columns = [np.ones(n)]
    for column in range(k):
        kind = column % 3
        if kind == 0:
            columns.append(rng.normal(rng.uniform(-50, 50), rng.uniform(0.1, 20), n))
        elif kind == 1:
            columns.append((rng.random(n) < rng.uniform(0.15, 0.6)).astype(float))
        else:
            columns.append(rng.poisson(2.0, n).astype(float))
    x = np.column_stack(columns)
    spread = np.where(x.std(axis=0) > 0, x.std(axis=0), 1.0)
    eta = (x - x.mean(axis=0)) / spread @ rng.normal(0, 0.5, k + 1) + rng.normal(-0.5, 0.7)
    return x, rng.random(n) < 1 / (1 + np.exp(-eta))
