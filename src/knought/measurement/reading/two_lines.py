"""Headers of two lines: a quantity above and its unit, or what is said of it, beneath."""

from __future__ import annotations

import re
from typing import TYPE_CHECKING

from knought.chemistry.headers import parse_header
from knought.chemistry.units import parse_unit
from knought.errors import InputError

if TYPE_CHECKING:
    from collections.abc import Sequence

__all__ = ["DASHES", "is_unit", "joined", "unit_text"]

#: What a cell without a unit may hold.
DASHES = frozenset({"-", "–", "—", "/"})
_VALUE = re.compile(r"(?:value|values|mean|average)\b ?", re.IGNORECASE)


def unit_text(text: str) -> str:
    """Return a unit without the solidus or brackets that a cell of units may have around it."""
    bare = text.strip()
    if bare.startswith("/"):
        bare = bare[1:].strip()
    if bare[:1] in {"(", "["} and bare[-1:] in {")", "]"}:
        bare = bare[1:-1].strip()
    return bare


def is_unit(text: str) -> bool:
    """Whether a cell holds nothing but a unit; a dash says that there is none."""
    if text in DASHES:
        return True
    try:
        parse_unit("°C" if unit_text(text) == "C" else unit_text(text))
    except InputError:
        return False
    return True


def joined(upper: Sequence[str], lower: Sequence[str]) -> list[str]:
    """Return one title a column from those of two lines.

    Parameters
    ----------
    upper, lower
        Titles of the lines, ``upper`` already spread over the columns that it covers.
    """
    width = max(len(upper), len(lower))
    above = [*upper, *[""] * (width - len(upper))]
    below = [*lower, *[""] * (width - len(lower))]
    return [_one(*pair) for pair in zip(above, below, strict=True)]


def _one(upper: str, lower: str) -> str:
    if not lower or lower in DASHES:
        return upper
    if not upper or _stands_alone(lower):
        return lower
    if is_unit(lower):
        return f"{upper}/({unit_text(lower)})"
    value = _VALUE.match(lower)
    if value is not None:
        rest = lower[value.end() :].strip()
        return (
            f"{upper}/({unit_text(rest)})" if rest and is_unit(rest) else f"{upper} {rest}".strip()
        )
    return f"{upper} {lower}"


def _stands_alone(title: str) -> bool:
    """Whether a title says by itself what its column holds."""
    try:
        header = parse_header(title)
    except InputError:
        return True
    # "n" or "s" beneath a quantity may be its unit or its deviation.
    return header is not None and (header.unit is not None or not is_unit(title))
