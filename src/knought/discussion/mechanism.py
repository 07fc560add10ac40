"""Candidate mechanisms weighed by the salt effect that their charges would bring.

The idea first: under the open law the prior of the charge product is flat, so that the evidence of
a candidate is proportional to the posterior density at its charge product. Weight = prior x
evidence, normalised among the candidates given. Nothing here says that a candidate is right:
weights compare the candidates given, and a mechanism that no one thought of has none.

What a candidate expects of ΔS‡ or ΔH‡ is held against the data separately, as the probability that
the quantity lies there; it does not enter the weights, because how wide a range "expected" covers
is a matter of taste and would decide the weight. An order that contradicts the unit of k does.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from knought.discussion.salt_pairing import SaltDisagreement, salt_disagreements
from knought.discussion.standing import charges_open, headline_of, tried
from knought.discussion.telling_run import LOWEST, TellingRun, telling_run
from knought.errors import InputError
from knought.fitting.assess import Assessment
from knought.fitting.open_fit import OpenFit, fit_open
from knought.numerics.quantiles import Mixture

if TYPE_CHECKING:
    from collections.abc import Iterable, Sequence

    from knought.arrays import FloatArray
    from knought.discussion.candidates import Candidate, Expectation
    from knought.discussion.standing import Standing
    from knought.fitting.found import Found
    from knought.fitting.scatter import ScatterChoice

__all__ = ["Distance", "Met", "Weighed", "Weighing", "weigh"]

#: A group of candidates with one Δz² that weighs at least this leads; below it we cannot tell.
LEADS = 0.95

#: A charge product this many u away under the open law speaks against every candidate there.
_FAR = 3.0


@dataclass(frozen=True)
class Distance:
    """How far a candidate's charge product is from what one law finds.

    Attributes
    ----------
    temperature_law, salt_law
        The laws.
    found, standard_uncertainty
        Charge product found, and u.
    standard_uncertainties
        (candidate - found)/u.
    describes
        Whether the scatter is within what the stated u allow under that law.
    """

    temperature_law: str
    salt_law: str
    found: float
    standard_uncertainty: float
    standard_uncertainties: float
    describes: bool


@dataclass(frozen=True)
class Met:
    """An expectation and the probability that it is met.

    Attributes
    ----------
    expectation
        What the candidate expects.
    probability
        That the quantity lies there at T_ref and I → 0, with the candidate's charges given.
    """

    expectation: Expectation
    probability: float


@dataclass(frozen=True)
class Weighed:
    """One candidate, weighed.

    Attributes
    ----------
    candidate
        The candidate.
    prior
        Its share before the data.
    log_evidence
        ln of the posterior density at its charge product; -inf where it is excluded, nan where the
        runs say nothing.
    weight
        Its share after the data.
    distances
        From its charge product to what each law finds; the open law first.
    met
        Its expectations with their probabilities.
    excluded
        Why it has no weight whatever the salt effect; empty where it has.
    """

    candidate: Candidate
    prior: float
    log_evidence: float
    weight: float
    distances: tuple[Distance, ...]
    met: tuple[Met, ...] = ()
    excluded: str = ""


@dataclass(frozen=True, eq=False)
class Weighing:
    """Candidates weighed, and what more would tell.

    Attributes
    ----------
    fit
        The fit that left the charges open; None where the runs say nothing of the charges.
    candidates
        Every candidate, in the order given.
    telling
        The one further run that would tell the two leading groups best; None where there are not
        two, or they are told already.
    salts
        Where runs with different salts at one I and T disagree.
    """

    fit: Found | None
    candidates: tuple[Weighed, ...]
    telling: TellingRun | None
    salts: tuple[SaltDisagreement, ...]

    @property
    def groups(self) -> tuple[tuple[int, float], ...]:
        """Δz² and the summed weight of the candidates that share it, heaviest first."""
        weights: dict[int, float] = {}
        for each in self.candidates:
            change = each.candidate.charge_change
            weights[change] = weights.get(change, 0.0) + each.weight
        return tuple(sorted(weights.items(), key=lambda pair: -pair[1]))

    @property
    def cannot_tell(self) -> bool:
        """Whether no group of one Δz² carries 95 % of the weight, or nothing can tell."""
        return self.fit is None or len(self.groups) < 2 or self.groups[0][1] < LEADS

    @property
    def none_fits(self) -> bool:
        """Whether every candidate lies more than 3 u from the charge product found."""
        return bool(self.candidates) and all(
            bool(each.distances) and abs(each.distances[0].standard_uncertainties) > _FAR
            for each in self.candidates
        )


def weigh(
    found: Standing, candidates: Iterable[Candidate], *, lowest_ionic_strength: float = LOWEST
) -> Weighing:
    """Weigh candidate mechanisms by the salt effect.

    Parameters
    ----------
    found
        An assessment, or one fit with the charges left open.
    candidates
        The candidates, each with its prior.
    lowest_ionic_strength
        The lowest that a further run can have, in mol/L: what the reagents alone bring.

    Returns
    -------
    Weighing

    Raises
    ------
    InputError
        If there is no candidate, two have one name, or all are excluded.
    """
    listed = tuple(candidates)
    _check(listed)
    fit = charges_open(found)
    order = headline_of(found).observations.order
    excluded = [_excluded(each, order) for each in listed]
    if all(excluded):
        raise InputError(
            "every candidate expects another order than the unit of k says",
            "check the order of the candidates, or the unit of k",
        )
    prior = _shares([0.0 if no else each.prior for each, no in zip(listed, excluded, strict=True)])
    log_evidence = _log_evidence(fit, [each.charge_product for each in listed])
    weight = candidate_weights(prior, log_evidence)
    weighed = tuple(
        Weighed(
            candidate=each,
            prior=float(prior[i]),
            log_evidence=-math.inf if excluded[i] else float(log_evidence[i]),
            weight=float(weight[i]),
            distances=_distances(found, each.charge_product),
            met=_met(found, each),
            excluded=excluded[i],
        )
        for i, each in enumerate(listed)
    )
    salts = salt_disagreements(found) if isinstance(found, Assessment) else ()
    plain = Weighing(fit, weighed, None, salts)
    if fit is None or not plain.cannot_tell or len(plain.groups) < 2:
        return plain
    first, second = (change / 2 for change, _ in plain.groups[:2])
    telling = telling_run(fit, first, second, lowest_ionic_strength)
    return Weighing(fit, weighed, telling, salts)


def candidate_weights(prior: FloatArray, log_evidence: FloatArray) -> FloatArray:
    """Return weights: prior times evidence, normalised along the last axis.

    Parameters
    ----------
    prior : (..., c) ndarray
        Shares before the data; zero excludes.
    log_evidence : (..., c) ndarray
        Up to a constant; nan everywhere leaves the prior as it is.
    """
    if np.all(np.isnan(log_evidence)):
        return prior
    with np.errstate(divide="ignore"):
        log_weight = np.log(prior) + log_evidence
    weight = np.exp(log_weight - log_weight.max(axis=-1, keepdims=True))
    return np.asarray(weight / weight.sum(axis=-1, keepdims=True))


def _check(candidates: Sequence[Candidate]) -> None:
    if not candidates:
        raise InputError("there is no candidate to weigh", "give two at least")
    names = [each.name for each in candidates]
    if len(set(names)) != len(names):
        raise InputError("two candidates have one name", "give each a name of its own")


def _excluded(candidate: Candidate, order: object) -> str:
    if candidate.order is None or candidate.order == order:
        return ""
    return f"it expects order {candidate.order}, and the unit of k says {order}"


def _shares(prior: list[float]) -> FloatArray:
    shares = np.array(prior)
    return np.asarray(shares / shares.sum())


def _log_evidence(fit: Found | None, products: list[float]) -> FloatArray:
    """Return ln of the posterior density at each charge product, nan where nothing is known."""
    if fit is None:
        return np.full(len(products), math.nan)
    mixture = fit.distribution.parameter("charge_product")
    return np.array([_log_density(mixture, z) for z in products])


def _log_density(mixture: Mixture, z: float) -> float:
    """Return ln of a mixture's density without underflow, far out in its tails too.

    Up to a constant that is the same for every z.
    """
    standard = (z - mixture.locations) / mixture.scales
    nu = mixture.degrees_of_freedom
    if math.isinf(nu):
        log_density = -0.5 * standard**2
    else:
        log_density = -(nu + 1) / 2 * np.log1p(standard**2 / nu)
    terms = np.log(mixture.weights) + log_density - np.log(mixture.scales)
    highest = float(terms.max())
    return highest + float(np.log(np.exp(terms - highest).sum()))


def _distances(found: Standing, product: float) -> tuple[Distance, ...]:
    """Return the distance under the open law and under every named one that finds the charges."""
    fits = [each for each in tried(found) if "charge_product" in each.distribution.names]
    fits.sort(key=lambda each: not isinstance(each, OpenFit))
    distances = []
    for each in fits:
        estimate = each.parameters["charge_product"]
        value, u = float(estimate.value), float(estimate.standard_uncertainty)
        distances.append(
            Distance(
                each.temperature_law,
                each.salt_law,
                value,
                u,
                (product - value) / u,
                each.scatter.kind != "enlarged",
            )
        )
    return tuple(distances)


def _met(found: Standing, candidate: Candidate) -> tuple[Met, ...]:
    """Return the probability of each expectation, with the candidate's charges where we can."""
    if not candidate.expectations:
        return ()
    fit = with_charges(found, candidate.charge_product)
    there = fit.at()
    met = []
    for expectation in candidate.expectations:
        estimate = there.get(expectation.name)
        mixture = None if estimate is None else estimate.distribution
        if not isinstance(mixture, Mixture):
            met.append(Met(expectation, math.nan))
            continue
        below = 0.0 if math.isinf(expectation.low) else float(mixture.cdf(expectation.low))
        above = 1.0 if math.isinf(expectation.high) else float(mixture.cdf(expectation.high))
        met.append(Met(expectation, above - below))
    return tuple(met)


def with_charges(found: Standing, charge_product: float) -> Found:
    """Return the open fit again with the charges of a candidate; the headline where there is none.

    Raises
    ------
    InputError
        If the runs cannot determine the parameters.
    """
    fit = charges_open(found) or headline_of(found)
    if not isinstance(fit, OpenFit):
        return fit
    scatter: ScatterChoice | None = "given" if fit.scatter.kind == "given" else None
    return fit_open(
        fit.observations,
        temperature_law=fit.temperature_law,
        reference_temperature=fit.reference_temperature,
        standard_concentration=fit.surface.standard_concentration,
        charge_product=charge_product,
        priors=fit.grid.priors,
        scatter=scatter if fit.scatter.stated else None,
    )
