"""``report --from results.json`` gives the same bytes again: no data, another place, another process."""

from __future__ import annotations

import os
import shutil
import subprocess
import sys
from pathlib import Path

import pytest

EXAMPLES = Path(__file__).parents[2] / "examples"
FORMATS = ("report.html", "report.pdf", "results.json")


def fourfold(folder: Path, *arguments: str, hash_seed: str) -> subprocess.CompletedProcess[str]:
    return subprocess.run(
        [sys.executable, "-m", "fourfold.cli.main", *arguments],
        cwd=folder, env={**os.environ, "PYTHONHASHSEED": hash_seed},
        capture_output=True, text=True, encoding="utf-8", timeout=240, check=False,
    )  # fmt: skip


def content(folder: Path) -> dict[str, bytes]:
    return {name: (folder / name).read_bytes() for name in FORMATS}


@pytest.mark.parametrize("name", ["harvest-supper", "readmission"])
def test_the_same_bytes_without_the_data(tmp_path, name):
    first = tmp_path / "first"
    first.mkdir()
    for ending in ("yaml", "csv"):
        shutil.copy(EXAMPLES / name / f"{name}.{ending}", first)
    made = fourfold(first, "report", f"{name}.yaml", hash_seed="1")
    assert made.returncode == 0, made.stderr
    original = content(first / f"{name}-report")

    elsewhere = tmp_path / "elsewhere" / "deep"
    elsewhere.mkdir(parents=True)
    shutil.copy(first / f"{name}-report" / "results.json", elsewhere / "results.json")
    shutil.rmtree(first)
    again = fourfold(elsewhere, "report", "--from", "results.json", "--into", "again", hash_seed="2")
    assert again.returncode == 0, again.stderr
    assert content(elsewhere / "again") == original
    # The closing lines too, but for the folder that they name.
    assert again.stdout.replace("again:", "X:") == made.stdout.replace(f"{name}-report:", "X:")

    # Without --into the files land beside the results file, which stays as it was.
    beside = fourfold(elsewhere, "report", "--from", "results.json", hash_seed="3")
    assert beside.returncode == 0, beside.stderr
    assert content(elsewhere) == original


def test_analysing_again_gives_the_same_bytes(tmp_path):
    contents = []
    for hash_seed in ("1", "77"):
        folder = tmp_path / hash_seed
        folder.mkdir()
        for ending in ("yaml", "csv"):
            shutil.copy(EXAMPLES / "harvest-supper" / f"harvest-supper.{ending}", folder)
        ran = fourfold(folder, "report", "harvest-supper.yaml", hash_seed=hash_seed)
        assert ran.returncode == 0, ran.stderr
        contents.append(content(folder / "harvest-supper-report"))
    assert contents[0] == contents[1]
