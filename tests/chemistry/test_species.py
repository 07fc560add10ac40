"""Formulas: charges read by one rule, ambiguity refused, and what a step brings together."""

from __future__ import annotations

from fractions import Fraction

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from knought.chemistry.species import (
    Species,
    charge_change,
    charge_product,
    parse_reactants,
    parse_species,
)
from knought.errors import InputError
from tests.chemistry import strategies


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
        ("e⁻", -1, {}),
        ("A^2-", -2, {}),
        ("B''^-", -1, {}),
        ("A′⁻", -1, {}),
        ("Na+", 1, {"Na": 1}),
        ("Cl-", -1, {"Cl": 1}),
        ("Cu2+", 2, {"Cu": 1}),
        ("Mg2+", 2, {"Mg": 1}),
        ("ClO4-", -1, {"Cl": 1, "O": 4}),
        ("HCO3-", -1, {"H": 1, "C": 1, "O": 3}),
        ("MnO4-", -1, {"Mn": 1, "O": 4}),
        ("Al(OH)4-", -1, {"Al": 1, "O": 4, "H": 4}),
        ("C60-", -1, {"C": 60}),
        ("C60^3-", -3, {"C": 60}),
        ("I3^-", -1, {"I": 3}),
        ("I^3-", -3, {"I": 1}),
        ("VO^2+", 2, {"V": 1, "O": 1}),
        ("SO4⁻²", -2, {"S": 1, "O": 4}),
        ("SO4²-", -2, {"S": 1, "O": 4}),
        ("SO4 2-", -2, {"S": 1, "O": 4}),
        ("SO_4^{2-}", -2, {"S": 1, "O": 4}),
        ("SO_{4}^(2-)", -2, {"S": 1, "O": 4}),
        ("SO4·-", -1, {"S": 1, "O": 4}),
        ("SO₄•⁻", -1, {"S": 1, "O": 4}),
        ("SO4^·-", -1, {"S": 1, "O": 4}),
        ("O2·-", -1, {"O": 2}),
        ("•OH", 0, {"O": 1, "H": 1}),
        ("Na+(aq)", 1, {"Na": 1}),
        ("[Co(en)3]3+", 3, {"Co": 1, "C": 6, "H": 24, "N": 6}),
        ("[Fe(edta)]^-", -1, {"Fe": 1, "C": 10, "H": 12, "N": 2, "O": 8}),
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
        ("S2-", ("S2^-", "S^2-")),
        ("N3-", ("N3^-", "N^3-")),
        ("H2+", ("H2^+", "H^2+")),
        ("PO43-", ("PO4^3-", "PO43^-")),
        ("S2O32-", ("S2O3^2-", "S2O32^-")),
        # A cation that holds a metal: pervanadyl or vanadyl, FeCl2 or FeCl, both are real.
        ("VO2+", ("VO2^+", "VO^2+")),
        ("FeCl2+", ("FeCl2^+", "FeCl^2+")),
        ("FeOH2+", ("FeOH2^+", "FeOH^2+")),
        ("Ca(OH)2+", ("Ca(OH)2^+", "Ca(OH)^2+")),
        ("Fe(edta)2-", ("Fe(edta)2^-", "Fe(edta)^2-")),
        # Two complexes side by side: the last bracket alone may carry the digit.
        ("[CoCl][FeCl]2-", ("[CoCl][FeCl]2^-", "[CoCl][FeCl]^2-")),
    ],
)
def test_two_readings_are_refused_with_both(text: str, readings: tuple[str, str]) -> None:
    with pytest.raises(InputError) as caught:
        parse_species(text)
    assert all(reading in str(caught.value) for reading in readings)
    # Both remedies do read, and differently.
    first, second = map(parse_species, readings)
    assert first != second


@pytest.mark.parametrize("text", ["A2-", "M2+", "B'2-"])
def test_a_letter_with_a_digit_is_refused_with_the_reading_that_can_be_written(text: str) -> None:
    meant = f"{text[:-2]}^{text[-2:]}"
    with pytest.raises(InputError, match="can be read as") as caught:
        parse_species(text)
    assert caught.value.problems[0].remedy == f"write the charge behind ^: {meant}"
    assert parse_species(meant).charge == int(text[-1] + text[-2])


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
        ("Fe(III)", "oxidation number"),
        ("CuSO4·5H2O", "addition compound"),
        ("HA^-", "whole reactant"),
        ("SO4^0-", "no formula"),
        ("Fe0+", "no formula"),
        ("[Fe(CN)6]0+", "no formula"),
        ("Na٣+", "no formula"),
        ("SO4^2-^2-", "no formula"),
        ("^2-", "no formula"),
        ("2 H+", "no formula"),
    ],
)
def test_what_is_no_formula_is_refused(text: str, message: str) -> None:
    with pytest.raises(InputError, match=message) as caught:
        parse_species(text)
    assert caught.value.problems[0].remedy


@given(st.one_of(st.text(max_size=130), strategies.formula_like))
@settings(max_examples=400, deadline=None)
def test_any_text_is_a_species_or_a_refusal(text: str) -> None:
    try:
        found = parse_species(text)
    except InputError:
        return
    assert parse_species(found.ascii) == found
    assert parse_species(found.text) == found


@given(strategies.formula_like)
@settings(max_examples=300, deadline=None)
def test_any_text_is_reactants_or_a_refusal(text: str) -> None:
    try:
        found = parse_reactants(text)
    except InputError:
        return
    assert all(number > 0 for number, _ in found)
    assert parse_reactants(" + ".join(f"{n} {s.ascii}" for n, s in found)) == found


@given(strategies.formulas, strategies.charges)
@settings(max_examples=200, deadline=None)
def test_a_charge_behind_a_caret_is_read_whatever_the_formula(formula: str, charge: int) -> None:
    sign = "+" if charge > 0 else "-"
    for text in (f"{formula}^{abs(charge)}{sign}", f"{formula}^{sign}{abs(charge)}"):
        found = parse_species(text if charge else formula)
        assert (found.formula, found.charge) == (formula, charge)
        assert parse_species(found.ascii) == parse_species(found.text) == found


def test_brackets_around_everything_make_no_other_species() -> None:
    bare, bracketed = parse_species("Fe(CN)6^4-"), parse_species("[Fe(CN)6]4-")
    assert bare == bracketed
    assert len({bare, bracketed, parse_species("Fe(CN)6^3-")}) == 2
    assert parse_species("[CoCl][FeCl]^2-") != parse_species("CoCl][FeCl^2-".replace("][", ""))
    assert bare != "Fe(CN)6^4-"


def test_a_species_keeps_a_composition_of_its_own() -> None:
    atoms = {"Na": 1}
    found = Species("Na", 1, atoms)
    atoms["Na"] = 2
    assert dict(found.composition) == {"Na": 1}
    with pytest.raises(TypeError):
        found.composition["Na"] = 2  # type: ignore[index]


def test_species_in_every_layout() -> None:
    found = parse_species("S2O3^2-")
    assert str(found) == "S₂O₃²⁻"
    assert found.html == "S<sub>2</sub>O<sub>3</sub><sup>2−</sup>"
    assert found.latex == r"\mathrm{S_{2}O_{3}^{2-}}"
    bracketed = parse_species("{[Fe(CN)6]K2}^2-")
    assert bracketed.latex == r"\mathrm{\{[Fe(CN)_{6}]K_{2}\}^{2-}}"
    assert parse_species("H2O").html == "H<sub>2</sub>O"
    assert parse_species("Na+").text == "Na⁺"


@pytest.mark.parametrize(
    ("text", "product"),
    [
        ("A^2- + B^-", 2),
        ("D^2+ + X^-", -2),
        ("S2O3^2- + H2O", 0),
        # Δz² = (2 - 2)² - (2 x 1 + 4) = -6, so -3; by hand.
        ("2 H+ + S2O3^2-", -3),
        ("[Co(NH3)5Cl]2+ + Hg^2+", 4),
        ("2H+ + S2O3^2-", -3),
        ("Ca 2+ + SO4 2-", -4),
        # z‡ = 0: Δz² = 0 - (1 + 1) - 0; a neutral third partner changes nothing; by hand.
        ("H+ + Cl- + H2O", -1),
        # One ion alone keeps its charge.
        ("[Co(NH3)5Cl]2+", 0),
    ],
)
def test_charge_products_of_reactants(text: str, product: int) -> None:
    reactants = parse_reactants(text)
    assert charge_product(reactants) == Fraction(product)
    assert charge_change(reactants) == 2 * product


def test_a_reactant_that_leaves_counts_backwards() -> None:
    """A^2- + HX → A X^2- and H+ leaves: z‡ = -2 + 0 - 1 = -3, Δz² = 9 - 4 - 0 + 1 = 6; by hand."""
    reactants = (*parse_reactants("A^2- + X"), (-1, parse_species("H+")))
    assert charge_change(reactants) == 6
    assert charge_product(reactants) == 3


@given(st.lists(st.tuples(st.integers(1, 3), strategies.charges), min_size=1, max_size=4))
def test_the_charge_product_is_the_sum_over_pairs(parts: list[tuple[int, int]]) -> None:
    """(Σz)² - Σz² = 2 Σ_{i<j} z_i z_j, every single ion counted."""
    reactants = tuple((number, Species("A", z)) for number, z in parts)
    ions = [z for number, z in parts for _ in range(number)]
    pairs = sum(a * b for i, a in enumerate(ions) for b in ions[:i])
    assert charge_product(reactants) == pairs


@pytest.mark.parametrize(
    "text", ["", "A^2- B^-", "A^2- + ", "+", "x" * 2000, "0 A^-", "100 A^-", "A^2- +\nB^-?"]
)
def test_what_is_no_list_of_reactants_is_refused(text: str) -> None:
    with pytest.raises(InputError):
        parse_reactants(text)


@pytest.mark.parametrize("text", ["A^2-+B^-", "A^2- +B^-", "A^2-+ B^-"])
def test_a_plus_without_spaces_is_refused_with_the_remedy(text: str) -> None:
    with pytest.raises(InputError, match="spaces around it"):
        parse_reactants(text)


def test_every_wrong_reactant_is_named_at_once() -> None:
    with pytest.raises(InputError) as caught:
        parse_reactants("SO42- + H+ + Xx^-")
    assert [problem.what.split()[0] for problem in caught.value.problems] == ['"SO42-"', '"Xx^-":']
