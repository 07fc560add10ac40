"""A temperature column whose header has no unit: read by its values where only one reading can be.

Solutions are measured between about -50 and 150 °C; as kelvin these figures would be 223 to 423.
Figures from 200 to 423 are no Celsius temperatures of a solution, figures below 150 no kelvins of
one. Between 150 and 200, and above 423, both can be, and the table is refused.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from knought.chemistry.units import Unit, parse_unit

if TYPE_CHECKING:
    from knought.measurement.reading.draft import Draft
    from knought.measurement.reading.number_column import NumberColumn

__all__ = ["temperature_unit"]

_COLDEST_CELSIUS, _HOTTEST_CELSIUS = -50.0, 150.0
_COLDEST_KELVIN, _HOTTEST_KELVIN = 200.0, 423.0


def temperature_unit(column: NumberColumn, draft: Draft) -> Unit:
    """Return the unit of a temperature column without one; a problem is noted if it is not plain.

    Parameters
    ----------
    column
        The column.
    draft
        Takes the account, or the problem.
    """
    found = column.values[~np.isnan(column.values)]
    low, high = (float(found.min()), float(found.max())) if found.size else (0.0, 0.0)
    if low >= _COLDEST_KELVIN and high <= _HOTTEST_KELVIN:
        draft.note(f"has no unit; {low:g} to {high:g} can only be kelvin", column.column.address)
        return parse_unit("K")
    if low >= _COLDEST_CELSIUS and high < _HOTTEST_CELSIUS:
        draft.note(f"has no unit; {low:g} to {high:g} can only be °C", column.column.address)
        return parse_unit("°C")
    draft.problem(
        f"the temperature has no unit, and {low:g} to {high:g} can be read as kelvin or as °C",
        "head the column T/K or t/°C",
        column,
    )
    return parse_unit("K")
