"""Workbooks made on the spot: sound ones by other libraries, crooked ones part by part."""

from __future__ import annotations

import io
import struct
import zipfile
from datetime import date
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from collections.abc import Iterable, Sequence

__all__ = [
    "ods_content",
    "ods_of",
    "raw_ods",
    "raw_xlsx",
    "sheet_xml",
    "with_declared_size",
    "xlsx_of",
    "xlsx_with",
    "zip_of",
]

_PACKAGE = "http://schemas.openxmlformats.org/package/2006/relationships"
_OFFICE = "http://schemas.openxmlformats.org/officeDocument/2006/relationships"
_SHEET = "http://schemas.openxmlformats.org/spreadsheetml/2006/main"


def xlsx_of(
    rows: Iterable[Sequence[Any]],
    *,
    formats: dict[str, str] | None = None,
    merged: Sequence[str] = (),
    hidden_rows: Sequence[int] = (),
    sheets: dict[str, Iterable[Sequence[Any]]] | None = None,
) -> bytes:
    """Return a workbook as openpyxl writes it."""
    from openpyxl import Workbook

    book = Workbook()
    sheet: Any = book.active
    sheet.title = "rates"
    for row in rows:
        sheet.append(list(row))
    for cell, code in (formats or {}).items():
        sheet[cell].number_format = code
    for reference in merged:
        sheet.merge_cells(reference)
    for number in hidden_rows:
        sheet.row_dimensions[number].hidden = True
    for title, more in (sheets or {}).items():
        other = book.create_sheet(title)
        for row in more:
            other.append(list(row))
    return _saved(book)


def xlsx_with(cells: dict[str, Any]) -> bytes:
    """Return a workbook of single cells, dates among them."""
    from openpyxl import Workbook

    book = Workbook()
    sheet: Any = book.active
    for reference, value in cells.items():
        sheet[reference] = value
        if isinstance(value, date):
            sheet[reference].number_format = "d-mmm"
    return _saved(book)


def _saved(book: Any) -> bytes:
    data = io.BytesIO()
    book.save(data)
    return data.getvalue()


def sheet_xml(*rows: str) -> str:
    """Return the XML of a sheet with rows ``"A1=T/K|B1=k/s^-1"``; numbers behind ``#``."""
    made = []
    for row in rows:
        cells = [cell.partition("=") for cell in row.split("|")]
        number = "".join(letter for letter in cells[0][0] if letter.isdigit())
        made.append(f'<row r="{number}">{"".join(_cell(at, text) for at, _, text in cells)}</row>')
    return f'<worksheet xmlns="{_SHEET}"><sheetData>{"".join(made)}</sheetData></worksheet>'


def _cell(reference: str, text: str) -> str:
    if text.startswith("#"):
        return f'<c r="{reference}"><v>{text[1:]}</v></c>'
    return f'<c r="{reference}" t="inlineStr"><is><t>{text}</t></is></c>'


def raw_xlsx(
    sheet: str | Iterable[bytes],
    *,
    main: str = "xl/workbook.xml",
    parts: dict[str, str] | None = None,
) -> bytes:
    """Return a workbook whose one sheet is the given XML, well formed or not."""
    folder, _, name = main.rpartition("/")
    made = {
        "[Content_Types].xml": "<Types/>",
        "_rels/.rels": f'<Relationships xmlns="{_PACKAGE}"><Relationship Id="r1" '
        f'Type="{_OFFICE}/officeDocument" Target="{main}"/></Relationships>',
        main: f'<workbook xmlns="{_SHEET}" xmlns:r="{_OFFICE}"><sheets>'
        '<sheet name="S" sheetId="1" r:id="r1"/></sheets></workbook>',
        f"{folder}/_rels/{name}.rels": f'<Relationships xmlns="{_PACKAGE}"><Relationship Id="r1" '
        f'Type="{_OFFICE}/worksheet" Target="worksheets/sheet1.xml"/>'
        f'<Relationship Id="r2" Type="{_OFFICE}/sharedStrings" Target="sharedStrings.xml"/>'
        "</Relationships>",
    } | (parts or {})
    data = io.BytesIO()
    with zipfile.ZipFile(data, "w", zipfile.ZIP_DEFLATED) as archive:
        for part, text in made.items():
            archive.writestr(part, text)
        with archive.open(f"{folder}/worksheets/sheet1.xml", "w") as file:
            for piece in [sheet.encode()] if isinstance(sheet, str) else sheet:
                file.write(piece)
    return data.getvalue()


def ods_of(rows: Iterable[Sequence[Any]], *, blank_below: bool = True) -> bytes:
    """Return a workbook as odfpy writes it, with the million blank rows that programs add."""
    from odf.opendocument import OpenDocumentSpreadsheet
    from odf.table import Table, TableCell, TableRow
    from odf.text import P

    document = OpenDocumentSpreadsheet()
    table = Table(name="rates")
    for row in rows:
        line = TableRow()
        for value in row:
            if isinstance(value, float):
                cell = TableCell(valuetype="float", value=repr(value))
                cell.addElement(P(text=f"{value:.1f}"))
            else:
                cell = TableCell(valuetype="string")
                if value:
                    cell.addElement(P(text=value))
            line.addElement(cell)
        table.addElement(line)
    if blank_below:
        line = TableRow(numberrowsrepeated=1_048_000)
        line.addElement(TableCell(numbercolumnsrepeated=16_384))
        table.addElement(line)
    document.spreadsheet.addElement(table)
    data = io.BytesIO()
    document.write(data)
    return data.getvalue()


def raw_ods(rows: str) -> bytes:
    """Return a workbook whose sheet has the given rows, as XML without prefixes."""
    return ods_content(f"<spreadsheet><table name='S'>{rows}</table></spreadsheet>")


def ods_content(content: str) -> bytes:
    """Return an ODS file with the given XML inside."""
    return zip_of(
        {
            "mimetype": "application/vnd.oasis.opendocument.spreadsheet",
            "content.xml": f"<document-content>{content}</document-content>",
        }
    )


def zip_of(parts: dict[str, str]) -> bytes:
    """Return an archive of the given parts."""
    data = io.BytesIO()
    with zipfile.ZipFile(data, "w", zipfile.ZIP_DEFLATED) as archive:
        for name, text in parts.items():
            archive.writestr(name, text)
    return data.getvalue()


def with_declared_size(data: bytes, part: str, size: int) -> bytes:
    """Return an archive whose directory says that a part has another size unpacked."""
    # Central directory header: 46 bytes, size unpacked at 24, length of the name at 28.
    place = data.rindex(part.encode()) - 46
    if data[place : place + 4] != b"PK\x01\x02":
        raise AssertionError("no header of the central directory")
    return data[: place + 24] + struct.pack("<I", size) + data[place + 28 :]
