"""Recipes: what a substance gives, and what mixing makes of stocks."""

from __future__ import annotations

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from knought.chemistry.recipe import Recipe, Stock
from knought.chemistry.recipe_salts import dissociated
from knought.chemistry.species import parse_species
from knought.errors import InputError


@pytest.mark.parametrize(
    ("text", "ions"),
    [
        ("NaCl", {"Na+": 1, "Cl-": 1}),
        ("Na2SO4", {"Na+": 2, "SO4^2-": 1}),
        ("(NH4)2S2O8", {"NH4+": 2, "S2O8^2-": 1}),
        ("LaCl3", {"La^3+": 1, "Cl-": 3}),
        ("K4Fe(CN)6", {"K+": 4, "Fe(CN)6^4-": 1}),
        ("MgSO4·7H2O", {"Mg^2+": 1, "SO4^2-": 1}),
        ("HClO4", {"H+": 1, "ClO4-": 1}),
        ("H2SO4", {"H+": 1, "HSO4-": 1}),
        ("NaH2PO4", {"Na+": 1, "H2PO4-": 1}),
        ("CH3COONa", {"Na+": 1, "CH3COO-": 1}),
        ("CH3COOH", {"CH3COOH": 1}),
        ("H2O2", {"H2O2": 1}),
        ("K+", {"K+": 1}),
        ("[Co(NH3)5Cl]^2+ + 2 ClO4-", {"[Co(NH3)5Cl]^2+": 1, "ClO4-": 2}),
    ],
)
def test_a_formula_gives_its_ions(text: str, ions: dict[str, int]) -> None:
    assert dissociated(text) == {parse_species(ion): number for ion, number in ions.items()}


@pytest.mark.parametrize("text", ["KHSO5", "KAl(SO4)2", "Na2XQ"])
def test_what_is_no_plain_salt_is_refused(text: str) -> None:
    with pytest.raises(InputError):
        dissociated(text)


def test_mixing_dilutes_each_stock_by_its_own_volume() -> None:
    salt, acid = Stock("salt", {"Na2SO4": 0.5}), Stock("acid", {"HCl": 0.1})
    recipe = Recipe({"salt": 2.0, "acid": 1.0}, (salt, acid), water=7.0)
    found = {species.ascii: c for species, c in recipe.composition().items()}
    # 2 mL of 0.5 mol/L in 10 mL: 0.1 mol/L Na2SO4; 1 mL of 0.1 mol/L: 0.01 mol/L HCl.
    expected = {"Na^+": 0.2, "SO4^2-": 0.1, "H^+": 0.01, "Cl^-": 0.01}
    assert found == pytest.approx(expected, rel=1e-14)


def test_a_mark_stands_above_the_sum_of_volumes() -> None:
    stock = Stock("KCl", {"KCl": 1.0})
    recipe = Recipe({"KCl": 10.0}, (stock,), total_volume=100.0)
    assert recipe.composition()[parse_species("K+")] == pytest.approx(0.1)


def test_every_problem_of_a_recipe_is_told() -> None:
    with pytest.raises(InputError) as caught:
        Recipe({"KI": 1.0, "NaCl": -1.0}, (Stock("KCl", {"KCl": 1.0}),))
    assert len(caught.value.problems) >= 3  # two unknown stocks, one negative volume


def test_more_than_the_mark_is_refused() -> None:
    with pytest.raises(InputError, match="total volume"):
        Recipe({"a": 9.0}, (Stock("a", {"KCl": 1.0}),), water=2.0, total_volume=10.0)


@settings(max_examples=30, deadline=None)
@given(st.floats(1e-6, 5.0), st.floats(0.01, 100.0), st.floats(0.0, 100.0))
def test_amounts_are_kept_when_volumes_are_mixed(c: float, volume: float, water: float) -> None:
    recipe = Recipe({"a": volume}, (Stock("a", {"Na2SO4": c}),), water=water)
    sodium = recipe.composition()[parse_species("Na+")] * (volume + water)
    assert sodium == pytest.approx(2 * c * volume, rel=1e-12)
