"""``[medium]`` of a study file: stocks, recipes and equilibria."""

from __future__ import annotations

import math
from typing import TYPE_CHECKING, Annotated, Literal

import numpy as np
from pydantic import BeforeValidator, Field

from knought.chemistry.activity import (
    ActivityForm,
    DaviesForm,
    ExtendedForm,
    GuntelbergForm,
    LimitingForm,
    PitzerForm,
    SITForm,
)
from knought.chemistry.equilibria import Equilibrium
from knought.chemistry.equilibria_known import known_equilibria
from knought.chemistry.medium_series import MediumSeries, prepare_series
from knought.chemistry.recipe import Recipe, Stock
from knought.errors import InputError, Problem
from knought.measurement.runs_reading import Runs
from knought.study_sections.base import (
    Energy,
    Entropy,
    Kelvin,
    MolPerLitre,
    Relative,
    Section,
    in_unit,
)

if TYPE_CHECKING:
    from collections.abc import Sequence

__all__ = ["EquilibriumSection", "MediumSection", "RecipeSection", "StockSection"]

Litre = Annotated[float, BeforeValidator(in_unit("L"))]

_FORMS: dict[str, type[ActivityForm]] = {
    form.name: form
    for form in (LimitingForm, GuntelbergForm, ExtendedForm, DaviesForm, SITForm, PitzerForm)
}


class EquilibriumSection(Section):
    """An equilibrium with its constant: `lg_K`, or `K` as a number in mol/L (mol/kg)."""

    reaction: str
    lg_K: float | None = None
    K: float | None = Field(default=None, gt=0)
    reference_temperature: Kelvin = 298.15
    enthalpy: Energy = 0.0
    heat_capacity: Entropy = 0.0
    u_lg_K: float = Field(default=0.0, ge=0)
    u_K: Relative | None = None
    u_enthalpy: Energy = 0.0
    basis: Literal["molar", "molal"] = "molar"
    ionic_strength: MolPerLitre = 0.0
    source: str = ""

    def equilibrium(self) -> Equilibrium:
        """Return it as the solver takes it.

        Raises
        ------
        InputError
            If there is not one constant, or the reaction is wrong.
        """
        if (self.lg_K is None) == (self.K is None):
            raise InputError(
                Problem("one of lg_K and K is needed", "give one of them", read=self.reaction)
            )
        return Equilibrium(
            self.reaction,
            self.lg_K if self.lg_K is not None else math.log10(self.K or 1.0),
            self.reference_temperature,
            self.enthalpy,
            self.heat_capacity,
            self.u_lg_K if self.u_K is None else self.u_K / math.log(10.0),
            self.u_enthalpy,
            self.basis,
            self.ionic_strength,
            self.source,
        )


class StockSection(Section):
    """``[[medium.stocks]]``: a stock solution."""

    name: str
    contents: dict[str, MolPerLitre]
    u: Relative = 0.0


class RecipeSection(Section):
    """``[[medium.recipes]]``: what was poured into one run."""

    run: str
    volumes: dict[str, Litre] = Field(default_factory=dict)
    water: Litre = 0.0
    total_volume: Litre | None = None
    final: dict[str, MolPerLitre] = Field(default_factory=dict)


class MediumSection(Section):
    """``[medium]``: what is in the solutions, and the equilibria among it.

    Recipes stand in the section itself, or as columns ``V(stock)/mL`` of the table of runs. Without
    either each run holds the substances of its ``c(...)`` columns and `final`.
    """

    temperature: Kelvin = 298.15
    activity_law: Literal["limiting", "guntelberg", "extended", "davies", "sit", "pitzer"] = (
        "davies"
    )
    equilibria: tuple[str, ...] = ()
    equilibrium: tuple[EquilibriumSection, ...] = ()
    stocks: tuple[StockSection, ...] = ()
    recipes: tuple[RecipeSection, ...] = ()
    final: dict[str, MolPerLitre] = Field(default_factory=dict)
    total_volume: Litre | None = None
    u_volume: Relative = 0.0

    def form(self) -> ActivityForm:
        """Return the activity law."""
        return _FORMS[self.activity_law]()

    def all_equilibria(self) -> tuple[Equilibrium, ...]:
        """Return the equilibria, named ones first.

        Raises
        ------
        InputError
            If a name is unknown, or an equilibrium is wrong.
        """
        named = [each for name in self.equilibria for each in known_equilibria(name)]
        return (*named, *(each.equilibrium() for each in self.equilibrium))

    def made(self, runs: Runs | None = None) -> tuple[Recipe, ...]:
        """Return a recipe for each run; in the order of `runs`, where they are given.

        Raises
        ------
        InputError
            If a run has no recipe, or a recipe is wrong.
        """
        stocks = tuple(Stock(each.name, each.contents, each.u) for each in self.stocks)
        by_run = {each.run: each for each in self.recipes}
        if runs is not None and runs.volumes:
            return self._pipetted(runs, stocks)
        if runs is not None and not by_run:
            return tuple(
                Recipe(
                    final={
                        **self.final,
                        **{name: float(c[i]) for name, c in runs.concentrations.items()},
                    },
                    name=run,
                )
                for i, run in enumerate(runs.run)
            )
        labels = tuple(by_run) if runs is None else runs.run
        missing = [run for run in labels if run not in by_run]
        if missing or not labels:
            raise InputError(
                f"there is no recipe for {', '.join(missing) or 'any run'}",
                "add [[medium.recipes]] with run = ...",
            )
        return tuple(
            Recipe(
                volumes=by_run[run].volumes,
                stocks=stocks,
                water=by_run[run].water,
                total_volume=by_run[run].total_volume or self.total_volume,
                final={**self.final, **by_run[run].final},
                name=run,
                u_volume=self.u_volume,
            )
            for run in labels
        )

    def _pipetted(self, runs: Runs, stocks: tuple[Stock, ...]) -> tuple[Recipe, ...]:
        """Return a recipe for each run from the columns of volumes.

        Raises
        ------
        InputError
            If there are recipes besides, or one is wrong.
        """
        if self.recipes:
            raise InputError(
                "volumes stand in the table of runs and in [[medium.recipes]]",
                "keep one of the two, so that they cannot disagree",
            )
        poured = {name: v for name, v in runs.volumes.items() if name not in {"water", "total"}}
        zero = np.zeros(len(runs.run))
        water, total = runs.volumes.get("water", zero), runs.volumes.get("total")
        return tuple(
            Recipe(
                volumes={name: float(v[i]) for name, v in poured.items()},
                stocks=stocks,
                water=float(water[i]),
                total_volume=self.total_volume if total is None else float(total[i]),
                final=self.final,
                name=run,
                u_volume=self.u_volume,
            )
            for i, run in enumerate(runs.run)
        )

    def series(self, runs: Runs | None = None) -> MediumSeries:
        """Return the media of the runs, at each run's own temperature.

        Raises
        ------
        InputError
            If a recipe is missing or wrong, or the equilibria cannot be solved.
        """
        T: float | Sequence[float] = self.temperature if runs is None else runs.T.tolist()
        return prepare_series(self.made(runs), T, self.all_equilibria(), self.form())
