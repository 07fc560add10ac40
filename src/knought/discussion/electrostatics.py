"""The electrostatic part of activation: two charged spheres brought to contact in a continuum.

    ΔG_el = N_A z_A z_B e²/(4 π ε₀ ε_r r)
    ΔS_el = -∂ΔG_el/∂T = ΔG_el (dε_r/dT)/ε_r
    ΔH_el = ΔG_el + T ΔS_el = ΔG_el (1 + T (dε_r/dT)/ε_r)

(double-sphere model: Scatchard, Chem. Rev. 10 (1932) 229; Laidler, Chemical Kinetics, 3rd edition,
section 6.4, from memory). In water ε_r falls steeply with T, so that the entropy of like charges is
about -40 J/(K mol) for each unit of z_A z_B at 25 °C and r = 2 Å: a ΔS‡ of -30 J/(K mol) between
ions may say nothing of how ordered the transition state is. The continuum is a crude picture near
an ion; the figures are the order of magnitude that charges alone bring, not a prediction.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from knought.arrays import FloatArray, frozen
from knought.chemistry.constants import AVOGADRO, ELEMENTARY_CHARGE, VACUUM_PERMITTIVITY
from knought.chemistry.water import relative_permittivity, relative_permittivity_derivative
from knought.errors import InputError
from knought.given import given_number, given_numbers

if TYPE_CHECKING:
    from numpy.typing import ArrayLike

__all__ = ["ElectrostaticPart", "electrostatic_part", "require_length"]

#: Distances beyond these (m) are a slip of the unit.
_SHORTEST, _LONGEST = 0.5e-10, 100e-10


@dataclass(frozen=True, eq=False)
class ElectrostaticPart:
    """The electrostatic part of ΔG‡, ΔH‡ and ΔS‡; arrays of the shape of the temperatures.

    Attributes
    ----------
    T : ndarray
        Temperatures in K.
    charge_product
        z_A z_B.
    contact_distance, contact_distance_uncertainty
        r and u(r) in m.
    gibbs_energy, enthalpy : ndarray
        J mol^-1.
    entropy : ndarray
        J K^-1 mol^-1.
    """

    T: FloatArray
    charge_product: float
    contact_distance: float
    contact_distance_uncertainty: float
    gibbs_energy: FloatArray
    enthalpy: FloatArray
    entropy: FloatArray

    @property
    def relative_uncertainty(self) -> float:
        """u(r)/r, which is that of all three: each is proportional to 1/r."""
        return self.contact_distance_uncertainty / self.contact_distance

    def uncertainty(self, name: str) -> FloatArray:
        """Return u of ``"gibbs_energy"``, ``"enthalpy"`` or ``"entropy"`` from u(r)."""
        value: FloatArray = getattr(self, name)
        return np.asarray(np.abs(value) * self.relative_uncertainty)


def electrostatic_part(
    T: ArrayLike = 298.15,
    charge_product: float = 1.0,
    contact_distance: float = 2e-10,
    contact_distance_uncertainty: float = 0.0,
) -> ElectrostaticPart:
    """Return the electrostatic part of the activation parameters in water.

    Parameters
    ----------
    T
        Temperatures in K, within 0-100 °C.
    charge_product
        z_A z_B of the two species that meet.
    contact_distance, contact_distance_uncertainty
        r, the distance of the charges in the transition state, and u(r), in m.

    Returns
    -------
    ElectrostaticPart
        At zero ionic strength.

    Raises
    ------
    InputError
        If a distance is not one between charges, or a temperature lies outside 0-100 °C.
    """
    require_length(contact_distance, "the contact distance")
    if not 0 <= contact_distance_uncertainty < np.inf:
        raise InputError(
            f"the uncertainty of the contact distance is {contact_distance_uncertainty:g} m",
            "give one of at least zero, in m",
        )
    T = given_numbers(T, "T")
    charge_product = given_number(charge_product, "the charge product", -1000.0, 1000.0)
    epsilon = relative_permittivity(T)
    relative_slope = relative_permittivity_derivative(T) / epsilon
    unit = AVOGADRO * ELEMENTARY_CHARGE**2 / (4 * np.pi * VACUUM_PERMITTIVITY)
    gibbs = unit * charge_product / (epsilon * contact_distance)
    return ElectrostaticPart(
        T=frozen(T),
        charge_product=float(charge_product),
        contact_distance=contact_distance,
        contact_distance_uncertainty=contact_distance_uncertainty,
        gibbs_energy=frozen(gibbs),
        enthalpy=frozen(gibbs * (1 + T * relative_slope)),
        entropy=frozen(gibbs * relative_slope),
    )


def require_length(length: float, what: str) -> None:
    """Refuse what is no distance between two species.

    Raises
    ------
    InputError
        If `length` (m) is not within 0.5 Å and 100 Å.
    """
    length = given_number(length, what)
    if not _SHORTEST <= length <= _LONGEST:
        raise InputError(
            f"{what} is {length:g} m", "give it in m, between 0.5e-10 and 100e-10: 5 Å is 5e-10"
        )
