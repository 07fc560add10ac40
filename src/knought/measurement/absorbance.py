"""From the slope of an absorbance to the rate of the reaction, d[ξ]/dt = (dA/dt)/(ν l ε).

The idea first: ε, l and a stock's concentration are the same in every run, so their errors are not
scatter: they leave as named shared errors, relative on k, and a fit's budget shows each. What an
equilibrium constant does differs from run to run (the bound share does), so that its error is given
run by run, as the change of ln k for one standard uncertainty.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import TYPE_CHECKING

from knought.errors import InputError
from knought.measurement.shared_errors import SharedError

if TYPE_CHECKING:
    from collections.abc import Mapping

    from knought.measurement.complexed_product import ComplexedProduct

__all__ = ["Optics", "Rate"]


@dataclass(frozen=True)
class Rate:
    """A rate of reaction.

    Attributes
    ----------
    value, standard_uncertainty
        mol L^-1 s^-1; u from the slope alone.
    absorptivity
        ε in L mol^-1 cm^-1 that was used.
    shares
        Share of the product in each of its forms; empty where it has one form.
    by_constant
        What one standard uncertainty of each equilibrium constant and ΔH does to ln(rate), by name.
    by_ligand
        ∂ln(rate)/∂ln[ligand], by ligand.
    """

    value: float
    standard_uncertainty: float
    absorptivity: float
    shares: Mapping[str, float]
    by_constant: Mapping[str, float]
    by_ligand: Mapping[str, float]


@dataclass(frozen=True, eq=False)
class Optics:
    """What turns absorbance into concentration.

    Parameters
    ----------
    absorptivity
        ε in L mol^-1 cm^-1 of what absorbs (the difference product less reactant where both do);
        not needed where `product` gives it.
    path_length
        l in cm.
    stoichiometric_number
        ν: how many of what absorbs form in one turn of the reaction; negative where it is used up.
    u_absorptivity, u_path_length
        Relative standard uncertainties.
    product
        The product's other forms, where it has some; their ε are then its own, all with the
        relative uncertainty `u_absorptivity`.

    Raises
    ------
    InputError
        If a number cannot be, or there is no absorptivity or two.
    """

    absorptivity: float | None = None
    path_length: float = 1.0
    stoichiometric_number: float = 1.0
    u_absorptivity: float = 0.0
    u_path_length: float = 0.0
    product: ComplexedProduct | None = None

    def __post_init__(self) -> None:
        if (self.absorptivity is None) == (self.product is None):
            raise InputError(
                "one absorptivity is needed",
                "give that of what absorbs, or the product with its forms",
            )
        epsilon = 1.0 if self.absorptivity is None else self.absorptivity
        if not (epsilon and math.isfinite(epsilon) and 0 < self.path_length < math.inf):
            raise InputError("an absorptivity or path length cannot be", "give both, not zero")
        if not (self.stoichiometric_number and math.isfinite(self.stoichiometric_number)):
            raise InputError("the stoichiometric number is zero", "give ν, negative if used up")
        if not (0 <= self.u_absorptivity < 1 and 0 <= self.u_path_length < 1):
            raise InputError("a relative uncertainty cannot be", "2 % is 0.02")

    def line(self) -> str:
        """Say in a line how a slope becomes a rate."""
        number = self.stoichiometric_number
        over = "l ε" if number == 1 else f"ν l ε with ν = {number:g}"
        what = f"ε = {self.absorptivity:g} L mol^-1 cm^-1" if self.absorptivity else ""
        if self.product is not None:
            forms = "; ".join(each.reaction for each in self.product.equilibria)
            what = f"ε that of {self.product.product} in all its forms ({forms}), run by run"
        return f"rate = slope / ({over}), l = {self.path_length:g} cm, {what}"

    def rate(
        self,
        slope: float,
        standard_uncertainty: float,
        *,
        T: float = 298.15,
        I: float = 0.0,
        ligands: Mapping[str, float] | None = None,
    ) -> Rate:
        """Return the rate of reaction that a slope of absorbance means.

        Parameters
        ----------
        slope, standard_uncertainty
            dA/dt and its standard uncertainty, s^-1.
        T, I
            Temperature in K and ionic strength in mol/L, for the equilibrium constants.
        ligands
            Free concentrations in mol/L of what binds the product.

        Raises
        ------
        InputError
            If a ligand is missing.
        """
        shares: Mapping[str, float] = {}
        by_constant: Mapping[str, float] = {}
        by_ligand: Mapping[str, float] = {}
        if self.product is None:
            epsilon = self.absorptivity or 0.0
        else:
            found = self.product.effective(ligands or {}, T, I)
            epsilon, shares = found.value, found.shares
            # A larger ε_eff means a smaller rate.
            by_constant = {name: -change for name, change in found.by_constant.items()}
            by_ligand = {name: -change for name, change in found.by_ligand.items()}
        factor = 1.0 / (epsilon * self.path_length * self.stoichiometric_number)
        return Rate(
            slope * factor,
            standard_uncertainty * abs(factor),
            epsilon,
            shares,
            by_constant,
            by_ligand,
        )

    def shared_errors(self) -> tuple[SharedError, ...]:
        """Return the errors that all runs share, relative on k."""
        named = (
            ("molar absorptivity", self.u_absorptivity),
            ("path length", self.u_path_length),
        )
        return tuple(SharedError(name, kind="factor", u=u) for name, u in named if u)
