"""One column of numbers while it is read, cell by cell."""

from __future__ import annotations

import re
from array import array
from dataclasses import dataclass, field
from typing import TYPE_CHECKING

import numpy as np

from knought.chemistry.numbers import Number, Unreadable, last_step, read_number
from knought.measurement.reading.grid import TYPED, shown

if TYPE_CHECKING:
    from knought.arrays import FloatArray
    from knought.chemistry.headers import Header
    from knought.chemistry.numbers import DecimalMark
    from knought.measurement.reading.layout import Column

__all__ = ["GrowingColumn", "NumberColumn"]

#: Texts that come again and again (temperatures) are read once, up to this many.
_REMEMBERED_TEXTS = 20_000

_LEADING_SIGN = re.compile(r"\s*(?:±|\+/-)")


@dataclass(frozen=True, eq=False)
class NumberColumn:
    """A column of numbers as they stand in the file.

    Attributes
    ----------
    column
        The column.
    values : (n,) ndarray
        nan where the cell is blank.
    inner : (n,) ndarray or None
        Uncertainty that stands in the same cell; None where no cell has one.
    sign
        How that is written: ``"()"``, ``"±"`` or ``"± %"``; it is absolute in each case.
    first
        Text of the first cell that is not blank.
    steps : (n,) ndarray
        What one step of the last digit of each number is; empty where nobody asks for it.
    """

    column: Column
    values: FloatArray
    inner: FloatArray | None
    sign: str
    first: str
    steps: FloatArray = field(default_factory=lambda: np.empty(0))


class GrowingColumn:
    """A column of numbers while it grows.

    Parameters
    ----------
    column
        The column.
    decimal
        The decimal mark of the file.
    stated
        Whether the user stated it.
    with_steps
        Whether the step of the last digit of each number is kept.
    """

    def __init__(
        self, column: Column, decimal: DecimalMark, *, stated: bool, with_steps: bool
    ) -> None:
        self.column, self._decimal, self._stated = column, decimal, stated
        self._steps = array("d") if with_steps else None
        self.values, self.inner = array("d"), array("d")
        self.first, self.sign = "", ""
        self._known: dict[str, float] = {}
        header = column.header
        self._percent = _percent_factor(header)
        self._is_uncertainty = header is not None and header.is_uncertainty
        self._may_have_inner = (
            header is not None and not header.is_uncertainty and header.role != "n"
        )

    def take(self, text: str) -> Unreadable | None:
        """Read a cell; return why it cannot be read."""
        if self._steps is not None:
            typed = text.startswith(TYPED)
            self._steps.append(last_step(text[typed:], "." if typed else self._decimal))
        value = self._known.get(text)
        if value is None:
            read = self._read(text)
            if isinstance(read, Number):
                read = self._kept(text, read)
            if isinstance(read, Unreadable):
                self.values.append(np.nan)
                return read
            value = np.nan if read is None else read.value
        self.values.append(value)
        return None

    def _read(self, text: str) -> Number | Unreadable | None:
        if text.startswith(TYPED):
            return read_number(text[1:], ".")
        if self._is_uncertainty:
            # A column of ± may have the sign in its cells.
            text = _LEADING_SIGN.sub("", text, count=1)
        return read_number(text, self._decimal, stated=self._stated)

    def _kept(self, text: str, read: Number) -> Number | Unreadable:
        """Keep a number's uncertainty, and remember a number without one."""
        self.first = self.first or shown(text)
        if read.percent:
            if self._percent is None:
                return Unreadable(
                    "is in percent, and its column is not", "give the number in the column's unit"
                )
            return read._replace(value=read.value * self._percent)
        if read.uncertainty is None:
            if len(self._known) < _REMEMBERED_TEXTS:
                self._known[text] = read.value
            return read
        sign = "± %" if read.relative else read.sign
        if not self._may_have_inner:
            return Unreadable(
                "has an uncertainty where a number alone belongs", "give the number alone"
            )
        if self.sign not in {"", sign}:
            return Unreadable(
                "writes its uncertainty in another way than the cells above",
                "write all of them as 2.41(5)e-3, or all of them as 2.41e-3 ± 0.05e-3",
            )
        self.sign = sign
        size = abs(read.value) if read.relative else 1.0
        self._fill_inner()
        self.inner.append(read.uncertainty * size)
        return read

    def _fill_inner(self) -> None:
        """Give the cells without an uncertainty before the next one a blank."""
        if self.sign:
            self.inner.extend([np.nan] * (len(self.values) - len(self.inner)))

    def made(self) -> NumberColumn:
        """Return the column."""
        self._fill_inner()
        inner = np.array(self.inner) if self.sign else None
        steps = np.empty(0) if self._steps is None else np.array(self._steps)
        return NumberColumn(self.column, np.array(self.values), inner, self.sign, self.first, steps)


def _percent_factor(header: Header | None) -> float | None:
    """Return what the number before a percent sign is multiplied by; None where it has no place."""
    if header is None or header.unit is None:
        meaning = None if header is None else header.uncertainty
        return 0.01 if meaning is not None and meaning.relative else None
    return {"%": 1.0, "1": 0.01}.get(header.unit.text)
