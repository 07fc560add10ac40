"""Headers of a table of literature values: which quantity, in which unit, with which ±.

T, I and k are read as in a table of rate constants
(:func:`knought.chemistry.headers.parse_header`); what only the literature has is read here: E_a,
A, ΔH‡, ΔS‡, ΔG‡, the charge product, F-factors, and what ± means.
"""

from __future__ import annotations

import re
from dataclasses import dataclass, replace
from fractions import Fraction
from typing import TYPE_CHECKING, Literal, TypeAlias

from knought.chemistry.header_text import plain_header, split_header
from knought.chemistry.headers import Header, parse_header
from knought.chemistry.uncertainty_words import meaning_of_sign
from knought.chemistry.unit_symbols import DIMENSIONLESS
from knought.chemistry.units import Unit, parse_unit, reaction_order
from knought.errors import InputError, Problem

if TYPE_CHECKING:
    from knought.discussion.literature_spread import SpreadMeaning

__all__ = ["WORDS", "Heading", "read_heading"]

Kind: TypeAlias = Literal["words", "condition", "value", "uncertainty", "factor"]

#: Columns of words, by what they are called.
WORDS: dict[str, str] = {
    "label": "label", "paper": "label", "reference": "label", "ref": "label", "ref.": "label",
    "source": "label", "author": "label", "authors": "label",
    "year": "year",
    "medium": "medium", "salt": "medium", "electrolyte": "medium", "solvent": "medium",
    "± means": "means", "+- means": "means", "+/- means": "means", "meaning of ±": "means",
    "uncertainty means": "means", "uncertainty_means": "means",
    "order": "order", "overall order": "order",
    "note": "note", "notes": "note", "remark": "note", "remarks": "note", "comment": "note",
    "comments": "note",
}  # fmt: skip

_MARK = r" ?(?:\^?\{?(?:‡|#|\+\+|\*)\}?)?(?:°|0)?"
_DELTA = r"(?:Δ‡?|[Dd]elta[ _]?|[Dd])_?"
_ENERGIES: tuple[tuple[str, str, str], ...] = (
    (r"E(?:_?\{?(?:a|A|act)\}?|ₐ)|[Aa]ctivation energy", "activation_energy", "J mol^-1"),
    (
        rf"{_DELTA}H{_MARK}|(?:[Ee]nthalpy of activation|[Aa]ctivation enthalpy)",
        "activation_enthalpy",
        "J mol^-1",
    ),
    (
        rf"{_DELTA}S{_MARK}|(?:[Ee]ntropy of activation|[Aa]ctivation entropy)",
        "activation_entropy",
        "J K^-1 mol^-1",
    ),
    (
        rf"{_DELTA}G{_MARK}|(?:Gibbs energy of activation|[Aa]ctivation Gibbs energy)",
        "activation_gibbs_energy",
        "J mol^-1",
    ),
)
_CHARGES = re.compile(r"z_?\{?A\}? ?[·*]? ?z_?\{?B\}?|[Cc]harge product")
_FACTORS: tuple[tuple[str, str, str], ...] = (
    (r"F(?:_?\{?0\}?)?|F-factor|f\(298 ?K?\)", "F0", "1"),
    (r"g", "g", "K"),
    (r"T_?\{?0\}?", "T0", "K"),
)
_STANDARD = re.compile(r"c(?:°|\^°|_?\{?0\}?)|[Ss]tandard (?:concentration|state)")
_LOG_A = re.compile(r"(?P<base>ln|lg|log_?\{?10\}?|log_?e) ?(?:\((?P<inner>A.*)\)|(?P<bare>A))$")
_UNCERTAINTY = re.compile(r"(?P<sign>half[- ]range|[^()]{1,12}?) ?\((?P<inner>.+)\)$")


@dataclass(frozen=True)
class Heading:
    """A header of the literature table, understood.

    Attributes
    ----------
    text
        As it stands there.
    kind
        What the column holds.
    name
        Quantity (a name of the registry), condition (``"T"``, ``"I"``, ``"c0"``), factor
        (``"F0"``, ``"g"``, ``"T0"``) or column of words.
    unit
        Unit of the numbers; None where there is none.
    prefactor, function
        v = function(prefactor x quantity/unit), as in :class:`~knought.chemistry.headers.Header`.
    order
        Overall order that the unit of k or A says; None where it says none.
    meaning
        What an uncertainty is said to be; None where the sign does not say.
    relative
        Whether an uncertainty is a fraction of the value.
    """

    text: str
    kind: Kind
    name: str
    unit: Unit | None = None
    prefactor: Fraction = Fraction(1)
    function: str = ""
    order: Fraction | None = None
    meaning: SpreadMeaning | None = None
    relative: bool = False


def read_heading(text: str) -> Heading | None:
    """Read a header.

    Parameters
    ----------
    text
        ``"label"``, ``"T/K"``, ``"k/(L mol^-1 s^-1)"``, ``"lg(A/s^-1)"``, ``"u(E_a)/(kJ/mol)"``,
        ``"half-range(k)/%"``, ``"F_0"``, ``"± means"``, ...

    Returns
    -------
    Heading or None
        None where it is none of ours.

    Raises
    ------
    InputError
        If the quantity is known and its unit is wrong.
    """
    plain = plain_header(text)
    if not plain:
        return None
    role = WORDS.get(plain.lower())
    if role is not None:
        return Heading(text, "words", role)
    try:
        return _own(text, plain) or _of_a_rate_table(text)
    except InputError as error:
        first = error.problems[0]
        raise InputError(Problem(first.what, first.remedy, read=text)) from error


def _own(text: str, plain: str) -> Heading | None:
    parts = split_header(plain)
    value = _value(text, plain, parts.quantity, parts.unit)
    if value is not None:
        return replace(value, prefactor=parts.prefactor)
    inner = _UNCERTAINTY.fullmatch(parts.quantity)
    if inner is None:
        return None
    sign = inner["sign"].strip()
    half_range = sign.lower().replace(" ", "-") == "half-range"
    meaning = None if half_range else meaning_of_sign(sign)
    if meaning is None and not half_range:
        return None
    what = _value(text, inner["inner"], inner["inner"], None, bare=True)
    if what is None and inner["inner"].strip() == "k":
        what = Heading(text, "value", "rate_constant")
    if what is None or what.kind != "value":
        return None
    unit = None if parts.unit is None else parse_unit(parts.unit)
    return Heading(
        text,
        "uncertainty",
        what.name,
        unit,
        parts.prefactor,
        what.function,
        meaning="half-range" if meaning is None else _spread_meaning(meaning.kind),
        relative=(meaning is not None and bool(meaning.relative))
        or (unit is not None and unit.dimension == DIMENSIONLESS and _has_unit(what.name)),
    )


def _has_unit(name: str) -> bool:
    return name not in {"ln_pre_exponential_factor", "charge_product"}


def _spread_meaning(kind: str) -> SpreadMeaning | None:
    known: dict[str, SpreadMeaning] = {
        "standard": "1 s",
        "deviation": "1 s",
        "double": "2 s",
        "double deviation": "2 s",
        "95 %": "95 %",
    }
    return known.get(kind)


def _value(
    text: str, whole: str, name: str, unit: str | None, *, bare: bool = False
) -> Heading | None:
    """Return the heading of a quantity that a table of rate constants does not have."""
    logarithm = _LOG_A.fullmatch(whole)
    if logarithm is not None:
        return _logarithm_of_a(text, logarithm)
    if name == "A" and (unit is not None or bare):
        return _pre_exponential(text, unit, "")
    for pattern, quantity, wanted in _ENERGIES:
        if re.fullmatch(pattern, name):
            return Heading(text, "value", quantity, None if bare else _unit(unit, wanted))
    if _CHARGES.fullmatch(name):
        return Heading(text, "value", "charge_product")
    if bare:
        return None
    if _STANDARD.fullmatch(name) and unit is not None:
        return Heading(text, "condition", "c0", _unit(unit, "mol L^-1"))
    for pattern, factor, wanted in _FACTORS:
        if re.fullmatch(pattern, name):
            read = None if wanted == "1" else _unit(unit, wanted)
            return Heading(text, "factor", factor, read)
    return None


def _logarithm_of_a(text: str, found: re.Match[str]) -> Heading:
    function = "ln" if found["base"] in {"ln", "loge", "log_e"} else "lg"
    inside = split_header(found["inner"] or found["bare"])
    return _pre_exponential(text, inside.unit, function)


def _pre_exponential(text: str, unit: str | None, function: str) -> Heading:
    read = None if unit is None else parse_unit(unit)
    order = None if read is None else reaction_order(read)
    return Heading(text, "value", "ln_pre_exponential_factor", read, function=function, order=order)


def _unit(text: str | None, wanted: str) -> Unit:
    if text is None:
        raise InputError("has no unit", f"write it behind a solidus: .../({wanted})")
    unit = parse_unit(text)
    if not unit.is_like(parse_unit(wanted)):
        raise InputError(f"{unit} is no unit of this quantity", f"give it in {wanted}")
    return unit


def _of_a_rate_table(text: str) -> Heading | None:
    """Return T, I, k or their uncertainties, read as in a table of rate constants.

    Raises
    ------
    InputError
        If k or I has no unit.
    """
    header = parse_header(text)
    if header is None or header.role not in {"T", "I", "k"}:
        return None
    if header.unit is None and header.role != "T" and not header.is_uncertainty:
        raise InputError("has no unit", "write it behind a solidus: k/(L mol^-1 s^-1), I/(mol/L)")
    if header.is_uncertainty:
        return _uncertainty_of_k(text, header)
    name = "rate_constant" if header.role == "k" else header.role
    order = None
    if header.role == "k" and header.unit is not None:
        order = reaction_order(header.unit)
    return Heading(
        text,
        "value" if header.role == "k" else "condition",
        name,
        header.unit or parse_unit("K"),
        header.prefactor,
        header.function,
        order,
    )


def _uncertainty_of_k(text: str, header: Header) -> Heading | None:
    """Return an uncertainty of k; those of T and I are not used, and said not to be."""
    if header.role != "k" or header.uncertainty is None:
        return None
    return Heading(
        text,
        "uncertainty",
        "rate_constant",
        header.unit,
        header.prefactor,
        header.function,
        meaning=_spread_meaning(header.uncertainty.kind),
        relative=bool(header.uncertainty.relative),
    )
