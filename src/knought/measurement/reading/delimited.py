"""Rows of a delimited text: CSV, TSV, semicolon files, cells pasted from a spreadsheet.

Quoting is that of RFC 4180, taken strictly. The delimiter is not sniffed here: each of the three is
tried by whoever knows what a header looks like (:mod:`.layout`).
"""

from __future__ import annotations

import csv
import io
import re
from typing import TYPE_CHECKING

from knought.errors import InputError, Problem

if TYPE_CHECKING:
    from collections.abc import Iterator

__all__ = ["DELIMITERS", "declared_delimiter", "delimited_rows", "unmarked"]

#: Delimiters that are read, with the word for them.
DELIMITERS: dict[str, str] = {"\t": "tab", ";": "semicolon", ",": "comma"}

#: A longer line is no row of a table of rate constants.
_LONGEST_LINE = 200_000

_DECLARED = re.compile(r'"?sep=(?P<delimiter>[,;\t])"?\r?\n?')


def declared_delimiter(text: str) -> str | None:
    """Return the delimiter that a first line ``sep=;`` states, as some spreadsheets write it."""
    found = _DECLARED.match(text)
    return None if found is None else found["delimiter"]


def unmarked(text: str) -> str:
    """Return `text` without such a first line."""
    found = _DECLARED.match(text)
    return text if found is None else text[found.end() :]


def delimited_rows(text: str, delimiter: str, name: str) -> Iterator[tuple[int, list[str]]]:
    """Yield row numbers, from 1, and cells.

    Parameters
    ----------
    text
        The whole text.
    delimiter
        One of :data:`DELIMITERS`.
    name
        File name for messages.

    Raises
    ------
    InputError
        If a line is too long, or quotation marks don't match.
    """
    number = 0
    reader = csv.reader(_lines(text, name), delimiter=delimiter, strict=True)
    while True:
        number += 1
        try:
            cells = next(reader, None)
        except csv.Error as error:
            raise InputError(
                Problem(
                    f"cannot be taken apart into cells ({error})",
                    "check the quotation marks in this row and above; a quotation mark inside a "
                    "cell is doubled",
                    file=name,
                    row=number,
                )
            ) from error
        if cells is None:
            return
        yield number, cells


def _lines(text: str, name: str) -> Iterator[str]:
    for number, line in enumerate(io.StringIO(text, newline=""), start=1):
        if len(line) > _LONGEST_LINE:
            raise InputError(
                Problem(
                    f"has a line of more than {_LONGEST_LINE} characters",
                    "give a table with one row a line",
                    file=name,
                    row=number,
                )
            )
        yield line
