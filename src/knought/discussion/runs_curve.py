"""How many runs until the answer is good enough: expected u against the number of runs.

Each number of runs gets its own plan, started from the plan before it with one run more, so that
the curve never rises.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from knought.discussion.exchange import exchange
from knought.discussion.plan_expectation import simulate_runs
from knought.discussion.plan_floor import floor_of
from knought.discussion.power import one_integer_left
from knought.errors import InputError
from knought.numerics.seeds import generator

if TYPE_CHECKING:
    from collections.abc import Mapping

    from knought.arrays import FloatArray, IndexArray
    from knought.discussion.next_runs import Plan

__all__ = ["RunsCurve", "runs_curve"]

#: Data sets of each point: the curve is read by eye and by thresholds, not to a percent.
_DATA_SETS = 400

#: Up to so many designs of one run less, every design is tried.
_COMPLETE = 100

#: A charge product is one integer when its interval holds no neighbour in this share of cases.
_DECIDED = 0.9


@dataclass(frozen=True, eq=False)
class RunsCurve:
    """Expected u of every headline quantity against the number of further runs.

    Attributes
    ----------
    runs : (m,) ndarray of int
        Numbers of runs.
    u
        Expected standard uncertainty by quantity, each ``(m,)``; that of k° is relative.
    aim
        √criterion of the plan's own aim, ``(m,)``.
    """

    runs: IndexArray
    u: Mapping[str, FloatArray]
    aim: FloatArray

    def until(self, name: str, at_most: float) -> int | None:
        """Return the least number of runs with u of `name` at most `at_most`; None if none is.

        Raises
        ------
        InputError
            If the curve does not have the quantity.
        """
        self._require(name)
        enough = np.flatnonzero(self.u[name] <= at_most)
        return int(self.runs[enough[0]]) if len(enough) else None

    def until_one_charge_product(self) -> int | None:
        """Return the least number of runs that leave one integer charge product nine times in ten.

        Raises
        ------
        InputError
            If the curve does not have the charge product.
        """
        self._require("charge_product")
        for runs, u in zip(self.runs, self.u["charge_product"], strict=True):
            if one_integer_left(float(u)) >= _DECIDED:
                return int(runs)
        return None

    def _require(self, name: str) -> None:
        """Refuse a quantity that the curve does not have.

        Raises
        ------
        InputError
            If it does not have it.
        """
        if name not in self.u:
            raise InputError(
                f"the curve has no {name!r}", f"its quantities are {', '.join(self.u)}"
            )


def runs_curve(plan: Plan, most: int, *, least: int | None = None) -> RunsCurve:
    """Plan every number of runs up to `most`.

    Parameters
    ----------
    plan
        The plan whose reach, aim and assumptions hold.
    most
        Largest number of runs.
    least
        Smallest number; what the parameters and the floor need if not given.

    Raises
    ------
    InputError
        If `most` is below `least`, or fewer runs than needed are asked for.
    """
    needed = _least_runs(plan) if least is None else least
    if most < needed or needed < 1:
        raise InputError(
            f"a curve from {needed} to {most} runs has no point", f"give at least {needed} runs"
        )
    floor = floor_of(plan.request, plan.reach, plan.model)
    random = generator(plan.request.seed, 3)
    numbers, aims, columns = range(needed, most + 1), [], []
    design: IndexArray | None = None
    for count in numbers:
        begin = () if design is None else (_with_one_more(plan, design),)
        starts = max(2, plan.request.starts // 4)
        found = exchange(
            plan.criterion, count, floor, random, starts=starts, begin=begin, complete=_COMPLETE
        )
        design = found.runs
        aims.append(float(np.sqrt(plan.criterion.values(design[None].astype(float))[0])))
        which = np.repeat(np.arange(len(design)), design)
        simulated = simulate_runs(
            plan.model,
            plan.reach.T[which],
            plan.reach.ionic_strength[which],
            data_sets=_DATA_SETS,
            seed=plan.request.seed,
        )
        columns.append(simulated.expected)
    u = {name: np.array([column[name] for column in columns]) for name in columns[0]}
    return RunsCurve(np.array(numbers), u, np.array(aims))


def _with_one_more(plan: Plan, design: IndexArray) -> IndexArray:
    scores = plan.criterion.with_one_more(design.astype(float))
    scores = scores * plan.floor.time(design)
    design = design.copy()
    design[int(np.argmin(np.where(plan.floor.allowed(design), scores, np.inf)))] += 1
    return design


def _least_runs(plan: Plan) -> int:
    made = 0 if plan.model.found is None else plan.model.found.observations.runs
    free = max(1, plan.model.flat_parameters - made)
    floors = max(
        plan.floor.temperatures - len(plan.floor.made_temperature),
        plan.floor.ionic_strengths - len(plan.floor.made_ionic_strength),
        1,
    )
    return max(free, floors)
