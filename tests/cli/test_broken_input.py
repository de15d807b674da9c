"""Broken descriptions and data: a message that can be acted on, the right exit code, nothing written.

Every case starts from a study that works and breaks one thing. The command runs in this process,
as ``fourfold`` starts it.
"""

from __future__ import annotations

import json
import re
import sqlite3
from collections.abc import Callable
from pathlib import Path

import pytest
from click.testing import CliRunner, Result
from tests.cli.conftest import SMALL, picnic

from fourfold.cli.main import commands

MESSAGE = re.compile(r"^error: \S", re.MULTILINE)


def fourfold(*arguments: object) -> Result:
    return CliRunner().invoke(commands, [str(argument) for argument in arguments], prog_name="fourfold")


def held(folder: Path) -> dict[str, bytes]:
    """Every file of a folder with its content, folders by name."""
    return {
        str(entry.relative_to(folder)): entry.read_bytes() if entry.is_file() else b"(folder)"
        for entry in sorted(folder.rglob("*"))
    }


def refused(result: Result, code: int, *words: str) -> None:
    """The run ended as a refusal: code, message on standard error, no fault of the program."""
    assert isinstance(result.exception, SystemExit), repr(result.exception)
    assert result.exit_code == code, result.output
    assert MESSAGE.search(result.stderr), result.stderr
    assert "Traceback" not in result.output
    assert "internal error" not in result.output
    assert result.stdout == ""
    for word in words:
        assert word in result.stderr


def swap(old: str, new: str) -> Callable[[str], str]:
    def swapped(text: str) -> str:
        assert old in text
        return text.replace(old, new)

    return swapped


DESCRIPTIONS: dict[str, tuple[Callable[[str], str | bytes], int, str]] = {
    "empty": (lambda _: "", 3, "study.yaml"),
    "comments alone": (lambda _: "# nothing yet\n", 3, "study.yaml"),
    "a list": (lambda _: "- study\n- data\n", 3, "study.yaml:1:1"),
    "a word": (lambda _: "fourfold\n", 3, "study.yaml:1:1"),
    "binary": (lambda _: bytes(range(256)) * 4, 3, "study.yaml"),
    "another encoding": (lambda text: text.replace("Rash", "Räsch").encode("latin-1"), 3, "study.yaml"),
    "tab": (swap("  rash:", "\trash:"), 3, "study.yaml:4"),
    "unclosed bracket": (swap("exposures: [swam]", "exposures: [swam"), 3, "study.yaml"),
    "unclosed quote": (swap('present: "yes"}\n  swam', 'present: "yes}\n  swam'), 3, "study.yaml"),
    "key twice": (swap("outcome: rash", "outcome: rash\noutcome: swam"), 3, "study.yaml:9:1"),
    "unknown key": (swap("outcome: rash", "outcomes: rash"), 3, "outcome"),
    "no outcome": (swap("outcome: rash\n", ""), 3, "outcome"),
    "outcome that is nobody's": (swap("outcome: rash", "outcome: rush"), 3, "rash"),
    "outcome that is a quantity": (swap("outcome: rash", "outcome: age"), 3, "age"),
    "no exposures": (swap("exposures: [swam]\n", ""), 3, "exposures"),
    "exposure twice": (swap("exposures: [swam]", "exposures: [swam, swam]"), 3, "swam"),
    "exposure is the outcome": (swap("exposures: [swam]", "exposures: [rash]"), 3, "rash"),
    "wrong kind": (swap("kind: quantity", "kind: number"), 3, "quantity"),
    "kind is a list": (swap("kind: quantity", "kind: [quantity]"), 3, "kind"),
    "wrong design": (swap("design: cohort", "design: trial"), 3, "study.yaml:1"),
    "per is a word": (swap("per: 10", "per: ten"), 3, "per"),
    "per is nought": (swap("per: 10", "per: 0"), 3, "per"),
    "confidence above 100": (lambda text: text + "analysis: {confidence: 195}\n", 3, "confidence"),
    "unknown format": (swap("formats: [html]", "formats: [docx]"), 3, "html"),
    "variables as a list": (swap("variables:\n", "variables: []\nother:\n"), 3, "variables"),
    "data as a word": (swap("data: {file: picnic.csv, identifier: guest}", "data: picnic.csv"), 3, "data"),
    "alias bomb": (
        lambda text: "a: &a [x,x,x,x,x,x,x,x]\nb: &b [*a,*a,*a,*a,*a,*a,*a]\nc: [*b,*b,*b,*b]\n" + text,
        3, "study.yaml",
    ),
    "python tag": (swap("design: cohort", "design: !!python/object/apply:os.getcwd []"), 3, "study.yaml"),
    "deep nesting": (lambda text: text + "x: " + "[" * 3000 + "]" * 3000 + "\n", 3, "study.yaml"),
    "data file absent": (swap("file: picnic.csv", "file: picknick.csv"), 3, "picknick.csv"),
    "data file in another folder": (swap("file: picnic.csv", "file: ../picnic.csv"), 3, "../picnic.csv"),
    "data file is a folder": (swap("file: picnic.csv", "file: ."), 3, "study.yaml:2"),
    "data of unknown ending": (swap("file: picnic.csv", "file: study.yaml"), 4, ".csv"),
    "column absent": (swap("  rash: {label", "  rash: {column: rashes, label"), 4, "rashes"),
    "identifier absent": (swap("identifier: guest", "identifier: visitor"), 4, "visitor"),
    "value for yes absent": (swap('{label: Rash, kind: binary, present: "yes"}',
                                  '{label: Rash, kind: binary, present: "ill"}'), 4, "ill"),
    "level not described": (swap("levels: [red, blue]", "levels: [red, green]"), 4, "blue"),
    "column of words as a quantity": (
        swap("kind: category, levels: [red, blue]", "kind: quantity"), 4, "tent",
    ),
    "everybody excluded": (
        lambda text: text + "exclusions: [{reason: Young, where: {variable: age, below: 200}}]\n", 4, "",
    ),
}  # fmt: skip


@pytest.mark.parametrize("command", ["report", "check"])
@pytest.mark.parametrize("case", DESCRIPTIONS)
def test_a_broken_description(tmp_path, case, command):
    breaking, code, word = DESCRIPTIONS[case]
    (tmp_path / "picnic.csv").write_text(picnic(), encoding="utf-8")
    text = breaking(SMALL)
    study = tmp_path / "study.yaml"
    study.write_bytes(text if isinstance(text, bytes) else text.encode("utf-8"))
    before = held(tmp_path)
    refused(fourfold(command, study), code, word)
    assert held(tmp_path) == before


def lines(change: Callable[[list[str]], list[str]]) -> Callable[[str], str]:
    return lambda text: "\n".join(change(text.splitlines())) + "\n"


def column(name: str, value: str) -> Callable[[str], str]:
    """Every row the same in one column."""

    def changed(rows: list[str]) -> list[str]:
        place = rows[0].split(",").index(name)
        parts = [row.split(",") for row in rows[1:]]
        return [rows[0], *[",".join([*row[:place], value, *row[place + 1 :]]) for row in parts]]

    return lines(changed)


DATA: dict[str, tuple[Callable[[str], str | bytes], tuple[int, ...], str]] = {
    "empty": (lambda _: "", (4,), "picnic.csv"),
    "header alone": (lines(lambda rows: rows[:1]), (4,), "picnic.csv"),
    "binary": (lambda _: bytes(range(256)) * 10, (4,), "picnic.csv"),
    "nulls": (lambda text: text.replace("P7,", "P7\0,"), (4,), "picnic.csv"),
    "a workbook by the wrong name": (lambda _: b"PK\x03\x04" + b"\0" * 60, (4,), "picnic.csv"),
    "header twice the same": (swap("guest,rash,swam", "guest,rash,rash"), (4,), "rash"),
    "column missing": (swap("guest,rash,swam,age,tent", "guest,rash,swum,age,tent"), (4,), "swam"),
    "row too long": (lines(lambda rows: [*rows[:3], rows[3] + ",x,y", *rows[4:]]), (4,), "4"),
    "row too short": (lines(lambda rows: [*rows[:3], "P2,yes", *rows[4:]]), (4,), "4"),
    "quote left open": (lines(lambda rows: [*rows[:3], '"P2,yes,no,40,red', *rows[4:]]), (4,), "picnic.csv"),
    "text in a quantity": (lines(lambda rows: [*rows[:3], "P2,yes,no,forty,red", *rows[4:]]), (4,), "age"),
    "infinite quantity": (lines(lambda rows: [*rows[:3], "P2,yes,no,inf,red", *rows[4:]]), (4,), "age"),
    "decimal comma": (lines(lambda rows: [*rows[:3], 'P2,yes,no,"40,5",red', *rows[4:]]), (4,), "age"),
    "unknown level": (lines(lambda rows: [*rows[:3], "P2,yes,no,40,green", *rows[4:]]), (4,), "green"),
    "third value of a binary": (
        lines(lambda rows: [*rows[:3], "P2,maybe,no,40,red", *rows[4:]]),
        (4,),
        "maybe",
    ),
    "everybody with the event": (column("rash", "yes"), (4, 5), "rash"),
    "nobody with the event": (column("rash", "no"), (4, 5), "rash"),
    "nobody exposed": (column("swam", "no"), (4, 5), "swam"),
    "everything missing": (column("age", ""), (4, 5), "age"),
    "one age": (column("age", "40"), (4, 5), "age"),
    "other encoding": (lambda text: text.replace("P7,", "Pü,").encode("latin-1"), (4,), "picnic.csv"),
    "one row": (lines(lambda rows: rows[:2]), (4, 5), ""),
    "two rows": (lambda _: "guest,rash,swam,age,tent\nP1,yes,yes,40,red\nP2,no,no,50,blue\n", (4, 5), ""),
}


@pytest.mark.parametrize("case", DATA)
def test_broken_data(tmp_path, case):
    breaking, codes, word = DATA[case]
    content = breaking(picnic())
    (tmp_path / "picnic.csv").write_bytes(content if isinstance(content, bytes) else content.encode("utf-8"))
    study = tmp_path / "study.yaml"
    study.write_text(SMALL, encoding="utf-8")
    before = held(tmp_path)
    ran = fourfold("report", study)
    assert ran.exit_code in codes, (ran.exit_code, ran.output, ran.exception)
    refused(ran, ran.exit_code, word)
    assert held(tmp_path) == before


@pytest.mark.parametrize("ending", ["parquet", "xlsx", "ods", "sqlite", "duckdb", "xpt"])
@pytest.mark.parametrize("content", [b"", b"no such format\n" * 50], ids=["empty", "text"])
def test_a_data_file_that_is_not_what_its_name_says(tmp_path, ending, content):
    (tmp_path / f"picnic.{ending}").write_bytes(content)
    key = "table: guests, " if ending in ("sqlite", "duckdb") else ""
    study = tmp_path / "study.yaml"
    study.write_text(SMALL.replace("{file: picnic.csv,", f"{{file: picnic.{ending}, {key}"), encoding="utf-8")
    before = held(tmp_path)
    refused(fourfold("report", study), 4, f"picnic.{ending}")
    assert held(tmp_path) == before


def test_a_table_that_is_not_there_is_answered_with_those_that_are(tmp_path):
    with sqlite3.connect(tmp_path / "picnic.sqlite") as database:
        database.execute("create table guests (guest text)")
    database.close()
    study = tmp_path / "study.yaml"
    study.write_text(
        SMALL.replace("{file: picnic.csv,", "{file: picnic.sqlite, table: gests,"), encoding="utf-8"
    )
    refused(fourfold("report", study), 4, "guests")


def test_a_description_that_is_a_folder_or_absent(tmp_path):
    refused_by_usage = fourfold("report", tmp_path)
    assert refused_by_usage.exit_code == 2
    assert "is a directory" in refused_by_usage.stderr
    refused(fourfold("report", tmp_path / "absent.yaml"), 3, "absent.yaml")


@pytest.mark.parametrize("name", ["absent.csv", "picnic.doc", "empty.csv", "binary.csv"])
def test_draft_of_what_cannot_be_read(tmp_path, name):
    if name != "absent.csv":
        (tmp_path / name).write_bytes(b"" if name == "empty.csv" else bytes(range(256)))
    before = held(tmp_path)
    refused(fourfold("draft", tmp_path / name, "--output", tmp_path / "study.yaml"), 4, name)
    assert held(tmp_path) == before


def test_draft_never_writes_over_a_file(study):
    before = held(study.parent)
    refused(fourfold("draft", study.parent / "picnic.csv", "--output", study), 2, "exists already")
    assert held(study.parent) == before


def test_draft_into_a_folder_that_is_not_there(study):
    refused(
        fourfold("draft", study.parent / "picnic.csv", "--output", study.parent / "none" / "study.yaml"),
        6, "--output",
    )  # fmt: skip


def damaged(text: str) -> dict[str, bytes]:
    results = json.loads(text)
    other = dict(results, format=99)
    lacking = {key: value for key, value in results.items() if key != "participants"}
    wrong = json.loads(text)
    wrong["participants"]["analysed"] = "many"
    return {
        "empty": b"",
        "truncated": text[: len(text) // 2].encode(),
        "foreign": b'{"name": "something else", "version": 3}',
        "a list": b"[1, 2, 3]",
        "a number": b"17",
        "format 99": json.dumps(other).encode(),
        "a part gone": json.dumps(lacking).encode(),
        "a word for a count": json.dumps(wrong).encode(),
        "binary": bytes(range(256)),
        "deep": b"[" * 100_000,
        "not a number": text.replace('"confidence": 95.0', '"confidence": NaN').encode(),
    }


DAMAGES = ("empty", "truncated", "foreign", "a list", "a number", "format 99", "a part gone",
           "a word for a count", "binary", "deep", "not a number")  # fmt: skip


@pytest.fixture(scope="module")
def results_text(tmp_path_factory: pytest.TempPathFactory) -> str:
    folder = tmp_path_factory.mktemp("picnic")
    (folder / "picnic.csv").write_text(picnic(), encoding="utf-8")
    (folder / "picnic.yaml").write_text(SMALL, encoding="utf-8")
    assert fourfold("report", folder / "picnic.yaml").exit_code == 0
    return (folder / "picnic-report" / "results.json").read_text(encoding="utf-8")


@pytest.mark.parametrize("damage", DAMAGES)
def test_a_damaged_results_file(tmp_path, results_text, damage):
    saved = tmp_path / "results.json"
    saved.write_bytes(damaged(results_text)[damage])
    before = held(tmp_path)
    refused(fourfold("report", "--from", saved), 2)
    assert held(tmp_path) == before


def test_results_that_are_a_folder_or_absent(tmp_path):
    refused(fourfold("report", "--from", tmp_path), 2, str(tmp_path))
    refused(fourfold("report", "--from", tmp_path / "absent.json"), 2, "absent.json")


def test_into_a_file_or_into_nowhere(study):
    blocked = study.parent / "taken"
    blocked.write_text("mine")
    before = held(study.parent)
    refused(fourfold("report", study, "--into", blocked), 6, "--into")
    refused(fourfold("report", study, "--into", study.parent / "a" / "b" / "c"), 6, "--into")
    assert held(study.parent) == before
