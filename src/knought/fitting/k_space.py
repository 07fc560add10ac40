"""The same surface fitted to k itself instead of ln k: a cross-check of the error model.

Errors normal in k and errors normal in ln k differ where they are large, or where the weights do:
without stated uncertainties, ln k gives every run the same relative weight and k the same absolute
one. Gauss-Newton with step halving from the solution in ln k; k = exp(offset + X θ) makes the
Jacobian k X.
"""

from __future__ import annotations

import math
from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

import numpy as np

from knought.arrays import frozen
from knought.errors import InputError
from knought.fitting.fit import resolve
from knought.fitting.independent_scatter import headline_distribution, independent_scatter
from knought.fitting.observations import Observations, observe
from knought.fitting.scatter import judge_scatter
from knought.fitting.surface_fit import SurfaceFit, fit_surface
from knought.numerics.least_squares import LinearFit, solve

if TYPE_CHECKING:
    from collections.abc import Mapping, Sequence

    from knought.arrays import FloatArray
    from knought.fitting.run_errors import RunErrors
    from knought.fitting.scatter import ScatterChoice
    from knought.laws.salt import SaltLaw
    from knought.laws.surface import Rows
    from knought.measurement.table import RateTable

__all__ = ["CrossCheck", "cross_check", "fit_in_k"]

_MOST_STEPS = 200
_MOST_HALVINGS = 40

#: Settled once a step is this part of a standard uncertainty.
_SETTLED_STEP = 1e-7


def fit_in_k(
    rates: RateTable | Observations,
    *,
    temperature_law: str | None = None,
    salt_law: str | SaltLaw = "none",
    reference_temperature: float | None = None,
    charge_product: float | None = None,
    ion_size: float | None = None,
    scatter: ScatterChoice | None = None,
) -> SurfaceFit:
    """Fit one law pair to k by weighted least squares in k.

    Parameters
    ----------
    rates
        The table, or what :func:`observe` made of it; where it states no uncertainties, every k has
        the same absolute weight.
    temperature_law, salt_law, reference_temperature, charge_product, ion_size, scatter
        As for :func:`knought.fit`; the salt law must be a named one.

    Returns
    -------
    SurfaceFit
        With the covariance of the linearised problem at the solution.

    Raises
    ------
    InputError
        If the runs cannot determine the parameters, or the iteration does not converge.
    """
    seen = rates if isinstance(rates, Observations) else observe(rates)
    choices = resolve(
        seen,
        temperature_law=temperature_law,
        salt_law=salt_law if isinstance(salt_law, str) else salt_law.name,
        reference_temperature=reference_temperature,
        charge_product=charge_product,
    )
    start = fit_surface(
        seen,
        temperature_law=choices.temperature_law,
        salt_law=salt_law,
        reference_temperature=choices.reference_temperature,
        charge_product=charge_product,
        ion_size=ion_size,
        scatter=scatter,
    )
    # Errors of T and I count as they did there: along the slopes of the fit to ln k.
    errors = start.errors
    k = np.exp(seen.ln_k + errors.shift)
    # Equal absolute weights need a size near that of k, so that nothing under- or overflows.
    size = k if seen.u_given else np.full(seen.runs, k.max())
    rows = start.surface.ln_k(errors.T, errors.I)

    def solved(errors: RunErrors) -> LinearFit:
        problem = _Problem(rows, k, errors.u * size, errors.shared)
        return _gauss_newton(problem, start.solution.parameters)

    solution = solved(errors)
    independent = independent_scatter(solution, errors, solved)
    judged = judge_scatter(
        solution.chi_square, solution.degrees_of_freedom, stated=seen.u_given, choice=scatter
    )
    judged = independent.told(judged)
    return replace(
        start,
        solution=solution,
        scatter_solution=independent.solution,
        distribution=headline_distribution(start.surface, solution, independent, judged),
        scatter=judged,
    )


@dataclass(frozen=True, eq=False)
class CrossCheck:
    """One named law fitted to k and to ln k.

    Attributes
    ----------
    in_ln_k, in_k
        The two fits.
    shifts
        Parameter to (fit of k less fit of ln k) over the standard uncertainty of the latter.
    """

    in_ln_k: SurfaceFit
    in_k: SurfaceFit
    shifts: Mapping[str, float]


def cross_check(laws: Sequence[SurfaceFit]) -> CrossCheck | None:
    """Fit the law of the lowest AICc to k itself.

    Parameters
    ----------
    laws
        Named laws fitted to ln k.

    Returns
    -------
    CrossCheck or None
        None where no law has an AICc, or the fit of k does not converge: errors of k are then so
        large that no fit of it means anything, which its uncertainties say already.
    """
    able = [law for law in laws if not math.isnan(law.aicc)]
    if not able:
        return None
    best = min(able, key=lambda law: law.aicc)
    salt_law = best.surface.salt_law
    try:
        other = fit_in_k(
            best.observations,
            temperature_law=best.temperature_law,
            salt_law=salt_law,
            reference_temperature=best.reference_temperature,
            scatter="scatter" if best.scatter.from_scatter else "given",
        )
    except InputError:
        return None
    shifts = {}
    for name, before in best.parameters.items():
        u = float(before.standard_uncertainty)
        if not before.given and u > 0:
            shifts[name] = (float(other.parameters[name].value) - float(before.value)) / u
    return CrossCheck(best, other, shifts)


@dataclass(frozen=True, eq=False)
class _Problem:
    """k with its errors, and ln k as an affine function of the parameters."""

    rows: Rows
    k: FloatArray
    u: FloatArray
    shared: FloatArray

    def model(self, theta: FloatArray) -> FloatArray:
        with np.errstate(over="ignore"):
            return np.asarray(np.exp(self.rows.offset + self.rows.rows @ theta))

    def step(self, theta: FloatArray) -> LinearFit:
        """Linearise at `theta`; errors that runs share move ln k by J, and so k by k J."""
        model = self.model(theta)[:, None]
        return solve(
            model * self.rows.rows, self.k - model[:, 0], self.u, shared=model * self.shared
        )

    def misfit(self, theta: FloatArray) -> float:
        """Generalised χ² at `theta`, by Woodbury's identity; infinite where k overflows."""
        model = self.model(theta)
        if not np.all(np.isfinite(model)):
            return np.inf
        residual = (self.k - model) / self.u
        J = (model / self.u)[:, None] * self.shared
        pulled = J.T @ residual
        inner = np.eye(J.shape[1]) + J.T @ J
        return float(residual @ residual - pulled @ np.linalg.solve(inner, pulled))


def _gauss_newton(problem: _Problem, start: FloatArray) -> LinearFit:
    """Minimise the generalised χ² of k; the last linear problem carries the covariance.

    Raises
    ------
    InputError
        If it does not converge.
    """
    theta, misfit = start, problem.misfit(start)
    for _ in range(_MOST_STEPS):
        step = problem.step(theta)
        size = float(np.max(np.abs(step.parameters) / np.sqrt(np.diag(step.covariance))))
        if size < _SETTLED_STEP:
            return replace(step, parameters=frozen(theta + step.parameters))
        for halvings in range(_MOST_HALVINGS):
            moved = theta + step.parameters * 0.5**halvings
            better = problem.misfit(moved)
            if better <= misfit:
                break
        theta, misfit = moved, better
    raise InputError(
        f"the fit of k itself did not converge in {_MOST_STEPS} steps",
        "fit ln k instead, or look for runs far from the others",
    )
