"""Weights of the runs: errors of each run's own T and I carried into ln k along the fitted slope.

The slope depends on the fit and the fit on the weights, so the two are iterated (effective
variance; see :mod:`knought.fitting.observations`).
"""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from knought.errors import Caveat

if TYPE_CHECKING:
    from collections.abc import Callable

    from knought.arrays import FloatArray
    from knought.fitting.observations import Observations
    from knought.laws.surface import Surface
    from knought.numerics.least_squares import LinearFit

__all__ = ["settle_weights"]

#: The weights have settled when no u of ln k moves by more than this fraction.
_SETTLED = 1e-12
_MOST_ITERATIONS = 60


def settle_weights(
    seen: Observations, solve: Callable[[FloatArray], LinearFit], surface: Surface
) -> tuple[LinearFit, FloatArray, tuple[Caveat, ...]]:
    """Fit, carry errors of T and I into u of ln k, and repeat until the weights settle.

    Parameters
    ----------
    seen
        The runs.
    solve
        Fits the surface with given standard uncertainties of ln k.
    surface
        The surface that is fitted; not stacked.

    Returns
    -------
    solution
        The last fit.
    u : (n,) ndarray
        Standard uncertainties of ln k that it used.
    caveats
        Says so if the weights did not settle.
    """
    u = seen.u
    solution = solve(u)
    if not seen.has_abscissa_errors:
        return solution, u, ()
    I = seen.ionic_strength
    slope_T = surface.ln_k_dT(seen.T, I)
    slope_I = surface.ln_k_dI(seen.T, np.where(I > 0, I, 1.0))
    for _ in range(_MOST_ITERATIONS):
        theta = solution.parameters
        moved = seen.effective(
            slope_T.offset + slope_T.rows @ theta, slope_I.offset + slope_I.rows @ theta
        )
        change = float(np.max(np.abs(moved / u - 1)))
        u = moved
        solution = solve(u)
        if change < _SETTLED:
            return solution, u, ()
    return (
        solution,
        u,
        (
            Caveat(
                "unsettled-weights",
                "The weights that carry errors of T and I into ln k did not settle: these errors "
                "are so large that their effect depends on the fit itself. Reduce u(T) or u(I).",
            ),
        ),
    )
