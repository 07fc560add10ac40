"""What was asked of a plan, what it assumes in consequence, and both in words.

A plan rests on what is taken as true before anything is measured; every such thing is printed with
it, so that nobody takes an expected u for a measured one.
"""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from typing import TYPE_CHECKING

import numpy as np

from knought.chemistry.species import charge_product as charge_product_of
from knought.chemistry.species import parse_reactants
from knought.discussion.plan_model import PlanModel, Repeatability, assumed_model, model_of
from knought.errors import InputError
from knought.given import given_count
from knought.laws.open_law import DEFAULT_PRIORS, Priors
from knought.laws.salt import OPEN

if TYPE_CHECKING:
    from knought.discussion.plan_aims import Aim
    from knought.discussion.reach import Reach
    from knought.fitting.found import Found
    from knought.measurement.shared_errors import SharedError

__all__ = ["PlanRequest", "assumption_lines", "model_for"]

#: z_A z_B that is taken as true where nothing is said of the charges.
_USUAL_CHARGE_PRODUCT = 1.0

#: More runs than this are no plan for a bench.
_MOST_RUNS = 500


@dataclass(frozen=True)
class PlanRequest:
    """What was asked of a plan; see :func:`knought.discussion.next_runs.plan`."""

    runs: int
    repeatability: float
    u_T: float = 0.0
    u_I: float = 0.0
    activation_energy: float = 50e3
    charge_product: float | None = None
    reactants: str | None = None
    charges_known: bool | None = None
    temperature_law: str | None = None
    salt_law: str | None = None
    reference_temperature: float = 298.15
    order: Fraction = Fraction(2)
    priors: Priors = DEFAULT_PRIORS
    shared_errors: tuple[SharedError, ...] = ()
    least_temperatures: int | None = None
    least_ionic_strengths: int | None = None
    runs_a_day: int | None = None
    temperature_change_cost: float = 0.0
    heat_capacity: float = 200.0
    hazards: tuple[str, ...] = ()
    starts: int = 8
    data_sets: int = 1000
    seed: int = 0

    def __post_init__(self) -> None:
        for what, number in (
            ("runs", self.runs),
            ("starts", self.starts),
            ("data sets", self.data_sets),
        ):
            if given_count(number, f"the number of {what}", -(10**9), 10**9) < 1:
                raise InputError(f"a plan cannot have {number} {what}", "give 1 at least")
        if self.runs > _MOST_RUNS:
            raise InputError(
                f"{self.runs} runs are more than are planned one by one ({_MOST_RUNS} at most)",
                "plan fewer, and repeat the plan",
            )


def model_for(request: PlanRequest, reach: Reach, aim: Aim, found: Found | None) -> PlanModel:
    """Return what will be fitted and what is taken as true.

    Parameters
    ----------
    request
        What was asked for.
    reach
        What can be reached, which decides the laws that can be fitted.
    aim
        What the plan is for; a heat capacity brings its own temperature law.
    found
        The fit to the runs already made, if any.

    Raises
    ------
    InputError
        If a law is unknown, charges disagree, or the runs are fewer than the parameters.
    """
    repeatability = Repeatability(request.repeatability, request.u_T, request.u_I)
    if found is not None:
        model = model_of(found, repeatability, request.shared_errors)
    else:
        model = _from_nothing(request, reach, repeatability)
    if aim.name == "activation_heat_capacity":
        model = model.with_curvature() or model
    made = 0 if found is None else found.observations.runs
    if request.runs + made < model.flat_parameters:
        raise InputError(
            f"{request.runs} runs cannot determine {model.flat_parameters} parameters "
            f"({', '.join(model.parameters)})",
            "plan more runs, or name laws with fewer parameters",
        )
    if found is not None and reach.I is None and model.describes_salt:
        raise InputError(
            "the runs already made have ionic strengths and the plan has none",
            "give the ionic strengths that can be set",
        )
    return model


def _from_nothing(request: PlanRequest, reach: Reach, repeatability: Repeatability) -> PlanModel:
    charges, known = charges_of(request)
    temperatures = len(np.unique(reach.T))
    strengths = 0 if reach.I is None else len(np.unique(reach.I))
    thermal = request.temperature_law or ("isothermal" if temperatures == 1 else "eyring")
    salt = request.salt_law or (OPEN if strengths >= (1 if known else 2) else "none")
    if salt != "none" and strengths == 0:
        raise InputError(
            f"the salt law {salt!r} needs ionic strengths, and none can be set",
            "give ionic strengths, or leave the salt law out",
        )
    return assumed_model(
        repeatability,
        activation_energy=request.activation_energy,
        charge_product=charges,
        charges_known=known,
        temperature_law=thermal,
        salt_law=salt,
        reference_temperature=request.reference_temperature,
        order=request.order,
        priors=request.priors,
        shared_errors=request.shared_errors,
    )


def charges_of(request: PlanRequest) -> tuple[float, bool]:
    """Return the charge product that is taken as true, and whether the fit will be told it.

    Raises
    ------
    InputError
        If reactants and charge product disagree, or charges are said to be known and are not.
    """
    charges = request.charge_product
    if request.reactants is not None:
        from_reactants = float(charge_product_of(parse_reactants(request.reactants)))
        if charges is not None and charges != from_reactants:
            raise InputError(
                f"the reactants {request.reactants!r} have z_A z_B = {from_reactants:g}, not "
                f"{charges:g}",
                "give either the reactants or the charge product",
            )
        charges = from_reactants
    if request.charges_known and charges is None:
        raise InputError("the charges are said to be known and are not given", "give the reactants")
    known = (
        request.reactants is not None if request.charges_known is None else request.charges_known
    )
    return _USUAL_CHARGE_PRODUCT if charges is None else charges, known


def assumption_lines(request: PlanRequest, model: PlanModel, aim: Aim) -> tuple[str, ...]:
    """Return what a plan assumes, a sentence each.

    Parameters
    ----------
    request
        What was asked for.
    model
        What will be fitted, and what is taken as true.
    aim
        What the plan is for.
    """
    spread = f"{request.repeatability * 100:g} %"
    lines = [
        f"The plan is for {aim.words}.",
        f"One rate constant has a relative standard uncertainty of {spread}, "
        "the same at every temperature and ionic strength, independent from run to run, and known: "
        "a u found from the scatter of few runs widens every interval by Student's t.",
        *_abscissa_lines(request),
        *(
            f"All runs share the error {each.name!r} ({each.kind}, u = {each.u:g})."
            for each in model.shared_errors
        ),
        f"The temperature law {model.surface.temperature_law.name} holds over the whole range; "
        "one mechanism, and no temperature or ionic strength at which another takes over.",
        *_salt_lines(request, model),
    ]
    if model.found is not None:
        lines.append(
            f"The {model.found.observations.runs} runs already made count with their own "
            "uncertainties, and what they leave open is what may be true."
        )
    else:
        lines.append(
            f"Taken as true: E_a = {request.activation_energy / 1e3:g} kJ/mol at "
            f"{request.reference_temperature:.2f} K. The size of k does not matter."
        )
    return tuple(lines)


def _abscissa_lines(request: PlanRequest) -> list[str]:
    if not request.u_T and not request.u_I:
        return ["Temperatures and ionic strengths are as set, without errors of their own."]
    return [
        f"Each run's temperature has a standard uncertainty of {request.u_T:g} K and its ionic "
        f"strength one of {request.u_I * 100:g} %, independent from run to run."
    ]


def _salt_lines(request: PlanRequest, model: PlanModel) -> list[str]:
    law = model.surface.salt_law
    if law.form is None:
        return ["No salt effect is fitted: all rate constants hold in the runs' own medium."]
    given = law.given_charge_product
    lines = []
    if law.name == OPEN:
        low, high = model.ion_sizes
        lines.append(
            f"The salt law is left open (å from {low * 1e10:.3g} to {high * 1e10:.3g} Å, c and β "
            "by their priors): every form that it allows may be true, and none is trusted alone."
        )
    else:
        lines.append(
            f"The {law.words} law is the true one: what is expected here does not cover its being "
            "wrong."
        )
    if given is not None:
        lines.append(f"The charges are known: z_A z_B = {given:g}.")
    elif model.found is None:
        charges, _ = charges_of(request)
        told = request.charge_product is not None or request.reactants is not None
        said = "" if told else " (nothing was said of the charges)"
        lines.append(f"Taken as true, and to be found by the fit: z_A z_B = {charges:g}{said}.")
    return lines
