"""The joint region of two activation parameters: an ellipse that holds both at once."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from knought.arrays import FloatArray, frozen
from knought.errors import InputError
from knought.laws.activation import activation_rows
from knought.laws.surface import Rows
from knought.numerics.seeds import DEFAULT_SEED, generator

if TYPE_CHECKING:
    from knought.fitting.distribution import ParameterDistribution
    from knought.fitting.found import Found

__all__ = ["JointRegion", "joint_region"]

#: Draws that size the ellipse of a mixture: its probability is then good to 0.2 %.
_DRAWS = 20_000


@dataclass(frozen=True, eq=False)
class JointRegion:
    """An ellipse that holds two parameters at once.

    Attributes
    ----------
    names
        Of the two parameters.
    centre : (2,) ndarray
        Their means, in SI units.
    covariance : (2, 2) ndarray
        Their joint covariance.
    ring : (m, 2) ndarray
        Points along the ellipse, the last equal to the first.
    coverage
        Probability that it holds both.
    """

    names: tuple[str, str]
    centre: FloatArray
    covariance: FloatArray
    ring: FloatArray
    coverage: float

    @property
    def correlation(self) -> float:
        """Of the two parameters."""
        c = self.covariance
        return float(c[0, 1] / math.sqrt(c[0, 0] * c[1, 1]))


def joint_region(
    found: Found,
    names: tuple[str, str],
    *,
    coverage: float = 0.95,
    I: float = 0.0,
    points: int = 181,
) -> JointRegion:
    """Return the ellipse, shaped like the joint covariance, that holds two parameters at once.

    The squared radius is -2 ln(1 - p) for a normal distribution (χ² with two degrees of freedom)
    and ν ((1 - p)^(-2/ν) - 1) for a Student t one (2 F with 2 and ν). Where it is
    neither, as under the open law, the ellipse is widened or narrowed until it holds the share p of
    seeded draws.

    Parameters
    ----------
    found
        The fit.
    names
        Two of ``activation_energy``, ``activation_enthalpy``, ``activation_entropy``,
        ``activation_gibbs_energy``, ``ln_pre_exponential_factor``, ``ln_rate_constant``.
    coverage
        Probability p that the ellipse holds both, between 0 and 1.
    I
        Ionic strength in mol/L; the temperature is T_ref.
    points
        Points along the ellipse.

    Returns
    -------
    JointRegion

    Raises
    ------
    InputError
        If the fit has no such parameter, or `coverage` is not between 0 and 1.
    """
    if not 0 < coverage < 1:
        raise InputError(f"a coverage must lie between 0 and 1, not {coverage}", "give 0.95")
    rows = activation_rows(found.surface, found.reference_temperature, I)
    missing = [name for name in names if name not in rows]
    if missing:
        raise InputError(
            f"this fit has no {' and no '.join(missing)}", f"choose among {', '.join(rows)}"
        )
    stacked = Rows.stacked([rows[name] for name in names])
    mean, covariance = found.distribution.joint(stacked)
    radius = _radius(found.distribution, stacked, mean, covariance, coverage)
    angle = np.linspace(0, 2 * np.pi, points)
    circle = radius * np.stack([np.cos(angle), np.sin(angle)])
    ring = mean[:, None] + _root(covariance) @ circle
    return JointRegion(names, frozen(mean), frozen(covariance), frozen(ring.T.copy()), coverage)


def _root(covariance: FloatArray) -> FloatArray:
    """Return a root of a 2 by 2 covariance; near-perfect correlation must not fail."""
    scale = np.sqrt(np.diag(covariance))
    value, vector = np.linalg.eigh(covariance / np.outer(scale, scale))
    return np.asarray(scale[:, None] * vector * np.sqrt(np.maximum(value, 0)))


def _radius(
    distribution: ParameterDistribution,
    rows: Rows,
    mean: FloatArray,
    covariance: FloatArray,
    coverage: float,
) -> float:
    """Return how many standard deviations the ellipse reaches."""
    nu = distribution.degrees_of_freedom
    if len(distribution.weights) == 1 and distribution.known is None:
        if math.isinf(nu):
            return math.sqrt(-2 * math.log(1 - coverage))
        return math.sqrt(nu * ((1 - coverage) ** (-2 / nu) - 1))
    away = distribution.draws(rows, _DRAWS, generator(DEFAULT_SEED)) - mean
    inside = np.linalg.solve(_root(covariance), away.T)
    return float(np.sqrt(np.quantile((inside**2).sum(axis=0), coverage)))
