"""The front door: a file, or pasted cells, to a :class:`RateTable`.

bytes → text grid with addresses → layout → parts of the columns → numbers → table. Each stage is a
function of what the one before it made.
"""

from __future__ import annotations

import os
from dataclasses import dataclass
from itertools import islice
from pathlib import Path
from typing import IO, TYPE_CHECKING

from knought.chemistry.uncertainty_words import parse_meaning
from knought.errors import InputError, Problem
from knought.files import sha256_of
from knought.measurement.reading.build import built
from knought.measurement.reading.columns import assigned
from knought.measurement.reading.decimals import decimal_mark
from knought.measurement.reading.delimited import (
    DELIMITERS,
    declared_delimiter,
    delimited_rows,
    unmarked,
)
from knought.measurement.reading.encoding import decoded
from knought.measurement.reading.grid import TextGrid, packed
from knought.measurement.reading.layout import SEARCHED_ROWS, find_layout
from knought.measurement.reading.opening import (
    LARGEST_FILE,
    FileBytes,
    open_bytes,
    whole_bytes,
)
from knought.measurement.reading.values import read_values
from knought.measurement.reading.workbook import workbook_grid
from knought.measurement.table import RateTable, Source

if TYPE_CHECKING:
    from knought.chemistry.numbers import DecimalMark

__all__ = ["read_rates", "read_text"]


def read_rates(
    source: str | Path | IO[str] | IO[bytes],
    *,
    sheet: str | int | None = None,
    uncertainty_means: str | None = None,
    decimal: DecimalMark | None = None,
    excess: str | None = None,
) -> RateTable:
    """Read a table of rate constants.

    Parameters
    ----------
    source
        Path of a CSV, TSV, XLSX or ODS file, or an open file.
    sheet
        Sheet of a workbook, by name or by number from 1; needed where more than one holds a table.
    uncertainty_means
        What ± means, where the header does not say it: ``"standard deviation"``, ``"2 s"``,
        ``"95 %"``, ...
    decimal
        Decimal mark of a text file, where its numbers don't show it.
    excess
        Species by whose concentration an observed rate constant is divided.

    Returns
    -------
    RateTable

    Raises
    ------
    InputError
        If anything cannot be read in one way only; what, where, and what to do about it.
    """
    says = _Says(uncertainty_means, decimal, excess)
    if isinstance(source, str | os.PathLike):
        return _file(open_bytes(source), sheet, says)
    name = Path(str(getattr(source, "name", "file"))).name or "file"
    data = source.read(LARGEST_FILE + 1)
    if isinstance(data, str):
        return _pasted(data, name, says)
    return _file(whole_bytes(data, name), sheet, says)


def read_text(
    text: str,
    name: str = "pasted cells",
    *,
    uncertainty_means: str | None = None,
    decimal: DecimalMark | None = None,
    excess: str | None = None,
) -> RateTable:
    """Read a table from text, such as cells copied from a spreadsheet.

    Parameters
    ----------
    text
        Rows of cells between tabs, semicolons or commas.
    name
        What to call it in messages.
    uncertainty_means, decimal, excess
        As for :func:`read_rates`.

    Returns
    -------
    RateTable

    Raises
    ------
    InputError
        If anything cannot be read in one way only.
    """
    return _pasted(text, name, _Says(uncertainty_means, decimal, excess))


@dataclass(frozen=True)
class _Says:
    """What the user says beside the file."""

    uncertainty_means: str | None
    decimal: DecimalMark | None
    excess: str | None


def _file(file: FileBytes, sheet: str | int | None, says: _Says) -> RateTable:
    """Read the bytes of a file, by what they are and not by what the name says.

    Raises
    ------
    InputError
        If they cannot be read.
    """
    if file.data.startswith(b"PK"):
        grid = workbook_grid(file.data, file.name, sheet)
    elif sheet is not None:
        raise InputError(
            Problem("is no workbook and has no sheets", "leave the sheet out", file=file.name)
        )
    else:
        text, encoding = decoded(file.data, file.name)
        grid = _text_grid(text, file.name, encoding)
    return _table(grid, Source(file.name, file.sha256, grid.sheet), says)


def _pasted(text: str, name: str, says: _Says) -> RateTable:
    data = text.encode("utf-8", "surrogatepass")
    whole_bytes(data, name)
    plain, _ = decoded(data, name)
    grid = _text_grid(plain, name, "text")
    return _table(grid, Source(name, sha256_of(data), None), says)


def _table(grid: TextGrid, source: Source, says: _Says) -> RateTable:
    meaning = None if says.uncertainty_means is None else parse_meaning(says.uncertainty_means)
    layout = find_layout(grid)
    if layout is None:
        raise InputError(_no_header(grid))
    parts = assigned(layout, grid, says.excess)
    mark = says.decimal or decimal_mark(grid, layout, parts)
    values = read_values(grid, layout, parts, mark, stated=says.decimal is not None)
    return built(grid, layout, parts, values, source, meaning)


def _text_grid(text: str, name: str, encoding: str) -> TextGrid:
    """Take a text apart with the one delimiter that gives it a header.

    Raises
    ------
    InputError
        If two do, or the text cannot be taken apart.
    """
    declared = declared_delimiter(text)
    body = unmarked(text)
    possible = [declared] if declared else [mark for mark in DELIMITERS if mark in body]
    understood = {mark: _headers(body, mark, name) for mark in possible}
    # Two headers rightly written outweigh any number of cells that only begin as one.
    fitting = [mark for mark in possible if understood[mark] >= 2] or [
        mark for mark in possible if understood[mark] >= 0
    ]
    if len(fitting) > 1:
        both = " or at each ".join(DELIMITERS[mark] for mark in fitting)
        raise InputError(
            Problem(
                f"can be taken apart at each {both}, and has headers either way",
                "save the table with tabs between its cells, or put cells that hold a delimiter "
                "into quotation marks",
                file=name,
            )
        )
    # Without a header anywhere, the first delimiter serves the message.
    mark = (fitting or possible or [","])[0]
    return TextGrid(
        name,
        "delimited",
        packed(delimited_rows(body, mark, name), name),
        delimiter=mark,
        remarks=(f"{encoding}, {DELIMITERS[mark]} between cells",),
    )


def _headers(text: str, delimiter: str, name: str) -> int:
    """Return how many headers a delimiter gives a text; -1 where it gives no header row.

    Only the first rows are taken apart.
    """
    rows = delimited_rows(text, delimiter, name)
    try:
        head = packed(islice(rows, 4 * SEARCHED_ROWS), name)
    except InputError:
        # Whoever takes the whole text apart says what is wrong with it.
        return -1
    layout = find_layout(TextGrid(name, "delimited", head, delimiter=delimiter))
    return -1 if layout is None else layout.understood


def _no_header(grid: TextGrid) -> Problem:
    head = grid.head(1)
    row, cells = head[0] if head else (None, [])
    return Problem(
        "no row holds the headers of a table of rate constants",
        "head the columns with quantity and unit, T/K and k/s^-1, with tabs, semicolons or commas "
        "between the cells",
        read=" | ".join(cells) if cells else None,
        file=grid.name,
        sheet=grid.sheet,
        row=row,
    )
