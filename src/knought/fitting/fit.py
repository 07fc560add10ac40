"""Fit one law pair: choices that were left to us are made here, and nowhere else."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from knought.chemistry.species import charge_product as charge_product_of
from knought.chemistry.species import parse_reactants
from knought.errors import Caveat, InputError
from knought.fitting.observations import Observations, observe
from knought.fitting.open_fit import fit_open
from knought.fitting.surface_fit import (
    DEFAULT_REFERENCE_TEMPERATURE,
    DEFAULT_TEMPERATURE_LAW,
    fit_surface,
)
from knought.given import given_number
from knought.laws.open_law import DEFAULT_PRIORS, Priors
from knought.laws.salt import OPEN

if TYPE_CHECKING:
    from collections.abc import Sequence

    from knought.fitting.found import Found
    from knought.fitting.scatter import ScatterChoice
    from knought.measurement.shared_errors import SharedError
    from knought.measurement.table import RateTable

__all__ = ["Choices", "fit", "fit_chosen", "resolve"]


@dataclass(frozen=True)
class Choices:
    """What is fitted and how, with nothing left open.

    Attributes
    ----------
    temperature_law, salt_law
        Names of the laws; the salt law may be ``"open"``.
    reference_temperature
        T_ref in K.
    standard_concentration
        c° in mol/L.
    charge_product
        z_A z_B where the charges are known.
    reactants
        The reactants as the user wrote them.
    ion_size
        Of the extended law, in m.
    priors
        Of the open law.
    scatter
        What the headline ± is made of, where the user chose it.
    caveats
        What must be said of choices that the data forced.
    """

    temperature_law: str
    salt_law: str
    reference_temperature: float
    standard_concentration: float = 1.0
    charge_product: float | None = None
    reactants: str | None = None
    ion_size: float | None = None
    priors: Priors = DEFAULT_PRIORS
    scatter: ScatterChoice | None = None
    caveats: tuple[Caveat, ...] = ()


def resolve(
    seen: Observations,
    *,
    temperature_law: str | None = None,
    salt_law: str | None = None,
    reference_temperature: float | None = None,
    standard_concentration: float = 1.0,
    charge_product: float | None = None,
    reactants: str | None = None,
    ion_size: float | None = None,
    priors: Priors | None = None,
    scatter: ScatterChoice | None = None,
) -> Choices:
    """Fill in what was not chosen from what the runs allow.

    With one temperature there is no temperature law and T_ref is that temperature; with no or one
    ionic strength, and charges unknown, there is no salt law. Otherwise Eyring, the open law and
    298.15 K.

    Raises
    ------
    InputError
        If both reactants and a charge product are given and disagree, or the reactants cannot be
        read.
    """
    charge_product = _charges(charge_product, reactants)
    if ion_size is not None:
        ion_size = given_number(ion_size, "the ion size")
    for law in (temperature_law, salt_law):
        if law is not None and not isinstance(law, str):
            raise InputError("a law is named by its word", "temperature_law='eyring'")
    temperatures, strengths = seen.temperature_levels, seen.ionic_strength_levels
    caveats: list[Caveat] = []
    if temperature_law is None:
        temperature_law = "isothermal" if len(temperatures) == 1 else DEFAULT_TEMPERATURE_LAW
    if reference_temperature is None:
        isothermal = temperature_law == "isothermal"
        reference_temperature = (
            float(seen.T.mean()) if isothermal else DEFAULT_REFERENCE_TEMPERATURE
        )
    if salt_law is None:
        enough = 1 if charge_product is not None else 2
        salt_law = OPEN if len(strengths) >= enough else "none"
        if salt_law == "none":
            caveats.append(_no_salt_effect(seen))
        elif len(strengths) == 1:
            caveats.append(_charges_only(float(strengths[0])))
    return Choices(
        temperature_law,
        salt_law,
        reference_temperature,
        standard_concentration,
        charge_product,
        reactants,
        ion_size,
        priors or DEFAULT_PRIORS,
        scatter,
        tuple(caveats),
    )


#: Beyond, no step in solution has charges.
_CHARGE_PRODUCTS = (-1000.0, 1000.0)


def _charges(charge_product: float | None, reactants: str | None) -> float | None:
    if charge_product is not None:
        charge_product = given_number(charge_product, "the charge product", *_CHARGE_PRODUCTS)
    if reactants is None:
        return charge_product
    if not isinstance(reactants, str):
        raise InputError("the reactants are no text", 'write "A^2- + B^-"')
    found = float(charge_product_of(parse_reactants(reactants)))
    if charge_product is not None and charge_product != found:
        raise InputError(
            f"the reactants {reactants!r} have z_A z_B = {found:g}, not {charge_product:g}",
            "give either the reactants or the charge product",
        )
    return found


def _no_salt_effect(seen: Observations) -> Caveat:
    if seen.I is None:
        return Caveat(
            "no-ionic-strength",
            "The table has no ionic strengths: rate constants hold in the runs' own medium, and "
            "nothing is said of I → 0 or of the charges. Add a column I/(mol/L) with runs at "
            "several ionic strengths.",
        )
    return Caveat(
        "one-ionic-strength",
        f"All runs are at I = {seen.ionic_strength_levels[0]:.3g} mol/L: rate constants hold "
        "there, and neither k at I → 0 nor the charge product can be found. Measure at three more "
        "ionic strengths at least, or give the charges of the reactants.",
    )


def _charges_only(strength: float) -> Caveat:
    return Caveat(
        "charges-carry-the-extrapolation",
        f"All runs are at I = {strength:.3g} mol/L: k at I → 0 rests on the given charges and the "
        "priors of the salt law alone, and no run tests them. Measure at lower I as well.",
    )


def fit_chosen(seen: Observations, choices: Choices) -> Found:
    """Fit the laws that `choices` names to the runs.

    Raises
    ------
    InputError
        If the runs cannot determine them.
    """
    if choices.salt_law == OPEN:
        if choices.ion_size is not None:
            raise InputError(
                "the open law takes no single ion size", "narrow its prior of the ion size instead"
            )
        return fit_open(
            seen,
            temperature_law=choices.temperature_law,
            reference_temperature=choices.reference_temperature,
            standard_concentration=choices.standard_concentration,
            charge_product=choices.charge_product,
            priors=choices.priors,
            scatter=choices.scatter,
        )
    return fit_surface(
        seen,
        temperature_law=choices.temperature_law,
        salt_law=choices.salt_law,
        reference_temperature=choices.reference_temperature,
        standard_concentration=choices.standard_concentration,
        charge_product=choices.charge_product,
        ion_size=choices.ion_size,
        scatter=choices.scatter,
    )


def fit(
    rates: RateTable,
    *,
    temperature_law: str | None = None,
    salt_law: str | None = None,
    reference_temperature: float | None = None,
    standard_concentration: float = 1.0,
    charge_product: float | None = None,
    reactants: str | None = None,
    ion_size: float | None = None,
    priors: Priors | None = None,
    scatter: ScatterChoice | None = None,
    shared_errors: Sequence[SharedError] = (),
) -> Found:
    """Fit one temperature law and one salt law to ln k.

    Parameters
    ----------
    rates
        The table of rate constants.
    temperature_law
        ``"eyring"`` (the default), ``"arrhenius"``, ``"modified-arrhenius"``, ``"eyring-cp"``, or
        ``"isothermal"`` (the default for one temperature).
    salt_law
        ``"open"`` (the default where there are several ionic strengths, or one and the charges),
        ``"none"``, ``"linear"``, ``"limiting"``, ``"guntelberg"``, ``"extended"``, ``"davies"``,
        ``"sit"`` or ``"pitzer"``.
    reference_temperature
        T_ref in K; 298.15 if not given (the runs' own, where they have only one).
    standard_concentration
        c° in mol/L, to which ΔG‡ and ΔS‡ refer.
    charge_product, reactants
        z_A z_B (Δz²/2 in general), or the reactants that give it (``"A^2- + B^-"``), where the
        charges are known.
    ion_size
        Ion-size parameter of the extended law in m (4.5e-10 if not given).
    priors
        What is known of the open law's å, c and β.
    scatter
        ``"given"`` or ``"scatter"``: what the headline ± is made of, against our rule.
    shared_errors
        Errors that all runs, or those of a batch, share.

    Returns
    -------
    Found
        A :class:`~knought.fitting.surface_fit.SurfaceFit`, or an
        :class:`~knought.fitting.open_fit.OpenFit` for the open law.

    Raises
    ------
    InputError
        If a law is unknown, or the runs cannot determine its parameters.
    """
    seen = observe(rates, shared_errors)
    choices = resolve(
        seen,
        temperature_law=temperature_law,
        salt_law=salt_law,
        reference_temperature=reference_temperature,
        standard_concentration=standard_concentration,
        charge_product=charge_product,
        reactants=reactants,
        ion_size=ion_size,
        priors=priors,
        scatter=scatter,
    )
    return fit_chosen(seen, choices)
