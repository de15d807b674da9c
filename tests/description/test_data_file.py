"""The data file must be there, and in the description's own folder."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path

import pytest

from fourfold.description.read import load
from fourfold.errors import DescriptionError, Problem

from .studies import SMALL

Changed = Callable[..., Problem]


def naming(folder: Path, file: str) -> Path:
    path = folder / "study.yaml"
    path.write_text(SMALL.replace("wound-infection.csv", file))
    return path


def refusal(path: Path) -> str:
    with pytest.raises(DescriptionError) as caught:
        load(path)
    assert len(caught.value.problems) == 1
    assert f"{path}:2:14: " in str(caught.value)
    return str(caught.value)


@pytest.mark.parametrize(
    ("file", "near"),
    [
        ("wound_infection.csv", "wound-infection.csv"),
        ("wound-infection.xlsx", "wound-infection.csv"),
        ("Wound-Infection.CSV", "wound-infection.csv"),
    ],
)
def test_a_missing_file_names_the_nearest(folder: Path, file: str, near: str) -> None:
    said = refusal(naming(folder, file))
    assert f"There is no data file '{file}'." in said
    assert f"Did you mean '{near}'?" in said


def test_a_missing_folder_is_named(folder: Path) -> None:
    assert "The folder 'extracts' is not there either." in refusal(naming(folder, "extracts/a.csv"))


def test_files_in_folders_below_are_found(folder: Path) -> None:
    (folder / "extracts").mkdir()
    (folder / "extracts" / "a.csv").write_text("x\n")
    loaded = load(naming(folder, "extracts/a.csv"))
    assert loaded.data_path == folder / "extracts" / "a.csv"


@pytest.mark.parametrize("how", ["above", "absolute", "round about"])
def test_a_file_outside_is_refused_unless_allowed(folder: Path, how: str) -> None:
    study = folder / "study"
    study.mkdir()
    file = {
        "above": "../wound-infection.csv",
        "absolute": str(folder / "wound-infection.csv"),
        "round about": "../study/../wound-infection.csv",
    }[how]
    path = naming(study, file)
    assert "lies outside the folder of the description" in refusal(path)
    assert "--allow-outside" in refusal(path)
    assert load(path, allow_outside=True).description.outcome == "infection"


def test_whether_an_outside_file_exists_is_not_told(folder: Path) -> None:
    study = folder / "study"
    study.mkdir()
    there = refusal(naming(study, "../wound-infection.csv"))
    absent = refusal(naming(study, "../wound-infektion.csv"))
    assert there.replace("infection.csv", "") == absent.replace("infektion.csv", "")


def test_a_link_that_leads_outside_is_refused(folder: Path) -> None:
    study = folder / "study"
    study.mkdir()
    (study / "data.csv").symlink_to(folder / "wound-infection.csv")
    (study / "up").symlink_to(folder)
    assert "is a link that leads outside" in refusal(naming(study, "data.csv"))
    assert "is a link that leads outside" in refusal(naming(study, "up/wound-infection.csv"))
    assert load(naming(study, "data.csv"), allow_outside=True).description.outcome == "infection"


def test_a_link_that_stays_inside_and_a_linked_folder_are_allowed(folder: Path) -> None:
    (folder / "latest.csv").symlink_to(folder / "wound-infection.csv")
    path = naming(folder, "latest.csv")
    assert load(path).description.outcome == "infection"
    linked = folder.parent / "linked"
    linked.symlink_to(folder)
    assert load(linked / "study.yaml").description.outcome == "infection"


def test_a_link_in_a_circle_is_refused(folder: Path) -> None:
    (folder / "a.csv").symlink_to(folder / "b.csv")
    (folder / "b.csv").symlink_to(folder / "a.csv")
    assert "a.csv" in refusal(naming(folder, "a.csv"))


def test_a_folder_is_no_data_file(folder: Path) -> None:
    assert "is a folder" in refusal(naming(folder, "."))


def test_a_name_too_long_for_the_system(folder: Path) -> None:
    assert "data file" in refusal(naming(folder, "x" * 5000))


def test_the_description_is_found_from_its_own_folder(folder: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    naming(folder, "wound-infection.csv")
    monkeypatch.chdir(folder)
    loaded = load(Path("study.yaml"))
    assert loaded.data_path.resolve() == folder / "wound-infection.csv"
