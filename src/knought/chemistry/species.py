"""Formulas of species with their charges, and what charges a step brings together.

Charges are written ``SO4^2-``, ``[Co(NH3)5Cl]2+``, ``SO₄²⁻``, ``SO4 2-``, ``Na+`` or ``Mg+2``.
Where digits before the sign could be a subscript or a charge, what every chemist means is read and
the rest is refused with both readings, for no residual shows a wrong charge:

- behind ``^``, raised, behind a space or behind the sign: the charge, ``I3^-``, ``SO4-2``;
- behind one pair of square brackets around everything: the charge, ``[Fe(CN)6]4-``;
- one digit behind a single metal, before ``+``: the charge, ``Fe2+``;
- one digit in a polyatomic formula: a subscript, ``NO3-``, ``MnO4-``, ``NH4+``; but a cation that
  holds a metal is refused (``VO2+`` is VO2^+ and VO^2+, ``FeOH2+`` is neither safely), and so is a
  metal with an abbreviated ligand last (``Fe(edta)2-``);
- everything else, such as ``SO42-``, ``O2-``, ``I3-``, ``H2+`` or ``A2-``: refused.

A single capital letter, also with primes, may stand for a reactant without a formula
(``A^2- + B'^-``). A dot that marks a radical, ``SO4·-``, is read over, for it is no part of the
charge; one inside a formula, ``CuSO4·5H2O``, is refused, for that is no species in solution.
"""

from __future__ import annotations

import re
from dataclasses import dataclass, field
from fractions import Fraction
from types import MappingProxyType
from typing import TYPE_CHECKING, NoReturn

from knought.chemistry.composition import (
    ELEMENTS,
    count_atoms,
    ends_in_ligand,
    has_metal,
    refuse_formula,
)
from knought.errors import InputError, Problem, quoted
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

#: Longer texts and larger charges are slips.
_LONGEST, _LARGEST_CHARGE = 120, 20

_SPELLINGS = str.maketrans(
    {
        **dict.fromkeys("−–₋", "-"),
        "₊": "+",
        **dict(zip("₀₁₂₃₄₅₆₇₈₉", "0123456789", strict=True)),
        **dict.fromkeys("\u00a0\u2009\u202f", " "),
        **dict.fromkeys("⋅•∙˙", "·"),
        **dict.fromkeys("′’", "'"),
    }
)
_RAISED = str.maketrans("⁰¹²³⁴⁵⁶⁷⁸⁹⁺⁻", "0123456789+-")
_SUBSCRIPTS = str.maketrans("0123456789", "₀₁₂₃₄₅₆₇₈₉")

_RAISED_END = re.compile(r"[⁰¹²³⁴⁵⁶⁷⁸⁹⁺⁻]+[+-]?$")
_SPACED_END = re.compile(r" +(?=(?:[1-9][+-]|[+-][1-9])$)")
_BRACED_END = re.compile(r"\^(?:\{([^{}()]*)\}|\(([^{}()]*)\))$")
_LOWERED = re.compile(r"_(?:\{([0-9]+)\}|([0-9]))")
_RADICAL_BEFORE_SIGN = re.compile(r"·(?=[1-9]?[+-]$)")

_STATED = re.compile(r"(.+?)(?:\^([1-9][0-9]*[+-]|[+-](?:[1-9][0-9]*)?)|([+-][1-9][0-9]*))")
_SIGN_LAST = re.compile(r"(.+?)([0-9]*)([+-])")
_PLACEHOLDER = re.compile(r"[A-Z]'{0,2}")
_COUNTS = re.compile(r"(?<=[A-Za-z)\]}])[0-9]+")


@dataclass(frozen=True, eq=False)
class Species:
    """A species: formula, charge and what it is made of.

    Two species are equal if formula and charge are, square brackets around everything apart:
    ``[Fe(CN)6]4-`` is ``Fe(CN)6^4-``.

    Attributes
    ----------
    formula
        Formula without charge, in plain digits: ``"S2O3"``.
    charge
        z.
    composition
        Atoms by element, read-only; empty for a letter that stands for a reactant.
    """

    formula: str
    charge: int
    composition: Mapping[str, int] = field(default_factory=dict)

    def __post_init__(self) -> None:
        object.__setattr__(self, "composition", MappingProxyType(dict(self.composition)))

    def __eq__(self, other: object) -> bool:
        return isinstance(other, Species) and self._identity == other._identity

    def __hash__(self) -> int:
        return hash(self._identity)

    @property
    def _identity(self) -> tuple[str, int]:
        bare = self.formula[1:-1] if _is_bracketed(self.formula) else self.formula
        return bare, self.charge

    @property
    def text(self) -> str:
        """The species in Unicode, ``"S₂O₃²⁻"``; reads back as itself."""
        lowered = _COUNTS.sub(lambda found: found[0].translate(_SUBSCRIPTS), self.formula)
        return lowered + superscript(_charge_text(self.charge))

    @property
    def ascii(self) -> str:
        """The species in ASCII, ``"S2O3^2-"``; reads back as itself."""
        return self.formula + (f"^{_charge_text(self.charge)}" if self.charge else "")

    @property
    def html(self) -> str:
        """The species in HTML."""
        lowered = _COUNTS.sub(r"<sub>\g<0></sub>", self.formula)
        sign = _charge_text(self.charge).replace("-", "−")
        return lowered + (f"<sup>{sign}</sup>" if sign else "")

    @property
    def latex(self) -> str:
        """The species in LaTeX, for math mode."""
        escaped = self.formula.replace("{", r"\{").replace("}", r"\}")
        lowered = _COUNTS.sub(r"_{\g<0>}", escaped)
        sign = _charge_text(self.charge)
        return rf"\mathrm{{{lowered}{f'^{{{sign}}}' if sign else ''}}}"

    def __str__(self) -> str:
        return self.text


def _charge_text(charge: int) -> str:
    if charge == 0:
        return ""
    return f"{abs(charge) if abs(charge) > 1 else ''}{'+' if charge > 0 else '-'}"


def _is_bracketed(formula: str) -> bool:
    """Whether one pair of square brackets stands around everything."""
    inside = formula[1:-1]
    depth = 0
    for character in inside:
        depth += (character == "[") - (character == "]")
        if depth < 0:
            return False
    return len(formula) > 2 and formula[0] == "[" and formula[-1] == "]"


def parse_species(text: str) -> Species:
    """Read a formula with its charge, by the rules at the top of the module.

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
    plain = _spelt_plainly(text)
    if plain in {"e-", "e^-"}:
        return Species("e", -1)
    formula, charge = _charge(plain, text)
    if abs(charge) > _LARGEST_CHARGE:
        raise InputError(f"a charge of {charge} in {quoted(text)}", "check the formula")
    if _PLACEHOLDER.fullmatch(formula):
        return Species(formula, charge, {formula: 1} if formula in ELEMENTS else {})
    return Species(formula, charge, count_atoms(formula, text))


def _spelt_plainly(text: str) -> str:
    """Return `text` in ASCII, with a raised, spaced or braced charge behind ``^``.

    Raises
    ------
    InputError
        If a dot stands where no radical's can.
    """
    plain = text.translate(_SPELLINGS).strip().removesuffix("(aq)").strip("· ")
    plain = _RAISED_END.sub(lambda found: "^" + found[0].translate(_RAISED), plain)
    plain = _SPACED_END.sub("^", plain)
    plain = _BRACED_END.sub(lambda found: f"^{found[1] or found[2] or ''}", plain)
    plain = _LOWERED.sub(lambda found: found[1] or found[2], plain)
    plain = _RADICAL_BEFORE_SIGN.sub("^", plain.replace("·^", "^").replace("^·", "^"))
    if "·" in plain:
        raise InputError(
            f"{quoted(text)} has a dot inside, as an addition compound has",
            "give the species that is in solution",
        )
    return plain


def _charge(plain: str, text: str) -> tuple[str, int]:
    """Split a formula from its charge."""
    stated = _STATED.fullmatch(plain)
    if stated:
        charge = stated[2] or stated[3]
        size = int(charge.strip("+-") or 1)
        return stated[1], -size if "-" in charge else size
    last = _SIGN_LAST.fullmatch(plain)
    if not last:
        return plain, 0
    formula, digits, sign = last.groups()
    if digits and _is_charge(formula, digits, sign, text):
        return formula, int(sign + digits)
    return formula + digits, int(f"{sign}1")


def _is_charge(formula: str, digits: str, sign: str, text: str) -> bool:
    """Whether digits before the sign are the charge and not a subscript.

    Raises
    ------
    InputError
        If both could be meant.
    """
    if digits.startswith("0"):
        refuse_formula(text)
    if len(digits) > 1:
        # C60-: no charge ends in this digit, so it is a subscript whole.
        if digits.endswith("0") and not _is_bracketed(formula):
            return False
        _refuse_two_readings(text, formula, digits, sign)
    if _is_bracketed(formula):
        return True
    if formula in ELEMENTS and has_metal(formula) and sign == "+":
        return True
    alone = formula in ELEMENTS or _PLACEHOLDER.fullmatch(formula)
    of_metal = has_metal(formula) and (sign == "+" or ends_in_ligand(formula))
    if alone or of_metal or formula.endswith("]"):
        _refuse_two_readings(text, formula, digits, sign)
    return False


def _refuse_two_readings(text: str, formula: str, digits: str, sign: str) -> NoReturn:
    """Refuse a charge that can be read in two ways.

    Raises
    ------
    InputError
        Always.
    """
    head, last = digits[:-1], digits[-1]
    readings = [f"{formula}{head}^{last}{sign}", f"{formula}{digits}^{sign}"]
    first, second = readings if head else reversed(readings)
    # A letter that stands for a reactant takes no count, so only one of the two can be written.
    single = _PLACEHOLDER.fullmatch(formula) and formula not in ELEMENTS
    meant = f"{formula}^{last}{sign}" if single else f"{first} or {second}"
    raise InputError(
        f"{quoted(text)} can be read as {first} or as {second}",
        f"write the charge behind ^: {meant}",
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
        If a species cannot be read, or there is none; all that cannot are named.
    """
    if len(text) > 10 * _LONGEST:
        raise InputError(f"{quoted(text)} is too long for reactants", "give two or three species")
    found: list[tuple[int, Species]] = []
    problems: list[Problem] = []
    for part in re.split(r"\s+\+\s+", text.strip()):
        try:
            found.append(_reactant(part))
        except InputError as error:
            problems.extend(error.problems)
    if problems:
        raise InputError(problems)
    return tuple(found)


def _reactant(part: str) -> tuple[int, Species]:
    """Read one reactant with its number.

    Raises
    ------
    InputError
        If it cannot be read.
    """
    piece = re.fullmatch(r"(?:([1-9][0-9]?)\s*)?([^\s0-9+-].*)", part)
    if not piece or re.search(r"[+-]\s*\+\s*\S", part):
        raise InputError(
            f"{quoted(part)} is no reactant",
            'join species by a plus with spaces around it: "A^2- + B^-"',
        )
    return int(piece[1] or 1), parse_species(piece[2])


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
