"""Each exit code of the command line, from a run that earns it."""

from __future__ import annotations

import os
import pty
import signal
import sys
import time
from pathlib import Path

import pytest
from tests.cli.conftest import FOURFOLD, SMALL

from fourfold.cli import main as cli


def test_done_is_0_and_the_closing_lines_carry_answer_and_caution(run, study):
    ran = run("report", study)
    assert ran.returncode == 0, ran.stderr
    assert ran.stderr == ""
    lines = ran.stdout.splitlines()
    assert lines[0] == "Rash after the picnic at Fenwick Mere"
    assert lines[1].startswith("Swam in the mere (yes against no): the odds of rash")
    assert "Findings: " in ran.stdout
    assert "report.html, results.json" in ran.stdout
    closing = " ".join(ran.stdout.split())
    assert "not for individual clinical decisions" in closing
    assert closing.rstrip().endswith("to a qualified statistician or clinician.")
    assert {entry.name for entry in (study.parent / "picnic-report").iterdir()} == {
        "report.html",
        "results.json",
    }


def test_quiet_says_nothing(run, study):
    ran = run("report", study, "--quiet")
    assert (ran.returncode, ran.stdout, ran.stderr) == (0, "", "")


@pytest.mark.parametrize("command", ["report", "check"])
def test_strict_turns_a_serious_finding_into_1_and_still_writes(run, study, command):
    # Censoring stated for a logistic model is a serious finding that needs no fit.
    text = SMALL.replace("statement: [equal]", "statement: [censored]")
    study.write_text(text, encoding="utf-8")
    loose, strict = run(command, study), run(command, study, "--strict")
    assert loose.returncode == 0, loose.stderr
    assert strict.returncode == 1, strict.stderr
    assert "Serious findings" in strict.stdout or "serious: " in strict.stdout
    assert (study.parent / "picnic-report").exists() == (command == "report")


def test_strict_without_a_serious_finding_is_0(run, study):
    ran = run("report", study, "--strict")
    assert "Findings: 0 serious" in ran.stdout
    assert ran.returncode == 0


@pytest.mark.parametrize(
    "arguments",
    [
        [],
        ["report"],
        ["report", "a.yaml", "--from", "results.json"],
        ["report", "a.yaml", "--nonsense"],
        ["nonsense"],
        ["completion", "csh"],
        ["keys", "nonsense"],
        ["report", "--from", "nowhere.json"],
    ],
)
def test_wrong_usage_is_2(run, arguments):
    ran = run(*arguments)
    assert ran.returncode == 2
    assert "Traceback" not in ran.stderr
    assert ran.stderr.strip()


def test_error_in_the_description_is_3_with_line_and_column(run, study):
    study.write_text(SMALL.replace("kind: quantity", "kind: quantitty"), encoding="utf-8")
    ran = run("report", study)
    assert ran.returncode == 3
    line = 1 + SMALL.split("kind: quantity")[0].count("\n")
    assert f"picnic.yaml:{line}:" in ran.stderr
    assert "quantity" in ran.stderr
    assert ran.stderr.startswith("error: ")


def test_all_errors_of_a_description_come_at_once(run, study):
    text = SMALL.replace("kind: quantity", "kind: quantitty").replace("design: cohort", "design: cohrot")
    study.write_text(text, encoding="utf-8")
    ran = run("check", study)
    assert ran.returncode == 3
    assert ran.stderr.count("error: ") == 2
    assert "2 problems found." in ran.stderr


def test_error_in_the_data_is_4_with_its_line(run, study):
    data = study.parent / "picnic.csv"
    rows = data.read_text().splitlines()
    rows[6] = "P5,yes,no,young,red"
    data.write_text("\n".join(rows) + "\n")
    ran = run("report", study)
    assert ran.returncode == 4
    assert "picnic.csv:7" in ran.stderr or "line 7" in ran.stderr
    assert "age" in ran.stderr
    assert not (study.parent / "picnic-report").exists()


def test_nothing_to_fit_is_5(run, study):
    data = study.parent / "picnic.csv"
    rows = [row.split(",") for row in data.read_text().splitlines()]
    rows = [[*rows[0], "months"], *[[*row, str(12 * int(row[3]))] for row in rows[1:]]]
    data.write_text("\n".join(",".join(row) for row in rows) + "\n")
    text = SMALL.replace("  tent:", "  months: {kind: quantity, unit: months}\n  tent:")
    study.write_text(text.replace("[age, tent]", "[age, months]"), encoding="utf-8")
    ran = run("report", study)
    assert ran.returncode == 5
    assert "months" in ran.stderr
    assert "age" in ran.stderr
    assert not (study.parent / "picnic-report").exists()


def test_rendering_that_fails_is_6(run, study, tmp_path):
    blocked = tmp_path / "a file"
    blocked.write_text("mine")
    ran = run("report", study, "--into", blocked)
    assert ran.returncode == 6
    assert "is a file, not a folder" in ran.stderr
    assert blocked.read_text() == "mine"


def test_interrupted_is_130(study):
    child, screen = pty.fork()
    if child == 0:
        os.environ["TERM"] = "xterm"
        os.execv(sys.executable, [*FOURFOLD, "report", str(study)])
    seen, sent, deadline = b"", False, time.monotonic() + 120
    while time.monotonic() < deadline:
        try:
            seen += os.read(screen, 65536)
        except OSError:
            break
        if not sent and b"reading" in seen:
            os.kill(child, signal.SIGINT)
            sent = True
    assert os.waitstatus_to_exitcode(os.waitpid(child, 0)[1]) == 130, seen
    assert b"Interrupted. Nothing was changed" in seen
    assert b"Traceback" not in seen
    assert [entry.name for entry in sorted(study.parent.iterdir())] == ["picnic.csv", "picnic.yaml"]


def broken(*_: object, **__: object) -> None:
    raise KeyError("Mrs Imaginary, bed 4")


def test_a_fault_of_the_program_is_70_without_traceback(study, monkeypatch, capsys):
    monkeypatch.setattr("fourfold.pipeline.report.report", broken)
    monkeypatch.setattr(sys, "argv", ["fourfold", "report", str(study)])
    monkeypatch.delenv("FOURFOLD_TRACEBACK", raising=False)
    with pytest.raises(SystemExit) as left:
        cli.main()
    said = capsys.readouterr().err
    assert left.value.code == 70
    assert said.startswith("error: internal error KeyError at test_exit_codes.py:")
    assert "nothing was changed" in said
    assert "please report it, with the description" in said
    # A fault's own words can hold a value from somebody's row.
    assert "Imaginary" not in said


def test_the_traceback_is_shown_to_who_asks(study, monkeypatch):
    monkeypatch.setattr("fourfold.pipeline.report.report", broken)
    monkeypatch.setattr(sys, "argv", ["fourfold", "report", str(study)])
    monkeypatch.setenv("FOURFOLD_TRACEBACK", "1")
    with pytest.raises(KeyError, match="Imaginary"):
        cli.main()


def test_memory_that_runs_out_is_said(study, monkeypatch, capsys):
    def starved(*_: object, **__: object) -> None:
        raise MemoryError

    monkeypatch.setattr("fourfold.pipeline.report.report", starved)
    monkeypatch.setattr(sys, "argv", ["fourfold", "report", str(study)])
    with pytest.raises(SystemExit) as left:
        cli.main()
    assert left.value.code == 70
    assert "not enough memory" in capsys.readouterr().err


def test_the_help_lists_the_codes(run):
    words = " ".join(run("--help").stdout.split())
    for code in ("0 done", "1 done, but", "2 wrong usage", "3 error in the description",
                 "4 error in the data", "5 nothing can be fitted", "6 rendering failed",
                 "70 internal error", "130 interrupted"):  # fmt: skip
        assert code in words


def test_no_file_is_left_in_the_folder_of_the_study_but_the_report(run, study: Path):
    run("report", study)
    assert sorted(entry.name for entry in study.parent.iterdir()) == [
        "picnic-report",
        "picnic.csv",
        "picnic.yaml",
    ]
