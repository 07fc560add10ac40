"""A grid of texts with their addresses: what every kind of file is turned into first.

Rows keep the number that a spreadsheet shows; rows that are blank throughout are not kept. Rows are
packed into blocks of one long text each, a tenth of the memory of lists of strings, and unpacked as
they are walked through, as often as needed.
"""

from __future__ import annotations

import re
from dataclasses import dataclass, field
from itertools import islice
from typing import TYPE_CHECKING, Literal

import numpy as np

from knought.errors import InputError, Problem

if TYPE_CHECKING:
    from collections.abc import Iterable, Iterator, Sequence

    from knought.arrays import IndexArray

__all__ = [
    "MOST_COLUMNS",
    "MOST_ROWS",
    "TYPED",
    "Block",
    "Span",
    "TextGrid",
    "column_letter",
    "packed",
    "shown",
]

#: Stands before a cell that the spreadsheet holds as a number: its mark is the point, whatever the
#: text around it uses.
TYPED = "\x02"

MOST_COLUMNS = 1000
MOST_ROWS = 2_000_000
MOST_CELLS = 50_000_000
MOST_CELL_CHARACTERS = 10_000

_ROWS_A_BLOCK = 8192
_CELL, _ROW = "\x1f", "\x1e"
_LONG_NUMBER = 13
_FLOAT = re.compile(r"-?[0-9]+(?:\.[0-9]+)?(?:[eE][+-]?[0-9]{1,3})?")


@dataclass(frozen=True)
class Span:
    """A merged cell: the rows, from 1, and columns, from 0, that it covers, last ones included."""

    first_row: int
    last_row: int
    first_column: int
    last_column: int


@dataclass(frozen=True)
class Block:
    """Some rows, packed."""

    numbers: IndexArray
    text: str

    def rows(self) -> Iterator[tuple[int, list[str]]]:
        """Yield row numbers and cells."""
        lines = self.text.split(_ROW)
        for number, line in zip(self.numbers.tolist(), lines, strict=True):
            yield number, line.split(_CELL)


@dataclass(frozen=True)
class TextGrid:
    """Texts with addresses.

    Attributes
    ----------
    name
        File name without folders.
    kind
        ``"delimited"`` or ``"workbook"``.
    blocks
        The rows, packed.
    sheet
        Name of the sheet; None for text.
    delimiter
        What separates cells in a text; None for a workbook.
    merged
        Merged cells.
    remarks
        How the bytes were read, for the account.
    """

    name: str
    kind: Literal["delimited", "workbook"]
    blocks: tuple[Block, ...]
    sheet: str | None = None
    delimiter: str | None = None
    merged: tuple[Span, ...] = ()
    remarks: tuple[str, ...] = field(default=())

    def rows(self) -> Iterator[tuple[int, list[str]]]:
        """Yield row numbers and cells, blank rows left out."""
        for block in self.blocks:
            yield from block.rows()

    def head(self, rows: int) -> list[tuple[int, list[str]]]:
        """Return the first rows that are not blank."""
        return list(islice(self.rows(), rows))

    def cell(self, row: int, place: int) -> str:
        """Return the text of a cell as a reader sees it; empty where there is none."""
        for block in self.blocks:
            at = int(np.searchsorted(block.numbers, row))
            if at < len(block.numbers) and block.numbers[at] == row:
                cells = block.text.split(_ROW)[at].split(_CELL)
                return shown(cells[place]) if place < len(cells) else ""
        return ""

    def __len__(self) -> int:
        return sum(len(block.numbers) for block in self.blocks)


def packed(rows: Iterable[tuple[int, Sequence[str]]], name: str) -> tuple[Block, ...]:
    """Pack rows into blocks.

    Parameters
    ----------
    rows
        Row numbers, rising, and cells.
    name
        File name for messages.

    Raises
    ------
    InputError
        If there are more rows, columns or characters than a table can have, or a cell holds
        control characters.
    """
    blocks: list[Block] = []
    numbers: list[int] = []
    lines: list[str] = []
    counted = cells_seen = 0
    for number, cells in rows:
        if not any(cells) or not any(cell.strip() for cell in cells):
            continue
        _check_row(number, cells, name)
        numbers.append(number)
        lines.append(_CELL.join(cells))
        counted += 1
        cells_seen += len(cells)
        if counted > MOST_ROWS or cells_seen > MOST_CELLS:
            raise InputError(
                Problem(
                    f"has more than {MOST_ROWS} rows" if counted > MOST_ROWS
                    else f"has more than {MOST_CELLS} cells",
                    "give a table of rate constants, not of raw data",
                    file=name,
                )
            )  # fmt: skip
        if len(numbers) == _ROWS_A_BLOCK:
            blocks.append(_block(numbers, lines))
            numbers, lines = [], []
    if numbers:
        blocks.append(_block(numbers, lines))
    return tuple(blocks)


def _block(numbers: list[int], lines: list[str]) -> Block:
    return Block(np.array(numbers, dtype=np.intp), _ROW.join(lines))


def _check_row(number: int, cells: Sequence[str], name: str) -> None:
    if len(cells) > MOST_COLUMNS and any(cells[MOST_COLUMNS:]):
        raise InputError(
            Problem(
                f"has cells beyond column {MOST_COLUMNS}",
                "give a table with a few columns; delete what stands far to the right",
                file=name,
                row=number,
            )
        )
    line = "".join(cells)
    if len(line) > MOST_CELL_CHARACTERS and max(map(len, cells)) > MOST_CELL_CHARACTERS:
        raise InputError(
            Problem(
                f"has a cell of more than {MOST_CELL_CHARACTERS} characters",
                "check quotation marks and delimiters",
                file=name,
                row=number,
            )
        )
    if _CELL in line or _ROW in line:
        raise InputError(
            Problem("holds control characters", "save the table again", file=name, row=number)
        )


def column_letter(column: int) -> str:
    """Return the letter of a column, counted from 0, as a spreadsheet shows it."""
    letters = ""
    column += 1
    while column:
        column, rest = divmod(column - 1, 26)
        letters = chr(65 + rest) + letters
    return letters


def shown(cell: str) -> str:
    """Return a cell as a reader would see it."""
    if cell.startswith(TYPED) and len(cell) > _LONG_NUMBER:
        # Programs store 17 digits: 2.4099999999999999E-3 is shown as 0.00241.
        return repr(float(cell[1:])) if _FLOAT.fullmatch(cell[1:]) else cell[1:].strip()
    return cell.removeprefix(TYPED).strip()
