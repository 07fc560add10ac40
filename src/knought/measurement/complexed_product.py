"""Absorptivity of a product that is held, in part, in complexes or other forms.

The idea first: what absorbs may be PX while the rate is that of all P. With fast equilibria
P + n X ⇌ PXₙ and the ligand in excess, each form's share of the product is fixed, and

    ε_eff = Σ_i ε_i x_i,     x_i = K_i [X]^n / (1 + Σ_j K_j [X]^n),

is what turns dA/dt into d[P]_tot/dt. For one complex that alone absorbs, ε_eff = ε_PX K[X]/(1 +
K[X]), so the rate is larger than dA/dt/(ε_PX l) by the factor 1 + 1/(K[X]). K follows van 't Hoff
and the activity law, and its uncertainty is a shared error of the rate constants, larger the less
of the product is bound.
"""

from __future__ import annotations

import math
from dataclasses import dataclass, field
from typing import TYPE_CHECKING

from knought.chemistry.activity import DaviesForm
from knought.chemistry.species import Species, parse_species
from knought.errors import Caveat, InputError

if TYPE_CHECKING:
    from collections.abc import Mapping

    from knought.chemistry.activity import ActivityForm
    from knought.chemistry.equilibria import Equilibrium

__all__ = ["ComplexedProduct", "EffectiveAbsorptivity"]

#: A ligand of less than this many times the product is not in excess.
_EXCESS = 20.0


@dataclass(frozen=True)
class EffectiveAbsorptivity:
    """What the product absorbs at one condition.

    Attributes
    ----------
    value
        ε_eff in L mol^-1 cm^-1, per product in all its forms.
    shares
        Share of the product in each form, by formula; the free one among them.
    by_constant
        What one standard uncertainty of each equilibrium constant and of each ΔH does to ln ε_eff,
        by ``"K of ..."`` and ``"ΔH of ..."``. They are two sources: an error of ΔH changes its
        sign at the constant's reference temperature.
    by_ligand
        ∂ln ε_eff/∂ln[ligand], by ligand.
    """

    value: float
    shares: Mapping[str, float]
    by_constant: Mapping[str, float]
    by_ligand: Mapping[str, float]


@dataclass(frozen=True, eq=False)
class ComplexedProduct:
    """A product in fast equilibrium with its other forms.

    Parameters
    ----------
    product
        The free product, ``"I2"``.
    equilibria
        One equilibrium for each further form, formed from one product and ligands:
        ``Equilibrium("I2 + I- = I3^-", lg_K=...)``.
    absorptivities
        ε in L mol^-1 cm^-1 of each form by formula; zero where not named.
    form
        Activity law for the constants; Davies if not given.

    Raises
    ------
    InputError
        If an equilibrium does not form something from the product, or a form is named that there
        is not, or nothing absorbs.
    """

    product: str
    equilibria: tuple[Equilibrium, ...]
    absorptivities: Mapping[str, float]
    form: ActivityForm = field(default_factory=DaviesForm)

    def __post_init__(self) -> None:
        object.__setattr__(self, "equilibria", tuple(self.equilibria))
        bound = [self._bound(each) for each in self.equilibria]
        known = {parse_species(self.product), *bound}
        for text, absorptivity in self.absorptivities.items():
            if parse_species(text) not in known:
                raise InputError(
                    f"{text} is no form of the product {self.product}",
                    f"the forms are {', '.join(sorted(each.ascii for each in known))}",
                )
            if not 0 <= absorptivity < math.inf:
                raise InputError(f"the absorptivity of {text} is {absorptivity:g}", "give ε ≥ 0")
        if not any(self.absorptivities.values()):
            raise InputError("no form of the product absorbs", "give an absorptivity above zero")

    def _bound(self, equilibrium: Equilibrium) -> Species:
        """Return the form that an equilibrium makes.

        Raises
        ------
        InputError
            If it does not make one form from one product.
        """
        nu = equilibrium.stoichiometry
        made = [species for species, number in nu.items() if number == 1]
        product = parse_species(self.product)
        if len(made) != 1 or nu.get(product) != -1:
            raise InputError(
                f"{equilibrium.reaction!r} does not form one species from one {self.product}",
                f'write it as formation, "{self.product} + ligand = complex"',
            )
        return made[0]

    @property
    def ligands(self) -> tuple[Species, ...]:
        """What binds the product."""
        product = parse_species(self.product)
        found = {
            species: None
            for each in self.equilibria
            for species, number in each.stoichiometry.items()
            if number < 0 and species != product
        }
        return tuple(found)

    def effective(
        self, ligands: Mapping[str, float], T: float, I: float = 0.0
    ) -> EffectiveAbsorptivity:
        """Return the absorptivity per product in all its forms.

        Parameters
        ----------
        ligands
            Free concentrations of the ligands in mol/L, by formula.
        T
            Temperature in K.
        I
            Ionic strength in mol/L.

        Raises
        ------
        InputError
            If a ligand's concentration is missing or not above zero, or T outside 0-100 °C.
        """
        free = {parse_species(text): c for text, c in ligands.items()}
        missing = [s.ascii for s in self.ligands if not free.get(s, 0.0) > 0]
        if missing:
            raise InputError(
                f"the concentration of {', '.join(missing)} is needed, and above zero",
                "give what binds the product, free, in mol/L",
            )
        product = parse_species(self.product)
        epsilon = {parse_species(text): value for text, value in self.absorptivities.items()}
        binding: dict[Species, float] = {product: 1.0}
        for each in self.equilibria:
            nu = each.stoichiometry
            strength = each.ln_K(T, I, self.form) + sum(
                -number * math.log(free[s])
                for s, number in nu.items()
                if number < 0 and s != product
            )
            binding[self._bound(each)] = math.exp(strength)
        whole = sum(binding.values())
        value = sum(epsilon.get(s, 0.0) * b for s, b in binding.items()) / whole
        by_constant: dict[str, float] = {}
        by_ligand = {species.ascii: 0.0 for species in self.ligands}
        for each in self.equilibria:
            bound = self._bound(each)
            share = binding[bound] / whole
            # ∂ln ε_eff/∂ln K = x (ε - ε_eff)/ε_eff.
            slope = share * (epsilon.get(bound, 0.0) - value) / value
            by_constant |= {name: slope * u for name, u in each.effects_on_ln_K(T).items()}
            for species, number in each.stoichiometry.items():
                if number < 0 and species != product:
                    by_ligand[species.ascii] -= number * slope
        shares = {s.ascii: b / whole for s, b in binding.items()}
        return EffectiveAbsorptivity(value, shares, by_constant, by_ligand)

    def excess_caveat(self, ligands: Mapping[str, float], product: float) -> tuple[Caveat, ...]:
        """Warn where a ligand is not in excess over the product that will have formed.

        Parameters
        ----------
        ligands
            Concentrations of the ligands in mol/L.
        product
            Concentration of the product at the end of what is used of the trace, mol/L.
        """
        short = [text for text, c in ligands.items() if c < _EXCESS * product]
        if not short:
            return ()
        return (
            Caveat(
                "complex-ligand-not-in-excess",
                f"{', '.join(short)} is less than {_EXCESS:g} times the product "
                f"({product:.2g} mol/L): the bound share changes as the reaction goes. Use the "
                "initial slope only, or more ligand.",
            ),
        )
