"""The decimal mark of a file: decided once, on all its numbers, or refused with both readings."""

from __future__ import annotations

from typing import TYPE_CHECKING

from knought.chemistry.numbers import decimal_evidence
from knought.errors import InputError, Problem
from knought.measurement.reading.grid import TYPED, TextGrid, shown

if TYPE_CHECKING:
    from knought.chemistry.numbers import DecimalMark
    from knought.measurement.reading.columns import Parts
    from knought.measurement.reading.layout import Column, Layout

__all__ = ["decimal_mark"]


class _Seen:
    """The first cell that shows each thing."""

    def __init__(self) -> None:
        self.first: dict[str, tuple[int, Column, str]] = {}
        self._known: dict[str, str] = {}

    def look(self, row: int, column: Column, text: str) -> None:
        """Note what a cell shows."""
        evidence = self._known.get(text)
        if evidence is None:
            evidence = decimal_evidence(text)
            if len(self._known) < 10_000:
                self._known[text] = evidence
        if evidence and evidence not in self.first:
            self.first[evidence] = (row, column, text)


def decimal_mark(grid: TextGrid, layout: Layout, parts: Parts) -> DecimalMark:
    """Decide the decimal mark of the numbers of a table.

    Parameters
    ----------
    grid, layout, parts
        The texts, where the table begins, and which columns hold numbers.

    Raises
    ------
    InputError
        If both marks are used, or all that is there can be read with either.
    """
    if grid.delimiter != ";" and not any("," in block.text for block in grid.blocks):
        # A point before three digits is doubtful only where commas are in use.
        return "."
    seen = _look(grid, layout, parts)
    point, comma = seen.get("."), seen.get(",")
    if point is not None and comma is not None:
        raise InputError(_mixed(grid, comma, point))
    if comma is not None:
        return ","
    if point is not None:
        return "."
    grouped = seen.get("?,")
    if grouped is not None:
        raise InputError(_either(grid, grouped))
    grouped = seen.get("?.")
    if grouped is not None and grid.delimiter == ";":
        raise InputError(_either(grid, grouped))
    return "."


def _look(grid: TextGrid, layout: Layout, parts: Parts) -> dict[str, tuple[int, Column, str]]:
    seen = _Seen()
    columns = parts.numeric
    for row, cells in grid.rows():
        if row <= layout.last_header_row:
            continue
        for column in columns:
            if column.place >= len(cells):
                continue
            text = cells[column.place]
            if ("," in text or "." in text) and not text.startswith(TYPED):
                # Once a point is proven, only commas can teach more.
                if "." in seen.first and "," not in text:
                    continue
                seen.look(row, column, text)
    return seen.first


def _at(grid: TextGrid, cell: tuple[int, Column, str], what: str, remedy: str) -> Problem:
    row, column, text = cell
    return Problem(
        what,
        remedy,
        read=shown(text),
        file=grid.name,
        sheet=grid.sheet,
        row=row,
        column=column.address,
    )


def _mixed(
    grid: TextGrid, comma: tuple[int, Column, str], point: tuple[int, Column, str]
) -> Problem:
    return _at(
        grid,
        comma,
        f"has a decimal comma, and row {point[0]}, column {point[1].address}, has a decimal point "
        f"({shown(point[2])})",
        "use one decimal mark in the whole file",
    )


def _either(grid: TextGrid, cell: tuple[int, Column, str]) -> Problem:
    text = shown(cell[2])
    mark = "," if "," in text else "."
    broken, whole = text.replace(mark, "."), text.replace(mark, "")
    return _at(
        grid,
        cell,
        f"can be read as {broken} or as {whole}, and no other number shows which decimal mark the "
        "file uses",
        'say which one it is: decimal="." or decimal="," (--decimal)',
    )
