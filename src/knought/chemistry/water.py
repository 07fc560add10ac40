"""Liquid water at 0.1 MPa: density, viscosity and relative permittivity, with their slopes in T.

Density and viscosity: IAPWS SR6-08(2011), "Revised Supplementary Release on Properties of Liquid
Water at 0.1 MPa" (Patek et al., J. Phys. Chem. Ref. Data 38 (2009) 21), valid 253.15-383.15 K.
Permittivity: IAPWS R8-97, "Release on the Static Dielectric Constant of Ordinary Water Substance"
(Fernandez et al., J. Phys. Chem. Ref. Data 26 (1997) 1125), evaluated at that density. The simpler
permittivity of SR6-08 itself departs from it by 0.5 % near 100 °C, which would show in A(T).
SR6-08 follows the full formulations (IAPWS-95, R12-08) within their own uncertainties.

Two doors: the ``*_kernel`` functions check nothing and reach as far as their release; the others
refuse temperatures outside 0-100 °C. Slopes are exact derivatives along 0.1 MPa.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from knought.errors import InputError
from knought.given import real_array

if TYPE_CHECKING:
    from numpy.typing import ArrayLike

    from knought.arrays import FloatArray

__all__ = [
    "COLDEST",
    "HOTTEST",
    "density",
    "density_derivative",
    "density_kernel",
    "permittivity_kernel",
    "relative_permittivity",
    "relative_permittivity_derivative",
    "require_liquid",
    "simple_permittivity_kernel",
    "viscosity",
    "viscosity_derivative",
    "viscosity_kernel",
]

#: The public door is open from 0 °C to 100 °C, in K.
COLDEST, HOTTEST = 273.15, 373.15

#: A temperature converted from a printed one may miss the bound by rounding.
_SLACK = 1e-9

# SR6-08, specific volume: powers and coefficients in α = 10/(593 - T/K) and β = 10/(T/K - 232).
_ALPHA_TERMS = (
    (4, 6.74458446e3),
    (5, -2.22521604e5),
    (7, 1.00231247e8),
    (8, -1.63552118e9),
    (9, 8.32299658e9),
)
_BETA_TERMS = (
    (1, 5.78545292e-3),
    (2, -1.53195665e-2),
    (3, 3.11337859e-2),
    (4, -4.23546241e-2),
    (5, 3.38713507e-2),
    (6, -1.19946761e-2),
)
_VOLUME_CONSTANT = 1.93763157e-2
_SPECIFIC_GAS_CONSTANT = 461.51805  # J kg^-1 K^-1, SR6-08
_REFERENCE_TEMPERATURE, _REFERENCE_PRESSURE = 10.0, 1e5  # K, Pa

# SR6-08, viscosity (μPa s) and permittivity: coefficients and powers of τ = T/(300 K).
_UNIT_TEMPERATURE = 300.0  # K
_VISCOSITY_TERMS = ((280.68, -1.9), (511.45, -7.7), (61.131, -19.6), (0.45903, -40.0))
_SIMPLE_PERMITTIVITY_TERMS = (
    (-43.7527, -0.05),
    (299.504, -1.47),
    (-399.364, -2.11),
    (221.327, -2.31),
)

# R8-97: the Harris-Alder g-factor, with the constants that the release itself uses.
_DIPOLE_MOMENT = 6.138e-30  # C m
_POLARISABILITY = 1.636e-40  # C² J^-1 m²
_R8_AVOGADRO, _R8_BOLTZMANN = 6.0221367e23, 1.380658e-23
_R8_PERMITTIVITY = 1.0 / (4e-7 * np.pi * 299792458.0**2)
_MOLAR_MASS = 0.018015268  # kg/mol
_CRITICAL_TEMPERATURE, _CRITICAL_DENSITY = 647.096, 322.0  # K, kg/m³
_G_TERMS = (
    (0.978224486826, 1, 0.25),
    (-0.957771379375, 1, 1.0),
    (0.237511794148, 1, 2.5),
    (0.714692244396, 2, 1.5),
    (-0.298217036956, 3, 1.5),
    (-0.108863472196, 3, 2.5),
    (0.949327488264e-1, 4, 2.0),
    (-0.980469816509e-2, 5, 2.0),
    (0.165167634970e-4, 6, 5.0),
    (0.937359795772e-4, 7, 0.5),
    (-0.123179218720e-9, 10, 10.0),
)
_LAST_G_TERM, _LAST_G_TEMPERATURE, _LAST_G_POWER = 0.196096504426e-2, 228.0, -1.2


def require_liquid(T: ArrayLike) -> FloatArray:
    """Return `T` as an array, if all of it lies within 0-100 °C.

    Parameters
    ----------
    T
        Temperatures in K.

    Raises
    ------
    InputError
        If a temperature lies outside, or is not a number.
    """
    T = real_array(T, "T")
    outside = ~((T >= COLDEST - _SLACK) & (T <= HOTTEST + _SLACK))
    if np.any(outside):
        value = float(T[outside].flat[0])
        slip = f"; {value:g} °C is {value + COLDEST:g} K" if 0 <= value <= 100 else ""
        raise InputError(
            f"properties of liquid water are needed at {value:.8g} K",
            f"they are known from {COLDEST} K to {HOTTEST} K (0-100 °C){slip}; a salt law that "
            "screens charges cannot be used outside",
        )
    return T


def density(T: ArrayLike) -> FloatArray:
    """Return the density of water in kg m^-3 at `T` (K) and 0.1 MPa; SR6-08.

    Raises
    ------
    InputError
        If a temperature lies outside 0-100 °C.
    """
    return np.asarray(density_kernel(require_liquid(T))[0])


def density_derivative(T: ArrayLike) -> FloatArray:
    """Return dρ/dT of water in kg m^-3 K^-1 at `T` (K).

    Raises
    ------
    InputError
        If a temperature lies outside 0-100 °C.
    """
    return np.asarray(density_kernel(require_liquid(T))[1])


def viscosity(T: ArrayLike) -> FloatArray:
    """Return the viscosity of water in Pa s at `T` (K) and 0.1 MPa; SR6-08.

    Raises
    ------
    InputError
        If a temperature lies outside 0-100 °C.
    """
    return viscosity_kernel(require_liquid(T))


def viscosity_derivative(T: ArrayLike) -> FloatArray:
    """Return dη/dT of water in Pa s K^-1 at `T` (K).

    Raises
    ------
    InputError
        If a temperature lies outside 0-100 °C.
    """
    T = require_liquid(T)
    tau = T / _UNIT_TEMPERATURE
    return np.asarray(1e-6 * sum(a * b * tau**b for a, b in _VISCOSITY_TERMS) / T)


def relative_permittivity(T: ArrayLike) -> FloatArray:
    """Return ε_r of water at `T` (K) and 0.1 MPa; R8-97 at the density of SR6-08.

    Raises
    ------
    InputError
        If a temperature lies outside 0-100 °C.
    """
    T = require_liquid(T)
    return permittivity_kernel(T, *density_kernel(T))[0]


def relative_permittivity_derivative(T: ArrayLike) -> FloatArray:
    """Return dε_r/dT of water in K^-1 along 0.1 MPa at `T` (K).

    Raises
    ------
    InputError
        If a temperature lies outside 0-100 °C.
    """
    T = require_liquid(T)
    return permittivity_kernel(T, *density_kernel(T))[1]


def density_kernel(T: FloatArray) -> tuple[FloatArray, FloatArray]:
    """Return density (kg m^-3) and its slope (kg m^-3 K^-1), SR6-08, unchecked."""
    alpha, beta = 10.0 / (593.0 - T), 10.0 / (T - 232.0)
    # dα/dT = α²/10 and dβ/dT = -β²/10.
    volume = _VOLUME_CONSTANT + np.zeros_like(T)
    slope = np.zeros_like(T)
    for power, coefficient in _ALPHA_TERMS:
        volume = volume + coefficient * alpha**power
        slope = slope + coefficient * power * alpha ** (power + 1) / 10.0
    for power, coefficient in _BETA_TERMS:
        volume = volume + coefficient * beta**power
        slope = slope - coefficient * power * beta ** (power + 1) / 10.0
    unit = _SPECIFIC_GAS_CONSTANT * _REFERENCE_TEMPERATURE / _REFERENCE_PRESSURE
    rho = 1.0 / (unit * volume)
    return rho, -(rho**2) * unit * slope


def viscosity_kernel(T: FloatArray) -> FloatArray:
    """Return viscosity in Pa s, SR6-08, unchecked."""
    tau = T / _UNIT_TEMPERATURE
    return np.asarray(1e-6 * sum(a * tau**b for a, b in _VISCOSITY_TERMS))


def simple_permittivity_kernel(T: FloatArray) -> FloatArray:
    """Return the short form of ε_r in SR6-08, unchecked: for its check values only."""
    tau = T / _UNIT_TEMPERATURE
    return np.asarray(sum(a * tau**b for a, b in _SIMPLE_PERMITTIVITY_TERMS))


def permittivity_kernel(
    T: FloatArray, rho: FloatArray, rho_dT: FloatArray | float = 0.0
) -> tuple[FloatArray, FloatArray]:
    """Return ε_r and its slope along a path of density, R8-97, unchecked.

    Parameters
    ----------
    T
        Temperatures in K.
    rho
        Densities in kg m^-3, of a shape that broadcasts.
    rho_dT
        Slope of the density along the path, in kg m^-3 K^-1; zero for the partial derivative.

    Returns
    -------
    tuple of ndarray
        ε_r, and dε_r/dT in K^-1.
    """
    g, g_dT = _correlation_factor(T, rho, rho_dT)
    molar, molar_dT = rho / _MOLAR_MASS, rho_dT / _MOLAR_MASS
    a_unit = _R8_AVOGADRO * _DIPOLE_MOMENT**2 / (_R8_PERMITTIVITY * _R8_BOLTZMANN)
    a = a_unit * molar * g / T
    a_dT = a_unit * (molar_dT * g + molar * g_dT) / T - a / T
    b_unit = _R8_AVOGADRO * _POLARISABILITY / (3.0 * _R8_PERMITTIVITY)
    b, b_dT = b_unit * molar, b_unit * molar_dT
    root = np.sqrt(9 + 2 * a + 18 * b + a**2 + 10 * a * b + 9 * b**2)
    root_dT = ((1 + a + 5 * b) * a_dT + (9 + 5 * a + 9 * b) * b_dT) / root
    below = 4 - 4 * b
    epsilon = (1 + a + 5 * b + root) / below
    slope = (a_dT + 5 * b_dT + root_dT) / below + epsilon * 4 * b_dT / below
    return np.asarray(epsilon), np.asarray(slope)


def _correlation_factor(
    T: FloatArray, rho: FloatArray, rho_dT: FloatArray | float
) -> tuple[FloatArray, FloatArray]:
    """Return the Harris-Alder g and its slope along the path, as R8-97 fits it."""
    delta, tau = rho / _CRITICAL_DENSITY, _CRITICAL_TEMPERATURE / T
    delta_dT, tau_dT = rho_dT / _CRITICAL_DENSITY, -tau / T
    away = T / _LAST_G_TEMPERATURE - 1.0
    last = _LAST_G_TERM * delta * away**_LAST_G_POWER
    g = 1.0 + last
    g_dT = last * (delta_dT / delta + _LAST_G_POWER / (away * _LAST_G_TEMPERATURE))
    for coefficient, i, j in _G_TERMS:
        term = coefficient * delta**i * tau**j
        g = g + term
        g_dT = g_dT + term * (i * delta_dT / delta + j * tau_dT / tau)
    return g, g_dT
