"""Completion through the protocol that the printed scripts speak, and through bash itself."""

from __future__ import annotations

import os
import pty
import select
import shutil
import signal
import sys
import time
from pathlib import Path

import pytest


@pytest.mark.parametrize(
    ("shell", "word"), [("bash", "complete -o"), ("zsh", "compdef"), ("fish", "complete --no-files")]
)
def test_the_script_is_printed(run, shell, word):
    ran = run("completion", shell)
    assert (ran.returncode, ran.stderr) == (0, "")
    assert word in ran.stdout
    assert f"_FOURFOLD_COMPLETE={shell}_complete" in ran.stdout


def offered(run, *words: str) -> list[str]:
    """What the program answers a bash that completes the last word."""
    env = {
        "_FOURFOLD_COMPLETE": "bash_complete",
        "COMP_WORDS": " ".join(["fourfold", *words]),
        "COMP_CWORD": str(len(words)),
    }
    ran = run(env=env)
    assert ran.returncode == 0, ran.stderr
    return ran.stdout.split()


def test_commands_options_and_choices(run):
    assert offered(run, "re") == ["plain,report"]
    assert offered(run, "report", "--st") == ["plain,--strict"]
    assert offered(run, "completion", "z") == ["plain,zsh"]


def test_files_are_left_to_the_shell(run):
    assert offered(run, "report", "wound")[0].startswith("file,")
    assert offered(run, "draft", "wound")[0].startswith("file,")
    assert offered(run, "report", "--from", "res")[0].startswith("file,")


def test_keys_are_offered(run):
    assert offered(run, "keys", "purp") == ["plain,purpose"]
    assert offered(run, "keys", "study.pu") == ["plain,study.purpose"]
    assert offered(run, "keys", "zzz") == []


@pytest.fixture
def command(tmp_path: Path) -> Path:
    """A folder with a ``fourfold``, for the path, as an installation puts it there."""
    folder = tmp_path / "bin"
    folder.mkdir()
    script = folder / "fourfold"
    script.write_text(f'#!/bin/sh\nexec "{sys.executable}" -m fourfold.cli.main "$@"\n')
    script.chmod(0o755)
    return folder


@pytest.mark.parametrize(
    ("typed", "completed"),
    [
        ("fourfold re", "fourfold report "),
        ("fourfold report --al", "fourfold report --allow-outside "),
        ("fourfold report pic", "fourfold report picnic."),
        ("fourfold report picnic.y", "fourfold report picnic.yaml "),
        ("fourfold draft picnic.c", "fourfold draft picnic.csv "),
        ("fourfold completion z", "fourfold completion zsh "),
    ],
)
def test_bash_completes_what_is_typed(command, study, typed, completed):
    """A real bash on a terminal: type, press the tabulator, read the line."""
    bash = shutil.which("bash")
    assert bash, "bash must be installed for this test"
    child, screen = pty.fork()
    if child == 0:
        os.chdir(study.parent)
        os.environ.update(PATH=f"{command}:{os.environ['PATH']}", PS1="ready> ", TERM="dumb")
        os.execv(bash, [bash, "--norc", "--noprofile", "-i"])
    try:
        until(screen, "ready> ")
        os.write(screen, b"source <(fourfold completion bash); echo prepa''red\n")
        until(screen, "prepared\r\nready> ")
        os.write(screen, typed.encode() + b"\t")
        until(screen, completed)
    finally:
        os.close(screen)
        os.kill(child, signal.SIGKILL)
        os.waitpid(child, 0)


def until(screen: int, words: str) -> None:
    """Read the terminal until it shows ``words``."""
    seen, deadline = "", time.monotonic() + 60
    while words not in seen:
        ready, _, _ = select.select([screen], [], [], max(0.0, deadline - time.monotonic()))
        assert ready, f"never came: {words!r}; on the screen: {seen!r}"
        # Without the bell that sounds where several names go on.
        seen += os.read(screen, 4096).decode(errors="replace").replace("\a", "")
