"""Why a text is no number, said as precisely as can be, and what to do about it."""

from __future__ import annotations

import re
from typing import NamedTuple

__all__ = ["Unreadable", "refusal"]


class Unreadable(NamedTuple):
    """Why a text is no number, and what to do."""

    what: str
    remedy: str


_MONTH = r"(?:jan|feb|mar|apr|may|jun|jul|aug|sep|oct|nov|dec)[a-z]*\.?"
_DATE = re.compile(
    r"[0-9]{1,2}[-/.][0-9]{1,2}[-/.](?:[0-9]{2}|[0-9]{4})"
    r"|[0-9]{1,2}[-/][0-9]{1,2}"
    rf"|[0-9]{{1,2}}[-/. ]?{_MONTH}(?:[-/. ]?[0-9]{{2,4}})?"
    rf"|{_MONTH}[-/. ]?[0-9]{{1,4}}",
    re.IGNORECASE,
)

#: First match wins: pattern, what is wrong, what to do.
_REASONS = (
    (
        re.compile(r"=.*", re.DOTALL),
        "is a formula whose value is not in the file",
        "open the file in the spreadsheet program and save it there, or paste the values",
    ),
    (
        re.compile(r"#[A-Z].*|Err:[0-9]+", re.DOTALL),
        "is an error of the spreadsheet",
        "mend the formula there",
    ),
    (
        re.compile(r"(?:[<>≤≥~≈]|ca\.? ?|about |approx\.? ?).*", re.IGNORECASE | re.DOTALL),
        "is a bound or an estimate and no value",
        "give the value, or leave the run out (use: no, with a reason)",
    ),
    (
        re.compile(r"[0-9]{4}[-/.][0-9]{1,2}[-/.][0-9]{1,2}(?:[T ].*)?|[0-9]{1,2}:[0-9]{2}.*"),
        "is a date or a time where a number should be",
        "a spreadsheet may have made a date of the number; type it again in a column of text",
    ),
    (
        _DATE,
        "looks like a date, of which day and month can be read in two ways, and not like a number",
        "a spreadsheet may have made a date of the number; type it again in a column of text",
    ),
    (
        re.compile(r".*[0-9] ?[*xX] ?10 ?[+-]?[0-9]+"),
        "has lost the superscript of its power of ten",
        "write it as 2.41e-3 or 2.41 × 10^-3",
    ),
    (
        re.compile(r"[+-]?[0-9]{1,3}(?:['’][0-9]{3})+(?:[.,][0-9]*)?"),
        "has its digits grouped by apostrophes",
        "write the number without them",
    ),
    (
        re.compile(r"[+-]? ?(?:inf|infinity|∞)", re.IGNORECASE),
        "is infinite",
        "give a number, or leave the run out (use: no, with a reason)",
    ),
)

#: Enough of a long text to see what it is.
_LOOKED_AT = 200

_WORDS = {".": "point", ",": "comma"}
_THOUSANDS = re.compile(r"[+-]?[1-9][0-9]{0,2}[.,][0-9]{3}")


def refusal(plain: str, decimal: str, other: str | None) -> Unreadable:
    """Say why a text is no number.

    Parameters
    ----------
    plain
        The text, in one spelling of spaces and signs.
    decimal
        The decimal mark of the file.
    other
        The other mark, where the text would be a number with that one.
    """
    for pattern, what, remedy in _REASONS:
        if pattern.fullmatch(plain[:_LOOKED_AT]):
            return Unreadable(what, remedy)
    if other is not None and _THOUSANDS.fullmatch(plain):
        whole, broken = plain.replace(other, ""), plain.replace(other, decimal)
        return Unreadable(
            f"can be read as {broken} or as {whole}, for the decimal mark of the file is the "
            f"{_WORDS[decimal]}",
            f"write {broken} or {whole}, or state the mark: decimal",
        )
    if other is not None:
        return Unreadable(
            f"has a decimal {_WORDS[other]} in a file with decimal {_WORDS[decimal]}s",
            "use one decimal mark in the whole file",
        )
    return Unreadable(
        "is not a number", "write numbers as 2.41 or 2.41e-3; leave the cell blank for none"
    )
