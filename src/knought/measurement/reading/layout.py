"""Where in a grid the table is: its header (one line, two lines, a units row) and its columns.

A header is the first row, or the first two rows together, of which at least two cells can be read
as headers of a rate table. What stands above is a title or a note, and is left out; the account
says so.
"""

from __future__ import annotations

from dataclasses import dataclass, field, replace
from typing import TYPE_CHECKING

from knought.chemistry.headers import TEXT_ROLES, Header, parse_header
from knought.chemistry.numbers import Number, read_number
from knought.errors import InputError, Problem
from knought.measurement.reading.grid import TYPED, TextGrid, column_letter, shown
from knought.measurement.reading.two_lines import DASHES, is_unit, joined, unit_text

if TYPE_CHECKING:
    from collections.abc import Sequence

__all__ = ["SEARCHED_ROWS", "Column", "Layout", "find_layout", "is_header_row", "is_number"]

#: The header stands within this many rows that are not blank.
SEARCHED_ROWS = 60

#: This many cells of a row must be headers.
_FEWEST_HEADERS = 2

_WITHOUT_UNIT = TEXT_ROLES | {"n"}

_Row = tuple[int, list[str]]


@dataclass(frozen=True)
class Column:
    """A column of the table.

    Attributes
    ----------
    place
        From 0.
    title
        Its header as it stands there.
    header
        What was understood; None where the header is none of ours.
    """

    place: int
    title: str
    header: Header | None

    @property
    def address(self) -> str:
        """Return how messages name the column: its header, or its letter where it has none."""
        return self.title or column_letter(self.place)


@dataclass(frozen=True)
class Layout:
    """Where the table is.

    Attributes
    ----------
    columns
        Every column with a header.
    last_header_row
        Row number after which the runs begin.
    width
        Number of cells that the header row has.
    problems
        Headers that name a quantity of ours and cannot be read.
    remarks
        What was left out above, for the account.
    """

    columns: tuple[Column, ...]
    last_header_row: int
    width: int
    problems: tuple[Problem, ...] = ()
    remarks: tuple[str, ...] = field(default=())

    @property
    def understood(self) -> int:
        """Number of columns whose header is one of ours, rightly written."""
        return sum(column.header is not None for column in self.columns)


@dataclass(frozen=True)
class _Candidate:
    """Titles read as headers."""

    titles: tuple[str, ...]
    headers: tuple[Header | None, ...]
    problems: tuple[Problem, ...]
    numbers: int

    @property
    def understood(self) -> int:
        """Number of titles that name something of ours, rightly or wrongly."""
        return sum(header is not None for header in self.headers) + len(self.problems)

    @property
    def with_unit(self) -> int:
        """Number of titles with a unit."""
        return sum(header is not None and header.unit is not None for header in self.headers)

    @property
    def is_header(self) -> bool:
        """Whether enough is understood: not only words such as "note", and no row of settings."""
        quantities = len(self.problems) + sum(
            header is not None and header.role not in TEXT_ROLES for header in self.headers
        )
        enough = self.understood >= max(_FEWEST_HEADERS, self.numbers + 1)
        return enough and quantities > 0


def find_layout(grid: TextGrid) -> Layout | None:
    """Find the table in a grid.

    Parameters
    ----------
    grid
        The texts.

    Returns
    -------
    Layout or None
        None where no row is a header.
    """
    head = grid.head(SEARCHED_ROWS)
    for place, row in enumerate(head):
        one = _read(grid, row[0], _titles(row[1]))
        following = head[place + 1] if place + 1 < len(head) else None
        two = _with_second_line(grid, one, row, following)
        if two is not None:
            return _finished(grid, two, head, place, place + 1)
        if one.is_header:
            return _with_units_row(grid, one, head, place)
    return None


def is_header_row(grid: TextGrid, row: int, cells: Sequence[str]) -> bool:
    """Whether a row reads as the header of another table."""
    if sum(not cell.isspace() for cell in cells if cell) < _FEWEST_HEADERS:
        return False
    return _read(grid, row, _titles(cells)).is_header


def _titles(cells: Sequence[str]) -> list[str]:
    """Return the cells of a row as titles; a mark of a comment before the first one is dropped."""
    titles = [" ".join(shown(cell).split()) for cell in cells]
    if titles and titles[0].startswith("#") and len(titles[0]) > 1:
        titles[0] = titles[0].lstrip("# ")
    return titles


def _read(grid: TextGrid, row: int, titles: Sequence[str]) -> _Candidate:
    headers: list[Header | None] = []
    problems: list[Problem] = []
    for place, title in enumerate(titles):
        try:
            headers.append(parse_header(title))
        except InputError as error:
            headers.append(None)
            problems += [
                replace(
                    problem, file=grid.name, sheet=grid.sheet, row=row, column=column_letter(place)
                )
                for problem in error.problems
            ]
    numbers = sum(is_number(title) for title in titles)
    return _Candidate(tuple(titles), tuple(headers), tuple(problems), numbers)


def _with_second_line(
    grid: TextGrid, one: _Candidate, row: _Row, following: _Row | None
) -> _Candidate | None:
    """Return both rows read as a header of two lines, where they are one; None where not."""
    if following is None or _holds_numbers(following[1]) or not any(one.titles):
        return None
    if not one.is_header and _holds_numbers(row[1]):
        return None
    lower = _titles(following[1])
    if all(is_unit(title) for title in lower if title):
        # A row of nothing but units is taken in with the single line above it.
        return None if one.is_header else _joined_header(grid, one, row, lower)
    alone = _read(grid, following[0], lower)
    if one.is_header and alone.understood == 0:
        # A note or a first run without numbers beneath a good header.
        return None
    two = _joined_header(grid, one, row, lower)
    if two is None:
        return None
    if alone.is_header and not one.is_header and two.understood <= alone.understood:
        # The lower line is a header by itself: what stands above is a title.
        return None
    better = (two.understood, two.with_unit) > (one.understood, one.with_unit)
    return two if better else None


def _joined_header(
    grid: TextGrid, one: _Candidate, row: _Row, lower: Sequence[str]
) -> _Candidate | None:
    upper = _spread(grid, row[0], one.titles, lower)
    two = _read(grid, row[0], joined(upper, lower))
    return two if two.is_header else None


def _spread(grid: TextGrid, row: int, upper: Sequence[str], lower: Sequence[str]) -> list[str]:
    """Let a title that is merged, or stands left of blanks, reach over the columns under it."""
    titles = [*upper, *[""] * (len(lower) - len(upper))]
    for place, title in enumerate(titles):
        if title or place >= len(lower) or not lower[place] or not place:
            continue
        spans = [span for span in grid.merged if span.first_row <= row <= span.last_row]
        covered = any(s.first_column < place <= s.last_column for s in spans)
        if covered or grid.kind == "delimited":
            titles[place] = titles[place - 1]
    return titles


def _holds_numbers(cells: Sequence[str]) -> bool:
    return any(is_number(cell) for cell in cells)


def is_number(text: str) -> bool:
    """Whether a cell holds a number, whichever decimal mark it has."""
    if text.startswith(TYPED):
        return True
    return isinstance(read_number(text, "."), Number) or isinstance(read_number(text, ","), Number)


def _with_units_row(grid: TextGrid, one: _Candidate, head: list[_Row], place: int) -> Layout:
    """Take a row of units beneath a header into it."""
    following = head[place + 1] if place + 1 < len(head) else None
    if following is None or _holds_numbers(following[1]):
        return _finished(grid, one, head, place, place)
    units = _titles(following[1])
    if not all(is_unit(text) for text in units if text) or not any(units):
        return _finished(grid, one, head, place, place)
    titles = list(one.titles)
    for column, text in enumerate(units[: len(titles)]):
        header = one.headers[column]
        wanting = header is None or (header.unit is None and header.role not in _WITHOUT_UNIT)
        if text and titles[column] and wanting and text not in DASHES:
            titles[column] = f"{titles[column]}/({unit_text(text)})"
    return _finished(grid, _read(grid, head[place][0], titles), head, place, place + 1)


def _finished(
    grid: TextGrid, candidate: _Candidate, head: list[_Row], first: int, last: int
) -> Layout:
    pairs = zip(candidate.titles, candidate.headers, strict=True)
    columns = tuple(
        Column(place, title, header) for place, (title, header) in enumerate(pairs) if title
    )
    remarks = [_left_out(row) for row in head[:first]]
    if last > first:
        remarks.append(f"rows {head[first][0]} and {head[last][0]} read as one header")
    wide = max(len(row[1]) for row in head[first : last + 1])
    return Layout(columns, head[last][0], wide, candidate.problems, tuple(remarks))


def _left_out(row: _Row) -> str:
    text = " ".join(title for title in _titles(row[1]) if title)
    short = text if len(text) <= 60 else text[:60] + "…"
    return f"row {row[0]} left out (above the header): {short}"
