"""Several papers together, on our conditions: carried along our surface, then combined.

Papers measured at different T and I cannot be averaged as they stand. Each is carried to one T and
I by the difference of our own surface between the two, value + [ours(T, I) - ours(T', I')], with
the uncertainty of that difference from the joint covariance; parts that both points share fall
out. The carried values share our surface, which the consensus takes as independent: where the
carrying weighs more than the papers' own ±, that is said.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from knought.discussion.consensus import Consensus, ConsensusMethod, consensus
from knought.laws.activation import activation_rows

if TYPE_CHECKING:
    from collections.abc import Sequence

    from knought.discussion.literature import LiteratureValue
    from knought.discussion.matched import Match
    from knought.fitting.estimate import Estimate
    from knought.fitting.found import Found

__all__ = ["Carried", "CarriedConsensus", "carried_consensus", "carry"]

#: Quantities that are carried; a charge product needs no carrying and is combined as it is.
_ROW_NAMES = {
    "rate_constant": "ln_rate_constant",
    "activation_energy": "activation_energy",
    "ln_pre_exponential_factor": "ln_pre_exponential_factor",
    "activation_enthalpy": "activation_enthalpy",
    "activation_entropy": "activation_entropy",
    "activation_gibbs_energy": "activation_gibbs_energy",
}


@dataclass(frozen=True)
class Carried:
    """A literature value on our conditions.

    Attributes
    ----------
    literature
        As published.
    value, standard_uncertainty
        As compared (ln k for a rate constant), at the common T and I; u is nan where the paper
        gives none.
    carrying_uncertainty
        The part of it that comes from carrying.
    """

    literature: LiteratureValue
    value: float
    standard_uncertainty: float
    carrying_uncertainty: float


@dataclass(frozen=True, eq=False)
class CarriedConsensus:
    """Several papers of one quantity on one set of conditions, combined.

    Attributes
    ----------
    name
        Name of the quantity.
    T, I
        The common conditions; I is None where our fit says nothing of salt.
    carried
        Every paper that could be carried, with or without an uncertainty.
    ours
        Ours there.
    consensus
        Of the papers that give an uncertainty; None where fewer than two do.
    """

    name: str
    T: float
    I: float | None
    carried: tuple[Carried, ...]
    ours: Estimate
    consensus: Consensus | None

    @property
    def weighted(self) -> tuple[Carried, ...]:
        """The papers that give an uncertainty, in the order of the consensus."""
        return tuple(each for each in self.carried if math.isfinite(each.standard_uncertainty))

    @property
    def logarithmic(self) -> bool:
        """Whether values are ln k."""
        return self.name == "rate_constant"

    @property
    def z(self) -> float:
        """(ours - consensus)/u_c, u of the consensus after Hartung and Knapp; nan without one.

        With the larger of the two uncertainties of the consensus: that from the scatter is small
        by chance where few papers happen to agree.
        """
        if self.consensus is None:
            return math.nan
        u = max(self.consensus.standard_uncertainty, self.consensus.hartung_knapp_uncertainty)
        mean = float(self.ours.distribution.mean)
        return (mean - self.consensus.value) / math.hypot(
            u, float(self.ours.distribution.standard_deviation)
        )

    @property
    def carrying_dominates(self) -> bool:
        """Whether, for any paper, carrying adds more to u than the paper's own ±."""
        return any(
            2 * each.carrying_uncertainty**2 > each.standard_uncertainty**2
            for each in self.weighted
        )


def carry(fit: Found, match: Match, T: float, I: float) -> Carried:
    """Carry one matched literature value to `T` (K) and `I` (mol/L) along our surface.

    Raises
    ------
    InputError
        If a property of water is needed outside 0-100 °C.
    """
    step, u_step = _step(fit, match, T, I)
    theirs = match.literature.compared_uncertainty
    total = math.nan if theirs is None else math.hypot(theirs, u_step)
    return Carried(match.literature, match.literature_value + step, total, u_step)


def _step(fit: Found, match: Match, T: float, I: float) -> tuple[float, float]:
    """Return ours at (T, I) less ours at the paper's conditions, and its u."""
    name = _ROW_NAMES.get(match.literature.name)
    if name is None:
        return 0.0, 0.0
    there = activation_rows(fit.surface, T, I)[name]
    here = activation_rows(fit.surface, match.T, match.I or 0.0)[name]
    mixture = fit.distribution.of(there - here)
    return float(mixture.mean[0]), float(mixture.standard_deviation[0])


def carried_consensus(
    fit: Found,
    matches: Sequence[Match],
    method: ConsensusMethod,
    T: float | None = None,
    I: float | None = None,
) -> CarriedConsensus | None:
    """Carry the matches of one quantity to common conditions and combine them.

    Parameters
    ----------
    fit
        Our fit.
    matches
        Matches of one quantity that could be compared.
    method
        How they are combined.
    T, I
        The common conditions; T_ref, and the measured ionic strength that is nearest to the middle
        of the papers' own (so that little is carried), if not given.

    Returns
    -------
    CarriedConsensus or None
        None for fewer than two papers.

    Raises
    ------
    InputError
        If the conditions lie where our surface cannot be evaluated.
    """
    matches = [each for each in matches if each.ours is not None]
    if len(matches) < 2:
        return None
    name = matches[0].literature.name
    T = fit.reference_temperature if T is None else T
    strength = _common_strength(fit, matches) if I is None else I
    carried = tuple(carry(fit, each, T, strength) for each in matches)
    ours = matches[0].ours if name not in _ROW_NAMES else fit.at(T, strength)[name]
    usable = [each for each in carried if math.isfinite(each.standard_uncertainty)]
    combined = None
    if len(usable) >= 2:
        combined = consensus(
            [each.value for each in usable],
            [each.standard_uncertainty for each in usable],
            method,
        )
    if ours is None:
        return None
    shown = strength if fit.describes_salt else None
    return CarriedConsensus(name, T, shown, carried, ours, combined)


def _common_strength(fit: Found, matches: Sequence[Match]) -> float:
    levels = fit.observations.ionic_strength_levels
    if not fit.describes_salt or len(levels) == 0:
        return 0.0
    middle = float(np.median([each.I or 0.0 for each in matches]))
    choices = np.concatenate([[0.0], levels])
    return float(choices[np.argmin(np.abs(np.sqrt(choices) - math.sqrt(middle)))])
