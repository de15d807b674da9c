"""The command as a user runs it: a small study in an empty folder, and the command in a process."""

from __future__ import annotations

import os
import subprocess
import sys
from collections.abc import Callable, Mapping
from pathlib import Path
from typing import Any

import numpy as np
import pytest

FOURFOLD = [sys.executable, "-m", "fourfold.cli.main"]

SMALL = """\
study: {title: Rash after the picnic at Fenwick Mere, design: cohort, purpose: association}
data: {file: picnic.csv, identifier: guest}
variables:
  rash: {label: Rash, kind: binary, present: "yes"}
  swam: {label: Swam in the mere, kind: binary, present: "yes"}
  age: {label: Age, kind: quantity, unit: years, per: 10}
  tent: {label: Tent, kind: category, levels: [red, blue]}
outcome: rash
exposures: [swam]
covariates: [age, tent]
follow_up: {statement: [equal], exposure_measured: at start}
report: {formats: [html]}
"""


def picnic(rows: int = 400, seed: int = 5) -> str:
    """Rows of an invented picnic, csv; half swam, and swimming goes with a rash."""
    draw = np.random.default_rng(seed)
    swam = draw.random(rows) < 0.5
    age = draw.integers(18, 80, rows)
    tent = draw.choice(["red", "blue"], rows)
    rash = draw.random(rows) < np.where(swam, 0.45, 0.25)
    word = {True: "yes", False: "no"}
    lines = ["guest,rash,swam,age,tent"]
    lines += [f"P{i},{word[bool(rash[i])]},{word[bool(swam[i])]},{age[i]},{tent[i]}" for i in range(rows)]
    return "\n".join(lines) + "\n"


@pytest.fixture
def study(tmp_path: Path) -> Path:
    """A small description beside its data; HTML only, so that a run takes a second."""
    (tmp_path / "picnic.csv").write_text(picnic(), encoding="utf-8")
    path = tmp_path / "picnic.yaml"
    path.write_text(SMALL, encoding="utf-8")
    return path


Run = Callable[..., subprocess.CompletedProcess[str]]


@pytest.fixture
def run(tmp_path: Path) -> Run:
    """Run ``fourfold`` with arguments in a process of its own."""

    def start(
        *arguments: Any, cwd: Path | None = None, env: Mapping[str, str] | None = None
    ) -> subprocess.CompletedProcess[str]:
        return subprocess.run(
            [*FOURFOLD, *map(str, arguments)],
            capture_output=True, text=True, encoding="utf-8", timeout=240, check=False,
            cwd=cwd or tmp_path, env={**os.environ, **(env or {})},
        )  # fmt: skip

    return start
