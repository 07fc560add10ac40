"""XLSX (ECMA-376): the sheets of a workbook as rows of texts.

Numbers are taken as they are stored, behind the mark for typed cells; dates, percentages, errors
and formulas that have no value become texts that the grammar of numbers refuses by name.
"""

from __future__ import annotations

import posixpath
import re
from dataclasses import dataclass, field
from typing import TYPE_CHECKING

from knought.errors import InputError, Problem
from knought.measurement.reading.archive import (
    Archive,
    AttributesImpl,
    Handler,
    TooMuchError,
    attribute,
)
from knought.measurement.reading.cell_text import (
    NumberFormat,
    date_text,
    format_kind,
    percent_text,
    rows_words,
)  # fmt: skip
from knought.measurement.reading.grid import MOST_COLUMNS, TYPED, Span, column_letter

if TYPE_CHECKING:
    from collections.abc import Iterator

__all__ = ["XlsxSheet", "xlsx_sheets"]

_MOST_ROWS = 1_048_576
_REFERENCE = re.compile(r"\$?([A-Z]{1,3})\$?([0-9]{1,7})")


@dataclass
class XlsxSheet:
    """A sheet.

    Attributes
    ----------
    name
        As the program shows it.
    hidden
        Whether it is hidden.
    merged
        Merged cells, known once the rows have been walked through.
    remarks
        What a reader of the account should know, known then as well.
    """

    name: str
    hidden: bool
    part: str
    book: _Book
    merged: tuple[Span, ...] = ()
    remarks: tuple[str, ...] = ()

    def rows(self) -> Iterator[tuple[int, list[str]]]:
        """Yield row numbers and cells.

        Raises
        ------
        InputError
            If the sheet is damaged, or has cells far outside a table.
        """
        handler = _SheetHandler(self)
        for _ in self.book.archive.steps(self.part, handler):
            yield from handler.take()
        self.merged = tuple(handler.merged)
        hidden = [f"column {letter}" for letter in handler.hidden_columns]
        hidden += [rows_words(handler.hidden_rows)] if handler.hidden_rows else []
        self.remarks = tuple(
            f"{what} hidden in the sheet, and read all the same" for what in hidden
        )


@dataclass
class _Book:
    """What all sheets share."""

    archive: Archive
    strings: list[str] = field(default_factory=list)
    formats: list[NumberFormat] = field(default_factory=list)
    from_1904: bool = False


def xlsx_sheets(archive: Archive) -> tuple[XlsxSheet, ...]:
    """Return the sheets of a workbook.

    Parameters
    ----------
    archive
        The opened file.

    Raises
    ------
    InputError
        If it is damaged, or no XLSX workbook.
    """
    main = _main_part(archive)
    relations = _Relations()
    archive.parse(_relations_of(main), relations)
    listing = _BookHandler()
    archive.parse(main, listing)
    book = _Book(archive, from_1904=listing.from_1904)
    folder = posixpath.dirname(main)
    for kind, target in relations.targets.values():
        part = _resolved(folder, target)
        if kind.endswith("/sharedStrings") and part in archive:
            strings = _StringsHandler()
            archive.parse(part, strings)
            book.strings = strings.found
        elif kind.endswith("/styles") and part in archive:
            styles = _StylesHandler()
            archive.parse(part, styles)
            book.formats = styles.kinds()
    sheets = []
    for name, hidden, relation in listing.sheets:
        kind, target = relations.targets.get(relation, ("", ""))
        if kind.endswith("/worksheet"):
            sheets.append(XlsxSheet(name, hidden, _resolved(folder, target), book))
    return tuple(sheets)


def _main_part(archive: Archive) -> str:
    if "_rels/.rels" in archive:
        relations = _Relations()
        archive.parse("_rels/.rels", relations)
        for kind, target in relations.targets.values():
            if kind.endswith("/officeDocument"):
                part = _resolved("", target)
                if part.endswith(".xml") and posixpath.dirname(part) not in {"word", "ppt"}:
                    return part
                if part.endswith(".bin"):
                    raise InputError(
                        Problem("is an XLSB workbook", "save it as XLSX", file=archive.name)
                    )
    raise InputError(
        Problem(
            "is an archive and no workbook", "save the table as CSV, XLSX or ODS", file=archive.name
        )
    )


def _relations_of(part: str) -> str:
    folder, name = posixpath.split(part)
    return posixpath.join(folder, "_rels", f"{name}.rels")


def _resolved(folder: str, target: str) -> str:
    if target.startswith("/"):
        return target.lstrip("/")
    return posixpath.normpath(posixpath.join(folder, target))


class _Relations(Handler):
    def __init__(self) -> None:
        super().__init__()
        self.targets: dict[str, tuple[str, str]] = {}

    def begin(self, name: str, attributes: AttributesImpl) -> None:
        if name == "Relationship" and attributes.get("TargetMode") != "External":
            self.targets[attributes.get("Id", "")] = (
                attributes.get("Type", ""),
                attributes.get("Target", ""),
            )


class _BookHandler(Handler):
    def __init__(self) -> None:
        super().__init__()
        self.sheets: list[tuple[str, bool, str]] = []
        self.from_1904 = False

    def begin(self, name: str, attributes: AttributesImpl) -> None:
        if name == "sheet":
            relation = attribute(attributes, "id") or ""
            hidden = attributes.get("state", "visible") != "visible"
            self.sheets.append((attributes.get("name", ""), hidden, relation))
        elif name == "workbookPr":
            self.from_1904 = attributes.get("date1904", "0") in {"1", "true"}


class _StringsHandler(Handler):
    """Shared strings; what helps pronounce them (rPh) is no part of the text."""

    def __init__(self) -> None:
        super().__init__()
        self.found: list[str] = []
        self._pieces: list[str] = []
        self._in_text = self._in_phonetic = False

    def begin(self, name: str, attributes: AttributesImpl) -> None:
        if name == "si":
            self._pieces = []
        elif name == "rPh":
            self._in_phonetic = True
        elif name == "t":
            self._in_text = not self._in_phonetic

    def characters(self, content: str) -> None:
        if self._in_text:
            self.count(content)
            self._pieces.append(content)

    def end(self, name: str) -> None:
        if name == "t":
            self._in_text = False
        elif name == "rPh":
            self._in_phonetic = False
        elif name == "si":
            self.found.append("".join(self._pieces))


class _StylesHandler(Handler):
    def __init__(self) -> None:
        super().__init__()
        self._codes: dict[str, str] = {}
        self._used: list[str] = []
        self._in_cells = False

    def begin(self, name: str, attributes: AttributesImpl) -> None:
        if name == "numFmt":
            self._codes[attributes.get("numFmtId", "")] = attributes.get("formatCode", "")
        elif name == "cellXfs":
            self._in_cells = True
        elif name == "xf" and self._in_cells:
            self._used.append(attributes.get("numFmtId", "0"))

    def end(self, name: str) -> None:
        if name == "cellXfs":
            self._in_cells = False

    def kinds(self) -> list[NumberFormat]:
        """Return what each cell style shows numbers as."""
        return [format_kind(number, self._codes.get(number)) for number in self._used]


class _SheetHandler(Handler):
    """Rows of one sheet."""

    def __init__(self, sheet: XlsxSheet) -> None:
        super().__init__()
        self._sheet, self._book = sheet, sheet.book
        self.merged: list[Span] = []
        self.hidden_rows: list[int] = []
        self.hidden_columns: list[str] = []
        self._done: list[tuple[int, list[str]]] = []
        self._row = 0
        self._cells: list[str] = []
        self._column = -1
        self._kind, self._style = "n", 0
        self._pieces: list[str] = []
        self._formula: list[str] = []
        self._into: list[str] | None = None
        self._has_value = self._has_formula = self._in_phonetic = False

    def take(self) -> list[tuple[int, list[str]]]:
        """Return the rows that are complete, and forget them."""
        done, self._done = self._done, []
        return done

    def begin(self, name: str, attributes: AttributesImpl) -> None:
        if name == "c":
            self._begin_cell(attributes)
        elif name in {"v", "t"} and not self._in_phonetic:
            self._into, self._has_value = self._pieces, True
        elif name == "f":
            self._into, self._has_formula = self._formula, True
        elif name == "rPh":
            self._in_phonetic = True
        elif name == "row":
            self._begin_row(attributes)
        elif name == "col" and attributes.get("hidden") in {"1", "true"}:
            first, last = int(attributes["min"]), int(attributes["max"])
            self.hidden_columns += [column_letter(i - 1) for i in range(first, min(last, 50) + 1)]
        elif name == "mergeCell":
            self._merge(attributes.get("ref", ""))

    def characters(self, content: str) -> None:
        if self._into is not None:
            self.count(content)
            self._into.append(content)

    def end(self, name: str) -> None:
        if name == "c":
            self._cells.append(self._text())
        elif name in {"v", "t", "f"}:
            self._into = None
        elif name == "rPh":
            self._in_phonetic = False
        elif name == "row":
            if any(self._cells):
                self._done.append((self._row, self._cells))
            self._cells = []

    def _begin_row(self, attributes: AttributesImpl) -> None:
        number = int(attributes.get("r") or self._row + 1)
        if number > _MOST_ROWS:
            raise TooMuchError
        if number <= self._row:
            raise ValueError("rows out of order")
        self._row, self._cells, self._column = number, [], -1
        if attributes.get("hidden") in {"1", "true"}:
            self.hidden_rows.append(number)

    def _begin_cell(self, attributes: AttributesImpl) -> None:
        column = self._column + 1
        reference = attributes.get("r")
        if reference:
            found = _REFERENCE.fullmatch(reference)
            if found is None or int(found[2]) != self._row:
                raise ValueError("a cell outside its row")
            place = _place(found[1])
            if place < column:
                raise ValueError("cells out of order")
            column = place
        if column >= MOST_COLUMNS:
            self._too_far(column)
        self._cells += [""] * (column - len(self._cells))
        self._column = column
        self._kind, self._style = attributes.get("t", "n"), int(attributes.get("s") or 0)
        self._pieces, self._formula = [], []
        self._has_value = self._has_formula = False
        self._into = None

    def _too_far(self, column: int) -> None:
        raise InputError(
            Problem(
                f"has a cell beyond column {MOST_COLUMNS}",
                "save only the table in a new workbook",
                file=self._book.archive.name,
                sheet=self._sheet.name,
                row=self._row,
                column=column_letter(column),
            )
        )

    def _text(self) -> str:
        text = "".join(self._pieces)
        if not text and self._has_formula and self._kind != "str":
            return f"={''.join(self._formula)}"
        if not self._has_value:
            return ""
        if self._kind == "s":
            return self._book.strings[int(text)] if int(text) >= 0 else ""
        if self._kind == "b":
            return "TRUE" if text.strip() == "1" else "FALSE"
        if self._kind != "n" or not text.strip():
            return text
        formats = self._book.formats
        shown_as = formats[self._style] if self._style < len(formats) else "number"
        if shown_as == "date":
            return date_text(text, from_1904=self._book.from_1904)
        if shown_as == "percent":
            return TYPED + percent_text(text)
        return TYPED + text.strip()

    def _merge(self, reference: str) -> None:
        first, _, last = reference.partition(":")
        corners = [_REFERENCE.fullmatch(first), _REFERENCE.fullmatch(last or first)]
        if corners[0] is not None and corners[1] is not None:
            self.merged.append(
                Span(
                    int(corners[0][2]),
                    int(corners[1][2]),
                    _place(corners[0][1]),
                    _place(corners[1][1]),
                )
            )


def _place(letters: str) -> int:
    """Column from 0 of its letters."""
    place = 0
    for letter in letters:
        place = 26 * place + ord(letter) - 64
    return place - 1
