"""Concentrations of the reactants of a reduction, and how each hangs on the stocks.

A substance of the orders has a column of its own in the table of runs, or is made up by the recipe;
then its concentration is Σ_s V_s c_s/V, and a stock that is 1 % stronger moves it by that stock's
share. The shares are kept by stock: the same stock may move the ionic strength as well.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from knought.arrays import FloatArray, frozen
from knought.chemistry.recipe_salts import dissociated
from knought.errors import InputError, Problem

if TYPE_CHECKING:
    from collections.abc import Mapping

    from knought.chemistry.medium_series import MediumSeries
    from knought.chemistry.recipe import Recipe
    from knought.measurement.runs_reading import Runs

__all__ = ["Amount", "amount_of"]


@dataclass(frozen=True, eq=False)
class Amount:
    """Concentration of one substance in every run.

    Attributes
    ----------
    values : (n,) ndarray
        mol/L.
    by_stock
        Share of it that each stock brings, ∂ln c/∂ln c_s, by the stock's name, each ``(n,)``;
        empty where it was given as a column.
    """

    values: FloatArray
    by_stock: Mapping[str, FloatArray]


def amount_of(substance: str, runs: Runs, media: MediumSeries | None) -> Amount:
    """Return the concentration of a substance: of its column, else of the recipes.

    Parameters
    ----------
    substance
        A formula, ``"KI"`` or ``"I^-"``; of an ion every salt that brings it counts.
    runs, media
        The runs and their media.

    Raises
    ------
    InputError
        If neither knows it, or it is not in every run.
    """
    if substance in runs.concentrations:
        return Amount(runs.concentrations[substance], {})
    recipes = () if media is None else media.recipes
    if not recipes:
        raise InputError(
            Problem(
                f"there is no column c({substance})",
                "orders name columns of the table of runs, or what recipes of [medium] bring",
            )
        )
    parts = [_parts(substance, recipe) for recipe in recipes]
    values = np.array([sum(each.values()) for each in parts])
    if not np.all(values > 0):
        without = next(run for run, c in zip(runs.run, values, strict=True) if not c > 0)
        raise InputError(
            Problem(
                f"there is no column c({substance}), and none of it in what run {without} holds",
                "orders name columns of the table of runs, or what every run's recipe brings",
            )
        )
    stocks = dict.fromkeys(name for each in parts for name in each if name)
    by_stock = {
        name: frozen(np.array([each.get(name, 0.0) for each in parts]) / values) for name in stocks
    }
    return Amount(frozen(values), by_stock)


def _parts(substance: str, recipe: Recipe) -> dict[str, float]:
    """Return what each stock of a recipe brings of a substance in mol/L; "" for final amounts."""
    stocks = {stock.name: stock for stock in recipe.stocks}
    found = {
        name: share * _held(substance, stocks[name].contents)
        for name, share in recipe.shares.items()
    }
    found[""] = _held(substance, recipe.final)
    return {name: c for name, c in found.items() if c}


def _held(substance: str, contents: Mapping[str, float]) -> float:
    """Return how much of a substance a list of contents holds."""
    wanted = dissociated(substance)
    if len(wanted) == 1:
        ((species, number),) = wanted.items()
        return sum(c * dissociated(text).get(species, 0) / number for text, c in contents.items())
    return sum(c for text, c in contents.items() if dissociated(text) == wanted)
