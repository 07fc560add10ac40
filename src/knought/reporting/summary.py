"""The summary in the terminal: the answer at a glance, what ± means, and what must be said."""

from __future__ import annotations

import textwrap
from typing import TYPE_CHECKING

from knought.reporting.ascii_text import to_ascii
from knought.reporting.cells import plain_lines
from knought.reporting.sentences import (
    charge_sentences,
    check_sentences,
    laws_sentence,
    runs_sentence,
)
from knought.reporting.tables import (
    data_alone_table,
    headline_table,
    laws_table,
    working_table,
)
from knought.reporting.uncertainty_tables import budget_table

if TYPE_CHECKING:
    from knought.fitting.assess import Assessment
    from knought.reporting.cells import Table
    from knought.rounding import Layout

__all__ = ["summary", "to_ascii"]

_WIDTH = 100


def summary(assessment: Assessment, layout: Layout = "text") -> str:
    """Return the summary as text.

    Parameters
    ----------
    assessment
        What was found.
    layout
        ``"text"``, or ``"ascii"`` for terminals without Unicode.
    """
    blocks = [[*_folded(runs_sentence(assessment)), *_folded(laws_sentence(assessment))]]
    blocks.append(_titled(headline_table(assessment), layout))
    alone = data_alone_table(assessment)
    if alone is not None:
        blocks.append(_titled(alone, layout))
    sentences = charge_sentences(assessment.data_alone or assessment.headline)
    sentences += check_sentences(assessment)
    if sentences:
        blocks.append([line for sentence in sentences for line in _folded(sentence)])
    working = working_table(assessment)
    if working is not None:
        blocks.append(_titled(working, layout))
    budget = budget_table(assessment)
    if budget is not None:
        blocks.append(_titled(budget, layout))
    if len(assessment.laws) > 1:
        blocks.append(_titled(laws_table(assessment), layout))
    if assessment.caveats:
        blocks.append(_caveat_lines(assessment))
    text = "\n\n".join("\n".join(block) for block in blocks) + "\n"
    return to_ascii(text) if layout == "ascii" else text


def _titled(table: Table, layout: Layout) -> list[str]:
    return [table.title, *plain_lines(table, layout, _WIDTH)]


def _folded(text: str, indent: str = "") -> list[str]:
    return textwrap.wrap(text, _WIDTH, subsequent_indent=indent)


def _caveat_lines(assessment: Assessment) -> list[str]:
    lines = ["What must be said with these numbers"]
    for caveat in assessment.caveats:
        lines += textwrap.wrap(
            caveat.message, _WIDTH, initial_indent="  ! ", subsequent_indent="    "
        )
    return lines
