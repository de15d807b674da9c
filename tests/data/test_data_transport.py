"""SAS transport files. The writer below follows the published layout (SAS technical support document
TS-140, version 5): records of 80 bytes, numbers as IBM double precision, big-endian.
"""

from __future__ import annotations

import math
import struct
from collections.abc import Callable
from pathlib import Path

import numpy as np

from fourfold.data.prepare import prepare
from fourfold.description.read import Loaded

Study = Callable[..., Loaded]
Value = float | str | None
MEMBER = "HEADER RECORD*******MEMBER  HEADER RECORD!!!!!!!000000000000000001600000000140"
STAMP = "01JAN26:00:00:00"


def ibm_double(value: float | None) -> bytes:
    """Sign, exponent of 16 in excess 64, and a fraction of 56 bits; a missing value is a point."""
    if value is None:
        return b"." + bytes(7)
    if value == 0:
        return bytes(8)
    fraction, exponent = math.frexp(abs(value))
    shift = -exponent % 4
    first = (exponent + shift) // 4 + 64 + (128 if value < 0 else 0)
    return bytes([first]) + int(fraction * 2.0 ** (56 - shift)).to_bytes(7, "big")


def transport_file(columns: dict[str, list[Value]]) -> bytes:
    """A transport file with one member."""
    records = [
        header("LIBRARY"),
        f"SAS     SAS     SASLIB  6.06    bsd4.2  {'':24}{STAMP}",
        STAMP,
        MEMBER,
        header("DSCRPTR"),
        f"SAS     ROWS    SASDATA 6.06    bsd4.2  {'':24}{STAMP}",
        STAMP,
        f"HEADER RECORD*******NAMESTR HEADER RECORD!!!!!!!000000{len(columns):04}{'0' * 20}",
    ]
    out = b"".join(record.ljust(80).encode("ascii") for record in records)
    names, start = b"", 0
    for place, (name, values) in enumerate(columns.items(), 1):
        words = isinstance(values[0], str)
        names += struct.pack(
            ">hhhh8s40s8shhh2s8shhl52s",
            2 if words else 1, 0, 8, place, name.ljust(8).encode(), b" " * 40, b" " * 8, 0, 0, 0, b"  ",
            b" " * 8, 0, 0, start, bytes(52),
        )  # fmt: skip
        start += 8
    body = b""
    for row in zip(*columns.values(), strict=True):
        for value in row:
            body += value.encode().ljust(8) if isinstance(value, str) else ibm_double(value)
    return out + padded(names) + header("OBS    ").ljust(80).encode() + padded(body)


def header(name: str) -> str:
    return f"HEADER RECORD*******{name:8}HEADER RECORD!!!!!!!{'0' * 30}"


def padded(content: bytes) -> bytes:
    return content + b" " * (-len(content) % 80)


def test_ibm_numbers() -> None:
    # Worked example of the IBM format (IBM System/360 principles of operation): -118.625.
    assert ibm_double(-118.625) == bytes.fromhex("c276a00000000000")


def test_a_transport_file_gives_the_same_rows_as_csv(study: Study, tmp_path: Path) -> None:
    fever = ["yes", "no", "yes", "no", "yes"]
    exposed = [1.0, 0.0, 1.0, 1.0, 0.0]
    age = [40.5, None, 0.1, 33.0, 71.25]
    # Days since 1960-01-01: 23376 is 2024-01-01 (64 years with 16 leap days).
    seen = [23376.0, 23377.0, 23378.0, None, 23380.0]
    content = transport_file({"FEVER": fever, "EXPOSED": exposed, "AGE": age, "SEEN": seen})
    (tmp_path / "rows.xpt").write_bytes(content)
    (tmp_path / "rows.csv").write_text(
        "FEVER,EXPOSED,AGE,SEEN\nyes,1,40.5,2024-01-01\nno,0,,2024-01-02\nyes,1,0.1,2024-01-03\n"
        "no,1,33,\nyes,0,71.25,2024-01-05\n"
    )
    keys = {
        "variables": {
            "fever": {"kind": "binary", "present": "yes", "column": "FEVER"},
            "exposed": {"kind": "binary", "present": 1, "column": "EXPOSED"},
            "age": {"kind": "quantity", "column": "AGE"},
            "seen": {"kind": "date", "column": "SEEN"},
        },
        "exclusions": [{"reason": "Late", "where": {"variable": "seen", "above": "2024-01-04"}}],
    }
    found = prepare(study(None, file="rows.xpt", **keys))
    expected = prepare(study(None, file="rows.csv", **keys))
    assert found.participants == expected.participants
    assert found.participants.eligible == 4
    for name, column in expected.eligible.columns.items():
        assert found.eligible.columns[name].levels == column.levels
        assert np.array_equal(found.eligible.columns[name].values, column.values, equal_nan=True)
