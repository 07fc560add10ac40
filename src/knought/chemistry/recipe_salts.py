"""What a weighed substance gives in water: ``Na2SO4`` is 2 Na⁺ + SO₄²⁻.

The idea first: a salt is a cation and an anion in the smallest whole numbers that cancel their
charges, so a formula is read by trying every pair of the lists below and comparing atoms. One
match is the answer; two are refused. A strong acid is H⁺ with an anion that holds it nowhere. A
substance with a charge is an ion itself; a neutral one that holds no metal and no ammonium stays
whole (a weak acid then dissociates only as far as its equilibrium says). What is none of these,
a double salt or a complex, is written as its ions: ``[Co(NH3)5Cl]^2+ + 2 ClO4^-``.
"""

from __future__ import annotations

import math
import re
from collections import Counter
from functools import lru_cache

from knought.chemistry.composition import count_atoms, has_metal
from knought.chemistry.species import Species, parse_reactants, parse_species
from knought.errors import InputError, quoted

__all__ = ["dissociated"]

_CATIONS = (
    "Li+ Na+ K+ Rb+ Cs+ NH4+ Ag+ Tl+ Mg^2+ Ca^2+ Sr^2+ Ba^2+ Mn^2+ Fe^2+ Co^2+ Ni^2+ Cu^2+ Zn^2+ "
    "Cd^2+ Pb^2+ Al^3+ Cr^3+ Fe^3+ La^3+ Ce^3+ N(CH3)4^+"
).split()

_ANIONS = (
    "F- Cl- Br- I- OH- CN- SCN- ClO3- ClO4- BrO3- IO3- IO4^- MnO4- NO2- NO3- N3^- CF3SO3- "
    "HCO3- HSO3- HSO4- H2PO4- CH3COO- C2H3O2- HCOO- "
    "SO3^2- SO4^2- S2O3^2- S2O5^2- S2O6^2- S2O8^2- CO3^2- CrO4^2- Cr2O7^2- C2O4^2- HPO4^2- "
    "PO4^3- C6H5O7^3- Fe(CN)6^3- Fe(CN)6^4- P2O7^4-"
).split()

#: Anions whose acids are taken as fully dissociated in water.
_STRONG = "Cl- Br- I- ClO3- ClO4- BrO3- NO3- MnO4- HSO4- CF3SO3-".split()

_HYDRATE = re.compile(r"[·•∙⋅*.]\s*[0-9]*\s*H2O\s*$")


def dissociated(text: str) -> dict[Species, int]:
    """Return the ions, or the molecule, that one formula unit gives.

    Parameters
    ----------
    text
        ``"Na2SO4"``, ``"HClO4"``, ``"MgSO4·7H2O"``, ``"CH3COOH"``, ``"K+"``, or ions joined by a
        plus, ``"2 Na+ + SO4^2-"``.

    Returns
    -------
    dict
        Species and how many of each.

    Raises
    ------
    InputError
        If it cannot be read, or it is a salt whose ions are not plain.
    """
    text = text.strip()
    if re.search(r"\s\+\s", text):
        found: Counter[Species] = Counter()
        for number, species in parse_reactants(text):
            found[species] += number
        return dict(found)
    bare = _HYDRATE.sub("", text)
    species = parse_species(bare)
    if species.charge:
        return {species: 1}
    atoms = Counter(species.composition)
    found_pairs = _pairs().get(tuple(sorted(atoms.items())), ())
    if len(found_pairs) > 1:
        readings = " or ".join(_written(pair) for pair in found_pairs)
        raise InputError(
            f"{quoted(text)} can be {readings}", f"write its ions: {_written(found_pairs[0])}"
        )
    if found_pairs:
        return dict(found_pairs[0])
    if has_metal(species.formula) or species.formula.startswith("(NH4)"):
        raise InputError(
            f"it is not plain which ions {quoted(text)} gives",
            'write its ions, as in "[Co(NH3)5Cl]^2+ + 2 ClO4^-"',
        )
    return {species: 1}


_Pair = tuple[tuple[Species, int], ...]


@lru_cache(maxsize=1)
def _pairs() -> dict[tuple[tuple[str, int], ...], tuple[_Pair, ...]]:
    """Atoms of a formula unit -> the pairs of ions that have them."""
    table: dict[tuple[tuple[str, int], ...], tuple[_Pair, ...]] = {}
    combinations = [(cation, anion) for cation in _CATIONS for anion in _ANIONS]
    combinations += [("H+", anion) for anion in _STRONG]
    for cation, anion in combinations:
        plus, minus = parse_species(cation), parse_species(anion)
        shared = math.gcd(plus.charge, -minus.charge)
        pair = ((plus, -minus.charge // shared), (minus, plus.charge // shared))
        atoms: Counter[str] = Counter()
        for species, number in pair:
            for element, count in count_atoms(species.formula, species.formula).items():
                atoms[element] += number * count
        key = tuple(sorted(atoms.items()))
        # CH3COO- and C2H3O2- are one ion in two spellings: the first stands.
        if not any(_same(pair, other) for other in table.get(key, ())):
            table[key] = (*table.get(key, ()), pair)
    return table


def _same(one: _Pair, other: _Pair) -> bool:
    def shape(pair: _Pair) -> list[tuple[dict[str, int], int, int]]:
        return [(dict(species.composition), species.charge, number) for species, number in pair]

    return shape(one) == shape(other)


def _written(pair: _Pair) -> str:
    return " + ".join(f"{number if number > 1 else ''} {s.ascii}".strip() for s, number in pair)
