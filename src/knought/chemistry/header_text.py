"""Headers taken apart: where the quantity ends and the unit begins, nothing understood yet.

``10^3 k_obs / s^-1`` is a power of ten before, a quantity and a unit; ``k × 10^3 / s^-1`` has its
power of ten behind the quantity, which two people read in two ways.
"""

from __future__ import annotations

import re
from dataclasses import dataclass
from fractions import Fraction

from knought.chemistry.unit_text import normalised

__all__ = ["HeaderParts", "closing_bracket", "plain_header", "split_header"]

#: No header is longer; a longer text is a note.
MOST_CHARACTERS = 200

_SUBSCRIPTS = str.maketrans("₀₁₂₃₄₅₆₇₈₉₊₋", "0123456789+-")
_OPEN = {"(": ")", "[": "]", "{": "}"}
_PREFACTOR = re.compile(
    r"(?:10 ?\^ ?\(?(?P<power>[+-]?[0-9]{1,2})\)?|1[eE](?P<e>[+-]?[0-9]{1,2})|(?P<plain>10{1,9}))"
    r"(?: ?[*xX] ?(?=\S)| (?=\S)|(?=[^\W\d_]))"
)
_AT_THE_END = re.compile(
    r"(?<=\S) ?[*xX] ?(?:10 ?\^ ?\(?(?P<power>[+-]?[0-9]{1,2})\)?|1[eE](?P<e>[+-]?[0-9]{1,2}))$"
)
_BEHIND = re.compile(
    r" ?[*xX] ?(?:10 ?\^ ?\(?(?P<power>[+-]?[0-9]{1,2})\)?|1[eE](?P<e>[+-]?[0-9]{1,2}))"
)


@dataclass(frozen=True)
class HeaderParts:
    """A header taken apart.

    Attributes
    ----------
    prefactor
        Power of ten before the quantity; 1 where there is none.
    quantity
        The quantity with its brackets, ``"u(k)"``.
    unit
        Text of the unit; None where there is none.
    power_behind
        Exponent of a power of ten that stands behind the quantity; None where none does.
    remark
        What stood in brackets behind the unit.
    loose
        Whether the unit follows a comma or "in", as words of a sentence may as well.
    """

    prefactor: Fraction
    quantity: str
    unit: str | None
    power_behind: int | None = None
    remark: str = ""
    loose: bool = False


def plain_header(text: str) -> str:
    """Return a header with one spelling of spaces, signs, super- and subscripts."""
    return normalised(text.translate(_SUBSCRIPTS))


def closing_bracket(text: str, start: int) -> int:
    """Return the place of the bracket that closes the one at `start`; -1 if none does."""
    waiting: list[str] = []
    for place in range(start, len(text)):
        letter = text[place]
        if letter in _OPEN:
            waiting.append(_OPEN[letter])
        elif waiting and letter == waiting[-1]:
            waiting.pop()
            if not waiting:
                return place
    return -1


def split_header(text: str) -> HeaderParts:
    """Take a header apart.

    Parameters
    ----------
    text
        The header, in the spelling of :func:`plain_header`.
    """
    prefactor, rest = _prefactor(text)
    end = _end_of_quantity(rest)
    quantity, tail = rest[:end].strip(), rest[end:]
    behind = _BEHIND.match(tail) or _BEHIND.match(tail.replace("(", " ", 1).replace(")", " ", 1))
    power = None
    if behind is not None:
        power = int(behind["power"] or behind["e"])
        tail = tail[behind.end() :] if tail.lstrip()[:1] != "(" else tail.partition(")")[2]
    unit, remark = _unit_of(tail.strip())
    if power is None:
        unit, remark, power = _power_at_the_end(unit, remark)
    loose = tail.lstrip().startswith((",", "in "))
    return HeaderParts(prefactor, quantity, unit, power, remark, loose)


def _power_at_the_end(unit: str | None, remark: str) -> tuple[str | None, str, int | None]:
    """Find a power of ten behind the unit, ``k/s^-1 × 10^3``."""
    found = _BEHIND.fullmatch(remark)
    if found is not None:
        return unit, "", int(found["power"] or found["e"])
    last = None if unit is None else _AT_THE_END.search(unit)
    if unit is None or last is None:
        return unit, remark, None
    return unit[: last.start()].strip(), remark, int(last["power"] or last["e"])


def _prefactor(text: str) -> tuple[Fraction, str]:
    found = _PREFACTOR.match(text)
    if found is None:
        return Fraction(1), text
    if found["plain"]:
        return Fraction(int(found["plain"])), text[found.end() :]
    return Fraction(10) ** int(found["power"] or found["e"]), text[found.end() :]


def _end_of_quantity(text: str) -> int:
    """Return where the quantity ends: before a solidus, a unit in brackets, or a factor behind."""
    place = 0
    while place < len(text):
        letter = text[place]
        if letter in _OPEN:
            # A bracket belongs to the quantity when it opens it or follows its sign at once.
            if place and text[place - 1] == " ":
                return place
            end = closing_bracket(text, place)
            if end < 0:
                return len(text)
            place = end + 1
            continue
        # The solidus of "+/-" is none.
        if (letter == "/" and text[max(0, place - 1) : place + 2] != "+/-") or _BEHIND.match(
            text, place
        ):
            return place
        if letter == "," or text.startswith(" in ", place):
            return place
        place += 1
    return len(text)


def _unit_of(tail: str) -> tuple[str | None, str]:
    """Return the unit text behind a quantity, and a remark behind that."""
    if not tail:
        return None, ""
    if tail[0] in "/,":
        tail = tail[1:].strip()
    elif tail.startswith("in "):
        tail = tail[3:].strip()
    remark = ""
    if tail[:1] in _OPEN:
        end = closing_bracket(tail, 0)
        if end == len(tail) - 1:
            return tail[1:-1].strip(), ""
        if end > 0 and tail[end + 1 :].startswith(" "):
            tail, remark = tail[1:end].strip(), tail[end + 1 :].strip()
    else:
        opened = re.search(r" \((?=[^()]*\)$)", tail)
        if opened is not None:
            tail, remark = tail[: opened.start()].strip(), tail[opened.end() : -1].strip()
    return tail, remark.strip("()[] ")
