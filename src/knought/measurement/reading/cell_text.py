"""What a number of a workbook shows as: a number, a percentage, or a date."""

from __future__ import annotations

import re
from datetime import datetime, timedelta
from decimal import Decimal, InvalidOperation
from typing import Literal, TypeAlias

__all__ = ["NumberFormat", "date_text", "format_kind", "percent_text", "rows_words"]

NumberFormat: TypeAlias = Literal["number", "percent", "date"]

#: Built-in number formats (ECMA-376 part 1, 18.8.30), East Asian date formats included.
_PERCENTS = frozenset({9, 10})
_DATES = frozenset({*range(14, 23), *range(27, 37), *range(45, 48), *range(50, 59)})

_LITERAL = re.compile(r'"[^"]*"|\\.|_.|\*.|\[(?![hms]+\])[^\]]*\]', re.IGNORECASE)


def format_kind(number: str, code: str | None) -> NumberFormat:
    """Return what a number format shows.

    Parameters
    ----------
    number
        Its identifier.
    code
        Its code, where it is none of the built-in ones.
    """
    if code is None:
        known = int(number) if number.isdecimal() else 0
        if known in _PERCENTS:
            return "percent"
        return "date" if known in _DATES else "number"
    plain = _LITERAL.sub("", code.partition(";")[0])
    if "%" in plain:
        return "percent"
    if plain.strip().lower() in {"general", "standard"}:
        return "number"
    return "date" if re.search(r"[dmyhs]", plain, re.IGNORECASE) else "number"


def percent_text(stored: str) -> str:
    """Return what a cell with a percent format shows, ``"2.5%"`` for a stored 0.025."""
    try:
        number = Decimal(repr(float(stored))).scaleb(2)
    except (ValueError, InvalidOperation):
        return stored
    return f"{number.normalize():f}%"


def date_text(stored: str, *, from_1904: bool = False) -> str:
    """Return the date that a stored serial number stands for, so that a message can show it."""
    start = datetime(1904, 1, 1) if from_1904 else datetime(1899, 12, 30)
    try:
        moment = start + timedelta(days=float(stored))
    except (ValueError, OverflowError):
        return stored
    if 0 <= float(stored) < 1:
        return f"{moment:%H:%M:%S}"
    return f"{moment:%Y-%m-%d}" if moment.time() == start.time() else f"{moment:%Y-%m-%d %H:%M:%S}"


def rows_words(rows: list[int]) -> str:
    """Return ``"row 7"`` or ``"rows 7, 8 and 12"``, shortened where there are many."""
    if len(rows) == 1:
        return f"row {rows[0]}"
    if len(rows) > 8:
        return f"{len(rows)} rows from {rows[0]} to {rows[-1]}"
    return f"rows {', '.join(map(str, rows[:-1]))} and {rows[-1]}"
