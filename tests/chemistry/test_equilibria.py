"""Equilibria: constants at any T and I, and solutions that balance to rounding."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import example, given, settings
from hypothesis import strategies as st

from knought.chemistry.activity import DaviesForm, LimitingForm
from knought.chemistry.debye_huckel import debye_huckel
from knought.chemistry.equilibria import Equilibrium
from knought.chemistry.equilibria_known import NAMES, known_equilibria
from knought.chemistry.equilibria_solver import solve_equilibria
from knought.chemistry.medium import prepare
from knought.chemistry.species import parse_species
from knought.chemistry.water import density
from knought.errors import InputError

_ALL = tuple(each for name in NAMES for each in known_equilibria(name))

TRIIODIDE = Equilibrium(
    "I2 + I- = I3^-",
    math.log10(698.0),
    enthalpy=-17.0e3,
    heat_capacity=-21.0,
    u_lg_K=10.0 / 698.0 / math.log(10.0),
    u_enthalpy=0.6e3,
    basis="molal",
    source="Palmer, Ramette and Mesmer, J. Solution Chem. 13 (1984) 673, abstract: K and ΔH",
)


@pytest.mark.parametrize(
    ("celsius", "published"),
    [(0, 1297.53), (10, 1002.65), (25, 699.54), (35, 559.12), (45, 452.05), (60, 335.06)],
)
def test_the_triiodide_constant_follows_the_published_temperature_law(
    celsius: float, published: float
) -> None:
    # lg K = 555/T + 7.355 - 2.575 lg T, Palmer, Ramette and Mesmer 1984 (from memory), kg/mol.
    # From K and ΔH of the abstract: 698 ± 10 (1.4 %) and u(ΔH) 0.6 kJ/mol (1.8 % over 25 K).
    T = celsius + 273.15
    molal = math.exp(TRIIODIDE.ln_K_zero(T)) * float(density(T)) / 1000.0
    assert molal == pytest.approx(published, rel=0.012)


def test_a_molal_constant_becomes_molar_with_the_density_of_water() -> None:
    molar = math.exp(TRIIODIDE.ln_K_zero(298.15))
    assert molar == pytest.approx(698.0 / 0.99705, rel=1e-5)  # ρ(25 °C) = 0.99705 kg/L


def test_the_ionic_strength_enters_through_the_charges_alone() -> None:
    pair = known_equilibria("magnesium sulfate")[0]
    assert pair.charge_term == -8
    form, I, T = LimitingForm(), 0.0025, 298.15
    expected = pair.ln_K_zero(T) - 8 * math.log(10) * float(debye_huckel(T).A) * math.sqrt(I)
    assert pair.ln_K(T, I, form) == pytest.approx(expected, rel=1e-12)
    assert TRIIODIDE.charge_term == 0
    assert TRIIODIDE.ln_K(T, 0.3, DaviesForm()) == TRIIODIDE.ln_K_zero(T)


def test_a_constant_measured_at_an_ionic_strength_is_returned_there() -> None:
    there = Equilibrium("H+ + SO4^2- = HSO4^-", 1.2, ionic_strength=0.1)
    assert there.ln_K(298.15, 0.1, DaviesForm()) == pytest.approx(1.2 * math.log(10), rel=1e-12)


def test_uncertainties_of_constant_and_enthalpy_add_in_squares() -> None:
    at_reference = TRIIODIDE.u_ln_K(298.15)
    assert at_reference == pytest.approx(10 / 698, rel=1e-12)
    arm = 600.0 / 8.31446261815324 * (1 / 298.15 - 1 / 318.15)
    assert TRIIODIDE.u_ln_K(318.15) == pytest.approx(math.hypot(at_reference, arm), rel=1e-12)


@pytest.mark.parametrize(
    "reaction", ["H+ + SO4^2- = HSO4", "Mg^2+ + SO4^2- = Mg(SO4)2", "H+ + OH-", "I- = I-"]
)
def test_what_does_not_balance_is_refused(reaction: str) -> None:
    with pytest.raises(InputError):
        Equilibrium(reaction, 1.0)


def test_pure_water_is_neutral() -> None:
    found = prepare({"NaCl": 1e-12}, 298.15, known_equilibria("water"))
    assert found["H+"] == pytest.approx(found["OH-"], rel=1e-9)
    assert found.ph == pytest.approx(13.995 / 2, abs=0.002)


def test_an_ion_pair_agrees_with_the_quadratic_solved_by_hand() -> None:
    # MgSO4, 0.01 mol/L; lg K° = 2.37 (molal), phreeqc.dat of the U.S. Geological Survey, made
    # molar with ρ = 0.997047 kg/L. With x associated:
    # I = 4 (c - x), K = K° 10^(-8 A f(I)) and x = K (c - x)^2, iterated here by halving.
    c, A = 0.01, float(debye_huckel(298.15).A)
    low, high = 0.0, c
    for _ in range(200):
        x = (low + high) / 2
        root = math.sqrt(4 * (c - x))
        K = 10**2.37 / 0.997047 * 10 ** (-8 * A * (root / (1 + root) - 0.3 * root**2))
        low, high = (x, high) if K * (c - x) ** 2 > x else (low, x)
    found = prepare({"MgSO4": c}, 298.15, known_equilibria("magnesium sulfate"))
    assert found["MgSO4"] == pytest.approx(x, rel=1e-6)
    assert found.ionic_strength == pytest.approx(4 * (c - x), rel=1e-6)
    assert 0.3 < x / c < 0.36  # a third is paired: far from the stoichiometric I = 0.04


def test_dependent_equilibria_are_refused() -> None:
    water = known_equilibria("water")[0]
    with pytest.raises(InputError, match="depend on each other"):
        prepare({"NaCl": 0.1, "HCl": 0.1}, 298.15, [water, water])


def test_what_is_not_there_takes_no_part() -> None:
    found = prepare({"NaCl": 0.1}, 298.15, known_equilibria("phosphate"))
    assert found.ionic_strength == pytest.approx(0.1, rel=1e-15)
    assert "HPO4^2-" not in {species.ascii for species in found.concentrations}


_SUBSTANCES = ("NaCl", "Na2SO4", "MgSO4", "HClO4", "CH3COOH", "K2HPO4", "NaOH", "KH2PO4", "CaCl2")


@settings(max_examples=25, deadline=None)
@example({"NaOH": 0.0, "MgSO4": 0.0, "HClO4": 0.0}, 275.0)  # acid and base leave nothing
@given(
    st.dictionaries(st.sampled_from(_SUBSTANCES), st.floats(-9.0, 0.0), min_size=1, max_size=5),
    st.floats(275.0, 360.0),
)
def test_mass_and_charge_balance_to_rounding_from_trace_to_one_molar(
    powers: dict[str, float], T: float
) -> None:
    mixed = {name: 10.0**power for name, power in powers.items()}
    found = prepare(mixed, T, _ALL)
    assert found.mass_residual < 1e-12
    assert found.charge_residual < 1e-12
    # And each constant is what mass action says of the concentrations.
    for each in _ALL:
        c = [found.concentrations.get(species, 0.0) for species in each.stoichiometry]
        if all(c):
            action = sum(
                n * math.log(x) for n, x in zip(each.stoichiometry.values(), c, strict=True)
            )
            expected = each.ln_K(T, found.ionic_strength, found.form)
            assert action == pytest.approx(expected, abs=1e-9)


def test_the_order_of_equilibria_does_not_matter() -> None:
    mixed = {parse_species("H+"): 0.02, parse_species("SO4^2-"): 0.05, parse_species("Na+"): 0.08}
    one = solve_equilibria(mixed, _ALL, 298.15, DaviesForm())
    other = solve_equilibria(mixed, _ALL[::-1], 298.15, DaviesForm())
    for species, c in one.concentrations.items():
        assert other.concentrations[species] == pytest.approx(c, rel=1e-9)
    assert np.isclose(one.ionic_strength, other.ionic_strength, rtol=1e-12)


@pytest.mark.parametrize("salt", ["MgSO4", "Na2SO4"])
def test_a_law_far_out_of_its_domain_ends_in_words(salt: str) -> None:
    # Davies's law turns over beyond 1 mol/L and drives constants out of all bounds.
    every = [each for name in NAMES for each in known_equilibria(name)]
    with pytest.raises(InputError, match=r"not solved|no ionic strength"):
        prepare({salt: 30.0, "HCl": 5.0}, 298.15, every)


def test_more_than_a_solution_holds_is_refused() -> None:
    with pytest.raises(InputError, match="more than any solution"):
        prepare({"NaCl": 1e5})
