"""Several papers together, on our conditions: carried along our surface, then combined.

Papers measured at different T and I cannot be averaged as they stand. Each is carried to one T and
I by the difference of our own surface between the two, value + [ours(T, I) - ours(T', I')], with
the uncertainty of that difference from the joint covariance; parts that both points share fall
out. All steps are taken along the one surface, so their errors are shared: the consensus has their
whole covariance. So does its distance to ours: Σ w [value + ours(T, I) - ours(T', I')] less
ours(T, I) is Σ w [value - ours(T', I')], where ours counts at the papers' conditions only.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from knought.discussion.consensus import Consensus, ConsensusMethod, consensus
from knought.laws.activation import activation_rows
from knought.laws.surface import Rows

if TYPE_CHECKING:
    from collections.abc import Sequence

    from knought.arrays import FloatArray
    from knought.discussion.literature import LiteratureValue
    from knought.discussion.matched import Match
    from knought.fitting.estimate import Estimate
    from knought.fitting.found import Found

__all__ = ["Carried", "CarriedConsensus", "carried_consensus"]

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

    @property
    def own_uncertainty(self) -> float:
        """What the paper's own ± comes to, as compared; nan where it gives none."""
        theirs = self.literature.compared_uncertainty
        return math.nan if theirs is None else theirs


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
    difference_uncertainty
        u of ours less the consensus, what both share taken into account; nan without a consensus.
    """

    name: str
    T: float
    I: float | None
    carried: tuple[Carried, ...]
    ours: Estimate
    consensus: Consensus | None
    difference_uncertainty: float

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
        """(ours - consensus)/u_c; nan without a consensus."""
        if self.consensus is None:
            return math.nan
        mean = float(self.ours.distribution.mean)
        return (mean - self.consensus.value) / self.difference_uncertainty

    @property
    def carrying_dominates(self) -> bool:
        """Whether, for any paper, carrying adds more to u than the paper's own ±."""
        return any(
            2 * each.carrying_uncertainty**2 > each.standard_uncertainty**2
            for each in self.weighted
        )


@dataclass(frozen=True, eq=False)
class _Ways:
    """Our surface between the papers' conditions and the common ones.

    Attributes
    ----------
    steps : (k,) ndarray
        Ours at the common conditions less ours at each paper's.
    covariance : (k, k) ndarray
        Of the steps.
    at_papers : (k, k) ndarray
        Covariance of ours at the papers' conditions.
    """

    steps: FloatArray
    covariance: FloatArray
    at_papers: FloatArray

    @property
    def variances(self) -> FloatArray:
        """Of each step, shape ``(k,)``."""
        return np.diagonal(self.covariance)


def _ways(fit: Found, name: str, matches: Sequence[Match], T: float, I: float) -> _Ways:
    k = len(matches)
    there = [activation_rows(fit.surface, each.T, each.I or 0.0)[name] for each in matches]
    here = activation_rows(fit.surface, T, I)[name]
    mean, joint = fit.distribution.joint(Rows.stacked([*(here - each for each in there), *there]))
    return _Ways(mean[:k], joint[:k, :k], joint[k:, k:])


def _nothing_carried(ours: Estimate, k: int) -> _Ways:
    """Return the ways of a quantity that has no conditions: ours is the same for every paper."""
    u = float(ours.distribution.standard_deviation)
    return _Ways(np.zeros(k), np.zeros((k, k)), np.full((k, k), u**2))


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
    row_name = _ROW_NAMES.get(name)
    ours = matches[0].ours if row_name is None else fit.at(T, strength)[name]
    if ours is None:
        return None
    if row_name is None:
        ways = _nothing_carried(ours, len(matches))
    else:
        ways = _ways(fit, row_name, matches, T, strength)
    carried = tuple(
        _carried(*each) for each in zip(matches, ways.steps, ways.variances, strict=True)
    )
    combined, u_difference = _together(carried, ways, method)
    shown = strength if fit.describes_salt else None
    return CarriedConsensus(name, T, shown, carried, ours, combined, u_difference)


def _carried(match: Match, step: float, variance: float) -> Carried:
    u_step = math.sqrt(max(variance, 0.0))
    theirs = match.literature.compared_uncertainty
    total = math.nan if theirs is None else math.hypot(theirs, u_step)
    return Carried(match.literature, match.literature_value + float(step), total, u_step)


def _together(
    carried: Sequence[Carried], ways: _Ways, method: ConsensusMethod
) -> tuple[Consensus | None, float]:
    """Return the consensus of the papers that give an uncertainty, and u of ours less it."""
    own = np.array([each.own_uncertainty for each in carried])
    values = np.array([each.value for each in carried])
    use = np.flatnonzero(np.isfinite(own))
    if len(use) < 2:
        return None, math.nan
    chosen = np.ix_(use, use)
    combined = consensus(values[use], own[use], method, common=ways.covariance[chosen])
    w = combined.weights
    # The larger of the two uncertainties of the papers: that from their scatter is small by chance
    # where few of them happen to agree.
    scatter = max(1.0, combined.hartung_knapp_uncertainty / combined.standard_uncertainty)
    papers = scatter**2 * float(w**2 @ (own[use] ** 2 + combined.between_variance))
    return combined, math.sqrt(papers + float(w @ ways.at_papers[chosen] @ w))


def _common_strength(fit: Found, matches: Sequence[Match]) -> float:
    levels = fit.observations.ionic_strength_levels
    if not fit.describes_salt or len(levels) == 0:
        return 0.0
    middle = float(np.median([each.I or 0.0 for each in matches]))
    choices = np.concatenate([[0.0], levels])
    return float(choices[np.argmin(np.abs(np.sqrt(choices) - math.sqrt(middle)))])
