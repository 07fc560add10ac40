"""How likely a plan gives a verdict: one integer charge product, or a heat capacity of activation.

By formula: with a normal estimate of standard uncertainty u,

    nearest integer right:            2 Φ(1/(2u)) - 1
    both neighbours excluded at 95 %: Φ(1/u - 1.96) - Φ(1.96 - 1/u), at least zero
    ΔC_p‡ = x detected at 5 %:        Φ(|x|/u - 1.96) + Φ(-|x|/u - 1.96)

and by simulation: data sets of the plan, each assessed as :func:`knought.assess` assesses real runs
(by :func:`knought.assess_many`, the same equations for many at once), its rule for the headline ±
included. The two part where the mixture of the open law is far from normal; the simulation then
stands.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from knought.discussion.plan_aims import headline_rows
from knought.discussion.plan_expectation import conditions_of_all, made_data, simulate_runs
from knought.fitting.assess_many import assess_many
from knought.measurement.table import RateTable

if TYPE_CHECKING:
    from knought.arrays import FloatArray
    from knought.discussion.plan_expectation import MadeData
    from knought.discussion.plan_model import PlanModel
    from knought.fitting.assess_many import ManyAssessments

__all__ = [
    "Power",
    "assessed",
    "charge_power",
    "detection",
    "heat_capacity_power",
    "nearest_integer_right",
    "one_integer_left",
    "planned_table",
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


def charge_power(
    model: PlanModel,
    T: FloatArray,
    I: FloatArray,
    u: float,
    *,
    data_sets: int,
    seed: int,
) -> tuple[Power, ...]:
    """Return how likely the charge product comes out, nearest integer and alone in its interval.

    Parameters
    ----------
    model
        What will be fitted, and what is taken as true.
    T, I : (n,) ndarray
        Conditions of the runs.
    u
        Expected standard uncertainty of the charge product, for the formula.
    data_sets, seed
        Of the simulation.

    Returns
    -------
    tuple of Power
        Empty where the fit has no charge product.
    """
    if "charge_product" not in model.parameters:
        return ()
    found, made = assessed(
        model, T, I, "charge_product", data_sets=data_sets, seed=seed, remade=False
    )
    # Truths drawn from runs already made are no integers; of a location, only the error counts.
    truth = made.truth(headline_rows(model)["charge_product"])
    low, high = found.interval("charge_product")
    right = np.abs(found.value("charge_product") - truth) < 0.5
    alone = (low > truth - 1) & (high < truth + 1)
    return (
        Power(
            "the integer nearest to the charge product is right",
            nearest_integer_right(u),
            float(np.mean(right)),
            data_sets,
            u,
        ),
        Power(
            "the 95 % interval of the charge product holds neither neighbouring integer",
            one_integer_left(u),
            float(np.mean(alone)),
            data_sets,
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
    found, _ = assessed(curved, T, I, name, data_sets=data_sets, seed=seed, remade=True)
    low, high = found.interval(name)
    u = expected_u(curved, T, I, name, seed=seed)
    return Power(
        f"ΔCₚ‡ = {size:g} J/(K mol) is told from zero",
        detection(size, u),
        float(np.mean((low > 0) | (high < 0))),
        data_sets,
        u,
    )


def assessed(
    model: PlanModel,
    T: FloatArray,
    I: FloatArray,
    name: str,
    *,
    data_sets: int,
    seed: int,
    remade: bool,
) -> tuple[ManyAssessments, MadeData]:
    """Make data of a plan and assess each set as :func:`knought.assess` would.

    Parameters
    ----------
    model, T, I, data_sets, seed, remade
        As for :func:`~knought.discussion.plan_expectation.simulate_runs`.
    name
        The result that is wanted.

    Returns
    -------
    found
        The assessments.
    made
        The data, and what was true.
    """
    made = made_data(model, T, I, data_sets=data_sets, seed=seed, remade=remade)
    surface = model.surface
    found = assess_many(
        planned_table(model, T, I),
        np.exp(made.ln_k),
        temperature_law=surface.temperature_law.name,
        salt_law=surface.salt_law.name,
        reference_temperature=surface.reference_temperature,
        standard_concentration=surface.standard_concentration,
        charge_product=surface.salt_law.given_charge_product,
        ion_size=surface.salt_law.ion_size,
        priors=model.priors,
        shared_errors=model.shared_errors,
        quantities=(name,),
        named_laws=False,
    )
    return found, made


def planned_table(model: PlanModel, T: FloatArray, I: FloatArray) -> RateTable:
    """Return the runs already made and the planned ones as a table with stated uncertainties.

    Parameters
    ----------
    model
        What will be fitted; its errors of T and I of each run are in u(k).
    T, I : (n,) ndarray
        Conditions of the planned runs.
    """
    all_T, all_I, u = conditions_of_all(model, T, I)
    k = np.exp(model.expected_ln_k(all_T, all_I))
    batch = None
    if model.found is not None and model.found.observations.batch is not None:
        batch = (*model.found.observations.batch, *[""] * len(T))
    return RateTable(
        k=k,
        T=all_T,
        order=model.surface.order,
        I=all_I if model.describes_salt else None,
        u_k=u * k,
        batch=batch,
    )


def expected_u(model: PlanModel, T: FloatArray, I: FloatArray, name: str, *, seed: int) -> float:
    """Return the expected standard uncertainty of one headline quantity.

    Parameters
    ----------
    model, T, I, seed
        As for :func:`~knought.discussion.plan_expectation.simulate_runs`.
    name
        Name of the quantity.
    """
    targets = {name: headline_rows(model)[name]}
    return simulate_runs(model, T, I, seed=seed, targets=targets, remade=True).expected[name]
