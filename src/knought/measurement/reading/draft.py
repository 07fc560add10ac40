"""The table while it is built: what is kept, what was understood, what is wrong."""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import TYPE_CHECKING

import numpy as np

from knought.errors import Problem
from knought.measurement.reading.account import AccountLine

if TYPE_CHECKING:
    from knought.arrays import BoolArray
    from knought.measurement.reading.grid import TextGrid
    from knought.measurement.reading.number_column import NumberColumn
    from knought.measurement.reading.values import Values

__all__ = ["Draft"]

#: Of one kind of fault, this many are told.
_MOST_PROBLEMS = 50


@dataclass
class Draft:
    """The table while it is built.

    Attributes
    ----------
    grid
        For the addresses in messages.
    values
        Numbers as they stand in the file.
    used : (n,) ndarray of bool
        Which runs count.
    sound : (n,) ndarray of bool
        Which of these stand in whole rows; only they are looked at further.
    kept : (n,) ndarray of bool
        Which rows become runs of the table; a run that does not count and lacks a number does not.
    problems
        What is wrong.
    account
        What was understood.
    """

    grid: TextGrid
    values: Values
    used: BoolArray
    sound: BoolArray
    kept: BoolArray
    problems: list[Problem] = field(default_factory=list)
    account: list[AccountLine] = field(default_factory=list)

    def note(self, words: str, column: str = "", before: str = "", after: str = "") -> None:
        """Add a line to the account."""
        self.account.append(AccountLine(words, column, before, after))

    def problem(
        self, what: str, remedy: str, column: NumberColumn, place: int | None = None
    ) -> None:
        """Tell what is wrong with a column, or with its cell in the run at `place`."""
        row = None if place is None else int(self.values.rows[place])
        read = None if row is None else self.grid.cell(row, column.column.place)
        self.problems.append(
            Problem(
                what,
                remedy,
                read=read or None,
                file=self.grid.name,
                sheet=self.grid.sheet,
                row=row,
                column=column.column.address,
            )
        )

    def refuse(self, wrong: BoolArray, column: NumberColumn, what: str, remedy: str) -> None:
        """Tell every used run where `wrong`; a run that does not count is not kept there.

        A cell that could not be read has been told already.
        """
        told = self.values.unreadable.get(column.column.place)
        looked_at = self.sound.copy()
        if told is not None:
            looked_at[told] = False
        for place in np.flatnonzero(wrong & looked_at)[:_MOST_PROBLEMS]:
            self.problem(what, remedy, column, int(place))
        self.kept &= ~(wrong & ~self.used)
