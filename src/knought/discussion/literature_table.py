"""A table of literature values: CSV, TSV, XLSX or ODS, one row a paper (or a condition of one).

The stages are those of a table of rate constants: bytes → text grid with addresses → headers →
numbers by the one grammar → values. Every cell that cannot be read is told with file, row and
column.

    label, year, T/K, I/(mol/L), k/(L mol^-1 s^-1), u(k)/(L mol^-1 s^-1), E_a/(kJ/mol), ± means

A row may hold several quantities; each becomes one literature value.
"""

from __future__ import annotations

import math
from dataclasses import dataclass, field
from typing import TYPE_CHECKING

from knought.chemistry.numbers import (
    Number,
    Unreadable,
    decimal_evidence,
    read_number,
)
from knought.chemistry.order_text import parse_order
from knought.discussion.literature_headers import Heading, read_heading
from knought.discussion.literature_row import Row, values_of_row
from knought.discussion.literature_spread import SpreadMeaning, parse_spread_meaning
from knought.errors import InputError, Problem
from knought.measurement.reading.delimited import (
    DELIMITERS,
    declared_delimiter,
    delimited_rows,
    unmarked,
)
from knought.measurement.reading.encoding import decoded
from knought.measurement.reading.grid import TYPED, TextGrid, column_letter, packed, shown
from knought.measurement.reading.opening import open_bytes

if TYPE_CHECKING:
    from fractions import Fraction
    from pathlib import Path

    from knought.chemistry.numbers import DecimalMark
    from knought.discussion.literature import LiteratureValue

__all__ = ["read_literature", "read_literature_text"]

#: The header stands within this many rows that are not blank.
_SEARCHED_ROWS = 30

_FEWEST_HEADINGS = 2

#: Reading stops after this many problems.
_MOST_PROBLEMS = 100


def read_literature(
    path: str | Path,
    *,
    sheet: str | int | None = None,
    uncertainty_means: str | None = None,
) -> tuple[LiteratureValue, ...]:
    """Read a table of literature values.

    Parameters
    ----------
    path
        A CSV, TSV, XLSX or ODS file.
    sheet
        Sheet of a workbook, by name or by number from 1.
    uncertainty_means
        What ± means where neither header nor row says it: ``"1 s"``, ``"2 s"``, ``"95 %"``,
        ``"half-range"``, ``"F-factor"``.

    Returns
    -------
    tuple of LiteratureValue
        In the order of rows and columns.

    Raises
    ------
    InputError
        If anything cannot be read in one way only; what, where, and what to do about it.
    """
    file = open_bytes(path)
    if file.data.startswith(b"PK"):
        from knought.measurement.reading.workbook import workbook_grid

        grid = workbook_grid(file.data, file.name, sheet)
        return _read(grid, uncertainty_means)
    if sheet is not None:
        raise InputError(
            Problem("is no workbook and has no sheets", "leave the sheet out", file=file.name)
        )
    return read_literature_text(
        decoded(file.data, file.name)[0], file.name, uncertainty_means=uncertainty_means
    )


def read_literature_text(
    text: str, name: str = "pasted cells", *, uncertainty_means: str | None = None
) -> tuple[LiteratureValue, ...]:
    """Read literature values from text, cells between tabs, semicolons or commas.

    Parameters
    ----------
    text
        The table.
    name
        What to call it in messages.
    uncertainty_means
        As for :func:`read_literature`.

    Returns
    -------
    tuple of LiteratureValue

    Raises
    ------
    InputError
        If anything cannot be read in one way only.
    """
    declared = declared_delimiter(text)
    body = unmarked(text)
    tried: list[TextGrid] = []
    for delimiter in DELIMITERS if declared is None else (declared,):
        if delimiter in body:
            blocks = packed(delimited_rows(body, delimiter, name), name)
            tried.append(TextGrid(name, "delimited", blocks, delimiter=delimiter))
    with_header = [grid for grid in tried if _header_row(grid) is not None]
    if len(with_header) > 1:
        both = " or a ".join(DELIMITERS[grid.delimiter or ","] for grid in with_header)
        raise InputError(
            Problem(
                f"can be taken apart in two ways, at a {both}",
                "put cells that hold a delimiter into quotation marks",
                file=name,
            )
        )
    grid = with_header[0] if with_header else TextGrid(name, "delimited", ())
    return _read(grid, uncertainty_means)


@dataclass(frozen=True)
class _Column:
    """A column that is ours."""

    place: int
    title: str
    heading: Heading


@dataclass
class _Reading:
    """What reading a grid needs to know, and what went wrong."""

    grid: TextGrid
    columns: tuple[_Column, ...]
    decimal: DecimalMark
    means: SpreadMeaning | None
    problems: list[Problem] = field(default_factory=list)

    def problem(
        self, what: str, remedy: str, row: int, column: str | None = None, read: str | None = None
    ) -> None:
        """Remember what is wrong with a cell."""
        self.problems.append(
            Problem(what, remedy, read, self.grid.name, self.grid.sheet, row, column)
        )


def _header_row(grid: TextGrid) -> tuple[int, tuple[_Column, ...], list[Problem]] | None:
    """Return row number and columns of the first row that reads as a header; None if none does."""
    for row, cells in grid.head(_SEARCHED_ROWS):
        columns: list[_Column] = []
        problems: list[Problem] = []
        for place, cell in enumerate(cells):
            title = shown(cell)
            try:
                heading = read_heading(title)
            except InputError as error:
                first = error.problems[0]
                where = column_letter(place)
                problems.append(
                    Problem(first.what, first.remedy, title, grid.name, grid.sheet, row, where)
                )
                continue
            if heading is not None:
                columns.append(_Column(place, title, heading))
        quantities = [each for each in columns if each.heading.kind == "value"]
        if len(columns) + len(problems) >= _FEWEST_HEADINGS and (quantities or problems):
            return row, tuple(columns), problems
    return None


def _read(grid: TextGrid, uncertainty_means: str | None) -> tuple[LiteratureValue, ...]:
    found = _header_row(grid)
    if found is None:
        raise InputError(
            Problem(
                "no row holds the headers of a table of literature values",
                "head the columns label, year, T/K, I/(mol/L), k/(L mol^-1 s^-1) or E_a/(kJ/mol), "
                "u(k)/(L mol^-1 s^-1), with tabs, semicolons or commas between the cells",
                file=grid.name,
                sheet=grid.sheet,
            )
        )
    header_row, columns, problems = found
    means = None if uncertainty_means is None else parse_spread_meaning(uncertainty_means)
    reading = _Reading(grid, columns, ".", means, problems)
    _refuse_doubles(reading, header_row)
    reading.decimal = _decimal_mark(reading, header_row)
    values: list[LiteratureValue] = []
    for row, cells in grid.rows():
        if row > header_row and not (cells and cells[0].lstrip().startswith("#")):
            values += _row(reading, row, cells)
        if len(reading.problems) >= _MOST_PROBLEMS:
            break
    if reading.problems:
        raise InputError(reading.problems)
    if not values:
        raise InputError(
            Problem("there are no values beneath the header", "give one row a paper",
                    file=grid.name, sheet=grid.sheet, row=header_row)
        )  # fmt: skip
    return tuple(values)


def _refuse_doubles(reading: _Reading, header_row: int) -> None:
    seen: dict[tuple[str, str], str] = {}
    for column in reading.columns:
        key = (column.heading.kind, column.heading.name)
        if key in seen:
            reading.problem(
                f"two columns hold the same, {seen[key]} and {column.title}",
                "keep one of them",
                header_row,
                column.title,
            )
        seen.setdefault(key, column.title)


def _decimal_mark(reading: _Reading, header_row: int) -> DecimalMark:
    """Return the one decimal mark that the numbers show."""
    shows: dict[str, tuple[int, str, str]] = {}
    for row, cells in reading.grid.rows():
        if row <= header_row:
            continue
        for column in reading.columns:
            text = cells[column.place] if column.place < len(cells) else ""
            if column.heading.kind == "words" or text.startswith(TYPED):
                continue
            evidence = decimal_evidence(text)
            if evidence:
                shows.setdefault(evidence, (row, column.title, text))
    if "," in shows and "." in shows:
        row, title, text = shows[","]
        reading.problem(
            f"has a decimal comma, and row {shows['.'][0]} has a decimal point",
            "use one decimal mark in the whole file",
            row,
            title,
            text,
        )
    if "," in shows:
        return ","
    if "?," in shows and "." not in shows:
        row, title, text = shows["?,"]
        reading.problem(
            "has a comma that may be a decimal mark or group digits in thousands",
            "write the numbers with a decimal point",
            row,
            title,
            text,
        )
    return "."


def _row(reading: _Reading, row: int, cells: list[str]) -> list[LiteratureValue]:
    """Read one row; what is wrong with it is remembered."""
    before = len(reading.problems)
    words: dict[str, str] = {}
    numbers: dict[tuple[str, str], tuple[Heading, Number]] = {}
    for column in reading.columns:
        text = cells[column.place] if column.place < len(cells) else ""
        heading = column.heading
        if heading.kind == "words":
            words[heading.name] = shown(text)
            continue
        number = _number(reading, row, column, text)
        if number is not None:
            numbers[heading.kind, heading.name] = (heading, number)
    if len(reading.problems) > before:
        return []
    made = Row(
        place=f"{reading.grid.name}, row {row}",
        label=words.get("label") or f"row {row}",
        words=words,
        numbers=numbers,
        means=_means(reading, row, words),
        order=_order(reading, row, words),
        year=_year(reading, row, words),
    )
    if len(reading.problems) > before:
        return []
    try:
        return values_of_row(made)
    except InputError as error:
        for problem in error.problems:
            reading.problem(problem.what, problem.remedy, row, problem.column, problem.read)
        return []


def _number(reading: _Reading, row: int, column: _Column, text: str) -> Number | None:
    typed = text.startswith(TYPED)
    plain = shown(text)
    read = read_number(plain, "." if typed else reading.decimal)
    if isinstance(read, Unreadable):
        reading.problem(read.what, read.remedy, row, column.title, plain)
        return None
    return read


def _means(reading: _Reading, row: int, words: dict[str, str]) -> SpreadMeaning | None:
    said = words.get("means", "")
    if not said:
        return reading.means
    try:
        return parse_spread_meaning(said)
    except InputError as error:
        first = error.problems[0]
        reading.problem(first.what, first.remedy, row, "± means", said)
        return None


def _order(reading: _Reading, row: int, words: dict[str, str]) -> Fraction | None:
    said = words.get("order", "")
    if not said:
        return None
    try:
        return parse_order(said)
    except InputError as error:
        first = error.problems[0]
        reading.problem(first.what, first.remedy, row, "order", said)
        return None


def _year(reading: _Reading, row: int, words: dict[str, str]) -> int | None:
    said = words.get("year", "")
    if not said:
        return None
    number = read_number(said)
    if isinstance(number, Number) and number.value == math.floor(number.value):
        year = int(number.value)
        if 1600 <= year <= 2200:
            return year
    reading.problem("is no year", "write it with four digits, 1931", row, "year", said)
    return None
