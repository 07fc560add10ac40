"""Tables that say where an uncertainty comes from: budget, priors, influence."""

from __future__ import annotations

import math
from typing import TYPE_CHECKING

from knought.chemistry.quantities import quantity
from knought.reporting.cells import (
    LAYOUTS,
    Cell,
    Column,
    Table,
    number_column,
    pair_cell,
    quantity_column,
    text_column,
    trimmed,
    words,
)
from knought.rounding import unit_text

if TYPE_CHECKING:
    from knought.chemistry.quantities import Quantity
    from knought.fitting.assess import Assessment
    from knought.fitting.bootstrap import Bootstrap
    from knought.fitting.found import Found
    from knought.fitting.monte_carlo import Drawn, MonteCarlo

__all__ = [
    "BUDGETED",
    "bootstrap_table",
    "budget_table",
    "influence_table",
    "monte_carlo_table",
    "prior_table",
]

#: Results whose budget is shown.
BUDGETED = ("rate_constant", "activation_energy", "activation_entropy", "charge_product")

#: Shares below this are nothing.
_ROUNDING = 1e-12

#: At most this many of the largest influences are shown.
_MOST_INFLUENCES = 10


def budget_table(assessment: Assessment) -> Table | None:
    """Return what each source of error adds to the headline results: which one to reduce.

    None where there is one source only.
    """
    found = assessment.headline
    names = [
        name for name in BUDGETED if name in found.parameters and not found.parameters[name].given
    ]
    budgets = [assessment.budget(name) for name in names]
    sources: list[str] = []
    for each in budgets:
        sources += [source for source in each.variances if source not in sources]
    if len(sources) < 2:
        return None
    rows = []
    for source in sources:
        cells = [words(source)]
        for each in budgets:
            share = each.shares.get(source, 0.0)
            u = each.quantity.shown(each.uncertainty(source)) if source in each.variances else 0.0
            if share < _ROUNDING:
                u = 0.0  # nothing but the rounding of floating-point numbers
            cells += [trimmed(u, 2), Cell(share, (("text", f"{share:.1%}"),))]
        rows.append(tuple(cells))
    totals = [words("all together")]
    for each in budgets:
        totals += [
            trimmed(each.quantity.shown(math.sqrt(each.total)), 2),
            Cell(1.0, (("text", "100.0%"),)),
        ]
    columns = [text_column("source of error")]
    for each in budgets:
        what = each.quantity
        columns += [
            Column(
                tuple((layout, f"u({what.symbol.in_layout(layout)})") for layout in LAYOUTS),
                what.shown_unit,
            ),
            number_column("share"),
        ]
    return Table(
        "budget",
        "What each source of error contributes",
        tuple(columns),
        (*rows, tuple(totals)),
        (
            "u is the standard uncertainty that the source alone would leave; shares are of the "
            "variance, and add up.",
        ),
    )


def prior_table(assessment: Assessment) -> Table | None:
    """Return the answer with the priors halved and doubled; None where no law is left open."""
    cases = assessment.prior_sensitivity()
    if not cases:
        return None
    order = assessment.observations.order
    rows = tuple(
        (
            words(case.words),
            pair_cell(case.fit.parameters["rate_constant"]),
            pair_cell(case.fit.parameters.get("charge_product")),
            pair_cell(case.fit.parameters.get("activation_energy")),
        )
        for case in cases
    )
    return Table(
        "priors",
        "How much the answer rests on the priors of the open law",
        (
            text_column("priors of å, c and β"),
            quantity_column(quantity("rate_constant", order)),
            quantity_column(quantity("charge_product")),
            quantity_column(quantity("activation_energy")),
        ),
        rows,
    )


def _signed_cell(shift: float) -> Cell:
    plain = f"{shift:+.2f}"
    return Cell(shift, (("text", plain.replace("-", "−")), ("ascii", plain)))


def influence_table(assessment: Assessment) -> Table | None:
    """Return what moves most when something is left out; None where nothing can be."""
    moved = sorted(assessment.influence(), key=lambda each: -each.largest)[:_MOST_INFLUENCES]
    if not moved:
        return None
    names = list(moved[0].shifts)
    rows = tuple(
        (
            words(f"{each.kind} {each.label}"),
            *(_signed_cell(each.shifts[name]) for name in names),
        )
        for each in moved
    )
    columns = [text_column("left out")]
    for name in names:
        symbol = quantity(name).symbol
        columns.append(
            Column(
                tuple(
                    (
                        layout,
                        f"Δ{symbol.in_layout(layout)}/u"
                        if layout != "ascii"
                        else f"d({symbol.ascii})/u",
                    )
                    for layout in LAYOUTS
                )
            )
        )
    return Table(
        "influence",
        "What moves when something is left out",
        tuple(columns),
        rows,
        ("Changes in units of the standard uncertainty with everything in; the largest ones.",),
    )


def monte_carlo_table(found: MonteCarlo) -> Table:
    """Return what drawing gives beside the closed form: JCGM 101, clause 8."""
    rows = tuple(_drawn_row(each) for each in found.parameters.values())
    how = "" if found.converged else "; not yet stable to two digits of u"
    return Table(
        "monte-carlo",
        f"Monte Carlo, {found.draws} draws, seed {found.seed}{how}",
        (
            text_column("quantity"),
            number_column("u, drawn"),
            number_column("u, closed form"),
            number_column("95 % interval, drawn"),
            number_column("shortest"),
            number_column("closed form"),
            text_column("unit"),
            text_column("ends agree"),
        ),
        rows,
        (
            found.how,
            "Ends agree: both ends of the closed form lie within half a unit of the first "
            "significant digit of u of those drawn (JCGM 101, 8.1).",
        ),
    )


def _drawn_row(drawn: Drawn) -> tuple[Cell, ...]:
    what, u = drawn.quantity, drawn.standard_uncertainty
    spans = (drawn.interval(), drawn.shortest_interval(), drawn.linear_interval)
    return (
        words(what.symbol.text),
        trimmed(what.shown(u), 3),
        trimmed(what.shown(drawn.linear_uncertainty), 3),
        *(_span(what, span, u) for span in spans),
        words(unit_text(what.shown_unit)),
        words("yes" if drawn.validates_linear() else "no"),
    )


def bootstrap_table(again: Bootstrap, found: Found) -> Table:
    """Return what refitting gives beside the closed form."""
    done = len(next(iter(again.values.values())))
    how = (
        "New ln k were drawn about the fitted surface with the errors of the runs."
        if again.kind == "parametric"
        else "Runs were drawn with replacement; with few runs such intervals are too short."
    )
    if found.salt_law == "open":
        how += (
            " Under the open law refits tell how the answer scatters, not what the priors leave "
            "open: å, c and β vary less than their u."
        )
    refused = (
        f" {again.refused} draws could not carry the laws and are left out."
        if again.refused
        else ""
    )
    return Table(
        "bootstrap",
        f"Bootstrap ({again.kind}), {done} refits, seed {again.seed}",
        (
            text_column("quantity"),
            number_column("u, refits"),
            number_column("u, closed form"),
            number_column("95 % interval, refits"),
            number_column("closed form"),
            text_column("unit"),
        ),
        tuple(_again_row(again, found, name) for name in again.values),
        (how + refused,),
    )


def _again_row(again: Bootstrap, found: Found, name: str) -> tuple[Cell, ...]:
    estimate = found.parameters[name]
    what, u = estimate.quantity, again.standard_uncertainty(name)
    low, high = estimate.interval(0.95)
    spans = (again.interval(name), (float(low), float(high)))
    return (
        words(what.symbol.text),
        trimmed(what.shown(u), 3),
        trimmed(what.shown(float(estimate.standard_uncertainty)), 3),
        *(_span(what, span, u) for span in spans),
        words(unit_text(what.shown_unit)),
    )


def _span(what: Quantity, span: tuple[float, float], u: float) -> Cell:
    text = " to ".join(what.rounded(end, u).number() for end in span)
    low, high = (what.shown(end) for end in span)
    return Cell(None, (("text", text),), interval=(low, high))
