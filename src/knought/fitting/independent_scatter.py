"""The size of the runs' independent errors, as their scatter tells it, beside shared errors.

Without shared errors it is the Birge ratio. Beside them, whose size is known and whose pattern the
scatter contains as well, it is the restricted maximum of the likelihood (Patterson and Thompson,
Biometrika 58 (1971) 545, from memory): the independent part of the residuals, ê = σ² V⁻¹ r, has the
mean square that the design leaves it,

    Σ (ê/u)² = σ² (n - Σ leverage),

iterated as a fixed point (Harville 1977, from memory). A pattern that a shared error explains tells
nothing of σ: the degrees of freedom are those of the information on ln σ, Σ [σ²/(σ² + λ)]² over the
directions that the parameters leave to the residuals, each with a variance λ from shared errors.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

import numpy as np

from knought.arrays import frozen
from knought.fitting.distribution import ParameterDistribution

if TYPE_CHECKING:
    from collections.abc import Callable

    from knought.fitting.run_errors import RunErrors
    from knought.fitting.scatter import Scatter
    from knought.laws.surface import Surface
    from knought.numerics.least_squares import LinearFit

__all__ = ["IndependentScatter", "headline_distribution", "independent_scatter"]

#: The size is iterated until it moves by less than this fraction.
_SETTLED = 1e-10
_MOST_ITERATIONS = 300

#: Runs whose misfit shared errors explain alone have no scatter; their u is then this part of that
#: given. Much less, and the weights of what is known of the shared errors would drown.
_LEAST_SCALE = 1e-6

#: Step in ln σ of the derivative that gives the degrees of freedom.
_STEP = 0.02


@dataclass(frozen=True, eq=False)
class IndependentScatter:
    """What the scatter says of independent errors.

    Attributes
    ----------
    scale
        Factor on independent uncertainties that explains the scatter; nan without degrees of
        freedom.
    degrees_of_freedom
        To which it is known.
    solution
        The fit with it; None without degrees of freedom.
    beside_shared
        Whether runs share errors.
    """

    scale: float
    degrees_of_freedom: float
    solution: LinearFit | None
    beside_shared: bool

    def told(self, judged: Scatter) -> Scatter:
        """Return `judged` with the size and its degrees of freedom, where errors are shared."""
        if not self.beside_shared:
            return judged
        return replace(
            judged, shared_scale=self.scale, shared_degrees_of_freedom=self.degrees_of_freedom
        )


def independent_scatter(
    solution: LinearFit, errors: RunErrors, solved: Callable[[RunErrors], LinearFit]
) -> IndependentScatter:
    """Find the size of the independent errors.

    Parameters
    ----------
    solution
        The fit with uncertainties as given.
    errors
        The errors that it used.
    solved
        Fits with other errors.
    """
    nu = solution.degrees_of_freedom
    shares = bool(errors.shared_sources)
    if nu <= 0:
        return IndependentScatter(float("nan"), float(nu), None, shares)
    scale = float(np.sqrt(solution.chi_square / nu))
    if not shares:
        scaled = replace(
            solution,
            covariance=frozen(solution.covariance * scale**2),
            gain=frozen(solution.gain * scale),
        )
        return IndependentScatter(scale, float(nu), scaled, shares)
    for _ in range(_MOST_ITERATIONS):
        scale = max(scale, _LEAST_SCALE)
        scaled = solved(errors.scaled(scale))
        factor = _root_mean_square(scaled)
        scale *= factor
        if abs(factor - 1) < _SETTLED or scale < _LEAST_SCALE:
            break
    scale = max(scale, _LEAST_SCALE)
    left = [_left(solved(errors.scaled(scale * np.exp(step)))) for step in (-_STEP, _STEP)]
    # Of w = σ²/(σ² + λ), d Σw/d ln σ = 2 Σ w (1 - w).
    informed = _left(scaled) - (left[1] - left[0]) / (4 * _STEP)
    return IndependentScatter(scale, float(np.clip(informed, 1.0, nu)), scaled, shares)


def _left(fit: LinearFit) -> float:
    """Return what the design leaves to independent errors: n - Σ leverage."""
    return max(len(fit.leverage) - float(fit.leverage.sum()), 1e-12)


def _root_mean_square(fit: LinearFit) -> float:
    """Return √(Σ (ê/u)²/(n - Σ leverage)), 1 where u has the size that the scatter tells."""
    return float(np.sqrt(fit.independent @ fit.independent / _left(fit)))


def headline_distribution(
    surface: Surface, solution: LinearFit, independent: IndependentScatter, judged: Scatter
) -> ParameterDistribution:
    """Return the distribution of the parameters behind the headline ±.

    Where the scatter gives u and errors are shared besides, only what the scatter tells has its
    degrees of freedom; an effective number of them (JCGM 100, G.4) holds too little for few.
    """
    scaled = independent.solution
    chosen = scaled if judged.from_scatter and scaled is not None else solution
    mixed = judged.from_scatter and independent.beside_shared
    common = chosen.gain[:, len(chosen.residuals) :]
    return ParameterDistribution(
        names=surface.parameters,
        weights=np.ones(1),
        means=chosen.parameters[None],
        covariances=chosen.covariance[None],
        degrees_of_freedom=judged.headline_degrees_of_freedom,
        known=frozen(common @ common.T) if mixed else None,
    )
