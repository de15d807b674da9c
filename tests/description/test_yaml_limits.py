"""Files that are no descriptions, or that would do harm: each is refused with what to do."""

from __future__ import annotations

import os
import tracemalloc
from collections.abc import Callable
from pathlib import Path

import pytest
import yaml

from fourfold.description import compose, source_text
from fourfold.description.read import load
from fourfold.errors import DescriptionError, Problem

from .studies import SMALL

Refused = Callable[[str | bytes], tuple[Problem, ...]]
Changed = Callable[..., Problem]


def only(problems: tuple[Problem, ...]) -> Problem:
    assert len(problems) == 1, "\n".join(map(str, problems))
    return problems[0]


def place(problem: Problem) -> tuple[int | None, int | None]:
    assert problem.where is not None
    return problem.where.line, problem.where.column


def test_a_file_of_50_megabytes_is_refused_unread(folder: Path) -> None:
    path = folder / "study.yaml"
    with path.open("wb") as file:
        file.truncate(50_000_000)
    tracemalloc.start()
    with pytest.raises(DescriptionError) as caught:
        load(path)
    peak = tracemalloc.get_traced_memory()[1]
    tracemalloc.stop()
    assert "50.0 MB" in str(caught.value)
    assert "Name the description" in str(caught.value)
    assert peak < 1_000_000


def test_a_file_just_over_the_limit_is_refused_and_one_at_it_is_read(folder: Path) -> None:
    path = folder / "study.yaml"
    path.write_bytes(SMALL.encode().ljust(source_text.LARGEST_FILE, b"\n"))
    assert load(path).description.outcome == "infection"
    path.write_bytes(SMALL.encode().ljust(source_text.LARGEST_FILE + 1, b"\n"))
    with pytest.raises(DescriptionError, match="at most 1 MB"):
        load(path)


def test_a_missing_file_names_the_nearest(folder: Path) -> None:
    (folder / "study.yaml").write_text(SMALL)
    with pytest.raises(DescriptionError) as caught:
        load(folder / "studdy.yaml")
    assert "There is no such file." in str(caught.value)
    assert "Did you mean 'study.yaml'?" in str(caught.value)


def test_a_folder_and_a_pipe_are_refused(folder: Path) -> None:
    with pytest.raises(DescriptionError, match="This is a folder"):
        load(folder)
    pipe = folder / "study.yaml"
    os.mkfifo(pipe)
    with pytest.raises(DescriptionError, match="not an ordinary file"):
        load(pipe)


@pytest.mark.parametrize(
    ("raw", "said"),
    [
        (b"PK\x03\x04rest", "a workbook"),
        (b"PAR1rest", "a parquet file"),
        (b"%PDF-1.7", "a PDF"),
        (b"SQLite format 3\x00", "a database"),
        (b"\x1f\x8brest", "a compressed file"),
    ],
)
def test_other_kinds_of_file_are_called_by_name(refused: Refused, raw: bytes, said: str) -> None:
    problem = only(refused(raw))
    assert said in problem.what
    assert "Name the description" in problem.advice


def test_a_binary_file_is_refused(refused: Refused) -> None:
    assert "not text" in only(refused(bytes(range(32)) + b"\x00" * 50)).what


def test_a_control_character_is_named_at_its_place(refused: Refused) -> None:
    problem = only(refused(SMALL.replace("Quillmere", "Quill\x07mere")))
    assert "U+0007" in problem.what
    assert place(problem) == (1, SMALL.index("Quillmere") + 6)


def test_a_wrong_encoding_names_the_byte_and_the_mend(refused: Refused) -> None:
    text = SMALL.replace("wound-infection.csv", "plaie-infectée.csv")
    problem = only(refused(text.encode("cp1252")))
    assert "0xE9" in problem.what
    assert "'é'" in problem.what
    assert "UTF-8" in problem.advice
    assert place(problem) == (2, text.splitlines()[1].index("é") + 1)


@pytest.mark.parametrize("encoding", ["utf-16", "utf-16-le", "utf-32"])
def test_wide_encodings_are_refused(refused: Refused, encoding: str) -> None:
    assert "UTF-8" in only(refused(SMALL.encode(encoding))).advice


@pytest.mark.parametrize("text", ["", "\n\n", "# a comment only\n", "---\n", "---\n...\n", "\ufeff"])
def test_an_empty_file_is_told_how_to_begin(refused: Refused, text: str) -> None:
    problem = only(refused(text))
    assert "empty" in problem.what
    assert "fourfold draft" in problem.advice


def test_a_list_where_a_mapping_belongs(refused: Refused, changed: Changed) -> None:
    problem = only(refused("- study: x\n- data: y\n"))
    assert "found a list" in problem.what
    assert "Remove the dashes" in problem.advice
    problem = changed("age: {kind: quantity}", "age: [quantity]", at="age: [")
    assert "`age` expects a mapping" in problem.what
    assert "found a list" in problem.what


def test_a_text_where_a_mapping_belongs(refused: Refused, changed: Changed) -> None:
    assert "found 'just words'" in only(refused("just words")).what
    problem = changed("age: {kind: quantity}", "age: quantity", at="quantity\n")
    assert problem.advice == "Write `age: {kind: quantity}`."


def test_duplicate_keys_are_refused_with_the_first_line(refused: Refused) -> None:
    problem = only(refused(SMALL + "outcome: smoker\n"))
    assert "'outcome' is already given in line 9" in problem.what
    assert place(problem) == (12, 1)
    nested = SMALL.replace("age: {kind: quantity}", "age: {kind: quantity, kind: date}")
    assert "'kind' is already given in line 6" in only(refused(nested)).what


def test_a_key_given_quoted_and_unquoted_is_a_duplicate(refused: Refused) -> None:
    # In YAML 1.1 `no` and "no" are different keys (false and the text); here they are one name.
    assert yaml.safe_load('{no: 1, "no": 2}') == {False: 1, "no": 2}
    text = SMALL.replace("  seen:", '  no: {kind: date}\n  "no": {kind: date}\n  seen:')
    assert "'no' is already given" in only(refused(text)).what


@pytest.mark.parametrize(
    ("text", "line", "column"),
    [
        ("study:\n\ttitle: x\n", 2, 1),
        ("study:\n  title: x\n\tdesign: cohort\n", 3, 1),
        ("study:\n  title:\tx\n  \tdesign: cohort\n", 2, 9),
        ("exposures:\n-\tsmoker\n", 2, 2),
    ],
)
def test_tabs_are_named(refused: Refused, text: str, line: int, column: int) -> None:
    problem = only(refused(text))
    assert "tab" in problem.what
    assert place(problem) == (line, column)


def test_all_lines_with_tabs_are_listed(refused: Refused) -> None:
    problem = only(refused("study:\n\ttitle: x\n\tdesign: cohort\n"))
    assert "Lines that begin with a tab: 2, 3." in problem.advice


def test_a_bomb_of_aliases_is_never_expanded(refused: Refused) -> None:
    # The well-known nest of lists: nine levels of nine would be 387 million items.
    lines = ["a0: &a0 [lol, lol, lol]"]
    lines += [f"a{n}: &a{n} [" + ", ".join([f"*a{n - 1}"] * 9) + "]" for n in range(1, 10)]
    problems = refused("\n".join(lines))
    aliases = [problem for problem in problems if "aliases" in problem.what]
    assert len(aliases) == 81
    assert place(aliases[0]) == (2, lines[1].index("*") + 1)


def test_an_alias_and_a_merge_key_are_refused_where_they_stand(changed: Changed) -> None:
    text = SMALL.replace("smoker: {kind", "smoker: &one {kind")
    problem = changed("age: {kind: quantity}", "age: *one", at="*one", text=text)
    assert "aliases" in problem.what
    problem = changed("age: {kind: quantity}", "age: {<<: {kind: date}, kind: quantity}", at="<<")
    assert "merge key" in problem.what
    assert problem.advice == "Write the keys out."


def test_a_quoted_merge_sign_is_an_ordinary_unknown_key(changed: Changed) -> None:
    problem = changed("age: {kind: quantity}", 'age: {"<<": x, kind: quantity}')
    assert "not a known key" in problem.what


@pytest.mark.parametrize(
    "tagged",
    ["!!python/object/apply:os.system [ls]", "!!str smoker", "!thing smoker", "!!binary aGk=", "!!map {}"],
)
def test_tags_are_refused(changed: Changed, tagged: str) -> None:
    problem = changed("outcome: infection", f"outcome: {tagged}", at=tagged)
    assert "tag" in problem.what


def test_nesting_is_limited(refused: Refused) -> None:
    deep = compose.DEEPEST + 1
    for text in ("[" * 100_000, "a: " + "[" * 500 + "]" * 500, "{a: " * 500, "- " * 100_000):
        problem = only(refused(text))
        assert "nested more than" in problem.what
    assert "nested" not in str(only(refused("[" * (deep - 1) + "]" * (deep - 1))))


def test_the_number_of_values_is_limited(refused: Refused) -> None:
    problem = only(refused("a: [" + "1," * (compose.MOST_VALUES + 1) + "]"))
    assert "more than 20,000 values" in problem.what


def test_a_second_document_is_refused(refused: Refused) -> None:
    problem = only(refused(SMALL + "---\nstudy: {}\n"))
    assert "second document" in problem.what
    assert place(problem) == (12, 1)


def test_a_flood_of_errors_is_cut_off(refused: Refused) -> None:
    text = SMALL + "".join(f"key{number}: x\n" for number in range(3000))
    problems = refused(text)
    assert len(problems) == 101
    assert "more than 100 problems" in problems[-1].what


@pytest.mark.parametrize(
    "text",
    [
        pytest.param("k: v\n" * 190_000, id="duplicates"),
        pytest.param("x" * 999_000, id="one long word"),
        pytest.param('"' + "a\n" * 400_000, id="an open quotation mark"),
        pytest.param("a: |\n" + "  x\n" * 200_000, id="one long text"),
        pytest.param("a: &x b\n" + "b: *x\n" * 150_000, id="aliases"),
        pytest.param("\r" * 900_000, id="line breaks"),
        pytest.param("!" * 900_000, id="tags"),
        pytest.param(
            SMALL
            + "predictors: ["
            + ", ".join(f"longvariablenames{n}" for n in range(9000))
            + "]\n"
            + "".join(f"unknown_key_{n}: x\n" for n in range(3000)),
            id="unknown names",
        ),
    ],
)
def test_a_hostile_file_of_a_megabyte_is_refused(refused: Refused, text: str) -> None:
    # Without the limits on values, problems and compared words some of these would take hours.
    assert refused(text[:1_000_000])


def test_several_faults_of_structure_are_told_with_the_rest(refused: Refused) -> None:
    text = SMALL.replace("kind: date", "kind: !!str date").replace("cohort", "kohort") + "outcome: smoker\n"
    said = [problem.what for problem in refused(text)]
    assert len(said) == 3
    assert "`design` expects" in said[0]
    assert "tag" in said[1]
    assert "already given" in said[2]
