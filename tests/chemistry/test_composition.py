"""Atoms counted from formulas, by hand, and what is no formula refused."""

from __future__ import annotations

import pytest

from knought.chemistry.composition import ELEMENTS, count_atoms, ends_in_ligand, has_metal
from knought.errors import InputError


@pytest.mark.parametrize(
    ("formula", "atoms"),
    [
        ("H2O", {"H": 2, "O": 1}),
        ("CH3COO", {"C": 2, "H": 3, "O": 2}),
        ("[Co(NH3)5(NO2)]", {"Co": 1, "N": 6, "H": 15, "O": 2}),
        ("{[Fe(CN)6]K2}", {"Fe": 1, "C": 6, "N": 6, "K": 2}),
        ("((H2)3)2O", {"H": 12, "O": 1}),
        ("[Co(en)3]", {"Co": 1, "C": 6, "H": 24, "N": 6}),
        ("[Ru(bpy)2(py)Cl]", {"Ru": 1, "C": 25, "H": 21, "N": 5, "Cl": 1}),
        ("D2O", {"D": 2, "O": 1}),
        ("CO", {"C": 1, "O": 1}),
        ("Co", {"Co": 1}),
    ],
)
def test_atoms_are_counted(formula: str, atoms: dict[str, int]) -> None:
    assert count_atoms(formula, formula) == atoms


@pytest.mark.parametrize(
    ("formula", "message"),
    [
        ("Fe(III)", "oxidation number.*Fe\\^3"),
        ("Cu(I)Cl2", "oxidation number"),
        ("Cr(VI)", "oxidation number"),
        ("HXx", "no element Xx"),
        ("HA", "no element A.*whole reactant"),
        ("[Co(enn)3]", "no ligand is known as enn.*bpy"),
        ("Coen", "no formula"),
        ("Fe(CN]6", "do not match"),
        ("Fe)2", "do not match"),
        ("(Fe", "left open"),
        ("()", "no formula"),
        ("2H", "no formula"),
        ("O0", "a count of 0"),
        ("O99999999999", "a count of 99999999999"),
        ("(" * 9 + "H" + ")" * 9, "no formula"),
    ],
)
def test_what_is_no_formula_is_refused_with_the_reason(formula: str, message: str) -> None:
    with pytest.raises(InputError, match=message):
        count_atoms(formula, formula)


def test_deep_brackets_are_counted_up_to_the_limit() -> None:
    assert count_atoms("(" * 8 + "H" + ")2" * 8, "deep") == {"H": 2**8}


def test_every_element_to_118_is_there_with_deuterium_and_tritium() -> None:
    assert len(ELEMENTS) == 118 + 2


def test_metals_and_ligands_are_recognised() -> None:
    assert all(map(has_metal, ("Fe", "VO", "Hg(CH3)", "Sn")))
    assert not any(map(has_metal, ("NH", "S2O", "CH3COO", "A", "Si")))
    assert ends_in_ligand("Fe(edta)")
    assert not ends_in_ligand("Al(OH)")
