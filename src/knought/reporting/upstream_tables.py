"""What a report shows of the way from traces to rate constants: its table and its lines."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from knought.chemistry.quantities import quantity
from knought.reporting.cells import (
    LAYOUTS,
    Cell,
    Column,
    Table,
    number,
    number_column,
    quantity_column,
    text_column,
    words,
)
from knought.rounding import rounded

if TYPE_CHECKING:
    from knought.measurement.reduction import Reduction
    from knought.measurement.reduction_run import ReducedRun

__all__ = ["reduction_record", "reduction_table"]


def reduction_table(reduction: Reduction) -> Table:
    """Return what was done to each trace, and how its k came about: a row a run."""
    rates, first_order = reduction.rates, reduction.method.kind == "first-order"
    what = quantity("measured_rate_constant", rates.order)
    traced = any(each.window for each in reduction.runs)
    columns = [text_column("run"), quantity_column(quantity("temperature"))]
    if rates.I is not None:
        columns.append(quantity_column(quantity("ionic_strength")))
    columns.append(_column("k_obs" if first_order else "slope at t = 0", "s^-1"))
    if traced:
        columns += [
            number_column("u/u′"),
            _column("window", "s"),
            number_column("half-lives" if first_order else "conversion"),
        ]
    if traced and not first_order:
        columns.append(number_column("order"))
    if not first_order:
        columns.append(_column("ε", "L mol^-1 cm^-1"))
    columns.append(quantity_column(what))
    rows = []
    for i, each in enumerate(reduction.runs):
        cells = [words(each.run), number(float(rates.T[i]), decimals=2)]
        if rates.I is not None:
            cells.append(number(float(rates.I[i]), digits=3))
        cells.append(_pair(each.measured, each.u_measured))
        if traced:
            cells += _trace_cells(each, first_order=first_order)
        if not first_order:
            cells.append(_plain(each.absorptivity or 0.0, 4))
        cells.append(_pair(float(rates.k[i]), 0.0 if rates.u_k is None else float(rates.u_k[i])))
        rows.append(tuple(cells))
    return Table(
        "reduction",
        "From each trace to its rate constant" if traced else "From each slope to its rate",
        tuple(columns),
        tuple(rows),
        _notes(reduction, traced=traced),
    )


def _column(sign: str, unit: str) -> Column:
    return Column((("text", sign),), unit)


def _trace_cells(each: ReducedRun, *, first_order: bool) -> list[Cell]:
    low, high = each.window or (0.0, 0.0)
    progress = each.progress or 0.0
    share = f"{progress:.1f}" if first_order else f"{100 * progress:.0f} %"
    ratio = each.u_measured / each.u_independent if each.u_independent else float("nan")
    cells = [
        number(ratio, decimals=1),
        words(f"{low:.4g} to {high:.4g}"),
        Cell(progress, (("text", share),)),
    ]
    if not first_order:
        cells.append(number(float(each.polynomial or 0), decimals=0))
    return cells


def _plain(value: float, digits: int) -> Cell:
    shown = rounded(value, digits=digits)
    return Cell(value, tuple((layout, shown.number(layout)) for layout in LAYOUTS))


def _pair(value: float, u: float) -> Cell:
    shown = rounded(value, u)
    return Cell(value, tuple((layout, shown.pair(layout)) for layout in LAYOUTS))


def _notes(reduction: Reduction, *, traced: bool) -> tuple[str, ...]:
    said = []
    if traced:
        said.append(
            "± is one standard uncertainty. u/u′: how much larger u is than least squares would "
            "claim if the noise were independent from point to point."
        )
    optics = reduction.method.optics
    if optics is not None and optics.product is not None:
        product = optics.product.product
        said.append(
            f"ε is that of {product} in all its forms together, at the temperature, ionic strength "
            "and free ligand of the run."
        )
    said.append(
        "u of k holds what belongs to one run: its trace"
        + (", its volumes" if reduction.u_volume else "")
        + (", and the repeatability stated" if reduction.method.repeatability else "")
        + ". Errors that runs share are no part of it; the fit carries each by its name."
    )
    return tuple(said)


def reduction_record(reduction: Reduction) -> dict[str, Any]:
    """Return what the record keeps of the reduction."""
    return {
        "notes": list(reduction.notes),
        "kind": reduction.method.kind,
        "orders": {name: float(n) for name, n in reduction.method.orders.items()},
        "runs": [
            {
                "run": each.run,
                "measured": each.measured,
                "standard_uncertainty": each.u_measured,
                "independent_noise_uncertainty": each.u_independent,
                "unit": "s^-1",
                "points": each.points,
                "window": None if each.window is None else list(each.window),
                "polynomial": each.polynomial,
                "progress": each.progress,
                "absorptivity": each.absorptivity,
                "shares": dict(each.shares),
                "value": each.value,
                "value_standard_uncertainty": each.u,
                "value_unit": "s^-1" if each.absorptivity is None else "mol L^-1 s^-1",
            }
            for each in reduction.runs
        ],
        "shared_errors": [
            {
                "name": each.name,
                "kind": each.kind,
                "u": each.u,
                "on_ln_k": dict(each.on_ln_k) or None,
                "on_ln_I": dict(each.on_ln_I) or None,
            }
            for each in reduction.shared_errors
        ],
    }
