"""A drafted description is accepted by the reader once its open questions are answered."""

from __future__ import annotations

import re
from pathlib import Path
from typing import Any

import numpy as np
import pandas as pd
import pytest
import yaml

from fourfold.data.draft import ANSWER, guess, quoted
from fourfold.data.prepare import prepare
from fourfold.description.read import Loaded, load
from fourfold.errors import DataError, DescriptionError


def answered(path: Path, text: str, **answers: str) -> Loaded:
    """Put answers in place of the marked questions, as a person would, and load the description."""
    for key, answer in {"title": "A study", "design": "cohort", **answers}.items():
        text = re.sub(rf"(?m)^( *{key}: )\S.*?(  # answer:|$)", rf"\g<1>{answer}\2", text)
    described = path.with_suffix(".yaml")
    described.write_text(text, encoding="utf-8")
    return load(described)


def drafted(tmp_path: Path, name: str, content: bytes) -> tuple[Path, str]:
    path = tmp_path / name
    path.write_bytes(content)
    return path, guess(path)


CASES = [
    ("birthwt.csv", "low", "smoke", "[age, lwt, race, ptl, ht, ui]", 189, 59),
    ("bacteria.csv", "present", "treatment", "[week]", 220, 177),
    ("household.csv", "cough", "smoker", "[age, region]", 356, 94),
    ("infert.csv", "case", "induced", "[spontaneous, age]", 248, 83),
]


@pytest.mark.parametrize(("file", "outcome", "exposure", "covariates", "n", "events"), CASES)
def test_open_data_after_the_answers(
    tmp_path: Path,
    reference: Path,
    file: str,
    outcome: str,
    exposure: str,
    covariates: str,
    n: int,
    events: int,
) -> None:
    # n and events: tests/reference/*.json, of each data set's own source.
    path, text = drafted(tmp_path, file, (reference / file).read_bytes())
    loaded = answered(path, text, outcome=outcome, exposures=f"[{exposure}]", covariates=covariates)
    flow = prepare(loaded).participants
    assert (flow.analysed, flow.events) == (n, events)


def test_unanswered_drafts_are_refused(tmp_path: Path, reference: Path) -> None:
    path, text = drafted(tmp_path, "birthwt.csv", (reference / "birthwt.csv").read_bytes())
    described = path.with_suffix(".yaml")
    described.write_text(text)
    with pytest.raises(DescriptionError) as caught:
        load(described)
    assert text.count(ANSWER) > 3
    # Design, outcome and exposure at least are no answers yet.
    assert len(caught.value.problems) >= 3


def test_every_question_and_guess_is_marked(tmp_path: Path, reference: Path) -> None:
    _, text = drafted(tmp_path, "birthwt.csv", (reference / "birthwt.csv").read_bytes())
    lines = text.splitlines()
    body = lines[3:]
    assert all("# answer:" in line for line in body if ANSWER in line)
    assert sum("# answer:" in line for line in body) == 5
    assert all("# guess:" in line for line in body if "kind:" in line)


def column(values: list[str]) -> bytes:
    rows = [f"{value},{'yes' if place % 3 else 'no'}" for place, value in enumerate(values)]
    return "\n".join(["x,fever", *rows]).encode()


def guessed(tmp_path: Path, values: list[str], name: str = "x") -> Any:
    _, text = drafted(tmp_path, "rows.csv", column(values).replace(b"x", name.encode(), 1))
    return yaml.safe_load(text)["variables"].get(name)


N = 60
RANDOM = np.random.default_rng(8)


@pytest.mark.parametrize(
    ("name", "values", "expected"),
    [
        ("x", ["yes", "no"] * 30, {"kind": "binary", "present": "yes"}),
        ("x", ["0", "1"] * 30, {"kind": "binary", "present": "1"}),
        ("x", ["Case", "Control"] * 30, {"kind": "binary", "present": "Case"}),
        ("x", ["ill", "not ill"] * 30, {"kind": "binary", "present": "ill"}),
        ("sex", ["female", "male"] * 30, {"kind": "category", "levels": ["female", "male"]}),
        ("x", ["3", "1", "2"] * 20, {"kind": "category", "levels": ["1", "2", "3"]}),
        ("x", ["0", "1", "2", "3"] * 15, {"kind": "quantity"}),
        ("age", [str(v) for v in RANDOM.integers(18, 90, N)], {"kind": "quantity", "unit": "years"}),
        (
            "age",
            [*(str(v) for v in RANDOM.integers(18, 90, N - 3)), *["999"] * 3],
            {"kind": "quantity", "unit": "years", "missing": [999]},
        ),
        ("x", ["high", "low", "medium"] * 20, {"kind": "ordered", "levels": ["low", "medium", "high"]}),
        ("x", ["West", "East", "South"] * 20, {"kind": "category", "levels": ["East", "South", "West"]}),
        ("x", [f"2024-01-{1 + place % 28:02}" for place in range(N)], {"kind": "date"}),
        ("x", ["same"] * N, None),
        ("x", [""] * N, None),
        ("x", [f"word {place} of many" for place in range(N)], None),
        ("x", [f"{20240101 + place % 28}" for place in range(N)], None),
    ],
)
def test_guesses(tmp_path: Path, name: str, values: list[str], expected: dict[str, object] | None) -> None:
    found = guessed(tmp_path, values, name)
    if expected is None:
        assert found is None
    else:
        assert found == {"label": name.capitalize(), **expected}


def test_an_identifier_is_found_and_is_no_variable(tmp_path: Path) -> None:
    _, text = drafted(tmp_path, "rows.csv", column([f"P{place:03}" for place in range(N)]))
    assert yaml.safe_load(text)["data"]["identifier"] == "x"
    assert "x" not in yaml.safe_load(text)["variables"]


def test_european_western_and_unnamed(tmp_path: Path) -> None:
    """Semicolons, decimal commas, cp1252, a column without a name: what is found is stated."""
    rows = [
        f"{place};{18 + place / 7:.1f};{'ja' if place % 3 else 'nein'}".replace(".", ",")
        for place in range(N)
    ]
    content = "\n".join([";größe_cm;krank", *rows]).encode("cp1252")
    path, text = drafted(tmp_path, "rows.csv", content)
    data = yaml.safe_load(text)["data"]
    assert (data["decimal"], data["encoding"]) == (",", "windows-1252")
    loaded = answered(path, text, outcome="krank", exposures='["größe_cm"]')
    values = prepare(loaded).analysis.columns["größe_cm"].values
    assert values == pytest.approx([round(18 + place / 7, 1) for place in range(N)])


def test_missing_words_are_listed(tmp_path: Path) -> None:
    ages = [str(v) for v in RANDOM.integers(18, 90, N - 4)]
    _, text = drafted(tmp_path, "rows.csv", column([*ages, "N/A", "?", "", "NA"]))
    assert yaml.safe_load(text)["data"]["missing"] == ["", "NA", "N/A", "?"]
    assert yaml.safe_load(text)["variables"]["x"]["kind"] == "quantity"


def test_sheets_and_tables(tmp_path: Path) -> None:
    frame = pd.DataFrame({"fever": ["yes", "no"] * 30, "age": RANDOM.integers(18, 90, N)})
    with pd.ExcelWriter(tmp_path / "rows.xlsx") as book:
        frame.to_excel(book, sheet_name="First", index=False)
        frame.to_excel(book, sheet_name="Second sheet", index=False)
    text = guess(tmp_path / "rows.xlsx", "Second sheet")
    assert yaml.safe_load(text)["data"]["sheet"] == "Second sheet"
    loaded = answered(tmp_path / "rows.xlsx", text, outcome="fever", exposures="[age]")
    assert prepare(loaded).participants.analysed == N
    with pytest.raises(DataError, match="has these sheets: First, Second sheet"):
        guess(tmp_path / "rows.xlsx")


@pytest.mark.parametrize(
    "name",
    [
        "no",
        "a: b",
        "x # y",
        "- dash",
        "[list]",
        "{map}",
        'he said "so"',
        "1",
        "*star",
        "ward\\n",
        "ß",
        "true",
    ],
)
def test_names_come_back_as_they_were(name: str) -> None:
    assert yaml.safe_load(f"{{{quoted(name)}: {quoted(name)}}}") == {name: name}


def test_a_name_with_a_line_break_cannot_become_yaml(tmp_path: Path) -> None:
    path, text = drafted(tmp_path, "rows.csv", b'"a\noutcome: fever",fever\nsame,yes\nsame,no\n')
    assert "outcome" in yaml.safe_load(text)
    assert yaml.safe_load(text)["outcome"] == ANSWER
    assert path.exists()


def test_a_file_that_cannot_be_read(tmp_path: Path) -> None:
    with pytest.raises(DataError, match=r"rows\.csv: there is no such file"):
        guess(tmp_path / "rows.csv")
    (tmp_path / "rows.sav").write_bytes(b"")
    with pytest.raises(DataError, match="not one that can be read"):
        guess(tmp_path / "rows.sav")
