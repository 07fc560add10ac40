"""The runs of a plan in an order to work through: blocks of one temperature, random inside.

Changing the temperature costs time, so runs of one temperature stand together. Inside a block the
order is random, so that whatever drifts during a day (a stock that ages, a lamp) is not mistaken
for the salt effect; the order of the blocks is random too, so that a drift over the days is not
mistaken for the energy. The form to fill in has the headers that the table of rate constants is
read by.
"""

from __future__ import annotations

import csv
import io
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from knought.chemistry.quantities import rate_constant_unit
from knought.errors import InputError
from knought.numerics.seeds import generator

if TYPE_CHECKING:
    from collections.abc import Sequence
    from fractions import Fraction

    from knought.arrays import FloatArray, IndexArray
    from knought.discussion.reach import Reach

__all__ = ["PlannedRun", "form_to_fill_in", "working_order"]


@dataclass(frozen=True)
class PlannedRun:
    """One run of a plan.

    Attributes
    ----------
    run
        Its label.
    T
        Temperature in K.
    I
        Ionic strength in mol/L; None where a plan is of temperatures only.
    salt
        What sets the ionic strength; empty where no salt is named.
    day
        Working day, from 1.
    """

    run: str
    T: float
    I: float | None
    salt: str = ""
    day: int = 1


def working_order(
    reach: Reach,
    runs: IndexArray,
    seed: int,
    *,
    runs_a_day: int | None = None,
    change: float = 0.0,
    first: int = 1,
) -> tuple[PlannedRun, ...]:
    """Put the runs of a design into an order to work through.

    Parameters
    ----------
    reach
        The candidates.
    runs : (N,) ndarray of int
        Runs at each candidate.
    seed
        Of the order.
    runs_a_day
        Runs that a day has time for; everything is one day if not given.
    change
        What a change of temperature costs, in working times of a run.
    first
        Number of the first run.

    Returns
    -------
    tuple of PlannedRun

    Raises
    ------
    InputError
        If a day has time for no run.
    """
    if runs_a_day is not None and runs_a_day < 1:
        raise InputError(f"a day has time for {runs_a_day} runs", "give at least 1 run a day")
    random = generator(seed, 7)
    which = np.repeat(np.arange(len(runs)), runs)
    blocks = random.permutation(np.unique(reach.T[which]))
    order = np.concatenate([random.permutation(which[reach.T[which] == T]) for T in blocks])
    days = _days(reach.T[order], runs_a_day, change)
    salts = _salts(reach, order)
    return tuple(
        PlannedRun(
            run=f"{first + i}",
            T=float(reach.T[candidate]),
            I=None if reach.I is None else float(reach.I[candidate]),
            salt=salts[i],
            day=days[i],
        )
        for i, candidate in enumerate(order)
    )


def _days(T: FloatArray, runs_a_day: int | None, change: float) -> list[int]:
    if runs_a_day is None:
        return [1] * len(T)
    days: list[int] = []
    used = 0.0
    for i, temperature in enumerate(T):
        # A day may begin at any temperature: the change is made overnight.
        cost = 1.0 + (change if used and temperature != T[i - 1] else 0.0)
        if not days:
            days.append(1)
        elif used + cost > runs_a_day:
            days.append(days[-1] + 1)
            cost, used = 1.0, 0.0
        else:
            days.append(days[-1])
        used += cost
    return days


def _salts(reach: Reach, order: IndexArray) -> list[str]:
    """Take the salts in turn where several can set the ionic strength: same I, other salt."""
    seen: dict[float, int] = {}
    found = []
    for candidate in order:
        I = float(reach.ionic_strength[candidate])
        can = reach.salts_for(I)
        turn = seen.get(I, 0)
        seen[I] = turn + 1
        found.append(can[turn % len(can)] if can else "")
    return found


def form_to_fill_in(runs: Sequence[PlannedRun], order: Fraction | int) -> str:
    """Return the runs as CSV with empty cells for k and its u.

    Parameters
    ----------
    runs
        In working order.
    order
        Overall order of the reaction, which sets the unit of k.

    Returns
    -------
    str
        Headers ``run``, ``T/K``, ``I/(mol/L)``, ``k/(...)``, ``u(k)/(...)``, ``salt``, ``batch``
        and ``note``; read back by :func:`knought.read_rates` once filled in. The batch is the day.
    """
    unit = rate_constant_unit(order)
    salt = any(run.I is not None for run in runs)
    named = any(run.salt for run in runs)
    header = ["run", "T/K", *(["I/(mol/L)"] if salt else []), f"k/({unit})", f"u(k)/({unit})"]
    header += [*(["salt"] if named else []), "batch", "note"]
    written = io.StringIO()
    writer = csv.writer(written, lineterminator="\n")
    writer.writerow(header)
    for run in runs:
        row = [run.run, f"{run.T:.2f}", *([f"{run.I:.6g}"] if salt else []), "", ""]
        writer.writerow([*row, *([run.salt] if named else []), f"day {run.day}", ""])
    return written.getvalue()
