"""An equilibrium in solution: its constant at any temperature and ionic strength.

The idea first: K° is tabulated at one temperature and I = 0. It is carried to the run's
temperature by van 't Hoff (with a heat capacity where one is known) and to its ionic strength by
the activity law, lg K = lg K° + Δz² A f(I), with Δz² = Σ z²(products) - Σ z²(reactants). Bringing
opposite charges together has Δz² < 0, so salt loosens ion pairs.

Water is the solvent: ``H2O`` may be written in a reaction and has activity one.
"""

from __future__ import annotations

import math
from collections import Counter
from dataclasses import dataclass, field
from types import MappingProxyType
from typing import TYPE_CHECKING, Literal

from knought.chemistry import water
from knought.chemistry.constants import GAS_CONSTANT, LN10
from knought.chemistry.species import Species, parse_reactants
from knought.errors import InputError, Problem

if TYPE_CHECKING:
    from collections.abc import Mapping

    from knought.chemistry.activity import ActivityForm

__all__ = ["Equilibrium"]

_WATER = Species("H2O", 0)


@dataclass(frozen=True, eq=False)
class Equilibrium:
    """A reaction with its equilibrium constant.

    Parameters
    ----------
    reaction
        ``"H+ + SO4^2- = HSO4^-"``.
    lg_K
        log10 K° at `reference_temperature` and I = 0, concentrations in mol/L (mol/kg if `basis`
        is ``"molal"``).
    reference_temperature
        K.
    enthalpy
        ΔH° of the reaction as written, J/mol.
    heat_capacity
        ΔC_p° of the reaction as written, J/(K mol).
    u_lg_K, u_enthalpy
        Standard uncertainties.
    basis
        ``"molar"`` or ``"molal"``.
    ionic_strength
        Ionic strength in mol/L at which `lg_K` holds, 0 for K°; the activity law carries it back.
    source
        Where the constant is from.

    Raises
    ------
    InputError
        If the reaction cannot be read or is not balanced, or a number cannot be.
    """

    reaction: str
    lg_K: float
    reference_temperature: float = 298.15
    enthalpy: float = 0.0
    heat_capacity: float = 0.0
    u_lg_K: float = 0.0
    u_enthalpy: float = 0.0
    basis: Literal["molar", "molal"] = "molar"
    ionic_strength: float = 0.0
    source: str = ""
    stoichiometry: Mapping[Species, int] = field(init=False, repr=False)

    def __post_init__(self) -> None:
        numbers = (self.lg_K, self.enthalpy, self.heat_capacity, self.u_lg_K, self.u_enthalpy)
        if not all(map(math.isfinite, numbers)) or min(self.u_lg_K, self.u_enthalpy) < 0:
            raise InputError(
                f"a number of the equilibrium {self.reaction!r} cannot be",
                "give finite numbers, uncertainties at least zero",
            )
        if not (self.reference_temperature > 0 and 0 <= self.ionic_strength < math.inf):
            raise InputError(
                f"the conditions of the constant of {self.reaction!r} cannot be",
                "give a temperature in K above zero and an ionic strength of at least zero",
            )
        found = _stoichiometry(self.reaction)
        object.__setattr__(self, "stoichiometry", MappingProxyType(found))

    @property
    def charge_term(self) -> int:
        """Δz²: Σ z² of the products less that of the reactants."""
        return sum(number * s.charge**2 for s, number in self.stoichiometry.items())

    @property
    def number_change(self) -> int:
        """Σ ν, water not counted."""
        return sum(self.stoichiometry.values())

    def ln_K_zero(self, T: float) -> float:
        """Return ln K° at `T` (K) on the molar basis, standard state 1 mol/L.

        ln K(T) = ln K(T₀) + (ΔH/R)(1/T₀ - 1/T) + (ΔC_p/R)(T₀/T - 1 + ln(T/T₀)) (van 't Hoff with
        constant ΔC_p). A molal constant becomes molar with water's density: m = c/ρ.

        Raises
        ------
        InputError
            If a molal constant is asked for outside 0-100 °C.
        """
        T0 = self.reference_temperature
        moved = self.enthalpy * (1 / T0 - 1 / T) + self.heat_capacity * (
            T0 / T - 1 + math.log(T / T0)
        )
        found = LN10 * self.lg_K + moved / GAS_CONSTANT
        if self.basis == "molal":
            found += self.number_change * math.log(float(water.density(T)) / 1000.0)
        return found

    def ln_K(self, T: float, I: float, form: ActivityForm) -> float:
        """Return ln of the constant in concentrations (mol/L) at `T` (K) and `I` (mol/L).

        Raises
        ------
        InputError
            If T is outside 0-100 °C, or I negative.
        """
        screening = float(form.screening(I, T))
        if self.ionic_strength:
            screening -= float(form.screening(self.ionic_strength, self.reference_temperature))
        return self.ln_K_zero(T) + LN10 * self.charge_term * screening

    def u_ln_K(self, T: float) -> float:
        """Return the standard uncertainty of ln K at `T` (K), from u(lg K) and u(ΔH)."""
        return math.hypot(*self.effects_on_ln_K(T).values())

    def effects_on_ln_K(self, T: float) -> dict[str, float]:
        """Return what one standard uncertainty of K and of ΔH does to ln K at `T`, by source."""
        away = (1 / self.reference_temperature - 1 / T) / GAS_CONSTANT
        effects = {
            f"K of {self.reaction}": LN10 * self.u_lg_K,
            f"ΔH of {self.reaction}": self.u_enthalpy * away,
        }
        sizes = (self.u_lg_K, self.u_enthalpy)
        return {name: each for (name, each), u in zip(effects.items(), sizes, strict=True) if u}


def _stoichiometry(reaction: str) -> dict[Species, int]:
    """Return ν by species, products positive, water left out.

    Raises
    ------
    InputError
        If the reaction cannot be read, or charge or atoms do not balance.
    """
    for arrow in ("⇌", "<=>", "<->", "→", "->"):
        reaction = reaction.replace(arrow, "=")
    sides = reaction.split("=")
    if len(sides) != 2:
        raise InputError(
            Problem(
                "is no equilibrium",
                'write both sides with = between: "H+ + SO4^2- = HSO4^-"',
                read=reaction,
            )
        )
    total: Counter[Species] = Counter()
    for sign, side in zip((-1, 1), sides, strict=True):
        for number, species in parse_reactants(side):
            total[species] += sign * number
    atoms: Counter[str] = Counter()
    for species, number in total.items():
        for element, count in species.composition.items():
            atoms[element] += number * count
    charge = sum(number * species.charge for species, number in total.items())
    known = all(species.composition for species in total)
    uneven = [f"{element} {count:+d}" for element, count in atoms.items() if count and known]
    if charge:
        uneven.append(f"charge {charge:+d}")
    if uneven:
        raise InputError(
            Problem(
                f"is not balanced ({', '.join(uneven)} on the right)",
                "check formulas, charges and numbers",
                read=reaction,
            )
        )
    found = {species: number for species, number in total.items() if number}
    found.pop(_WATER, None)
    if not found:
        raise InputError(Problem("says nothing", "write an equilibrium", read=reaction))
    return found
