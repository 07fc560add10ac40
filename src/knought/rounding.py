"""Numbers as they are read: rounded by their uncertainty (GUM 7.2.6), one decision for all layouts.

:func:`rounded` decides digits and a common power of ten once; the layouts (plain text, text for
terminals without Unicode, HTML, LaTeX) only arrange what it decided.
"""

from __future__ import annotations

import math
from dataclasses import dataclass, replace
from decimal import ROUND_HALF_EVEN, Decimal
from typing import Literal

__all__ = [
    "Layout",
    "Rounded",
    "brief",
    "chance",
    "heading",
    "power_of_ten",
    "rounded",
    "superscript",
    "unit_text",
]

Layout = Literal["text", "ascii", "html", "latex"]

#: Significant digits kept of an uncertainty (GUM 7.2.6: at most two).
_UNCERTAINTY_DIGITS = 2

#: Significant digits shown of a number that has no uncertainty.
_BARE_DIGITS = 5

#: Probabilities below this are not told apart.
_LEAST_CHANCE = 1e-6

#: Numbers from 10^-3 up to 10^5 are written without a power of ten.
_SMALLEST_PLAIN, _LARGEST_PLAIN = -3, 5

_SUPERSCRIPTS = str.maketrans("0123456789-+", "⁰¹²³⁴⁵⁶⁷⁸⁹⁻⁺")
_MINUS = {"text": "−", "ascii": "-", "html": "−", "latex": "-"}


def superscript(text: str) -> str:
    """Return digits and signs of `text` as Unicode superscripts, ``"-3"`` as ``"⁻³"``."""
    return text.translate(_SUPERSCRIPTS)


def power_of_ten(exponent: int, layout: Layout = "text") -> str:
    """Return ``10^exponent`` in the given layout."""
    if layout == "html":
        return f"10<sup>{_signed(str(exponent), layout)}</sup>"
    if layout == "latex":
        return f"10^{{{exponent}}}"
    return f"10{superscript(str(exponent))}" if layout == "text" else f"10^{exponent}"


def unit_text(unit: str, layout: Layout = "text") -> str:
    """Return a unit such as ``"L mol^-1 s^-1"`` in the given layout; ``"1"`` gives nothing.

    Parameters
    ----------
    unit
        Unit symbols separated by spaces, exponents after ``^``.
    layout
        ``"text"`` (Unicode superscripts), ``"ascii"``, ``"html"`` or ``"latex"``.
    """
    if unit == "1":
        return ""
    if layout == "ascii":
        return unit.replace("Å", "Angstrom").replace("°", "deg ")
    pieces = []
    for piece in unit.split():
        symbol, _, exponent = piece.partition("^")
        if layout == "latex":
            symbol = symbol.replace("Å", r"\AA ").replace("°", r"^\circ ").replace("%", r"\%")
            pieces.append(rf"\mathrm{{{symbol}}}" + (f"^{{{exponent}}}" if exponent else ""))
        elif layout == "html":
            raised = f"<sup>{_signed(exponent, layout)}</sup>" if exponent else ""
            pieces.append(symbol + raised)
        else:
            pieces.append(symbol + superscript(exponent))
    return {"latex": r"\,", "html": "&nbsp;", "text": " "}[layout].join(pieces)


def heading(sign: str, unit: str, layout: Layout = "text") -> str:
    """Return ``quantity/unit`` (Green Book 1.1); a unit of several parts stands in brackets."""
    written = unit_text(unit, layout)
    if not written:
        return sign
    return f"{sign} / ({written})" if " " in unit else f"{sign} / {written}"


@dataclass(frozen=True)
class Rounded:
    """A number and its uncertainty, rounded together, with a common power of ten.

    Attributes
    ----------
    value, uncertainty
        Digits with an ASCII minus; ``uncertainty`` is empty where there is none.
    exponent
        The common power of ten; 0 where none is written.
    """

    value: str
    uncertainty: str
    exponent: int

    def number(self, layout: Layout = "text") -> str:
        """Return the value alone, with its power of ten."""
        value = _signed(self.value, layout)
        return value if not self.exponent else f"{value}{_times(self.exponent, layout)}"

    def deviation(self, layout: Layout = "text") -> str:
        """Return the uncertainty alone, with the same power of ten."""
        if not self.uncertainty or not self.exponent:
            return self.uncertainty
        return f"{self.uncertainty}{_times(self.exponent, layout)}"

    def pair(self, layout: Layout = "text") -> str:
        """Return ``value ± uncertainty`` with the power of ten behind a bracket."""
        if not self.uncertainty:
            return self.number(layout)
        sign = {"text": "±", "ascii": "+/-", "html": "±", "latex": r"\pm"}[layout]
        both = f"{_signed(self.value, layout)} {sign} {self.uncertainty}"
        return both if not self.exponent else f"({both}){_times(self.exponent, layout)}"


def rounded(
    value: float, uncertainty: float | None = None, *, digits: int | None = None
) -> Rounded:
    """Round `value` by its uncertainty (GUM 7.2.6), or to `digits` where it has none.

    Parameters
    ----------
    value
        The number; inf and nan are written as words.
    uncertainty
        Its standard uncertainty, at least zero; None, zero or not finite: the value stands alone.
    digits
        Significant digits: of the uncertainty (2 if not given), or of a value that stands alone
        (5 if not given).

    Returns
    -------
    Rounded
        Both as digits, the uncertainty to two significant digits, with a common power of ten
        where the number would otherwise be long.
    """
    if not math.isfinite(value):
        word = "unknown" if math.isnan(value) else ("infinite" if value > 0 else "-infinite")
        return Rounded(word, "", 0)
    exact = Decimal(value)
    if uncertainty is None or not math.isfinite(uncertainty) or uncertainty <= 0:
        last = _place(exact, digits or _BARE_DIGITS)
        # 0.09999999 is shown as 0.100 and not as 0.1000: decide from what will be printed.
        last = _place(_quantized(exact, last), digits or _BARE_DIGITS)
        exponent = _shared_exponent(exact, last)
        text = _digits(exact, last, exponent)
        if "." in text and digits is None:
            text = text.rstrip("0").rstrip(".")
        return Rounded(text, "", exponent)
    spread = Decimal(uncertainty)
    last = _place(spread, digits or _UNCERTAINTY_DIGITS)
    # 0.0996 rounds up to 0.10: decide the place from what will be printed.
    last = _place(_quantized(spread, last), digits or _UNCERTAINTY_DIGITS)
    exponent = _shared_exponent(max(abs(exact), spread), last)
    return Rounded(_digits(exact, last, exponent), _digits(spread, last, exponent), exponent)


def brief(value: float, digits: int = 3) -> str:
    """Return a number for a sentence, with a power of ten rather than an exponent of programmers.

    Parameters
    ----------
    value
        The number.
    digits
        Significant digits at most; zeros at the end are left out.
    """
    digital = rounded(value, digits=digits)
    if "." in digital.value:
        digital = replace(digital, value=digital.value.rstrip("0").rstrip("."))
    return digital.number()


def chance(probability: float, digits: int = 1) -> str:
    """Return ``"p = 0.03"``; a probability that is hardly more than nothing as ``"p < 10⁻⁶"``.

    Parameters
    ----------
    probability
        Between 0 and 1.
    digits
        Significant digits.
    """
    if probability < _LEAST_CHANCE:
        return "p < 10⁻⁶"
    return f"p = {brief(float(f'{probability:.{digits}g}'), digits)}"


def _place(number: Decimal, digits: int) -> int:
    """Power of ten of the last kept digit."""
    return 0 if number == 0 else number.adjusted() - digits + 1


def _quantized(number: Decimal, last: int) -> Decimal:
    step = Decimal(1).scaleb(last)
    return (number / step).quantize(Decimal(1), rounding=ROUND_HALF_EVEN) * step


def _shared_exponent(number: Decimal, last: int) -> int:
    """Power of ten to take out: none while the digits fit between 10^-3 and 10^5."""
    size = number.adjusted() if number else 0
    plain = _SMALLEST_PLAIN <= size < _LARGEST_PLAIN and last <= 0
    return 0 if plain else size


def _digits(number: Decimal, last: int, exponent: int) -> str:
    shown = _quantized(number, last).scaleb(-exponent)
    return f"{shown:.{max(0, exponent - last)}f}"


def _times(exponent: int, layout: Layout) -> str:
    sign = {"text": " × ", "ascii": " x ", "html": " × ", "latex": r" \times "}[layout]
    return sign + power_of_ten(exponent, layout)


def _signed(digits: str, layout: Layout) -> str:
    return digits.replace("-", _MINUS[layout])
