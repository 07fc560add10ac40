"""Several reactions together: ΔH‡ against ΔS‡ with joint ellipses, and the isokinetic artefact.

ΔH‡ and ΔS‡ of one reaction come from the same slope, so that their errors lie along a line of slope
near the harmonic mean temperature of the runs, T_hm = n/Σ(1/T). A series of reactions that do not
differ at all therefore shows a fine straight line of ΔH‡ against ΔS‡, of slope T_hm: the isokinetic
artefact. Krug, Hunter and Grieger (J. Phys. Chem. 80 (1976) 2335 and 2341) plot ΔH‡ against ΔG‡ at
T_hm instead, where the errors are uncorrelated: a line there is chemistry. Here the reactions' own
covariances are used, and the slope with its u says whether T_hm lies within it.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from knought.arrays import FloatArray, frozen
from knought.discussion.standing import headline_of
from knought.errors import InputError
from knought.laws.activation import activation_rows
from knought.numerics.quantiles import normal_quantile

if TYPE_CHECKING:
    from collections.abc import Mapping

    from knought.discussion.standing import Standing

__all__ = ["Compensation", "ReactionPoint", "compensation"]

#: Within this many u of T_hm a slope is what errors alone would give.
_COVERAGE = 0.95


@dataclass(frozen=True, eq=False)
class ReactionPoint:
    """ΔH‡ and ΔS‡ of one reaction with their joint covariance.

    Attributes
    ----------
    label
        Name of the reaction.
    enthalpy, entropy
        J/mol and J/(K mol), at its T_ref and I → 0.
    covariance : (2, 2) ndarray
        Of (entropy, enthalpy).
    gibbs_energy, gibbs_uncertainty
        ΔG‡ at the common harmonic mean temperature, and u, in J/mol.
    correlation_with_gibbs
        Of ΔH‡ with that ΔG‡.
    harmonic_mean_temperature
        Of its own runs, in K.
    """

    label: str
    enthalpy: float
    entropy: float
    covariance: FloatArray
    gibbs_energy: float
    gibbs_uncertainty: float
    correlation_with_gibbs: float
    harmonic_mean_temperature: float

    @property
    def enthalpy_uncertainty(self) -> float:
        """u(ΔH‡) in J/mol."""
        return math.sqrt(self.covariance[1, 1])

    @property
    def entropy_uncertainty(self) -> float:
        """u(ΔS‡) in J/(K mol)."""
        return math.sqrt(self.covariance[0, 0])

    @property
    def correlation(self) -> float:
        """Of ΔS‡ with ΔH‡: 0.998 and above is usual."""
        return float(self.covariance[0, 1] / (self.enthalpy_uncertainty * self.entropy_uncertainty))

    def ellipse(self, coverage: float = 0.95, points: int = 181) -> FloatArray:
        """Return the joint ellipse that holds (ΔS‡, ΔH‡) with the given probability.

        χ² with two degrees of freedom: radius² = -2 ln(1 - coverage).

        Parameters
        ----------
        coverage
            Between 0 and 1.
        points
            Points along it, the last equal to the first.

        Returns
        -------
        (points, 2) ndarray
            ΔS‡ in J/(K mol) and ΔH‡ in J/mol.

        Raises
        ------
        InputError
            If `coverage` is not between 0 and 1.
        """
        if not 0 < coverage < 1:
            raise InputError(f"a coverage must lie between 0 and 1, not {coverage}", "give 0.95")
        radius = math.sqrt(-2 * math.log(1 - coverage))
        angle = np.linspace(0, 2 * np.pi, points)
        circle = radius * np.stack([np.cos(angle), np.sin(angle)])
        # Eigenvectors rather than Cholesky: near-perfect correlation must not fail.
        scale = np.sqrt(np.diag(self.covariance))
        value, vector = np.linalg.eigh(self.covariance / np.outer(scale, scale))
        shape = scale[:, None] * vector * np.sqrt(np.maximum(value, 0))
        return np.asarray(np.array([self.entropy, self.enthalpy]) + (shape @ circle).T)


@dataclass(frozen=True, eq=False)
class Compensation:
    """Several reactions together.

    Attributes
    ----------
    points
        One a reaction.
    harmonic_mean_temperature
        T_hm over all runs, in K: the slope that errors alone would give.
    slope, slope_uncertainty
        Of ΔH‡ against ΔS‡ (the "isokinetic temperature"), in K, by ordinary least squares.
    gibbs_slope, gibbs_slope_uncertainty
        Of ΔH‡ against ΔG‡ at T_hm, with the scatter's own u: zero for no relation.
    """

    points: tuple[ReactionPoint, ...]
    harmonic_mean_temperature: float
    slope: float
    slope_uncertainty: float
    gibbs_slope: float
    gibbs_slope_uncertainty: float

    @property
    def degrees_of_freedom(self) -> int:
        """Of the scatter about a line."""
        return len(self.points) - 2

    @property
    def slope_interval(self) -> tuple[float, float]:
        """95 % interval of the slope of ΔH‡ against ΔS‡, in K (Student's t)."""
        reach = _reach(self.degrees_of_freedom) * self.slope_uncertainty
        return self.slope - reach, self.slope + reach

    @property
    def artefact_suspected(self) -> bool:
        """Whether the 95 % interval of the slope holds T_hm: errors alone would give that line."""
        low, high = self.slope_interval
        return low <= self.harmonic_mean_temperature <= high

    @property
    def related(self) -> bool:
        """Whether the slope of ΔH‡ against ΔG‡ at T_hm differs from zero at 95 %."""
        reach = _reach(self.degrees_of_freedom) * self.gibbs_slope_uncertainty
        return abs(self.gibbs_slope) > reach


def compensation(reactions: Mapping[str, Standing]) -> Compensation:
    """Set ΔH‡ and ΔS‡ of several reactions against each other.

    Parameters
    ----------
    reactions
        Label to result; three at least, measured over much the same temperatures.

    Returns
    -------
    Compensation

    Raises
    ------
    InputError
        If there are fewer than three, or one has a single temperature.
    """
    if len(reactions) < 3:
        raise InputError(
            f"there are {len(reactions)} reactions", "give three at least: two always lie on a line"
        )
    inverse = np.concatenate([1 / headline_of(each).observations.T for each in reactions.values()])
    middle = float(1 / inverse.mean())
    points = tuple(_point(label, each, middle) for label, each in reactions.items())
    H = np.array([each.enthalpy for each in points])
    S = np.array([each.entropy for each in points])
    G = np.array([each.gibbs_energy for each in points])
    slope, u = _line(S, H)
    gibbs_slope, u_gibbs = _line(G, H)
    return Compensation(points, middle, slope, u, gibbs_slope, u_gibbs)


def _point(label: str, result: Standing, T: float) -> ReactionPoint:
    fit = headline_of(result)
    at_ref = activation_rows(fit.surface, fit.reference_temperature, 0.0)
    if "activation_entropy" not in at_ref:
        raise InputError(
            f"{label}: the runs have one temperature", "leave this reaction out of the comparison"
        )
    # ΔH‡ and ΔS‡ at the reaction's own T_ref, ΔG‡ at the temperature that all share.
    names = {"S": at_ref["activation_entropy"], "H": at_ref["activation_enthalpy"]}
    names["G"] = activation_rows(fit.surface, T, 0.0)["activation_gibbs_energy"]
    means = {key: float(fit.distribution.of(rows).mean[0]) for key, rows in names.items()}

    def covariance(a: str, b: str) -> float:
        # cov(a, b) from the variances of a + b and a - b: exact for a mixture too.
        plus = fit.distribution.joint(names[a] + names[b])[1][0, 0]
        minus = fit.distribution.joint(names[a] - names[b])[1][0, 0]
        return float((plus - minus) / 4)

    joint = np.array([[covariance(a, b) for b in ("S", "H")] for a in ("S", "H")])
    u_gibbs = math.sqrt(covariance("G", "G"))
    return ReactionPoint(
        label=label,
        enthalpy=means["H"],
        entropy=means["S"],
        covariance=frozen(joint),
        gibbs_energy=means["G"],
        gibbs_uncertainty=u_gibbs,
        correlation_with_gibbs=covariance("H", "G") / (math.sqrt(joint[1, 1]) * u_gibbs),
        harmonic_mean_temperature=float(1 / np.mean(1 / fit.observations.T)),
    )


def _line(x: FloatArray, y: FloatArray) -> tuple[float, float]:
    """Return slope and its standard uncertainty from the scatter, ordinary least squares."""
    away = x - x.mean()
    total = float(away @ away)
    if total == 0:
        return math.nan, math.inf
    slope = float(away @ y / total)
    left = y - y.mean() - slope * away
    return slope, math.sqrt(float(left @ left) / (len(x) - 2) / total)


def _reach(degrees_of_freedom: int) -> float:
    from knought.numerics.quantiles import student_quantile

    tail = (1 + _COVERAGE) / 2
    if degrees_of_freedom < 1:
        return normal_quantile(tail)
    return student_quantile(tail, degrees_of_freedom)
