"""From cells to numbers and words, row by row, with every cell that cannot be read told."""

from __future__ import annotations

import re
from array import array
from dataclasses import dataclass, field
from typing import TYPE_CHECKING

import numpy as np

from knought.errors import InputError, Problem
from knought.measurement.labels import unguarded
from knought.measurement.reading.account import AccountLine
from knought.measurement.reading.grid import TextGrid, column_letter, shown
from knought.measurement.reading.layout import is_header_row, is_number
from knought.measurement.reading.number_column import GrowingColumn

if TYPE_CHECKING:
    from collections.abc import Mapping

    from knought.arrays import IndexArray
    from knought.chemistry.numbers import DecimalMark
    from knought.measurement.reading.columns import Parts
    from knought.measurement.reading.layout import Column, Layout
    from knought.measurement.reading.number_column import NumberColumn

__all__ = ["Values", "read_values"]

#: Reading stops after this many problems.
_MOST_PROBLEMS = 100

#: Rows left out that the account lists one by one.
_MOST_REMARKS = 50

#: A cell that may be meant as a number: it holds a digit, or is what a spreadsheet made of one.
_MEANT_AS_NUMBER = re.compile(r"[0-9]|^\s*(?:=|#[A-Z]|TRUE$|FALSE$)").search

#: Errors of a spreadsheet are no comments, though they begin with the same sign.
_ERROR = re.compile(r"#(?:REF|DIV/0|N/A|VALUE|NAME|NUM|NULL|SPILL|CALC)[!?]?")

_YES = frozenset({"yes", "y", "true", "1", "x", ""})
_NO = frozenset({"no", "n", "false", "0"})


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
    broken
        Whether the row of the run has more cells than the header.
    unreadable
        Places of the runs whose cell could not be read, by column.
    problems
        These rows and cells.
    remarks
        Rows that are no runs.
    """

    rows: IndexArray
    numbers: Mapping[int, NumberColumn]
    words: Mapping[str, list[str]]
    used: list[bool]
    broken: list[bool]
    unreadable: Mapping[int, list[int]]
    problems: tuple[Problem, ...]
    remarks: tuple[AccountLine, ...] = field(default=())


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
        If there are no runs beneath the header.
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
            GrowingColumn(column, decimal, stated=stated, with_steps=column.place in several)
            for column in parts.numeric
        ]
        self._words: dict[str, list[str]] = {role: [] for role in parts.words}
        self._keys = [column.place for column in parts.numeric]
        self._rows = array("q")
        self._used: list[bool] = []
        self._broken: list[bool] = []
        self._unreadable: dict[int, list[int]] = {}
        self._problems: list[Problem] = []
        self._remarks: list[AccountLine] = []
        self._labels_with_hash: bool | None = None
        titled = {column.place for column in layout.columns}
        self._titled = max(titled, default=-1) + 1
        self._untitled = [place for place in range(self._titled) if place not in titled]
        self._beside: dict[int, tuple[int, str]] = {}

    def read(self) -> Values:
        """Walk through all rows.

        Raises
        ------
        InputError
            If there are no runs.
        """
        for row, cells in self._grid.rows():
            if row <= self._layout.last_header_row:
                continue
            if self._is_run(row, cells):
                self._take(row, cells)
            if len(self._problems) >= _MOST_PROBLEMS:
                break
        if not self._rows and self._problems:
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
            self._broken,
            self._unreadable,
            tuple(self._problems),
            (*self._account_of_beside(), *self._remarks),
        )

    def _is_run(self, row: int, cells: list[str]) -> bool:
        """Whether a row is a run; notes and comments are left out and remembered."""
        if cells[0][:1] in {"#", " "} and self._is_comment(cells[0].strip()):
            self._leave_out(row, cells, "a comment")
            return False
        count = len(cells)
        for place in self._keys:
            if place < count and _MEANT_AS_NUMBER(cells[place]):
                break
        else:
            place = -1
        if place < 0 or cells[place].lstrip()[:1].isalpha():
            if is_header_row(self._grid, row, cells):
                self._second_table(row, cells)
                return False
            if place < 0:
                self._leave_out(row, cells, "no numbers")
                return False
        if cells.count("") >= count - 1 and self._is_note(cells):
            self._leave_out(row, cells, "a single cell")
            return False
        return True

    @staticmethod
    def _is_note(cells: list[str]) -> bool:
        """Whether a row has one cell alone, and that cell holds no number."""
        filled = [cell for cell in cells if cell.strip()]
        return len(filled) == 1 and not is_number(filled[0])

    def _is_comment(self, first: str) -> bool:
        """Whether a row that begins so is a comment; labels such as #1 in the first run are not."""
        if not first.startswith("#") or len(first) == 1 or _ERROR.fullmatch(first):
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
                self._unreadable.setdefault(place, []).append(len(self._rows) - 1)
        for role, column_of_words in self._parts.words.items():
            place = column_of_words.place
            self._words[role].append(unguarded(shown(cells[place])) if place < count else "")
        told = len(self._problems)
        if self._untitled or count > self._titled:
            self._look_beside(row, cells)
        self._broken.append(len(self._problems) > told)

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

    def _look_beside(self, row: int, cells: list[str]) -> None:
        """Remember cells without a header; in a text none may stand beyond the last header."""
        beyond = [cell for cell in cells[self._layout.width :] if cell.strip()]
        if beyond and self._grid.delimiter in {",", ";"}:
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

        for place in (*self._untitled, *range(self._titled, len(cells))):
            if place < len(cells) and cells[place].strip():
                self._beside.setdefault(place, (row, shown(cells[place])))

    def _account_of_beside(self) -> list[AccountLine]:
        return [
            AccountLine(
                f"column {column_letter(place)} has no header and is left out "
                f"(from row {row}: {text[:40]})"
            )
            for place, (row, text) in sorted(self._beside.items())
        ]

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
