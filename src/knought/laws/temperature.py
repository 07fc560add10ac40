"""How ln k depends on temperature at zero ionic strength.

Every law is linear in its parameters and centred at a reference temperature, where its first
parameter is ln k itself, so that the parameters are as little correlated as the data allow:

    ln k = ln k_ref + offset(T) + E · energy(T) + ΔC_p‡ · curvature(T)

    energy(T)    = -(1/R)(1/T - 1/T_ref)
    curvature(T) = (1/R)(ln(T/T_ref) + T_ref/T - 1)

The Arrhenius laws take E = E_a(T_ref); the Eyring laws take E = ΔH‡(T_ref) and the offset
ln(T/T_ref) that the factor k_B T/h leaves. E_a = ΔH‡ + RT and n = ΔC_p‡/R + 1 translate between
them (IUPAC Gold Book, "Arrhenius equation", "modified Arrhenius equation", "enthalpy of
activation"), so the two laws with curvature are one surface seen with two sets of names.

To add a law, write one class here and name it in ``TEMPERATURE_LAWS``; the surface, the fits, the
tables and the command read the registry.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, ClassVar, Protocol

import numpy as np

from knought.chemistry.constants import GAS_CONSTANT as R
from knought.errors import InputError

if TYPE_CHECKING:
    from collections.abc import Mapping

    from knought.arrays import FloatArray

__all__ = [
    "TEMPERATURE_LAWS",
    "Arrhenius",
    "Eyring",
    "EyringHeatCapacity",
    "Isothermal",
    "ModifiedArrhenius",
    "TemperatureLaw",
    "temperature_law",
]


class TemperatureLaw(Protocol):
    """What every temperature law offers.

    Attributes
    ----------
    name, words
        Its name in commands and records, and its name for people.
    parameters
        Names of its parameters, ``"ln_rate_constant"`` (at T_ref) first.
    equation
        The law in one line of text.
    """

    @property
    def name(self) -> str:
        """Name in commands and records."""
        ...

    @property
    def words(self) -> str:
        """Name for people."""
        ...

    @property
    def parameters(self) -> tuple[str, ...]:
        """Names of the parameters."""
        ...

    @property
    def equation(self) -> str:
        """The law in one line."""
        ...

    def offset(self, T: FloatArray, T_ref: float) -> FloatArray:
        """Return the part of ln k that no parameter multiplies, shape of `T`."""
        ...

    def offset_dT(self, T: FloatArray, T_ref: float) -> FloatArray:
        """Return its derivative with respect to T."""
        ...

    def columns(self, T: FloatArray, T_ref: float) -> list[FloatArray]:
        """Return what each parameter is multiplied by, each of the shape of `T`."""
        ...

    def columns_dT(self, T: FloatArray, T_ref: float) -> list[FloatArray]:
        """Return their derivatives with respect to T."""
        ...


def _energy(T: FloatArray, T_ref: float) -> FloatArray:
    # (T - T_ref)/(T T_ref) instead of a difference of reciprocals: no digits lost near T_ref.
    return np.asarray((T - T_ref) / (R * T * T_ref))


def _energy_dT(T: FloatArray) -> FloatArray:
    return np.asarray(1.0 / (R * T**2))


def _curvature(T: FloatArray, T_ref: float) -> FloatArray:
    relative = (T - T_ref) / T_ref
    # ln(T/T_ref) + T_ref/T - 1 = log1p(x) - x/(1 + x), with x = T/T_ref - 1.
    return np.asarray((np.log1p(relative) - relative / (1.0 + relative)) / R)


def _curvature_dT(T: FloatArray, T_ref: float) -> FloatArray:
    return np.asarray((T - T_ref) / (R * T**2))


class _CentredLaw:
    """Offset and columns shared by the laws: how much of each they have."""

    _eyring_offset: ClassVar[bool] = False
    _curvature_offset: ClassVar[bool] = False
    parameters: ClassVar[tuple[str, ...]] = ("ln_rate_constant",)

    def offset(self, T: FloatArray, T_ref: float) -> FloatArray:
        """Return the part of ln k that no parameter multiplies, shape of `T`."""
        total = np.zeros_like(T)
        if self._eyring_offset:
            total = total + np.log(T / T_ref)
        if self._curvature_offset:
            total = total + R * _curvature(T, T_ref)
        return total

    def offset_dT(self, T: FloatArray, T_ref: float) -> FloatArray:
        """Return its derivative with respect to T."""
        total = np.zeros_like(T)
        if self._eyring_offset:
            total = total + 1.0 / T
        if self._curvature_offset:
            total = total + R * _curvature_dT(T, T_ref)
        return total

    def columns(self, T: FloatArray, T_ref: float) -> list[FloatArray]:
        """Return what each parameter is multiplied by, each of the shape of `T`."""
        every = [np.ones_like(T), _energy(T, T_ref), _curvature(T, T_ref)]
        return every[: len(self.parameters)]

    def columns_dT(self, T: FloatArray, T_ref: float) -> list[FloatArray]:
        """Return their derivatives with respect to T."""
        every = [np.zeros_like(T), _energy_dT(T), _curvature_dT(T, T_ref)]
        return every[: len(self.parameters)]


@dataclass(frozen=True)
class Isothermal(_CentredLaw):
    """One temperature only: ln k there, and no statement about any other temperature."""

    name: ClassVar[str] = "isothermal"
    words: ClassVar[str] = "one temperature"
    equation: ClassVar[str] = "ln k = ln k(T)"


@dataclass(frozen=True)
class Arrhenius(_CentredLaw):
    """Activation energy independent of temperature: k = A exp(-E_a/(RT))."""

    name: ClassVar[str] = "arrhenius"
    words: ClassVar[str] = "Arrhenius"
    equation: ClassVar[str] = "ln k = ln A - E_a/(R T)"
    parameters: ClassVar[tuple[str, ...]] = ("ln_rate_constant", "activation_energy")


@dataclass(frozen=True)
class ModifiedArrhenius(_CentredLaw):
    """k = A' (T/T_ref)^n exp(-E/(RT)), written with E_a at T_ref and ΔC_p‡ = (n - 1) R."""

    name: ClassVar[str] = "modified-arrhenius"
    words: ClassVar[str] = "modified Arrhenius"
    equation: ClassVar[str] = "ln k = ln A' + n ln(T/T_ref) - E/(R T)"
    parameters: ClassVar[tuple[str, ...]] = (
        "ln_rate_constant",
        "activation_energy",
        "activation_heat_capacity",
    )
    _curvature_offset: ClassVar[bool] = True


@dataclass(frozen=True)
class Eyring(_CentredLaw):
    """Enthalpy of activation independent of temperature (transition-state theory)."""

    name: ClassVar[str] = "eyring"
    words: ClassVar[str] = "Eyring"
    equation: ClassVar[str] = "ln k = ln(k_B T/h) + ΔS‡/R - ΔH‡/(R T)"
    parameters: ClassVar[tuple[str, ...]] = ("ln_rate_constant", "activation_enthalpy")
    _eyring_offset: ClassVar[bool] = True


@dataclass(frozen=True)
class EyringHeatCapacity(_CentredLaw):
    """Eyring with a heat capacity of activation that does not depend on temperature."""

    name: ClassVar[str] = "eyring-cp"
    words: ClassVar[str] = "Eyring with ΔCₚ‡"
    equation: ClassVar[str] = (
        "ln k = ln(k_B T/h) + ΔS‡/R - ΔH‡/(R T) + (ΔCₚ‡/R)(ln(T/T_ref) + T_ref/T - 1)"
    )
    parameters: ClassVar[tuple[str, ...]] = (
        "ln_rate_constant",
        "activation_enthalpy",
        "activation_heat_capacity",
    )
    _eyring_offset: ClassVar[bool] = True


_ALL: tuple[TemperatureLaw, ...] = (
    Isothermal(),
    Arrhenius(),
    ModifiedArrhenius(),
    Eyring(),
    EyringHeatCapacity(),
)

#: Every temperature law by its name.
TEMPERATURE_LAWS: Mapping[str, TemperatureLaw] = {law.name: law for law in _ALL}


def temperature_law(name: str) -> TemperatureLaw:
    """Return the temperature law called `name`.

    Raises
    ------
    InputError
        If there is none of that name.
    """
    if name not in TEMPERATURE_LAWS:
        raise InputError(
            f"no temperature law is called {name!r}", f"choose from {', '.join(TEMPERATURE_LAWS)}"
        )
    return TEMPERATURE_LAWS[name]
