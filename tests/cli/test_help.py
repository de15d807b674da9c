"""Help answers at once, without the libraries of the work, and says what each command does."""

from __future__ import annotations

import json
import subprocess
import sys

import pytest

HEAVY = {
    "numpy",
    "pandas",
    "scipy",
    "pydantic",
    "rich",
    "weasyprint",
    "jinja2",
    "numba",
    "pyarrow",
    "pikepdf",
}

LOOK = """
import sys, json
from fourfold.cli import main
sys.argv = ["fourfold", *{arguments!r}]
try:
    main.main()
except SystemExit:
    pass
print("MODULES " + json.dumps(sorted({{name.partition(".")[0] for name in sys.modules}})))
"""


@pytest.mark.parametrize(
    "arguments",
    [["--help"], ["--version"], [], ["report", "--help"], ["check", "--help"], ["draft", "--help"],
     ["keys", "--help"], ["completion", "--help"], ["completion", "bash"], ["report"]],
    ids=lambda arguments: " ".join(arguments) or "nothing",
)  # fmt: skip
def test_nothing_heavy_is_imported(arguments):
    ran = subprocess.run(
        [sys.executable, "-c", LOOK.format(arguments=arguments)], capture_output=True, text=True, check=True
    )
    loaded = set(json.loads(ran.stdout.rsplit("MODULES ", 1)[1]))
    assert "click" in loaded
    assert not loaded & HEAVY


@pytest.mark.parametrize(
    ("command", "words"),
    [
        ("report", ["--from", "--into", "--strict", "--quiet", "--allow-outside", "STUDY"]),
        ("check", ["--strict", "--allow-outside", "STUDY"]),
        ("draft", ["--table", "--output", "DATA"]),
        ("keys", ["--schema", "KEY"]),
        ("completion", ["bash", "zsh", "fish"]),
    ],
)
def test_each_command_has_help(run, command, words):
    ran = run(command, "--help")
    assert (ran.returncode, ran.stderr) == (0, "")
    for word in words:
        assert word in ran.stdout
    assert run(command, "-h").stdout == ran.stdout


def test_the_list_of_commands_is_whole(run):
    shown = run("--help").stdout
    for command in ("report", "check", "draft", "keys", "completion"):
        line = next(line for line in shown.splitlines() if line.startswith(f"  {command} "))
        # A sentence that was cut to fit tells nobody what the command does.
        assert line.rstrip().endswith(".")
        assert not line.rstrip().endswith("...")
    assert "not for individual clinical decisions" in shown
