"""Several columns of one quantity: one is read, and the others must agree with it.

The one that gives the quantity itself goes before its logarithm or reciprocal, the finer one before
the coarser.

Laboratory tables hold t/°C beside T/K, 1000 K/T and ln k beside k. Two numbers agree when they
differ by no more than half a step of the last digit of each, as rounding allows. A table made with
T/K = t/°C + 273 shows here.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from knought.measurement.reading.conversion import slope

if TYPE_CHECKING:
    from knought.arrays import FloatArray
    from knought.measurement.reading.draft import Draft
    from knought.measurement.reading.spread import Measured

__all__ = ["preferred"]

#: Conversions are rounded; numbers this close, relatively, are one number.
_ROUNDING = 1e-9


def preferred(read: list[Measured], draft: Draft) -> Measured:
    """Return the reading to use of several of one quantity; a problem is noted where others differ.

    Parameters
    ----------
    read
        The readings, at least one, all in one unit.
    draft
        Takes the account, and what is wrong.
    """
    if len(read) == 1:
        return read[0]
    steps = [_steps(each) for each in read]
    # A spreadsheet drops zeros at the end of a number: the finest cell speaks for its column.
    sizes = [float(np.nanmin(step)) if np.any(~np.isnan(step)) else np.inf for step in steps]
    indirect = [each.header.function != "" for each in read]
    best = min(range(len(read)), key=lambda i: (indirect[i], round(np.log10(sizes[i]), 1), i))
    for place, other in enumerate(read):
        if place != best:
            _compare(read[best], other, steps[best] + steps[place], draft)
    return read[best]


def _steps(measured: Measured) -> FloatArray:
    """Return what a step of the last digit of each number is, in the quantity."""
    column = measured.column
    with np.errstate(over="ignore", invalid="ignore"):
        return np.asarray(
            column.steps * slope(measured.header, column.values, measured.unit, measured.wanted)
        )


def _compare(best: Measured, other: Measured, steps: FloatArray, draft: Draft) -> None:
    with np.errstate(invalid="ignore"):
        apart = np.abs(best.values - other.values)
        allowed = 0.5 * steps + _ROUNDING * np.abs(best.values)
        differ = apart > allowed
    name = best.column.column.address
    for place in np.flatnonzero(differ & draft.sound)[:1]:
        draft.problem(
            f"gives {other.values[place]:.8g} {other.wanted}, and {name} gives "
            f"{best.values[place]:.8g} {best.wanted} for the same run"
            + _and_others(int(np.count_nonzero(differ & draft.sound)) - 1),
            "mend one of the two, or keep one column only",
            other.column,
            int(place),
        )
    if not np.any(differ & draft.used):
        draft.note(f"agrees with {name} within its last digit", other.column.column.address)


def _and_others(count: int) -> str:
    if count < 2:
        return "" if count == 0 else ", and one more run differs"
    return f", and {count} more runs differ"
