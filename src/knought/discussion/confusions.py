"""Common confusions by which a literature value may differ from ours, with their size.

The idea first: if the number in a paper means something else than it is said to mean, the value
that it stands for is another one. Each confusion here gives that other value; the ones that would
make the paper agree with us are offered as explanations to check in the paper, never applied.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import TYPE_CHECKING

from knought.chemistry.constants import GAS_CONSTANT as R
from knought.chemistry.constants import LN10
from knought.chemistry.water import COLDEST, HOTTEST, density

if TYPE_CHECKING:
    from collections.abc import Iterator, Mapping

__all__ = ["Explanation", "Setting", "explanations"]

_KILOCALORIE = 4.184

#: A confusion is offered where it brings the paper within this many combined uncertainties ...
_FITS = 2.0

#: ... and to at most this fraction of the distance that it was away.
_BETTER = 0.5

#: Changes smaller than these say nothing: ln units, J/mol, J/(K mol).
_LEAST = {"rate_constant": 1e-4, "ln_pre_exponential_factor": 1e-4}


@dataclass(frozen=True)
class Setting:
    """What the confusions need to know.

    Attributes
    ----------
    T
        Temperature in K.
    order
        Overall order n.
    ln_k_by_strength
        Our ln k at `T` at other ionic strengths (mol/L; 0 for I → 0), less that at the paper's.
    """

    T: float
    order: float
    ln_k_by_strength: Mapping[float, float]


@dataclass(frozen=True)
class Explanation:
    """A confusion that would bring a literature value to ours.

    Attributes
    ----------
    words
        What would have been confused.
    shift
        By how much the value would change: in ln k for a rate constant, else in its unit.
    left
        Difference that would be left, ours less the paper's, in the same measure.
    """

    words: str
    shift: float
    left: float


def explanations(
    name: str, published: float, difference: float, u: float, setting: Setting
) -> tuple[Explanation, ...]:
    """Return the confusions that would bring a literature value to ours.

    Parameters
    ----------
    name
        Name of the quantity.
    published
        The literature value as it is compared: ln k, J/mol, J/(K mol).
    difference
        Ours less the literature's, as compared.
    u
        Combined standard uncertainty, as compared.
    setting
        What else they need.

    Returns
    -------
    tuple of Explanation
        Best first; empty where none fits.
    """
    found = []
    for words, shift in _shifts(name, published, setting):
        left = difference - shift
        if abs(shift) < _LEAST.get(name, 1.0):
            continue
        if abs(left) <= _FITS * u and abs(left) <= _BETTER * abs(difference):
            found.append(Explanation(words, shift, left))
    return tuple(sorted(found, key=lambda each: abs(each.left)))


def _shifts(name: str, published: float, setting: Setting) -> Iterator[tuple[str, float]]:
    """Yield what was confused, and by how much the value changes when it is put right."""
    if name == "rate_constant":
        yield from _of_k(setting)
    elif name == "ln_pre_exponential_factor":
        yield from _time_units()
        yield from _concentration_units(setting)
        yield "lg A given as ln A", published * (LN10 - 1)
        yield "ln A given as lg A", published * (1 / LN10 - 1)
    elif name in {"activation_energy", "activation_enthalpy"}:
        yield from _of_energy(name, published, setting)
    elif name == "activation_entropy":
        yield from _of_entropy(published, setting)


def _time_units() -> Iterator[tuple[str, float]]:
    """Yield changes of ln k or ln A for units of time."""
    for words, seconds in (("min⁻¹", 60.0), ("h⁻¹", 3600.0)):
        yield f"{words} given as s⁻¹ (a factor {seconds:g})", -math.log(seconds)
        yield f"s⁻¹ given as {words} (a factor {seconds:g})", math.log(seconds)


def _concentration_units(setting: Setting) -> Iterator[tuple[str, float]]:
    """Yield changes of ln k or ln A for units of concentration; k is in (L/mol)^(n-1) s^-1."""
    power = setting.order - 1
    if power == 0:
        return
    thousand = power * math.log(1000.0)
    yield "m³ given as L, or mmol as mol, in the unit of k", thousand
    yield "L given as m³, or mol as mmol, in the unit of k", -thousand
    if COLDEST <= setting.T <= HOTTEST:
        # From c = m ρ: k on concentrations = k on molalities/ρ^(n-1), with ρ in kg/L.
        rho = float(density(setting.T)) / 1000.0
        yield f"molality given as concentration (ρ = {rho:.4f} kg/L)", -power * math.log(rho)


def _of_k(setting: Setting) -> Iterator[tuple[str, float]]:
    yield from _time_units()
    yield from _concentration_units(setting)
    yield "2k given as k (a stoichiometric factor 2)", -math.log(2.0)
    yield "k given as 2k (a stoichiometric factor 2)", math.log(2.0)
    yield "3k given as k (a stoichiometric factor 3)", -math.log(3.0)
    yield "k given as 3k (a stoichiometric factor 3)", math.log(3.0)
    for strength, ln_ratio in setting.ln_k_by_strength.items():
        where = (
            "extrapolated to I → 0" if strength == 0 else f"measured at I = {strength:.3g} mol/L"
        )
        # The paper's number is k there; at the stated I it would be less by the salt effect.
        yield f"k {where} given as k at the stated ionic strength", -ln_ratio


def _of_energy(name: str, published: float, setting: Setting) -> Iterator[tuple[str, float]]:
    thermal = R * setting.T
    if name == "activation_energy":
        yield f"ΔH‡ given as Eₐ (RT = {thermal / 1e3:.2f} kJ/mol)", thermal
    else:
        yield f"Eₐ given as ΔH‡ (RT = {thermal / 1e3:.2f} kJ/mol)", -thermal
    yield "slope of lg k taken for that of ln k (a factor 2.303)", published * (LN10 - 1)
    yield "slope of ln k taken for that of lg k (a factor 2.303)", published * (1 / LN10 - 1)
    yield "kcal given as kJ (a factor 4.184)", published * (_KILOCALORIE - 1)
    yield "kJ given as kcal (a factor 4.184)", published * (1 / _KILOCALORIE - 1)


def _of_entropy(published: float, setting: Setting) -> Iterator[tuple[str, float]]:
    yield "Eₐ used for ΔH‡ (R = 8.31 J/(K mol))", -R
    yield "k in min⁻¹ used (R ln 60 = 34.0 J/(K mol))", -R * math.log(60.0)
    yield "cal given as J (a factor 4.184)", published * (_KILOCALORIE - 1)
    yield "J given as cal (a factor 4.184)", published * (1 / _KILOCALORIE - 1)
    power = setting.order - 1
    if power == 0:
        return
    size = power * R * math.log(1000.0)
    yield f"c° = 1 mol/m³ instead of 1 mol/L ({size:.1f} J/(K mol))", size
    yield f"c° = 1 mol/cm³ instead of 1 mol/L ({size:.1f} J/(K mol))", -size
    # p° = 1 bar stands for c° = p°/(R T): S(c2) = S(c1) + (n - 1) R ln(c2/c1).
    gas = power * R * math.log(R * setting.T / 100.0)
    yield f"standard state of 1 bar instead of 1 mol/L ({gas:.1f} J/(K mol))", gas
