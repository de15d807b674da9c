"""A description that uses every key loads, and keeps what was written."""

from __future__ import annotations

import hashlib
from collections.abc import Callable
from datetime import date
from pathlib import Path

import pytest

from fourfold.description.model import Role, SplineShape, StudyDescription, Variable
from fourfold.description.read import Loaded, load

from .studies import FULL, SMALL

Read = Callable[[str], Loaded]
EXAMPLES = sorted((Path(__file__).parents[2] / "examples").glob("*/*.yaml"))


def test_values_arrive_as_their_keys_mean_them(read: Read) -> None:
    description = read(FULL).description
    variables = description.variables
    assert description.study.period is not None
    assert description.study.period.from_ == date(2021, 1, 1)
    assert description.study.stated == {"22": "No external funding"}
    assert description.data.missing == ["", "NA", "999"]
    assert description.data.delimiter == ";"
    assert variables["smoker"].levels == ["no", "yes"]
    assert variables["age"].per == 10
    assert variables["age"].plausible == (18, 105)
    assert variables["bmi"].reference == 25
    assert isinstance(variables["bmi"].shape, SplineShape)
    assert variables["bmi"].shape.spline.knots == 4
    assert variables["bmi"].compare == [(25, 30), (25, 35)]
    assert variables["asa"].levels == ["1", "2", "3", "4"]
    assert variables["asa"].reference == "1"
    assert variables["age_band"].from_ == "age"
    assert variables["age_band"].cut == [50, 65, 80]
    assert variables["age_band"].kind is None
    assert description.disclosure.hide_zero is False
    late = description.exclusions[2].where.any
    assert late is not None
    assert late[0].above == date(2023, 12, 31)
    assert late[1].all is not None
    assert late[1].all[1].in_ == ["South", "East"]
    assert late[1].all[2].is_not == "007"


def test_roles_are_one_thing_whether_bare_or_with_a_reason(read: Read) -> None:
    description = read(FULL).description
    assert description.exposures == [Role(variable="smoker")]
    assert description.covariates[0] == Role(variable="age", reason="Older people smoke less", planned=True)
    assert [role.variable for role in description.covariates] == ["age", "bmi", "asa", "ward"]


def test_what_is_not_written_has_its_default(read: Read) -> None:
    description = read(SMALL).description
    assert description.data.missing == ["", "NA"]
    assert description.analysis.confidence == 95
    assert description.analysis.intervals == "profile likelihood"
    assert description.assessment.groups == 10
    assert description.disclosure.smallest_count == 5
    assert description.report.formats == ["html", "pdf"]
    assert description.variables["age"].shape == "linear"
    assert description.follow_up is None


def test_the_text_and_hash_are_those_of_the_file(folder: Path) -> None:
    path = folder / "study.yaml"
    raw = b"\xef\xbb\xbf" + SMALL.encode()
    path.write_bytes(raw)
    loaded = load(path)
    assert loaded.text == SMALL
    assert loaded.sha256 == hashlib.sha256(raw).hexdigest()
    assert loaded.path == path
    assert loaded.data_path == folder / "wound-infection.csv"


def test_positions_point_at_values_and_else_at_what_is_around(read: Read) -> None:
    loaded = read(FULL)
    lines = FULL.splitlines()

    def shown(*path: str | int) -> str:
        where = loaded.position(*path)
        assert where.line is not None
        assert where.column is not None
        return lines[where.line - 1][where.column - 1 :]

    assert shown("variables", "age", "kind").startswith("quantity, unit: years")
    assert shown("variables", "ward", "levels", 1).startswith("South, East]")
    assert shown("covariates", 0, "variable").startswith("age, reason")
    assert shown("covariates", 1).startswith("bmi")
    assert shown("variables", "bmi").startswith("bmi:")
    assert shown("variables", "bmi", "unit").startswith("kg/m2")
    # No `unit:` is given for ward; the nearest part around it is ward itself.
    assert shown("variables", "ward", "unit").startswith("ward:")
    assert shown("follow_up", "statement", 0).startswith("equal]")
    assert (loaded.position("nothing").line, loaded.position("nothing").column) == (1, 1)
    line = lines.index("outcome: infection") + 1
    assert str(loaded.position("outcome")) == f"{loaded.path}:{line}:10"


def test_a_description_built_in_python_is_the_same(read: Read) -> None:
    built = Variable(kind="ordered", levels=[1, 2, 3, 4], reference=1, label="ASA class")
    assert built == read(FULL).description.variables["asa"]
    assert Variable(kind="quantity", from_="age", cut=[50.5]).from_ == "age"
    assert Variable(kind="quantity", reference=25).reference == 25
    assert Variable(kind="binary", present=True).present == "true"


@pytest.mark.parametrize("path", EXAMPLES, ids=lambda path: path.stem)
def test_the_bundled_examples_load(path: Path) -> None:
    assert isinstance(load(path).description, StudyDescription)


def test_there_are_bundled_examples() -> None:
    assert len(EXAMPLES) >= 3
