"""The tables of a plan: the runs, what to expect of them, and how likely the verdicts are."""

from __future__ import annotations

from typing import TYPE_CHECKING

from knought.chemistry.quantities import quantity
from knought.reporting.cells import (
    Cell,
    Column,
    Table,
    number,
    number_column,
    plain_lines,
    quantity_column,
    symbol_cell,
    text_column,
    trimmed,
    words,
)
from knought.rounding import unit_text

if TYPE_CHECKING:
    from knought.chemistry.quantities import Quantity
    from knought.discussion.next_runs import Plan
    from knought.discussion.runs_curve import RunsCurve
    from knought.rounding import Layout

__all__ = ["curve_table", "expectation_table", "plan_summary", "planned_runs_table", "power_table"]

#: k is not planned, so that the u of these is given relative or in units of one.
_RELATIVE = "rate_constant"

#: What is shown against the number of runs.
_CURVE = ("rate_constant", "activation_energy", "activation_entropy", "charge_product")


def planned_runs_table(plan: Plan) -> Table:
    """Return the runs in working order."""
    columns = [text_column("run"), quantity_column(quantity("temperature"))]
    columns.append(quantity_column(quantity("celsius_temperature")))
    if plan.reach.I is not None:
        columns.append(quantity_column(quantity("ionic_strength")))
    named = any(run.salt for run in plan.runs)
    if named:
        columns.append(text_column("salt"))
    columns.append(number_column("day"))
    rows = []
    for run in plan.runs:
        row = [words(run.run), number(run.T, decimals=2), number(run.T - 273.15, decimals=1)]
        if run.I is not None:
            row.append(trimmed(run.I, 4))
        if named:
            row.append(words(run.salt))
        rows.append((*row, number(float(run.day), decimals=0)))
    return Table(
        "planned-runs",
        "Runs in working order",
        tuple(columns),
        tuple(rows),
        (
            "Runs of one temperature stand together; their order inside, and the order of the "
            f"temperatures, is random (seed {plan.request.seed}).",
        ),
    )


def expectation_table(plan: Plan) -> Table:
    """Return the expected standard uncertainty of every headline quantity, before and after."""
    before = plan.uncertainty_before
    columns = [text_column("quantity"), text_column("symbol")]
    if before:
        columns.append(number_column("u before"))
    columns += [number_column("u expected"), text_column("unit")]
    rows = []
    for name, after in plan.expected_uncertainty.items():
        what = quantity(name, plan.model.surface.order)
        row = [words(what.words), symbol_cell(what.symbol, name)]
        if before:
            row.append(_shown(what, before.get(name)))
        row += [_shown(what, after), _unit(what)]
        rows.append(tuple(row))
    T = plan.model.surface.reference_temperature
    where = f"{T:.2f} K and I → 0" if plan.model.describes_salt else f"{T:.2f} K"
    price = (plan.price_of_floor - 1) * 100
    levels = f"{plan.floor.temperatures} temperatures"
    if plan.reach.I is not None:
        levels += f" and {plan.floor.ionic_strengths} ionic strengths"
    return Table(
        "expectation",
        f"What {len(plan.runs)} runs are expected to give at {where}",
        tuple(columns),
        tuple(rows),
        (
            f"u is a standard uncertainty, the root mean square of what {plan.request.data_sets} "
            f"simulated data sets report (seed {plan.request.seed}).",
            f"Efficiency against the best continuous design: {plan.efficiency:.0%}.",
            f"Keeping at least {levels}, so that curvature and lack of fit stay testable, enlarges "
            f"u of the aim by {price:.0f} %.",
        ),
    )


def power_table(plan: Plan) -> Table | None:
    """Return how likely each verdict is; None where the plan can give none."""
    if not plan.powers:
        return None
    rows = tuple(
        (
            words(power.words),
            number(power.by_formula * 100, decimals=0),
            number(power.by_simulation * 100, decimals=0),
        )
        for power in plan.powers
    )
    count = plan.powers[0].data_sets
    return Table(
        "power",
        "How likely each verdict is",
        (
            text_column("verdict"),
            number_column("formula, %"),
            number_column("simulation, %"),
        ),
        rows,
        (
            f"By the formula for a normal estimate, and the share of {count} simulated data sets "
            "solved as real ones are.",
        ),
    )


def curve_table(curve: RunsCurve) -> Table:
    """Return the expected u of every headline quantity against the number of runs."""
    whats = {name: quantity(name) for name in _CURVE if name in curve.u}
    columns = [number_column("runs")]
    columns += [
        Column(
            tuple(
                (layout, f"u({what.symbol.in_layout(layout)})")
                for layout in ("text", "ascii", "html", "latex")
            ),
            "%" if name == _RELATIVE else what.shown_unit,
        )
        for name, what in whats.items()
    ]
    rows = tuple(
        (
            number(float(runs), decimals=0),
            *(_shown(what, float(curve.u[name][i])) for name, what in whats.items()),
        )
        for i, runs in enumerate(curve.runs)
    )
    return Table(
        "runs-curve",
        "Expected u against the number of runs, each with its own plan",
        tuple(columns),
        rows,
    )


def _shown(what: Quantity, u: float | None) -> Cell:
    if u is None:
        return words("–")
    if what.name == _RELATIVE:
        return number(u * 100, digits=2)
    return number(what.shown(u), digits=2)


def _unit(what: Quantity) -> Cell:
    if what.name == _RELATIVE:
        return words("% of k°")
    layouts: tuple[Layout, ...] = ("text", "ascii", "html", "latex")
    return Cell(
        what.shown_unit, tuple((layout, unit_text(what.shown_unit, layout)) for layout in layouts)
    )


def plan_summary(plan: Plan, layout: Layout = "text", width: int = 100) -> str:
    """Return a plan as text for the terminal: runs, expectations, verdicts, assumptions, cautions.

    Parameters
    ----------
    plan
        The plan.
    layout
        ``"text"`` or ``"ascii"``.
    width
        Sentences are folded to this many characters.
    """
    import textwrap

    tables = (planned_runs_table(plan), expectation_table(plan), power_table(plan))
    blocks = [
        "\n".join([table.title, *plain_lines(table, layout, width)])
        for table in tables
        if table is not None
    ]
    for title, sentences in (
        ("What this plan assumes", plan.assumptions),
        ("Cautions", tuple(caution.message for caution in plan.cautions)),
    ):
        if sentences:
            folded = [
                textwrap.fill(text, width, initial_indent="- ", subsequent_indent="  ")
                for text in sentences
            ]
            blocks.append("\n".join([title, *folded]))
    return "\n\n".join(blocks)
