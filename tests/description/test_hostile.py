"""Whatever the bytes, a description is loaded or refused with problems; nothing else happens."""

from __future__ import annotations

from pathlib import Path

import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from fourfold.description.read import Loaded, load
from fourfold.errors import DescriptionError, Problem

from .studies import FULL, SMALL

PIECES = [
    *(": ", "\n", "- ", "  ", "\t", "{", "}", "[", "]", ",", "'", '"', "#", "&a ", "*a", "!", "!!str ", "|"),
    *(">", "%", "@", "`", "?", "<<: ", "---\n", "...\n", "~", "null", "yes", "no", "1:30", "007", "1e999"),
    *("\u2028", "\ufeff", "\x00", "\x85", "é", "𝒳", "\\", "kind", "variables", "from", "where", "all", "is"),
    *("spline", "knots", "outcome", "exposures", "age", "smoker", "2021-01-01", ".nan", "-", "0x1F", ": : :"),
]
FUZZ = settings(deadline=None, suppress_health_check=[HealthCheck.function_scoped_fixture])


def outcome_of(path: Path, raw: bytes) -> str:
    path.write_bytes(raw)
    problems: tuple[Problem, ...] = ()
    try:
        loaded = load(path)
    except DescriptionError as error:
        problems = error.problems
    if problems:
        lines = raw.count(b"\n") + raw.count(b"\r") + raw.count("\u2028".encode()) + raw.count(b"\x85") + 2
        for problem in problems:
            assert problem.where is not None
            assert problem.where.file == str(path)
            assert problem.what.endswith((".", "?")), problem.what
            assert "Input should" not in problem.what
            if problem.where.line is not None:
                assert 1 <= problem.where.line <= lines + raw.count("\u2029".encode())
        return "refused"
    assert isinstance(loaded, Loaded)
    return "loaded"


@given(raw=st.binary(max_size=300))
@FUZZ
def test_random_bytes(folder: Path, raw: bytes) -> None:
    assert outcome_of(folder / "study.yaml", raw) == "refused"


@given(text=st.lists(st.sampled_from(PIECES), max_size=40).map("".join))
@FUZZ
def test_random_pieces_of_yaml(folder: Path, text: str) -> None:
    assert outcome_of(folder / "study.yaml", text.encode()) == "refused"


@given(data=st.data(), text=st.sampled_from([FULL, SMALL]))
@FUZZ
def test_a_description_with_pieces_put_in_and_cut_out(folder: Path, data: st.DataObject, text: str) -> None:
    for _ in range(data.draw(st.integers(1, 4))):
        start = data.draw(st.integers(0, len(text)))
        end = start + data.draw(st.integers(0, 12))
        text = text[:start] + data.draw(st.sampled_from(["", *PIECES])) + text[end:]
    assert outcome_of(folder / "study.yaml", text.encode()) in ("loaded", "refused")


VALUES = st.recursive(
    st.sampled_from(
        ["x", "1", "yes", "''", "~", "age", "-1.5", "2021-01-01", "999999999999999999999", "[]", "{}"]
    ),
    lambda inner: (
        st.lists(inner, max_size=3).map(lambda items: "[" + ", ".join(items) + "]")
        | st.dictionaries(
            st.sampled_from(
                ["kind", "variable", "from", "is", "all", "any", "where", "spline", "knots", "x"]
            ),
            inner,
            max_size=3,
        ).map(lambda items: "{" + ", ".join(f"{key}: {value}" for key, value in items.items()) + "}")
    ),
    max_leaves=6,
)
PLACES = [
    *("kind: quantity", "kind: date", "[North, South]", "[smoker]", "[age, ward]", "infection\nexp"),
    *("{kind: quantity}", "wound-infection.csv", "{file: wound-infection.csv}", "cohort", "association"),
]
MORE = ["exclusions", "follow_up", "selection", "sampling", "analysis", "assessment", "disclosure", "report"]


@given(place=st.sampled_from(PLACES), value=VALUES)
@FUZZ
def test_any_value_in_any_place(folder: Path, place: str, value: str) -> None:
    key, colon, _ = place.partition(": ")
    new = f"{key}{colon}{value}" if colon and "{" not in place else value
    outcome_of(
        folder / "study.yaml", SMALL.replace(place, new + ("\nexp" if "\n" in place else ""), 1).encode()
    )


@given(section=st.sampled_from(MORE), value=VALUES)
@FUZZ
def test_any_value_in_any_section(folder: Path, section: str, value: str) -> None:
    outcome_of(folder / "study.yaml", (SMALL + f"{section}: {value}\n").encode())


@pytest.mark.parametrize("length", range(0, len(SMALL), 7))
def test_a_description_cut_short_anywhere(folder: Path, length: int) -> None:
    outcome_of(folder / "study.yaml", SMALL[:length].encode())
