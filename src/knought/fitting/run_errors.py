"""Errors of ln k, run by run and source by source, and those that runs share.

Random errors of a run's own temperature and ionic strength are unknown shifts δ of its conditions,
known to be 0 ± u. Linearised about the fitted surface, they add the variance
(∂ln k/∂T)² u(T)² + (∂ln k/∂I)² u(I)² to that of ln k ("effective variance"), and the surface is
evaluated at the shifted conditions; repeated until nothing moves, this is the exact least-squares
solution with errors in all variables (York et al., Am. J. Phys. 72 (2004) 367; ISO/TS 28037:2010,
clause 7). Errors that runs share enter as columns J along the same slopes.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

import numpy as np

from knought.arrays import FloatArray, frozen
from knought.errors import Caveat

if TYPE_CHECKING:
    from collections.abc import Callable

    from knought.fitting.observations import Observations
    from knought.laws.surface import Surface
    from knought.numerics.least_squares import LinearFit

__all__ = ["REPEATABILITY", "RunErrors", "run_errors", "settle"]

#: Names of the independent sources in budgets.
REPEATABILITY = "repeatability of k"
_TEMPERATURES = "temperature of each run"
_STRENGTHS = "ionic strength of each run"

#: The weights have settled when nothing moves by more than this part of a u.
_SETTLED = 1e-10
_MOST_ITERATIONS = 200


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
    T, I : (n,) ndarray
        Conditions of the runs as the fit adjusts them, K and mol/L: those measured, where they
        have no error of their own.
    shift : (n,) ndarray
        What the adjustment changes ln k by, along the slopes.
    """

    sources: tuple[str, ...]
    variances: FloatArray
    shared_sources: tuple[str, ...]
    shared: FloatArray
    T: FloatArray
    I: FloatArray
    shift: FloatArray

    def scaled(self, factor: float) -> RunErrors:
        """Return the errors with every independent u multiplied by `factor`."""
        return replace(self, variances=frozen(self.variances * factor**2))

    @property
    def u(self) -> FloatArray:
        """Standard uncertainty of ln k of each run from all independent sources, ``(n,)``."""
        return np.asarray(np.sqrt(self.variances.sum(axis=0)))


def run_errors(
    seen: Observations,
    slope_T: FloatArray | None = None,
    slope_I: FloatArray | None = None,
    residual: FloatArray | None = None,
) -> RunErrors:
    """Return the errors of the runs at given slopes of the surface.

    Parameters
    ----------
    seen
        The runs.
    slope_T, slope_I : (n,) ndarray, optional
        ∂ln k/∂T in K^-1 and ∂ln k/∂I in L/mol; zero if not given. An infinite slope (that of √I
        at I = 0) counts as zero: an exact zero carries no error of I.
    residual : (n,) ndarray, optional
        Observed less fitted ln k along the slopes, of which each run's T and I take their part;
        zero if not given.
    """
    n = seen.runs
    slope_T = np.zeros(n) if slope_T is None else slope_T
    slope_I = np.zeros(n) if slope_I is None else np.where(np.isfinite(slope_I), slope_I, 0.0)
    residual = np.zeros(n) if residual is None else residual
    sources, variances = [REPEATABILITY], [seen.u**2]
    square_T, square_I = np.zeros(n), np.zeros(n)
    if seen.u_given and seen.u_T is not None:
        square_T += seen.u_T**2
        sources.append(_TEMPERATURES)
        variances.append((slope_T * seen.u_T) ** 2)
    if seen.u_given and seen.u_I is not None:
        square_I += seen.u_I**2
        sources.append(_STRENGTHS)
        variances.append((slope_I * seen.u_I) ** 2)
    for error in seen.own if seen.u_given else ():
        effect = error.effect(seen.T, seen.ionic_strength, slope_T, slope_I, seen.batch, seen.run)
        sources.append(error.name)
        variances.append(effect**2)
        reached = (error.u * error.reach(n, seen.batch)) ** 2
        if error.kind == "temperature-offset":
            square_T += reached
        elif error.kind == "ionic-strength-factor":
            square_I += reached * seen.ionic_strength**2
    effects = [
        error.effect(seen.T, seen.ionic_strength, slope_T, slope_I, seen.batch, seen.run)
        for error in seen.shared
    ]
    part = residual / np.sum(variances, axis=0)
    in_T = slope_T * square_T * part
    in_I = np.maximum(slope_I * square_I * part, -seen.ionic_strength)
    return RunErrors(
        tuple(sources),
        frozen(np.stack(variances)),
        tuple(error.name for error in seen.shared),
        frozen(np.stack(effects, axis=1) if effects else np.zeros((n, 0))),
        frozen(seen.T + in_T),
        frozen(seen.ionic_strength + in_I),
        frozen(slope_T * in_T + slope_I * in_I),
    )


def settle(
    seen: Observations, surface: Surface, solve: Callable[[RunErrors], LinearFit]
) -> tuple[LinearFit, RunErrors, tuple[Caveat, ...]]:
    """Fit, carry errors of T and I along the fitted slopes, and repeat until nothing moves.

    Parameters
    ----------
    seen
        The runs.
    surface
        The surface that is fitted; not stacked.
    solve
        Fits the surface with given errors, at the conditions that they adjust.

    Returns
    -------
    solution
        The last fit.
    errors
        The errors that it used.
    caveats
        Says so if the weights did not settle.
    """
    errors = run_errors(seen)
    solution = solve(errors)
    if not (seen.has_abscissa_errors or seen.shared):
        return solution, errors, ()
    for _ in range(_MOST_ITERATIONS):
        moved = _along(seen, surface, errors, solution)
        change = max(
            float(np.max(np.abs(moved.u / errors.u - 1))),
            float(np.max(np.abs(moved.shift - errors.shift) / errors.u)),
            float(np.max(np.abs(moved.shared - errors.shared) / errors.u[:, None], initial=0.0)),
        )
        errors = moved
        solution = solve(errors)
        if change < _SETTLED:
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


def _along(
    seen: Observations, surface: Surface, errors: RunErrors, solution: LinearFit
) -> RunErrors:
    """Return the errors along the slopes of a fit, at the conditions that it was made at."""
    theta = solution.parameters
    in_T, in_I = surface.ln_k_dT(errors.T, errors.I), surface.ln_k_dI(errors.T, errors.I)
    with np.errstate(invalid="ignore"):  # 0 times the infinite slope of √I at I = 0
        slope_T = in_T.offset + in_T.rows @ theta
        slope_I = in_I.offset + in_I.rows @ theta
    fitted = surface.ln_k(errors.T, errors.I)
    residual = seen.ln_k + errors.shift - fitted.offset - fitted.rows @ theta
    if not seen.has_abscissa_errors:
        residual = np.zeros(seen.runs)
    return run_errors(seen, slope_T, slope_I, residual)
