"""Output appears whole or not at all; what the program did not make is never lost."""

from __future__ import annotations

import errno
import os
from pathlib import Path

import pytest

from fourfold.errors import RenderingError
from fourfold.pipeline import output

OLD = {"report.html": b"old page", "report.pdf": b"old pdf", "results.json": b"{}"}
NEW = {"report.html": b"new page", "results.json": b'{"format": 1}'}


def content(folder: Path) -> dict[str, bytes]:
    return {entry.name: entry.read_bytes() for entry in folder.iterdir()}


def test_files_replace_the_old_ones_and_a_stale_pdf_does_not_stay(tmp_path):
    folder = tmp_path / "study-report"
    output.write_whole(folder, OLD)
    output.write_whole(folder, NEW)
    assert content(folder) == NEW
    assert [entry.name for entry in tmp_path.iterdir()] == ["study-report"]


def test_files_of_the_user_in_the_folder_are_kept(tmp_path):
    folder = tmp_path / "study-report"
    output.write_whole(folder, OLD)
    (folder / "my notes.txt").write_text("keep me")
    (folder / "letters").mkdir()
    (folder / "letters" / "draft.txt").write_text("keep me too")
    output.write_whole(folder, NEW)
    assert (folder / "my notes.txt").read_text() == "keep me"
    assert (folder / "letters" / "draft.txt").read_text() == "keep me too"
    assert [entry.name for entry in tmp_path.iterdir()] == ["study-report"]


@pytest.mark.parametrize("exchange_works", [True, False])
def test_without_an_atomic_exchange_the_result_is_the_same(tmp_path, monkeypatch, exchange_works):
    if not exchange_works:
        monkeypatch.setattr(output, "_exchange", lambda first, second: False)
    folder = tmp_path / "study-report"
    output.write_whole(folder, OLD)
    (folder / "notes.txt").write_text("keep me")
    output.write_whole(folder, NEW)
    assert content(folder) == {**NEW, "notes.txt": b"keep me"}
    assert [entry.name for entry in tmp_path.iterdir()] == ["study-report"]


def test_a_failure_while_writing_leaves_the_old_report(tmp_path, monkeypatch):
    folder = tmp_path / "study-report"
    output.write_whole(folder, OLD)

    def full(path: Path, _: bytes) -> None:
        path.write_bytes(b"half")
        raise OSError(errno.ENOSPC, os.strerror(errno.ENOSPC))

    monkeypatch.setattr(output, "_write_flushed", full)
    with pytest.raises(RenderingError, match="disk is full"):
        output.write_whole(folder, NEW)
    assert content(folder) == OLD
    assert [entry.name for entry in tmp_path.iterdir()] == ["study-report"]


def test_a_kill_between_two_renames_is_mended_by_the_next_run(tmp_path, monkeypatch):
    folder = tmp_path / "study-report"
    output.write_whole(folder, OLD)
    (folder / "notes.txt").write_text("keep me")
    # The state that a kill leaves where folders cannot be exchanged in one step.
    folder.rename(tmp_path / ".study-report.writing-abc.old")
    (tmp_path / ".study-report.writing-abc").mkdir()
    (tmp_path / ".study-report.writing-abc" / "report.html").write_bytes(b"new page")
    output.recover(folder)
    assert content(folder) == {**OLD, "notes.txt": b"keep me"}
    assert [entry.name for entry in tmp_path.iterdir()] == ["study-report"]


def test_a_file_where_the_folder_should_be_is_refused(tmp_path):
    (tmp_path / "study-report").write_text("a file")
    with pytest.raises(RenderingError, match="is a file"):
        output.write_whole(tmp_path / "study-report", NEW)
    assert (tmp_path / "study-report").read_text() == "a file"


def test_a_missing_parent_folder_is_named(tmp_path):
    with pytest.raises(RenderingError, match="nowhere does not exist"):
        output.write_whole(tmp_path / "nowhere" / "study-report", NEW)
