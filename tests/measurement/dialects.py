"""A table written in any of the dialects that laboratories use, by a writer of its own."""

from __future__ import annotations

import csv
import io
from dataclasses import dataclass
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from knought.measurement.table import RateTable

__all__ = ["Dialect", "written"]

_SUPERSCRIPTS = str.maketrans("0123456789-", "⁰¹²³⁴⁵⁶⁷⁸⁹⁻")


@dataclass(frozen=True)
class Dialect:
    """How a table is written.

    Attributes
    ----------
    delimiter, decimal, encoding, line_end
        Of the file.
    header
        0 for ``T/K``, 1 for ``T (K)``, 2 for a row of units, 3 for two lines.
    number
        0 for ``2.41e-3``, 1 for ``2.41·10⁻³``, 2 for ``2.41 × 10^-3`` with a typographic minus.
    uncertainty
        ``"column"`` or ``"±"`` in the same cell.
    clutter
        Whether there are comments, blank rows and columns, and notes.
    """

    delimiter: str
    decimal: str
    encoding: str
    line_end: str
    header: int
    number: int
    uncertainty: str
    clutter: bool

    def digits(self, value: float, *, with_power: bool = False) -> str:
        """Write a number without losing a bit of it."""
        text = repr(value)
        if with_power and "e" not in text:
            text += "e0"
        mantissa, _, exponent = text.partition("e")
        power = str(int(exponent)) if exponent else ""
        if power and self.number == 1:
            text = f"{mantissa}·10{power.translate(_SUPERSCRIPTS)}"
        elif power and self.number == 2:
            text = f"{mantissa} × 10^{power.replace('-', '−')}"
        return text.replace(".", self.decimal)


def written(table: RateTable, dialect: Dialect) -> bytes:
    """Return a table as the bytes of a file."""
    k = table.rate_constant_unit
    titles = [("T", "K"), ("k", k), *([("I", "mol/L")] if table.I is not None else [])]
    if table.u_k is not None and dialect.uncertainty == "column":
        titles.append(("u(k)", k))
    rows = [*_header(titles, dialect), *_body(table, dialect)]
    if dialect.clutter:
        rows = [[*row[:1], "", *row[1:]] for row in rows]
        rows = [["# by the bath"], [], *rows[:-1], [], rows[-1], [], ["all by hand"]]
    text = io.StringIO()
    writer = csv.writer(text, delimiter=dialect.delimiter, lineterminator=dialect.line_end)
    writer.writerows(rows)
    return text.getvalue().encode(dialect.encoding)


def _header(titles: list[tuple[str, str]], dialect: Dialect) -> list[list[str]]:
    if dialect.header == 2:
        return [[sign for sign, _ in titles], [unit for _, unit in titles]]
    if dialect.header == 1:
        return [[f"{sign} ({unit})" for sign, unit in titles]]
    if dialect.header == 3:
        words = {"T": "temperature", "k": "rate constant", "I": "ionic strength", "u(k)": ""}
        return [[words[sign] for sign, _ in titles], [f"{s}/({u})" for s, u in titles]]
    return [[f"{sign}/({unit})" for sign, unit in titles]]


def _body(table: RateTable, dialect: Dialect) -> list[list[str]]:
    rows = []
    for place in range(len(table)):
        k = dialect.digits(float(table.k[place]))
        row = [dialect.digits(float(table.T[place])), k]
        if table.I is not None:
            row.append(dialect.digits(float(table.I[place])))
        if table.u_k is not None:
            u = dialect.digits(float(table.u_k[place]))
            if dialect.uncertainty == "column":
                row.append(u)
            else:
                k, u = (
                    dialect.digits(float(values[place]), with_power=True)
                    for values in (table.k, table.u_k)
                )
                row[1] = f"{k} ± {u}"
        rows.append(row)
    return rows
