"""A series of runs made from shared stocks: I of each with u(I) and correlation, and how to set I.

The idea first: u(I) of a run has a part of its own (each pipetted volume) and parts that all runs
from one stock share. The shared parts are kept by name, J_rs = ∂I_r/∂ln c_s · u_s, so that the
covariance of the I values is J Jᵀ plus a diagonal, and a fit can be told of each stock.

Setting I is the reverse: how much of a salt makes I = goal, with the equilibria in it (the salt
may pair with what is there). I rises with the salt, so the root is bracketed and found.
"""

from __future__ import annotations

import math
from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

import numpy as np

from knought.arrays import FloatArray, frozen
from knought.chemistry.medium import Medium, prepare
from knought.errors import InputError

if TYPE_CHECKING:
    from collections.abc import Mapping, Sequence

    from knought.chemistry.activity import ActivityForm
    from knought.chemistry.equilibria import Equilibrium
    from knought.chemistry.recipe import Recipe

__all__ = ["MediumSeries", "prepare_series", "salt_series", "salt_to_reach"]

#: Relative step of the central differences; I is solved to 1e-13, so 1e-4 leaves 1e-8.
_STEP = 1e-4

_MOST_SALT = 20.0


@dataclass(frozen=True, eq=False)
class MediumSeries:
    """Media of a series of runs.

    Attributes
    ----------
    media
        One a run.
    ionic_strength : (n,) ndarray
        mol/L.
    sources
        Names of the shared sources: stocks with an uncertainty.
    shared : (n, s) ndarray
        What one standard uncertainty of each source does to each I, mol/L.
    own : (n,) ndarray
        Standard uncertainty of each I of its own (volumes), mol/L.
    recipes
        The recipes that the media were made from.
    """

    media: tuple[Medium, ...]
    ionic_strength: FloatArray
    sources: tuple[str, ...]
    shared: FloatArray
    own: FloatArray
    recipes: tuple[Recipe, ...] = ()

    @property
    def covariance(self) -> FloatArray:
        """Covariance of the ionic strengths, ``(n, n)``, (mol/L)²."""
        return np.asarray(self.shared @ self.shared.T + np.diag(self.own**2))

    @property
    def standard_uncertainty(self) -> FloatArray:
        """u(I) of each run, shared parts included, mol/L."""
        return np.sqrt(np.diag(self.covariance))

    @property
    def correlation(self) -> FloatArray:
        """Correlation of the ionic strengths, ``(n, n)``; zero where one is certain."""
        u = self.standard_uncertainty
        both = np.outer(u, u)
        return np.divide(self.covariance, both, out=np.eye(len(u)), where=both > 0)


def prepare_series(
    recipes: Sequence[Recipe],
    T: float | Sequence[float] = 298.15,
    equilibria: Sequence[Equilibrium] = (),
    form: ActivityForm | None = None,
) -> MediumSeries:
    """Return the media of several runs, with u(I) and what they share.

    Stocks of the same name are one stock. Equilibrium constants with an uncertainty are shared
    sources as well.

    Parameters
    ----------
    recipes
        One a run.
    T
        Temperatures in K, one for all or one a run.
    equilibria, form
        As for :func:`knought.chemistry.medium.prepare`.

    Raises
    ------
    InputError
        If a recipe cannot be prepared, or there is not one temperature a run.
    """
    temperatures = (
        np.broadcast_to(np.asarray(T, dtype=float), (len(recipes),))
        if (np.ndim(T) == 0 or len(np.atleast_1d(T)) == len(recipes))
        else None
    )
    if temperatures is None or not recipes:
        raise InputError("there is not one temperature for each recipe", "give one a run")
    runs = [(recipe, float(at)) for recipe, at in zip(recipes, temperatures, strict=True)]
    media = tuple(prepare(recipe, at, equilibria, form) for recipe, at in runs)
    stocks = {stock.name: stock.u for recipe in recipes for stock in recipe.stocks if stock.u}
    columns = [
        [_by_stock(recipe, at, equilibria, form, name) * u for recipe, at in runs]
        for name, u in stocks.items()
    ]
    uncertain = [
        (i, name, part)
        for i, each in enumerate(equilibria)
        for name, part, u in (("K", "lg_K", each.u_lg_K), ("ΔH", "enthalpy", each.u_enthalpy))
        if u
    ]
    columns += [
        [_by_constant(recipe, at, equilibria, form, i, part) for recipe, at in runs]
        for i, _, part in uncertain
    ]
    own = [_own(recipe, at, equilibria, form) for recipe, at in runs]
    return MediumSeries(
        media,
        frozen([medium.ionic_strength for medium in media]),
        (
            *(f"stock {name}" for name in stocks),
            *(f"{name} of {equilibria[i].reaction}" for i, name, _ in uncertain),
        ),
        frozen(np.array(columns).T if columns else np.zeros((len(runs), 0))),
        frozen(own),
        tuple(recipes),
    )


def _by_stock(
    recipe: Recipe,
    T: float,
    equilibria: Sequence[Equilibrium],
    form: ActivityForm | None,
    name: str,
) -> float:
    """Return ∂I/∂ln c of a stock, in mol/L."""
    if name not in recipe.shares:
        return 0.0
    up, down = (
        prepare(recipe, T, equilibria, form, stronger={name: sign * _STEP}).ionic_strength
        for sign in (1, -1)
    )
    return (up - down) / (2 * _STEP)


def _by_constant(
    recipe: Recipe,
    T: float,
    equilibria: Sequence[Equilibrium],
    form: ActivityForm | None,
    index: int,
    part: str,
) -> float:
    """Return what one standard uncertainty of a constant's part does to I, in mol/L."""
    one = equilibria[index]
    value, u = float(getattr(one, part)), float(getattr(one, f"u_{part}"))
    ends = []
    for sign in (1, -1):
        moved = replace(one, **{part: value + sign * u})  # type: ignore[arg-type]
        changed = [*equilibria[:index], moved, *equilibria[index + 1 :]]
        ends.append(prepare(recipe, T, changed, form).ionic_strength)
    return (ends[0] - ends[1]) / 2


def _own(
    recipe: Recipe, T: float, equilibria: Sequence[Equilibrium], form: ActivityForm | None
) -> float:
    """Return u(I) from the volumes of one run, each independent; the total stays as it is."""
    if not recipe.u_volume:
        return 0.0
    slopes = [_by_stock(recipe, T, equilibria, form, name) for name in recipe.shares]
    return recipe.u_volume * math.sqrt(sum(slope**2 for slope in slopes))


def salt_to_reach(
    ionic_strength: float,
    salt: str,
    recipe: Recipe | Mapping[str, float] | None = None,
    T: float = 298.15,
    equilibria: Sequence[Equilibrium] = (),
    form: ActivityForm | None = None,
) -> float:
    """Return the concentration of a salt that brings a run to an ionic strength.

    Parameters
    ----------
    ionic_strength
        The goal, mol/L.
    salt
        ``"NaClO4"``; also ions, ``"Na+ + ClO4-"``.
    recipe
        What is in the run without the salt; nothing if not given.
    T, equilibria, form
        As for :func:`knought.chemistry.medium.prepare`.

    Returns
    -------
    float
        Final concentration of the salt in mol/L.

    Raises
    ------
    InputError
        If the run has more than the goal already, or no amount up to 20 mol/L reaches it.
    """
    from knought.chemistry.recipe import Recipe

    if recipe is None:
        recipe = Recipe(final={salt: 0.0})
    elif not isinstance(recipe, Recipe):
        recipe = Recipe(final=recipe)
    before = dict(recipe.final)

    def excess(amount: float) -> float:
        final = {**before, salt: before.get(salt, 0.0) + amount}
        changed = replace(recipe, final=final)
        return prepare(changed, T, equilibria, form).ionic_strength - ionic_strength

    left = -excess(0.0)
    if left < -1e-12 * ionic_strength:
        raise InputError(
            f"without {salt} the ionic strength is already {ionic_strength - left:.4g} mol/L",
            f"a goal of {ionic_strength:g} mol/L needs more dilute reagents or buffer",
        )
    if left <= 1e-12 * ionic_strength:
        return 0.0
    high = left
    while excess(high) < 0:
        high *= 2
        if high > _MOST_SALT:
            raise InputError(
                f"{salt} does not bring the run to {ionic_strength:g} mol/L",
                "check the salt, or the ion pairs that take it up",
            )
    from scipy.optimize import brentq

    return float(brentq(excess, 0.0, high, xtol=1e-16, rtol=1e-13))


def salt_series(
    ionic_strengths: Sequence[float],
    salt: str,
    recipe: Recipe | Mapping[str, float] | Sequence[Recipe] | None = None,
    T: float = 298.15,
    equilibria: Sequence[Equilibrium] = (),
    form: ActivityForm | None = None,
) -> FloatArray:
    """Return the salt for a series of goals, or for several recipes at one goal.

    With one goal repeated and a recipe a run this is a design of constant ionic strength.

    Parameters
    ----------
    ionic_strengths
        Goals, mol/L.
    salt, T, equilibria, form
        As for :func:`salt_to_reach`.
    recipe
        What is in every run without the salt, or one recipe a goal.

    Returns
    -------
    (n,) ndarray
        Final concentrations of the salt in mol/L.

    Raises
    ------
    InputError
        If a goal cannot be reached, or there are not as many recipes as goals.
    """
    from collections.abc import Sequence as SequenceType

    recipes = list(recipe) if isinstance(recipe, SequenceType) else [recipe] * len(ionic_strengths)
    if len(recipes) != len(ionic_strengths):
        raise InputError(
            f"there are {len(recipes)} recipes for {len(ionic_strengths)} ionic strengths",
            "give one recipe for all, or one a goal",
        )
    return frozen(
        [
            salt_to_reach(goal, salt, each, T, equilibria, form)
            for goal, each in zip(ionic_strengths, recipes, strict=True)
        ]
    )
