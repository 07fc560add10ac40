"""From what a column of uncertainties holds to standard uncertainties, by what it is said to mean.

A standard deviation s of single determinations gives s/√n for a mean of n (GUM 4.2.3); a 95 %
half-width is divided by Student's t with n - 1 degrees of freedom where n is given, else by 1.960
(GUM G.3, table G.2); 2 s and 2 u by 2 first. Blank is unknown, and zero is never exact.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from knought.chemistry.uncertainty_words import Meaning
from knought.chemistry.units import parse_unit, scaled
from knought.measurement.reading.conversion import slope
from knought.numerics.quantiles import student_quantile

if TYPE_CHECKING:
    from knought.arrays import FloatArray
    from knought.chemistry.headers import Header
    from knought.chemistry.units import Unit
    from knought.measurement.reading.draft import Draft
    from knought.measurement.reading.number_column import NumberColumn

__all__ = ["Measured", "standard_uncertainty"]

_ONE, _PERCENT = parse_unit("1"), parse_unit("%")
_LN10 = float(np.log(10.0))
_COVERAGE = 0.975

_SAY_WHICH = (
    'say what it is: uncertainty_means = "standard uncertainty", "standard deviation", "2 s" or '
    '"95 %" in the study file, or head the column u({0}), s({0}), 2s({0}) or U95({0})'
)


@dataclass(frozen=True, eq=False)
class Measured:
    """A quantity read from a column.

    Attributes
    ----------
    column
        Where it stands.
    header
        Its header.
    unit
        Unit of the numbers of the column.
    wanted
        Unit of `values`.
    values : (n,) ndarray
        The quantity.
    """

    column: NumberColumn
    header: Header
    unit: Unit
    wanted: Unit
    values: FloatArray


def standard_uncertainty(
    measured: Measured,
    column: NumberColumn | None,
    determinations: FloatArray | None,
    meaning: Meaning | None,
    draft: Draft,
) -> FloatArray | None:
    """Return the standard uncertainty of a quantity, in its own unit.

    Parameters
    ----------
    measured
        The quantity.
    column
        The column that holds its uncertainty; None where there is none of its own.
    determinations : (n,) ndarray or None
        Numbers of determinations averaged.
    meaning
        What the user says that ± means; None where they say nothing.
    draft
        Takes the account, and what is wrong.

    Returns
    -------
    (n,) ndarray or None
        None where no uncertainty is given, or it is of no use.
    """
    inner = measured.column.inner
    if column is None and inner is None:
        return None
    if column is None:
        return _from_the_same_cell(measured, determinations, meaning, draft)
    if inner is not None:
        draft.problem(
            f"the uncertainty stands in the cells of {measured.column.column.address} and in a "
            "column of its own",
            "keep one of them",
            column,
        )
        return None
    if not np.any(~np.isnan(column.values)):
        draft.note("is blank throughout: the uncertainty is unknown", column.column.address)
        return None
    draft.refuse(
        np.isnan(column.values),
        column,
        "the uncertainty is blank here and given in other rows",
        "give it in every row, or leave the whole column blank if it is unknown",
    )
    return _from_column(measured, column, determinations, meaning, draft)


def _from_column(
    measured: Measured,
    column: NumberColumn,
    determinations: FloatArray | None,
    said: Meaning | None,
    draft: Draft,
) -> FloatArray | None:
    header = column.column.header
    if header is None or header.uncertainty is None:
        return None
    meaning = _agreed(header.uncertainty, said, column, draft)
    if meaning is None:
        return None
    numbers = scaled(column.values, 1 / header.prefactor)
    if meaning.relative and header.function == "":
        unit = header.unit if header.unit is not None and header.unit.is_like(_ONE) else None
        if unit is None:
            unit = _PERCENT if meaning.percent else _ONE
        absolute = np.abs(measured.values) * scaled(numbers, unit.factor_to(_ONE))
    elif header.function in {"ln", "lg"} and header.unit is None:
        absolute = measured.values * numbers * (_LN10 if header.function == "lg" else 1.0)
    else:
        unit = (header.unit or measured.unit).difference()
        if not unit.is_like(measured.wanted):
            draft.problem(
                f"is in {unit}, and {measured.column.column.address} is not",
                "give the uncertainty in the unit of its quantity, or relative",
                column,
            )
            return None
        absolute = scaled(numbers, unit.factor_to(measured.wanted.difference()))
    return _finished(absolute, meaning, measured, column, determinations, draft)


def _from_the_same_cell(
    measured: Measured, determinations: FloatArray | None, said: Meaning | None, draft: Draft
) -> FloatArray | None:
    column = measured.column
    inner = column.inner
    if inner is None:
        return None
    draft.refuse(
        np.isnan(inner),
        column,
        "has no uncertainty in its cell, and other rows have one",
        "give it in every row or in none",
    )
    declared = measured.header.beside
    if said is not None and declared is not None and said.kind != declared.kind:
        draft.problem(
            f"is headed as {declared.words}, and uncertainty_means says {said.words}",
            "mend one of the two",
            column,
        )
        return None
    meaning = said or declared or Meaning("standard", relative=False)
    if said is None and declared is None and column.sign == "±":
        draft.note(
            "does not say what ± means: taken as one standard uncertainty (say uncertainty_means "
            "if it is something else)",
            column.column.address,
        )
    if meaning.relative and column.sign == "()":
        draft.problem(
            "has its uncertainty in brackets, in units of the last digit, and it is said to be "
            "relative",
            "mend one of the two",
            column,
        )
        return None
    if meaning.relative and column.sign == "±":
        scale = 0.01 if meaning.percent else 1.0
        inner = np.abs(column.values) * inner * scale
    absolute = inner * slope(measured.header, column.values, measured.unit, measured.wanted)
    return _finished(absolute, meaning, measured, column, determinations, draft)


def _agreed(
    header: Meaning, said: Meaning | None, column: NumberColumn, draft: Draft
) -> Meaning | None:
    """Hold what the header says against what the user says; the user's word settles u(k)."""
    if said is not None and header.kind in {"", "expanded", "standard"}:
        if said.relative and header.relative is False and column.column.header is not None:
            unit = column.column.header.unit
            if unit is not None and not unit.is_like(_ONE):
                draft.problem(
                    f"is in {unit} and is said to be relative", "mend one of the two", column
                )
                return None
        return Meaning(said.kind, bool(said.relative or header.relative), said.percent)
    if said is not None and said.kind != header.kind:
        draft.problem(
            f"is headed as {header.words}, and uncertainty_means says {said.words}",
            "mend one of the two",
            column,
        )
        return None
    if header.kind in {"", "expanded"}:
        what = (
            "an expanded uncertainty needs its coverage factor"
            if header.kind == "expanded"
            else "the uncertainty may be a standard uncertainty, twice that, or a 95 % half-width"
        )
        role = "k" if column.column.header is None else column.column.header.role
        draft.problem(what, _SAY_WHICH.format(role), column)
        return None
    return header


def _finished(
    absolute: FloatArray,
    meaning: Meaning,
    measured: Measured,
    column: NumberColumn,
    determinations: FloatArray | None,
    draft: Draft,
) -> FloatArray:
    """Divide by what the meaning asks for, check, and write the account."""
    divisor, words = _divisor(meaning, determinations, column, draft)
    standard = np.asarray(absolute / divisor)
    known = ~np.isnan(standard)
    draft.refuse(
        known & ~(standard > 0),
        column,
        "the uncertainty is not above zero",
        "no measurement is exact; leave the whole column blank if the uncertainty is unknown",
    )
    draft.refuse(
        known & np.isinf(standard), column, "the uncertainty is too large", "check the number"
    )
    first = int(np.argmax(known))
    before = column.first if column is not measured.column else f"{column.inner[first]:.10g}"  # type: ignore[index]
    sign = f"u({measured.header.role})"
    draft.note(
        f"read as {meaning.words} of {measured.header.role}{words}",
        column.column.address,
        before,
        f"{sign} = {standard[first]:.6g} {measured.wanted.difference()}",
    )
    return standard


def _divisor(
    meaning: Meaning, determinations: FloatArray | None, column: NumberColumn, draft: Draft
) -> tuple[FloatArray | float, str]:
    several = determinations is not None
    if meaning.kind in {"deviation", "double deviation"}:
        twice = 2.0 if meaning.kind == "double deviation" else 1.0
        by = ", ÷ 2" if twice == 2.0 else ""
        if determinations is None:
            return twice, by
        return twice * np.sqrt(determinations), f"{by}, ÷ √n"
    if meaning.kind == "double":
        return 2.0, ", ÷ 2"
    if meaning.kind == "95 %":
        if not several or determinations is None:
            return student_quantile(_COVERAGE, np.inf), ", ÷ 1.960"
        return _students(determinations, column, draft), ", ÷ Student's t for n − 1"
    return 1.0, ""


def _students(determinations: FloatArray, column: NumberColumn, draft: Draft) -> FloatArray:
    draft.refuse(
        determinations < 2,
        column,
        "a 95 % half-width of a mean needs at least two determinations, and n is below 2 here",
        "check n, or leave the column n out if the half-width does not come from replicates",
    )
    levels, places = np.unique(np.maximum(determinations, 2.0), return_inverse=True)
    quantiles = np.array([student_quantile(_COVERAGE, level - 1.0) for level in levels])
    return np.asarray(quantiles[places])
