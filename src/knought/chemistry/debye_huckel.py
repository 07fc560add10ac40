"""Debye-Hückel coefficients of water and their slopes in T, on the molal and the molar basis.

    A = e³ √(2 N_A ρ) / (8 π (ε₀ ε_r k_B T)^{3/2} ln 10)
    B = √(2 N_A e² ρ / (ε₀ ε_r k_B T))

on the molal basis (Debye and Hückel, Phys. Z. 24 (1923) 185; written in SI as in the Green Book
2.13). On the molar basis the density falls out, as c = m ρ: N_A ρ becomes N_A x 1000 L/m³, and the
slopes in T are those at constant molarity. Neither A nor B is ever frozen at 25 °C: over 15-45 °C
that alone biases ΔH‡ by more than 1 kJ/mol for a charge product of 2, and no residual shows it.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Literal, get_args

import numpy as np

from knought.arrays import frozen
from knought.chemistry import water
from knought.chemistry.constants import (
    AVOGADRO,
    BOLTZMANN,
    ELEMENTARY_CHARGE,
    LN10,
    VACUUM_PERMITTIVITY,
)
from knought.errors import InputError

if TYPE_CHECKING:
    from numpy.typing import ArrayLike

    from knought.arrays import FloatArray

__all__ = ["Basis", "DebyeHuckel", "bjerrum_length", "debye_huckel"]

Basis = Literal["molar", "molal"]

_LITRES_PER_CUBIC_METRE = 1000.0


@dataclass(frozen=True, eq=False)
class DebyeHuckel:
    """Debye-Hückel coefficients at given temperatures; the arrays are read-only.

    Attributes
    ----------
    A : ndarray
        Of log10 γ, in (L/mol)^½ on the molar basis, (kg/mol)^½ on the molal one.
    B : ndarray
        Of the ion size, in m^-1 (L/mol)^½ or m^-1 (kg/mol)^½.
    dA_dT, dB_dT : ndarray
        Their slopes at constant pressure (and constant molarity or molality), per K.
    """

    A: FloatArray
    B: FloatArray
    dA_dT: FloatArray
    dB_dT: FloatArray


def debye_huckel(T: ArrayLike, basis: Basis = "molar") -> DebyeHuckel:
    """Return A(T) and B(T) of water with their slopes.

    Parameters
    ----------
    T
        Temperatures in K, within 0-100 °C; any shape.
    basis
        ``"molar"`` (I in mol/L) or ``"molal"`` (I in mol/kg).

    Returns
    -------
    DebyeHuckel
        Arrays of the shape of `T`.

    Raises
    ------
    InputError
        If a temperature lies outside 0-100 °C, or there is no such basis.
    """
    if basis not in get_args(Basis):
        raise InputError(f"no basis is called {basis!r}", "choose 'molar' or 'molal'")
    T = water.require_liquid(T)
    rho, rho_dT = water.density_kernel(T)
    epsilon, epsilon_dT = water.permittivity_kernel(T, rho, rho_dT)
    thermal = VACUUM_PERMITTIVITY * epsilon * BOLTZMANN * T
    thermal_relative_dT = epsilon_dT / epsilon + 1.0 / T
    amount: FloatArray | float
    amount_relative_dT: FloatArray | float
    if basis == "molal":
        amount, amount_relative_dT = AVOGADRO * rho, rho_dT / rho
    else:
        amount, amount_relative_dT = AVOGADRO * _LITRES_PER_CUBIC_METRE, 0.0
    A = ELEMENTARY_CHARGE**3 * np.sqrt(2 * amount) / (8 * np.pi * thermal**1.5 * LN10)
    B = np.sqrt(2 * amount * ELEMENTARY_CHARGE**2 / thermal)
    return DebyeHuckel(
        A=frozen(A),
        B=frozen(B),
        dA_dT=frozen(A * (0.5 * amount_relative_dT - 1.5 * thermal_relative_dT)),
        dB_dT=frozen(B * 0.5 * (amount_relative_dT - thermal_relative_dT)),
    )


def bjerrum_length(T: ArrayLike) -> FloatArray:
    """Return e²/(4 π ε₀ ε_r k_B T) of water in m at `T` (K).

    Raises
    ------
    InputError
        If a temperature lies outside 0-100 °C.
    """
    T = water.require_liquid(T)
    epsilon = water.relative_permittivity(T)
    thermal = VACUUM_PERMITTIVITY * epsilon * BOLTZMANN * T
    return np.asarray(ELEMENTARY_CHARGE**2 / (4 * np.pi * thermal))
