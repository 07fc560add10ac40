"""Literature values as they were published: what, where, at which conditions, with which ±.

One :class:`LiteratureValue` is one number of one paper. Nothing is carried anywhere here; that is
done by :mod:`knought.discussion.matched`, which takes our surface to the paper's conditions.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import TYPE_CHECKING

from knought.chemistry.quantities import Quantity, quantity
from knought.discussion.literature_spread import NO_SPREAD, Spread
from knought.errors import InputError, Problem

if TYPE_CHECKING:
    from collections.abc import Iterable
    from fractions import Fraction

__all__ = ["COMPARED", "LiteratureValue", "literature_values"]

#: Quantities that can be compared, in the order in which they are shown.
COMPARED = (
    "rate_constant",
    "activation_energy",
    "ln_pre_exponential_factor",
    "activation_enthalpy",
    "activation_entropy",
    "activation_gibbs_energy",
    "charge_product",
)

#: Of these the size depends on the unit of k, and so on the order.
_OF_THE_ORDER = frozenset(
    {
        "rate_constant",
        "ln_pre_exponential_factor",
        "activation_entropy",
        "activation_gibbs_energy",
    }
)


@dataclass(frozen=True)
class LiteratureValue:
    """One number of one paper.

    Parameters
    ----------
    label
        How the paper is called, ``"King 1931"``.
    name
        Name of the quantity: one of :data:`COMPARED`.
    value
        In the unit of the registry: (L/mol)^(n-1) s^-1, J/mol, J/(K mol).
    spread
        Its ±.
    T
        Temperature in K; None where the paper states none (its E_a holds over a range).
    I
        Ionic strength in mol/L, 0 for I → 0; None where the paper states none.
    order
        Overall order; None where it is ours.
    year
        Year of publication.
    medium
        Salt, buffer, solvent, in words.
    standard_concentration
        c° in mol/L, to which ΔS‡ and ΔG‡ refer.
    note
        Free text.
    place
        Where it was read, ``"literature.csv, row 3"``.

    Raises
    ------
    InputError
        If the quantity cannot be compared, or a number cannot be; every problem is told.
    """

    label: str
    name: str
    value: float
    spread: Spread = NO_SPREAD
    T: float | None = None
    I: float | None = None
    order: Fraction | None = None
    year: int | None = None
    medium: str = ""
    standard_concentration: float = 1.0
    note: str = ""
    place: str = ""

    def __post_init__(self) -> None:
        problems = list(self._problems())
        if problems:
            raise InputError(problems)

    def _problems(self) -> Iterable[Problem]:
        who = f"{self.label}: " if self.label else ""
        if self.name not in COMPARED:
            yield Problem(
                f"{who}{self.name!r} is no quantity that is compared",
                f"choose from {', '.join(COMPARED)}",
            )
        if not math.isfinite(self.value):
            yield Problem(f"{who}the value is {self.value}", "give a finite number")
        if self.name == "rate_constant" and not self.value > 0:
            yield Problem(f"{who}k is {self.value:g}", "a rate constant is positive")
        if self.name == "rate_constant" and self.T is None:
            yield Problem(f"{who}k has no temperature", "give T with it")
        if self.T is not None and not 0 < self.T < math.inf:
            yield Problem(f"{who}T is {self.T:g} K", "give a temperature above 0 K")
        if self.I is not None and not 0 <= self.I < math.inf:
            yield Problem(f"{who}I is {self.I:g} mol/L", "an ionic strength is at least zero")
        if not 0 < self.standard_concentration < math.inf:
            yield Problem(f"{who}c° is {self.standard_concentration:g} mol/L", "give 1 mol/L")
        if self.spread.meaning == "F-factor" and self.name != "rate_constant":
            yield Problem(f"{who}an F-factor belongs to k", "say what ± of this value means")

    @property
    def logarithmic(self) -> bool:
        """Whether it is compared as a logarithm: rate constants."""
        return self.name == "rate_constant"

    @property
    def depends_on_order(self) -> bool:
        """Whether its size depends on the order and on the units of concentration."""
        return self.name in _OF_THE_ORDER

    @property
    def standard_uncertainty(self) -> float | None:
        """Standard uncertainty in the unit of the value; None where none is given."""
        return self.spread.standard_uncertainty(self.value, self.T)

    @property
    def compared_value(self) -> float:
        """The value as it is compared: ln k for a rate constant."""
        return math.log(self.value) if self.logarithmic else self.value

    @property
    def compared_uncertainty(self) -> float | None:
        """Standard uncertainty of :attr:`compared_value`: u(k)/k for a rate constant."""
        u = self.standard_uncertainty
        return u / self.value if u is not None and self.logarithmic else u

    @property
    def source(self) -> str:
        """Label and year."""
        has_year = self.year is not None and str(self.year) not in self.label
        return f"{self.label} ({self.year})" if has_year else self.label

    def quantity(self, order: Fraction) -> Quantity:
        """Return the quantity with its unit, for a reaction of overall order `order`."""
        name = "measured_rate_constant" if self.name == "rate_constant" else self.name
        return quantity(name, self.order if self.order is not None else order)


def literature_values(
    papers: Iterable[LiteratureValue],
) -> tuple[LiteratureValue, ...]:
    """Return literature values as a tuple, checked to be some.

    Raises
    ------
    InputError
        If there is none.
    """
    found = tuple(papers)
    if not found:
        raise InputError(
            "there is no literature value to compare with", "give one row a paper at least"
        )
    return found
