"""From a data file to a report by way of ``draft``: what a person answers, and nothing else.

Data: the open cases of tests/reference (its README names their sources).
"""

from __future__ import annotations

import errno
import json
import os
import re
import shutil
from pathlib import Path

import pytest
import yaml

from fourfold.errors import RenderingError
from fourfold.pipeline import draft

REFERENCE = Path(__file__).parents[1] / "reference"

ANSWERS = {
    "bacteria": {
        "title": "Bacteria after treatment",
        "design": "cohort",
        "outcome": "present",
        "exposures": "[treatment]",
        "covariates": "[week]",
    },
    "birthwt": {
        "title": "Low birth weight",
        "design": "cohort",
        "outcome": "low",
        "exposures": "[smoke]",
        "covariates": "[age, lwt, race]",
    },
    "household": {
        "title": "Cough in households",
        "design": "survey",
        "outcome": "cough",
        "exposures": "[smoker]",
        "covariates": "[age, region]",
    },
}


def answered(text: str, answers: dict[str, str]) -> str:
    """Put an answer in the place of each ANSWER, as the comments of the draft ask."""
    left = dict(answers)
    lines = []
    for line in text.splitlines():
        key = line.partition(":")[0].strip()
        if "# answer:" in line and key in left:
            line = re.sub(r"(:\s*)(\[ANSWER\]|ANSWER|\[\])(?=\s+#)", rf"\g<1>{left.pop(key)}", line)
        lines.append(line)
    assert not left, f"the draft does not ask for {sorted(left)}"
    return "\n".join(lines) + "\n"


@pytest.mark.parametrize("name", ANSWERS)
def test_draft_answer_check_report(run, tmp_path, name):
    shutil.copy(REFERENCE / f"{name}.csv", tmp_path)
    study = tmp_path / "study.yaml"
    drafted = run("draft", f"{name}.csv", "--output", "study.yaml")
    assert (drafted.returncode, drafted.stderr) == (0, "")
    assert "fourfold check study.yaml" in drafted.stdout

    # Not answered, it is refused: each open question with its line.
    open_questions = run("check", "study.yaml")
    assert open_questions.returncode == 3
    text = study.read_text(encoding="utf-8")
    asked = [
        number for number, line in enumerate(text.splitlines(), 1) if re.search(r"ANSWER.*# answer:", line)
    ]
    assert len(asked) == 4
    for line in asked:
        assert f"study.yaml:{line}:" in open_questions.stderr

    study.write_text(answered(text, ANSWERS[name]), encoding="utf-8")
    checked = run("check", "study.yaml")
    assert (checked.returncode, checked.stderr) == (0, "")
    assert "The description can be used. Nothing was fitted." in checked.stdout

    reported = run("report", "study.yaml")
    assert (reported.returncode, reported.stderr) == (0, "")
    folder = tmp_path / "study-report"
    assert sorted(entry.name for entry in folder.iterdir()) == ["report.html", "report.pdf", "results.json"]
    results = json.loads((folder / "results.json").read_text(encoding="utf-8"))
    assert results["study"]["title"] == ANSWERS[name]["title"]
    rows = len((REFERENCE / f"{name}.csv").read_text().splitlines()) - 1
    assert results["participants"]["analysed"] == rows


def test_standard_output_holds_the_same_text(run, tmp_path):
    shutil.copy(REFERENCE / "birthwt.csv", tmp_path)
    run("draft", "birthwt.csv", "--output", "study.yaml")
    assert run("draft", "birthwt.csv").stdout == (tmp_path / "study.yaml").read_text(encoding="utf-8")


def test_a_draft_in_another_folder_still_finds_its_data(run, tmp_path):
    (tmp_path / "rows").mkdir()
    shutil.copy(REFERENCE / "birthwt.csv", tmp_path / "rows")
    run("draft", "rows/birthwt.csv", "--output", "study.yaml")
    study = tmp_path / "study.yaml"
    text = study.read_text(encoding="utf-8")
    assert yaml.safe_load(text)["data"]["file"] == "rows/birthwt.csv"
    study.write_text(answered(text, ANSWERS["birthwt"]), encoding="utf-8")
    assert run("check", "study.yaml").returncode == 0

    (tmp_path / "studies").mkdir()
    drafted = run("draft", "rows/birthwt.csv", "--output", "studies/study.yaml")
    assert "fourfold check --allow-outside studies/study.yaml" in drafted.stdout
    inside = tmp_path / "studies" / "study.yaml"
    inside.write_text(answered(inside.read_text(encoding="utf-8"), ANSWERS["birthwt"]), encoding="utf-8")
    assert run("check", "studies/study.yaml").returncode == 3
    assert run("check", "--allow-outside", "studies/study.yaml").returncode == 0


def test_a_disk_that_fills_leaves_no_half_draft(tmp_path, monkeypatch):
    def full(_: int) -> None:
        raise OSError(errno.ENOSPC, os.strerror(errno.ENOSPC))

    monkeypatch.setattr("fourfold.pipeline.draft.os.fsync", full)
    with pytest.raises(RenderingError, match="No space left on device"):
        draft.save("study:\n", tmp_path / "study.yaml")
    assert list(tmp_path.iterdir()) == []
