"""Words in a table: what a label may hold, and how it stays a word in a spreadsheet.

A cell that begins with ``=``, ``+``, ``-`` or ``@`` is run as a formula by spreadsheet programs,
and one that begins with ``#`` makes a comment of its row. An apostrophe before it is the customary
guard; one that is there already gets another, so that taking one away gives back every text.
"""

from __future__ import annotations

import re

__all__ = ["guarded", "is_plain_text", "unguarded"]

#: Begins with what is run or dropped, whether or not guarded already.
_GUARDED = re.compile(r"'*[=+\-@#\t\r＝＋－＠]")

#: Control characters, halves of surrogate pairs and non-characters are in no table.
_NO_TEXT = re.compile(r"[\x00-\x08\x0b\x0c\x0e-\x1f\x7f-\x9f\ud800-\udfff\ufffe\uffff]")

_MOST_CHARACTERS = 5000


def guarded(text: str) -> str:
    """Return a label as it is written into a CSV file, so that no program runs it."""
    return f"'{text}" if _GUARDED.match(text) else text


def unguarded(text: str) -> str:
    """Return what :func:`guarded` was given."""
    return text[1:] if text.startswith("'") and _GUARDED.match(text) else text


def is_plain_text(text: str) -> bool:
    """Whether a label can be written to a file and read back."""
    return len(text) <= _MOST_CHARACTERS and _NO_TEXT.search(text) is None
