"""Tables as data: what each cell holds and how it is read; layouts arrange them elsewhere.

A cell keeps the full number (``raw``) beside its rounded digits, so that the terminal, the page and
files for other programs all come from the same table.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

from knought.reporting.ascii_text import to_ascii
from knought.rounding import Rounded, heading, rounded, unit_text

if TYPE_CHECKING:
    from collections.abc import Sequence

    from knought.chemistry.quantities import Quantity, Symbol
    from knought.fitting.estimate import Estimate
from knought.rounding import Layout

__all__ = [
    "LAYOUTS",
    "Cell",
    "Column",
    "Table",
    "estimate_cells",
    "interval_cell",
    "join_words",
    "number",
    "number_column",
    "pair_cell",
    "plain_lines",
    "quantity_column",
    "symbol_cell",
    "text_column",
    "trimmed",
    "unit_cell",
    "value_cells",
    "words",
]


@dataclass(frozen=True)
class Cell:
    """One cell.

    Attributes
    ----------
    raw
        The full number in the column's unit, or the text.
    texts
        What is read, by layout; layouts not named fall back to ``"text"``.
    uncertainty
        The full standard uncertainty, in the column's unit, where the cell shows value ± u.
    interval
        Both ends in full, where the cell shows an interval.
    """

    raw: float | str | None
    texts: tuple[tuple[Layout, str], ...]
    uncertainty: float | None = None
    interval: tuple[float, float] | None = None

    def written(self, layout: Layout = "text") -> str:
        """Return what is read in `layout`."""
        by_layout = dict(self.texts)
        return by_layout.get(layout, by_layout["text"])


@dataclass(frozen=True)
class Column:
    """One column: what heads it by layout, its unit, and whether its cells are numbers.

    Attributes
    ----------
    signs
        Words or a quantity's sign, by layout; layouts not named fall back to ``"text"``.
    unit
        Unit of the numbers, ``"kJ mol^-1"``; ``"1"`` for none.
    numeric
        Whether cells are set to the right.
    """

    signs: tuple[tuple[Layout, str], ...]
    unit: str = "1"
    numeric: bool = True

    def sign(self, layout: Layout = "text") -> str:
        """Return what heads the column, without its unit."""
        by_layout = dict(self.signs)
        return by_layout.get(layout, by_layout["text"])

    def heading(self, layout: Layout = "text") -> str:
        """Return the heading ``quantity/unit``."""
        return heading(self.sign(layout), self.unit, layout)


@dataclass(frozen=True)
class Table:
    """A table with what must be said about it.

    Attributes
    ----------
    name
        Short name, for files and anchors.
    title
        One line above it.
    columns
        Its columns.
    rows
        Its rows; every row as long as `columns`.
    notes
        Sentences beneath it.
    """

    name: str
    title: str
    columns: tuple[Column, ...]
    rows: tuple[tuple[Cell, ...], ...]
    notes: tuple[str, ...] = ()


#: Text in a terminal's tables is cut after this many characters.
_LONGEST_NAME = 60

LAYOUTS: tuple[Layout, ...] = ("text", "ascii", "html", "latex")


def text_column(title: str) -> Column:
    """Return a column of words."""
    return Column((("text", title),), numeric=False)


def number_column(title: str) -> Column:
    """Return a column of numbers headed by words."""
    return Column((("text", title),))


def quantity_column(what: Quantity) -> Column:
    """Return a column of numbers headed by a quantity and its unit."""
    return Column(
        tuple((layout, what.symbol.in_layout(layout)) for layout in LAYOUTS), what.shown_unit
    )


def words(text: str) -> Cell:
    """Return a cell of words."""
    return Cell(text, (("text", text),))


def symbol_cell(symbol: Symbol, raw: str) -> Cell:
    """Return a cell that shows a quantity's sign."""
    return Cell(raw, tuple((layout, symbol.in_layout(layout)) for layout in LAYOUTS))


def number(value: float, *, digits: int | None = None, decimals: int | None = None) -> Cell:
    """Return a cell with a number that has no uncertainty.

    Parameters
    ----------
    value
        The number.
    digits
        Significant digits.
    decimals
        Decimal places, instead of significant digits.
    """
    if decimals is not None:
        return _cell(value, Rounded(f"{value:.{decimals}f}", "", 0), pair=False)
    return _cell(value, rounded(value, digits=digits), pair=False)


def trimmed(value: float, digits: int) -> Cell:
    """Return a cell with a number read to `digits` significant digits, zeros at its end left out.

    Parameters
    ----------
    value
        The number; the cell keeps it in full.
    digits
        Significant digits at most.
    """
    return _cell(value, rounded(float(f"{value:.{digits}g}")), pair=False)


def estimate_cells(estimate: Estimate) -> tuple[Cell, Cell]:
    """Return value and standard uncertainty as two cells, in the shown unit."""
    what = estimate.quantity
    value, u = float(estimate.value), float(estimate.standard_uncertainty)
    if estimate.given:
        return _cell(what.shown(value), what.rounded(value, None), pair=False), words("given")
    return value_cells(what, value, u)


def value_cells(what: Quantity, value: float, u: float) -> tuple[Cell, Cell]:
    """Return value and standard uncertainty (SI units) as two cells, in the shown unit."""
    digits = what.rounded(value, u)
    spread = Rounded(digits.uncertainty, "", digits.exponent)
    return _cell(what.shown(value), digits, pair=False), _cell(what.shown(u), spread, pair=False)


def pair_cell(estimate: Estimate | None) -> Cell:
    """Return value ± standard uncertainty in one cell, in the shown unit; a dash for none."""
    if estimate is None:
        return words("–")
    value, u = float(estimate.value), float(estimate.standard_uncertainty)
    digits = estimate.quantity.rounded(value, None if estimate.given else u)
    shown = _cell(estimate.quantity.shown(value), digits, pair=True)
    return shown if estimate.given else replace(shown, uncertainty=estimate.quantity.shown(u))


def interval_cell(estimate: Estimate, coverage: float = 0.95) -> Cell:
    """Return the interval as one cell, rounded like the value."""
    if estimate.given:
        return words("given")
    what = estimate.quantity
    pattern = what.rounded(float(estimate.value), float(estimate.standard_uncertainty))
    low, high = (what.shown(float(end)) for end in estimate.interval(coverage))
    ends = [_like(end, pattern) for end in (low, high)]
    texts = tuple(
        (layout, f"{ends[0].number(layout)} to {ends[1].number(layout)}") for layout in LAYOUTS
    )
    return Cell(None, texts, interval=(low, high))


def unit_cell(estimate: Estimate) -> Cell:
    """Return the shown unit of an estimate."""
    unit = estimate.quantity.shown_unit
    return Cell(unit, tuple((layout, unit_text(unit, layout)) for layout in LAYOUTS))


def _like(value: float, pattern: Rounded) -> Rounded:
    """Round `value` to the decimal place and power of ten of `pattern`."""
    decimals = len(pattern.value.partition(".")[2])
    return Rounded(f"{value / 10.0**pattern.exponent:.{decimals}f}", "", pattern.exponent)


def _cell(raw: float, digits: Rounded, *, pair: bool) -> Cell:
    written = digits.pair if pair else digits.number
    return Cell(raw, tuple((layout, written(layout)) for layout in LAYOUTS))


def plain_lines(table: Table, layout: Layout = "text", width: int = 100) -> list[str]:
    """Arrange a table as lines of text with aligned columns.

    Parameters
    ----------
    table
        The table.
    layout
        ``"text"`` or ``"ascii"``.
    width
        Lines of notes are folded to this many characters.
    """
    import textwrap

    # Sign and unit stand on two lines, so that a heading is seldom wider than its numbers.
    units = [heading("", column.unit, layout).strip() for column in table.columns]
    plain = to_ascii if layout == "ascii" else str  # before widths are measured
    heads = [[plain(column.sign(layout)) for column in table.columns], units]
    if not any(units):
        heads.pop()
    grid = heads + [[plain(_short(cell.written(layout))) for cell in row] for row in table.rows]
    widths = [max(len(row[j]) for row in grid) for j in range(len(table.columns))]
    lines = []
    for i, row in enumerate(grid):
        pieces = [
            text.rjust(size) if column.numeric else text.ljust(size)
            for text, size, column in zip(row, widths, table.columns, strict=True)
        ]
        lines.append("  ".join(pieces).rstrip())
        if i == len(heads) - 1:
            lines.append("  ".join(("-" if layout == "ascii" else "─") * size for size in widths))
    for note in table.notes:
        lines += textwrap.wrap(note, width)
    return lines


def _short(text: str) -> str:
    """Shorten a name that would push the numbers out of sight; files and page have it whole."""
    return text if len(text) <= _LONGEST_NAME else text[: _LONGEST_NAME - 1].rstrip() + "…"


def join_words(parts: Sequence[str]) -> str:
    """Return ``"a, b and c"``."""
    if len(parts) < 2:
        return "".join(parts)
    return f"{', '.join(parts[:-1])} and {parts[-1]}"
