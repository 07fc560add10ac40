"""What the ± of a literature value means, as papers and compilations state it.

A half-range a (± that bounds the value) gives a/√3 (GUM 4.3.7, rectangular). An F-factor
multiplies and divides: F(T) = F₀ exp(g |1/T - 1/T₀|), with ln F one standard uncertainty of ln k,
as compilations of atmospheric kinetics use it (from memory); where a compilation means 95 % by it,
say so and it is divided by 1.96.
"""

from __future__ import annotations

import math
import re
from dataclasses import dataclass
from typing import Literal, TypeAlias, get_args

from knought.chemistry.uncertainty_words import parse_meaning
from knought.chemistry.unit_text import normalised
from knought.errors import InputError, Problem

__all__ = ["NO_SPREAD", "Spread", "SpreadMeaning", "parse_spread_meaning"]

SpreadMeaning: TypeAlias = Literal["1 s", "2 s", "95 %", "half-range", "F-factor", "none"]

_MEANINGS: tuple[str, ...] = get_args(SpreadMeaning)

#: Standard uncertainties in the stated ± (normal; a half-range is rectangular).
_NORMAL_95 = 1.959963984540054
_DIVISOR: dict[str, float] = {
    "1 s": 1.0,
    "2 s": 2.0,
    "95 %": _NORMAL_95,
    "half-range": math.sqrt(3.0),
    "F-factor": 1.0,
}

_WORDS: dict[str, str] = {
    "1 s": "one standard uncertainty",
    "2 s": "two standard uncertainties",
    "95 %": "95 % half-width",
    "half-range": "half-range, taken as rectangular",
    "F-factor": "uncertainty factor",
    "none": "no uncertainty given",
}


@dataclass(frozen=True)
class Spread:
    """The ± of one literature value.

    Parameters
    ----------
    meaning
        What it means.
    size
        The number behind ±, in the unit of the value; F₀ for an F-factor.
    relative
        Whether `size` is a fraction of the value.
    exponent
        g in K, of an F-factor.
    reference_temperature
        T₀ in K, of an F-factor.
    factor_coverage
        What ln F is, for an F-factor: ``"1 s"``, ``"2 s"`` or ``"95 %"``.

    Raises
    ------
    InputError
        If the meaning is unknown, or the size cannot be.
    """

    meaning: SpreadMeaning = "none"
    size: float | None = None
    relative: bool = False
    exponent: float = 0.0
    reference_temperature: float = 298.0
    factor_coverage: Literal["1 s", "2 s", "95 %"] = "1 s"

    def __post_init__(self) -> None:
        if self.meaning not in _MEANINGS:
            raise InputError(
                f"{self.meaning!r} is no meaning of ±", f"choose from {', '.join(_MEANINGS)}"
            )
        if self.meaning == "none":
            return
        least = 1.0 if self.meaning == "F-factor" else 0.0
        if self.size is None or not least < self.size < math.inf:
            raise InputError(
                f"± is {self.size} where it means {_WORDS[self.meaning]}",
                f"give a number above {least:g}, or leave it blank and say none",
            )

    @property
    def words(self) -> str:
        """What the ± means, in words."""
        return _WORDS[self.meaning]

    def factor(self, T: float) -> float:
        """Return F(T) = F₀ exp(g |1/T - 1/T₀|) of an F-factor; `T` in K.

        Raises
        ------
        InputError
            If this is no F-factor.
        """
        if self.meaning != "F-factor" or self.size is None:
            raise InputError("this ± is no F-factor", "use standard_uncertainty")
        return self.size * math.exp(self.exponent * abs(1 / T - 1 / self.reference_temperature))

    def standard_uncertainty(self, value: float, T: float | None) -> float | None:
        """Return the standard uncertainty of `value`, in its unit; of ln k times k for an F-factor.

        Parameters
        ----------
        value
            The value that the ± belongs to.
        T
            Its temperature in K; needed for an F-factor.

        Returns
        -------
        float or None
            None where no uncertainty is given.

        Raises
        ------
        InputError
            If an F-factor has no temperature.
        """
        if self.meaning == "none" or self.size is None:
            return None
        if self.meaning == "F-factor":
            if T is None:
                raise InputError("an F-factor needs a temperature", "give T with the value")
            return abs(value) * math.log(self.factor(T)) / _DIVISOR[self.factor_coverage]
        size = self.size * abs(value) if self.relative else self.size
        return size / _DIVISOR[self.meaning]


NO_SPREAD = Spread()

_SPELLINGS: tuple[tuple[str, SpreadMeaning], ...] = (
    (r"", "none"),
    (r"none|no|not given|not stated|unknown|-", "none"),
    (r"f|f-?factor|factor|uncertainty factor", "F-factor"),
    (r"half[- ]?range|range|limits?|maximum error|max\.? error|bounds?", "half-range"),
    (r"1 ?(?:s|u|σ|sigma|sd|se)?", "1 s"),
    (r"2 ?(?:s|u|σ|sigma|sd|se)?", "2 s"),
)


def parse_spread_meaning(text: str) -> SpreadMeaning:
    """Read what a ± of the literature is said to mean.

    Parameters
    ----------
    text
        ``"1 s"``, ``"standard error"``, ``"2 s"``, ``"95 %"``, ``"half-range"``, ``"F-factor"``,
        ``"none"``; blank is none.

    Raises
    ------
    InputError
        If the words are not known.
    """
    plain = re.sub(r"\s+", " ", normalised(text).lower()).strip(" .,±")
    for pattern, meaning in _SPELLINGS:
        if re.fullmatch(pattern, plain):
            return meaning
    try:
        kind = parse_meaning(plain).kind
    except InputError as error:
        raise InputError(
            Problem("is no known meaning of ±", f"write one of {', '.join(_MEANINGS)}", read=text)
        ) from error
    if kind in {"double", "double deviation"}:
        return "2 s"
    return "95 %" if kind == "95 %" else "1 s"
