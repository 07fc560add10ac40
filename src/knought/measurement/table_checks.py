"""What a table of rate constants must be, checked once when it is made."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any, Protocol

import numpy as np

from knought.chemistry.constants import COLDEST, HOTTEST, STRONGEST
from knought.errors import Problem
from knought.measurement.labels import is_plain_text

if TYPE_CHECKING:
    from collections.abc import Iterator, Mapping

    from knought.arrays import BoolArray, FloatArray

__all__ = ["RATE_CONSTANTS", "RELATIVE_UNCERTAINTIES", "problems_of"]

#: Of one column, this many values are told.
_MOST_PROBLEMS = 50

_UNCERTAINTY = "an uncertainty is above zero; leave the whole column out where it is unknown"

#: Of a rate constant; beyond, its squares leave the range of doubles.
RATE_CONSTANTS = (1e-150, 1e150)

#: Of u(k)/k, likewise.
RELATIVE_UNCERTAINTIES = (1e-30, 1e30)

_K = (
    "a rate constant is above zero (and within 1e-150 to 1e150); leave the run out, with a "
    "reason, if it failed"
)

#: Column -> lowest and highest value that can be, and what to do about one that is not.
_RULES = {
    "k": (*RATE_CONSTANTS, _K),
    "T": (COLDEST, HOTTEST, "give temperatures in K, above zero (1 to 100 000 K)"),
    "I": (0.0, STRONGEST, "an ionic strength is zero or above, in mol/L (at most 1000)"),
    "u_k": (np.nextafter(0, 1), np.inf, _UNCERTAINTY),
    "u_T": (np.nextafter(0, 1), HOTTEST, _UNCERTAINTY),
    "u_I": (np.nextafter(0, 1), STRONGEST, _UNCERTAINTY),
    "determinations": (1.0, 1e9, "give how many determinations were averaged, at least 1"),
}


class Runs(Protocol):
    """What of a table is looked at; see :class:`~knought.measurement.table.RateTable`."""

    @property
    def k(self) -> FloatArray:
        """Rate constants."""
        ...

    @property
    def u_k(self) -> FloatArray | None:
        """Their standard uncertainties."""
        ...

    @property
    def run(self) -> tuple[str, ...]:
        """Labels."""
        ...

    @property
    def used(self) -> BoolArray:
        """Which runs count."""
        ...

    @property
    def reason(self) -> tuple[str, ...]:
        """Why a run does not."""
        ...

    @property
    def concentrations(self) -> Mapping[str, FloatArray]:
        """By species."""
        ...


def problems_of(table: Runs) -> list[Problem]:
    """Return everything that is wrong with a table; values are looked at once lengths agree."""
    if np.ndim(table.k) != 1 or len(table.k) == 0:
        return [
            Problem("the table has no runs", "give at least one run, as one-dimensional arrays")
        ]
    return [*_lengths(table)] or [*_values(table), *_words(table)]


def _lengths(table: Runs) -> Iterator[Problem]:
    n = len(table.k)
    columns: dict[str, Any] = {
        name: getattr(table, name)
        for name in (*_RULES, "run", "salt", "batch", "used", "reason", "note")
    }
    columns |= {f"c({name})": values for name, values in table.concentrations.items()}
    for name, values in columns.items():
        if values is None:
            continue
        if isinstance(values, np.ndarray) and values.ndim != 1:
            yield Problem("is no one-dimensional array", "give one value a run", column=name)
        elif len(values) != n:
            yield Problem(f"has {len(values)} values for {n} runs", "give one a run", column=name)


def _values(table: Runs) -> Iterator[Problem]:
    for name, (low, high, rule) in _RULES.items():
        yield from _outside(table, name, getattr(table, name), low, high, rule)
    for species, values in table.concentrations.items():
        rule = "a concentration is zero or above, in mol/L (at most 1000)"
        yield from _outside(table, f"c({species})", values, 0.0, STRONGEST, rule)
    yield from _relative(table)


def _relative(table: Runs) -> Iterator[Problem]:
    if table.u_k is None:
        return
    with np.errstate(all="ignore"):  # what cannot be divided is told above
        relative = table.u_k / table.k
    wrong = np.isfinite(relative) & (table.u_k > 0) & (table.k > 0)
    wrong &= (relative < RELATIVE_UNCERTAINTIES[0]) | (relative > RELATIVE_UNCERTAINTIES[1])
    for place in np.flatnonzero(wrong)[:_MOST_PROBLEMS]:
        yield Problem(
            f"run {table.run[place]}: u(k) is {relative[place]:.3g} of k",
            "give a standard uncertainty between 1e-30 and 1e30 of k; check its unit",
            column="u_k",
        )


def _outside(
    table: Runs, name: str, values: FloatArray | None, low: float, high: float, rule: str
) -> Iterator[Problem]:
    if values is None:
        return
    wrong = ~(np.isfinite(values) & (values >= low) & (values <= high))
    for place in np.flatnonzero(wrong)[:_MOST_PROBLEMS]:
        yield Problem(f"run {table.run[place]}: {name} is {values[place]:g}", rule, column=name)


def _words(table: Runs) -> Iterator[Problem]:
    for place in np.flatnonzero(~table.used)[:_MOST_PROBLEMS]:
        if not table.reason[place]:
            yield Problem(
                f"run {table.run[place]} is left out without a reason",
                "say why in the column reason",
                column="reason",
            )
    for name in ("run", "salt", "batch", "reason", "note"):
        for place, word in enumerate(getattr(table, name) or ()):
            if not is_plain_text(word):
                yield Problem(
                    f"run {place + 1} has a label with control characters, or one that is too long",
                    "use plain text",
                    read=word[:80].encode("ascii", "backslashreplace").decode("ascii"),
                    column=name,
                )
                break
