"""From the bytes of a workbook to the grid of the one sheet that holds a table."""

from __future__ import annotations

from itertools import islice
from typing import TYPE_CHECKING, Protocol

from knought.errors import InputError, Problem
from knought.measurement.reading.archive import Archive
from knought.measurement.reading.grid import Span, TextGrid, packed
from knought.measurement.reading.layout import SEARCHED_ROWS, find_layout
from knought.measurement.reading.merged import filled

if TYPE_CHECKING:
    from collections.abc import Iterator

__all__ = ["Sheet", "Sheets", "workbook_grid"]


class Sheet(Protocol):
    """A sheet that can be walked through."""

    name: str
    hidden: bool
    merged: tuple[Span, ...]
    remarks: tuple[str, ...]

    def rows(self) -> Iterator[tuple[int, list[str]]]:
        """Yield row numbers and cells; `merged` and `remarks` are whole once all are yielded."""
        ...


class Sheets(Protocol):
    """A workbook."""

    sheets: tuple[Sheet, ...]


def workbook_grid(data: bytes, name: str, sheet: str | int | None = None) -> TextGrid:
    """Read one sheet of a workbook.

    Parameters
    ----------
    data
        Bytes of an XLSX or ODS file.
    name
        File name for messages.
    sheet
        Name of the sheet, or its number from 1; None for the only one that holds a table.

    Returns
    -------
    TextGrid

    Raises
    ------
    InputError
        If the workbook is damaged or too large, has no such sheet, or more than one sheet holds a
        table and none was named.
    """
    archive = Archive(data, name)
    sheets = _sheets(archive)
    if not sheets:
        raise InputError(Problem("holds no sheet", "save the table again", file=name))
    chosen = _named(sheets, sheet, name) if sheet is not None else _only_table(sheets, name)
    blocks = packed(chosen.rows(), name)
    if any(span.last_row > span.first_row for span in chosen.merged):
        blocks = packed(filled(blocks, chosen.merged), name)
    remarks = list(chosen.remarks)
    if len(sheets) > 1:
        remarks.insert(0, f"sheet {chosen.name} read, of {len(sheets)} sheets")
    return TextGrid(name, "workbook", blocks, chosen.name, None, chosen.merged, tuple(remarks))


def _sheets(archive: Archive) -> tuple[Sheet, ...]:
    if "content.xml" in archive:
        from knought.measurement.reading.ods import ods_sheets

        return ods_sheets(archive)
    from knought.measurement.reading.xlsx import xlsx_sheets

    return xlsx_sheets(archive)


def _named(sheets: tuple[Sheet, ...], wanted: str | int, name: str) -> Sheet:
    for number, sheet in enumerate(sheets, start=1):
        if wanted in {sheet.name, number}:
            return sheet
    if isinstance(wanted, str) and wanted.isdecimal() and 0 < int(wanted) <= len(sheets):
        return sheets[int(wanted) - 1]
    names = ", ".join(f"{i} {sheet.name}" for i, sheet in enumerate(sheets, start=1))
    raise InputError(Problem(f"has no sheet {wanted!r}", f"the sheets are {names}", file=name))


def _only_table(sheets: tuple[Sheet, ...], name: str) -> Sheet:
    """Return the one visible sheet that holds a table; the first one where none does.

    Raises
    ------
    InputError
        If more than one does.
    """
    visible = [sheet for sheet in sheets if not sheet.hidden] or list(sheets)
    if len(visible) == 1:
        return visible[0]
    with_table = [sheet for sheet in visible if _holds_table(sheet, name)]
    if len(with_table) > 1:
        names = ", ".join(sheet.name for sheet in with_table)
        raise InputError(
            Problem(
                f"holds a table in more than one sheet: {names}",
                "say which sheet to read (sheet, --sheet)",
                file=name,
            )
        )
    return with_table[0] if with_table else visible[0]


def _holds_table(sheet: Sheet, name: str) -> bool:
    head = packed(islice(sheet.rows(), SEARCHED_ROWS), name)
    return find_layout(TextGrid(name, "workbook", head, sheet.name, None, sheet.merged)) is not None
