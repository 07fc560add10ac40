"""What is in the solution once it has settled, and its ionic strength.

The idea first: I = ½ Σ c z² over every ion that is there, reagents, buffer and counter-ions
included. What is there follows from the recipe and from the equilibria, whose constants depend on
I: recipe, equilibria and activity law are solved together at the run's own temperature.

A composition whose charges do not cancel is refused, and not completed by guesswork: a forgotten
counter-ion is the commonest slip, and it can change I by a factor of two.
"""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass
from types import MappingProxyType
from typing import TYPE_CHECKING

from knought.chemistry import water
from knought.chemistry.activity import DaviesForm
from knought.chemistry.constants import LN10
from knought.chemistry.equilibria_solver import solve_equilibria
from knought.chemistry.species import Species, parse_species
from knought.errors import Caveat, InputError
from knought.given import given_number

if TYPE_CHECKING:
    from collections.abc import Sequence

    from knought.chemistry.activity import ActivityForm
    from knought.chemistry.equilibria import Equilibrium
    from knought.chemistry.recipe import Recipe

__all__ = ["Medium", "ionic_strength", "prepare"]

#: Charges that cancel to this fraction of all charge: concentrations are given with three digits.
CHARGE_TOLERANCE = 0.01

_PROTON = Species("H", 1)


def ionic_strength(composition: Mapping[str, float]) -> float:
    """Return I = ½ Σ c z² in mol/L (Lewis and Randall, J. Am. Chem. Soc. 43 (1921) 1112).

    Parameters
    ----------
    composition
        Concentrations of ions in mol/L by formula with charge, ``{"Na+": 0.10, "SO4^2-": 0.05}``;
        neutral species may be among them and count nothing.

    Returns
    -------
    float
        mol/L.

    Raises
    ------
    InputError
        If a formula or concentration cannot be, or the charges do not cancel within 1 % of all
        charge: an ion is then missing, or a figure is wrong.
    """
    if not isinstance(composition, Mapping):
        raise InputError("the composition is no mapping", "write {'Na+': 0.1, 'Cl-': 0.1}")
    found: dict[Species, float] = {}
    for text, value in composition.items():
        concentration = given_number(value, f"the concentration of {text}")
        if not concentration >= 0:
            raise InputError(
                f"the concentration of {text} is {concentration:g} mol/L",
                "concentrations are finite and at least zero",
            )
        species = parse_species(text)
        found[species] = found.get(species, 0.0) + concentration
    require_neutral(found)
    return _half_sum(found)


def require_neutral(composition: Mapping[Species, float], where: str = "the composition") -> None:
    """Refuse a composition whose charges do not cancel.

    Parameters
    ----------
    composition
        mol/L by species.
    where
        What to call it.

    Raises
    ------
    InputError
        If what is left is more than 1 % of all charge.
    """
    net = sum(c * species.charge for species, c in composition.items())
    whole = sum(c * abs(species.charge) for species, c in composition.items())
    if abs(net) > CHARGE_TOLERANCE * whole:
        sign, missing = ("positive", "anions") if net > 0 else ("negative", "cations")
        raise InputError(
            f"{where} is not electrically neutral: {abs(net):.4g} mol/L of {sign} charge is left",
            f"add the {missing} that are missing (counter-ions of every salt, acid and reagent) "
            "or correct a concentration",
        )


def _half_sum(composition: Mapping[Species, float]) -> float:
    return 0.5 * math.fsum(c * species.charge**2 for species, c in composition.items())


@dataclass(frozen=True, eq=False)
class Medium:
    """A solution at its equilibrium.

    Attributes
    ----------
    concentrations
        mol/L by species, read-only.
    analytical
        mol/L before any equilibrium, read-only.
    temperature
        K.
    ionic_strength
        mol/L.
    form
        The activity law that the equilibria were solved with.
    mass_residual, charge_residual
        Worst relative residuals of the balances.
    caveats
        What a reader must know.
    """

    concentrations: Mapping[Species, float]
    analytical: Mapping[Species, float]
    temperature: float
    ionic_strength: float
    form: ActivityForm
    mass_residual: float
    charge_residual: float
    caveats: tuple[Caveat, ...] = ()

    def __getitem__(self, formula: str) -> float:
        """Concentration in mol/L of a species by its formula; zero where it is not there."""
        return self.concentrations.get(parse_species(formula), 0.0)

    @property
    def stoichiometric_ionic_strength(self) -> float:
        """I in mol/L as if nothing associated or dissociated further."""
        return _half_sum(self.analytical)

    @property
    def molality_factor(self) -> float:
        """Mass of water in a litre, kg, with water's density: m = c / factor (dilute solutions)."""
        return float(water.density(self.temperature)) / 1000.0

    @property
    def molal_ionic_strength(self) -> float:
        """I in mol/kg."""
        return self.ionic_strength / self.molality_factor

    @property
    def ph(self) -> float | None:
        """-lg of the activity of H+ (molal, as pH is defined); None where there is no H+."""
        c = self.concentrations.get(_PROTON, 0.0)
        if c == 0:
            return None
        lg_gamma = -float(self.form.screening(self.ionic_strength, self.temperature))
        # The two bases' γ are taken as equal: they differ by the volume of the salt only.
        return -(math.log(c / self.molality_factor) / LN10 + lg_gamma)

    @property
    def counter_ions(self) -> tuple[tuple[Species, float], ...]:
        """Ions by falling concentration: what a like-charged reaction may answer to beside I."""
        ions = [(s, c) for s, c in self.concentrations.items() if s.charge and c > 0]
        return tuple(sorted(ions, key=lambda pair: -pair[1]))


def prepare(
    recipe: Recipe | Mapping[str, float],
    T: float = 298.15,
    equilibria: Sequence[Equilibrium] = (),
    form: ActivityForm | None = None,
    *,
    stronger: Mapping[str, float] | None = None,
) -> Medium:
    """Return the medium that a recipe gives.

    Parameters
    ----------
    recipe
        The recipe, or final concentrations in mol/L by substance, ``{"Na2SO4": 0.05}``.
    T
        Temperature in K, 0-100 °C.
    equilibria
        Equilibria among its species; those of which nothing is there count nothing.
    form
        The activity law; Davies (C = 0.3) if not given.
    stronger
        Relative changes of stocks, for uncertainties.

    Raises
    ------
    InputError
        If the recipe is not electrically neutral or cannot be read, or the equilibria cannot be
        solved.
    """
    from knought.chemistry.recipe import Recipe

    if not isinstance(recipe, Recipe):
        recipe = Recipe(final=recipe)
    form = DaviesForm() if form is None else form
    water.require_liquid(T)
    analytical = recipe.composition(stronger)
    require_neutral(analytical, f"the recipe {recipe.name!r}" if recipe.name else "the recipe")
    found = solve_equilibria(analytical, equilibria, T, form)
    return Medium(
        concentrations=MappingProxyType(dict(found.concentrations)),
        analytical=MappingProxyType(analytical),
        temperature=T,
        ionic_strength=found.ionic_strength,
        form=form,
        mass_residual=found.mass_residual,
        charge_residual=found.charge_residual,
        caveats=tuple(_caveats(found.ionic_strength, T, form, bool(equilibria))),
    )


def _caveats(I: float, T: float, form: ActivityForm, with_equilibria: bool) -> list[Caveat]:
    own = float(form.interaction_abscissa(I, T))
    if not with_equilibria or own <= form.domain.upper:
        return []
    unit = "mol/L" if form.basis == "molar" else "mol/kg"
    return [
        Caveat(
            "medium-beyond-domain",
            f"The equilibria were solved at I = {own:.3g} {unit}, beyond the customary domain of "
            f"the activity law ({form.words}, to {form.domain.upper:g} {unit}). Speciation there "
            "is a guide only; use constants measured in that medium, or another law.",
        )
    ]
