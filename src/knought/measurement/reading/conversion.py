"""Undoing a header: from the numbers v of a column to the quantity, in the package's own units.

quantity = inverse of the function(v) x unit / prefactor; its uncertainty is |dq/dv| u(v).
"""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from knought.chemistry.units import Unit, parse_unit, scaled

if TYPE_CHECKING:
    from fractions import Fraction

    from knought.arrays import FloatArray
    from knought.chemistry.headers import Header

__all__ = ["converted", "slope", "step_words"]

_LN10 = float(np.log(10.0))
_KELVIN = parse_unit("K")


def _factor(header: Header, unit: Unit, wanted: Unit) -> Fraction:
    return unit.factor_to(wanted) / header.prefactor


def converted(header: Header, values: FloatArray, unit: Unit, wanted: Unit) -> FloatArray:
    """Return the quantity in `wanted`.

    Parameters
    ----------
    header
        The header of the column.
    values : (n,) ndarray
        Numbers of the column.
    unit
        Unit of the header, or the one it was found to have.
    wanted
        A unit of the same kind.

    Returns
    -------
    (n,) ndarray
        inf or nan where a number has no such quantity.

    Raises
    ------
    InputError
        If the units are of different kinds.
    """
    with np.errstate(divide="ignore", over="ignore", invalid="ignore"):
        if header.function == "reciprocal":
            return np.asarray(float(header.prefactor * unit.factor_to(wanted)) / values)
        if header.function == "ln":
            values = np.exp(values)
        elif header.function == "lg":
            values = np.power(10.0, values)
        elif header.function == "sqrt":
            values = np.where(values < 0, np.nan, values**2)
        if unit.offset != wanted.offset:
            return unit.convert(scaled(values, 1 / header.prefactor), wanted)
        return scaled(values, _factor(header, unit, wanted))


def slope(header: Header, values: FloatArray, unit: Unit, wanted: Unit) -> FloatArray:
    """Return |dq/dv|, by which an uncertainty of a number of the column is multiplied.

    Parameters
    ----------
    header, values, unit, wanted
        As for :func:`converted`.

    Raises
    ------
    InputError
        If the units are of different kinds.
    """
    quantity = converted(header, values, unit, wanted)
    with np.errstate(divide="ignore", invalid="ignore"):
        if header.function == "reciprocal":
            return np.asarray(np.abs(quantity / values))
        if header.function == "ln":
            return quantity
        if header.function == "lg":
            return quantity * _LN10
        factor = float(_factor(header, unit, wanted))
        if header.function == "sqrt":
            return np.asarray(2.0 * np.abs(values) * factor)
        return np.full(values.shape, factor)


def step_words(header: Header, unit: Unit, wanted: Unit, symbol: str) -> str:
    """Return what was done to the numbers, ``"+273.15"``, ``"× 10^-3"``; empty for nothing.

    Parameters
    ----------
    header, unit, wanted
        As for :func:`converted`.
    symbol
        Sign of the quantity.

    Raises
    ------
    InputError
        If the units are of different kinds.
    """
    if header.function == "reciprocal":
        return f"{symbol} = {float(header.prefactor * unit.factor_to(wanted)):g} {wanted}/value"
    factor = _factor(header, unit, wanted)
    times = "" if factor == 1 else _times(factor)
    if header.function:
        inverse = {"ln": "e^value", "lg": "10^value", "sqrt": "value²"}[header.function]
        return f"{symbol} = {inverse}{' ' + times if times else ''}"
    if unit.offset != wanted.offset:
        return ", ".join(part for part in (times, f"+{float(unit.offset):g}") if part)
    return times


def _times(factor: Fraction) -> str:
    for number, sign in ((factor, "×"), (1 / factor, "÷")):
        if number.denominator == 1:
            digits = str(number.numerator)
            if digits.strip("0") == "1" and len(digits) > 3:
                power = len(digits) - 1
                return f"× 10^{power if sign == '×' else -power}"
            return f"{sign} {digits}" if len(digits) <= 6 else f"{sign} {float(number):.6g}"
    return f"× {float(factor):.6g}"
