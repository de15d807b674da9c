"""What depends on a terminal: progress and colour on one, neither in a pipe."""

from __future__ import annotations

import os
import pty
import subprocess
import sys

from tests.cli.conftest import FOURFOLD

ESCAPE = b"\x1b["


def on_terminal(arguments: list[str]) -> tuple[int, bytes]:
    child, screen = pty.fork()
    if child == 0:
        os.environ.update(TERM="xterm-256color", COLUMNS="100")
        os.environ.pop("NO_COLOR", None)
        os.execv(sys.executable, [*FOURFOLD, *arguments])
    seen = b""
    while True:
        try:
            part = os.read(screen, 65536)
        except OSError:  # Linux says so at the end of a terminal
            break
        if not part:
            break
        seen += part
    return os.waitstatus_to_exitcode(os.waitpid(child, 0)[1]), seen


def test_progress_and_colour_on_a_terminal(study):
    code, seen = on_terminal(["report", str(study)])
    assert code == 0, seen
    assert b"reading and checking the data" in seen
    assert ESCAPE + b"1m" in seen  # the title in bold


def test_quiet_on_a_terminal_shows_nothing(study):
    code, seen = on_terminal(["report", str(study), "--quiet"])
    assert (code, seen) == (0, b"")


def test_neither_in_a_pipe(run, study):
    ran = run("report", study)
    assert "\x1b" not in ran.stdout + ran.stderr
    assert "reading and checking" not in ran.stdout + ran.stderr


def test_an_error_is_red_on_a_terminal_and_plain_in_a_pipe(run, tmp_path):
    missing = str(tmp_path / "missing.yaml")
    code, seen = on_terminal(["check", missing])
    assert code == 3
    assert ESCAPE + b"31m" in seen
    assert "\x1b" not in run("check", missing).stderr


def test_output_closed_early_is_no_traceback(study):
    """As in ``fourfold keys | head -1``."""
    ran = subprocess.run(
        ["sh", "-c", f'"{sys.executable}" -m fourfold.cli.main keys | head -1'],
        capture_output=True, text=True, check=True, timeout=120,
    )  # fmt: skip
    assert ran.stdout.startswith("Keys of a study description")
    assert "Traceback" not in ran.stderr


def test_a_terminal_of_ascii_gets_readable_words(run, study):
    ran = run("report", study, env={"PYTHONIOENCODING": "ascii", "LC_ALL": "C"})
    assert ran.returncode == 0, ran.stderr
    assert "Traceback" not in ran.stderr
