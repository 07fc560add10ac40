"""What was pipetted: stocks, volumes, and the composition that mixing gives.

The idea first: a run is made of volumes of stocks (and water), so what it holds is linear in the
stocks' concentrations, c_i = Σ_s V_s c_s,i / V. One stock that is 1 % too strong moves every run
that uses it, each by its own share; that is why a recipe keeps stocks by name, and not only final
concentrations. Volumes are taken to add up unless the run is made up to a mark.
"""

from __future__ import annotations

import math
from dataclasses import dataclass, field
from types import MappingProxyType
from typing import TYPE_CHECKING

from knought.chemistry.recipe_salts import dissociated
from knought.errors import InputError, Problem

if TYPE_CHECKING:
    from collections.abc import Mapping

    from knought.chemistry.species import Species

__all__ = ["Recipe", "Stock"]

#: No solution holds more of anything, mol/L; water itself has 55.
_MOST = 100.0


@dataclass(frozen=True, eq=False)
class Stock:
    """A stock solution.

    Parameters
    ----------
    name
        What it is called in the recipe and in the budget.
    contents
        Concentrations in mol/L by substance: ``{"NaClO4": 1.0, "HClO4": 0.01}``.
    u
        Relative standard uncertainty of its concentration, common to all that it holds.

    Raises
    ------
    InputError
        If a substance cannot be read, or a number cannot be.
    """

    name: str
    contents: Mapping[str, float]
    u: float = 0.0
    ions: Mapping[Species, float] = field(init=False, repr=False)

    def __post_init__(self) -> None:
        if not 0 <= self.u < 1:
            raise InputError(
                f"the stock {self.name!r} has a relative u of {self.u:g}",
                "give it as a fraction: 0.5 % is 0.005",
            )
        object.__setattr__(self, "contents", MappingProxyType(dict(self.contents)))
        found = _ions(self.contents, f"stock {self.name!r}")
        object.__setattr__(self, "ions", MappingProxyType(found))


@dataclass(frozen=True, eq=False)
class Recipe:
    """One run's solution.

    Parameters
    ----------
    volumes
        Volume of each stock, by its name; any unit, the same for all.
    stocks
        The stocks that the volumes name; others may be among them.
    water
        Volume of water added, in the same unit.
    total_volume
        Volume after making up to a mark; the sum of all volumes if not given.
    final
        Final concentrations in mol/L of substances that are known directly, added to what the
        stocks bring.
    name
        Label of the run.
    u_volume
        Relative standard uncertainty of each volume, independent from one to the next.

    Raises
    ------
    InputError
        If a volume names no stock, a number cannot be, or there is nothing in the run; every
        problem is told.
    """

    volumes: Mapping[str, float] = field(default_factory=dict)
    stocks: tuple[Stock, ...] = ()
    water: float = 0.0
    total_volume: float | None = None
    final: Mapping[str, float] = field(default_factory=dict)
    name: str = ""
    u_volume: float = 0.0

    def __post_init__(self) -> None:
        object.__setattr__(self, "volumes", MappingProxyType(dict(self.volumes)))
        object.__setattr__(self, "final", MappingProxyType(dict(self.final)))
        object.__setattr__(self, "stocks", tuple(self.stocks))
        problems = [*self._problems()]
        if problems:
            raise InputError(problems)

    def _problems(self) -> list[Problem]:
        where = f"recipe {self.name!r}: " if self.name else ""
        names = [stock.name for stock in self.stocks]
        found = [
            Problem(f"{where}there are two stocks {name!r}", "give each stock its own name")
            for name in {each for each in names if names.count(each) > 1}
        ]
        for name, volume in self.volumes.items():
            if name not in names:
                known = ", ".join(names) or "none"
                found.append(Problem(f"{where}there is no stock {name!r}", f"the stocks: {known}"))
            if not 0 <= volume < math.inf:
                found.append(
                    Problem(f"{where}the volume of {name!r} is {volume:g}", "give it above zero")
                )
        if not 0 <= self.water < math.inf or not 0 <= self.u_volume < 1:
            found.append(
                Problem(f"{where}water or u(V) cannot be", "volumes are at least 0, u below 1")
            )
        poured = sum(self.volumes.values()) + self.water
        if self.total_volume is not None and not poured <= self.total_volume * (1 + 1e-9):
            found.append(
                Problem(
                    f"{where}{poured:g} was poured into a total volume of {self.total_volume:g}",
                    "check the volumes and the mark",
                )
            )
        if not self.final and not poured > 0:
            found.append(Problem(f"{where}nothing is in it", "give volumes or concentrations"))
        return found

    @property
    def shares(self) -> dict[str, float]:
        """Dilution V_s/V of each stock that is used, by its name."""
        if not self.volumes:
            return {}
        total = self.total_volume
        total = sum(self.volumes.values()) + self.water if total is None else total
        return {name: volume / total for name, volume in self.volumes.items() if volume > 0}

    def composition(self, stronger: Mapping[str, float] | None = None) -> dict[Species, float]:
        """Return the concentrations after mixing, before any equilibrium, in mol/L.

        Parameters
        ----------
        stronger
            Relative change of a stock's concentration, by its name: what uncertainties are
            carried along.

        Raises
        ------
        InputError
            If a substance of `final` cannot be read, or a concentration cannot be.
        """
        found = _ions(self.final, f"recipe {self.name!r}")
        by_name = {stock.name: stock for stock in self.stocks}
        for name, share in self.shares.items():
            factor = share * (1 + (stronger or {}).get(name, 0.0))
            for species, concentration in by_name[name].ions.items():
                found[species] = found.get(species, 0.0) + factor * concentration
        return found


def _ions(contents: Mapping[str, float], where: str) -> dict[Species, float]:
    """Return the species that substances give, with their concentrations.

    Raises
    ------
    InputError
        If a substance cannot be read or a concentration cannot be; all are told.
    """
    found: dict[Species, float] = {}
    problems: list[Problem] = []
    for substance, concentration in contents.items():
        if not 0 <= concentration < math.inf:
            problems.append(
                Problem(
                    f"{where}: the concentration of {substance} is {concentration:g} mol/L",
                    "concentrations are at least zero",
                )
            )
            continue
        if concentration > _MOST:
            problems.append(
                Problem(
                    f"{where}: {concentration:g} mol/L of {substance} is more than any solution "
                    "holds",
                    "check the unit: a number without one is in mol/L",
                )
            )
            continue
        try:
            parts = dissociated(substance)
        except InputError as error:
            problems += error.problems
            continue
        for species, number in parts.items():
            found[species] = found.get(species, 0.0) + number * concentration
    if problems:
        raise InputError(problems)
    return found
