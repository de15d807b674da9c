"""Every format gives the same rows for the same data."""

from __future__ import annotations

import sqlite3
from collections.abc import Callable
from pathlib import Path
from typing import Any

import duckdb
import numpy as np
import pandas as pd
import pytest

from fourfold.data.prepare import Prepared, prepare
from fourfold.description.read import Loaded

Study = Callable[..., Loaded]
ROWS = 60
VARIABLES = {
    "fever": {"kind": "binary", "present": "yes"},
    "exposed": {"kind": "binary", "present": "1"},
    "age": {"kind": "quantity", "unit": "years", "plausible": [0, 50]},
    "weight": {"kind": "quantity", "unit": "kg"},
    "ward": {"kind": "category", "levels": ["01", "1", "Süd, Ost"]},
    "grade": {"kind": "ordered", "levels": [1, 2, 3]},
    "seen": {"kind": "date"},
    "band": {"from": "age", "cut": [30, 40.5]},
}
KEYS: dict[str, Any] = {
    "variables": VARIABLES,
    "covariates": ["age", "ward", "grade"],
    "exclusions": [{"reason": "Seen early", "where": {"variable": "seen", "below": "2024-01-10"}}],
}


@pytest.fixture(scope="module")
def frame() -> pd.DataFrame:
    random = np.random.default_rng(20260101)
    frame = pd.DataFrame(
        {
            "id": np.arange(1, ROWS + 1),
            "fever": random.choice(["yes", "no"], ROWS),
            "exposed": random.choice([0, 1], ROWS),
            "age": random.integers(20, 60, ROWS).astype(float),
            "weight": random.normal(70, 12, ROWS).round(1),
            "ward": random.choice(["01", "1", "Süd, Ost"], ROWS),
            "grade": random.choice([1.0, 2.0, 3.0], ROWS),
            "seen": pd.Timestamp("2024-01-01") + pd.to_timedelta(np.arange(ROWS), unit="D"),
            "note": 'left "aside"\nover two lines',
        }
    )
    frame.loc[3, "age"] = np.nan
    frame.loc[[5, 20], "grade"] = np.nan
    frame.loc[7, "ward"] = None
    return frame


def as_text(frame: pd.DataFrame) -> pd.DataFrame:
    return frame.assign(seen=frame["seen"].dt.strftime("%Y-%m-%d"))


def write_csv(frame: pd.DataFrame, path: Path) -> dict[str, Any]:
    as_text(frame).to_csv(path, index=False)
    return {}


def write_european(frame: pd.DataFrame, path: Path) -> dict[str, Any]:
    as_text(frame).to_csv(
        path, index=False, sep=";", decimal=",", encoding="utf-8-sig", lineterminator="\r\n"
    )
    return {"decimal": ","}


def write_tsv(frame: pd.DataFrame, path: Path) -> dict[str, Any]:
    as_text(frame).to_csv(path, index=False, sep="\t")
    return {}


def write_bars_utf16(frame: pd.DataFrame, path: Path) -> dict[str, Any]:
    as_text(frame).to_csv(path, index=False, sep="|", encoding="utf-16")
    return {}


def write_western(frame: pd.DataFrame, path: Path) -> dict[str, Any]:
    as_text(frame).to_csv(path, index=False, encoding="cp1252")
    return {"encoding": "cp1252"}


def write_parquet(frame: pd.DataFrame, path: Path) -> dict[str, Any]:
    frame.assign(ward=frame["ward"].astype("category"), age=frame["age"].astype("float32")).to_parquet(path)
    return {}


def write_xlsx(frame: pd.DataFrame, path: Path) -> dict[str, Any]:
    with pd.ExcelWriter(path) as book:
        frame.head(2).to_excel(book, sheet_name="Other", index=False)
        frame.to_excel(book, sheet_name="Rows", index=False, startrow=2)
    return {"sheet": "Rows"}


def write_ods(frame: pd.DataFrame, path: Path) -> dict[str, Any]:
    frame.to_excel(path, sheet_name="Rows", index=False, engine="odf")
    return {}


def write_sqlite(frame: pd.DataFrame, path: Path) -> dict[str, Any]:
    with sqlite3.connect(path) as connection:
        frame.head(2).to_sql("other", connection, index=False)
        as_text(frame).to_sql('the "rows"', connection, index=False)
    connection.close()
    return {"table": 'the "rows"'}


def write_duckdb(frame: pd.DataFrame, path: Path) -> dict[str, Any]:
    connection = duckdb.connect(str(path))
    connection.register("frame", frame)
    connection.execute("create table visits as select * from frame")
    connection.close()
    return {}


WRITERS = {
    "rows.csv": write_csv,
    "european.csv": write_european,
    "rows.tsv": write_tsv,
    "bars.txt": write_bars_utf16,
    "western.csv": write_western,
    "rows.parquet": write_parquet,
    "rows.xlsx": write_xlsx,
    "rows.ods": write_ods,
    "rows.sqlite": write_sqlite,
    "rows.duckdb": write_duckdb,
}


def assert_same(found: Prepared, expected: Prepared) -> None:
    assert found.participants == expected.participants
    assert found.audit == expected.audit
    assert found.variables == expected.variables
    assert found.rows_read == expected.rows_read
    assert np.array_equal(found.outcome, expected.outcome)
    for rows, wanted in ((found.eligible, expected.eligible), (found.analysis, expected.analysis)):
        assert list(rows.columns) == list(wanted.columns)
        for name, column in wanted.columns.items():
            assert rows.columns[name].levels == column.levels
            assert rows.columns[name].decimals == column.decimals
            assert np.array_equal(rows.columns[name].values, column.values, equal_nan=True), name


@pytest.mark.parametrize("file", WRITERS)
def test_every_format_gives_the_same_rows(
    study: Study, tmp_path: Path, frame: pd.DataFrame, file: str
) -> None:
    options = WRITERS[file](frame, tmp_path / file)
    found = prepare(study(None, file=file, data={"identifier": "id", **options}, **KEYS))
    write_csv(frame, tmp_path / "expected.csv")
    expected = prepare(study(None, file="expected.csv", data={"identifier": "id"}, **KEYS))
    assert_same(found, expected)


def test_the_common_answer_is_that_of_pandas(study: Study, tmp_path: Path, frame: pd.DataFrame) -> None:
    """The rows that all formats agree on, counted by pandas straight from the frame."""
    write_csv(frame, tmp_path / "rows.csv")
    prepared = prepare(study(None, data={"identifier": "id"}, **KEYS))
    eligible = frame[frame["seen"] >= "2024-01-10"]
    complete = eligible.dropna(subset=["age", "ward", "grade"])
    assert prepared.participants.read == ROWS
    assert prepared.participants.exclusions[0].count == ROWS - len(eligible) == 9
    assert prepared.participants.analysed == len(complete)
    assert prepared.participants.events == (complete["fever"] == "yes").sum()
    assert np.array_equal(prepared.analysis.columns["weight"].values, complete["weight"])
    days = (complete["seen"] - pd.Timestamp("1970-01-01")).dt.days
    assert np.array_equal(prepared.analysis.columns["seen"].values, days)
    bands = pd.cut(complete["age"], [-np.inf, 30, 40.5, np.inf], right=False, labels=False)
    assert np.array_equal(prepared.analysis.columns["band"].values, bands)
    assert prepared.analysis.columns["band"].levels == ("under 30", "30 to under 40.5", "40.5 and over")


def test_only_the_columns_needed_are_read(study: Study, tmp_path: Path, frame: pd.DataFrame) -> None:
    frame.to_parquet(tmp_path / "rows.parquet")
    prepared = prepare(study(None, file="rows.parquet", data={"identifier": "id"}, **KEYS))
    assert set(prepared.columns_read) == {"id", "fever", "exposed", "age", "weight", "ward", "grade", "seen"}
