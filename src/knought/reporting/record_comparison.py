"""Two records held against each other: where their numbers, words or shapes differ."""

from __future__ import annotations

import math
from typing import Any

from knought.errors import quoted

__all__ = ["TOLERANCE", "compare_records"]

#: Relative difference up to which two numbers agree.
TOLERANCE = 1e-9


def compare_records(old: Any, new: Any) -> tuple[list[str], int]:
    """Return where two records differ, and how many numbers were compared.

    Parameters
    ----------
    old, new
        The data of two ``results.json``. The version that wrote them is not compared.

    Returns
    -------
    tuple
        Places with what stands there, ``"parameters.charge_product.value: 2.0, again 2.1"``; and
        the number of numbers that stand in both.
    """
    differences: list[str] = []
    count = 0
    pending = [("", old, new, 0.0)]
    while pending:
        place, one, other, scale = pending.pop()
        if isinstance(one, dict) and isinstance(other, dict):
            differences += [
                f"{place}{key}: in one of the two only" for key in sorted(set(one) ^ set(other))
            ]
            inner = _scale(one.get("value"), one.get("standard_uncertainty"))
            pending += [
                (f"{place}{key}.", one[key], other[key], max(inner, _FLOORS.get(key, 0.0)))
                for key in one
                if key in other and not (key == "knought" and not place)
            ]
        elif isinstance(one, list) and isinstance(other, list):
            if len(one) != len(other):
                differences.append(f"{place[:-1]}: {len(one)} entries, again {len(other)}")
            inner = max(scale, _scale(*one))
            pending += [
                (f"{place}{i}.", a, b, inner)
                for i, (a, b) in enumerate(zip(one, other, strict=False), start=1)
            ]
        elif _is_number(one) and _is_number(other):
            count += 1
            if not _agree(float(one), float(other), scale):
                differences.append(f"{place[:-1]}: {one!r}, again {other!r}")
        elif one != other or type(one) is not type(other):
            differences.append(f"{place[:-1]}: {_short(one)}, again {_short(other)}")
    return sorted(differences), count


#: Numbers that are differences of others, or shares: they agree if they do in units of one.
_FLOORS = dict.fromkeys(
    (
        "ln_residual", "studentised_residual", "leverage", "difference", "z", "e_number", "weight",
        "shifts_in_standard_uncertainties", "charge_product_weights", "probability", "shares",
    ),
    1.0,
)  # fmt: skip


def _agree(one: float, other: float, scale: float) -> bool:
    return abs(one - other) <= TOLERANCE * max(abs(one), abs(other), scale)


def _scale(*values: Any) -> float:
    """Return the size of numbers that stand together: a small one among them may be round-off."""
    return max((abs(float(v)) for v in values if _is_number(v)), default=0.0)


def _is_number(value: Any) -> bool:
    if isinstance(value, bool) or not isinstance(value, int | float):
        return False
    return (isinstance(value, float) and math.isfinite(value)) or abs(value) < 2**1000


def _short(value: Any) -> str:
    if isinstance(value, dict | list):
        return "an object" if isinstance(value, dict) else "a list"
    return quoted(str(value))
