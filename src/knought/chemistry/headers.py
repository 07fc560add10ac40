"""Headers of tables, ``quantity/unit``, read as quantity calculus.

The idea first (IUPAC Green Book 1.1): a column headed ``10^3 k/s^-1`` holds the numbers v with
v = 10^3 k/s^-1, so k = v x 10^-3 s^-1. One formula undoes every header,

    quantity = inverse of the function(v) x unit / prefactor,

with functions reciprocal, ln, lg and square root. What cannot be read in one way only is refused
with both readings; what is no quantity of ours is said to be unknown, and the caller decides.
"""

from __future__ import annotations

import re
from dataclasses import dataclass, field, replace
from fractions import Fraction
from functools import lru_cache
from typing import Literal, TypeAlias

from knought.chemistry.header_text import (
    MOST_CHARACTERS,
    HeaderParts,
    closing_bracket,
    plain_header,
    split_header,
)
from knought.chemistry.uncertainty_words import Meaning, meaning_of_sign, parse_meaning
from knought.chemistry.unit_symbols import DIMENSIONLESS
from knought.chemistry.units import Unit, parse_unit, reaction_order
from knought.errors import InputError, Problem

__all__ = ["TEXT_ROLES", "Function", "Header", "Role", "parse_header"]

Role: TypeAlias = Literal[
    "T", "k", "I", "c", "n", "run", "salt", "batch", "use", "reason", "note", "time", "neighbour"
]
Function: TypeAlias = Literal["", "reciprocal", "ln", "lg", "sqrt"]

#: Roles whose cells are words.
TEXT_ROLES = frozenset({"run", "salt", "batch", "use", "reason", "note"})


@dataclass(frozen=True)
class Header:
    """A header, understood.

    Attributes
    ----------
    text
        As it was written.
    role
        What the column holds, or whose uncertainty it holds.
    uncertainty
        What kind of uncertainty it holds; None where it holds values.
    unit
        Unit as written; None where there is none.
    prefactor
        v = function(prefactor x quantity/unit).
    function
        The function.
    species
        Of which the column is a concentration.
    excess
        Whether the species is declared to be in excess.
    observed
        Whether a rate constant is an observed (pseudo-order) one.
    beside
        What the header of a column of values says that ± in its cells means.
    """

    text: str
    role: Role
    uncertainty: Meaning | None = None
    unit: Unit | None = None
    prefactor: Fraction = field(default=Fraction(1))
    function: Function = ""
    species: str = ""
    excess: bool = False
    observed: bool = False
    beside: Meaning | None = None

    @property
    def is_uncertainty(self) -> bool:
        """Whether the column holds uncertainties."""
        return self.uncertainty is not None


_TEXT_NAMES: dict[str, Role] = {
    "run": "run", "run no": "run", "run no.": "run", "no": "run", "no.": "run", "nr": "run",
    "nr.": "run", "#": "run", "label": "run", "experiment": "run", "exp.": "run", "exp": "run",
    "salt": "salt", "electrolyte": "salt", "added salt": "salt", "background electrolyte": "salt",
    "batch": "batch", "series": "batch",
    "use": "use", "used": "use",
    "reason": "reason",
    "note": "note", "notes": "note", "comment": "note", "comments": "note", "remark": "note",
    "remarks": "note",
    "n": "n", "determinations": "n", "replicates": "n", "number of determinations": "n",
}  # fmt: skip

_TEMPERATURE = re.compile(r"T|(?:abs(?:olute|\.)? ?)?temp(?:erature|\.)?", re.IGNORECASE)
_IONIC_STRENGTH = re.compile(r"I(?:_?c|_?m)?|µ|ionic[ _-]?str(?:ength|\.)", re.IGNORECASE)
_RATE_CONSTANT = re.compile(
    r"(?:k(?P<index>_\{?[A-Za-z0-9ψΨ°,+-]{1,12}\}?|[0-9°]{1,2}|obsd?|app|exp|cat|ψ|Ψ|II?)?"
    r"(?P<prime>['′’]{0,2})"
    r"|(?P<words>(?i:(?:obs(?:erved|\.)? |second-order |first-order |pseudo-first-order )?"
    r"rate[ _-]?(?:constant|coefficient))))"
)
_OBSERVED = re.compile(r"_?\{?(?:obs|obsd|app|ψ|Ψ|psi)\}?", re.IGNORECASE)
_FUNCTIONS: tuple[tuple[str, Function], ...] = (
    (r"ln(?=[ (\[{])", "ln"),
    (r"log_?e(?=[ (\[{])", "ln"),
    (r"(?:lg|log_?\{?10\}?)(?=[ (\[{])", "lg"),
    (r"(?:sqrt|√)", "sqrt"),
)
#: Signs of an uncertainty around or before the quantity: u(k), 2 s(k), Δk, s_k, SD of k.
_WRAPPED = re.compile(r"(?P<sign>[A-Za-z0-9σΔδ_±% {}+/.-]{1,14}?) ?\((?P<inside>.+)\)")
_BEFORE = re.compile(
    r"(?P<sign>Δ|δ|delta |[A-Za-zσ]{1,5}_|(?:±|\+/-) ?"
    r"|(?:2? ?(?:SD|SE|SEM|σ|s|u)|95 ?% ?CI)(?= of ))(?: of )?"
    r"(?P<inside>.+)"
)


# A long file of notes asks of the same few cells again and again whether they are headers.
@lru_cache(maxsize=4096)
def parse_header(text: str) -> Header | None:
    """Read a header.

    Parameters
    ----------
    text
        ``"T/K"``, ``"t (°C)"``, ``"10^3 k/s^-1"``, ``"u_r(k)/%"``, ``"ln(k/s^-1)"``,
        ``"1000 K/T"``, ``"c(NaClO4)/(mmol/L)"``, ``"run"``, ...

    Returns
    -------
    Header or None
        None where the text names no quantity or column of a rate table.

    Raises
    ------
    InputError
        If the quantity is known and the rest of the header is wrong, or can be read in two ways.
    """
    plain = plain_header(text)
    if not plain or len(plain) > MOST_CHARACTERS:
        return None
    named = _TEXT_NAMES.get(plain.lower().rstrip(":")) or _TEXT_NAMES.get(plain)
    if named is not None:
        return Header(text, named)
    try:
        return _reciprocal(text, plain) or _quantity(text, plain)
    except InputError as error:
        first = error.problems[0]
        raise InputError(Problem(first.what, first.remedy, read=text)) from error


_TEN = r"(?P<ten>1|10{1,6}|10 ?\^ ?\(?[0-9]{1,2}\)?|1[eE][0-9]{1,2})"
_RECIPROCALS = (
    re.compile(rf"(?:{_TEN} ?[* ] ?)?K ?/ ?T"),  # 1000 K/T
    re.compile(rf"{_TEN} ?/ ?\(T ?/ ?K\)"),  # 1000/(T/K)
    re.compile(rf"\(?{_TEN} ?/ ?T\)?(?P<unit>[ /(\[].*)?"),  # 1000/T (K^-1), (1/T)/K^-1
    re.compile(rf"(?:{_TEN} ?[* ]? ?)?T ?\^ ?\(?-1\)?(?P<unit>[ /(\[].*)?"),  # 1000 T^-1/K^-1
)


def _reciprocal(text: str, plain: str) -> Header | None:
    """Read ``1000 K/T`` and its kin: v = 1000 K/T, so T = 1000 K/v.

    Raises
    ------
    InputError
        If what stands behind 1/T is not K^-1.
    """
    for pattern in _RECIPROCALS:
        found = pattern.fullmatch(plain)
        if found is None:
            continue
        parts = found.groupdict()
        unit = (parts.get("unit") or "").strip(" /()[]")
        # 10^3/T in 10^-3 K^-1 would count the power of ten twice.
        if unit not in {"", "K^-1", "1/K", "K-1"}:
            raise InputError(
                f"{unit} behind 1/T is not K^-1", "head the column 1000 K/T or (1/T)/K^-1"
            )
        ten = re.sub(r"[ ()]", "", parts["ten"] or "1").replace("10^", "1e")
        prefactor = Fraction(int(float(ten)))
        return Header(text, "T", unit=parse_unit("K"), prefactor=prefactor, function="reciprocal")
    return None


def _quantity(text: str, plain: str) -> Header | None:
    plain, said = _said_meaning(_tight(plain))
    function, inner = _function(plain)
    parts = split_header(inner)
    if function and re.match(r" ?T\b", parts.unit or ""):
        # ln(k/T), as Eyring plots have it, is no rate constant in a unit.
        return None
    header = _named(text, parts, function)
    if header is None and parts.unit is None:
        parts = _unit_at_once(parts)
        header = _named(text, parts, function)
    if header is None:
        return None
    if re.match(r"log(?=[ (])", plain):
        raise InputError(
            "log can be read as the natural or as the decimal logarithm",
            "write ln(k/...) or lg(k/...)",
        )
    if parts.power_behind is not None:
        raise InputError(_power_behind(parts))
    if re.search(r"[0-9±%*]", parts.remark):
        raise InputError(
            f"has words behind its unit that are not understood: {parts.remark}",
            "keep quantity and unit in the header, and say the rest in the column note",
        )
    try:
        return _with_unit(header if said is None else _declared(header, said), parts)
    except InputError:
        # "T, the temperature of the bath" is a sentence and no header.
        if parts.loose:
            return None
        raise


_SAID = re.compile(
    r" ?[(±] ?(?P<said>(?:± ?)?(?:[12] ?(?:s|sd|σ|u|se|sem)|sd|se|sem|95 ?%[A-Za-z -]*"
    r"|standard [a-z ]+|k ?= ?2))(?:\)|(?<=[a-zA-Zσ%2])$)(?=$|[ /,])",
    re.IGNORECASE,
)


def _said_meaning(plain: str) -> tuple[str, Meaning | None]:
    """Take a meaning in brackets, ``u(k) (2 s)/s^-1``, out of a header."""
    found = _SAID.search(plain)
    if found is None or not found.start():
        return plain, None
    return plain[: found.start()] + plain[found.end() :], parse_meaning(found["said"])


def _declared(header: Header, said: Meaning) -> Header:
    if header.uncertainty is None:
        return replace(header, beside=said)
    return replace(header, uncertainty=said)


def _tight(plain: str) -> str:
    """Take the space out of ``u (k)``, which is one sign, and give ``u(k) %`` its solidus."""
    plain = re.sub(r"(?<=\S) ?%$", "/%", plain) if re.search(r"[^/(\[ ] ?%$", plain) else plain
    return re.sub(r"^([A-Za-zσ_]{1,5}|2 ?[sσu]) \((?=(?:k|T|t|I|ln k|lg k)\))", r"\1(", plain)


def _unit_at_once(parts: HeaderParts) -> HeaderParts:
    """Read ``T(K)``, where the unit follows without a space, as ``T/K``."""
    found = re.fullmatch(r"(?P<name>[^()\[\]]{1,12})[(\[](?P<unit>[^()\[\]]+)[)\]]", parts.quantity)
    if found is None or _base("", found["name"], "") is None:
        return parts
    return HeaderParts(parts.prefactor, found["name"], found["unit"], parts.power_behind)


def _function(plain: str) -> tuple[Function, str]:
    """Strip a function and the brackets that it may have."""
    for pattern, name in _FUNCTIONS:
        found = re.match(pattern, plain)
        if found is None:
            continue
        rest = plain[found.end() :].strip()
        end = closing_bracket(rest, 0) if rest[:1] in "([{" and rest else -1
        if end > 0:
            rest = rest[1:end] + rest[end + 1 :]
        return name, rest.strip()
    if re.match(r"log(?=[ (])", plain):
        return "lg", plain[3:].strip().removeprefix("(").removesuffix(")")
    return "", plain


def _named(text: str, parts: HeaderParts, function: Function) -> Header | None:
    """Find the quantity, or the quantity whose uncertainty this is."""
    base = _base(text, parts.quantity, function)
    if base is not None or function:
        return base
    alone = meaning_of_sign(parts.quantity)
    if alone is not None:
        return Header(text, "neighbour", alone)
    found = _WRAPPED.fullmatch(parts.quantity) or _BEFORE.fullmatch(parts.quantity)
    meaning = None if found is None else meaning_of_sign(found["sign"].rstrip("_ "))
    if found is None or meaning is None:
        return None
    inner_function, inner = _function(found["inside"])
    within = split_header(inner)
    quantity = _base(text, within.quantity, inner_function)
    if quantity is None or within.unit is not None or (within.prefactor != 1 != parts.prefactor):
        return None
    return replace(quantity, uncertainty=meaning, prefactor=within.prefactor)


def _base(text: str, name: str, function: Function) -> Header | None:
    """Return the bare quantity that a name stands for."""
    name = name.strip()
    if name in {"t", "θ", "ϑ"} or _TEMPERATURE.fullmatch(name):
        return Header(text, "T", function=function)
    if name != "i" and _IONIC_STRENGTH.fullmatch(name):
        return Header(text, "I", function=function)
    if re.fullmatch(r"I ?\^ ?\(?(?:1/2|0\.5)\)?", name):
        return Header(text, "I", function="sqrt")
    rate = _RATE_CONSTANT.fullmatch(name)
    if rate is not None:
        index = rate["index"] or ""
        observed = bool(rate["prime"]) or bool(_OBSERVED.fullmatch(index))
        observed = observed or (rate["words"] or "").lower().startswith("obs")
        return Header(text, "k", function=function, observed=observed)
    return _concentration(text, name, function)


_IN_EXCESS = re.compile(r"(?:_\{?|, ?|^)(?:excess|xs)\}?$")


def _concentration(text: str, name: str, function: Function) -> Header | None:
    found = re.fullmatch(
        r"(?:c(?P<mark>_\{?(?:0|excess|xs)\}?|0)?\((?P<named>.+)\)|\[(?P<square>.+)\]|c_(?P<low>\w+))"
        r"(?P<index>_?\{?(?:0|excess|xs)\}?)?",
        name,
    )
    if found is None or function:
        return None
    species = (found["named"] or found["square"] or found["low"]).strip()
    bare = re.sub(r", ?(?:excess|xs)$", "", species)
    marks = (found["mark"] or "") + (found["index"] or "")
    return Header(
        text, "c", species=bare, excess=bare != species or "excess" in marks or "xs" in marks
    )


def _power_behind(parts: HeaderParts) -> Problem:
    """Both readings of ``k × 10^3 / s^-1``."""
    power, sign, unit = parts.power_behind or 0, parts.quantity, parts.unit or "s^-1"
    return Problem(
        f"the power of ten behind {sign} can be read in two ways: the numbers were multiplied by "
        f"10^{power}, or they still have to be",
        f"write 10^{power} {sign}/({unit}) if 2.41 stands for 2.41e{-power:d}; write "
        f"{sign}/(10^{power} {unit}) if 2.41 stands for 2.41e{power:d}",
    )


def _with_unit(header: Header, parts: HeaderParts) -> Header | None:
    """Read the unit, and hold it against the quantity."""
    made = replace(
        header,
        unit=None if parts.unit is None else _unit(parts.unit, header),
        prefactor=parts.prefactor * header.prefactor,
    )
    return _checked(made, parts.quantity)


def _unit(text: str, header: Header) -> Unit:
    # For a temperature, C is no coulomb.
    if header.role == "T" and re.fullmatch(r"(?:deg(?:rees?)? )?C|°", text):
        text = "°C"
    unit = parse_unit(text)
    if header.function == "sqrt" and unit.dimension.length == Fraction(-3, 2):
        return Unit(unit.factor**2, unit.dimension.times(unit.dimension), text=f"({unit.text})^2")
    return unit


def _checked(header: Header, sign: str) -> Header:
    unit, meaning = header.unit, header.uncertainty
    if unit is None:
        if sign == "t":
            raise InputError(
                "t without a unit can be read as a time or as a Celsius temperature",
                "write t/°C or t/s",
            )
        return header
    kind = unit.dimension
    if header.role == "T" and sign in {"t", "θ", "ϑ"} and kind == parse_unit("s").dimension:
        return Header(header.text, "time", unit=unit)
    if meaning is not None and kind == DIMENSIONLESS:
        return replace(header, uncertainty=replace(meaning, relative=True))
    if header.role == "neighbour":
        return header
    if header.role == "T" and kind != parse_unit("K").dimension:
        raise InputError(f"{unit} is no unit of temperature", "write T/K or t/°C")
    if header.role in {"I", "c"} and kind != parse_unit("M").dimension:
        raise InputError(_no_concentration(unit))
    if header.role == "k":
        reaction_order(unit)
    return header


def _no_concentration(unit: Unit) -> Problem:
    if unit.dimension == parse_unit("mol/kg").dimension:
        return Problem(
            "molalities are not read",
            "multiply by the density of the solution in kg/L and give mol/L",
        )
    return Problem(f"{unit} is no unit of concentration", "give mol/L or mmol/L")
