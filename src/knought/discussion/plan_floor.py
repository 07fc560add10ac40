"""How many distinct temperatures and ionic strengths a plan keeps, so that its laws stay testable.

The design that makes u of one quantity smallest sits at the ends of the range and leaves nothing to
test a law with: no curvature, no lack of fit. A floor of distinct levels keeps that possible; its
price in u is printed with the plan.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from knought.discussion.design_floor import Floor
from knought.errors import InputError

if TYPE_CHECKING:
    from knought.arrays import FloatArray
    from knought.discussion.plan_assumptions import PlanRequest
    from knought.discussion.plan_model import PlanModel
    from knought.discussion.reach import Reach

__all__ = ["floor_of"]

#: Distinct temperatures and ionic strengths that a plan keeps unless told otherwise: one more than
#: a straight line and two more than a charge product need, so that both stay testable.
_TEMPERATURES, _IONIC_STRENGTHS = 3, 4

#: Levels of runs already made are those of the plan within this: K, and a fraction of I.
_SAME_TEMPERATURE, _SAME_IONIC_STRENGTH = 0.5, 0.02


def floor_of(request: PlanRequest, reach: Reach, model: PlanModel) -> Floor:
    """Return the floor of a request: what was asked for, or as many levels as there are.

    Raises
    ------
    InputError
        If more levels are asked for than there are, or a number cannot be.
    """
    if request.temperature_change_cost < 0:
        raise InputError(
            f"a change of temperature costs {request.temperature_change_cost:g} runs",
            "give what it costs in working times of a run, at least zero",
        )
    made_T, made_I = _made_levels(reach, model)
    T_levels = len(set(reach.temperature_level.tolist()) | made_T)
    I_levels = len(set(reach.ionic_strength_level.tolist()) | made_I)
    least = []
    for what, asked, usual, have in (
        ("temperatures", request.least_temperatures, _TEMPERATURES, T_levels),
        ("ionic strengths", request.least_ionic_strengths, _IONIC_STRENGTHS, I_levels),
    ):
        if asked is not None and not 1 <= asked <= have:
            raise InputError(
                f"the plan is to keep {asked} distinct {what}; there are {have}",
                f"ask for 1 to {have}, or give more {what}",
            )
        least.append(min(usual, have, request.runs) if asked is None else asked)
    return Floor(
        reach.temperature_level,
        reach.ionic_strength_level,
        least[0],
        least[1],
        made_T,
        made_I,
        request.temperature_change_cost,
    )


def _made_levels(reach: Reach, model: PlanModel) -> tuple[frozenset[int], frozenset[int]]:
    """Return which levels the runs already made have; negative numbers for levels of their own."""
    if model.found is None:
        return frozenset(), frozenset()
    seen = model.found.observations
    T = _matched(seen.temperature_levels, np.unique(reach.T), absolute=_SAME_TEMPERATURE)
    if reach.I is None or seen.I is None:
        return T, frozenset()
    return T, _matched(
        seen.ionic_strength_levels, np.unique(reach.I), relative=_SAME_IONIC_STRENGTH
    )


def _matched(
    made: FloatArray, levels: FloatArray, absolute: float = 0.0, relative: float = 0.0
) -> frozenset[int]:
    found = set()
    for i, value in enumerate(made):
        nearest = int(np.argmin(np.abs(levels - value)))
        close = abs(levels[nearest] - value) <= absolute + relative * value
        found.add(nearest if close else -1 - i)
    return frozenset(found)
