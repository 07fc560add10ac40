"""Formulas of species with their charges, and what charges a step brings together.

Charges are written ``SO4^2-``, ``[Co(NH3)5Cl]2+``, ``SO₄²⁻``, ``Na+`` or ``Mg+2``. Where a digit
before the sign could be a subscript or a charge, one rule decides and everything else is refused:

- a digit after a bracket, or after ``^``, belongs to the charge: ``[Fe(CN)6]4-``, ``I3^-``;
- one digit after an element that forms monatomic cations, before ``+``, is the charge: ``Fe2+``;
- one digit in a formula of several elements is a subscript: ``NO3-``, ``NH4+`` have charge one;
- ``SO42-``, ``O2-``, ``I3-``, ``H2+``: two readings, refused with both.

A single capital letter or a letter with a prime may stand for a reactant without a formula
(``A^2- + B^-``).
"""

from __future__ import annotations

import re
from dataclasses import dataclass, field
from fractions import Fraction
from types import MappingProxyType
from typing import TYPE_CHECKING, NoReturn

from knought.errors import InputError, quoted
from knought.rounding import superscript

if TYPE_CHECKING:
    from collections.abc import Mapping

__all__ = [
    "Species",
    "charge_change",
    "charge_product",
    "parse_reactants",
    "parse_species",
]

#: Longer texts, deeper brackets and larger charges are slips.
_LONGEST, _DEEPEST, _LARGEST_CHARGE, _LARGEST_COUNT = 120, 8, 20, 10_000

_ELEMENTS = frozenset(
    (
        "H He Li Be B C N O F Ne Na Mg Al Si P S Cl Ar K Ca Sc Ti V Cr Mn Fe Co Ni Cu Zn Ga Ge As "
        "Se Br Kr Rb Sr Y Zr Nb Mo Tc Ru Rh Pd Ag Cd In Sn Sb Te I Xe Cs Ba La Ce Pr Nd Pm Sm Eu "
        "Gd Tb Dy Ho Er Tm Yb Lu Hf Ta W Re Os Ir Pt Au Hg Tl Pb Bi Po At Rn Fr Ra Ac Th Pa U Np "
        "Pu Am Cm Bk Cf Es Fm Md No Lr Rf Db Sg Bh Hs Mt Ds Rg Cn Nh Fl Mc Lv Ts Og D T "
    ).split()
)
_NONMETALS = frozenset("H D T He B C N O F Ne Si P S Cl Ar Ge As Se Br Kr Te I Xe At Rn".split())

_SPELLINGS = str.maketrans(
    {
        **dict.fromkeys("−–⁻₋", "-"),
        **dict.fromkeys("⁺₊", "+"),
        **dict(zip("₀₁₂₃₄₅₆₇₈₉", "0123456789", strict=True)),
        "\u00a0": " ",
        "\u2009": " ",
        "·": "",
        "⋅": "",
    }
)
_RAISED_CHARGE = re.compile(r"([⁰¹²³⁴⁵⁶⁷⁸⁹]*)([⁺⁻])|([⁺⁻])([⁰¹²³⁴⁵⁶⁷⁸⁹]*)")
_RAISED = str.maketrans("⁰¹²³⁴⁵⁶⁷⁸⁹⁺⁻", "0123456789+-")

_CARET = re.compile(
    r"^(?P<formula>.+?)\^\(?\{?(?:(?P<a>\d*)(?P<b>[+-])|(?P<c>[+-])(?P<d>\d*))\}?\)?$"
)
_SIGN_FIRST = re.compile(r"^(?P<formula>.+?)(?P<sign>[+-])(?P<size>\d+)$")
_SIGN_LAST = re.compile(r"^(?P<formula>.+?)(?P<digits>\d*)(?P<sign>[+-])$")
_GENERIC = re.compile(r"^[A-Z]'{0,2}$")


@dataclass(frozen=True)
class Species:
    """A species: formula, charge and what it is made of.

    Attributes
    ----------
    formula
        Formula without charge, in plain digits: ``"S2O3"``.
    charge
        z.
    composition
        Atoms by element; empty for a letter that stands for a reactant.
    """

    formula: str
    charge: int
    composition: Mapping[str, int] = field(compare=False, default_factory=dict, hash=False)

    @property
    def text(self) -> str:
        """The species in Unicode, ``"S₂O₃²⁻"``."""
        lowered = re.sub(r"(?<=[A-Za-z)\]])\d+", lambda found: _subscript(found[0]), self.formula)
        return lowered + superscript(_charge_text(self.charge))

    @property
    def ascii(self) -> str:
        """The species in ASCII, ``"S2O3^2-"``; reads back as itself."""
        return self.formula + (f"^{_charge_text(self.charge)}" if self.charge else "")

    @property
    def html(self) -> str:
        """The species in HTML."""
        lowered = re.sub(r"(?<=[A-Za-z)\]])\d+", r"<sub>\g<0></sub>", self.formula)
        sign = _charge_text(self.charge).replace("-", "−")
        return lowered + (f"<sup>{sign}</sup>" if sign else "")

    @property
    def latex(self) -> str:
        """The species in LaTeX."""
        lowered = re.sub(r"(?<=[A-Za-z)\]])\d+", r"_{\g<0>}", self.formula)
        sign = _charge_text(self.charge)
        return rf"\mathrm{{{lowered}{f'^{{{sign}}}' if sign else ''}}}"

    def __str__(self) -> str:
        return self.text


def _subscript(digits: str) -> str:
    return digits.translate(str.maketrans("0123456789", "₀₁₂₃₄₅₆₇₈₉"))


def _charge_text(charge: int) -> str:
    if charge == 0:
        return ""
    return f"{abs(charge) if abs(charge) > 1 else ''}{'+' if charge > 0 else '-'}"


def parse_species(text: str) -> Species:
    """Read a formula with its charge.

    Parameters
    ----------
    text
        The formula, ``"S2O3^2-"``.

    Returns
    -------
    Species

    Raises
    ------
    InputError
        If it is no formula, names no element, or its charge can be read in two ways.
    """
    if len(text) > _LONGEST:
        raise InputError(f"{quoted(text)} is too long for a formula", "give one species")
    plain = _RAISED_CHARGE.sub(
        lambda found: "^" + found[0].translate(_RAISED), text.strip()
    ).translate(_SPELLINGS)
    if plain in {"e-", "e^-"}:
        return Species("e", -1)
    formula, charge = _charge(plain, text)
    if abs(charge) > _LARGEST_CHARGE:
        raise InputError(f"a charge of {charge} in {quoted(text)}", "check the formula")
    if _GENERIC.match(formula):
        made_of: dict[str, int] = {formula: 1} if formula in _ELEMENTS else {}
        return Species(formula, charge, MappingProxyType(made_of))
    return Species(formula, charge, MappingProxyType(_composition(formula, text)))


def _charge(plain: str, text: str) -> tuple[str, int]:
    """Split a formula from its charge by the rules at the top of the module."""
    found = _CARET.match(plain)
    if found:
        sign, size = found["b"] or found["c"], found["a"] or found["d"]
        return found["formula"], int(f"{sign}{size or 1}")
    found = _SIGN_FIRST.match(plain)
    if found:
        return found["formula"], int(found["sign"] + found["size"])
    found = _SIGN_LAST.match(plain)
    if not found:
        return plain, 0
    formula, digits, sign = found["formula"], found["digits"], found["sign"]
    if not digits:
        return formula, int(f"{sign}1")
    if formula.endswith(("]", ")")) and len(digits) == 1 and formula.startswith("["):
        return formula, int(sign + digits)
    if formula in _ELEMENTS and len(digits) == 1 and sign == "+" and formula not in _NONMETALS:
        return formula, int(sign + digits)
    if len(digits) > 1 or formula in _ELEMENTS or _GENERIC.match(formula):
        _refuse_two_readings(text, formula, digits, sign)
    return formula + digits, int(f"{sign}1")


def _refuse_two_readings(text: str, formula: str, digits: str, sign: str) -> NoReturn:
    """Refuse a charge that can be read in two ways.

    Raises
    ------
    InputError
        Always.
    """
    if len(digits) == 1:
        first, second = f"{formula}{digits}^{sign}", f"{formula}^{digits}{sign}"
    else:
        first = f"{formula}{digits[:-1]}^{digits[-1]}{sign}"
        second = f"{formula}{digits}^{sign}"
    raise InputError(
        f"{quoted(text)} can be read as {first} or as {second}",
        f"write the charge behind ^: {first} or {second}",
    )


_TOKEN = re.compile(r"([A-Z][a-z]?)(\d*)|([(\[{])|([)\]}])(\d*)")
_PARTNERS = {")": "(", "]": "[", "}": "{"}


def _composition(formula: str, text: str) -> dict[str, int]:
    """Count the atoms of a formula.

    Raises
    ------
    InputError
        If it is no formula, or names no element.
    """
    levels: list[dict[str, int]] = [{}]
    opened: list[str] = []
    at = 0
    while at < len(formula):
        found = _TOKEN.match(formula, at)
        if not found:
            _refuse(text)
        at = found.end()
        element, count, opening, closing, times = found.groups()
        if element:
            if element not in _ELEMENTS:
                raise InputError(
                    f"{quoted(text)}: there is no element {element}", "check capital letters"
                )
            levels[-1][element] = levels[-1].get(element, 0) + _count(count, text)
        elif opening:
            if len(opened) == _DEEPEST:
                _refuse(text)
            opened.append(opening)
            levels.append({})
        else:
            if not opened or opened.pop() != _PARTNERS[closing]:
                raise InputError(f"brackets do not match in {quoted(text)}", "check the formula")
            for name, inside in levels.pop().items():
                levels[-1][name] = levels[-1].get(name, 0) + inside * _count(times, text)
    if opened:
        raise InputError(f"a bracket is left open in {quoted(text)}", "check the formula")
    if not levels[0]:
        _refuse(text)
    return levels[0]


def _count(digits: str, text: str) -> int:
    """Read a count.

    Raises
    ------
    InputError
        If it is zero or absurd.
    """
    count = int(digits[:6] or 1)
    if not 0 < count <= _LARGEST_COUNT:
        raise InputError(f"a count of {digits} in {quoted(text)}", "check the formula")
    return count


def _refuse(text: str) -> NoReturn:
    """Refuse what is no formula.

    Raises
    ------
    InputError
        Always.
    """
    raise InputError(
        f"{quoted(text)} is no formula", "write one such as S2O3^2-, [Co(NH3)5Cl]2+ or Na+"
    )


def parse_reactants(text: str) -> tuple[tuple[int, Species], ...]:
    """Read what enters a transition state, ``"2 H+ + S2O3^2-"``.

    Parameters
    ----------
    text
        Species joined by a plus with spaces around it, each with its number in front if not one.

    Returns
    -------
    tuple of (int, Species)

    Raises
    ------
    InputError
        If a species cannot be read, or there is none.
    """
    if len(text) > 10 * _LONGEST:
        raise InputError(f"{quoted(text)} is too long for reactants", "give two or three species")
    found = []
    for part in re.split(r"\s+\+\s+", text.strip()):
        piece = re.fullmatch(r"(?:(\d{1,2})\s+)?(\S+)", part.strip())
        if not piece:
            raise InputError(
                f"{quoted(part)} in {quoted(text)} is no reactant",
                'join species by a plus with spaces around it: "A^2- + B^-"',
            )
        found.append((int(piece[1] or 1), parse_species(piece[2])))
    return tuple(found)


def charge_change(reactants: tuple[tuple[int, Species], ...]) -> int:
    """Return Δz² = z‡² - Σ ν z² for reactants that join in one transition state.

    The transition state carries their total charge (Brønsted 1922; Bjerrum 1924). A reactant with
    a negative number leaves (a fast pre-equilibrium releases it).
    """
    total = sum(number * species.charge for number, species in reactants)
    return total**2 - sum(number * species.charge**2 for number, species in reactants)


def charge_product(reactants: tuple[tuple[int, Species], ...]) -> Fraction:
    """Return Δz²/2: z_A z_B for two reactants, the sum over pairs for more."""
    return Fraction(charge_change(reactants), 2)
