"""Levels as people write them: ``"15, 25, 35 °C"``, ``"15 to 55 °C by 5"``, ``"0.1 mol/L"``."""

from __future__ import annotations

import re
from typing import TYPE_CHECKING

import numpy as np

from knought.chemistry.units import parse_quantity
from knought.errors import InputError, quoted

if TYPE_CHECKING:
    from knought.arrays import FloatArray

__all__ = ["read_levels"]

_NUMBER = r"[+-]?(?:\d+\.?\d*|\.\d+)(?:[eE][+-]?\d+)?"
_RANGE = re.compile(
    rf"^(?P<low>{_NUMBER})\s*(?P<u1>[^\d\s].*?)?\s+to\s+(?P<high>{_NUMBER})\s*(?P<u2>[^\d\s].*?)?"
    rf"\s+by\s+(?P<step>{_NUMBER})\s*(?P<u3>[^\d\s].*)?$"
)
_PART = re.compile(rf"^(?P<number>{_NUMBER})\s*(?P<unit>[^\d\s].*)?$")

#: Longer texts and more levels are slips.
_LONGEST, _MOST_LEVELS = 2000, 1000


def read_levels(text: str, unit: str) -> tuple[float, ...]:
    """Read levels that can be set.

    Parameters
    ----------
    text
        Numbers between commas (``"15, 25, 35 °C"``) or a range (``"15 to 55 °C by 5"``). A number
        without a unit has that of the next one that has any; at least one must have one.
    unit
        The unit in which they are wanted, ``"K"`` or ``"mol L^-1"``.

    Returns
    -------
    tuple of float

    Raises
    ------
    InputError
        If a part cannot be read, no unit is given, or a range has no step or too many levels.
    """
    plain = " ".join(text.split())
    if not plain or len(plain) > _LONGEST:
        raise InputError(f"{quoted(text)} is no list of levels", f'write "1, 2 {unit}"')
    if found := _RANGE.match(plain):
        given = found["u3"] or found["u2"] or found["u1"]
        levels = _range(float(found["low"]), float(found["high"]), float(found["step"]), text)
        return tuple(
            parse_quantity(f"{level:.12g} {given or ''}".strip(), unit) for level in levels
        )
    parts = [_PART.match(part.strip()) for part in plain.split(",")]
    numbers = []
    given = None
    for part in reversed(parts):
        if part is None:
            raise InputError(
                f"{quoted(text)} is no list of levels",
                f'write numbers between commas and a unit, "1, 2 {unit}", or "1 to 5 {unit} by 1"',
            )
        given = part["unit"] or given
        numbers.append(parse_quantity(f"{part['number']} {given or ''}".strip(), unit))
    return tuple(reversed(numbers))


def _range(low: float, high: float, step: float, text: str) -> FloatArray:
    """Return levels from low to high.

    Raises
    ------
    InputError
        If there is no step, or there are too many levels.
    """
    if not (step > 0 and high >= low) or (high - low) / step > _MOST_LEVELS:
        raise InputError(
            f"the range {quoted(text)} has no or too many levels",
            f"give a lower end, a higher end and a step, {_MOST_LEVELS} levels at most",
        )
    count = int(np.floor((high - low) / step * (1 + 1e-12) + 1e-9))
    return np.asarray(low + step * np.arange(count + 1))
