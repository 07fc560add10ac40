"""How likely a plan gives a verdict: one integer charge product, or a heat capacity of activation.

By formula: with a normal estimate of standard uncertainty u,

    nearest integer right:            2 Φ(1/(2u)) - 1
    both neighbours excluded at 95 %: Φ(1/u - 1.96) - Φ(1.96 - 1/u), at least zero
    ΔC_p‡ = x detected at 5 %:        Φ(|x|/u - 1.96) + Φ(-|x|/u - 1.96)

and by simulation, through the solver that fits real runs. The two part where the mixture of the
open law is far from normal; the simulation then stands.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from knought.discussion.plan_aims import headline_rows
from knought.discussion.plan_expectation import simulate_runs

if TYPE_CHECKING:
    from knought.arrays import FloatArray
    from knought.discussion.plan_expectation import SimulatedRuns
    from knought.discussion.plan_model import PlanModel

__all__ = [
    "Power",
    "charge_power",
    "detection",
    "heat_capacity_power",
    "nearest_integer_right",
    "one_integer_left",
]

#: Two-sided 5 %.
_TWO_SIDED = 1.959963984540054


@dataclass(frozen=True)
class Power:
    """How likely a verdict is.

    Attributes
    ----------
    words
        The verdict.
    by_formula
        Probability by the formula for a normal estimate.
    by_simulation
        Share of simulated data sets that gave it.
    data_sets
        How many data sets were simulated.
    u
        Expected standard uncertainty that the formula used.
    """

    words: str
    by_formula: float
    by_simulation: float
    data_sets: int
    u: float

    @property
    def simulation_error(self) -> float:
        """Standard error of the simulated share."""
        p = self.by_simulation
        # Of a share of 0 or 1 the binomial error would be none: half a data set instead.
        spread = max(p * (1 - p), 0.5 / self.data_sets)
        return math.sqrt(spread / self.data_sets)


def _normal(x: float) -> float:
    return 0.5 * math.erfc(-x / math.sqrt(2.0))


def nearest_integer_right(u: float) -> float:
    """Return how likely the nearest integer to a normal estimate is the right one."""
    return 2.0 * _normal(0.5 / u) - 1.0


def one_integer_left(u: float) -> float:
    """Return how likely the 95 % interval of a normal estimate holds neither neighbour."""
    reach = 1.0 / u - _TWO_SIDED
    return max(0.0, _normal(reach) - _normal(-reach))


def detection(size: float, u: float) -> float:
    """Return how likely an effect of `size` is found different from zero at 5 %."""
    reach = abs(size) / u
    return _normal(reach - _TWO_SIDED) + _normal(-reach - _TWO_SIDED)


def charge_power(simulated: SimulatedRuns) -> tuple[Power, ...]:
    """Return how likely the charge product comes out, nearest integer and alone in its interval.

    Parameters
    ----------
    simulated
        Simulated data sets of the plan; empty where their fits have no charge product.
    """
    if "charge_product" not in simulated.names:
        return ()
    j = simulated.names.index("charge_product")
    u = simulated.expected["charge_product"]
    # Truths drawn from runs already made are no integers; of a location, only the error counts.
    truth = simulated.truth[:, j]
    right = np.abs(simulated.value[:, j] - truth) < 0.5
    above = simulated.below("charge_product", truth - 1) < 0.025
    under = simulated.below("charge_product", truth + 1) > 0.975
    count = len(right)
    return (
        Power(
            "the integer nearest to the charge product is right",
            nearest_integer_right(u),
            float(np.mean(right)),
            count,
            u,
        ),
        Power(
            "the 95 % interval of the charge product holds neither neighbouring integer",
            one_integer_left(u),
            float(np.mean(above & under)),
            count,
            u,
        ),
    )


def heat_capacity_power(
    model: PlanModel, T: FloatArray, I: FloatArray, size: float, *, data_sets: int, seed: int
) -> Power | None:
    """Return how likely a heat capacity of activation is found different from zero.

    Parameters
    ----------
    model
        What will be fitted, and what is taken as true.
    T, I : (n,) ndarray
        Conditions of the runs.
    size
        ΔC_p‡ in J/(K mol), taken as true.
    data_sets, seed
        Of the simulation.

    Returns
    -------
    Power or None
        None where the plan and the runs made have fewer than three temperatures, or fewer runs
        than parameters.
    """
    curved = model.with_curvature(size)
    made = None if model.found is None else model.found.observations
    temperatures = T if made is None else np.concatenate([T, made.T])
    if curved is None or len(np.unique(temperatures.round(1))) < 3:
        return None
    if len(temperatures) < curved.flat_parameters:
        return None
    name = "activation_heat_capacity"
    simulated = simulate_runs(
        curved,
        T,
        I,
        data_sets=data_sets,
        seed=seed,
        targets={name: headline_rows(curved)[name]},
        remade=True,
    )
    u = simulated.expected[name]
    found = np.abs(simulated.value[:, 0]) > _TWO_SIDED * simulated.u[:, 0]
    return Power(
        f"ΔCₚ‡ = {size:g} J/(K mol) is told from zero",
        detection(size, u),
        float(np.mean(found)),
        data_sets,
        u,
    )
