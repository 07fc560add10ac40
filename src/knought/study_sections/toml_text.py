"""A study file's text as tables: what cannot be TOML that a person wrote is refused at once."""

from __future__ import annotations

import re
import tomllib
from typing import TYPE_CHECKING, Any

from knought.errors import InputError, Problem

if TYPE_CHECKING:
    from pathlib import Path

__all__ = ["read_toml"]

#: A study file larger than this was not written by hand.
_LARGEST = 1_000_000

#: Parts of a bare dotted key. The parser's time grows with the square of them; a study needs three,
#: and numbers have at most one point.
_DOTTED = re.compile(r"(?:[A-Za-z0-9_-]+[ \t]*\.[ \t]*){50}")

#: TOML's integers have 64 bits; larger ones can neither be used nor printed.
_LARGEST_INTEGER = 2**63


def read_toml(path: Path) -> dict[str, Any]:
    """Return what a TOML file says.

    Parameters
    ----------
    path
        The file.

    Raises
    ------
    InputError
        If it cannot be read, is too large, or is no TOML in UTF-8.
    """
    try:
        if path.stat().st_size > _LARGEST:
            raise InputError(
                Problem("is too large for a study file", "give the .toml file", file=path.name)
            )
        text = path.read_text(encoding="utf-8")
    except OSError as error:
        raise InputError(
            Problem(f"cannot be read: {error.strerror}", "check the path", file=path.name)
        ) from error
    except UnicodeDecodeError as error:
        raise InputError(
            Problem("is not UTF-8 text", "save the study file as UTF-8", file=path.name)
        ) from error
    if any(_many_parts(line) for line in text.splitlines()):
        raise InputError(
            Problem("a key has more than 50 parts", "write each section once", file=path.name)
        )
    try:
        data = tomllib.loads(text)
    except RecursionError as error:
        raise InputError(
            Problem("is nested too deeply", "a study needs three levels", file=path.name)
        ) from error
    except ValueError as error:  # TOML's own, and an integer of thousands of digits
        raise InputError(
            Problem(f"is not valid TOML: {str(error)[:300]}", "mend that line", file=path.name)
        ) from error
    if _holds_large_integer(data):
        raise InputError(
            Problem("holds an integer beyond 64 bits", "write a smaller number", file=path.name)
        )
    return data


def _many_parts(line: str) -> bool:
    """Whether a line holds a key of very many parts; points are counted first, as it is cheap."""
    return line.count(".") >= 50 and _DOTTED.search(line) is not None


def _holds_large_integer(value: object) -> bool:
    if isinstance(value, dict):
        return any(map(_holds_large_integer, value.values()))
    if isinstance(value, list):
        return any(map(_holds_large_integer, value))
    return isinstance(value, int) and abs(value) >= _LARGEST_INTEGER
