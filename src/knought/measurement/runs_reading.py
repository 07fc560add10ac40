"""The table of runs beside traces: what each run was, before there is a k.

Columns are those of a rate table without k (``run``, ``T/K`` or ``t/°C``, ``I/(mol/L)``,
``c(KI)/(mmol/L)``, ``salt``, ``batch``, ``use``, ``reason``, ``note``), and its own: ``trace``
(file of the run's own trace, beside the table), for slopes read off already ``slope/s^-1`` with
``u(slope)/s^-1``, and what was pipetted, ``V(salt stock)/mL`` for each stock that [medium] names,
``V(water)/mL`` and ``V(total)/mL`` where a run was made up to a mark.
"""

from __future__ import annotations

import re
from dataclasses import dataclass, field
from typing import TYPE_CHECKING

import numpy as np

from knought.arrays import FloatArray, frozen
from knought.chemistry.headers import Header, parse_header
from knought.chemistry.units import Unit, parse_unit
from knought.errors import InputError, Problem
from knought.measurement.traces_reading import Cells, read_cells

if TYPE_CHECKING:
    from collections.abc import Mapping
    from pathlib import Path

__all__ = ["Runs", "read_runs"]

_OWN = re.compile(r"(?P<what>trace|file|slope|u\(slope\))\s*(?:/\s*(?P<unit>.+))?", re.IGNORECASE)
_VOLUME = re.compile(r"V\((?P<stock>.+)\)\s*/\s*(?P<unit>.+)")
_WORDS = ("run", "salt", "batch", "use", "reason", "note")
_UNITS = {"T": "K", "I": "mol L^-1", "c": "mol L^-1"}


@dataclass(frozen=True, eq=False)
class Runs:
    """Conditions of the runs.

    Attributes
    ----------
    run
        Labels.
    T : (n,) ndarray
        K.
    I : (n,) ndarray or None
        mol/L.
    concentrations
        mol/L by substance, each ``(n,)``.
    words
        ``salt``, ``batch``, ``use``, ``reason``, ``note`` and ``trace``, where they are there.
    slopes, u_slopes : (n,) ndarray or None
        s^-1.
    volumes
        L by stock, each ``(n,)``; ``water`` and ``total`` among them.
    """

    run: tuple[str, ...]
    T: FloatArray
    I: FloatArray | None
    concentrations: Mapping[str, FloatArray]
    words: Mapping[str, tuple[str, ...]]
    slopes: FloatArray | None = None
    u_slopes: FloatArray | None = None
    volumes: Mapping[str, FloatArray] = field(default_factory=dict)


def read_runs(path: str | Path, sheet: str | int | None = None) -> Runs:
    """Read the table of runs.

    Parameters
    ----------
    path
        CSV, TSV, XLSX or ODS.
    sheet
        Sheet of a workbook.

    Raises
    ------
    InputError
        If it cannot be read, a header is unknown, or labels or temperatures are missing.
    """
    cells = read_cells(path, sheet)
    words: dict[str, tuple[str, ...]] = {}
    numbers: dict[str, FloatArray] = {}
    concentrations: dict[str, FloatArray] = {}
    volumes: dict[str, FloatArray] = {}
    problems: list[Problem] = []
    for place, title in enumerate(cells.titles):
        texts = [row[place] if place < len(row) else "" for _, row in cells.rows]
        try:
            pipetted = _VOLUME.fullmatch(title)
            if pipetted:
                factors = (parse_unit(pipetted["unit"]), parse_unit("L"), 1.0)
                volumes[pipetted["stock"].strip()] = _numbers(cells, title, texts, factors)
                continue
            kind, header = _kind(cells, title)
            if kind in {*_WORDS, "trace"}:
                words[kind] = tuple(texts)
            elif header is not None and kind == "c":
                concentrations[header.species] = _numbers(cells, title, texts, _factors(header))
            elif kind:
                numbers[kind] = _numbers(cells, title, texts, _factors(header))
        except InputError as error:
            problems += error.problems
    problems += [
        Problem(f"the table of runs has no column {name}", f"add it: {name}", file=cells.name)
        for name, there in (("run", "run" in words), ("T/K", "T" in numbers))
        if not there
    ]
    if problems:
        raise InputError(problems)
    labels = words.pop("run")
    twice = {label for label in labels if labels.count(label) > 1}
    if twice or not all(labels):
        raise InputError(
            Problem("labels of runs are missing or twice", "name each once", file=cells.name)
        )
    return Runs(
        labels,
        numbers["T"],
        numbers.get("I"),
        concentrations,
        words,
        numbers.get("slope"),
        numbers.get("u(slope)"),
        volumes,
    )


def _kind(cells: Cells, title: str) -> tuple[str, Header | None]:
    """Return what a column holds.

    Raises
    ------
    InputError
        If its header is none of a table of runs.
    """
    if not title:
        return "", None
    own = _OWN.fullmatch(title)
    if own:
        what = own["what"].lower()
        if what in {"slope", "u(slope)"}:
            unit = parse_unit(own["unit"] or "1")
            return what, Header(title, "k", unit=unit)
        return "trace", None
    header = parse_header(title)
    plain = header is not None and not header.is_uncertainty and not header.function
    if header is not None and plain and header.role in {*_UNITS, *_WORDS}:
        return header.role, header
    raise InputError(
        Problem(
            "is no column of a table of runs",
            "known are run, T/K, I/(mol/L), c(X)/(mol/L), V(stock)/mL, salt, batch, use, reason, "
            "note, trace, slope/s^-1",
            read=title,
            file=cells.name,
        )
    )


def _factors(header: Header | None) -> tuple[Unit, Unit, float]:
    """Return the unit of a column, that in which it is wanted, and its prefactor.

    Raises
    ------
    InputError
        If the unit is missing.
    """
    if header is None or header.unit is None:
        read = None if header is None else header.text
        raise InputError(Problem("has no unit", "head columns quantity/unit", read=read))
    wanted = parse_unit(_UNITS.get(header.role, "s^-1"))
    return header.unit, wanted, float(header.prefactor)


def _numbers(
    cells: Cells, title: str, texts: list[str], factors: tuple[Unit, Unit, float]
) -> FloatArray:
    unit, wanted, prefactor = factors
    values = np.array(
        [
            cells.number(number, title, text)
            for (number, _), text in zip(cells.rows, texts, strict=True)
        ]
    )
    blank = np.flatnonzero(np.isnan(values))
    if len(blank):
        raise InputError(
            Problem(
                "is blank",
                "give every run its value",
                file=cells.name,
                row=cells.rows[int(blank[0])][0],
                column=title,
            )
        )
    return frozen(unit.convert(values / prefactor, wanted))
