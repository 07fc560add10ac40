"""First stage for spreadsheets: a sheet of an XLSX file becomes a grid of texts."""

from __future__ import annotations

import io
import zipfile
from typing import TYPE_CHECKING

from knought.errors import InputError, Problem
from knought.measurement.reading.grid import Grid

if TYPE_CHECKING:
    from openpyxl.worksheet._read_only import ReadOnlyWorksheet

__all__ = ["xlsx_grid"]

#: Unpacked size, packing ratio, and extent that no table of rate constants has.
_LARGEST_UNPACKED, _LARGEST_RATIO = 500_000_000, 200
_MOST_COLUMNS, _MOST_ROWS = 500, 1_100_000


def xlsx_grid(data: bytes, name: str, sheet: str | int | None = None) -> Grid:
    """Read a sheet of an XLSX file.

    Parameters
    ----------
    data
        The bytes of the file.
    name
        File name, for messages.
    sheet
        Name, or number from 1; the first sheet if not given.

    Raises
    ------
    InputError
        If it is no XLSX file, is a bomb, has no such sheet, or the sheet is empty.
    """
    from openpyxl import load_workbook
    from openpyxl.utils.exceptions import InvalidFileException

    _refuse_bombs(data, name)
    try:
        book = load_workbook(io.BytesIO(data), read_only=True, data_only=True)
    except (InvalidFileException, KeyError, ValueError, zipfile.BadZipFile, OSError) as error:
        raise _not_xlsx(name) from error
    try:
        return _grid(_chosen(book.sheetnames, book.worksheets, sheet, name), name)
    finally:
        book.close()


def _grid(page: ReadOnlyWorksheet, name: str) -> Grid:
    rows, numbers = [], []
    for number, row in enumerate(page.iter_rows(values_only=True), start=1):
        if number > _MOST_ROWS or len(row) > _MOST_COLUMNS:
            raise InputError(
                Problem(
                    f"the sheet reaches beyond row {_MOST_ROWS} or column {_MOST_COLUMNS}",
                    "delete cells far outside the table",
                    file=name,
                    sheet=page.title,
                )
            )
        texts = tuple(_text(value) for value in row)
        if any(texts):
            rows.append(texts)
            numbers.append(number)
    if not rows:
        raise InputError(Problem("the sheet is empty", "give a table", file=name, sheet=page.title))
    return Grid(tuple(rows), tuple(numbers), name, page.title)


def _text(value: object) -> str:
    """A cell as the text whose number it is: repr gives every digit of a float back."""
    if value is None:
        return ""
    if isinstance(value, bool):
        return "yes" if value else "no"
    if isinstance(value, float) and value.is_integer() and abs(value) < 1e15:
        return str(int(value))
    return repr(value) if isinstance(value, float) else str(value).strip()


def _chosen(
    names: list[str], pages: list[ReadOnlyWorksheet], sheet: str | int | None, name: str
) -> ReadOnlyWorksheet:
    if sheet is None:
        return pages[0]
    if str(sheet) in names:
        return pages[names.index(str(sheet))]
    if str(sheet).isdigit() and 1 <= int(sheet) <= len(pages):
        return pages[int(sheet) - 1]
    raise InputError(
        Problem(
            f"there is no sheet {sheet!r}", f"choose one of {', '.join(names)}", file=name
        )
    )


def _refuse_bombs(data: bytes, name: str) -> None:
    """Look at the directory of the archive before anything is unpacked."""
    try:
        with zipfile.ZipFile(io.BytesIO(data)) as archive:
            size = sum(entry.file_size for entry in archive.infolist())
    except zipfile.BadZipFile as error:
        raise _not_xlsx(name) from error
    if size > _LARGEST_UNPACKED or size > _LARGEST_RATIO * max(len(data), 100_000):
        raise InputError(
            Problem(
                f"would unpack to {size / 1e6:.0f} MB", "save only the table in a new file", file=name
            )
        )


def _not_xlsx(name: str) -> InputError:
    return InputError(Problem("is no XLSX file", "save it as XLSX or CSV", file=name))
