"""From cells to numbers and words, row by row, with every cell that cannot be read told."""

from __future__ import annotations

import re
from array import array
from dataclasses import dataclass, field
from typing import TYPE_CHECKING

import numpy as np

from knought.chemistry.numbers import Number, Unreadable, last_step, read_number
from knought.errors import InputError, Problem
from knought.measurement.labels import unguarded
from knought.measurement.reading.account import AccountLine
from knought.measurement.reading.grid import TYPED, TextGrid, shown
from knought.measurement.reading.layout import is_header_row

if TYPE_CHECKING:
    from collections.abc import Mapping

    from knought.arrays import FloatArray, IndexArray
    from knought.chemistry.numbers import DecimalMark
    from knought.measurement.reading.columns import Parts
    from knought.measurement.reading.layout import Column, Layout

__all__ = ["NumberColumn", "Values", "read_values"]

#: Reading stops after this many problems.
_MOST_PROBLEMS = 100

_REMEMBERED_TEXTS = 20_000

#: Rows left out that the account lists one by one.
_MOST_REMARKS = 50

_HAS_DIGIT = re.compile("[0-9]").search

_YES = frozenset({"yes", "y", "true", "1", "x", ""})
_NO = frozenset({"no", "n", "false", "0"})


@dataclass(frozen=True, eq=False)
class NumberColumn:
    """A column of numbers as they stand in the file.

    Attributes
    ----------
    column
        The column.
    values : (n,) ndarray
        nan where the cell is blank.
    inner : (n,) ndarray or None
        Uncertainty that stands in the same cell; None where no cell has one.
    sign
        How that is written.
    first
        Text of the first cell that is not blank.
    steps : (n,) ndarray
        What one step of the last digit of each number is; empty where nobody asks for it.
    """

    column: Column
    values: FloatArray
    inner: FloatArray | None
    sign: str
    first: str
    steps: FloatArray = field(default_factory=lambda: np.empty(0))


@dataclass(frozen=True, eq=False)
class Values:
    """The runs as they stand in the file.

    Attributes
    ----------
    rows : (n,) ndarray of int
        Row numbers.
    numbers
        Number columns by place.
    words
        Words by role.
    used
        Whether each run counts.
    remarks
        Rows that are no runs.
    """

    rows: IndexArray
    numbers: Mapping[int, NumberColumn]
    words: Mapping[str, list[str]]
    used: list[bool]
    remarks: tuple[AccountLine, ...] = field(default=())


class _Cells:
    """One column of numbers while it grows."""

    def __init__(
        self, column: Column, decimal: DecimalMark, *, stated: bool, with_steps: bool
    ) -> None:
        self.column, self._decimal, self._stated = column, decimal, stated
        self._steps = array("d") if with_steps else None
        self.values, self.inner = array("d"), array("d")
        self.first, self.sign = "", ""
        self._known: dict[str, float] = {}
        header = column.header
        self._percent = header is not None and header.unit is not None and header.unit.text == "%"

    def take(self, text: str) -> Unreadable | None:
        """Read a cell; return why it cannot be read."""
        if self._steps is not None:
            typed = text.startswith(TYPED)
            self._steps.append(last_step(text[typed:], "." if typed else self._decimal))
        known = self._known.get(text)
        if known is not None:
            self.values.append(known)
            self.inner.append(np.nan)
            return None
        if text.startswith(TYPED):
            read = read_number(text[1:], ".")
        else:
            read = read_number(text, self._decimal, stated=self._stated)
        if isinstance(read, Unreadable):
            self._append(np.nan, np.nan)
            return read
        if read is None:
            self._append(np.nan, np.nan)
            return None
        return self._keep(text, read)

    def _keep(self, text: str, read: Number) -> Unreadable | None:
        self.first = self.first or shown(text)
        if read.percent and not self._percent:
            self._append(np.nan, np.nan)
            return Unreadable(
                "is in percent and its column is not", "head the column with /% or give the unit"
            )
        if read.uncertainty is None:
            self._append(read.value, np.nan)
            if len(self._known) < _REMEMBERED_TEXTS:
                self._known[text] = read.value
            return None
        if self.sign not in {"", read.sign}:
            self._append(np.nan, np.nan)
            return Unreadable(
                "writes its uncertainty in another way than the cells above",
                "write all of them as 2.41(5)e-3, or all of them as 2.41e-3 ± 0.05e-3",
            )
        self.sign = read.sign
        size = abs(read.value) if read.relative else 1.0
        self._append(read.value, read.uncertainty * size)
        return None

    def _append(self, value: float, inner: float) -> None:
        self.values.append(value)
        self.inner.append(inner)

    def made(self) -> NumberColumn:
        """Return the column."""
        inner = np.array(self.inner) if self.sign else None
        steps = np.empty(0) if self._steps is None else np.array(self._steps)
        return NumberColumn(self.column, np.array(self.values), inner, self.sign, self.first, steps)


def read_values(
    grid: TextGrid, layout: Layout, parts: Parts, decimal: DecimalMark, *, stated: bool = False
) -> Values:
    """Read the rows beneath the header.

    Parameters
    ----------
    grid, layout, parts
        The texts, where the table begins, and the part of each column.
    decimal
        The decimal mark.
    stated
        Whether the user stated it.

    Raises
    ------
    InputError
        If a cell cannot be read; up to 100 are told.
    """
    return _Body(grid, layout, parts, decimal, stated=stated).read()


class _Body:
    """The walk through the rows."""

    def __init__(
        self, grid: TextGrid, layout: Layout, parts: Parts, decimal: DecimalMark, *, stated: bool
    ) -> None:
        self._grid, self._layout, self._parts = grid, layout, parts
        several = {c.place for found in parts.values.values() if len(found) > 1 for c in found}
        self._cells = [
            _Cells(column, decimal, stated=stated, with_steps=column.place in several)
            for column in parts.numeric
        ]
        self._words: dict[str, list[str]] = {role: [] for role in parts.words}
        self._keys = [c.place for role in ("T", "k") for c in parts.values.get(role, ())]
        self._rows = array("q")
        self._used: list[bool] = []
        self._problems: list[Problem] = []
        self._remarks: list[AccountLine] = []
        self._labels_with_hash: bool | None = None

    def read(self) -> Values:
        """Walk through all rows."""
        for row, cells in self._grid.rows():
            if row <= self._layout.last_header_row:
                continue
            if self._is_run(row, cells):
                self._take(row, cells)
            if len(self._problems) >= _MOST_PROBLEMS:
                break
        if self._problems:
            raise InputError(self._problems)
        if not self._rows:
            raise InputError(
                Problem(
                    "there are no runs beneath the header",
                    "give one row a run",
                    file=self._grid.name,
                    sheet=self._grid.sheet,
                    row=self._layout.last_header_row,
                )
            )
        return Values(
            np.array(self._rows, dtype=np.intp),
            {cells.column.place: cells.made() for cells in self._cells},
            self._words,
            self._used,
            tuple(self._remarks),
        )

    def _is_run(self, row: int, cells: list[str]) -> bool:
        """Whether a row is a run; notes and comments are left out and remembered."""
        if cells[0][:1] in {"#", " "} and self._is_comment(cells[0].strip()):
            self._leave_out(row, cells, "a comment")
            return False
        count = len(cells)
        for place in self._keys:
            if place < count and _HAS_DIGIT(cells[place]):
                break
        else:
            place = -1
        if place < 0 or cells[place].lstrip()[:1].isalpha():
            if is_header_row(self._grid, row, cells):
                self._second_table(row, cells)
                return False
            if place < 0:
                self._leave_out(row, cells, "neither temperature nor rate constant")
                return False
        if cells.count("") >= count - 1 and sum(1 for cell in cells if cell.strip()) == 1:
            self._leave_out(row, cells, "a single cell")
            return False
        return True

    def _is_comment(self, first: str) -> bool:
        """Whether a row that begins so is a comment; labels such as #1 in the first run are not."""
        if not first.startswith("#") or len(first) == 1:
            return False
        if self._labels_with_hash is None:
            run = self._parts.words.get("run")
            labels = run is not None and run.place == 0 and first[1:].strip().isalnum()
            self._labels_with_hash = labels and not self._rows
        return not self._labels_with_hash

    def _second_table(self, row: int, cells: list[str]) -> None:
        self._problems.append(
            Problem(
                "another table begins here",
                "give one table a sheet or file",
                read=" | ".join(shown(cell) for cell in cells if cell.strip()),
                file=self._grid.name,
                sheet=self._grid.sheet,
                row=row,
            )
        )

    def _leave_out(self, row: int, cells: list[str], why: str) -> None:
        if len(self._remarks) == _MOST_REMARKS:
            self._remarks.append(AccountLine("further rows left out are not listed"))
        if len(self._remarks) > _MOST_REMARKS:
            return
        text = " ".join(shown(cell) for cell in cells if cell.strip())
        short = text if len(text) <= 60 else text[:60] + "…"
        self._remarks.append(AccountLine(f"row {row} left out ({why}): {short}"))

    def _take(self, row: int, cells: list[str]) -> None:
        count = len(cells)
        used = self._is_used(row, cells)
        self._rows.append(row)
        self._used.append(used)
        for column in self._cells:
            place = column.column.place
            wrong = column.take(cells[place] if place < count else "")
            # What a run that is left out says where a number should be is no one's concern.
            if wrong is not None and used:
                self._tell(wrong.what, wrong.remedy, row, column.column, cells[place])
        for role, column_of_words in self._parts.words.items():
            place = column_of_words.place
            self._words[role].append(unguarded(shown(cells[place])) if place < count else "")
        if count > self._layout.width and self._grid.delimiter in {",", ";"}:
            self._check_width(row, cells)

    def _is_used(self, row: int, cells: list[str]) -> bool:
        column = self._parts.words.get("use")
        if column is None or column.place >= len(cells):
            return True
        text = shown(cells[column.place]).lower()
        if text in _NO:
            return False
        if text not in _YES:
            self._tell("is neither yes nor no", "write yes or no", row, column, text)
        return True

    def _check_width(self, row: int, cells: list[str]) -> None:
        beyond = [cell for cell in cells[self._layout.width :] if cell.strip()]
        if beyond:
            self._problems.append(
                Problem(
                    f"has {len(cells)} cells where the header has {self._layout.width}",
                    "put a cell that holds the delimiter into quotation marks; a file with decimal "
                    "commas needs semicolons or tabs between its cells",
                    read=beyond[0],
                    file=self._grid.name,
                    sheet=self._grid.sheet,
                    row=row,
                )
            )

    def _tell(self, what: str, remedy: str, row: int, column: Column, text: str) -> None:
        self._problems.append(
            Problem(
                what,
                remedy,
                read=shown(text),
                file=self._grid.name,
                sheet=self._grid.sheet,
                row=row,
                column=column.address,
            )
        )
