"""Tables on the literature: every paper at its own conditions, and several papers together."""

from __future__ import annotations

import math
from typing import TYPE_CHECKING

from knought.discussion.compare import EXTRAPOLATED_K
from knought.discussion.literature_sentences import explanation_text, probability_text, verdict_text
from knought.discussion.standing import law_words
from knought.reporting.cells import (
    Cell,
    Table,
    number,
    number_column,
    pair_cell,
    text_column,
    words,
)
from knought.rounding import rounded

if TYPE_CHECKING:
    from knought.chemistry.quantities import Quantity
    from knought.discussion.carried import CarriedConsensus
    from knought.discussion.compare import Comparison
    from knought.discussion.matched import Match
    from knought.rounding import Layout

__all__ = ["consensus_table", "explanations_table", "literature_table"]

_LAYOUTS: tuple[Layout, ...] = ("text", "ascii", "html", "latex")

_METHODS = {
    "dersimonian-laird": "DerSimonian-Laird",
    "paule-mandel": "Paule-Mandel",
    "fixed": "weights 1/u²",
}


def literature_table(comparison: Comparison) -> Table:
    """Return every literature value with ours at its conditions and a verdict.

    Parameters
    ----------
    comparison
        Our result and the literature.

    Returns
    -------
    Table
        One row a literature value.
    """
    notes = [
        f"Ours carried to each paper's T and I ({law_words(comparison.fit)}). z = (ours - "
        "literature)/combined standard uncertainty, of ln k for rate constants; E_n the same with "
        "expanded uncertainties (ISO 13528).",
    ]
    assumed = dict.fromkeys(
        f"{each.literature.source}: {text}" for each in comparison.matches for text in each.assumed
    )
    if assumed:
        notes.append(f"Assumed: {'; '.join(assumed)}.")
    if comparison.extrapolates:
        beyond = dict.fromkeys(
            caveat.message for each in comparison.matches for caveat in each.caveats
        )
        notes += [*beyond, EXTRAPOLATED_K]
    return Table(
        "literature",
        "Literature values, and ours at the same conditions",
        (
            text_column("paper"),
            text_column("quantity"),
            number_column("T / K"),
            number_column("I / (mol/L)"),
            number_column("literature"),
            text_column("± means"),
            number_column("ours"),
            number_column("z"),
            number_column("E_n"),
            text_column("verdict"),
        ),
        tuple(_match_row(each, comparison) for each in comparison.matches),
        tuple(notes),
    )


def _match_row(match: Match, comparison: Comparison) -> tuple[Cell, ...]:
    value = match.literature
    what = value.quantity(comparison.fit.observations.order)
    return (
        words(value.source),
        _symbol(what),
        words("–") if value.T is None else number(match.T, decimals=2),
        words("–") if match.I is None else number(match.I, digits=3),
        _written(what, value.value, value.standard_uncertainty),
        words(value.spread.meaning),
        pair_cell(match.ours),
        _score(match.z, 1),
        _score(match.e_number, 2),
        words(verdict_text(match)),
    )


def _symbol(what: Quantity) -> Cell:
    """Return a quantity's sign with its unit."""
    return Cell(what.name, tuple((layout, what.heading(layout)) for layout in _LAYOUTS))


def _written(what: Quantity, value: float, u: float | None) -> Cell:
    """Return value ± u in the shown unit, without the unit."""
    digits = what.rounded(value, u)
    texts = tuple((layout, digits.pair(layout)) for layout in _LAYOUTS)
    return Cell(what.shown(value), texts, None if u is None else what.shown(u))


def _score(value: float, decimals: int) -> Cell:
    return number(value, decimals=decimals) if math.isfinite(value) else words("–")


def explanations_table(comparison: Comparison) -> Table | None:
    """Return the confusions that would bring papers to ours; None where none would."""
    rows = tuple(
        (words(each.literature.source), words(verdict_text(each)), words(explanation_text(each)))
        for each in comparison.matches
        if each.explanations
    )
    if not rows:
        return None
    return Table(
        "literature-explanations",
        "Common confusions that would explain a difference",
        (text_column("paper"), text_column("verdict"), text_column("would be explained by")),
        rows,
        (
            "Offered because their size fits, to be checked in the paper; none is applied. Several "
            "may fit one difference by chance.",
        ),
    )


def consensus_table(comparison: Comparison) -> Table | None:
    """Return several papers together on our conditions, one row a quantity; None for none."""
    rows = tuple(_consensus_row(each) for each in comparison.consensuses.values() if each.consensus)
    if not rows:
        return None
    return Table(
        "literature-consensus",
        "Several papers together on our conditions",
        (
            text_column("quantity"),
            number_column("T / K"),
            number_column("I / (mol/L)"),
            number_column("values"),
            number_column("consensus"),
            number_column("95 % interval"),
            number_column("Birge ratio"),
            number_column("I² / %"),
            number_column("p"),
            number_column("ours"),
            number_column("z"),
            text_column("method"),
        ),
        rows,
        (
            "Each paper carried to one T and I along our surface. The interval is that of Hartung "
            "and Knapp; rate constants are combined as ln k.",
        ),
    )


def _consensus_row(carried: CarriedConsensus) -> tuple[Cell, ...]:
    combined = carried.consensus
    what = carried.ours.quantity
    if combined is None:
        return ()
    low, high = combined.hartung_knapp_interval()
    u = max(combined.standard_uncertainty, combined.hartung_knapp_uncertainty)
    value = math.exp(combined.value) if carried.logarithmic else combined.value
    ends = [math.exp(end) if carried.logarithmic else end for end in (low, high)]
    return (
        _symbol(what),
        number(carried.T, decimals=2),
        words("–") if carried.I is None else number(carried.I, digits=3),
        number(float(combined.sources), decimals=0),
        _written(what, value, value * u if carried.logarithmic else u),
        _interval(what, ends[0], ends[1], logarithmic=carried.logarithmic),
        number(combined.birge_ratio, decimals=2),
        number(100 * combined.i_squared, decimals=0),
        words(probability_text(combined.probability).removeprefix("p ").removeprefix("= ")),
        pair_cell(carried.ours),
        _score(carried.z, 1),
        words(_METHODS[combined.method]),
    )


def _interval(what: Quantity, low: float, high: float, *, logarithmic: bool) -> Cell:
    """Return an interval; the ends of one in ln k may lie decades apart: each has its digits."""
    if logarithmic:
        ends = [rounded(what.shown(end), digits=3) for end in (low, high)]
    else:
        ends = [what.rounded(end, (high - low) / 4) for end in (low, high)]
    texts = tuple(
        (layout, f"{ends[0].number(layout)} to {ends[1].number(layout)}") for layout in _LAYOUTS
    )
    return Cell(None, texts, interval=(what.shown(low), what.shown(high)))
