"""Cells merged over several rows: each row has what the merged cell says."""

from __future__ import annotations

from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from collections.abc import Iterable, Iterator

    from knought.measurement.reading.grid import Block, Span

__all__ = ["filled"]

#: More rows are not merged by hand.
_MOST_ROWS = 5000


def filled(blocks: Iterable[Block], merged: Iterable[Span]) -> Iterator[tuple[int, list[str]]]:
    """Yield rows with the cells that are merged over several rows filled in.

    Parameters
    ----------
    blocks
        The rows.
    merged
        The merged cells. Cells merged within one row keep their text at their first column.
    """
    starts: dict[int, list[Span]] = {}
    for span in merged:
        if span.first_row < span.last_row <= span.first_row + _MOST_ROWS:
            starts.setdefault(span.first_row, []).append(span)
    open_spans: list[tuple[Span, str]] = []
    for block in blocks:
        for row, cells in block.rows():
            open_spans = [(span, text) for span, text in open_spans if row <= span.last_row]
            for span, text in open_spans:
                _fill(cells, span.first_column, text)
            for span in starts.get(row, ()):
                text = cells[span.first_column] if span.first_column < len(cells) else ""
                open_spans.append((span, text))
            yield row, cells


def _fill(cells: list[str], place: int, text: str) -> None:
    cells.extend([""] * (place + 1 - len(cells)))
    cells[place] = cells[place] or text
