"""The one grammar of numbers: what a cell may hold, and what is refused."""

from __future__ import annotations

import re

from knought.errors import InputError

__all__ = ["parse_number"]

_NUMBER = re.compile(r"[+-]?(?:\d+(?:\.\d*)?|\.\d+)(?:[eE][+-]?\d{1,3})?")


def parse_number(text: str) -> float:
    """Read a number with a decimal point.

    Parameters
    ----------
    text
        The text of a cell, ``"2.41e-3"``.

    Raises
    ------
    InputError
        If it is no number.
    """
    plain = text.strip().replace("−", "-")
    if not _NUMBER.fullmatch(plain):
        if re.fullmatch(r"[+-]?\d{1,3}(,\d+)", plain):
            raise InputError("a comma stands in the number", "write a decimal point")
        raise InputError("this is no number", "write a number such as 2.41e-3")
    return float(plain)
