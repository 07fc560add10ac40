"""Whether runs with different salts at one temperature and ionic strength agree.

Where they do not, I alone does not say what k is. Ion pairing, or the counter-ion itself in the
transition state, is the usual reason: for like-charged ions the concentration of the oppositely
charged counter-ion can matter more than I (Olson and Simonson, J. Chem. Phys. 17 (1949) 1167).
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from knought.numerics.quantiles import chi_square_survival

if TYPE_CHECKING:
    from knought.arrays import FloatArray, IndexArray
    from knought.fitting.assess import Assessment

__all__ = ["SaltDisagreement", "SaltMean", "salt_disagreements"]

#: Runs within these of each other are at one temperature (K) and one ionic strength (relative).
_SAME_TEMPERATURE = 0.5
_SAME_STRENGTH = 0.02

#: Salts disagree where their agreement has a probability below this.
_SIGNIFICANCE = 0.01


@dataclass(frozen=True)
class SaltMean:
    """What one salt gives.

    Attributes
    ----------
    salt
        Its name.
    runs
        Number of runs.
    ln_k, standard_uncertainty
        Weighted mean of ln k, carried along the fitted surface within the group, and u.
    """

    salt: str
    runs: int
    ln_k: float
    standard_uncertainty: float


@dataclass(frozen=True)
class SaltDisagreement:
    """Salts that give different k at one T and I.

    Attributes
    ----------
    T, I
        Of the group, in K and mol/L.
    salts
        What each gives, highest first.
    chi_square, probability
        Of their agreement.
    """

    T: float
    I: float
    salts: tuple[SaltMean, ...]
    chi_square: float
    probability: float

    @property
    def ratio(self) -> float:
        """Largest k of a salt over the smallest."""
        return math.exp(self.salts[0].ln_k - self.salts[-1].ln_k)


def salt_disagreements(assessment: Assessment) -> tuple[SaltDisagreement, ...]:
    """Return where runs with different salts at one T and I disagree.

    Parameters
    ----------
    assessment
        The assessment; its table must say the salt of each run.

    Returns
    -------
    tuple of SaltDisagreement
        Most significant first; empty where they agree, or the table does not tell.
    """
    rates = assessment.rates.used_only()
    if rates.salt is None or rates.I is None:
        return ()
    fit = assessment.headline
    # Residuals rather than ln k: within a group T and I differ a little.
    away, u = fit.residuals, fit.effective_u
    if fit.scatter.stated:
        # The misfit that enlarges u may be the disagreement itself: test with u as stated.
        u = u / fit.scatter.factor
    found = []
    for members in _groups(rates.T, rates.I):
        salts = [rates.salt[i] for i in members]
        if len({salt for salt in salts if salt}) < 2:
            continue
        T, I = float(rates.T[members].mean()), float(rates.I[members].mean())
        base = float(np.mean(fit.predicted_ln_k[members]))
        tested = _tested(T, I, salts, base + away[members], u[members])
        if tested.probability < _SIGNIFICANCE:
            found.append(tested)
    return tuple(sorted(found, key=lambda each: each.probability))


def _groups(T: FloatArray, I: FloatArray) -> list[IndexArray]:
    """Return the runs that share a temperature and an ionic strength."""
    left, groups = list(range(len(T))), []
    while left:
        first = left[0]
        near = [
            i
            for i in left
            if abs(T[i] - T[first]) <= _SAME_TEMPERATURE
            and abs(I[i] - I[first]) <= _SAME_STRENGTH * max(I[i], I[first])
        ]
        groups.append(np.array(near, dtype=np.intp))
        left = [i for i in left if i not in near]
    return groups


def _tested(
    T: float, I: float, salts: list[str], ln_k: FloatArray, u: FloatArray
) -> SaltDisagreement:
    means = []
    for salt in sorted({each for each in salts if each}):
        own = np.array([i for i, each in enumerate(salts) if each == salt], dtype=np.intp)
        weight = 1.0 / u[own] ** 2
        mean = float(weight @ ln_k[own] / weight.sum())
        means.append(SaltMean(salt, len(own), mean, float(1 / np.sqrt(weight.sum()))))
    weights = np.array([each.standard_uncertainty**-2 for each in means])
    values = np.array([each.ln_k for each in means])
    middle = weights @ values / weights.sum()
    chi_square = float(weights @ (values - middle) ** 2)
    chance = chi_square_survival(chi_square, len(means) - 1)
    ordered = tuple(sorted(means, key=lambda each: -each.ln_k))
    return SaltDisagreement(T, I, ordered, chi_square, chance)
