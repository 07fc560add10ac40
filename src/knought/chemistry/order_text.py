"""Orders of reaction as people write them: 1, 2, 0.5 or 3/2, and nothing of unbounded size."""

from __future__ import annotations

import re
from fractions import Fraction

from knought.errors import InputError, Problem

__all__ = ["parse_order"]

#: No power of ten: ``1e999999999`` is short to write and fills the memory as an exact fraction.
_ORDER = re.compile(r"[+-]?[0-9]{1,3}(?:\.[0-9]{1,17}|/[1-9][0-9]{0,2})?")


def parse_order(text: str) -> Fraction:
    """Read an order of reaction.

    Parameters
    ----------
    text
        ``"1"``, ``"0.5"``, ``"3/2"``.

    Returns
    -------
    Fraction

    Raises
    ------
    InputError
        If the text is anything else.

    Examples
    --------
    >>> str(parse_order("1.5"))
    '3/2'
    """
    plain = text.strip()
    if _ORDER.fullmatch(plain) is None:
        raise InputError(Problem("is no order of reaction", "write 1, 2 or 3/2", read=text))
    return Fraction(plain)
