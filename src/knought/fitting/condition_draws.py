"""Draws of the parameters where temperatures and ionic strengths have errors: one refit a draw.

Errors of T and I enter ln k through laws that are not linear in them, so that the gain of the
linear propagation is only their first-order effect. Here each draw reads every run at a temperature
and an ionic strength drawn from what is known of them, the run's own error and those that runs
share, and fits the surface there by generalised least squares. The weights stay those of the fit.
What is nonlinear in the errors (the 1/T of the temperature law, √I, properties of water) is so
taken as it is; errors of k are errors of ln k, as everywhere.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

import numpy as np

from knought.chemistry.activity import OpenForm
from knought.chemistry.water import COLDEST, HOTTEST
from knought.fitting.open_fit import OpenFit, interaction_prior
from knought.measurement.shared_errors import unit_draws

if TYPE_CHECKING:
    from collections.abc import Callable

    from knought.arrays import FloatArray, IndexArray
    from knought.fitting.found import Found
    from knought.fitting.observations import Observations
    from knought.laws.surface import Surface
    from knought.measurement.shared_errors import SharedError

__all__ = ["condition_sampler", "has_condition_errors"]


def has_condition_errors(seen: Observations) -> bool:
    """Return whether any error moves the temperatures or ionic strengths of the runs."""
    return seen.has_abscissa_errors or any(error.kind != "factor" for error in seen.shared)


@dataclass(frozen=True, eq=False)
class _Inputs:
    """What m draws read for n runs.

    Attributes
    ----------
    ln_k, T, I : (m, n) ndarray
    """

    ln_k: FloatArray
    T: FloatArray
    I: FloatArray


def _draw_inputs(
    found: Found, random: np.random.Generator, scale: FloatArray, size: int
) -> _Inputs:
    """Draw what the runs read; `scale` (m,) multiplies the errors that are each run's own."""
    seen, n = found.observations, found.observations.runs
    own = scale[:, None]
    ln_k = seen.ln_k + own * np.sqrt(found.errors.variances[0]) * random.standard_normal((size, n))
    T = np.broadcast_to(seen.T, (size, n)).copy()
    I = np.broadcast_to(seen.ionic_strength, (size, n)).copy()
    if seen.has_abscissa_errors and seen.u_T is not None:
        T += own * seen.u_T * random.standard_normal((size, n))
    if seen.has_abscissa_errors and seen.u_I is not None:
        I += own * seen.u_I * random.standard_normal((size, n))
    for error in seen.own if seen.u_given else ():
        each = unit_draws(error, random, size * n).reshape(size, n)
        _add(error, own * error.u * error.reach(n, seen.batch) * each, ln_k, T, I, seen)
    for error in seen.shared:
        moved = (error.u * unit_draws(error, random, size))[:, None] * error.reach(n, seen.batch)
        _add(error, moved, ln_k, T, I, seen)
    if found.surface.salt_law.needs_water:
        np.clip(T, COLDEST, HOTTEST, out=T)
    return _Inputs(ln_k, T, np.maximum(I, 0.0, out=I))


def _add(
    error: SharedError,
    moved: FloatArray,
    ln_k: FloatArray,
    T: FloatArray,
    I: FloatArray,
    seen: Observations,
) -> None:
    """Add the draws `moved` (m, n) of an error, in its own unit, to what it moves, in place."""
    if error.kind == "temperature-offset":
        T += moved
    elif error.kind == "temperature-gain":
        T += moved * (seen.T - error.calibrated_at)
    elif error.kind == "ionic-strength-factor":
        I += moved * seen.ionic_strength
    else:
        ln_k += moved


@dataclass(frozen=True, eq=False)
class _Refit:
    """Generalised least squares of many draws about one solution, with the weights of one fit.

    Attributes
    ----------
    centre : (p,) ndarray
        The solution about which the draws are solved, so that nothing cancels.
    whitening : (n, n) ndarray
        Turns errors of ln k into independent ones of unit size.
    basis : (p, p) ndarray
        Turns columns into nearly orthonormal ones: the normal equations then lose no digits.
    prior_rows, prior_values
        Priors of the parameters, each over its standard uncertainty.
    """

    centre: FloatArray
    whitening: FloatArray
    basis: FloatArray
    prior_rows: FloatArray
    prior_values: FloatArray

    def solve(self, surface: Surface, inputs: _Inputs, random: np.random.Generator) -> FloatArray:
        """Return the parameters of each draw, ``(m, p)``; priors are drawn as well."""
        rows = surface.ln_k(inputs.T, inputs.I)
        target = inputs.ln_k - rows.offset - rows.rows @ self.centre
        design = self.whitening @ (rows.rows @ self.basis)
        prior = self.prior_rows @ self.basis
        drawn = random.standard_normal((len(target), len(prior)))
        values = self.prior_values - self.prior_rows @ self.centre + drawn
        transposed = np.swapaxes(design, 1, 2)
        normal = transposed @ design + prior.T @ prior
        right = transposed @ (target @ self.whitening.T)[..., None]
        right += (values @ prior)[..., None]
        return np.asarray(self.centre + np.linalg.solve(normal, right)[..., 0] @ self.basis.T)


def _refit(found: Found, surface: Surface, centre: FloatArray, scale: float) -> _Refit:
    """Prepare the refits with independent errors multiplied by `scale`."""
    seen, errors = found.observations, found.errors
    prior_rows, prior_values = np.zeros((0, len(centre))), np.zeros(0)
    if isinstance(found, OpenFit):
        prior_rows, prior_values = interaction_prior(surface, found.grid.priors)
    variance = np.diag((errors.u * scale) ** 2) + errors.shared @ errors.shared.T
    whitening = np.linalg.inv(np.linalg.cholesky(variance))
    rows = surface.ln_k(seen.T, seen.ionic_strength).rows
    upper = np.linalg.qr(np.concatenate([whitening @ rows, prior_rows]), mode="r")
    return _Refit(centre, whitening, np.linalg.inv(upper), prior_rows, prior_values)


def condition_sampler(
    found: Found,
) -> Callable[[np.random.Generator, int], FloatArray]:
    """Return a function that draws the linear parameters, shape ``(size, p)``, by refitting.

    Parameters
    ----------
    found
        The fit of a named law or of the open law.
    """
    return _open_sampler(found) if isinstance(found, OpenFit) else _named_sampler(found)


def _named_sampler(found: Found) -> Callable[[np.random.Generator, int], FloatArray]:
    factor, nu = found.scatter.factor, found.scatter.headline_degrees_of_freedom
    refit = _refit(found, found.surface, found.distribution.means[0], factor)

    def draw(random: np.random.Generator, size: int) -> FloatArray:
        scale = np.full(size, factor)
        if np.isfinite(nu):
            # The size of the scatter is itself drawn (6.4.9): its u is known to nu degrees.
            scale *= np.sqrt(nu / random.chisquare(nu, size))
        return refit.solve(found.surface, _draw_inputs(found, random, scale, size), random)

    return draw


def _open_sampler(found: OpenFit) -> Callable[[np.random.Generator, int], FloatArray]:
    grid, distribution = found.grid, found.distribution
    scales = found.solver.scales
    cell, step = found.kept // len(scales), found.kept % len(scales)
    central = replace(found.surface, salt_law=grid.central)
    centre = distribution.mean
    refits = {int(s): _refit(found, central, centre, float(scales[s])) for s in np.unique(step)}

    def surface(cells: IndexArray) -> Surface:
        """Return the surface in which each draw has the salt law of its own cell."""
        form = OpenForm(
            grid.ion_size[cells, None],
            grid.linear_coefficient[cells, None],
            grid.follows_water[cells, None],
        )
        return replace(found.surface, salt_law=replace(found.surface.salt_law, form=form))

    def draw(random: np.random.Generator, size: int) -> FloatArray:
        chosen = random.choice(len(distribution.weights), size, p=distribution.weights)
        theta = np.empty((size, len(centre)))
        for s, refit in refits.items():
            mine = np.flatnonzero(step[chosen] == s)
            if mine.size:
                inputs = _draw_inputs(found, random, np.full(mine.size, scales[s]), mine.size)
                theta[mine] = refit.solve(surface(cell[chosen[mine]]), inputs, random)
        return theta

    return draw
