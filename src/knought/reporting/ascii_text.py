"""Text for terminals without Unicode: the trade's signs by their names."""

from __future__ import annotations

import re

__all__ = ["to_ascii"]

#: What terminals without Unicode get instead of the signs of the text.
_ASCII = {
    **dict(zip("₀₁₂₃₄₅₆₇₈₉", "0123456789", strict=True)),
    "°": "0",
    "‡": "++",
    "Δ": "D",
    "→": "->",
    "–": "-",
    "−": "-",
    "±": "+/-",
    "β": "beta",
    "å": "a",
    "Å": "Angstrom",
    "χ": "chi",
    "ν": "nu",
    "√": "sqrt ",
    "∂": "d",
    "×": "x",
    "ₐ": "_a",
    "ₚ": "p",
    "·": ".",
    "ü": "ue",
    "ö": "oe",
    "é": "e",
    "…": "...",
    "ø": "oe",
    "“": '"',
    "”": '"',
    "’": "'",
    "′": "'",
}

#: Exponents and charges, raised in one piece.
_RAISED = re.compile("[⁰¹²³⁴⁵⁶⁷⁸⁹⁺⁻]+")
_LOWERED = str.maketrans("⁰¹²³⁴⁵⁶⁷⁸⁹⁺⁻", "0123456789+-")


def to_ascii(text: str) -> str:
    """Return `text` in ASCII: the trade's signs by their names, anything else as ``?``."""
    text = _RAISED.sub(lambda found: "^" + found[0].translate(_LOWERED), text)
    for sign, plain in _ASCII.items():
        text = text.replace(sign, plain)
    return text.encode("ascii", "replace").decode("ascii")
