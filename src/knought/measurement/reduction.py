"""Traces, recipes and optics of a study made into a table of rate constants, all of it on record.

Three roads lead to k:

- ``first-order``: k_obs of each trace; with a reactant in excess, k = k_obs/cⁿ.
- ``initial-slope``: slope at t = 0, made a rate by the optics; k = rate/Π cⁿ, orders stated.
- ``slopes``: the same from slopes that were read off already.

Errors that runs share (ε, l, stocks, equilibrium constants) are kept out of u(k) and leave by name.
"""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from typing import TYPE_CHECKING

import numpy as np

from knought.errors import Caveat, InputError, Problem
from knought.measurement.reduction_amounts import Amount, amount_of
from knought.measurement.reduction_errors import errors_of
from knought.measurement.reduction_orders import check_orders, require_orders
from knought.measurement.reduction_run import ReducedRun, reduce_run
from knought.measurement.table import RateTable

if TYPE_CHECKING:
    from collections.abc import Mapping

    from knought.arrays import BoolArray, FloatArray
    from knought.chemistry.medium_series import MediumSeries
    from knought.measurement.reduction_method import Method
    from knought.measurement.runs_reading import Runs
    from knought.measurement.shared_errors import SharedError
    from knought.measurement.traces import Trace

__all__ = ["Reduction", "reduce_traces"]


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
    method
        How it was done.
    runs
        What each run gave, in the order of the table.
    traces
        The traces, by run.
    notes
        Lines of the account that belong to no single run.
    u_volume
        Largest relative standard uncertainty of the volumes of the recipes.
    """

    rates: RateTable
    shared_errors: tuple[SharedError, ...]
    account: tuple[str, ...]
    caveats: tuple[Caveat, ...]
    method: Method
    runs: tuple[ReducedRun, ...]
    traces: Mapping[str, Trace]
    notes: tuple[str, ...]
    u_volume: float = 0.0


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
        Media of the runs, in their order; they give the ionic strength where the runs do not, and
        concentrations of reactants without a column.

    Returns
    -------
    Reduction

    Raises
    ------
    InputError
        If a trace, concentration or setting is missing, or a trace cannot be reduced; every run
        that cannot is told.
    """
    amounts = _checked(runs, traces, method, media)
    divisor, order = _divisor(len(runs.run), amounts, method)
    I = runs.I if runs.I is not None else (None if media is None else media.ionic_strength)
    found = _all_runs(runs, traces, method, media, I)
    check = check_orders(runs, amounts, method, found, I)
    require_orders(method, check)
    errors = errors_of(runs, method, media, amounts, found)
    words = runs.words
    beside = np.hypot(errors.own, method.repeatability)
    with np.errstate(over="ignore", invalid="ignore"):  # the table refuses what is not finite
        k = np.array([each.value for each in found]) / divisor
        u_k = np.hypot(np.array([each.u for each in found]) / divisor, k * beside)
    rates = RateTable(
        k=k,
        T=runs.T,
        order=order,
        I=I,
        u_k=u_k,
        u_I=errors.u_I,
        run=runs.run,
        salt=words.get("salt"),
        batch=words.get("batch"),
        used=_used(runs),
        reason=words.get("reason", ()),
        note=words.get("note", ()),
        concentrations={
            **runs.concentrations,
            **{name: each.values for name, each in amounts.items()},
        },
    )
    done = (*method.lines(order), *check.lines, *_medium_lines(runs, media))
    notes = (*done, *errors.lines)
    account = (
        *done,
        *(f"run {each.run}: {each.line}" for each in found),
        *errors.lines,
    )
    caveats = (
        *check.caveats,
        *(
            # Times of traces were read into seconds.
            Caveat(each.code, f"Run {one.run}: {each.message.replace(' (unit of time)', ' s')}")
            for one in found
            for each in one.caveats
        ),
    )
    recipes = () if media is None else media.recipes
    return Reduction(
        rates,
        errors.shared,
        account,
        caveats,
        method,
        tuple(found),
        dict(traces),
        notes,
        max((recipe.u_volume for recipe in recipes), default=0.0),
    )


def _all_runs(
    runs: Runs,
    traces: Mapping[str, Trace],
    method: Method,
    media: MediumSeries | None,
    I: FloatArray | None,
) -> list[ReducedRun]:
    """Reduce every run.

    Raises
    ------
    InputError
        Listing every run that cannot be.
    """
    found: list[ReducedRun] = []
    problems: list[Problem] = []
    for i, run in enumerate(runs.run):
        medium = None if media is None else media.media[i]
        try:
            strength = 0.0 if I is None else float(I[i])
            found.append(reduce_run(runs, i, traces.get(run), method, medium, strength))
        except InputError as error:
            problems += [
                Problem(f"run {run}: {each.what}", each.remedy, read=each.read)
                for each in error.problems
            ]
    if problems:
        raise InputError(problems)
    return found


def _medium_lines(runs: Runs, media: MediumSeries | None) -> list[str]:
    """Say where the ionic strength is from, where it is not from the table of runs."""
    if media is None or runs.I is not None:
        return []
    laws = dict.fromkeys(medium.form.words for medium in media.media)
    low, high = (float(end) for end in (media.ionic_strength.min(), media.ionic_strength.max()))
    return [
        f"I = ½ Σ c z² from the composition of each run, {low:.3g} to {high:.3g} mol/L, every ion "
        f"counted; equilibria at the run's temperature with {', '.join(laws)}"
    ]


def _used(runs: Runs) -> BoolArray:
    """Return which runs count."""
    if "use" not in runs.words:
        return np.ones(len(runs.run), dtype=bool)
    return np.array([text.lower() not in {"no", "n", "false", "0"} for text in runs.words["use"]])


def _checked(
    runs: Runs, traces: Mapping[str, Trace], method: Method, media: MediumSeries | None
) -> dict[str, Amount]:
    """Return the concentrations of what the orders name; refuse what lacks anything.

    Raises
    ------
    InputError
        Listing all of it: no trace, slope, optics or concentration.
    """
    amounts: dict[str, Amount] = {}
    problems: list[Problem] = []
    for name in (*method.orders, *method.open_orders):
        try:
            amounts[name] = amount_of(name, runs, media)
        except InputError as error:
            problems += error.problems
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
    if method.kind != "first-order" and (
        method.optics is None or not (method.orders or method.open_orders)
    ):
        problems.append(
            Problem(
                "slopes need optics and orders to become rate constants",
                "give [traces.optics] and [traces.orders]",
            )
        )
    if problems:
        raise InputError(problems)
    return amounts


def _divisor(
    runs: int, amounts: Mapping[str, Amount], method: Method
) -> tuple[FloatArray, Fraction]:
    """Return Π cⁿ of each run, and the overall order."""
    product = np.ones(runs)
    for name, n in method.orders.items():
        product = product * amounts[name].values ** float(n)
    order = sum(method.orders.values(), Fraction(0))
    return product, order + 1 if method.kind == "first-order" else order
