"""Formulas: charges read by one rule, ambiguity refused, and what a step brings together."""

from __future__ import annotations

from fractions import Fraction

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from knought.chemistry.species import (
    charge_change,
    charge_product,
    parse_reactants,
    parse_species,
)
from knought.errors import InputError


@pytest.mark.parametrize(
    ("text", "charge", "composition"),
    [
        ("S2O3^2-", -2, {"S": 2, "O": 3}),
        ("[Co(NH3)5Cl]2+", 2, {"Co": 1, "N": 5, "H": 15, "Cl": 1}),
        ("Fe(CN)6^4-", -4, {"Fe": 1, "C": 6, "N": 6}),
        ("[Fe(CN)6]4-", -4, {"Fe": 1, "C": 6, "N": 6}),
        ("SO₄²⁻", -2, {"S": 1, "O": 4}),
        ("Fe(CN)₆⁴⁻", -4, {"Fe": 1, "C": 6, "N": 6}),
        ("SO4^2−", -2, {"S": 1, "O": 4}),
        ("SO4-2", -2, {"S": 1, "O": 4}),
        ("Mg+2", 2, {"Mg": 1}),
        ("Fe2+", 2, {"Fe": 1}),
        ("Fe^3+", 3, {"Fe": 1}),
        ("NH4+", 1, {"N": 1, "H": 4}),
        ("NO3-", -1, {"N": 1, "O": 3}),
        ("CH3COO-", -1, {"C": 2, "H": 3, "O": 2}),
        ("Hg2^2+", 2, {"Hg": 2}),
        ("H2O", 0, {"H": 2, "O": 1}),
        ("Na⁺", 1, {"Na": 1}),
        ("OH-", -1, {"O": 1, "H": 1}),
        ("H+", 1, {"H": 1}),
        ("e-", -1, {}),
        ("A^2-", -2, {}),
    ],
)
def test_formulas_and_charges(text: str, charge: int, composition: dict[str, int]) -> None:
    found = parse_species(text)
    assert found.charge == charge
    assert dict(found.composition) == composition
    assert parse_species(found.ascii) == found
    assert parse_species(found.text) == found


@pytest.mark.parametrize(
    ("text", "readings"),
    [
        ("SO42-", ("SO4^2-", "SO42^-")),
        ("Fe(CN)64-", ("Fe(CN)6^4-", "Fe(CN)64^-")),
        ("O2-", ("O2^-", "O^2-")),
        ("I3-", ("I3^-", "I^3-")),
        ("A2-", ("A2^-", "A^2-")),
    ],
)
def test_two_readings_are_refused_with_both(text: str, readings: tuple[str, str]) -> None:
    with pytest.raises(InputError) as caught:
        parse_species(text)
    assert all(reading in str(caught.value) for reading in readings)


@pytest.mark.parametrize(
    ("text", "message"),
    [
        ("Xx+", "no element Xx"),
        ("[Fe(CN)6^4-", "left open"),
        ("Fe(CN]6", "do not match"),
        ("", "no formula"),
        ("Na++", "no formula"),
        ("na+", "no formula"),
        ("H0", "count"),
        ("Na^99+", "charge of 99"),
        ("(" * 50, "no formula"),
        ("C" * 500, "too long"),
    ],
)
def test_what_is_no_formula_is_refused(text: str, message: str) -> None:
    with pytest.raises(InputError, match=message):
        parse_species(text)


@given(st.text(max_size=130))
@settings(max_examples=300, deadline=None)
def test_any_text_is_a_species_or_a_refusal(text: str) -> None:
    try:
        found = parse_species(text)
    except InputError:
        return
    assert parse_species(found.ascii).charge == found.charge


def test_species_in_every_layout() -> None:
    found = parse_species("S2O3^2-")
    assert str(found) == "S₂O₃²⁻"
    assert found.html == "S<sub>2</sub>O<sub>3</sub><sup>2−</sup>"
    assert found.latex == r"\mathrm{S_{2}O_{3}^{2-}}"


@pytest.mark.parametrize(
    ("text", "product"),
    [
        ("A^2- + B^-", 2),
        ("D^2+ + X^-", -2),
        ("S2O3^2- + H2O", 0),
        # Δz² = (2 - 2)² - (2 x 1 + 4) = -6, so -3; by hand.
        ("2 H+ + S2O3^2-", -3),
        ("[Co(NH3)5Cl]2+ + Hg^2+", 4),
    ],
)
def test_charge_products_of_reactants(text: str, product: int) -> None:
    reactants = parse_reactants(text)
    assert charge_product(reactants) == Fraction(product)
    assert charge_change(reactants) == 2 * product


@pytest.mark.parametrize("text", ["", "A^2- B^-", "A^2- + ", "+", "x" * 2000])
def test_what_is_no_list_of_reactants_is_refused(text: str) -> None:
    with pytest.raises(InputError):
        parse_reactants(text)
