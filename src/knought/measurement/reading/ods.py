"""ODS (OpenDocument 1.3): the sheets of a workbook as rows of texts.

Cells and rows that repeat stand in the file once, with a count; blank ones are skipped however
often they repeat, and filled ones are written out up to a limit.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from knought.errors import InputError, Problem
from knought.measurement.reading.archive import Archive, AttributesImpl, Handler, attribute
from knought.measurement.reading.cell_text import percent_text, rows_words
from knought.measurement.reading.grid import MOST_COLUMNS, TYPED, Span, column_letter

if TYPE_CHECKING:
    from collections.abc import Iterator

__all__ = ["OdsSheet", "ods_sheets"]

#: A filled row that repeats more often is no run measured again.
_MOST_REPEATS = 1000

_NUMBERS = frozenset({"float", "currency"})


@dataclass
class OdsSheet:
    """A sheet.

    Attributes
    ----------
    name
        As the program shows it.
    hidden
        Whether it is hidden; ODS keeps that in a style, which is not read.
    merged
        Merged cells, known once the rows have been walked through.
    remarks
        What a reader of the account should know, known then as well.
    """

    name: str
    archive: Archive
    hidden: bool = False
    merged: tuple[Span, ...] = ()
    remarks: tuple[str, ...] = ()

    def rows(self) -> Iterator[tuple[int, list[str]]]:
        """Yield row numbers and cells.

        Raises
        ------
        InputError
            If the sheet is damaged, or has cells far outside a table.
        """
        handler = _SheetHandler(self.name, self.archive.name)
        for _ in self.archive.steps("content.xml", handler):
            yield from handler.take()
        self.merged = tuple(handler.merged)
        if handler.hidden_rows:
            self.remarks = (
                f"{rows_words(handler.hidden_rows)} hidden in the sheet, and read all the same",
            )


def ods_sheets(archive: Archive) -> tuple[OdsSheet, ...]:
    """Return the sheets of a workbook.

    Parameters
    ----------
    archive
        The opened file.

    Raises
    ------
    InputError
        If it is damaged.
    """
    listing = _Listing()
    archive.parse("content.xml", listing)
    if not listing.names:
        raise InputError(
            Problem("holds no sheet", "save the table as ODS or XLSX", file=archive.name)
        )
    return tuple(OdsSheet(name, archive) for name in listing.names)


class _Listing(Handler):
    """Names of the sheets; tables inside other tables are none."""

    def __init__(self) -> None:
        super().__init__()
        self.names: list[str] = []
        self._in_table = 0

    def begin(self, name: str, attributes: AttributesImpl) -> None:
        if name == "table":
            if not self._in_table:
                self.names.append(attribute(attributes, "name") or "")
            self._in_table += 1

    def end(self, name: str) -> None:
        if name == "table":
            self._in_table -= 1


class _SheetHandler(Handler):
    """Rows of the sheet of one name."""

    def __init__(self, sheet: str, file: str) -> None:
        super().__init__()
        self._sheet, self._file = sheet, file
        self.merged: list[Span] = []
        self.hidden_rows: list[int] = []
        self._done: list[tuple[int, list[str]]] = []
        self._tables: list[bool] = []
        self._row = 0
        self._row_repeats = self._cell_repeats = 1
        self._cells: list[str] = []
        self._pending = 0
        self._texts: list[str] = []
        self._typed: str | None = None
        self._formula: str | None = None
        self._paragraphs = 0
        self._skipped = 0
        self._in_paragraph = False

    def take(self) -> list[tuple[int, list[str]]]:
        """Return the rows that are complete, and forget them."""
        done, self._done = self._done, []
        return done

    @property
    def _here(self) -> bool:
        return self._tables == [True]

    def begin(self, name: str, attributes: AttributesImpl) -> None:
        if name == "table":
            wanted = not self._tables and attribute(attributes, "name") == self._sheet
            self._tables.append(wanted)
        elif not self._here:
            return
        elif name in {"annotation", "shapes", "frame", "deletion", "tracked-changes"}:
            self._skipped += 1
        elif self._skipped:
            return
        elif name == "table-row":
            self._begin_row(attributes)
        elif name in {"table-cell", "covered-table-cell"}:
            self._begin_cell(attributes)
        elif name == "p":
            self._in_paragraph = True
            if self._paragraphs:
                self._texts.append("\n")
            self._paragraphs += 1
        elif self._in_paragraph and name in {"s", "tab", "line-break"}:
            self._texts.append(" ")

    def characters(self, content: str) -> None:
        if self._in_paragraph and self._here and not self._skipped:
            self.count(content)
            self._texts.append(content)

    def end(self, name: str) -> None:
        if name == "table":
            self._tables.pop()
        elif not self._here:
            return
        elif name in {"annotation", "shapes", "frame", "deletion", "tracked-changes"}:
            self._skipped -= 1
        elif self._skipped:
            return
        elif name == "p":
            self._in_paragraph = False
        elif name in {"table-cell", "covered-table-cell"}:
            self._end_cell()
        elif name == "table-row":
            self._end_row()

    def _begin_row(self, attributes: AttributesImpl) -> None:
        self._row += 1
        self._row_repeats = _count(attributes, "number-rows-repeated")
        self._cells, self._pending = [], 0
        if attribute(attributes, "visibility") in {"collapse", "filter"}:
            self.hidden_rows.append(self._row)

    def _begin_cell(self, attributes: AttributesImpl) -> None:
        self._texts, self._paragraphs = [], 0
        self._cell_repeats = _count(attributes, "number-columns-repeated")
        self._formula = attribute(attributes, "formula")
        kind = attribute(attributes, "value-type")
        value = attribute(attributes, "value")
        self._typed = None
        if kind in _NUMBERS and value is not None:
            self._typed = TYPED + value.strip()
        elif kind == "percentage" and value is not None:
            self._typed = TYPED + percent_text(value)
        elif kind == "date":
            self._typed = attribute(attributes, "date-value")
        elif kind == "boolean":
            self._typed = (attribute(attributes, "boolean-value") or "").upper()
        rows = _count(attributes, "number-rows-spanned")
        columns = _count(attributes, "number-columns-spanned")
        if rows > 1 or columns > 1:
            place = len(self._cells) + self._pending
            self.merged.append(Span(self._row, self._row + rows - 1, place, place + columns - 1))

    def _end_cell(self) -> None:
        text = "".join(self._texts) if self._typed is None else self._typed
        if not text and self._formula:
            text = f"={self._formula.partition('=')[2]}"
        if not text:
            self._pending += self._cell_repeats
            return
        if len(self._cells) + self._pending + self._cell_repeats > MOST_COLUMNS:
            self._refuse(
                f"has a cell beyond column {MOST_COLUMNS}", len(self._cells) + self._pending
            )
        self._cells += [""] * self._pending + [text] * self._cell_repeats
        self._pending = 0

    def _end_row(self) -> None:
        if self._cells:
            if self._row_repeats > _MOST_REPEATS:
                self._refuse(f"is one row repeated {self._row_repeats} times", None)
            self._done += [(self._row + i, self._cells) for i in range(self._row_repeats)]
        self._row += self._row_repeats - 1

    def _refuse(self, what: str, column: int | None) -> None:
        raise InputError(
            Problem(
                what,
                "save only the table in a new workbook",
                file=self._file,
                sheet=self._sheet,
                row=self._row,
                column=None if column is None else column_letter(column),
            )
        )


def _count(attributes: AttributesImpl, name: str) -> int:
    text = attribute(attributes, name)
    number = 1 if text is None else int(text)
    if number < 1:
        raise ValueError("a count below one")
    return number
