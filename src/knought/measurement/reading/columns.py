"""Which column plays which part: every part once, and nothing left to chance.

Two columns of one quantity are welcome when they agree (t/°C beside T/K, ln k beside k); the finer
one is read, the other is checked against it row by row.
"""

from __future__ import annotations

import re
from dataclasses import dataclass, field, replace
from typing import TYPE_CHECKING

from knought.chemistry.header_text import plain_header, split_header
from knought.chemistry.headers import TEXT_ROLES
from knought.chemistry.units import parse_unit
from knought.errors import InputError, Problem
from knought.measurement.reading.excess import excess_column
from knought.measurement.reading.grid import column_letter

if TYPE_CHECKING:
    from collections.abc import Callable, Iterable, Mapping

    from knought.chemistry.headers import Header
    from knought.chemistry.units import Unit
    from knought.measurement.reading.grid import TextGrid
    from knought.measurement.reading.layout import Column, Layout

__all__ = ["Parts", "assigned"]


@dataclass(frozen=True)
class Parts:
    """The columns by the part that they play.

    Attributes
    ----------
    values
        Columns of values by role (``"T"``, ``"k"``, ``"I"``, ``"n"``), at least one each.
    uncertainties
        Column of uncertainties by role.
    words
        Column of words by role.
    concentrations
        Columns of concentrations.
    excess
        The concentration by which an observed rate constant is divided.
    left_out
        Columns whose header is none of ours.
    """

    values: Mapping[str, tuple[Column, ...]]
    uncertainties: Mapping[str, Column]
    words: Mapping[str, Column]
    concentrations: tuple[Column, ...] = ()
    excess: Column | None = None
    left_out: tuple[Column, ...] = field(default=())

    @property
    def numeric(self) -> tuple[Column, ...]:
        """Every column whose cells are numbers."""
        several = [column for columns in self.values.values() for column in columns]
        return (*several, *self.uncertainties.values(), *self.concentrations)


def assigned(layout: Layout, grid: TextGrid, excess: str | None = None) -> Parts:
    """Give every column its part.

    Parameters
    ----------
    layout
        The headers.
    grid
        For the addresses in messages.
    excess
        Species by whose concentration an observed rate constant is divided.

    Raises
    ------
    InputError
        If a part is missing or filled twice, or a header could not be read; every problem is told.
    """
    columns = _with_neighbours(layout.columns)
    values = _sorted(columns, lambda h: h.role in _VALUES and not h.is_uncertainty)
    uncertainties = _sorted(columns, lambda h: h.role in _VALUES and h.is_uncertainty)
    words = _sorted(columns, lambda h: h.role in TEXT_ROLES)
    concentrations = _sorted(columns, lambda h: h.role == "c" and not h.is_uncertainty).get("c", [])
    taken = {id(c) for group in (values, uncertainties, words) for cs in group.values() for c in cs}
    taken |= {id(column) for column in concentrations}
    left_out = [column for column in columns if id(column) not in taken]
    rates = values.get("k", [])
    problems = [
        *layout.problems,
        *_missing(values, layout),
        *_twice([*uncertainties.values(), *words.values(), values.get("n", [])]),
        *_twice(_by_species(concentrations)),
        *_without_unit(rates, concentrations),
        *_of_what(values, uncertainties, left_out),
        *_unlike(rates),
        *_nearly(left_out, rates),
    ]
    divisor, more = excess_column(rates, concentrations, excess)
    problems += more
    if problems:
        raise InputError(_addressed(each, grid, layout) for each in problems)
    return Parts(
        {role: tuple(found) for role, found in values.items()},
        {role: found[0] for role, found in uncertainties.items()},
        {role: found[0] for role, found in words.items()},
        tuple(concentrations),
        divisor,
        tuple(left_out),
    )


#: How headers of uncertainties begin.
_UNCERTAIN = re.compile(
    r"(?:[us]|SD|SE|SEM|RSD|CI|U|σ|Δ|δ|±|2 ?[sσ])(?:_[a-z]+)? ?[(_]"
    r"|95 ?%|(?i:err|unc|std|stan(?:dard)? |dev|conf|[σΔδ±])",
)

_VALUES = frozenset({"T", "k", "I", "n"})


def _sorted(columns: list[Column], wanted: Callable[[Header], bool]) -> dict[str, list[Column]]:
    """Return the columns whose header is wanted, by role."""
    found: dict[str, list[Column]] = {}
    for column in columns:
        if column.header is not None and wanted(column.header):
            found.setdefault(column.header.role, []).append(column)
    return found


def _by_species(concentrations: list[Column]) -> list[list[Column]]:
    species: dict[str, list[Column]] = {}
    for column in concentrations:
        if column.header is not None:
            species.setdefault(column.header.species, []).append(column)
    return list(species.values())


def _addressed(problem: Problem, grid: TextGrid, layout: Layout) -> Problem:
    row = problem.row or layout.last_header_row
    return replace(problem, file=grid.name, sheet=grid.sheet, row=row)


def _with_neighbours(columns: tuple[Column, ...]) -> list[Column]:
    """Give a column headed only "±", "SD" or "u/s^-1" to the quantity at its left."""
    made: list[Column] = []
    for column in columns:
        header = column.header
        left = made[-1].header if made and made[-1].place == column.place - 1 else None
        if (
            header is not None
            and header.role == "neighbour"
            and left is not None
            and left.role in {"T", "k", "I"}
            and not left.is_uncertainty
        ):
            made.append(replace(column, header=_of_neighbour(header, left)))
        else:
            made.append(column)
    return made


def _of_neighbour(header: Header, left: Header) -> Header:
    """Return the header of an uncertainty that stands right of its quantity."""
    if header.unit is None:
        # "±" alone is in the numbers of its neighbour, power of ten and logarithm included.
        relative = header.uncertainty is not None and header.uncertainty.relative
        unit = None if relative or left.function else left.unit
        return replace(left, text=header.text, uncertainty=header.uncertainty, unit=unit)
    return replace(header, role=left.role)


def _missing(values: Mapping[str, list[Column]], layout: Layout) -> list[Problem]:
    # A header that could not be read may be the missing one.
    if layout.problems:
        return []
    titles = " | ".join(column.title for column in layout.columns)
    wanted = {
        "T": ("temperature", "T/K or t/°C"),
        "k": ("rate constant", "k/s^-1 or k/(L mol^-1 s^-1), with the unit that it has"),
    }
    return [
        Problem(f"no column holds the {words}", f"head it {example}", read=titles)
        for role, (words, example) in wanted.items()
        if role not in values
    ]


def _twice(groups: Iterable[list[Column]]) -> list[Problem]:
    return [
        Problem(
            "more than one column is headed so: "
            + " and ".join(f"{column.title} ({column_letter(column.place)})" for column in columns),
            "keep one, or head the other differently",
            column=columns[1].address,
        )
        for columns in groups
        if len(columns) > 1
    ]


def _without_unit(rates: list[Column], concentrations: list[Column]) -> list[Problem]:
    problems = []
    for column in rates:
        header = column.header
        if header is not None and header.unit is None:
            form = {"ln": "ln(k/{})", "lg": "lg(k/{})"}.get(header.function, "k/{}")
            problems.append(
                Problem(
                    "the rate constant has no unit: in s^-1, min^-1 or L mol^-1 s^-1 the same "
                    "numbers mean different things",
                    f"head the column {form.format('s^-1')} or {form.format('(L mol^-1 s^-1)')}, "
                    "with the unit that it has",
                    column=column.address,
                )
            )
    problems += [
        Problem(
            "the concentration has no unit",
            f"head the column c({column.header.species})/(mol/L)",
            column=column.address,
        )
        for column in concentrations
        if column.header is not None and column.header.unit is None
    ]
    return problems


def _of_what(
    values: Mapping[str, list[Column]],
    uncertainties: Mapping[str, list[Column]],
    left_out: list[Column],
) -> list[Problem]:
    """Uncertainties whose quantity, or whose unit, is not plain."""
    problems = [
        Problem(
            "it is not plain of which quantity this is the uncertainty",
            "head it u(k)/s^-1, u_r(k)/%, u(T)/K or u(I)/(mol/L), or put it right of its quantity",
            column=column.address,
        )
        for column in left_out
        if column.header is not None and column.header.role == "neighbour"
    ]
    for role, columns in uncertainties.items():
        for column in columns:
            header = column.header
            if role not in values:
                problems.append(
                    Problem(
                        "an uncertainty is given of a quantity that has no column",
                        "add that column, or take this one away",
                        column=column.address,
                    )
                )
            elif header is not None and header.unit is None and not _needs_no_unit(header):
                problems.append(
                    Problem(
                        "the uncertainty has no unit and can be read as absolute or as relative",
                        f"head it u({role})/(its unit) or u_r({role})/%",
                        column=column.address,
                    )
                )
    return problems


def _needs_no_unit(header: Header) -> bool:
    return header.function in {"ln", "lg"} or bool(
        header.uncertainty is not None and header.uncertainty.relative
    )


def _unlike(rates: list[Column]) -> list[Problem]:
    """Columns of rate constants of different order or kind."""
    kinds: dict[object, Column] = {}
    for column in rates:
        header = column.header
        if header is not None and header.unit is not None:
            kinds.setdefault((header.unit.dimension, header.observed), column)
    if len(kinds) < 2:
        return []
    names = " and ".join(column.address for column in kinds.values())
    return [
        Problem(
            f"two columns hold different rate constants: {names}",
            "keep the one to be fitted in the table",
            column=list(kinds.values())[1].address,
        )
    ]


def _nearly(left_out: list[Column], rates: list[Column]) -> list[Problem]:
    """Columns in the unit of k that are not understood: an uncertainty must not get lost."""
    units = {
        column.header.unit.dimension
        for column in rates
        if column.header is not None and column.header.unit is not None
    }
    problems = []
    for column in left_out:
        if column.header is not None:
            continue
        unit = _unit_of(column.title)
        if _UNCERTAIN.match(column.title):
            problems.append(
                Problem(
                    "looks like an uncertainty and is not understood",
                    "head it u(k)/(unit), u_r(k)/%, u(T)/K or u(I)/(mol/L), or take it out",
                    column=column.address,
                )
            )
        elif unit is not None and unit.dimension in units:
            problems.append(
                Problem(
                    "has the unit of the rate constant and is not understood; it can be its "
                    "uncertainty or another rate constant",
                    "head it u(k)/(unit) if it is the standard uncertainty, or take it out",
                    column=column.address,
                )
            )
    return problems


def _unit_of(title: str) -> Unit | None:
    text = split_header(plain_header(title)).unit
    if text is None:
        return None
    try:
        return parse_unit(text)
    except InputError:
        return None
