"""A table as plain columns for other programs: full numbers, u in its own column, no signs."""

from __future__ import annotations

import csv
import io
import math
from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

from knought.measurement.labels import guarded
from knought.reporting.ascii_text import to_ascii
from knought.rounding import heading

if TYPE_CHECKING:
    import pandas as pd

    from knought.reporting.cells import Cell, Column, Table

__all__ = ["Field", "PlainTable", "plain_table"]

#: What a column of numbers says in words, and the number that it stands for.
_NUMBERS_IN_WORDS: dict[str, float | None] = {"–": None, "": None, "given": None, "→ 0": 0.0}


@dataclass(frozen=True)
class Field:
    """One plain column.

    Attributes
    ----------
    name
        Its heading in ASCII, with its unit; unique in the table.
    unit
        Unit of the numbers; ``"1"`` for none.
    numeric
        Whether it holds numbers only.
    """

    name: str
    unit: str
    numeric: bool


@dataclass(frozen=True)
class PlainTable:
    """A table whose cells are numbers in full, words, or None for nothing.

    Attributes
    ----------
    name, title
        As of the table.
    fields
        Its columns.
    rows
        Its rows; numbers are finite.
    notes
        Sentences beneath it.
    """

    name: str
    title: str
    fields: tuple[Field, ...]
    rows: tuple[tuple[float | str | None, ...], ...]
    notes: tuple[str, ...]

    def csv(self) -> str:
        """Return it as CSV (RFC 4180, line feeds), numbers with the digits that give them back."""
        written = io.StringIO()
        writer = csv.writer(written, lineterminator="\n")
        writer.writerow(field.name for field in self.fields)
        writer.writerows([_in_csv(value) for value in row] for row in self.rows)
        return written.getvalue()

    def schema(self) -> dict[str, Any]:
        """Return the Frictionless Table Schema of its CSV."""
        return {
            "fields": [
                {
                    "name": field.name,
                    "type": "number" if field.numeric else "string",
                    **({"unit": field.unit} if field.unit != "1" else {}),
                }
                for field in self.fields
            ],
            "missingValues": [""],
        }

    def frame(self) -> pd.DataFrame:
        """Return it as a data frame, a column a field; nothing is NaN in columns of numbers."""
        import pandas as pd

        return pd.DataFrame(
            {
                field.name: pd.Series(
                    [row[j] for row in self.rows], dtype=float if field.numeric else object
                )
                for j, field in enumerate(self.fields)
            }
        )


def plain_table(table: Table) -> PlainTable:
    """Return a table as plain columns.

    Parameters
    ----------
    table
        A pair ``value ± u`` becomes two columns, and an interval its two ends.
    """
    fields: list[Field] = []
    columns: list[list[float | str | None]] = []
    for j, column in enumerate(table.columns):
        for name, values in _parts(column, [row[j] for row in table.rows]):
            numeric = column.numeric and all(not isinstance(value, str) for value in values)
            fields.append(Field(_unique(name, fields), column.unit, numeric))
            columns.append(values)
    rows = tuple(zip(*columns, strict=True)) if table.rows else ()
    return PlainTable(table.name, table.title, tuple(fields), rows, table.notes)


def _parts(column: Column, cells: list[Cell]) -> list[tuple[str, list[float | str | None]]]:
    """Return the plain columns that one column becomes, each with its heading."""
    sign = to_ascii(column.sign("ascii")) or "remark"
    if any(cell.interval is not None for cell in cells):
        ends = [cell.interval or (math.nan, math.nan) for cell in cells]
        return [
            (heading(f"{sign}, {end}", column.unit, "ascii"), [_finite(each[i]) for each in ends])
            for i, end in enumerate(("lower", "upper"))
        ]
    spreads: list[float | str | None]
    made = [(heading(sign, column.unit, "ascii"), [_value(cell, column) for cell in cells])]
    if any(cell.uncertainty is not None for cell in cells):
        spreads = [_finite(math.nan if c.uncertainty is None else c.uncertainty) for c in cells]
        made.append((heading(f"u({sign})", column.unit, "ascii"), spreads))
    return made


def _value(cell: Cell, column: Column) -> float | str | None:
    if isinstance(cell.raw, str):
        return _NUMBERS_IN_WORDS.get(cell.raw, cell.raw) if column.numeric else cell.raw
    return None if cell.raw is None else _finite(float(cell.raw))


def _finite(value: float) -> float | None:
    return value if math.isfinite(value) else None


def _unique(name: str, before: list[Field]) -> str:
    taken = {field.name for field in before}
    number, made = 1, name
    while made in taken:
        number += 1
        made = f"{name} ({number})"
    return made


def _in_csv(value: float | str | None) -> str:
    if value is None:
        return ""
    return guarded(value) if isinstance(value, str) else repr(value)
