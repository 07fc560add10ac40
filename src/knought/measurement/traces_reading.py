"""Reading traces: one file a run, or one wide table with a column of times and a column a run.

The first column is time and says its unit, ``t/s``, ``time (min)``, ``t/ms``; cells such as
``1:30`` or ``0:01:30`` are minutes and seconds (hours, minutes and seconds) whatever the header
says. Every further column is a trace, headed by the label of its run, or by ``A`` in a file of its
own. A blank cell is a point that was not recorded.
"""

from __future__ import annotations

import re
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from knought.chemistry.numbers import DecimalMark, Number, read_number
from knought.chemistry.units import parse_unit
from knought.errors import InputError, Problem
from knought.measurement.reading.delimited import DELIMITERS, delimited_rows, unmarked
from knought.measurement.reading.encoding import decoded
from knought.measurement.reading.opening import open_bytes, whole_bytes
from knought.measurement.reading.workbook import workbook_grid
from knought.measurement.traces import Trace

if TYPE_CHECKING:
    from pathlib import Path

    from knought.measurement.reading.opening import FileBytes

__all__ = ["Cells", "read_cells", "read_trace_text", "read_traces"]

_TIME = re.compile(
    r"(?:t|time|zeit|temps)\s*(?:[/(\[]\s*(?P<unit>[^)\]]+?)\s*[)\]]?)?", re.IGNORECASE
)
_CLOCK = re.compile(r"(?:(?P<h>[0-9]+):)?(?P<m>[0-9]+):(?P<s>[0-9]+(?:[.,][0-9]*)?)")
_CLOCK_UNITS = frozenset({"mm:ss", "m:ss", "h:mm:ss", "hh:mm:ss", "min:s"})
_COMMA = re.compile(r"[+-]?[0-9]+,[0-9]+(?:[eE][+-]?[0-9]+)?")

#: Worst cells are told, not all.
_TOLD = 20


@dataclass(frozen=True)
class Cells:
    """A small table as texts.

    Attributes
    ----------
    name
        File name without folders.
    titles
        Cells of the header row.
    rows
        Row numbers and cells below it.
    decimal
        The decimal mark.
    """

    name: str
    titles: tuple[str, ...]
    rows: tuple[tuple[int, tuple[str, ...]], ...]
    decimal: DecimalMark

    def number(self, row: int, title: str, text: str) -> float:
        """Return the number in a cell; nan where it is blank.

        Raises
        ------
        InputError
            If it is no number.
        """
        if not text.strip():
            return float("nan")
        read = read_number(text, self.decimal)
        if isinstance(read, Number):
            return read.value
        raise InputError(
            Problem(
                "is no number", "check the cell", read=text, file=self.name, row=row, column=title
            )
        )


def read_cells(path: str | Path, sheet: str | int | None = None) -> Cells:
    """Read a small table: a delimited text or a workbook, with its header in the first row.

    Parameters
    ----------
    path
        The file.
    sheet
        Sheet of a workbook.

    Raises
    ------
    InputError
        If it cannot be read.
    """
    return _cells(open_bytes(path), sheet)


def _cells(file: FileBytes, sheet: str | int | None = None) -> Cells:
    if file.data.startswith(b"PK"):
        rows = list(workbook_grid(file.data, file.name, sheet).rows())
        delimiter = "\t"
    else:
        text = unmarked(decoded(file.data, file.name)[0])
        first = text.lstrip("\r\n").split("\n", 1)[0]
        delimiter = next((mark for mark in DELIMITERS if mark in first), ",")
        rows = list(delimited_rows(text, delimiter, file.name))
    filled = [
        (n, tuple(c.strip() for c in cells)) for n, cells in rows if any(map(str.strip, cells))
    ]
    if len(filled) < 2:
        raise InputError(
            Problem("holds no table", "give a header row and rows of numbers", file=file.name)
        )
    body = filled[1:]
    comma = delimiter != "," and any(_COMMA.fullmatch(c) for _, cells in body for c in cells)
    return Cells(file.name, filled[0][1], tuple(body), "," if comma else ".")


def read_traces(path: str | Path, sheet: str | int | None = None) -> tuple[Trace, ...]:
    """Read the traces of a file, times in s.

    Parameters
    ----------
    path
        CSV, TSV, XLSX or ODS.
    sheet
        Sheet of a workbook.

    Returns
    -------
    tuple of Trace
        One a column; the run is the column's title.

    Raises
    ------
    InputError
        If it cannot be read, the unit of time is missing, or times do not rise; every bad cell is
        told.
    """
    return _traces(read_cells(path, sheet))


def read_trace_text(text: str, name: str = "text") -> tuple[Trace, ...]:
    """Read traces from a text; as :func:`read_traces`.

    Raises
    ------
    InputError
        As for :func:`read_traces`.
    """
    return _traces(_cells(whole_bytes(text.encode(), name)))


def _traces(cells: Cells) -> tuple[Trace, ...]:
    clock = any(_CLOCK.fullmatch(row[0]) for _, row in cells.rows)
    factor = _time_factor(cells, clock)
    width = len(cells.titles)
    table = np.full((len(cells.rows), width), np.nan)
    problems: list[Problem] = []
    for i, (number, row) in enumerate(cells.rows):
        for j, text in enumerate(row[:width]):
            try:
                table[i, j] = (
                    _time(cells, number, text, factor)
                    if j == 0
                    else cells.number(number, cells.titles[j], text)
                )
            except InputError as error:
                problems += error.problems
        if len(problems) > _TOLD:
            break
    if problems:
        raise InputError(problems)
    found = []
    for j in range(1, width):
        kept = np.isfinite(table[:, j]) & np.isfinite(table[:, 0])
        if cells.titles[j] and kept.any():
            found.append(Trace(cells.titles[j], table[kept, 0], table[kept, j]))
    if not found:
        raise InputError(
            Problem("holds no trace", "give a column of times and one a run", file=cells.name)
        )
    return tuple(found)


def _time_factor(cells: Cells, clock: bool) -> float:
    """Return seconds in the unit of the time column.

    Raises
    ------
    InputError
        If the column is not one of times, or its unit is missing.
    """
    title = cells.titles[0]
    found = _TIME.fullmatch(title.strip())
    if not found:
        raise InputError(
            Problem(
                "the first column is not one of times",
                "head it t/s, time (min) or t/ms",
                read=title,
                file=cells.name,
            )
        )
    unit = found["unit"]
    if clock and (unit is None or unit.lower() in _CLOCK_UNITS):
        return 1.0
    if unit is None:
        raise InputError(
            Problem("the unit of time is missing", "head it t/s", read=title, file=cells.name)
        )
    return float(parse_unit(unit).factor_to(parse_unit("s")))


def _time(cells: Cells, row: int, text: str, factor: float) -> float:
    found = _CLOCK.fullmatch(text)
    if not found:
        return factor * cells.number(row, cells.titles[0], text)
    seconds = float(found["s"].replace(",", "."))
    return 3600.0 * int(found["h"] or 0) + 60.0 * int(found["m"]) + seconds
