"""One run of a reduction: its trace or slope, made a k_obs or a rate."""

from __future__ import annotations

from dataclasses import dataclass, field, replace
from typing import TYPE_CHECKING

from knought.chemistry.recipe_salts import dissociated
from knought.chemistry.species import parse_species
from knought.errors import Caveat, InputError
from knought.measurement.first_order import first_order
from knought.measurement.initial_slope import initial_slope

if TYPE_CHECKING:
    from collections.abc import Mapping

    from knought.chemistry.medium import Medium
    from knought.measurement.reduction_method import Method
    from knought.measurement.runs_reading import Runs
    from knought.measurement.traces import Trace

__all__ = ["ReducedRun", "reduce_run"]


@dataclass(frozen=True, eq=False)
class ReducedRun:
    """What one run gave.

    Attributes
    ----------
    run
        Its label.
    value, u
        k_obs in s^-1, or rate in mol L^-1 s^-1, with the standard uncertainty from the trace alone.
    measured, u_measured
        k_obs or slope in s^-1 (absorbance a second), as the trace gave it.
    u_independent
        What least squares with independent noise would claim for it; None for slopes as given.
    points
        Points used; None for slopes as given.
    window
        First and last time used, s.
    polynomial
        Order of the polynomial; None but for initial slopes.
    progress
        Share of conversion in the window (initial slope), or half-lives covered (first order).
    absorptivity
        ε in L mol^-1 cm^-1 that made the slope a rate; None for k_obs.
    shares
        Share of the product in each of its forms; empty where it has one.
    levels
        Signal at t = 0 and at the end of the reaction; the second None but for first order.
    line
        All of it in a line.
    caveats
        What a reader must know.
    by_constant, by_ligand
        What one standard uncertainty of each equilibrium constant, ΔH and the blank does to
        ln(rate), by name, and ∂ln(rate)/∂ln[ligand], by ligand.
    """

    run: str
    value: float
    u: float
    measured: float
    u_measured: float
    line: str
    u_independent: float | None = None
    points: int | None = None
    window: tuple[float, float] | None = None
    polynomial: int | None = None
    progress: float | None = None
    absorptivity: float | None = None
    shares: Mapping[str, float] = field(default_factory=dict)
    levels: tuple[float, float | None] | None = None
    caveats: tuple[Caveat, ...] = ()
    by_constant: Mapping[str, float] = field(default_factory=dict)
    by_ligand: Mapping[str, float] = field(default_factory=dict)


def reduce_run(
    runs: Runs, i: int, trace: Trace | None, method: Method, medium: Medium | None, I: float
) -> ReducedRun:
    """Reduce one run.

    Parameters
    ----------
    runs, i
        The runs, and which of them.
    trace
        Its trace; None for slopes as given.
    method
        How.
    medium
        What is in it, where that is known.
    I
        Its ionic strength in mol/L, for the constants of a complexed product.

    Raises
    ------
    InputError
        If it has neither a trace nor a slope, or cannot be reduced.
    """
    if method.kind == "first-order" and trace is not None:
        return _first_order(runs.run[i], trace, method)
    if method.kind == "initial-slope" and trace is not None:
        return _rate(runs, i, method, medium, I, _initial_slope(runs.run[i], trace, method))
    if method.kind == "slopes" and runs.slopes is not None and runs.u_slopes is not None:
        value, u = float(runs.slopes[i]), float(runs.u_slopes[i])
        line = f"slope = {value:.5g} s^-1, u = {u:.2g}, as given"
        given = ReducedRun(runs.run[i], value, u, value, u, line)
        return _rate(runs, i, method, medium, I, given)
    raise InputError("there is neither a trace nor a slope", "give one of them")


def _first_order(run: str, trace: Trace, method: Method) -> ReducedRun:
    k = first_order(
        trace.time,
        trace.signal,
        method.initial,
        final=method.final,
        dead_time=method.dead_time,
        window=method.window,
        drift=method.drift,
    )
    line = (
        f"k_obs = {k.value:.5g} s^-1, u = {k.standard_uncertainty:.2g} (independent noise: "
        f"{k.naive_uncertainty:.2g}), {k.points} points, {k.half_lives:.1f} half-lives, levels "
        f"{k.initial_level:.4g} to {k.final_level:.4g}"
    )
    return ReducedRun(
        run,
        k.value,
        k.standard_uncertainty,
        k.value,
        k.standard_uncertainty,
        line,
        u_independent=k.naive_uncertainty,
        points=k.points,
        window=k.window,
        progress=k.half_lives,
        levels=(k.initial_level, k.final_level),
        caveats=k.caveats,
    )


def _initial_slope(run: str, trace: Trace, method: Method) -> ReducedRun:
    slope = initial_slope(
        trace.time,
        trace.signal,
        dead_time=method.dead_time,
        window=method.window,
        order=method.polynomial,
        blank=None if method.blank is None else (method.blank[0], 0.0),
        total_change=method.total_change,
    )
    value, u = slope.value, slope.standard_uncertainty
    line = (
        f"slope = {value:.5g} s^-1, u = {u:.2g} (independent noise: "
        f"{slope.naive_uncertainty:.2g}), order {slope.order}, {slope.points} points to "
        f"{slope.window[1]:.4g} s, conversion {100 * slope.conversion:.0f} %"
    )
    return ReducedRun(
        run,
        value,
        u,
        value,
        u,
        line,
        u_independent=slope.naive_uncertainty,
        points=slope.points,
        window=slope.window,
        polynomial=slope.order,
        progress=slope.conversion,
        levels=(slope.level, None),
        caveats=slope.caveats,
        # One blank is taken off every run: its error is shared, and no part of u.
        by_constant={} if method.blank is None else {"blank": -method.blank[1] / value},
    )


def _rate(
    runs: Runs, i: int, method: Method, medium: Medium | None, I: float, slope: ReducedRun
) -> ReducedRun:
    """Turn a slope into a rate.

    Raises
    ------
    InputError
        If optics or a ligand are missing.
    """
    optics = method.optics
    if optics is None:
        raise InputError("optics are missing", "give [traces.optics]")
    ligands = {}
    if optics.product is not None:
        for ligand in optics.product.ligands:
            ligands[ligand.ascii] = _ligand(runs, i, medium, ligand.ascii)
    rate = optics.rate(slope.measured, slope.u, T=float(runs.T[i]), I=I, ligands=ligands)
    bound = ", ".join(f"{100 * share:.1f} % {name}" for name, share in rate.shares.items())
    line = f"{slope.line}; rate = {rate.value:.5g} mol L^-1 s^-1" + (f" ({bound})" if bound else "")
    return replace(
        slope,
        value=rate.value,
        u=rate.standard_uncertainty,
        line=line,
        absorptivity=rate.absorptivity,
        shares=rate.shares,
        by_constant={**slope.by_constant, **rate.by_constant},
        by_ligand=rate.by_ligand,
    )


def _ligand(runs: Runs, i: int, medium: Medium | None, formula: str) -> float:
    """Return the free concentration of a ligand: of the medium, or of its own column.

    Raises
    ------
    InputError
        If neither knows it.
    """
    if medium is not None and medium[formula] > 0:
        return medium[formula]
    wanted = parse_species(formula)
    for name, values in runs.concentrations.items():
        parts = dissociated(name)
        if wanted in parts:
            return float(values[i]) * parts[wanted]
    raise InputError(
        f"the concentration of {formula}, which binds the product, is not known",
        f"add a column with a substance that gives {formula}, or a medium",
    )
