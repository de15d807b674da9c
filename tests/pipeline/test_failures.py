"""The command under conditions that really fail: a full disk, a read-only folder, no Pango,
Ctrl-C and kill in the middle. Each runs the command as a user does.
"""

from __future__ import annotations

import os
import pty
import shutil
import signal
import subprocess
import sys
import time
from pathlib import Path

import pytest

pytestmark = pytest.mark.skipif(sys.platform != "linux", reason="mounts and signals as on Linux")

EXAMPLE = Path(__file__).parents[2] / "examples" / "harvest-supper"
OLD = {"report.html": b"old page", "report.pdf": b"old pdf", "results.json": b"old results"}
FOURFOLD = [sys.executable, "-m", "fourfold.cli.main"]


@pytest.fixture
def study(tmp_path: Path) -> Path:
    folder = tmp_path / "study"
    folder.mkdir()
    for name in ("harvest-supper.yaml", "harvest-supper.csv"):
        shutil.copy(EXAMPLE / name, folder / name)
    return folder / "harvest-supper.yaml"


def old_report(folder: Path) -> Path:
    folder.mkdir(parents=True)
    for name, content in OLD.items():
        (folder / name).write_bytes(content)
    return folder


def content(folder: Path) -> dict[str, bytes]:
    return {entry.name: entry.read_bytes() for entry in folder.iterdir()}


def in_namespace(script: str, *arguments: str) -> subprocess.CompletedProcess[str]:
    """Run a shell script as the root of a mount namespace of its own."""
    return subprocess.run(
        ["unshare", "-rm", "sh", "-c", script, "sh", *arguments],
        capture_output=True, text=True, timeout=240, check=False,
    )  # fmt: skip


def test_disk_full_leaves_the_old_report(study, tmp_path):
    full = tmp_path / "full"
    full.mkdir()
    script = (
        """
        mount -t tmpfs -o size=96k tmpfs "$1" && mkdir "$1/out" && echo old > "$1/out/report.html"
        shift; "$@"; code=$?
        ls -A "$0" >/dev/null 2>&1; echo "LEFT: $(ls -A """
        + f'"{full}"'
        + """) $(cat """
        + f'"{full}/out/report.html"'
        + """)"
        exit $code
    """
    )
    ran = in_namespace(script, str(full), *FOURFOLD, "report", str(study), "--into", str(full / "out"))
    assert ran.returncode == 6, ran.stderr
    assert "The disk is full" in ran.stderr
    assert "Traceback" not in ran.stderr
    assert "LEFT: out old" in ran.stdout


def test_read_only_folder(study, tmp_path):
    locked = tmp_path / "locked"
    locked.mkdir()
    script = 'mount -t tmpfs -o ro tmpfs "$1"; shift; "$@"'
    ran = in_namespace(script, str(locked), *FOURFOLD, "report", str(study), "--into", str(locked / "out"))
    assert ran.returncode == 6, ran.stderr
    assert "cannot be written to" in ran.stderr
    assert "--into" in ran.stderr
    assert "Traceback" not in ran.stderr


def test_without_pango_the_page_is_written_and_the_exit_code_says_so(study):
    found = subprocess.run(["ldconfig", "-p"], capture_output=True, text=True, check=True).stdout
    pango = [line.split("=>")[1].strip() for line in found.splitlines() if "libpango-1.0.so" in line]
    assert pango, "Pango must be installed for this test to take it away"
    hide = "".join(f'mount --bind /dev/null "{Path(path).resolve()}"; ' for path in pango)
    ran = in_namespace(hide + '"$@"', *FOURFOLD, "report", str(study))
    assert ran.returncode == 6, ran.stderr
    assert "Pango" in ran.stderr
    assert "libpango-1.0-0" in ran.stderr
    assert "Traceback" not in ran.stderr
    written = {entry.name for entry in (study.parent / "harvest-supper-report").iterdir()}
    assert written == {"report.html", "results.json"}


def run_until(study: Path, stage: str, send: signal.Signals) -> tuple[int, str]:
    """Run on a terminal, send a signal when the stage shows, return exit code and screen."""
    child, screen = pty.fork()
    if child == 0:
        os.environ["TERM"] = "xterm"
        os.environ["COLUMNS"] = "100"
        os.execv(sys.executable, [*FOURFOLD, "report", str(study)])
    seen = b""
    sent = False
    deadline = time.monotonic() + 240
    while time.monotonic() < deadline:
        try:
            seen += os.read(screen, 65536)
        except OSError:
            break
        if not sent and stage.encode() in seen:
            os.kill(child, send)
            sent = True
    _, status = os.waitpid(child, 0)
    assert sent, seen.decode(errors="replace")
    return os.waitstatus_to_exitcode(status), seen.decode(errors="replace")


def test_ctrl_c_in_the_middle(study):
    folder = old_report(study.parent / "harvest-supper-report")
    code, screen = run_until(study, "making the PDF", signal.SIGINT)
    assert code == 130, screen
    assert "Interrupted" in screen
    assert "Traceback" not in screen
    assert content(folder) == OLD
    assert not list(study.parent.glob(".*"))


def test_killed_in_the_middle_and_run_again(study):
    folder = old_report(study.parent / "harvest-supper-report")
    (folder / "notes.txt").write_text("keep me")
    code, _ = run_until(study, "making the PDF", signal.SIGKILL)
    assert code == -signal.SIGKILL
    assert content(folder) == {**OLD, "notes.txt": b"keep me"}
    # A staging folder as a kill during the writing leaves it.
    left = study.parent / ".harvest-supper-report.writing-zzz"
    left.mkdir()
    (left / "report.html").write_bytes(b"half a page")
    again = subprocess.run(
        [*FOURFOLD, "report", str(study)], capture_output=True, text=True, timeout=240, check=False
    )
    assert again.returncode == 0, again.stderr
    assert (folder / "notes.txt").read_text() == "keep me"
    assert b"<!DOCTYPE html>" in (folder / "report.html").read_bytes()[:200]
    assert not list(study.parent.glob(".*"))
