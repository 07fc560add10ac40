"""Units as chemists write them, read by a closed grammar with exact factors.

The idea first: a unit is a product of known symbols with exponents, with at most one solidus in
each bracket, perhaps behind a power of ten. ``L mol^-1 s^-1``, ``M-1 s-1``, ``dm³·mol⁻¹·s⁻¹`` and
``L/(mol s)`` are one unit. Whatever two chemists could read differently (``L/mol/s``, ``J/mol K``)
is refused with both readings. Symbols outside the list are refused, never looked up elsewhere:
a general unit library reads ``k`` as Boltzmann's constant and ``min`` as milli-inches.

Factors are fractions, so that changing a unit there and back loses nothing. Only a fractional
power of a number that has no exact root is rounded, to the nearest double.
"""

from __future__ import annotations

import difflib
from dataclasses import dataclass, field
from fractions import Fraction
from functools import lru_cache
from typing import TYPE_CHECKING

import numpy as np

from knought.chemistry.numbers import read_plain_number
from knought.chemistry.unit_symbols import ALIASES, DIMENSIONLESS, SYMBOLS, Dimension
from knought.chemistry.unit_text import UnitText, UnitTextError, parse_unit_text
from knought.errors import InputError, Problem, quoted
from knought.given import real_array

if TYPE_CHECKING:
    from numpy.typing import ArrayLike

    from knought.arrays import FloatArray

__all__ = ["Unit", "parse_quantity", "parse_unit", "reaction_order", "scaled"]

_CELSIUS = "°C"
_CELSIUS_ZERO = Fraction(27315, 100)
_ONE = Fraction(1)

#: A factor beyond this power of ten is a slip of the pen and would overflow a float.
_LARGEST_POWER_OF_TEN = 120


@dataclass(frozen=True)
class Unit:
    """A unit: an exact multiple of the coherent base of mol, dm, kg, s and K.

    Two units are equal when they measure the same, however they are written.

    Attributes
    ----------
    factor
        1 unit = factor x base unit.
    dimension
        Exponents over amount, length, mass, time and temperature.
    offset
        Zero of the scale in K; 273.15 for the degree Celsius standing alone, else 0.
    text
        Canonical spelling, ``"L mol^-1 s^-1"``; ``"1"`` for a pure number.
    """

    factor: Fraction
    dimension: Dimension = DIMENSIONLESS
    offset: Fraction = Fraction(0)
    text: str = field(default="1", compare=False)

    def __str__(self) -> str:
        return self.text

    @property
    def is_celsius(self) -> bool:
        """Whether this is the Celsius scale, which has a zero of its own."""
        return self.offset != 0

    def difference(self) -> Unit:
        """Return the unit of a difference on this scale: K for °C."""
        return Unit(self.factor, self.dimension, Fraction(0), "K") if self.is_celsius else self

    def factor_to(self, other: Unit) -> Fraction:
        """Return f with 1 of this unit = f of `other`; for °C that of a difference.

        Parameters
        ----------
        other
            A unit of the same dimension.

        Raises
        ------
        InputError
            If the dimensions differ.
        """
        if self.dimension != other.dimension:
            raise InputError(f"{self.text} cannot be changed into {other.text}: {self._unlike()}")
        return self.factor / other.factor

    def convert(self, values: ArrayLike, other: Unit) -> FloatArray:
        """Return `values` in this unit as values in `other`, zero of the scale included.

        Parameters
        ----------
        values : (...) array_like
            Numbers in this unit.
        other
            A unit of the same dimension.

        Returns
        -------
        ndarray
            Same shape. A factor that is a whole number, or one over a whole number, is applied in
            one correctly rounded operation.

        Raises
        ------
        InputError
            If the dimensions differ.
        """
        changed = scaled(values, self.factor_to(other))
        if self.offset == other.offset:
            return changed
        shift = (self.offset - other.offset) / other.factor
        return np.asarray(changed + float(shift), dtype=np.float64)

    def is_like(self, other: Unit) -> bool:
        """Whether both measure the same kind of quantity."""
        return self.dimension == other.dimension

    def _unlike(self) -> str:
        return "they measure different kinds of quantity"


def scaled(values: ArrayLike, factor: Fraction) -> FloatArray:
    """Return ``values * factor`` with as few roundings as doubles allow.

    Parameters
    ----------
    values : (...) array_like
        Numbers; never changed.
    factor
        The exact factor.

    Returns
    -------
    ndarray
        Same shape, float64.
    """
    array = real_array(values)
    if factor == 1:
        return array
    if factor.numerator == 1:
        return np.asarray(array / float(factor.denominator))
    return np.asarray(array * float(factor))


def parse_unit(text: str) -> Unit:
    """Read a unit.

    Parameters
    ----------
    text
        For example ``"L mol^-1 s^-1"``, ``"M-1 s-1"``, ``"dm3 mol-1 min-1"``, ``"L/(mol s)"``,
        ``"10^-3 s⁻¹"``, ``"°C"``, ``"1"``.

    Returns
    -------
    Unit

    Raises
    ------
    InputError
        If the text is no unit of the list, or could be read in two ways.
    """
    return _parsed(text)


@lru_cache(maxsize=512)
def _parsed(text: str) -> Unit:
    """Read a unit once: a compilation names the same few in each of its rows.

    Raises
    ------
    InputError
        If the text is no unit of the list, or could be read in two ways.
    """
    try:
        read = parse_unit_text(text)
    except UnitTextError as error:
        raise InputError(Problem(error.what, error.remedy, read=text)) from error
    return _measured(read, text)


def _measured(read: UnitText, text: str) -> Unit:
    """Give every symbol its factor and dimension.

    Raises
    ------
    InputError
        If a symbol is unknown, or °C does not stand alone.
    """
    factor, dimension = Fraction(10) ** read.power_of_ten, DIMENSIONLESS
    for symbol, power in read.factors:
        if symbol == _CELSIUS:
            if len(read.factors) == 1 and power == 1 and not read.power_of_ten:
                return Unit(_ONE, SYMBOLS["K"][1], _CELSIUS_ZERO, _CELSIUS)
            raise InputError(
                Problem("the degree Celsius stands only alone", "write K inside a unit", read=text)
            )
        if symbol not in SYMBOLS:
            raise InputError(_unknown(symbol, text))
        size, kind = SYMBOLS[symbol]
        factor *= _raised(size, power)
        dimension = dimension.times(kind, power)
    _check_size(factor, text)
    return Unit(factor, dimension, Fraction(0), read.canonical())


def _raised(size: Fraction, power: Fraction) -> Fraction:
    """Raise to a power: exactly where there is an exact root, else to the nearest double."""
    if power.denominator == 1:
        return size**power.numerator
    rounded_root = Fraction(float(size) ** float(power))
    whole = rounded_root.limit_denominator(10**6)
    exact = whole and whole**power.denominator == size**power.numerator
    return whole if exact else rounded_root


def _check_size(factor: Fraction, text: str) -> None:
    limit = Fraction(10) ** _LARGEST_POWER_OF_TEN
    if not 1 / limit < factor < limit:
        raise InputError(Problem("is too large or too small for a unit", "check it", read=text))


def _unknown(symbol: str, text: str) -> Problem:
    if len(symbol) > 1 and symbol in {"°F", "degF"}:
        return Problem("°F is not read", "give temperatures in °C or K", read=text)
    close = difflib.get_close_matches(symbol, [*SYMBOLS, *ALIASES, _CELSIUS], n=3, cutoff=0.5)
    near = dict.fromkeys(ALIASES.get(name, name) for name in close)
    if near:
        remedy = f"did you mean {' or '.join(near)}?"
    else:
        remedy = "write units as in L mol^-1 s^-1, mmol/L, min^-1, °C"
    return Problem(f"{quoted(symbol)} is no unit that is known here", remedy, read=text)


def parse_quantity(text: str, unit: str) -> float:
    """Read a number with its unit, as a study file gives it.

    Parameters
    ----------
    text
        ``"298.15 K"``, ``"25 °C"``, ``"3 %"``; a number alone only where `unit` is ``"1"``.
        Decimal point; a power of ten as ``1.2e-3`` or ``1.2 × 10^-3``.
    unit
        The unit in which the value is wanted.

    Returns
    -------
    float
        The value in `unit`.

    Raises
    ------
    InputError
        If number or unit cannot be read, or the unit is of another kind.
    """
    wanted = parse_unit(unit)
    value, rest = read_plain_number(text)
    if not rest and wanted.dimension != DIMENSIONLESS:
        raise InputError(Problem("has no unit", f'write it as "{value:g} {unit}"', read=text))
    given = parse_unit(rest or "1")
    if given.dimension != wanted.dimension:
        raise InputError(
            Problem(f"is not a quantity in {unit}", f'give it as "1 {unit}"', read=text)
        )
    return float(given.convert(value, wanted))


def reaction_order(unit: Unit) -> Fraction:
    """Return the overall order n of a reaction from the unit of k, (L/mol)^(n-1) s^-1.

    Parameters
    ----------
    unit
        Any unit of a rate constant in concentrations: ``s^-1``, ``M^-1 min^-1``,
        ``cm3 molecule^-1 s^-1``.

    Returns
    -------
    Fraction
        3/2 for ``L^0.5 mol^-0.5 s^-1``.

    Raises
    ------
    InputError
        If it is no unit of a rate constant; what it looks like instead is said where it is plain.
    """
    amount, length, mass, time, temperature = unit.dimension
    if mass == temperature == 0 and time == -1 and length == -3 * amount:
        return 1 - amount
    raise InputError(
        Problem(
            f"{unit.text} is not the unit of a rate constant",
            _not_a_rate_constant(unit.dimension),
            read=unit.text,
        )
    )


def _not_a_rate_constant(dimension: Dimension) -> str:
    amount, _, mass, time, _ = dimension
    if mass and mass == -amount and time == -1:
        return (
            "it is on the molal basis; multiply or divide by the density of the solvent to give k "
            "in (L/mol)^(n-1) s^-1"
        )
    if mass and time != -1:
        return "rate constants in pressures need the temperature; give them in concentrations"
    return "give k in s^-1, L mol^-1 s^-1 and so on: (L/mol)^(n-1) s^-1 for overall order n"
