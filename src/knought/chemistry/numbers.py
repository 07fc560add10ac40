"""The one grammar of numbers: what a cell of a table, or a quantity in a study file, may hold.

Strict, and the same everywhere: ``2.41``, ``2.41e-3``, ``2.41 × 10⁻³``, ``2.41·10^-3``, digits in
threes behind spaces, a typographic minus, and a value with its uncertainty as ``2.41(5)e-3``,
``2.41e-3 ± 0.05e-3`` or ``(2.41 ± 0.05)e-3``. The decimal mark is stated by the caller and never
guessed here; :func:`decimal_evidence` says what a text shows of it. Whatever is read becomes plain
digits for Python's correctly rounded ``float``, so that no digit is lost on the way.
"""

from __future__ import annotations

import math
import re
from typing import Literal, NamedTuple, TypeAlias

from knought.chemistry.number_refusals import Unreadable, refusal
from knought.errors import InputError, Problem

__all__ = [
    "DecimalMark",
    "Evidence",
    "Number",
    "Unreadable",
    "decimal_evidence",
    "last_step",
    "read_number",
    "read_plain_number",
]

DecimalMark: TypeAlias = Literal[".", ","]
Evidence: TypeAlias = Literal["", ".", ",", "?.", "?,"]

#: No number is longer.
_MOST_CHARACTERS = 80

_NORMAL = str.maketrans(
    dict.fromkeys("−‐‑–—﹣－", "-")
    | dict.fromkeys("×·⋅∙•✕✖∗", "*")
    | dict.fromkeys("\t\u00a0\u202f\u205f\u3000", " ")
    | {chr(code): " " for code in range(0x2000, 0x200B)}
    | dict.fromkeys("\u200b\u2060\ufeff", None)
)
_SUPERSCRIPT_RUN = re.compile("[⁺⁻]?[⁰¹²³⁴⁵⁶⁷⁸⁹]+")
_PLAIN_DIGITS = str.maketrans("⁰¹²³⁴⁵⁶⁷⁸⁹⁺⁻", "0123456789+-")

#: What people write where they have no value.
_MISSING = frozenset(
    {"", "-", "--", "---", "/", "?", "n/a", "na", "n.a.", "#n/a", "nan", "nd", "n.d.", "none",
     "null", "missing"}
)  # fmt: skip


class Number(NamedTuple):
    """A number as it was written.

    Attributes
    ----------
    value
        The nearest double.
    uncertainty
        What stood behind ± or in brackets, absolute unless `relative`; None where nothing did.
    sign
        How the uncertainty was written: ``"()"``, ``"±"``, or ``""``.
    relative
        Whether it was written in percent of the value; it is then a fraction.
    percent
        Whether a percent sign stood behind the number; the value is as written.
    """

    value: float
    uncertainty: float | None = None
    sign: Literal["", "()", "±"] = ""
    relative: bool = False
    percent: bool = False


# Digits: plain, in threes behind spaces, or in threes behind the mark that is not the decimal one.
# The last only before a decimal mark (1,234.5), unless the user stated which mark is which.
_MANTISSA = (
    r"(?:(?:[0-9]+(?![ {group}]?[0-9])|[1-9][0-9]{{0,2}}(?:(?: [0-9]{{3}})+|"
    r"(?:\{group}[0-9]{{3}})+{behind}))"
    r"(?:\{mark}(?:(?:[0-9]{{3}} )+[0-9]{{1,3}}|[0-9]*))?|\{mark}[0-9]+)"
)
_TEN = (
    r"(?:[eE](?P<e{i}>[+-]?[0-9]{{1,4}})"
    r"| ?[*xX] ?10 ?(?:\^|\*\*) ?\(?(?P<p{i}>[+-]?[0-9]{{1,4}})\)?)"
)
_PLUS_MINUS = r" ?(?:±|\+ ?/ ?-|\+-) ?"


def _pattern(mark: str, group: str, *, stated: bool) -> re.Pattern[str]:
    behind = "(?![0-9])" if stated else rf"(?=\{mark}[0-9])"
    mantissa = _MANTISSA.format(mark=mark, group=group, behind=behind)
    ten = [_TEN.format(i=i) for i in range(3)]
    return re.compile(
        rf"(?P<sign>[+-] ?)?(?P<value>{mantissa})(?: ?\((?P<last>{mantissa})\))?{ten[0]}?"
        rf"(?:{_PLUS_MINUS}(?P<deviation>{mantissa}){ten[1]}?(?P<relative> ?%)?"
        r"|(?P<percent> ?%))?"
        rf"|\( ?(?P<bsign>[+-] ?)?(?P<bvalue>{mantissa}){_PLUS_MINUS}(?P<bdeviation>{mantissa}) ?\)"
        rf"{ten[2]}?"
        r"|10 ?(?:\^|\*\*) ?\(?(?P<bare>[+-]?[0-9]{1,4})\)?"
    )


_OTHER: dict[str, str] = {".": ",", ",": "."}

#: By decimal mark, and by whether the user stated it.
_PATTERNS = {
    (mark, stated): _pattern(mark, group, stated=stated)
    for mark, group in _OTHER.items()
    for stated in (False, True)
}


def _normal(text: str) -> str:
    """Return one spelling of spaces, signs, multiplication and superscripts."""
    if text.isascii():
        return text.strip()
    text = text.translate(_NORMAL).strip()
    return _SUPERSCRIPT_RUN.sub(lambda run: "^" + run[0].translate(_PLAIN_DIGITS), text)


def read_number(
    text: str, decimal: DecimalMark = ".", *, stated: bool = False
) -> Number | Unreadable | None:
    """Read a number.

    Parameters
    ----------
    text
        A cell.
    decimal
        The decimal mark of the file.
    stated
        Whether the user stated the mark; the other mark may then group digits in threes.

    Returns
    -------
    Number, or Unreadable with the reason, or None where the cell says that there is no value.
    """
    plain = _normal(text)
    found = _PATTERNS[decimal, stated].fullmatch(plain) if len(plain) <= _MOST_CHARACTERS else None
    if found is not None:
        return _made(found, decimal)
    if plain.lower() in _MISSING:
        return None
    other = _OTHER[decimal]
    with_other = other in plain and _PATTERNS[other, True].fullmatch(plain[:_MOST_CHARACTERS])
    return refusal(plain, decimal, other if with_other else None)


def _made(found: re.Match[str], decimal: str) -> Number | Unreadable:
    sign, mantissa, last, deviation, e, p = found.group(
        "sign", "value", "last", "deviation", "e0", "p0"
    )
    if mantissa is None:
        return _in_brackets(found, decimal)
    plain = _digits(mantissa, decimal)
    exponent = e or p or "0"
    minus = "-" if sign and sign[0] == "-" else ""
    value = float(f"{minus}{plain}e{exponent}")
    wrong = _out_of_range(value, plain)
    if wrong is not None:
        return wrong
    if deviation is not None:
        if last is not None:
            return Unreadable("states its uncertainty twice", "keep one of them")
        return _plus_minus(found, decimal, value, e or p)
    if last is not None:
        return Number(value, _last_digits(_digits(last, decimal), plain, int(exponent)), "()")
    return Number(value, percent=found["percent"] is not None)


def _last_digits(last: str, mantissa: str, exponent: int) -> float:
    """Return the uncertainty in 2.41(5): of the last digits, unless it has a mark of its own."""
    places = 0 if "." in last else len(mantissa.partition(".")[2])
    return float(f"{last}e{exponent - places}")


def _plus_minus(
    found: re.Match[str], decimal: str, value: float, power: str | None
) -> Number | Unreadable:
    relative = found["relative"] is not None
    own = found["e1"] or found["p1"]
    if not relative and (own is None) != (power is None):
        return Unreadable(
            "has a power of ten on one side of ± only",
            "write (2.41 ± 0.05)e-3, or a power of ten on both sides",
        )
    digits = _digits(found["deviation"], decimal)
    return Number(value, float(f"{digits}e{int(own or 0) - (2 if relative else 0)}"), "±", relative)


def _in_brackets(found: re.Match[str], decimal: str) -> Number | Unreadable:
    """Read ``(2.41 ± 0.05)e-3``, or a power of ten that stands alone."""
    if found["bare"] is not None:
        value = float(f"1e{found['bare']}")
        return _out_of_range(value, "1") or Number(value)
    exponent = found["e2"] or found["p2"] or "0"
    plain = _digits(found["bvalue"], decimal)
    minus = "-" if (found["bsign"] or "").startswith("-") else ""
    value = float(f"{minus}{plain}e{exponent}")
    deviation = float(f"{_digits(found['bdeviation'], decimal)}e{exponent}")
    return _out_of_range(value, plain) or Number(value, deviation, "±")


def _digits(mantissa: str, decimal: str) -> str:
    """Return plain digits with a decimal point."""
    if mantissa.isdecimal():
        return mantissa
    if decimal == ",":
        return mantissa.replace(" ", "").replace(".", "").replace(",", ".")
    return mantissa.replace(" ", "").replace(",", "")


def _out_of_range(value: float, mantissa: str) -> Unreadable | None:
    """Refuse what a double cannot hold."""
    if math.isinf(value):
        return Unreadable("is too large for a number", "check the power of ten")
    if value == 0 and mantissa.strip("0."):
        return Unreadable("is too small for a number", "check the power of ten")
    return None


def last_step(text: str, decimal: DecimalMark = ".") -> float:
    """Return what one step of the last digit of a number is: 0.01 for ``2.41``, 1e-5 for 2.41e-3.

    Parameters
    ----------
    text
        A cell that :func:`read_number` reads.
    decimal
        The decimal mark of the file.

    Returns
    -------
    float
        nan where the text is no number.
    """
    found = _PATTERNS[decimal, True].fullmatch(_normal(text)[:_MOST_CHARACTERS])
    if found is None:
        return math.nan
    mantissa, exponent = "1", found["bare"]
    if exponent is None:
        mantissa = _digits(found["value"] or found["bvalue"], decimal)
        exponent = found["e0"] or found["p0"] or found["e2"] or found["p2"] or "0"
    return float(f"1e{int(exponent) - len(mantissa.partition('.')[2])}")


def decimal_evidence(text: str) -> Evidence:
    """Say what a cell shows of the decimal mark of its file.

    Returns
    -------
    str
        ``"."`` or ``","`` where the cell can be read with that mark only; ``"?."`` or ``"?,"``
        where it holds that mark before exactly three digits, which may be thousands; ``""`` where
        it says nothing.
    """
    plain = _normal(text)
    if len(plain) > _MOST_CHARACTERS or ("." not in plain and "," not in plain):
        return ""
    point = _PATTERNS[".", False].fullmatch(plain) is not None
    comma = _PATTERNS[",", False].fullmatch(plain) is not None
    if point == comma:
        return ""
    if point:
        return "?." if _PATTERNS[",", True].fullmatch(plain) else "."
    return "?," if _PATTERNS[".", True].fullmatch(plain) else ","


_PLAIN = re.compile(
    r"(?P<number>[+-]?(?:[0-9]+(?:\.[0-9]*)?|\.[0-9]+)"
    r"(?:[eE][+-]?[0-9]{1,4}| ?[*xX] ?10 ?(?:\^|\*\*) ?\(?[+-]?[0-9]{1,4}\)?)?)(?P<rest>.*)",
    re.DOTALL,
)


def read_plain_number(text: str) -> tuple[float, str]:
    """Split a quantity into its number (decimal point) and the text of its unit.

    Parameters
    ----------
    text
        ``"298.15 K"``.

    Raises
    ------
    InputError
        If it does not begin with a number.
    """
    plain = _normal(text)
    found = _PLAIN.fullmatch(plain) if len(plain) <= 2 * _MOST_CHARACTERS else None
    number = None if found is None else read_number(found["number"], ".")
    rest = "" if found is None else found["rest"]
    if not isinstance(number, Number) or rest[:1] in {",", ".", *"0123456789"} - {""}:
        raise InputError(
            Problem(
                "does not begin with a number with a decimal point",
                'write quantities as "298.15 K"',
                read=text,
            )
        )
    return number.value, rest.strip()
