"""Candidate mechanisms: what enters the transition state, and what each would lead us to expect.

A candidate is the set of species that enter the rate-determining transition state from the resting
state, fast pre-equilibria included: for A + H+ ⇌ AH+ and AH+ + B → products, k = K k₂ and the set
is A, H+ and B. What a pre-equilibrium releases counts as leaving. The transition state carries the
total charge, so that

    Δz² = z‡² - Σ ν z²,    z_A z_B = Δz²/2

follows for any number of species (Brønsted, Z. Phys. Chem. 102 (1922) 169; Bjerrum, ibid. 108
(1924) 82). Mechanisms with the same Δz² cannot be told apart by the salt effect, whatever the data.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from fractions import Fraction
from typing import TYPE_CHECKING

from knought.chemistry.species import Species, charge_change, parse_reactants
from knought.errors import InputError, Problem
from knought.given import given_number

if TYPE_CHECKING:
    from knought.rounding import Layout

__all__ = ["Candidate", "Expectation"]

#: Quantities about which a candidate may have expectations.
EXPECTED = ("activation_entropy", "activation_enthalpy", "activation_energy")


@dataclass(frozen=True)
class Expectation:
    """A range in which a candidate expects a quantity; one end may be open.

    Parameters
    ----------
    name
        ``"activation_entropy"``, ``"activation_enthalpy"`` or ``"activation_energy"``.
    low, high
        Ends in J/(K mol) or J/mol; infinite where open. A sign is a range with one end at zero.

    Raises
    ------
    InputError
        If the quantity is another one, or the ends are not in order.
    """

    name: str
    low: float = -math.inf
    high: float = math.inf

    def __post_init__(self) -> None:
        if self.name not in EXPECTED:
            raise InputError(
                f"a candidate has no expectation of {self.name!r}",
                f"choose from {', '.join(EXPECTED)}",
            )
        if not self.low < self.high or (math.isinf(self.low) and math.isinf(self.high)):
            raise InputError(
                f"the range expected of {self.name} is {self.low:g} to {self.high:g}",
                "give a lower and an upper end in order, one of which may be left out",
            )


@dataclass(frozen=True)
class Candidate:
    """A candidate mechanism.

    Parameters
    ----------
    name
        How it is called.
    reactants
        What enters the transition state, with charges: ``"H+ + A^2- + B^-"``.
    releases
        What a fast pre-equilibrium before it releases, ``"OH^-"``; empty for nothing.
    prior
        How likely it is before the data, beside the others; any positive number.
    expectations
        Ranges that it leads us to expect.
    order
        Overall order that it leads us to expect; None for no expectation.
    contact_distance, contact_distance_uncertainty
        Distance of the charges in its transition state and u of it, in m; None if not known.
    diffusion_coefficients
        Of the two species at 25 °C in m² s^-1; None for Stokes and Einstein.
    note
        Free text.

    Raises
    ------
    InputError
        If the species cannot be read, or a number cannot be.
    """

    name: str
    reactants: str
    releases: str = ""
    prior: float = 1.0
    expectations: tuple[Expectation, ...] = ()
    order: Fraction | None = None
    contact_distance: float | None = None
    contact_distance_uncertainty: float = 0.0
    diffusion_coefficients: tuple[float, float] | None = None
    note: str = ""

    def __post_init__(self) -> None:
        if not all(isinstance(text, str) for text in (self.name, self.reactants, self.releases)):
            raise InputError("name and species of a candidate are words", "write them as text")
        object.__setattr__(self, "prior", given_number(self.prior, "the prior"))
        if not self.prior > 0:
            raise InputError(
                Problem(f"the prior of {self.name} is {self.prior:g}", "give a number above zero")
            )
        if self.order is not None:
            object.__setattr__(self, "order", Fraction(self.order))
        object.__setattr__(self, "_species", self._parsed())

    def _parsed(self) -> tuple[tuple[int, Species], ...]:
        entering = parse_reactants(self.reactants)
        leaving = parse_reactants(self.releases) if self.releases.strip() else ()
        return (*entering, *((-number, species) for number, species in leaving))

    @property
    def species(self) -> tuple[tuple[int, Species], ...]:
        """Species with their numbers; negative for what leaves."""
        found: tuple[tuple[int, Species], ...] = self.__dict__["_species"]
        return found

    @property
    def transition_state_charge(self) -> int:
        """z‡, the total charge."""
        return sum(number * species.charge for number, species in self.species)

    @property
    def charge_change(self) -> int:
        """Δz² = z‡² - Σ ν z²."""
        return charge_change(self.species)

    @property
    def charge_product(self) -> float:
        """Δz²/2: z_A z_B for two species."""
        return self.charge_change / 2

    @property
    def pair(self) -> tuple[Species, Species] | None:
        """The two species of a bimolecular step; None for any other candidate."""
        singles = [species for number, species in self.species for _ in range(abs(number))]
        if len(singles) != 2 or any(number < 0 for number, _ in self.species):
            return None
        return singles[0], singles[1]

    @property
    def text(self) -> str:
        """What enters and leaves, in Unicode."""
        return self.written()

    def written(self, layout: Layout = "text") -> str:
        """Return what enters and leaves in `layout`."""
        entering = [_counted(number, each, layout) for number, each in self.species if number > 0]
        leaving = [_counted(-number, each, layout) for number, each in self.species if number < 0]
        text = " + ".join(entering)
        return f"{text} (releasing {' + '.join(leaving)})" if leaving else text


def _counted(number: int, species: Species, layout: Layout) -> str:
    written: str = getattr(species, layout)
    return f"{number} {written}" if number > 1 else written
