"""Atoms counted from a formula without its charge: ``Co(NH3)5Cl`` is Co, 5 N, 15 H and Cl.

Every symbol must be an element (D and T, for deuterium and tritium, among them). A ligand may be
abbreviated where it stands alone in round brackets, ``[Co(en)3]``. An oxidation number is refused,
for ``Fe(III)`` would otherwise be read as FeI3.
"""

from __future__ import annotations

import re
from typing import NoReturn

from knought.errors import InputError, quoted

__all__ = ["ELEMENTS", "count_atoms", "ends_in_ligand", "has_metal", "refuse_formula"]

#: Deeper brackets and larger counts are slips.
_DEEPEST, _LARGEST_COUNT = 8, 10_000

#: Symbols of the elements, with D and T.
ELEMENTS = frozenset(
    (
        "H He Li Be B C N O F Ne Na Mg Al Si P S Cl Ar K Ca Sc Ti V Cr Mn Fe Co Ni Cu Zn Ga Ge As "
        "Se Br Kr Rb Sr Y Zr Nb Mo Tc Ru Rh Pd Ag Cd In Sn Sb Te I Xe Cs Ba La Ce Pr Nd Pm Sm Eu "
        "Gd Tb Dy Ho Er Tm Yb Lu Hf Ta W Re Os Ir Pt Au Hg Tl Pb Bi Po At Rn Fr Ra Ac Th Pa U Np "
        "Pu Am Cm Bk Cf Es Fm Md No Lr Rf Db Sg Bh Hs Mt Ds Rg Cn Nh Fl Mc Lv Ts Og D T "
    ).split()
)

#: Elements that form no monatomic cations in water.
_NONMETALS = frozenset("H D T He B C N O F Ne Si P S Cl Ar Ge As Se Br Kr Te I Xe At Rn".split())

#: Abbreviations of ligands (IUPAC, Nomenclature of Inorganic Chemistry 2005, Table VII; from
#: memory): the atoms of the ligand, deprotonated where it is an anion.
_LIGANDS = {
    "acac": {"C": 5, "H": 7, "O": 2},
    "bipy": {"C": 10, "H": 8, "N": 2},
    "bpy": {"C": 10, "H": 8, "N": 2},
    "dien": {"C": 4, "H": 13, "N": 3},
    "edta": {"C": 10, "H": 12, "N": 2, "O": 8},
    "en": {"C": 2, "H": 8, "N": 2},
    "gly": {"C": 2, "H": 4, "N": 1, "O": 2},
    "ox": {"C": 2, "O": 4},
    "phen": {"C": 12, "H": 8, "N": 2},
    "py": {"C": 5, "H": 5, "N": 1},
    "terpy": {"C": 15, "H": 11, "N": 3},
    "trien": {"C": 6, "H": 18, "N": 4},
}

_TOKEN = re.compile(
    r"(?P<element>[A-Z][a-z]?)(?P<count>[0-9]*)"
    r"|(?P<opening>[(\[{])|(?P<closing>[)\]}])(?P<times>[0-9]*)"
    r"|(?<=\()(?P<ligand>[a-z]+)(?=\))"
)
_PARTNERS = {")": "(", "]": "[", "}": "{"}
_OXIDATION_NUMBER = re.compile(r"\((?:I{1,3}|IV|VI{0,3})\)")
_LIGAND_LAST = re.compile(r"\([a-z]+\)$")
_SYMBOL = re.compile(r"[A-Z][a-z]?")


def has_metal(formula: str) -> bool:
    """Whether an element of `formula` forms monatomic cations in water."""
    return not ELEMENTS.intersection(_SYMBOL.findall(formula)) <= _NONMETALS


def ends_in_ligand(formula: str) -> bool:
    """Whether `formula` ends in an abbreviated ligand, ``"Fe(edta)"``."""
    return bool(_LIGAND_LAST.search(formula))


def count_atoms(formula: str, text: str) -> dict[str, int]:
    """Count the atoms of a formula.

    Parameters
    ----------
    formula
        The formula without its charge, in plain digits.
    text
        What the user wrote, for messages.

    Raises
    ------
    InputError
        If it is no formula, or names no element or an unknown ligand.
    """
    if _OXIDATION_NUMBER.search(formula):
        raise InputError(
            f"{quoted(text)} gives an oxidation number", "give the charge of the ion: Fe^3+"
        )
    levels: list[dict[str, int]] = [{}]
    opened: list[str] = []
    at = 0
    while at < len(formula):
        found = _TOKEN.match(formula, at)
        if not found:
            refuse_formula(text)
        at = found.end()
        if found["element"]:
            atoms = {_element(found["element"], text): _count(found["count"], text)}
            _add(levels[-1], atoms, 1)
        elif found["ligand"]:
            _add(levels[-1], _ligand(found["ligand"], text), 1)
        elif found["opening"]:
            if len(opened) == _DEEPEST:
                refuse_formula(text)
            opened.append(found["opening"])
            levels.append({})
        else:
            if not opened or opened.pop() != _PARTNERS[found["closing"]]:
                raise InputError(f"brackets do not match in {quoted(text)}", "check the formula")
            _add(levels[-2], levels.pop(), _count(found["times"], text))
    if opened:
        raise InputError(f"a bracket is left open in {quoted(text)}", "check the formula")
    if not levels[0]:
        refuse_formula(text)
    return levels[0]


def refuse_formula(text: str) -> NoReturn:
    """Refuse what is no formula.

    Raises
    ------
    InputError
        Always.
    """
    raise InputError(
        f"{quoted(text)} is no formula", "write one such as S2O3^2-, [Co(NH3)5Cl]2+ or Na+"
    )


def _add(total: dict[str, int], atoms: dict[str, int], times: int) -> None:
    for name, number in atoms.items():
        total[name] = total.get(name, 0) + times * number


def _element(symbol: str, text: str) -> str:
    """Return `symbol`, if it is an element.

    Raises
    ------
    InputError
        If it is none.
    """
    if symbol not in ELEMENTS:
        raise InputError(
            f"{quoted(text)}: there is no element {symbol}",
            "check capital letters; a letter may stand for a whole reactant (A^2-), not for a part",
        )
    return symbol


def _ligand(name: str, text: str) -> dict[str, int]:
    """Return the atoms of an abbreviated ligand.

    Raises
    ------
    InputError
        If the abbreviation is not known.
    """
    if name not in _LIGANDS:
        raise InputError(
            f"{quoted(text)}: no ligand is known as {name}",
            f"write it as a formula, or as one of {', '.join(_LIGANDS)}",
        )
    return _LIGANDS[name]


def _count(digits: str, text: str) -> int:
    """Read a count.

    Raises
    ------
    InputError
        If it is zero or absurd.
    """
    # Six digits are enough to see that a count is absurd; more would only cost time.
    count = int(digits[:6] or 1)
    if not 0 < count <= _LARGEST_COUNT:
        raise InputError(f"a count of {digits} in {quoted(text)}", "check the formula")
    return count
