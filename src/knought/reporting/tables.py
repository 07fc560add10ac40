"""The tables of a report: headline, working conditions, laws beside each other, runs."""

from __future__ import annotations

import math
from typing import TYPE_CHECKING

import numpy as np

from knought.chemistry.quantities import quantity
from knought.fitting.open_fit import OpenFit
from knought.fitting.surface_fit import SurfaceFit
from knought.fitting.verdicts import NOT_DESCRIBED
from knought.reporting.cells import (
    Cell,
    Column,
    Table,
    estimate_cells,
    interval_cell,
    number,
    number_column,
    pair_cell,
    quantity_column,
    symbol_cell,
    text_column,
    trimmed,
    unit_cell,
    words,
)
from knought.rounding import brief

if TYPE_CHECKING:
    from knought.arrays import FloatArray
    from knought.fitting.assess import Assessment
    from knought.fitting.found import Found

__all__ = [
    "data_alone_table",
    "headline_table",
    "laws_table",
    "runs_table",
    "temperature_laws_table",
    "working_table",
]

#: Parameters in the order of the headline table; the rest of the registry is left to the record.
_HEADLINE = (
    "rate_constant",
    "activation_energy",
    "ln_pre_exponential_factor",
    "activation_enthalpy",
    "activation_entropy",
    "activation_gibbs_energy",
    "activation_heat_capacity",
    "temperature_exponent",
    "charge_product",
    "interaction_coefficient",
    "ion_size",
)

#: Above this many levels, a table of working conditions shows a spread of them only.
_MOST_CONDITIONS = 8


#: Below this χ²/ν is rounding.
_ROUNDING = 1e-15


def headline_table(assessment: Assessment) -> Table:
    """Return value, standard uncertainty and 95 % interval of every headline parameter."""
    found = assessment.headline
    return Table(
        "parameters",
        f"Parameters at {condition_words(found)}",
        _parameter_columns(),
        _parameter_rows(found),
        (meaning_of_uncertainty(found),),
    )


def data_alone_table(assessment: Assessment) -> Table | None:
    """Return what the runs alone say where the charges are given; None where they are not."""
    found = assessment.data_alone
    if found is None:
        return None
    rows = tuple(
        row
        for row in _parameter_rows(found)
        if row[1].raw in {"rate_constant", "charge_product", "activation_energy"}
    )
    return Table(
        "data-alone",
        "What the runs alone say, with the charges left open",
        _parameter_columns(),
        rows,
    )


def condition_words(found: Found) -> str:
    """Return ``"298.15 K and I → 0"``, or what takes its place."""
    T = f"{found.reference_temperature:.2f} K"
    return f"{T} and I → 0" if found.describes_salt else f"{T} in the runs' own medium"


def meaning_of_uncertainty(found: Found) -> str:
    """Return the sentence that says what every ± of a fit means."""
    coverage = "Intervals hold 95 %, equal tails"
    if isinstance(found, OpenFit):
        coverage += ", integrated over the open salt law"
    elif found.distribution.known is not None:
        nu = found.scatter.headline_degrees_of_freedom
        coverage += (
            f", the scatter known to {nu:.3g} degrees of freedom beside shared errors of known size"
        )
    elif found.scatter.from_scatter:
        coverage += f", Student t with {found.scatter.degrees_of_freedom} degrees of freedom"
    return f"u is a standard uncertainty, {found.includes}. {found.excludes} {coverage}.".replace(
        "  ", " "
    )


def _parameter_columns() -> tuple[Column, ...]:
    return (
        text_column("quantity"),
        text_column("symbol"),
        number_column("value"),
        number_column("u"),
        number_column("95 % interval"),
        text_column("unit"),
    )


def _parameter_rows(found: Found) -> tuple[tuple[Cell, ...], ...]:
    parameters = found.parameters
    rows = []
    for name in _HEADLINE:
        if name not in parameters or (name == "ion_size" and isinstance(found, OpenFit)):
            continue
        estimate = parameters[name]
        rows.append(
            (
                words(estimate.quantity.words),
                symbol_cell(estimate.quantity.symbol, name),
                *estimate_cells(estimate),
                interval_cell(estimate),
                unit_cell(estimate),
            )
        )
    return tuple(rows)


def working_table(assessment: Assessment) -> Table | None:
    """Return k and activation parameters at T_ref and each working ionic strength.

    None where the headline says nothing of salt.
    """
    found = assessment.headline
    if not found.describes_salt:
        return None
    levels = np.concatenate([[0.0], _spread(found.observations.ionic_strength_levels)])
    levels = np.unique(levels)
    at = [found.at(I=float(I)) for I in levels]
    names = [name for name in ("rate_constant", *_HEADLINE[1:6]) if name in at[0]]
    order = found.observations.order
    columns = [quantity_column(quantity("ionic_strength"))]
    for name in names:
        what = quantity("measured_rate_constant" if name == "rate_constant" else name, order)
        columns.append(quantity_column(what))
    return Table(
        "working",
        f"At {found.reference_temperature:.2f} K and each ionic strength",
        tuple(columns),
        tuple(
            (
                words("→ 0") if I == 0 else trimmed(I, 3),
                *(pair_cell(estimates[name]) for name in names),
            )
            for I, estimates in zip(levels, at, strict=True)
        ),
        (
            "± is one standard uncertainty. Activation parameters change with I because the "
            "Debye–Hückel coefficient A rises with temperature: compare with literature at the "
            "same I.",
        ),
    )


def _spread(levels: FloatArray) -> FloatArray:
    if len(levels) <= _MOST_CONDITIONS:
        return levels
    chosen = np.linspace(0, len(levels) - 1, _MOST_CONDITIONS).round().astype(int)
    return np.asarray(levels[chosen])


def laws_table(assessment: Assessment) -> Table:
    """Return what every named salt law would have answered."""
    headline = assessment.headline
    order = headline.observations.order
    stated = headline.scatter.stated
    lowest = min(
        (law.aicc for law in assessment.laws if not math.isnan(law.aicc)), default=math.nan
    )
    rows = [_law_row(headline, "headline", math.nan)] if isinstance(headline, OpenFit) else []
    for law in assessment.laws:
        difference = law.aicc - lowest
        chosen = isinstance(headline, SurfaceFit) and law.salt_law == headline.salt_law
        rows.append(_law_row(law, "headline" if chosen else _law_remark(law), difference))
    notes = [
        "± is one standard uncertainty of that law alone, as if it were known to be right. "
        "The law 'no salt effect' gives k in the runs' own medium."
    ]
    notes += [
        f"{refusal.salt_law} ({refusal.temperature_law}): {refusal.reason}"
        for refusal in assessment.refused
        if refusal.temperature_law == assessment.temperature_law
    ]
    columns = [
        text_column("salt law"),
        quantity_column(quantity("rate_constant", order)),
        quantity_column(quantity("charge_product")),
    ]
    if "activation_energy" in headline.parameters:
        columns.append(quantity_column(quantity("activation_energy")))
    columns += [number_column("χ²/ν"), number_column("p")] if stated else [number_column("s(ln k)")]
    columns += [number_column("ΔAICc"), text_column("remark")]
    return Table(
        "laws",
        "Does the conclusion survive another salt law?",
        tuple(columns),
        tuple(rows),
        tuple(notes),
    )


def _law_row(found: Found, remark: str, difference: float) -> tuple[Cell, ...]:
    parameters = found.parameters
    energy = parameters.get("activation_energy")
    return (
        words(found.surface.salt_law.words),
        pair_cell(parameters["rate_constant"]),
        pair_cell(parameters.get("charge_product")),
        *((pair_cell(energy),) if energy is not None else ()),
        *_misfit_cells(found),
        words("–")
        if math.isnan(difference)
        else Cell(difference, (("text", f"{difference:.1f}"),)),
        words(remark),
    )


def _misfit_cells(found: Found) -> tuple[Cell, ...]:
    """Return χ²/ν and its probability where u is stated, else the standard deviation of ln k."""
    scatter = found.scatter
    misfit = scatter.reduced_chi_square if scatter.stated else scatter.birge_ratio
    if scatter.stated and misfit < _ROUNDING:
        misfit = 0.0  # the law passes through every run: what is left is rounding
    shown = words("–") if math.isnan(misfit) else trimmed(misfit, 3)
    if not scatter.stated:
        return (shown,)
    chance = scatter.probability
    if math.isnan(chance):
        return shown, words("–")
    return shown, Cell(chance, (("text", f"{chance:.2f}" if chance >= 0.01 else _small(chance)),))


def _small(chance: float) -> str:
    return "< 10⁻⁶" if chance < 1e-6 else brief(float(f"{chance:.1g}"), 1)


def _law_remark(law: SurfaceFit) -> str:
    remarks = []
    if law.scatter.kind == "enlarged":
        remarks.append("does not fit" if law.scatter.probability < NOT_DESCRIBED else "fits poorly")
    form = law.surface.salt_law.form
    if form is not None and any(caveat.code == "outside-domain" for caveat in law.caveats):
        remarks.append(f"meant for I < {form.domain.upper:g}")
    return "; ".join(remarks)


def temperature_laws_table(assessment: Assessment) -> Table | None:
    """Return the headline's salt law with every temperature law; None for one temperature."""
    if not assessment.temperature_laws:
        return None
    rows = []
    for found in assessment.temperature_laws:
        parameters = found.parameters
        rows.append(
            (
                words(found.surface.temperature_law.words),
                pair_cell(parameters["rate_constant"]),
                pair_cell(parameters["activation_energy"]),
                pair_cell(parameters["activation_enthalpy"]),
                pair_cell(parameters["activation_entropy"]),
                pair_cell(parameters.get("activation_heat_capacity")),
                *_misfit_cells(found),
            )
        )
    stated = assessment.headline.scatter.stated
    order = assessment.observations.order
    return Table(
        "temperature-laws",
        "The same with other temperature laws",
        (
            text_column("temperature law"),
            quantity_column(quantity("rate_constant", order)),
            quantity_column(quantity("activation_energy")),
            quantity_column(quantity("activation_enthalpy")),
            quantity_column(quantity("activation_entropy")),
            quantity_column(quantity("activation_heat_capacity")),
            *(
                [number_column("χ²/ν"), number_column("p")]
                if stated
                else [number_column("s(ln k)")]
            ),
        ),
        tuple(rows),
    )


def runs_table(assessment: Assessment) -> Table:
    """Return every run with its fitted value and residual; runs left out say why."""
    rates, found = assessment.rates, assessment.headline
    residuals = iter(found.residuals)
    standardised = iter(assessment.diagnostics.studentised)
    pulls = iter(assessment.diagnostics.leverage)
    predicted = iter(np.exp(found.predicted_ln_k))
    k = quantity("measured_rate_constant", rates.order)
    rows = []
    for i, run in enumerate(rates.run):
        conditions = [words(run), number(float(rates.T[i]), decimals=2)]
        if rates.I is not None:
            conditions.append(trimmed(rates.I[i], 4))
        u = None if rates.u_k is None else float(rates.u_k[i])
        digits = k.rounded(float(rates.k[i]), u)
        shown = Cell(
            float(rates.k[i]),
            tuple((layout, digits.pair(layout)) for layout in ("text", "ascii", "html", "latex")),
            None if u is None else k.shown(u),
        )
        if rates.used[i]:
            outcome = [
                number(float(next(predicted)), digits=4),
                number(float(next(residuals)), decimals=4),
                number(float(next(standardised)), decimals=2),
                number(float(next(pulls)), decimals=2),
                words(""),
            ]
        else:
            outcome = [*[words("–")] * 4, words(f"left out: {rates.reason[i]}")]
        rows.append((*conditions, shown, *outcome))
    has_I = rates.I is not None
    return Table(
        "runs",
        "Runs",
        (
            text_column("run"),
            quantity_column(quantity("temperature")),
            *((quantity_column(quantity("ionic_strength")),) if has_I else ()),
            quantity_column(k),
            number_column("k fitted"),
            number_column("ln k residual"),
            number_column("studentised"),
            number_column("leverage"),
            text_column("remark"),
        ),
        tuple(rows),
        ("Studentised: the residual over its own standard deviation, u √(1 − leverage).",),
    )
