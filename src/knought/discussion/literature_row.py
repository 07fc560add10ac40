"""From one row of a literature table to its values: units undone, ± given its meaning."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import TYPE_CHECKING, Literal

from knought.chemistry.constants import LN10
from knought.chemistry.quantities import quantity, rate_constant_unit
from knought.chemistry.units import Unit, parse_unit
from knought.discussion.literature import COMPARED, LiteratureValue
from knought.discussion.literature_spread import NO_SPREAD, Spread, SpreadMeaning
from knought.errors import InputError, Problem

if TYPE_CHECKING:
    from collections.abc import Mapping
    from fractions import Fraction

    from knought.chemistry.numbers import Number
    from knought.discussion.literature_headers import Heading

__all__ = ["Row", "values_of_row"]

_ONE = parse_unit("1")

#: ln x = f x (the logarithm), by which.
_LOGARITHMIC = {"ln": 1.0, "lg": LN10}
_SAY_WHICH = (
    "say it in a column ± means (1 s, 2 s, 95 %, half-range, F-factor or none), or head the column "
    "u(...), 2s(...), U95(...) or half-range(...)"
)


@dataclass(frozen=True)
class Row:
    """One row as it stands in the file.

    Attributes
    ----------
    place
        Where it stands.
    label
        How the paper is called.
    words
        Columns of words by name.
    numbers
        Columns of numbers by kind and name, blank ones left out.
    means
        What ± means, where header signs do not say it.
    order
        Overall order, where the row says it.
    year
        Year of publication.
    """

    place: str
    label: str
    words: Mapping[str, str]
    numbers: Mapping[tuple[str, str], tuple[Heading, Number]]
    means: SpreadMeaning | None
    order: Fraction | None
    year: int | None


def values_of_row(row: Row) -> list[LiteratureValue]:
    """Return the literature values of one row.

    Raises
    ------
    InputError
        If the row holds no value, a ± without a meaning, or a number that cannot be.
    """
    problems: list[Problem] = []
    values = []
    conditions = {name: _condition(row, name) for name in ("T", "I", "c0")}
    for name in COMPARED:
        if ("value", name) not in row.numbers:
            continue
        try:
            values.append(_value(row, name, conditions))
        except InputError as error:
            problems += error.problems
    if problems:
        raise InputError(problems)
    if not values:
        raise InputError("the row holds no value", "give k, E_a, ln A, ΔH‡ or ΔS‡")
    return values


def _condition(row: Row, name: str) -> float | None:
    found = row.numbers.get(("condition", name))
    if found is None:
        return None
    heading, number = found
    wanted = {"T": "K", "I": "mol L^-1", "c0": "mol L^-1"}[name]
    return _undone(heading, number.value, parse_unit(wanted))


def _undone(heading: Heading, v: float, wanted: Unit) -> float:
    """Return the quantity of which `v` = function(prefactor x quantity/unit), in `wanted`.

    Raises
    ------
    InputError
        If a number has no such quantity, or the units are of different kinds.
    """
    unit = heading.unit or _ONE
    if heading.function == "reciprocal":
        if v == 0:
            raise InputError(Problem("is zero", "give 1/T above zero", column=heading.text))
        return float(heading.prefactor * unit.factor_to(wanted)) / v
    plain = v**2 if heading.function == "sqrt" else v
    if heading.function in _LOGARITHMIC:
        try:
            plain = math.exp(v * _LOGARITHMIC[heading.function])
        except OverflowError as error:
            raise InputError(
                Problem("is too large", "check the function in the header", column=heading.text)
            ) from error
    return float(unit.convert(plain / float(heading.prefactor), wanted))


def _value(row: Row, name: str, conditions: Mapping[str, float | None]) -> LiteratureValue:
    heading, number = row.numbers["value", name]
    order = _order(row)
    value, step = _converted(name, heading, number.value, order)
    return LiteratureValue(
        label=row.label,
        name=name,
        value=value,
        spread=_spread(row, name, heading, number, value, step),
        T=conditions["T"],
        I=conditions["I"],
        order=order,
        year=row.year,
        medium=row.words.get("medium", ""),
        standard_concentration=conditions["c0"] or 1.0,
        note=row.words.get("note", ""),
        place=row.place,
    )


def _order(row: Row) -> Fraction | None:
    """Return the overall order that the row says, or the unit of its k or A.

    Raises
    ------
    InputError
        If two columns say different orders.
    """
    order = row.order
    for heading, _ in row.numbers.values():
        if heading.order is None:
            continue
        if order is not None and heading.order != order:
            raise InputError(
                Problem(
                    f"the unit says order {heading.order} and another column says {order}",
                    "correct one of them",
                    column=heading.text,
                )
            )
        order = heading.order
    return order


def _converted(
    name: str, heading: Heading, v: float, order: Fraction | None
) -> tuple[float, float]:
    """Return the value in the unit of the registry, and |d value/d v| at it."""
    if name == "ln_pre_exponential_factor":
        return _ln_of_a(heading, v, order)
    if name == "charge_product":
        return v / float(heading.prefactor), 1 / float(heading.prefactor)
    if name == "rate_constant":
        wanted = parse_unit(rate_constant_unit(order if order is not None else 1))
        value = _undone(heading, v, wanted)
        if heading.function in {"ln", "lg"}:
            return value, value * (LN10 if heading.function == "lg" else 1.0)
    else:
        wanted = parse_unit(quantity(name).unit)
        value = _undone(heading, v, wanted)
    unit = heading.unit or _ONE
    return value, float(unit.factor_to(wanted) / heading.prefactor)


def _ln_of_a(heading: Heading, v: float, order: Fraction | None) -> tuple[float, float]:
    """Return ln A in the coherent unit, without going through A itself: it may overflow.

    Raises
    ------
    InputError
        If A is not above zero.
    """
    to_coherent = 0.0
    if heading.unit is not None and order is not None:
        wanted = parse_unit(rate_constant_unit(order))
        to_coherent = math.log(heading.unit.factor_to(wanted))
    to_coherent -= math.log(heading.prefactor)
    if heading.function == "ln":
        return v + to_coherent, 1.0
    if heading.function == "lg":
        return v * LN10 + to_coherent, LN10
    if not v > 0:
        raise InputError(Problem("A is not above zero", "give A or ln A", column=heading.text))
    return math.log(v) + to_coherent, 1.0 / v


def _spread(
    row: Row, name: str, heading: Heading, number: Number, value: float, step: float
) -> Spread:
    """Return the ± of one value, from its own column, its own cell, or the F-factor.

    Raises
    ------
    InputError
        If k has both an F-factor and a ±, or a ± stands in two places.
    """
    column = row.numbers.get(("uncertainty", name))
    factor = row.numbers.get(("factor", "F0"))
    if name == "rate_constant" and factor is not None:
        if column is not None or number.uncertainty is not None:
            raise InputError(
                Problem("k has both an F-factor and a ±", "keep one of them", column=heading.text)
            )
        return _factor(row, factor[1].value)
    if column is not None and number.uncertainty is not None:
        raise InputError(
            Problem("states its uncertainty twice", "keep one of them", column=heading.text)
        )
    if column is not None:
        return _from_column(row, name, *column, step)
    if number.uncertainty is None:
        return NO_SPREAD
    meaning = _meaning(row, None, heading)
    if meaning == "none":
        return NO_SPREAD
    size = number.uncertainty if number.relative else number.uncertainty * step
    return Spread(meaning, size, relative=number.relative)


def _from_column(row: Row, name: str, heading: Heading, number: Number, step: float) -> Spread:
    meaning = _meaning(row, heading.meaning, heading)
    if meaning == "none":
        return NO_SPREAD
    size = number.value / float(heading.prefactor)
    if heading.relative:
        unit = heading.unit if heading.unit is not None else _ONE
        fraction = size * float(unit.factor_to(_ONE))
        if number.percent and unit.text != "%":
            fraction /= 100.0
        return Spread(meaning, fraction, relative=True)
    if name == "ln_pre_exponential_factor":
        return Spread(meaning, size * _LOGARITHMIC.get(heading.function, step))
    if name == "rate_constant" and heading.function in _LOGARITHMIC:
        # u(ln k) is a fraction of k.
        return Spread(meaning, size * _LOGARITHMIC[heading.function], relative=True)
    if heading.unit is None:
        return Spread(meaning, number.value * step)
    if name == "rate_constant":
        order = _order(row)
        wanted = parse_unit(rate_constant_unit(1 if order is None else order))
        return Spread(meaning, size * float(heading.unit.factor_to(wanted)))
    if name == "charge_product":
        return Spread(meaning, size)
    wanted = parse_unit(quantity(name).unit)
    return Spread(meaning, size * float(heading.unit.factor_to(wanted)))


def _factor(row: Row, size: float) -> Spread:
    g = row.numbers.get(("factor", "g"))
    at = row.numbers.get(("factor", "T0"))
    coverage: Literal["1 s", "2 s", "95 %"] = "1 s"
    if row.means in {"2 s", "95 %"}:
        coverage = "2 s" if row.means == "2 s" else "95 %"
    return Spread(
        "F-factor",
        size,
        exponent=0.0 if g is None else _in_kelvin(*g),
        reference_temperature=298.0 if at is None else _in_kelvin(*at),
        factor_coverage=coverage,
    )


def _in_kelvin(heading: Heading, number: Number) -> float:
    return _undone(heading, number.value, parse_unit("K"))


def _meaning(row: Row, sign: SpreadMeaning | None, heading: Heading) -> SpreadMeaning:
    """Return what ± means: the header's sign first, then the row, then the file.

    Raises
    ------
    InputError
        If it is not said, or said in two ways.
    """
    if sign is not None and row.means not in {None, sign} and row.words.get("means"):
        raise InputError(
            Problem(
                f"the header says {sign} and the column ± means says {row.means}",
                "correct one of them",
                column=heading.text,
            )
        )
    meaning = sign or row.means
    if meaning is None:
        raise InputError(Problem("is a ± without a meaning", _SAY_WHICH, column=heading.text))
    if meaning == "F-factor":
        raise InputError(
            Problem("an F-factor needs a column F_0", "put F_0 there", column=heading.text)
        )
    return meaning
