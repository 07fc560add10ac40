"""How fast two species can meet: the diffusion limit, and a rate constant corrected for it.

    k_D = 4 π N_A (D_A + D_B) R f,    f = δ/(e^δ - 1),    δ = z_A z_B e²/(4 π ε₀ ε_r k_B T R)

(Smoluchowski, Z. Phys. Chem. 92 (1917) 129; Debye, Trans. Electrochem. Soc. 82 (1942) 265). With
no diffusion coefficients, the two species are spheres that touch at R, and Stokes and Einstein give
D = k_B T/(6 π η a) from water's viscosity; for equal radii, neutral: k_D = 8 R T/(3 η).

k_D rises with temperature as the solvent flows more easily, so that a reaction at its limit has an
activation energy (some 18 kJ/mol in water) that says nothing of its own barrier.

A measured k near the limit is a series of meeting and reacting, 1/k = 1/k_D + 1/k_act (Collins and
Kimball, J. Colloid Sci. 4 (1949) 425).
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from knought.arrays import FloatArray, frozen
from knought.chemistry import water
from knought.chemistry.constants import AVOGADRO, BOLTZMANN, LN10
from knought.chemistry.constants import GAS_CONSTANT as R
from knought.chemistry.debye_huckel import bjerrum_length, debye_huckel
from knought.discussion.electrostatics import require_length
from knought.errors import InputError
from knought.given import given_number, given_numbers, given_pair
from knought.rounding import brief

if TYPE_CHECKING:
    from numpy.typing import ArrayLike

__all__ = ["EncounterLimit", "debye_factor", "encounter_limit"]

_LITRES_PER_CUBIC_METRE = 1000.0

#: Diffusion coefficients beyond these (m²/s) are a slip of the unit.
_SLOWEST, _FASTEST = 1e-13, 1e-7

#: Step of the central difference of the viscosity, in K; its error is below 1e-9 of the slope.
_STEP = 0.01

#: Below this |δ| the series of f is exact to rounding, and the quotient is not.
_SMALL_DELTA = 1e-4

#: Correction for encounter is worth saying within this factor of the limit.
NEAR_LIMIT = 10.0


@dataclass(frozen=True, eq=False)
class EncounterLimit:
    """The diffusion limit; arrays of the shape of the temperatures.

    Attributes
    ----------
    T : ndarray
        Temperatures in K.
    charge_product
        z_A z_B.
    contact_distance
        R in m.
    ionic_strength
        In mol/L.
    rate_constant : ndarray
        k_D in L mol^-1 s^-1.
    debye_factor : ndarray
        f, the factor by which the charges speed the meeting up.
    activation_energy : ndarray
        R T² ∂ln k_D/∂T in J mol^-1: what a reaction at the limit shows.
    source
        Where the diffusion coefficients come from, in words.
    """

    T: FloatArray
    charge_product: float
    contact_distance: float
    ionic_strength: float
    rate_constant: FloatArray
    debye_factor: FloatArray
    activation_energy: FloatArray
    source: str

    def near(self, k: ArrayLike) -> bool:
        """Whether any `k` (L mol^-1 s^-1) lies within a factor of 10 of the limit."""
        return bool(np.any(np.asarray(k, dtype=float) * NEAR_LIMIT >= self.rate_constant))

    def activated(self, k: ArrayLike) -> FloatArray:
        """Return k corrected for encounter, k k_D/(k_D - k), in L mol^-1 s^-1.

        Parameters
        ----------
        k
            Measured rate constants in L mol^-1 s^-1.

        Returns
        -------
        ndarray
            Infinite where k reaches the limit: the measurement then says nothing of the step
            itself.
        """
        k = np.asarray(k, dtype=float)
        left = self.rate_constant - k
        with np.errstate(divide="ignore", invalid="ignore"):
            return np.where(left > 0, k * self.rate_constant / left, np.inf)

    def magnified(self, k: ArrayLike, relative_uncertainty: ArrayLike) -> FloatArray:
        """Return the relative uncertainty of :meth:`activated` from that of `k` alone.

        u(k_act)/k_act = k_D/(k_D - k) u(k)/k: near the limit little is left to know.
        """
        k, u = np.asarray(k, dtype=float), np.asarray(relative_uncertainty, dtype=float)
        left = self.rate_constant - k
        with np.errstate(divide="ignore", invalid="ignore"):
            return np.where(left > 0, u * self.rate_constant / left, np.inf)


def debye_factor(delta: ArrayLike) -> FloatArray:
    """Return f = δ/(e^δ - 1), 1 at δ = 0.

    Parameters
    ----------
    delta
        z_A z_B times the Bjerrum length over the contact distance.
    """
    delta = np.asarray(delta, dtype=float)
    small = np.abs(delta) < _SMALL_DELTA
    safe = np.where(small, 1.0, delta)
    return np.where(small, 1 - delta / 2 + delta**2 / 12, safe / np.expm1(safe))


def encounter_limit(
    T: ArrayLike = 298.15,
    charge_product: float = 0.0,
    contact_distance: float = 5e-10,
    diffusion_coefficients: tuple[float, float] | None = None,
    *,
    diffusion_temperature: float = 298.15,
    radii: tuple[float, float] | None = None,
    ionic_strength: float = 0.0,
) -> EncounterLimit:
    """Return the largest rate constant that diffusion in water allows a bimolecular step.

    Parameters
    ----------
    T
        Temperatures in K, within 0-100 °C.
    charge_product
        z_A z_B of the two species that meet.
    contact_distance
        R in m.
    diffusion_coefficients
        D_A and D_B in m² s^-1 at `diffusion_temperature`; carried to `T` as T/η(T). From the
        radii by Stokes and Einstein, if not given.
    diffusion_temperature
        K.
    radii
        Of the two species in m, for Stokes and Einstein; half the contact distance each, if not
        given.
    ionic_strength
        In mol/L. The charges screen each other by the extended Debye-Hückel law with å = R, which
        holds to about 0.1 mol/L.

    Returns
    -------
    EncounterLimit

    Raises
    ------
    InputError
        If a length, a coefficient or the ionic strength is out of any sensible range, or a
        temperature lies outside 0-100 °C.
    """
    require_length(contact_distance, "the contact distance")
    T = given_numbers(T, "T")
    charge_product = given_number(charge_product, "the charge product", -1000.0, 1000.0)
    ionic_strength = given_number(ionic_strength, "the ionic strength", 0.0)
    slope = _viscosity_slope(T)
    mobility, source = _mutual_diffusion(
        T, contact_distance, diffusion_coefficients, diffusion_temperature, radii
    )
    delta = charge_product * bjerrum_length(T) / contact_distance
    factor = debye_factor(delta)
    epsilon_slope = water.relative_permittivity_derivative(T) / water.relative_permittivity(T)
    screening, screening_slope = _screening(T, charge_product, contact_distance, ionic_strength)
    ln_slope = (
        1 / T - slope + _ln_factor_slope(delta) * -delta * (1 / T + epsilon_slope) + screening_slope
    )
    free = 4 * np.pi * AVOGADRO * mobility * contact_distance * _LITRES_PER_CUBIC_METRE
    return EncounterLimit(
        T=frozen(T),
        charge_product=float(charge_product),
        contact_distance=contact_distance,
        ionic_strength=ionic_strength,
        rate_constant=frozen(free * factor * np.exp(screening)),
        debye_factor=frozen(factor),
        activation_energy=frozen(R * T**2 * ln_slope),
        source=source,
    )


def _viscosity_slope(T: FloatArray) -> FloatArray:
    """Return η'/η in K^-1; the kernel reaches beyond the door's ends, so that no side is cut."""
    eta = water.viscosity(T)
    above, below = water.viscosity_kernel(T + _STEP), water.viscosity_kernel(T - _STEP)
    return np.asarray((above - below) / (2 * _STEP * eta))


def _mutual_diffusion(
    T: FloatArray,
    contact_distance: float,
    coefficients: tuple[float, float] | None,
    at: float,
    radii: tuple[float, float] | None,
) -> tuple[FloatArray, str]:
    """Return D_A + D_B in m² s^-1, and where it comes from.

    Raises
    ------
    InputError
        If both coefficients and radii are given, or one is out of any sensible range.
    """
    if coefficients is not None:
        if radii is not None:
            raise InputError(
                "both diffusion coefficients and radii are given", "give one of the two"
            )
        coefficients = given_pair(coefficients, "the diffusion coefficients")
        if not all(_SLOWEST <= D <= _FASTEST for D in coefficients):
            raise InputError(
                f"the diffusion coefficients are {coefficients[0]:g} and {coefficients[1]:g} m²/s",
                "give them in m² s^-1: 9.3e-9 for H+ in water at 25 °C",
            )
        carried = T / at * water.viscosity(at) / water.viscosity(T)
        words = (
            f"D = {brief(coefficients[0])} and {brief(coefficients[1])} m² s⁻¹ at {at:.2f} K, "
            "carried as T/η(T)"
        )
        return np.asarray(sum(coefficients) * carried), words
    radii = radii or (contact_distance / 2, contact_distance / 2)
    for radius in radii:
        require_length(radius, "a radius")
    inverse = 1 / radii[0] + 1 / radii[1]
    return (
        np.asarray(BOLTZMANN * T * inverse / (6 * np.pi * water.viscosity(T))),
        f"Stokes and Einstein, radii {radii[0] * 1e10:.3g} and {radii[1] * 1e10:.3g} Å, water's "
        "viscosity",
    )


def _ln_factor_slope(delta: FloatArray) -> FloatArray:
    """Return d ln f/dδ = 1/δ - 1/(1 - e^-δ)."""
    small = np.abs(delta) < _SMALL_DELTA
    safe = np.where(small, 1.0, delta)
    return np.where(small, -0.5 + delta / 12, 1 / safe + 1 / np.expm1(-safe))


def _screening(
    T: FloatArray, charge_product: float, size: float, ionic_strength: float
) -> tuple[FloatArray, FloatArray]:
    """Return ln k_D(I)/k_D(0) = 2 ln10 z_A z_B A √I/(1 + B R √I), and its slope in T.

    Raises
    ------
    InputError
        If the ionic strength is negative or infinite.
    """
    if not 0 <= ionic_strength < np.inf:
        raise InputError(f"the ionic strength is {ionic_strength:g} mol/L", "give zero or more")
    known, root = debye_huckel(T), np.sqrt(ionic_strength)
    below = 1 + known.B * size * root
    value = 2 * LN10 * charge_product * known.A * root / below
    with_slope = 2 * LN10 * charge_product * known.dA_dT * root / below
    return value, with_slope - value * known.dB_dT * size * root / below
