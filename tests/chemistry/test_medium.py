"""Media: ionic strengths by hand, buffers, and setting I."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from knought.chemistry.equilibria_known import known_equilibria
from knought.chemistry.medium import ionic_strength, prepare
from knought.chemistry.medium_series import prepare_series, salt_series, salt_to_reach
from knought.chemistry.recipe import Recipe, Stock
from knought.errors import InputError


@pytest.mark.parametrize(
    ("composition", "by_hand"),
    [
        # 1:1, NaCl 0.1: ½ (0.1·1 + 0.1·1) = 0.1
        ({"Na+": 0.1, "Cl-": 0.1}, 0.1),
        # 1:2, Na2SO4 0.05: ½ (0.10·1 + 0.05·4) = 0.15
        ({"Na+": 0.10, "SO4^2-": 0.05}, 0.15),
        # 2:1, CaCl2 0.02: ½ (0.02·4 + 0.04·1) = 0.06
        ({"Ca^2+": 0.02, "Cl-": 0.04}, 0.06),
        # 2:2, MgSO4 0.01, nothing paired: ½ (0.01·4 + 0.01·4) = 0.04
        ({"Mg^2+": 0.01, "SO4^2-": 0.01}, 0.04),
        # 3:1, LaCl3 0.01: ½ (0.01·9 + 0.03·1) = 0.06
        ({"La^3+": 0.01, "Cl-": 0.03}, 0.06),
        # 1:3, K3Fe(CN)6 0.01: ½ (0.03·1 + 0.01·9) = 0.06
        ({"K+": 0.03, "Fe(CN)6^3-": 0.01}, 0.06),
        # 1:4, K4Fe(CN)6 0.01: ½ (0.04·1 + 0.01·16) = 0.10
        ({"K+": 0.04, "Fe(CN)6^4-": 0.01}, 0.10),
        # 3:2, Al2(SO4)3 0.001: ½ (0.002·9 + 0.003·4) = 0.015
        ({"Al^3+": 0.002, "SO4^2-": 0.003}, 0.015),
        # K2S2O8 0.001 + KI 0.02 + KNO3 0.05: ½ (0.072 + 0.001·4 + 0.02 + 0.05) = 0.073
        ({"K+": 0.072, "S2O8^2-": 0.001, "I-": 0.02, "NO3-": 0.05}, 0.073),
        # HClO4 0.01 + NaClO4 0.09: ½ (0.01 + 0.09 + 0.10) = 0.10
        ({"H+": 0.01, "Na+": 0.09, "ClO4-": 0.10}, 0.10),
        # KH2PO4 0.025 + Na2HPO4 0.025: ½ (0.025 + 0.025 + 0.050 + 0.025·4) = 0.10
        ({"K+": 0.025, "H2PO4-": 0.025, "Na+": 0.05, "HPO4^2-": 0.025}, 0.10),
        # A neutral beside NaCl 0.1 counts nothing.
        ({"Na+": 0.1, "Cl-": 0.1, "CH3COOH": 0.5}, 0.1),
    ],
)
def test_ionic_strength_is_what_the_hand_computes(
    composition: dict[str, float], by_hand: float
) -> None:
    assert ionic_strength(composition) == pytest.approx(by_hand, rel=1e-14)


def test_a_forgotten_counter_ion_is_refused_with_how_much_is_missing() -> None:
    with pytest.raises(InputError, match=r"0\.1 mol/L of positive charge is left.*anions"):
        ionic_strength({"Na+": 0.2, "SO4^2-": 0.05})


def test_rounded_concentrations_are_neutral_enough() -> None:
    assert ionic_strength({"Na+": 0.0667, "SO4^2-": 0.0333}) == pytest.approx(0.09995)


@pytest.mark.parametrize("wrong", [-0.1, float("nan"), float("inf")])
def test_an_impossible_concentration_is_refused(wrong: float) -> None:
    with pytest.raises(InputError):
        ionic_strength({"Na+": wrong, "Cl-": 0.1})


@settings(max_examples=30, deadline=None)
@given(st.floats(1e-9, 5.0), st.floats(1e-3, 1e3))
def test_ionic_strength_scales_with_the_composition(c: float, factor: float) -> None:
    one = ionic_strength({"Na+": 2 * c, "SO4^2-": c})
    many = ionic_strength({"Na+": 2 * c * factor, "SO4^2-": c * factor})
    assert many == pytest.approx(factor * one, rel=1e-12)


@pytest.mark.parametrize(
    ("celsius", "published"), [(10, 6.923), (20, 6.881), (25, 6.865), (37, 6.841)]
)
def test_the_equimolal_phosphate_buffer_has_its_published_ph(
    celsius: float, published: float
) -> None:
    # 0.025 mol/kg KH2PO4 + 0.025 mol/kg Na2HPO4, NBS primary standard (Bates, Determination of pH,
    # 1973; from memory). Davies's law is good to 0.01-0.02 in pH at I = 0.1.
    T = celsius + 273.15
    c = 0.025 * 0.997
    buffer = [*known_equilibria("phosphate"), *known_equilibria("water")]
    found = prepare({"KH2PO4": c, "Na2HPO4": c}, T, buffer)
    assert found.ph == pytest.approx(published, abs=0.02)
    assert found.molal_ionic_strength == pytest.approx(0.1, rel=0.01)


def test_acid_sulfate_dissociates_less_than_fully() -> None:
    found = prepare({"H2SO4": 0.01}, 298.15, known_equilibria("hydrogen sulfate"))
    # pK 1.987: at I near 0.02 between 30 and 55 % of HSO4- is left.
    assert 0.003 < found["HSO4^-"] < 0.0055
    assert found["HSO4^-"] + found["SO4^2-"] == pytest.approx(0.01, rel=1e-12)


def test_sulfate_pairing_lowers_the_ionic_strength() -> None:
    pairs = known_equilibria("sodium sulfate")
    found = prepare({"Na2SO4": 0.05}, 298.15, pairs)
    assert found.stoichiometric_ionic_strength == pytest.approx(0.15)
    # Each pair takes Na+ (1), SO4^2- (4) and gives NaSO4- (1): I falls by 2 a pair.
    assert found.ionic_strength == pytest.approx(0.15 - 2 * found["NaSO4^-"], rel=1e-12)


def test_an_unbalanced_recipe_is_refused() -> None:
    with pytest.raises(InputError, match="not electrically neutral"):
        prepare({"Na+": 0.1})


def test_equilibria_beyond_the_law_s_domain_are_warned_of() -> None:
    found = prepare({"MgSO4": 0.9}, 298.15, known_equilibria("magnesium sulfate"))
    assert [each.code for each in found.caveats] == ["medium-beyond-domain"]
    assert prepare({"NaCl": 3.0}).caveats == ()


@pytest.mark.parametrize("goal", [0.02, 0.1, 0.5])
def test_the_salt_to_add_reaches_the_goal_with_its_pairs(goal: float) -> None:
    equilibria = [*known_equilibria("sodium sulfate"), *known_equilibria("phosphate")]
    base = {"KH2PO4": 0.001, "K2HPO4": 0.001}
    amount = salt_to_reach(goal, "Na2SO4", base, 298.15, equilibria)
    found = prepare({**base, "Na2SO4": amount}, 298.15, equilibria)
    assert found.ionic_strength == pytest.approx(goal, rel=1e-10)
    assert amount > (goal - 0.004) / 3  # pairing makes more salt needed


def test_a_design_of_constant_ionic_strength_makes_up_for_each_reagent() -> None:
    recipes = [Recipe(final={"K2S2O8": c}) for c in (0.001, 0.002, 0.004)]
    salts = salt_series([0.1] * 3, "KNO3", recipes)
    assert salts == pytest.approx([0.097, 0.094, 0.088], rel=1e-10)  # 0.1 - 3 c


def test_a_goal_below_what_is_there_is_refused() -> None:
    with pytest.raises(InputError, match="already"):
        salt_to_reach(0.01, "NaCl", {"Na2SO4": 0.05})


def test_runs_from_one_stock_are_correlated_and_volumes_are_not() -> None:
    salt, base = Stock("salt", {"NaClO4": 1.0}, u=0.01), Stock("acid", {"HClO4": 0.1}, u=0.005)
    recipes = [
        Recipe({"salt": v, "acid": 1.0}, (salt, base), total_volume=10.0, u_volume=0.002)
        for v in (0.5, 1.0, 2.0)
    ]
    found = prepare_series(recipes)
    I_salt, I_acid = np.array([0.05, 0.1, 0.2]), 0.01
    assert found.sources == ("stock salt", "stock acid")
    assert found.shared[:, 0] == pytest.approx(0.01 * I_salt, rel=1e-6)
    assert found.shared[:, 1] == pytest.approx([0.005 * I_acid] * 3, rel=1e-6)
    assert found.own == pytest.approx(0.002 * np.hypot(I_salt, I_acid), rel=1e-6)
    expected = 0.01**2 * I_salt[0] * I_salt[2] + (0.005 * I_acid) ** 2
    assert found.covariance[0, 2] == pytest.approx(expected, rel=1e-6)
    assert found.correlation[0, 2] > 0.9


def test_inputs_are_not_changed() -> None:
    contents = {"NaClO4": 1.0}
    prepare(contents)
    assert contents == {"NaClO4": 1.0}
