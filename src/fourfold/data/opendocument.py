"""Sheets of OpenDocument spreadsheets (.ods), read as a stream: repeated cells are counted, not copied
without limit, so a small file cannot grow beyond what a sheet can hold.
"""

from __future__ import annotations

import zipfile
from datetime import date, datetime
from typing import Any
from xml.etree import ElementTree

from fourfold.data.source import Content, Request
from fourfold.data.workbook import check_package, chosen_sheet, content_of

TABLE = "{urn:oasis:names:tc:opendocument:xmlns:table:1.0}"
OFFICE = "{urn:oasis:names:tc:opendocument:xmlns:office:1.0}"
TEXT = "{urn:oasis:names:tc:opendocument:xmlns:text:1.0}"
MOST_CELLS = 50_000_000
"""Cells with a value that one sheet may have."""


def read(request: Request) -> Content:
    """Read a sheet of an OpenDocument spreadsheet.

    Raises
    ------
    DataError
        If it is not one, or is too large.
    """
    check_package(request)
    try:
        with zipfile.ZipFile(request.path) as package, package.open("content.xml") as stream:
            root = ElementTree.parse(stream).getroot()
        sheets = {element.get(f"{TABLE}name", ""): element for element in root.iter(f"{TABLE}table")}
        rows = _rows(request, sheets[chosen_sheet(request, list(sheets))])
    except (KeyError, ValueError, ElementTree.ParseError, zipfile.BadZipFile, EOFError) as error:
        raise request.error(f"the file cannot be read as an OpenDocument spreadsheet ({error}).") from None
    return content_of(request, rows)


def _rows(request: Request, sheet: ElementTree.Element) -> list[list[Any]]:
    rows: list[list[Any]] = []
    cells = 0
    blank_rows = 0
    for row in sheet.iter(f"{TABLE}table-row"):
        repeated = int(row.get(f"{TABLE}number-rows-repeated", "1"))
        values: list[Any] = []
        blanks = 0
        for cell in row:
            if cell.tag not in (f"{TABLE}table-cell", f"{TABLE}covered-table-cell"):
                continue
            value = _value(cell)
            times = int(cell.get(f"{TABLE}number-columns-repeated", "1"))
            if value is None:
                blanks += times
                continue
            cells += (blanks + times) * repeated
            if cells > MOST_CELLS:
                raise request.error(
                    f"the sheet has more than {MOST_CELLS} cells.", "Export the sheet as csv or parquet."
                )
            values += [None] * blanks + [value] * times
            blanks = 0
        if not values:
            # Sheets end in a million empty rows written as one; they matter only before a filled row.
            blank_rows += repeated
            continue
        cells += blank_rows
        if cells > MOST_CELLS:
            raise request.error(f"the sheet has more than {MOST_CELLS} cells.", "Export the sheet as csv.")
        rows += [[]] * blank_rows + [values] * repeated
        blank_rows = 0
    return rows


def _value(cell: ElementTree.Element) -> Any:
    kind = cell.get(f"{OFFICE}value-type")
    if kind is None:
        return None
    if kind in ("float", "percentage", "currency"):
        number = float(cell.get(f"{OFFICE}value", ""))
        return int(number) if number.is_integer() and abs(number) < 2**53 else number
    if kind == "boolean":
        return cell.get(f"{OFFICE}boolean-value") == "true"
    if kind == "date":
        written = cell.get(f"{OFFICE}date-value", "")
        return datetime.fromisoformat(written) if "T" in written else date.fromisoformat(written)
    paragraphs = [_text(paragraph) for paragraph in cell.findall(f"{TEXT}p")]
    return "\n".join(paragraphs) or None


def _text(element: ElementTree.Element) -> str:
    parts = [element.text or ""]
    for child in element:
        if child.tag == f"{TEXT}s":
            parts.append(" " * int(child.get(f"{TEXT}c", "1")))
        elif child.tag == f"{TEXT}tab":
            parts.append("\t")
        elif child.tag != f"{OFFICE}annotation":
            parts.append(_text(child))
        parts.append(child.tail or "")
    return "".join(parts)
