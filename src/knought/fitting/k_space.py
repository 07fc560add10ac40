"""The same surface fitted to k itself instead of ln k: a cross-check of the error model.

Errors normal in k and errors normal in ln k differ where they are large, or where the weights do:
without stated uncertainties, ln k gives every run the same relative weight and k the same absolute
one. Gauss-Newton with step halving from the solution in ln k; k = exp(offset + X θ) makes the
Jacobian k X.
"""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING

import numpy as np

from knought.arrays import frozen
from knought.errors import InputError
from knought.fitting.distribution import ParameterDistribution
from knought.fitting.fit import resolve
from knought.fitting.observations import observe
from knought.fitting.scatter import judge_scatter
from knought.fitting.surface_fit import SurfaceFit, fit_surface
from knought.numerics.least_squares import LinearFit, solve

if TYPE_CHECKING:
    from knought.arrays import FloatArray
    from knought.fitting.scatter import ScatterChoice
    from knought.laws.surface import Rows
    from knought.measurement.table import RateTable

__all__ = ["fit_in_k"]

_MOST_STEPS = 200
_MOST_HALVINGS = 40
_CONVERGED = 1e-12


def fit_in_k(
    rates: RateTable,
    *,
    temperature_law: str | None = None,
    salt_law: str = "none",
    reference_temperature: float | None = None,
    charge_product: float | None = None,
    ion_size: float | None = None,
    scatter: ScatterChoice | None = None,
) -> SurfaceFit:
    """Fit one law pair to k by weighted least squares in k.

    Parameters
    ----------
    rates
        The table; where it states no uncertainties, every k has the same absolute weight.
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
    seen = observe(rates)
    choices = resolve(
        seen,
        temperature_law=temperature_law,
        salt_law=salt_law,
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
    k = np.exp(seen.ln_k)
    # Equal absolute weights need a size near that of k, so that nothing under- or overflows.
    u = seen.u * k if seen.u_given else np.full(seen.runs, k.max()) * seen.u
    rows = start.surface.ln_k(seen.T, seen.ionic_strength)
    solution = _gauss_newton(rows, k, u, start.solution.parameters)
    judged = judge_scatter(
        solution.chi_square, solution.degrees_of_freedom, stated=seen.u_given, choice=scatter
    )
    scale = judged.factor
    return replace(
        start,
        solution=solution,
        scatter_solution=replace(
            solution,
            covariance=frozen(solution.covariance * judged.birge_ratio**2),
            gain=frozen(solution.gain * judged.birge_ratio),
        ),
        distribution=ParameterDistribution(
            names=start.distribution.names,
            weights=np.ones(1),
            means=solution.parameters[None],
            covariances=solution.covariance[None] * scale**2,
            degrees_of_freedom=judged.headline_degrees_of_freedom,
        ),
        scatter=judged,
    )


def _gauss_newton(rows: Rows, k: FloatArray, u: FloatArray, start: FloatArray) -> LinearFit:
    """Minimise Σ((k - exp(offset + X θ))/u)²; the last linear problem carries the covariance.

    Raises
    ------
    InputError
        If it does not converge.
    """
    theta = start
    model = np.exp(rows.offset + rows.rows @ theta)
    misfit = float(np.sum(((k - model) / u) ** 2))
    for _ in range(_MOST_STEPS):
        step = solve(model[:, None] * rows.rows, k - model, u)
        size = float(np.max(np.abs(step.parameters) / np.sqrt(np.diag(step.covariance))))
        theta, model, better = _halved(rows, k, u, theta, step.parameters, misfit)
        gained = misfit - better
        misfit = better
        # Settled once a step is a negligible part of a standard uncertainty, or gains nothing.
        if size < 1e-9 or gained <= _CONVERGED * misfit:
            final = solve(model[:, None] * rows.rows, k - model, u)
            return replace(final, parameters=theta + final.parameters)
    raise InputError(
        f"the fit of k itself did not converge in {_MOST_STEPS} steps",
        "fit ln k instead, or look for runs far from the others",
    )


def _halved(
    rows: Rows,
    k: FloatArray,
    u: FloatArray,
    theta: FloatArray,
    step: FloatArray,
    misfit: float,
) -> tuple[FloatArray, FloatArray, float]:
    """Take the step, halved until the misfit does not rise."""
    for halvings in range(_MOST_HALVINGS):
        moved = theta + step * 0.5**halvings
        with np.errstate(over="ignore"):
            model = np.exp(rows.offset + rows.rows @ moved)
            better = float(np.sum(((k - model) / u) ** 2))
        if better <= misfit:
            return moved, model, better
    return theta, np.exp(rows.offset + rows.rows @ theta), misfit
