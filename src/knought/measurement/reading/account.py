"""The account of what was understood: shown with every result and kept in the record."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from knought.measurement.table import RateTable

__all__ = ["AccountLine", "account_lines"]


@dataclass(frozen=True)
class AccountLine:
    """One thing that was understood.

    Attributes
    ----------
    column
        Header of the column as it stands in the file; empty where the line is not on a column.
    words
        What it was read as, or what was done; goes on from the column.
    before, after
        The first value as it stands in the file, and as it is kept, with its unit.
    """

    words: str
    column: str = ""
    before: str = ""
    after: str = ""

    def __str__(self) -> str:
        text = f"{self.column} {self.words}" if self.column else self.words
        if self.before or self.after:
            text += f": {self.before} → {self.after}"
        return text


def account_lines(table: RateTable) -> list[str]:
    """Return the account of a table, a line each.

    Parameters
    ----------
    table
        A table that was read from a file.
    """
    source = table.source
    lines = []
    if source is not None:
        sheet = "" if source.sheet is None else f", sheet {source.sheet}"
        lines.append(f"{source.name}{sheet} (SHA-256 {source.sha256[:12]}…)")
    return [*lines, *(f"  {line}" for line in table.account)]
