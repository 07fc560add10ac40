"""The one registry of quantities: name, words, symbol, unit and how a value of it is written.

Tables, figures, the record and the page all read from here, so that a quantity is named, signed
and rounded in one place. Units are those in which values travel inside the package and in Python
(SI, with mol/L for concentrations) and those in which a chemist wants to read them.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from fractions import Fraction
from typing import TYPE_CHECKING

from knought.errors import InputError
from knought.rounding import Layout, Rounded, heading, rounded, unit_text

if TYPE_CHECKING:
    from collections.abc import Mapping

__all__ = ["QUANTITIES", "Quantity", "Symbol", "quantity", "rate_constant_unit"]


@dataclass(frozen=True)
class Symbol:
    """How the sign of a quantity is written in each layout (IUPAC Green Book: sloping letters)."""

    ascii: str
    text: str
    html: str
    latex: str

    def in_layout(self, layout: Layout) -> str:
        """Return the sign in `layout`."""
        written: str = getattr(self, layout)
        return written


@dataclass(frozen=True)
class Quantity:
    """A quantity: what it is called and how a value of it is written.

    Parameters
    ----------
    name
        The name in Python and in the record, ``"activation_energy"``.
    words
        The trade's term, ``"activation energy"``.
    symbol
        Its sign.
    unit
        The unit in which values travel, ``"J mol^-1"``; ``"1"`` for a number.
    shown_unit
        The unit in which it is read, ``"kJ mol^-1"``.
    shown_factor
        Value in `shown_unit` = value in `unit` x `shown_factor`; a Fraction, so exact.
    """

    name: str
    words: str
    symbol: Symbol
    unit: str
    shown_unit: str
    shown_factor: Fraction = Fraction(1)

    def shown(self, value: float) -> float:
        """Return `value` (in `unit`) in `shown_unit`."""
        # One correctly rounded operation: 50300 J becomes 50.3 kJ and not 50.300000000000004.
        factor = self.shown_factor
        return value * factor.numerator if factor >= 1 else value / factor.denominator

    def rounded(self, value: float, uncertainty: float | None = None) -> Rounded:
        """Return `value` and `uncertainty` (in `unit`) as digits in `shown_unit`."""
        return rounded(self.shown(value), None if uncertainty is None else self.shown(uncertainty))

    def written(
        self, value: float, uncertainty: float | None = None, layout: Layout = "text"
    ) -> str:
        """Return ``"50.31 ± 0.42 kJ mol⁻¹"`` for a value and uncertainty in `unit`."""
        digits = self.rounded(value, uncertainty)
        unit = unit_text(self.shown_unit, layout)
        number = digits.pair(layout)
        if unit and digits.uncertainty and not digits.exponent:
            number = f"({number})"
        return f"{number} {unit}".rstrip()

    def heading(self, layout: Layout = "text") -> str:
        """Return the column heading ``quantity/unit``."""
        return heading(self.symbol.in_layout(layout), self.shown_unit, layout)


def _sub(letter: str, index: str, text: str | None = None) -> Symbol:
    return Symbol(
        ascii=f"{letter}_{index}",
        text=text or f"{letter}_{index}",
        html=f"<i>{letter}</i><sub>{index}</sub>",
        latex=rf"{letter}_\mathrm{{{index}}}",
    )


def _activation(letter: str, ascii_index: str = "") -> Symbol:
    """Build Δ‡X, written ΔX‡ as kineticists do."""
    lowered = f"<sub><i>{ascii_index}</i></sub>" if ascii_index else ""
    return Symbol(
        ascii=f"D{letter}{ascii_index}++",
        text=f"Δ{letter}{'ₚ' if ascii_index == 'p' else ''}‡",
        html=f"Δ<i>{letter}</i>{lowered}<sup>‡</sup>",
        latex=rf"\Delta {letter}{f'_{{{ascii_index}}}' if ascii_index else ''}^\ddagger",
    )


def _plain(letter: str, latex: str | None = None) -> Symbol:
    return Symbol(ascii=letter, text=letter, html=f"<i>{letter}</i>", latex=latex or letter)


_KILO = Fraction(1, 1000)

_ALL = (
    Quantity("temperature", "temperature", _plain("T"), "K", "K"),
    Quantity("celsius_temperature", "Celsius temperature", _plain("t"), "°C", "°C"),
    Quantity("ionic_strength", "ionic strength", _plain("I"), "mol L^-1", "mol L^-1"),
    Quantity("concentration", "concentration", _plain("c"), "mol L^-1", "mol L^-1"),
    Quantity(
        "rate_constant",
        "rate constant at I → 0",
        Symbol("k0", "k°", "<i>k</i>°", r"k^\circ"),
        "s^-1",
        "s^-1",
    ),
    Quantity("measured_rate_constant", "rate constant", _plain("k"), "s^-1", "s^-1"),
    Quantity(
        "ln_rate_constant",
        "logarithm of the rate constant at I → 0",
        Symbol("ln k0", "ln k°", "ln&nbsp;<i>k</i>°", r"\ln k^\circ"),
        "1",
        "1",
    ),
    Quantity(
        "activation_energy",
        "activation energy",
        _sub("E", "a", "Eₐ"),
        "J mol^-1",
        "kJ mol^-1",
        _KILO,
    ),
    Quantity(
        "ln_pre_exponential_factor",
        "logarithm of the pre-exponential factor",
        Symbol("ln A", "ln A", "ln&nbsp;<i>A</i>", r"\ln A"),
        "1",
        "1",
    ),
    Quantity(
        "activation_enthalpy",
        "enthalpy of activation",
        _activation("H"),
        "J mol^-1",
        "kJ mol^-1",
        _KILO,
    ),
    Quantity(
        "activation_entropy",
        "entropy of activation",
        _activation("S"),
        "J K^-1 mol^-1",
        "J K^-1 mol^-1",
    ),
    Quantity(
        "activation_gibbs_energy",
        "Gibbs energy of activation",
        _activation("G"),
        "J mol^-1",
        "kJ mol^-1",
        _KILO,
    ),
    Quantity(
        "activation_heat_capacity",
        "heat capacity of activation",
        _activation("C", "p"),
        "J K^-1 mol^-1",
        "J K^-1 mol^-1",
    ),
    Quantity(
        "temperature_exponent",
        "temperature exponent of the pre-exponential factor",
        _plain("n"),
        "1",
        "1",
    ),
    Quantity(
        "charge_product",
        "charge product of the rate-determining step",
        Symbol(
            "z_A z_B",
            "z_A z_B",
            "<i>z</i><sub>A</sub><i>z</i><sub>B</sub>",
            r"z_\mathrm{A} z_\mathrm{B}",
        ),
        "1",
        "1",
    ),
    Quantity(
        "interaction_coefficient",
        "specific-interaction coefficient",
        Symbol("beta", "β", "<i>β</i>", r"\beta"),
        "L mol^-1",
        "L mol^-1",
    ),
    Quantity(
        "ion_size",
        "ion-size parameter",
        Symbol("a", "å", "<i>å</i>", r"\mathring{a}"),
        "m",
        "Å",
        Fraction(10**10),
    ),
    Quantity(
        "linear_coefficient",
        "coefficient of the linear term of the activity law",
        _plain("c"),
        "L mol^-1",
        "L mol^-1",
    ),
)

#: Every quantity by its name.
QUANTITIES: Mapping[str, Quantity] = {each.name: each for each in _ALL}

_UNIT_OF_K = {Fraction(1): "s^-1", Fraction(0): "mol L^-1 s^-1", Fraction(2): "L mol^-1 s^-1"}


def rate_constant_unit(order: Fraction | int) -> str:
    """Return the unit of a rate constant of overall order n, (L/mol)^(n-1) s^-1.

    Parameters
    ----------
    order
        Overall order n; fractions such as 3/2 are allowed.
    """
    order = Fraction(order)
    if order in _UNIT_OF_K:
        return _UNIT_OF_K[order]
    power = order - 1
    litres = "L" if power == 1 else f"L^{_power(power)}"
    return f"{litres} mol^{_power(-power)} s^-1"


def _power(number: Fraction) -> str:
    return str(number.numerator) if number.denominator == 1 else f"{float(number):g}"


def quantity(name: str, order: Fraction | int | None = None) -> Quantity:
    """Return the quantity called `name`, a rate constant with the unit that `order` gives it.

    Parameters
    ----------
    name
        A name of the registry, ``"activation_energy"``.
    order
        Overall order of the reaction; needed for the unit of a rate constant only.

    Raises
    ------
    InputError
        If no quantity has that name.
    """
    if name not in QUANTITIES:
        raise InputError(
            f"no quantity is called {name!r}", f"the names are {', '.join(sorted(QUANTITIES))}"
        )
    found = QUANTITIES[name]
    if order is not None and name in {"rate_constant", "measured_rate_constant"}:
        unit = rate_constant_unit(order)
        return replace(found, unit=unit, shown_unit=unit)
    return found
