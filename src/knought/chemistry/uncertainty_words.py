"""What a ± means, in the words that people use for it.

GUM (JCGM 100:2008): u is a standard uncertainty (2.3.1); s an experimental standard deviation of
single determinations, of which a mean of n has s/√n (4.2.3); U = k u an expanded uncertainty, which
means nothing without its coverage factor (7.2.3). Percent may stand with each of them.
"""

from __future__ import annotations

import re
from dataclasses import dataclass
from typing import Literal, TypeAlias

from knought.chemistry.unit_text import normalised
from knought.errors import InputError, Problem

__all__ = ["MEANINGS", "Meaning", "MeaningKind", "meaning_of_sign", "parse_meaning"]

MeaningKind: TypeAlias = Literal[
    "", "standard", "deviation", "double", "double deviation", "95 %", "expanded"
]

#: What each kind is called in the account.
MEANINGS: dict[str, str] = {
    "": "not said",
    "standard": "standard uncertainty",
    "deviation": "standard deviation of single determinations",
    "double": "twice the standard uncertainty",
    "double deviation": "twice the standard deviation of single determinations",
    "95 %": "95 % half-width",
    "expanded": "expanded uncertainty without its coverage factor",
}


@dataclass(frozen=True)
class Meaning:
    """What the number behind ± is.

    Attributes
    ----------
    kind
        Which multiple of which standard deviation; ``""`` where nothing was declared.
    relative
        Whether it is relative to the value: True, or False; None where nothing was declared.
    percent
        Whether a relative one is in percent by these words, whatever the unit of its column.
    """

    kind: MeaningKind = ""
    relative: bool | None = None
    percent: bool = False

    @property
    def words(self) -> str:
        """Return it in words."""
        return ("relative " if self.relative else "") + MEANINGS[self.kind]


#: Signs of an uncertainty, as in u(k): spelling without spaces and underscores -> kind, relative.
_SIGNS: dict[str, tuple[MeaningKind, bool]] = {
    "u": ("standard", False), "uc": ("standard", False), "se": ("standard", False),
    "sem": ("standard", False), "stderr": ("standard", False), "1se": ("standard", False),
    "ur": ("standard", True), "urel": ("standard", True), "rse": ("standard", True),
    "s": ("deviation", False), "sd": ("deviation", False), "σ": ("deviation", False),
    "stdev": ("deviation", False), "std": ("deviation", False), "stddev": ("deviation", False),
    "sigma": ("deviation", False), "1s": ("deviation", False), "1σ": ("deviation", False),
    "1sd": ("deviation", False), "sr": ("deviation", True), "srel": ("deviation", True),
    "rsd": ("deviation", True), "cv": ("deviation", True),
    "standarderror": ("standard", False), "stderror": ("standard", False),
    "standarduncertainty": ("standard", False),
    "standarddeviation": ("deviation", False), "stdeviation": ("deviation", False),
    "relativestandarddeviation": ("deviation", True), "relsd": ("deviation", True),
    "relu": ("standard", True), "relativeuncertainty": ("standard", True),
    "2u": ("double", False), "2se": ("double", False), "2sem": ("double", False),
    "2s": ("double deviation", False), "2sd": ("double deviation", False),
    "2σ": ("double deviation", False), "2sigma": ("double deviation", False),
    "u95": ("95 %", False), "ci95": ("95 %", False), "95%ci": ("95 %", False),
    "95%": ("95 %", False), "ci": ("95 %", False),
    "δ": ("", False), "delta": ("", False), "err": ("", False), "error": ("", False),
    "unc": ("", False), "uncertainty": ("", False), "±": ("", False), "+/-": ("", False),
}  # fmt: skip


def meaning_of_sign(sign: str) -> Meaning | None:
    """Return what a sign such as ``u``, ``u_r``, ``s``, ``2s``, ``U95`` or ``±`` means.

    Returns
    -------
    Meaning or None
        None where it is no sign of an uncertainty.
    """
    bare = re.sub(r"[\s_{}.]+", "", normalised(sign)).replace("Δ", "δ")
    if bare == "U":
        return Meaning("expanded", False)
    known = _SIGNS.get(bare.lower())
    if known is None or (bare[:1] == "S" and len(bare) == 1):
        return None
    return Meaning(known[0], known[1] or None if not known[0] else known[1])


_WORDS: tuple[tuple[str, MeaningKind], ...] = (
    (r"95 ?%|ci ?95|u ?95|95 ?percent", "95 %"),
    (r"2 ?(?:s|sd|σ|sigma|(?:standard )?deviations?)", "double deviation"),
    (r"2 ?(?:u|se|sem)|twice the standard (?:uncertainty|error)|k ?= ?2", "double"),
    (r"standard deviation|1? ?(?:s|sd|σ|sigma)|stdev|std", "deviation"),
    (r"standard (?:error|uncertainty)(?: of the mean)?|1? ?(?:u|se|sem)|68 ?%", "standard"),
)


_RELATIVE = (
    r"\brelative\b,?",
    r",? ?\b(?:in )?(?:percent|per cent)$",
    r"(?<!95)(?<!95 )(?<!68)(?<!68 ),? ?(?:in )?%$",
)


def parse_meaning(text: str) -> Meaning:
    """Read what a user says that ± means.

    Parameters
    ----------
    text
        ``"standard uncertainty"``, ``"standard error"``, ``"standard deviation"``, ``"2 s"``,
        ``"2 u"``, ``"95 %"``; with ``percent`` or ``relative`` where it is relative to the value.

    Raises
    ------
    InputError
        If the words are not known.
    """
    plain = re.sub(r"\s+", " ", normalised(text).lower()).strip(" .,±")
    rest, relative, percent = plain, False, False
    for words in _RELATIVE:
        shorter = re.sub(words, "", rest).strip(" ,")
        if shorter != rest:
            relative, percent = True, percent or words is not _RELATIVE[0]
        rest = shorter
    rest = re.sub(r"[- ](?:half-width|interval|confidence|limits?|ci)(?=$| )", "", rest).strip()
    if not rest and relative:
        return Meaning("standard", relative=True, percent=percent)
    for pattern, kind in _WORDS:
        if re.fullmatch(pattern, rest):
            return Meaning(kind, relative or None, percent)
    raise InputError(
        Problem(
            "is no known meaning of ±",
            "say standard uncertainty, standard error, standard deviation, 2 s, 2 u or 95 %, with "
            "percent behind it where it is relative",
            read=text,
        )
    )
