"""All tables as one workbook: a sheet a table, numbers as numbers, the same bytes every time."""

from __future__ import annotations

import io
import re
import zipfile
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from collections.abc import Sequence

    from openpyxl.worksheet.worksheet import Worksheet

    from knought.reporting.plain_tables import PlainTable

__all__ = ["workbook_bytes"]

#: Spreadsheets refuse longer names of sheets, and these signs in them.
_LONGEST_NAME = 31
_NOT_IN_NAMES = re.compile(r"[\[\]:*?/\\']")

_LONGEST_TEXT = 32_000
_WIDEST = 48

#: The first moment that a zip archive can hold; a workbook of the same study has the same bytes.
_MOMENT = (1980, 1, 1, 0, 0, 0)
_STAMP = re.compile(rb"(<dcterms:(created|modified)[^>]*>)[^<]*(</dcterms:)")


def workbook_bytes(tables: Sequence[PlainTable]) -> bytes:
    """Return an XLSX workbook.

    Parameters
    ----------
    tables
        One sheet each: title, headings, rows, notes. Words are words, whatever they begin with.
    """
    from openpyxl import Workbook

    book = Workbook()
    book.remove(book.worksheets[0])
    for table in tables:
        _fill(book.create_sheet(_NOT_IN_NAMES.sub("-", table.name)[:_LONGEST_NAME]), table)
    made = io.BytesIO()
    book.save(made)
    return _without_moment(made.getvalue())


def _fill(sheet: Worksheet, table: PlainTable) -> None:
    from openpyxl.styles import Font
    from openpyxl.utils import get_column_letter

    _write(sheet, 1, 1, table.title)
    sheet.cell(1, 1).font = Font(bold=True)
    for j, field in enumerate(table.fields, start=1):
        _write(sheet, 3, j, field.name)
        sheet.cell(3, j).font = Font(bold=True)
        longest = max((len(str(row[j - 1] or "")) for row in table.rows), default=0)
        width = min(max(len(field.name), 10 if field.numeric else longest) + 2, _WIDEST)
        sheet.column_dimensions[get_column_letter(j)].width = width
    for i, row in enumerate(table.rows, start=4):
        for j, value in enumerate(row, start=1):
            _write(sheet, i, j, value)
    for i, note in enumerate(table.notes, start=5 + len(table.rows)):
        _write(sheet, i, 1, note)
    sheet.freeze_panes = "A4"


def _write(sheet: Worksheet, row: int, column: int, value: float | str | None) -> None:
    from openpyxl.cell.cell import ILLEGAL_CHARACTERS_RE

    if value is None:
        return
    cell = sheet.cell(row, column)
    if not isinstance(value, str):
        cell.value = value
        return
    cell.value = ILLEGAL_CHARACTERS_RE.sub("", value)[:_LONGEST_TEXT]
    cell.data_type = "s"  # or a label that begins with = would be a formula
    cell.quotePrefix = value.startswith(("=", "+", "-", "@"))


def _without_moment(content: bytes) -> bytes:
    made = io.BytesIO()
    with (
        zipfile.ZipFile(io.BytesIO(content)) as old,
        zipfile.ZipFile(made, "w", zipfile.ZIP_DEFLATED) as new,
    ):
        for name in old.namelist():
            part = old.read(name)
            if name == "docProps/core.xml":
                part = _STAMP.sub(rb"\g<1>1980-01-01T00:00:00Z\g<3>", part)
            entry = zipfile.ZipInfo(name, _MOMENT)
            entry.compress_type = zipfile.ZIP_DEFLATED
            entry.external_attr = 0o644 << 16
            new.writestr(entry, part)
    return made.getvalue()
