"""Traces, recipes and optics of a study made into a table of rate constants, all of it on record.

Three roads lead to k:

- ``first-order``: k_obs of each trace; with a reactant in excess, k = k_obs/cⁿ.
- ``initial-slope``: slope at t = 0, made a rate by the optics; k = rate/Π cⁿ, orders stated.
- ``slopes``: the same from slopes that were read off already.

Errors that runs share (ε, l, stocks, equilibrium constants) are kept out of u(k) and leave by name.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from fractions import Fraction
from typing import TYPE_CHECKING, Literal

import numpy as np

from knought.chemistry.recipe_salts import dissociated
from knought.chemistry.species import parse_species
from knought.errors import Caveat, InputError, Problem
from knought.measurement.first_order import first_order
from knought.measurement.initial_slope import initial_slope
from knought.measurement.reduction_errors import shared_errors_of
from knought.measurement.table import RateTable

if TYPE_CHECKING:
    from collections.abc import Mapping

    from knought.arrays import FloatArray
    from knought.chemistry.medium import Medium
    from knought.chemistry.medium_series import MediumSeries
    from knought.measurement.absorbance import Optics
    from knought.measurement.runs_reading import Runs
    from knought.measurement.shared_errors import SharedError
    from knought.measurement.traces import Trace

__all__ = ["Kind", "Method", "Reduction", "reduce_traces"]

Kind = Literal["first-order", "initial-slope", "slopes"]


@dataclass(frozen=True, eq=False)
class Method:
    """How traces become rate constants.

    Parameters
    ----------
    kind
        ``"first-order"``, ``"initial-slope"`` or ``"slopes"``.
    orders
        Partial orders by substance. For ``"first-order"`` those of reactants in excess, by whose
        concentration k_obs is divided.
    initial
        Known level at t = 0 of first-order traces.
    dead_time, window
        First and last time to use, s.
    polynomial
        Order of the polynomial for initial slopes.
    drift
        Whether first-order traces drift.
    optics
        What makes a slope a rate; needed for slopes.
    stocks
        Relative standard uncertainty of the concentration of each substance, by substance.
    """

    kind: Kind
    orders: Mapping[str, Fraction] = field(default_factory=dict)
    initial: float | None = None
    dead_time: float = 0.0
    window: float | None = None
    polynomial: int | None = None
    drift: bool = False
    optics: Optics | None = None
    stocks: Mapping[str, float] = field(default_factory=dict)


@dataclass(frozen=True, eq=False)
class Reduction:
    """A table of rate constants and how it came about.

    Attributes
    ----------
    rates
        The table, ready for a fit.
    shared_errors
        Errors that runs share, by name.
    account
        What was done, a line each.
    caveats
        What a reader must know, each with the run in front.
    """

    rates: RateTable
    shared_errors: tuple[SharedError, ...]
    account: tuple[str, ...]
    caveats: tuple[Caveat, ...]


@dataclass(frozen=True)
class _Found:
    """What one run gave."""

    value: float
    u: float
    line: str
    caveats: tuple[Caveat, ...] = ()
    by_constant: Mapping[str, float] = field(default_factory=dict)


def reduce_traces(
    runs: Runs,
    traces: Mapping[str, Trace],
    method: Method,
    media: MediumSeries | None = None,
) -> Reduction:
    """Make a table of rate constants.

    Parameters
    ----------
    runs
        Conditions of the runs.
    traces
        Trace of each run by its label; not needed for ``"slopes"``.
    method
        How.
    media
        Media of the runs, in their order; they give the ionic strength where the runs do not.

    Returns
    -------
    Reduction

    Raises
    ------
    InputError
        If a trace, concentration or setting is missing, or a trace cannot be reduced; every run
        that cannot is told.
    """
    _check(runs, traces, method)
    divisor, order = _divisor(runs, method)
    found: list[_Found] = []
    problems: list[Problem] = []
    I = runs.I if runs.I is not None else (None if media is None else media.ionic_strength)
    for i, run in enumerate(runs.run):
        medium = None if media is None else media.media[i]
        try:
            found.append(_one(runs, i, traces.get(run), method, medium, I))
        except InputError as error:
            problems += [
                Problem(f"run {run}: {each.what}", each.remedy, read=each.read)
                for each in error.problems
            ]
    if problems:
        raise InputError(problems)
    shared, u_I, lines = shared_errors_of(runs, method, media, [each.by_constant for each in found])
    words = runs.words
    rates = RateTable(
        k=np.array([each.value for each in found]) / divisor,
        T=runs.T,
        order=order,
        I=I,
        u_k=np.array([each.u for each in found]) / divisor,
        u_I=u_I,
        run=runs.run,
        salt=words.get("salt"),
        batch=words.get("batch"),
        used=np.array([text.lower() not in {"no", "n", "false", "0"} for text in words["use"]])
        if "use" in words
        else np.ones(len(runs.run), dtype=bool),
        reason=words.get("reason", ()),
        note=words.get("note", ()),
        concentrations=runs.concentrations,
    )
    account = (
        _method_line(method, order),
        *(f"run {run}: {each.line}" for run, each in zip(runs.run, found, strict=True)),
        *lines,
    )
    caveats = tuple(
        Caveat(each.code, f"Run {run}: {each.message}")
        for run, one in zip(runs.run, found, strict=True)
        for each in one.caveats
    )
    return Reduction(rates, shared, account, caveats)


def _check(runs: Runs, traces: Mapping[str, Trace], method: Method) -> None:
    """Refuse what lacks a trace, slope, optics or concentration.

    Raises
    ------
    InputError
        Listing all of it.
    """
    problems = [
        Problem(f"there is no column c({name})", "orders name columns of the table of runs")
        for name in method.orders
        if name not in runs.concentrations
    ]
    if method.kind == "slopes":
        if runs.slopes is None or runs.u_slopes is None:
            problems.append(
                Problem("slopes or their u are missing", "add slope/s^-1 and u(slope)/s^-1")
            )
    else:
        problems += [
            Problem(f"run {run} has no trace", "head a column of the traces with its label")
            for run in runs.run
            if run not in traces
        ]
    if method.kind != "first-order" and (method.optics is None or not method.orders):
        problems.append(
            Problem(
                "slopes need optics and orders to become rate constants",
                "give [traces.optics] and [traces.orders]",
            )
        )
    if problems:
        raise InputError(problems)


def _divisor(runs: Runs, method: Method) -> tuple[FloatArray, Fraction]:
    """Return Π cⁿ of each run, and the overall order."""
    product = np.ones(len(runs.run))
    for name, n in method.orders.items():
        product = product * runs.concentrations[name] ** float(n)
    order = sum(method.orders.values(), Fraction(0))
    return product, order + 1 if method.kind == "first-order" else order


def _one(
    runs: Runs,
    i: int,
    trace: Trace | None,
    method: Method,
    medium: Medium | None,
    I: FloatArray | None,
) -> _Found:
    """Reduce one run.

    Raises
    ------
    InputError
        If it has neither a trace nor a slope, or cannot be reduced.
    """
    if method.kind == "first-order" and trace is not None:
        k = first_order(
            trace.time,
            trace.signal,
            method.initial,
            dead_time=method.dead_time,
            drift=method.drift,
        )
        line = (
            f"k_obs = {k.value:.5g} s^-1, u = {k.standard_uncertainty:.2g} (independent noise: "
            f"{k.naive_uncertainty:.2g}), {k.points} points, {k.half_lives:.1f} half-lives, levels "
            f"{k.initial_level:.4g} to {k.final_level:.4g}"
        )
        return _Found(k.value, k.standard_uncertainty, line, k.caveats)
    if trace is not None and method.kind == "initial-slope":
        slope = initial_slope(
            trace.time,
            trace.signal,
            dead_time=method.dead_time,
            window=method.window,
            order=method.polynomial,
        )
        value, u, caveats = slope.value, slope.standard_uncertainty, slope.caveats
        words = (
            f"slope = {value:.5g} s^-1, u = {u:.2g} (independent noise: "
            f"{slope.naive_uncertainty:.2g}), order {slope.order}, {slope.points} points to "
            f"{slope.window[1]:.4g} s, conversion {100 * slope.conversion:.0f} %"
        )
    elif runs.slopes is not None and runs.u_slopes is not None:
        value, u, caveats = float(runs.slopes[i]), float(runs.u_slopes[i]), ()
        words = f"slope = {value:.5g} s^-1, u = {u:.2g}, as given"
    else:
        raise InputError("there is neither a trace nor a slope", "give one of them")
    return _rate(runs, i, method, medium, I, (value, u, words, caveats))


def _rate(
    runs: Runs,
    i: int,
    method: Method,
    medium: Medium | None,
    I: FloatArray | None,
    slope: tuple[float, float, str, tuple[Caveat, ...]],
) -> _Found:
    """Turn a slope into a rate.

    Raises
    ------
    InputError
        If optics or a ligand are missing.
    """
    value, u, words, caveats = slope
    optics = method.optics
    if optics is None:
        raise InputError("optics are missing", "give [traces.optics]")
    ligands = {}
    if optics.product is not None:
        for ligand in optics.product.ligands:
            ligands[ligand.ascii] = _ligand(runs, i, medium, ligand.ascii)
    rate = optics.rate(
        value, u, T=float(runs.T[i]), I=0.0 if I is None else float(I[i]), ligands=ligands
    )
    bound = ", ".join(f"{100 * share:.1f} % {name}" for name, share in rate.shares.items())
    line = f"{words}; rate = {rate.value:.5g} mol L^-1 s^-1" + (f" ({bound})" if bound else "")
    return _Found(rate.value, rate.standard_uncertainty, line, caveats, rate.by_constant)


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


def _method_line(method: Method, order: Fraction) -> str:
    orders = ", ".join(f"{n} in {name}" for name, n in method.orders.items())
    window = f", dead time {method.dead_time:g} s" if method.dead_time else ""
    roads = {
        "first-order": "single exponential to each trace"
        + (f"; k = k_obs over the reactants in excess ({orders})" if orders else ""),
        "initial-slope": f"slope of each trace at t = 0; k = rate over the orders ({orders})",
        "slopes": f"slopes as given; k = rate over the orders ({orders})",
    }
    return f"{roads[method.kind]}; overall order {order}{window}"
