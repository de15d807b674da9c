"""Sheets of xlsx workbooks."""

from __future__ import annotations

import re
import zipfile
from collections.abc import Sequence
from typing import Any

import numpy as np

from fourfold.data.nearest import nearest
from fourfold.data.raw import from_objects
from fourfold.data.source import Content, Request

DAMAGED = (KeyError, ValueError, TypeError, AttributeError, SyntaxError, EOFError, zipfile.BadZipFile)
"""What the workbook library raises for files that are not what they should be."""

LARGEST = 1 << 30
"""Bytes a workbook may unpack to; more is taken for a decompression bomb."""


def read(request: Request) -> Content:
    """Read a sheet of an xlsx workbook, the only one or the one named by `sheet:`.

    Raises
    ------
    DataError
        If it is not a workbook, is too large, or a formula has no saved result.
    """
    import openpyxl

    check_package(request)
    try:
        book = openpyxl.load_workbook(request.path, read_only=True, data_only=True, keep_links=False)
        try:
            name = chosen_sheet(request, book.sheetnames)
            sheet = book[name]
            sheet.reset_dimensions()
            rows = [list(row) for row in sheet.iter_rows(values_only=True)]
        finally:
            book.close()
        _refuse_unsaved_formulas(request, name, rows)
    except DAMAGED as error:
        raise request.error(f"the file cannot be read as an xlsx workbook ({error}).") from None
    return content_of(request, rows)


def check_package(request: Request) -> None:
    """Refuse what is not a zip package, or would unpack to more than ``LARGEST`` bytes."""
    try:
        with zipfile.ZipFile(request.path) as package:
            size = sum(entry.file_size for entry in package.infolist())
    except zipfile.BadZipFile:
        raise request.error(
            "the file is not a workbook, or is damaged.",
            "Open it in a spreadsheet program and save it again.",
        ) from None
    if size > LARGEST:
        raise request.error(
            f"the workbook would unpack to {size >> 20} MB; at most {LARGEST >> 20} MB are read.",
            "Export the sheet as csv.",
        )


def chosen_sheet(request: Request, sheets: Sequence[str]) -> str:
    """The sheet to read."""
    wanted = request.options.sheet or request.options.table
    there = ", ".join(sheets)
    if wanted is None and len(sheets) == 1:
        return sheets[0]
    if wanted is None:
        raise request.error(
            f"the workbook has these sheets: {there}.", "Name one with `sheet:` under `data:`."
        )
    if wanted not in sheets:
        raise request.error(
            f"there is no sheet {wanted!r}; the workbook has {there}.{nearest(wanted, sheets)}",
            "Correct `sheet:` under `data:`.",
        )
    return wanted


def _refuse_unsaved_formulas(request: Request, name: str, rows: list[list[Any]]) -> None:
    # A formula whose result was never computed reads as an empty cell: values would silently be missing.
    with zipfile.ZipFile(request.path) as package:
        sheets = [entry for entry in package.namelist() if re.match(r"xl/worksheets/[^/]+\.xml$", entry)]
        if not any(re.search(rb"<(\w+:)?f[ >/]", package.read(entry)) for entry in sheets):
            return
    import openpyxl

    book = openpyxl.load_workbook(request.path, read_only=True, data_only=False, keep_links=False)
    try:
        sheet = book[name]
        sheet.reset_dimensions()
        for number, (row, saved) in enumerate(zip(sheet.iter_rows(), rows, strict=True), 1):
            for cell, value in zip(row, saved, strict=True):
                if value is None and cell.data_type == "f":
                    raise request.error(
                        f"cell {cell.coordinate} is a formula without a saved result.",
                        "Open the workbook in a spreadsheet program, let it compute, and save it.",
                        number,
                    )
    finally:
        book.close()


def content_of(request: Request, rows: list[list[Any]]) -> Content:
    """Turn the cells of a sheet into columns: names in the first row that is not empty."""
    filled = [(number, row) for number, row in enumerate(rows, 1) if any(not _blank(cell) for cell in row)]
    if not filled:
        raise request.error("the sheet is empty.", "Check that the right sheet is named.")
    header = filled[0][1]
    while header and _blank(header[-1]):
        header = header[:-1]
    names = [
        f"(column {place})" if _blank(cell) else str(cell).strip() for place, cell in enumerate(header, 1)
    ]
    chosen = request.choose(names)
    width = len(names)
    for number, row in filled[1:]:
        if any(not _blank(cell) for cell in row[width:]):
            raise request.error(
                f"row {number} has a value beyond the last named column ({names[-1]}).",
                "Name the column in the first row, or remove the value.",
                number,
            )
    columns = {}
    for name in chosen:
        place = names.index(name)
        columns[name] = from_objects([row[place] if place < len(row) else None for _, row in filled[1:]])
    return Content(
        columns=columns,
        available=names,
        rows=len(filled) - 1,
        lines=np.array([number for number, _ in filled[1:]], dtype=np.int64),
    )


def _blank(cell: Any) -> bool:
    return cell is None or (isinstance(cell, str) and not cell.strip())
