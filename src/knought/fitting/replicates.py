"""Runs repeated at the same conditions: what they say of u(k) and of the laws.

Replicates scatter by what is really irreproducible, whatever was stated. If they scatter far more
than u(k), u(k) is probably the fit error of one trace; if the laws miss their means by more than
they scatter, the laws do not fit (pure-error lack-of-fit test: Draper and Smith, Applied Regression
Analysis, 3rd ed. 1998, section 2.1).
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from knought.numerics.least_squares import solve
from knought.numerics.quantiles import chi_square_survival

if TYPE_CHECKING:
    from knought.arrays import IndexArray
    from knought.fitting.found import Found
    from knought.fitting.observations import Observations
    from knought.fitting.run_errors import RunErrors

__all__ = ["Replicates", "replicate_groups", "replicates"]

#: Conditions this close are the same: K, and a fraction of I.
_SAME_TEMPERATURE, _SAME_STRENGTH = 0.051, 0.002


@dataclass(frozen=True)
class Replicates:
    """What repeated runs say.

    Attributes
    ----------
    groups
        Number of conditions that were repeated.
    degrees_of_freedom
        Runs in them less groups: ν of the pure error.
    pure_error
        χ² of the runs about their group's mean, with u of ln k as stated (or relative weights).
    standard_deviation
        Of ln k between replicates, pooled, weighted like the fit.
    typical_u
        Root mean square of u of ln k of the replicated runs; nan where none is stated.
    between
        Variance of ln k between runs beyond u², at least zero; nan where none is stated.
    lack_of_fit
        χ² of the group means about the fit.
    lack_degrees
        Its degrees of freedom.
    """

    groups: int
    degrees_of_freedom: int
    pure_error: float
    standard_deviation: float
    typical_u: float
    between: float
    lack_of_fit: float
    lack_degrees: int

    @property
    def probability(self) -> float:
        """Probability of such a scatter of replicates if stated u hold; nan where none are."""
        if math.isnan(self.typical_u) or not self.degrees_of_freedom:
            return math.nan
        return chi_square_survival(self.pure_error, self.degrees_of_freedom)

    @property
    def lack_probability(self) -> float:
        """Probability of such a misfit of the means if the laws hold (F test); nan if untested."""
        if not self.degrees_of_freedom or self.lack_degrees < 1 or self.pure_error <= 0:
            return math.nan
        from scipy.special import fdtrc

        ratio = (self.lack_of_fit / self.lack_degrees) / (self.pure_error / self.degrees_of_freedom)
        return float(fdtrc(self.lack_degrees, self.degrees_of_freedom, ratio))


def replicate_groups(seen: Observations) -> list[IndexArray]:
    """Return the runs of each repeated condition: same T, I and salt.

    Parameters
    ----------
    seen
        The runs.
    """
    keys: list[tuple[int, float, float, str]] = []
    groups: dict[int, list[int]] = {}
    for i in range(seen.runs):
        T, I = float(seen.T[i]), float(seen.ionic_strength[i])
        salt = "" if seen.salt is None else seen.salt[i]
        for number, at_T, at_I, its_salt in keys:
            same_I = abs(I - at_I) <= _SAME_STRENGTH * max(I, at_I)
            if abs(T - at_T) <= _SAME_TEMPERATURE and same_I and salt == its_salt:
                groups[number].append(i)
                break
        else:
            groups[len(keys)] = [i]
            keys.append((len(keys), T, I, salt))
    return [np.array(members) for members in groups.values() if len(members) > 1]


def replicates(found: Found) -> Replicates | None:
    """Return what repeated runs say of a fit; None where nothing was repeated.

    Parameters
    ----------
    found
        The fit.
    """
    seen = found.observations
    groups = replicate_groups(seen)
    if not groups:
        return None
    errors = found.errors
    u = errors.u
    pure = _pure_error(seen, groups, errors)
    nu = sum(len(g) - 1 for g in groups)
    # χ² of all runs about the fit is that of replicates about their means plus that of the means;
    # both with the errors that runs share, so that a batch that is off does not look like misfit.
    total = found.scatter.chi_square
    # The open law's β is known from its prior as much as from the runs.
    names = set(found.distribution.names)
    if found.salt_law == "open":
        names.discard("interaction_coefficient")
    parameters = len(names)
    members = np.concatenate(groups)
    pooled = math.sqrt(pure / nu) * math.sqrt(float(np.mean(u[members] ** 2)))
    stated = seen.u_given
    typical = math.sqrt(float(np.mean(u[members] ** 2))) if stated else math.nan
    return Replicates(
        groups=len(groups),
        degrees_of_freedom=nu,
        pure_error=pure,
        standard_deviation=pooled,
        typical_u=typical,
        between=max(0.0, pooled**2 - typical**2) if stated else math.nan,
        lack_of_fit=max(0.0, total - pure),
        lack_degrees=seen.runs - parameters - nu,
    )


def _pure_error(seen: Observations, groups: list[IndexArray], errors: RunErrors) -> float:
    """Return the generalised χ² of the runs about a mean of their own for every condition."""
    lone = np.setdiff1d(np.arange(seen.runs), np.concatenate(groups))
    means = np.zeros((seen.runs, len(groups) + len(lone)))
    for j, members in enumerate([*groups, *lone]):
        means[members, j] = 1.0
    return solve(means, seen.ln_k + errors.shift, errors.u, shared=errors.shared).chi_square
