"""From numbers as they stand in the file to a :class:`RateTable`, with the account of each step."""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING

import numpy as np

from knought.chemistry.quantities import QUANTITIES, rate_constant_unit
from knought.chemistry.units import parse_unit, reaction_order
from knought.errors import InputError, Problem
from knought.measurement.reading.agreement import preferred
from knought.measurement.reading.conversion import converted, step_words
from knought.measurement.reading.draft import Draft
from knought.measurement.reading.spread import Measured, standard_uncertainty
from knought.measurement.reading.temperature import temperature_unit
from knought.measurement.table import RateTable, Source

if TYPE_CHECKING:
    from collections.abc import Mapping
    from fractions import Fraction

    from knought.arrays import FloatArray
    from knought.chemistry.uncertainty_words import Meaning
    from knought.chemistry.units import Unit
    from knought.measurement.reading.columns import Parts
    from knought.measurement.reading.grid import TextGrid
    from knought.measurement.reading.layout import Column, Layout
    from knought.measurement.reading.number_column import NumberColumn
    from knought.measurement.reading.values import Values

__all__ = ["built"]

_KELVIN, _MOLAR = parse_unit("K"), parse_unit("mol L^-1")

#: Without a unit, ionic strengths up to this can only be mol/L: in mmol/L the whole study would lie
#: below 1 mmol/L, where no salt effect is measured.
_LARGEST_MOLAR = 1.0

#: Role -> name of the quantity in the registry.
_NAMES = {
    "T": "temperature",
    "I": "ionic_strength",
    "k": "measured_rate_constant",
    "c": "concentration",
}

#: Role -> what is wrong with a value that cannot be, what to do about it.
_RULES = {
    "T": ("is at or below 0 K", "check the temperature and its unit"),
    "k": (
        "gives a rate constant that is not above zero",
        "a rate constant is positive; leave the run out (use: no, with a reason) if it failed",
    ),
    "I": ("gives an ionic strength below zero", "check the sign"),
    "c": ("gives a concentration below zero", "check the sign"),
}


def built(
    grid: TextGrid,
    layout: Layout,
    parts: Parts,
    values: Values,
    source: Source,
    meaning: Meaning | None = None,
) -> RateTable:
    """Build the table.

    Parameters
    ----------
    grid, layout, parts, values
        What the earlier stages made.
    source
        Where it comes from.
    meaning
        What the user says that ± of k means; None where they say nothing.

    Returns
    -------
    RateTable

    Raises
    ------
    InputError
        If a value cannot be, or a column is filled in part only; every problem is told.
    """
    used = np.array(values.used, dtype=bool)
    sound = used & ~np.array(values.broken, dtype=bool)
    draft = Draft(grid, values, used, sound, np.ones(len(used), dtype=bool))
    for remark in (*grid.remarks, *layout.remarks):
        draft.note(remark)
    T = _required(draft, parts, "T")
    I = _optional(draft, parts, "I")
    n = _determinations(draft, parts)
    k = _required(draft, parts, "k")
    measured = {"T": T, "k": k} | ({} if I is None else {"I": I})
    u = {role: _spread(draft, parts, found, n, meaning) for role, found in measured.items()}
    amounts = {
        found.header.species: found
        for found in (_measured(draft, [column], "c") for column in parts.concentrations)
    }
    order, rate, u_rate = _own_order(draft, parts, k, u["k"], amounts)
    words = _words(draft)
    for column in parts.left_out:
        draft.note("left out: no quantity of a rate table", column.address)
    problems = [*values.problems, *draft.problems]
    if problems:
        raise InputError(sorted(problems, key=lambda problem: problem.row or 0))
    draft.account += values.remarks
    _account_of_runs(draft, words)
    kept = draft.kept

    def some(numbers: FloatArray | None) -> FloatArray | None:
        return None if numbers is None else numbers[kept]

    labels = {role: tuple(np.array(texts, dtype=object)[kept]) for role, texts in words.items()}
    return RateTable(
        k=rate[kept],
        T=T.values[kept],
        order=order,
        I=None if I is None else I.values[kept],
        u_k=some(u_rate),
        u_T=some(u["T"]),
        u_I=some(u.get("I")),
        determinations=some(n),
        run=labels.get("run", ()),
        salt=labels.get("salt"),
        batch=labels.get("batch"),
        used=used[kept],
        reason=labels.get("reason", ()),
        note=labels.get("note", ()),
        concentrations={species: found.values[kept] for species, found in amounts.items()},
        source=replace(
            source,
            headers={role: found.column.column.address for role, found in measured.items()},
        ),
        rows=values.rows[kept],
        account=tuple(draft.account),
    )


def _required(draft: Draft, parts: Parts, role: str) -> Measured:
    found = _measured(draft, list(parts.values[role]), role)
    words = QUANTITIES[_NAMES[role]].words
    draft.refuse(
        np.isnan(found.column.values),
        found.column,
        f"the {words} is blank",
        "fill it in, or leave the run out (use: no, with a reason)",
    )
    return found


def _optional(draft: Draft, parts: Parts, role: str) -> Measured | None:
    """Return a quantity that may be missing throughout, but not here and there."""
    columns = [
        column
        for column in parts.values.get(role, ())
        if np.any(~np.isnan(draft.values.numbers[column.place].values))
    ]
    if not columns:
        for column in parts.values.get(role, ()):
            draft.note("is blank throughout and is not read", column.address)
        return None
    found = _measured(draft, columns, role)
    draft.refuse(
        np.isnan(found.column.values),
        found.column,
        f"the {QUANTITIES[_NAMES[role]].words} is blank here and given in other rows",
        "fill it in, or leave the run out (use: no, with a reason)",
    )
    return found


def _measured(draft: Draft, columns: list[Column], role: str) -> Measured:
    """Read a quantity from the finest of its columns, and hold it against the others."""
    read = [_one(draft, draft.values.numbers[column.place], role) for column in columns]
    found = preferred(read, draft)
    what, remedy = _RULES[role]
    with np.errstate(invalid="ignore"):
        impossible = (found.values <= 0) if role in {"T", "k"} else (found.values < 0)
    unknown = np.isnan(found.column.values)
    if role == "c":
        if found.column.inner is not None:
            draft.note("has uncertainties in its cells, not used", found.column.column.address)
        draft.refuse(
            unknown, found.column, "the concentration is blank", "write 0 where there is none"
        )
    draft.refuse(~unknown & impossible, found.column, what, remedy)
    draft.refuse(
        ~unknown & ~np.isfinite(found.values),
        found.column,
        "gives no finite number",
        "check the number and the header",
    )
    _account(draft, found, role)
    return found


def _one(draft: Draft, column: NumberColumn, role: str) -> Measured:
    header = column.column.header
    if header is None:
        raise TypeError("a column of values has a header")
    unit = header.unit
    if unit is None:
        unit = temperature_unit(column, draft) if role == "T" else _molar(column, draft)
    wanted = _wanted(role, unit)
    return Measured(column, header, unit, wanted, converted(header, column.values, unit, wanted))


def _wanted(role: str, unit: Unit) -> Unit:
    if role == "k":
        return parse_unit(rate_constant_unit(reaction_order(unit)))
    return _KELVIN if role == "T" else _MOLAR


def _molar(column: NumberColumn, draft: Draft) -> Unit:
    header = column.column.header
    values = column.values[~np.isnan(column.values)]
    if header is not None and header.function == "sqrt":
        values = values**2
    highest = float(values.max()) if values.size else 0.0
    if highest <= _LARGEST_MOLAR:
        draft.note(f"has no unit; up to {highest:.4g} can only be mol/L", column.column.address)
        return _MOLAR
    draft.problem(
        f"the ionic strength has no unit; up to {highest:.4g} can be read as mol/L or as mmol/L",
        "head the column I/(mol/L) or I/(mmol/L)",
        column,
    )
    return _MOLAR


def _account(draft: Draft, found: Measured, role: str) -> None:
    quantity = QUANTITIES[_NAMES[role]]
    words = quantity.words
    if role == "c":
        words = f"{words} of {found.header.species}"
    if role == "k":
        words = f"{words} of order {reaction_order(found.unit)}"
    step = step_words(found.header, found.unit, found.wanted, quantity.symbol.text)
    known = np.flatnonzero(~np.isnan(found.column.values))
    after = f"{found.values[known[0]]:.10g} {found.wanted}" if known.size else ""
    draft.note(
        f"read as {words}" + (f", {step}" if step else ""),
        found.column.column.address,
        found.column.first,
        after,
    )


def _determinations(draft: Draft, parts: Parts) -> FloatArray | None:
    columns = parts.values.get("n", ())
    if not columns:
        return None
    column = draft.values.numbers[columns[0].place]
    if not np.any(~np.isnan(column.values)):
        draft.note("is blank throughout and is not read", column.column.address)
        return None
    whole = (column.values >= 1) & (column.values == np.floor(column.values))
    draft.refuse(
        ~whole,
        column,
        "is no number of determinations",
        "give how many determinations were averaged, a whole number from 1, in every row",
    )
    draft.note("read as number of determinations averaged", column.column.address, column.first,
               f"{column.values[~np.isnan(column.values)][0]:g}")  # fmt: skip
    return column.values


def _spread(
    draft: Draft,
    parts: Parts,
    found: Measured,
    n: FloatArray | None,
    meaning: Meaning | None,
) -> FloatArray | None:
    role = found.header.role
    column = parts.uncertainties.get(role)
    numbers = None if column is None else draft.values.numbers[column.place]
    said = meaning if role == "k" else None
    return standard_uncertainty(found, numbers, n if role == "k" else None, said, draft)


def _own_order(
    draft: Draft,
    parts: Parts,
    k: Measured,
    u_k: FloatArray | None,
    amounts: Mapping[str, Measured],
) -> tuple[Fraction, FloatArray, FloatArray | None]:
    """Divide k_obs by the concentration in excess, where there is one."""
    order = reaction_order(k.unit)
    if parts.excess is None or parts.excess.header is None:
        return order, k.values, u_k
    species = parts.excess.header.species
    c = amounts[species].values
    draft.refuse(
        ~(c > 0),
        amounts[species].column,
        "the concentration in excess is blank or not above zero",
        "give it in every row",
    )
    with np.errstate(divide="ignore", invalid="ignore"):
        rate = k.values / c
        u_rate = None if u_k is None else u_k / c
    draft.note(
        f"divided by c({species}), which is in excess: order {order + 1}",
        k.column.column.address,
        f"{k.values[0]:.10g} {k.wanted} / {c[0]:.10g} mol L^-1",
        f"{rate[0]:.10g} {rate_constant_unit(order + 1)}",
    )
    return order + 1, rate, u_rate


def _words(draft: Draft) -> dict[str, list[str]]:
    """Check the columns of words."""
    words = {role: list(texts) for role, texts in draft.values.words.items() if role != "use"}
    run = words.get("run")
    if run is not None:
        words["run"] = [
            label or f"row {row}" for label, row in zip(run, draft.values.rows, strict=True)
        ]
    reasons = words.get("reason", [""] * len(draft.used))
    for place in np.flatnonzero(~draft.used):
        if not reasons[place].strip():
            draft.problems.append(
                Problem(
                    "the run is left out without a reason",
                    "say why in the column reason",
                    file=draft.grid.name,
                    sheet=draft.grid.sheet,
                    row=int(draft.values.rows[place]),
                    column="reason",
                )
            )
    for role in ("salt", "batch"):
        if role in words and not any(words[role]):
            del words[role]
    return words


def _account_of_runs(draft: Draft, words: Mapping[str, list[str]]) -> None:
    count = int(draft.used.sum())
    draft.note(f"{count} of {len(draft.used)} runs used")
    for place in np.flatnonzero(~draft.used):
        row, reason = int(draft.values.rows[place]), words["reason"][place]
        lost = "" if draft.kept[place] else ", and not kept, for a number is missing"
        draft.note(f"row {row} is not used{lost}: {reason}")
