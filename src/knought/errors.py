"""What can go wrong with the user's input, said so that it can be mended.

A :class:`Problem` is one thing wrong at one place; an :class:`InputError` carries one or more of
them; a :class:`Caveat` is something the user must know that does not stop the work.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from collections.abc import Iterable

__all__ = ["Caveat", "InputError", "Problem"]

#: Never print more than this many problems at once; the rest are counted.
_SHOWN_PROBLEMS = 20

#: Text read from a file is quoted in messages up to this many characters.
_QUOTED_CHARACTERS = 60


@dataclass(frozen=True)
class Problem:
    """One thing wrong with the input: where, what was read, and what to do.

    Parameters
    ----------
    what
        What is wrong, as the beginning of a sentence without its full stop.
    remedy
        What the user can do about it, as a sentence without its full stop.
    read
        The text that was read there, verbatim, if there is one.
    file, sheet, row, column
        Where: file name (never an absolute path), sheet name, row number as a spreadsheet shows
        it (from 1), and column header or letter.
    """

    what: str
    remedy: str = ""
    read: str | None = None
    file: str | None = None
    sheet: str | None = None
    row: int | None = None
    column: str | None = None

    @property
    def where(self) -> str:
        """The place in words, ``"rates.csv, row 7, column k/s^-1"``; empty if there is none."""
        parts = [
            self.file,
            None if self.sheet is None else f"sheet {self.sheet}",
            None if self.row is None else f"row {self.row}",
            None if self.column is None else f"column {self.column}",
        ]
        return ", ".join(part for part in parts if part)

    def __str__(self) -> str:
        text = f"{self.where}: " if self.where else ""
        text += self.what
        if self.read is not None:
            text += f" (read: {quoted(self.read)})"
        if self.remedy:
            text += f". {self.remedy[0].upper()}{self.remedy[1:]}"
        return text if text.endswith((".", "?")) else text + "."


class InputError(ValueError):
    """The input or the call is wrong; the user can mend it.

    Parameters
    ----------
    problems
        The problems, in the order in which they were found; or a sentence that says what is wrong.
    remedy
        What to do, if `problems` is a sentence.
    """

    def __init__(self, problems: str | Problem | Iterable[Problem], remedy: str = "") -> None:
        if isinstance(problems, str):
            problems = Problem(problems, remedy)
        self.problems: tuple[Problem, ...] = (
            (problems,) if isinstance(problems, Problem) else tuple(problems)
        )
        super().__init__(self._text())

    def _text(self) -> str:
        if len(self.problems) == 1:
            return str(self.problems[0])
        shown = [f"  {problem}" for problem in self.problems[:_SHOWN_PROBLEMS]]
        hidden = len(self.problems) - len(shown)
        if hidden:
            shown.append(f"  ... and {hidden} more.")
        return "\n".join([f"{len(self.problems)} problems:", *shown])


@dataclass(frozen=True)
class Caveat:
    """Something a reader of the result must know; it is printed, and kept in the record.

    Parameters
    ----------
    code
        A short stable name, ``"u-too-small"``.
    message
        One or two sentences with the numbers in, and what to do or measure.
    """

    code: str
    message: str


def quoted(text: str) -> str:
    """Return `text` in quotation marks, on one line, cut where it is long."""
    shown = repr(text if len(text) <= _QUOTED_CHARACTERS else text[:_QUOTED_CHARACTERS] + "…")
    return f'"{shown[1:-1]}"'
