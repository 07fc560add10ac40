"""How sure the sign of ΔS‡ is, under every law that was tried.

A sign that changes with the law, with the charges given or open, or with the ionic strength to
which ΔS‡ refers, is no finding. The electrostatic part of it is in :mod:`.electrostatics`.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from knought.discussion.standing import law_words, tried
from knought.errors import InputError
from knought.numerics.quantiles import Mixture

if TYPE_CHECKING:
    from knought.discussion.standing import Standing

__all__ = ["EntropySign", "SignUnderLaw", "entropy_sign"]

#: A probability this near to one or zero under every law is a supported sign.
SUPPORTED = 0.95


@dataclass(frozen=True)
class SignUnderLaw:
    """ΔS‡ under one pair of laws.

    Attributes
    ----------
    laws
        The laws in words.
    value, standard_uncertainty
        In J/(K mol), at T_ref and I → 0 (in the runs' own medium for a law without salt effect).
    negative
        Probability that it is negative.
    describes
        Whether the scatter is within what the stated u allow under these laws.
    """

    laws: str
    value: float
    standard_uncertainty: float
    negative: float
    describes: bool


@dataclass(frozen=True)
class EntropySign:
    """The sign of ΔS‡ under every law tried; the headline first."""

    laws: tuple[SignUnderLaw, ...]

    @property
    def lowest(self) -> float:
        """Smallest probability that ΔS‡ is negative, over the laws that describe the runs."""
        return min(each.negative for each in self._counted)

    @property
    def highest(self) -> float:
        """Largest probability that ΔS‡ is negative, over the laws that describe the runs."""
        return max(each.negative for each in self._counted)

    @property
    def supported(self) -> str:
        """``"negative"``, ``"positive"``, or ``""`` where not every law agrees to 95 %."""
        if self.lowest >= SUPPORTED:
            return "negative"
        return "positive" if self.highest <= 1 - SUPPORTED else ""

    @property
    def _counted(self) -> tuple[SignUnderLaw, ...]:
        # The headline always counts; a named law that does not describe the runs does not.
        return tuple(each for i, each in enumerate(self.laws) if i == 0 or each.describes)


def entropy_sign(found: Standing) -> EntropySign:
    """Return the probability that ΔS‡ is negative, under every law tried.

    Parameters
    ----------
    found
        An assessment, or one fit.

    Returns
    -------
    EntropySign

    Raises
    ------
    InputError
        If the runs have one temperature, so that there is no ΔS‡.
    """
    signs = []
    for fit in tried(found):
        estimate = fit.at().get("activation_entropy")
        if estimate is None or not isinstance(estimate.distribution, Mixture):
            continue
        signs.append(
            SignUnderLaw(
                law_words(fit),
                float(estimate.value),
                float(estimate.standard_uncertainty),
                float(estimate.distribution.cdf(0.0)),
                fit.scatter.kind != "enlarged",
            )
        )
    if not signs:
        raise InputError(
            "the runs have one temperature, so that there is no entropy of activation",
            "measure at two more temperatures at least",
        )
    return EntropySign(tuple(signs))
