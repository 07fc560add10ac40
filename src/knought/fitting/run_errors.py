"""Errors of ln k, run by run and source by source, and those that runs share.

Random errors of a run's own temperature and ionic strength enter through the slope of the surface
("effective variance": Clutton-Brock, Technometrics 9 (1967) 261; Orear, Am. J. Phys. 50 (1982)
912): u_eff² = u(ln k)² + (∂ln k/∂T)² u(T)² + (∂ln k/∂I)² u(I)². Errors that runs share enter as
columns J. The slopes depend on the fit and the fit on the weights, so the two are iterated.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from knought.arrays import FloatArray, frozen
from knought.errors import Caveat

if TYPE_CHECKING:
    from collections.abc import Callable

    from knought.fitting.observations import Observations
    from knought.laws.surface import Surface
    from knought.numerics.least_squares import LinearFit

__all__ = ["REPEATABILITY", "RunErrors", "settle"]

#: Names of the independent sources in budgets.
REPEATABILITY = "repeatability of k"
_TEMPERATURES = "temperature of each run"
_STRENGTHS = "ionic strength of each run"

#: The weights have settled when no u of ln k moves by more than this fraction.
_SETTLED = 1e-12
_MOST_ITERATIONS = 60


@dataclass(frozen=True, eq=False)
class RunErrors:
    """Errors of ln k of n runs.

    Attributes
    ----------
    sources
        Names of the k independent sources.
    variances : (k, n) ndarray
        Variance of ln k of each run from each of them.
    shared_sources
        Names of the s shared errors.
    shared : (n, s) ndarray
        What one standard uncertainty of each does to ln k of each run.
    """

    sources: tuple[str, ...]
    variances: FloatArray
    shared_sources: tuple[str, ...]
    shared: FloatArray

    def scaled(self, factor: float) -> RunErrors:
        """Return the errors with every independent u multiplied by `factor`."""
        return RunErrors(
            self.sources,
            frozen(self.variances * factor**2),
            self.shared_sources,
            self.shared,
        )

    @property
    def u(self) -> FloatArray:
        """Standard uncertainty of ln k of each run from all independent sources, ``(n,)``."""
        return np.sqrt(self.variances.sum(axis=0))


def run_errors(seen: Observations, slope_T: FloatArray, slope_I: FloatArray) -> RunErrors:
    """Return the errors of the runs at given slopes of the surface.

    Parameters
    ----------
    seen
        The runs.
    slope_T, slope_I : (n,) ndarray
        ∂ln k/∂T in K^-1 and ∂ln k/∂I in L/mol.
    """
    sources, variances = [REPEATABILITY], [seen.u**2]
    if seen.u_given and seen.u_T is not None:
        sources.append(_TEMPERATURES)
        variances.append((slope_T * seen.u_T) ** 2)
    if seen.u_given and seen.u_I is not None:
        # At I = 0 the slope of √I is infinite; an exact zero carries no error of I.
        above = seen.ionic_strength > 0
        sources.append(_STRENGTHS)
        variances.append(np.where(above, np.where(above, slope_I, 0.0) * seen.u_I, 0.0) ** 2)
    effects = [
        error.effect(seen.T, seen.ionic_strength, slope_T, slope_I, seen.batch)
        for error in seen.shared
    ]
    return RunErrors(
        tuple(sources),
        frozen(np.stack(variances)),
        tuple(error.name for error in seen.shared),
        frozen(np.stack(effects, axis=1) if effects else np.zeros((seen.runs, 0))),
    )


def settle(
    seen: Observations, surface: Surface, solve: Callable[[RunErrors], LinearFit]
) -> tuple[LinearFit, RunErrors, tuple[Caveat, ...]]:
    """Fit, carry errors of T and I along the fitted slopes, and repeat until the weights settle.

    Parameters
    ----------
    seen
        The runs.
    surface
        The surface that is fitted; not stacked.
    solve
        Fits the surface with given errors of the runs.

    Returns
    -------
    solution
        The last fit.
    errors
        The errors that it used.
    caveats
        Says so if the weights did not settle.
    """
    n, I = seen.runs, seen.ionic_strength
    errors = run_errors(seen, np.zeros(n), np.zeros(n))
    solution = solve(errors)
    if not (seen.has_abscissa_errors or seen.shared):
        return solution, errors, ()
    in_T, in_I = surface.ln_k_dT(seen.T, I), surface.ln_k_dI(seen.T, np.where(I > 0, I, 1.0))
    for _ in range(_MOST_ITERATIONS):
        theta = solution.parameters
        moved = run_errors(seen, in_T.offset + in_T.rows @ theta, in_I.offset + in_I.rows @ theta)
        change = float(np.max(np.abs(moved.u / errors.u - 1)))
        shift = np.max(np.abs(moved.shared - errors.shared), initial=0.0)
        errors = moved
        solution = solve(errors)
        if change < _SETTLED and shift <= _SETTLED * np.max(np.abs(errors.shared), initial=1.0):
            return solution, errors, ()
    return (
        solution,
        errors,
        (
            Caveat(
                "unsettled-weights",
                "The weights that carry errors of T and I into ln k did not settle: these errors "
                "are so large that their effect depends on the fit itself. Reduce u(T) or u(I).",
            ),
        ),
    )
