"""What is wrong with a data file is said with its file, line or column, and never as a traceback."""

from __future__ import annotations

import re
import sqlite3
import sys
import zipfile
from collections.abc import Callable
from pathlib import Path
from typing import Any

import duckdb
import openpyxl
import pyarrow as pa
import pyarrow.parquet as pq
import pytest

from fourfold.data import source, workbook
from fourfold.data.prepare import prepare
from fourfold.description.read import Loaded
from fourfold.errors import DataError

Study = Callable[..., Loaded]
HEAD = "fever,exposed,age\n"
ROWS = "yes,yes,40\nno,yes,50\nyes,no,60\nno,no,70\n"
GOOD = HEAD + ROWS


def message(loaded: Loaded) -> str:
    """The whole message of the error that preparing raises."""
    with pytest.raises(DataError) as caught:
        prepare(loaded)
    return str(caught.value)


def variables(**changes: dict[str, Any]) -> dict[str, Any]:
    yes = {"kind": "binary", "present": "yes"}
    return {"fever": yes, "exposed": yes, "age": {"kind": "quantity"}, **changes}


TEXT_FILES: list[tuple[str, str | bytes, str]] = [
    ("empty", "", r"rows\.csv: the file is empty"),
    ("only white space", "\n  \n", r"rows\.csv: the file is empty"),
    ("no rows", HEAD, r"rows\.csv: the file has column names but no rows"),
    ("too few cells", HEAD + "yes,no,40\nno,yes\n", r"rows\.csv:3: .*names are 3, but line 3 has 2"),
    ("too many cells", HEAD + "yes,no,40,1\n", r"rows\.csv:2: .*names are 3, but line 2 has 4"),
    (
        "ragged after a quoted line break",
        'fever,exposed,age\n"y\nes",no,1\nno,no\n',
        r"rows\.csv:4: .*line 4 has 2",
    ),
    ("name twice", "fever,exposed,age,age\n" + "yes,no,1,2\n", r"several columns have the same name: 'age'"),
    ("name nearly", "fever,exposd,age\n" + ROWS, r"no column 'exposed'.*variable exposed.*mean 'exposd'\?"),
    ("zero byte", (HEAD + "yes,no,4\x000\n").encode(), r"rows\.csv:2: byte 27 of the file is zero"),
    ("not utf-8", HEAD.encode() + "yes,nö,40\n".encode("cp1252"), r"rows\.csv:2: byte 24 .*\(f6 in .*utf-8"),
    (
        "open quote",
        HEAD + 'yes,no,40\nno,no,"50\n',
        r"rows\.csv:3: a double quote is opened and never closed",
    ),
    ("no names", ",,\n" + ROWS, r"rows\.csv:1: the first line names no column"),
    ("cut utf-16", b"\xff\xfe" + GOOD.encode("utf-16-le")[:-1], r"not utf-16-le text"),
]


@pytest.mark.parametrize(
    ("content", "expected"), [case[1:] for case in TEXT_FILES], ids=[c[0] for c in TEXT_FILES]
)
def test_text_files_that_cannot_be_read(study: Study, content: str | bytes, expected: str) -> None:
    assert re.search(expected, message(study(content)), re.DOTALL)


def test_western_bytes_are_read_when_the_encoding_is_stated(study: Study) -> None:
    content = (GOOD + "no,yés,30\n").encode("latin-1")
    assert "'yés' (1 rows)" in message(study(content, data={"encoding": "latin-1"}))


def test_an_encoding_outside_the_list_is_refused(study: Study) -> None:
    assert "`encoding: utf-7` is not known" in message(study(GOOD, data={"encoding": "utf-7"}))


@pytest.mark.parametrize(
    ("word", "character"), [("semicolon", ";"), ("|", "|"), ("tab", "\t"), ("comma", ",")]
)
def test_a_stated_delimiter_is_kept_to(study: Study, word: str, character: str) -> None:
    flow = prepare(study(GOOD.replace(",", character), data={"delimiter": word})).participants
    assert flow.analysed == 4
    other = "," if character != "," else "|"
    assert "there is no column" in message(study(GOOD.replace(",", other), data={"delimiter": word}))


def test_an_ending_that_is_not_known(study: Study) -> None:
    assert "'.sav' is not one that can be read" in message(study(GOOD, file="rows.sav"))


def test_a_file_that_goes_away(study: Study, tmp_path: Path) -> None:
    loaded = study(GOOD)
    (tmp_path / "rows.csv").rename(tmp_path / "row.csv")
    assert "there is no such file. Did you mean 'row.csv'?" in message(loaded)


def test_a_file_that_changes_while_it_is_read(
    study: Study, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    loaded = study(GOOD)
    read = source._reader

    def meanwhile(request: source.Request) -> Any:
        reader = read(request)

        def reading(request: source.Request) -> source.Content:
            content = reader(request)
            (tmp_path / "rows.csv").write_text(GOOD + "yes,yes,80\n")
            return content

        return reading

    monkeypatch.setattr(source, "_reader", meanwhile)
    assert "rows.csv: the file changed while it was being read" in message(loaded)


def test_several_ragged_lines_are_listed_and_then_cut_off(study: Study) -> None:
    text = message(study(HEAD + "yes,no,1\n" + "yes\n" * 9))
    assert "line 3 has 1; line 4 has 1; line 5 has 1; line 6 has 1; line 7 has 1 and so on" in text


@pytest.mark.parametrize(
    "file", ["rows.parquet", "rows.xlsx", "rows.ods", "rows.sqlite", "rows.duckdb", "rows.xpt"]
)
@pytest.mark.parametrize("content", [b"", b"PK\x03\x04 not what the ending says" * 50, GOOD.encode()])
def test_damaged_files_of_every_format(study: Study, file: str, content: bytes) -> None:
    assert message(study(content, file=file)).startswith(file)


@pytest.mark.parametrize("file", ["rows.xlsx", "rows.ods"])
def test_a_package_without_the_parts_of_a_workbook(study: Study, tmp_path: Path, file: str) -> None:
    with zipfile.ZipFile(tmp_path / file, "w") as package:
        package.writestr("greeting.txt", "good day")
    assert "cannot be read as" in message(study(None, file=file))


def test_a_workbook_that_would_unpack_to_too_much(
    study: Study, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.setattr(workbook, "LARGEST", 1 << 20)
    with zipfile.ZipFile(tmp_path / "rows.xlsx", "w", zipfile.ZIP_DEFLATED) as package:
        package.writestr("xl/worksheets/sheet1.xml", b"0" * (2 << 20))
    assert (tmp_path / "rows.xlsx").stat().st_size < 10_000
    assert "would unpack to 2 MB; at most 1 MB" in message(study(None, file="rows.xlsx"))


def test_a_sheet_that_says_it_repeats_its_cells_without_end(study: Study, tmp_path: Path) -> None:
    sheet = (
        '<office:document-content xmlns:office="urn:oasis:names:tc:opendocument:xmlns:office:1.0" '
        'xmlns:table="urn:oasis:names:tc:opendocument:xmlns:table:1.0">'
        '<table:table table:name="Rows"><table:table-row table:number-rows-repeated="1000000000">'
        '<table:table-cell office:value-type="float" office:value="1" table:number-columns-repeated="1000"/>'
        "</table:table-row></table:table></office:document-content>"
    )
    with zipfile.ZipFile(tmp_path / "rows.ods", "w") as package:
        package.writestr("content.xml", sheet)
    assert "more than 50000000 cells" in message(study(None, file="rows.ods"))


def sheet_of(rows: list[list[Any]], path: Path, *more: str) -> None:
    book = openpyxl.Workbook()
    book.active.title = "Rows"
    for row in rows:
        book.active.append(row)
    for name in more:
        book.create_sheet(name)
    book.save(path)


TABLE = [
    ["fever", "exposed", "age"],
    ["yes", "yes", 40],
    ["no", "no", 50],
    ["yes", "no", 60],
    ["no", "yes", 61],
]


def test_sheets_must_be_named_where_there_are_several(study: Study, tmp_path: Path) -> None:
    sheet_of(TABLE, tmp_path / "rows.xlsx", "Notes")
    assert "has these sheets: Rows, Notes" in message(study(None, file="rows.xlsx"))
    wrong = study(None, file="rows.xlsx", data={"sheet": "rows"})
    assert "no sheet 'rows'; the workbook has Rows, Notes. Did you mean 'Rows'?" in message(wrong)
    assert prepare(study(None, file="rows.xlsx", data={"sheet": "Rows"})).participants.analysed == 4


def test_a_value_beside_the_table(study: Study, tmp_path: Path) -> None:
    sheet_of([*TABLE[:2], [*TABLE[2], None, "ask again"], *TABLE[3:]], tmp_path / "rows.xlsx")
    assert "rows.xlsx:3: row 3 has a value beyond the last named column" in message(
        study(None, file="rows.xlsx")
    )


def test_an_empty_sheet(study: Study, tmp_path: Path) -> None:
    sheet_of([], tmp_path / "rows.xlsx")
    assert "the sheet is empty" in message(study(None, file="rows.xlsx"))


def test_a_formula_that_was_never_computed_is_not_taken_for_missing(study: Study, tmp_path: Path) -> None:
    sheet_of([*TABLE, ["yes", "no", "=40+2"]], tmp_path / "rows.xlsx")
    assert "rows.xlsx:6: cell C6 is a formula without a saved result" in message(
        study(None, file="rows.xlsx")
    )


def test_tables_must_be_named_where_there_are_several(study: Study, tmp_path: Path) -> None:
    with sqlite3.connect(tmp_path / "rows.sqlite") as connection:
        connection.execute("create table visits (fever, exposed, age)")
        connection.execute("create table people (fever, exposed, age)")
    connection.close()
    assert "has these tables: people, visits" in message(study(None, file="rows.sqlite"))
    wrong = study(None, file="rows.sqlite", data={"table": "visit"})
    assert "no table 'visit'; the file has people, visits. Did you mean 'visits'?" in message(wrong)
    empty = study(None, file="rows.sqlite", data={"table": "visits"})
    assert "column names but no rows" in message(empty)


def test_bytes_in_a_database_are_refused(study: Study, tmp_path: Path) -> None:
    with sqlite3.connect(tmp_path / "rows.sqlite") as connection:
        connection.execute("create table visits (fever, exposed, age)")
        connection.execute("insert into visits values ('yes', 'no', x'00ff')")
    connection.close()
    assert "column 'age' holds bytes" in message(study(None, file="rows.sqlite"))


def test_a_view_that_reaches_outside_its_file_is_refused(study: Study, tmp_path: Path) -> None:
    (tmp_path / "other.csv").write_text(GOOD)
    connection = duckdb.connect(str(tmp_path / "rows.duckdb"))
    connection.execute(f"create view visits as select * from read_csv('{tmp_path / 'other.csv'}')")
    connection.close()
    text = message(study(None, file="rows.duckdb"))
    assert text.startswith("rows.duckdb: the file cannot be read as a duckdb database")


def test_duckdb_that_is_not_installed_is_named(
    study: Study, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.setitem(sys.modules, "duckdb", None)
    assert "pip install 'fourfold[sql]'" in message(study(b"", file="rows.duckdb"))


def test_lists_in_a_parquet_column_are_refused(study: Study, tmp_path: Path) -> None:
    table = pa.table({"fever": ["yes", "no"], "exposed": ["yes", "no"], "age": [[1, 2], [3]]})
    pq.write_table(table, tmp_path / "rows.parquet")
    assert "column 'age' holds values of type list" in message(study(None, file="rows.parquet"))


# What the cells hold


def test_words_in_a_quantity_are_shown_by_line(study: Study) -> None:
    text = message(study(GOOD + "no,no,old\nyes,no,12\nno,no,>90\n"))
    assert text.startswith("rows.csv:6: age is a quantity")
    assert "2 are not: line 6: 'old'; line 8: '>90'" in text


@pytest.mark.parametrize("word", ["inf", "-Infinity", "nan", "1e999", "1_000", "1,5", "٣"])
def test_what_is_no_finite_number(study: Study, word: str) -> None:
    content = GOOD.replace(",", ";") + f"no;no;{word}\n"
    assert f"1 is not: line 6: '{word}'" in message(study(content))


def test_points_in_a_file_with_decimal_commas_are_never_guessed(study: Study) -> None:
    content = GOOD.replace(",", ";") + "no;no;1.234\n"
    assert "a finite number with a decimal comma; 1 is not: line 6: '1.234'" in message(
        study(content, data={"decimal": ","})
    )


def test_infinities_of_a_number_column_are_refused(study: Study, tmp_path: Path) -> None:
    table = pa.table({"fever": ["yes", "no"], "exposed": ["yes", "no"], "age": [1.0, float("inf")]})
    pq.write_table(table, tmp_path / "rows.parquet")
    assert "1 is not: row 2: inf" in message(study(None, file="rows.parquet"))


def test_an_unlisted_level_is_listed_with_its_count(study: Study) -> None:
    content = "fever,exposed,age,ward\nyes,yes,1,North\nno,no,2,Nort\nno,yes,3,South\nno,yes,3,Nort\n"
    ward = {"kind": "category", "levels": ["North", "South"]}
    text = message(study(content, variables=variables(ward=ward)))
    assert "ward: the data hold levels that the description does not list: 'Nort' (2 rows)" in text
    assert "Did you mean 'North'?" in text


def test_leading_zeros_keep_levels_apart(study: Study) -> None:
    content = "fever,exposed,age,ward\nyes,yes,1,01\nno,no,2,1\n"
    ward = {"kind": "category", "levels": ["1", "2"]}
    assert "'01' (1 rows)" in message(study(content, variables=variables(ward=ward)))


def test_a_third_value_of_a_binary_is_listed(study: Study) -> None:
    text = message(study(GOOD + "no,unknown,3\n"))
    assert "exposed: a binary variable has two values besides missing" in text
    assert "'no' (2 rows), 'unknown' (1 rows), 'yes' (2 rows)" in text


def test_one_value_of_a_binary_is_listed(study: Study) -> None:
    assert "the data hold one, 'yes' (2 rows)" in message(study(HEAD + "yes,yes,1\nno,yes,2\n"))


def test_a_present_value_that_does_not_occur(study: Study) -> None:
    text = message(study(GOOD, variables=variables(exposed={"kind": "binary", "present": "Yes"})))
    assert "'no' (2 rows), 'yes' (2 rows); none is 'Yes'. Did you mean 'yes'?" in text


def test_dates_that_are_none(study: Study) -> None:
    content = "fever,exposed,age,seen\nyes,yes,1,2024-02-30\nno,no,2,3.4.2024\nno,no,2,2024-01-05 10:30\n"
    text = message(study(content, variables=variables(seen={"kind": "date"})))
    assert "2 are not: line 2: '2024-02-30'; line 3: '3.4.2024'" in text


def test_every_problem_is_reported_at_once(study: Study) -> None:
    with pytest.raises(DataError) as caught:
        prepare(study(HEAD + "yes,yes,old\nno,maybe,2\nno,no,3\n"))
    assert len(caught.value.problems) == 2


def test_an_outcome_that_does_not_vary(study: Study) -> None:
    content = "fever,exposed,age\nyes,yes,1\nno,no,\nyes,no,2\n"
    text = message(study(content, covariates=["age"]))
    assert "everybody in the analysis set has the outcome 'yes' (2 people)" in text


def test_no_row_is_left(study: Study) -> None:
    out = [{"reason": "Not a child", "where": {"variable": "age", "above": 1}}]
    assert "no row is left after the exclusions (Not a child: 4)" in message(study(GOOD, exclusions=out))


def test_no_row_is_complete(study: Study) -> None:
    text = message(study(HEAD + "yes,yes,\nno,no,\nno,yes,NA\n", covariates=["age"]))
    assert "none of the 3 rows left after the exclusions is complete: age has no value in any of them" in text


def test_logarithm_of_what_is_not_positive(study: Study) -> None:
    age = {"kind": "quantity", "shape": "log2"}
    text = message(study(GOOD + "yes,no,0\n", variables=variables(age=age), covariates=["age"]))
    assert "age: the shape log2 needs values above 0; 1 in the analysis set are not: line 6: 0" in text


def test_too_few_values_for_a_spline(study: Study) -> None:
    age = {"kind": "quantity", "shape": {"spline": {"knots": 4}}}
    text = message(
        study(HEAD + ROWS.replace("60", "40") * 30, variables=variables(age=age), covariates=["age"])
    )
    assert "age: a spline with 4 knots needs more different values" in text


def test_stated_knots_outside_the_data(study: Study) -> None:
    age = {"kind": "quantity", "shape": {"spline": {"knots": [10, 50, 60]}}}
    text = message(study(GOOD, variables=variables(age=age), covariates=["age"]))
    assert "run from 40 to 70; stated are 10, 50, 60" in text


def test_a_reference_that_nobody_has(study: Study) -> None:
    content = "fever,exposed,age,ward\nyes,yes,1,A\nno,no,2,B\nno,yes,3,B\nyes,no,4,A\n"
    ward = {"kind": "category", "levels": ["A", "B", "C"], "reference": "C"}
    text = message(study(content, variables=variables(ward=ward), covariates=["ward"]))
    assert "nobody in the analysis set has the reference level 'C'" in text


@pytest.mark.parametrize("word", ["-1", "1.5", "", "two"])
def test_counts_that_count_nobody(study: Study, word: str) -> None:
    content = f"fever,exposed,age,people\nyes,yes,1,3\nno,no,2,{word}\n"
    text = message(study(content, data={"counts": "people"}))
    assert text.startswith("rows.csv:3: people says how many people a row stands for")


def test_an_exclusion_that_spells_a_value_otherwise(study: Study) -> None:
    content = "fever,exposed,age,urgency\nyes,yes,1,Emergency\nno,no,2,elective\n"
    out = [{"reason": "Emergency", "where": {"variable": "urgency", "is": "emergency"}}]
    assert "the data spell it 'Emergency'" in message(study(content, exclusions=out))


def test_an_exclusion_by_a_column_that_is_not_there(study: Study) -> None:
    out = [{"reason": "Emergency", "where": {"variable": "urgency", "is": "emergency"}}]
    text = message(study(GOOD, exclusions=out))
    assert "there is no column 'urgency' (asked for by the exclusion 'Emergency')" in text


def test_an_exclusion_that_compares_words_as_numbers(study: Study) -> None:
    content = "fever,exposed,age,urgency\nyes,yes,1,Emergency\nno,no,2,elective\n"
    out = [{"reason": "Urgent", "where": {"variable": "urgency", "above": 3}}]
    assert "its values are not all numbers or dates" in message(study(content, exclusions=out))
