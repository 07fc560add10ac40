"""What a design would tell, in every cell of the open law at once, fast enough to search with.

The idea first. For normal errors, what runs tell of a linear model are sums over the runs; one run
more is a rank-one update of them (Sherman and Morrison, Ann. Math. Stat. 21 (1950) 124). So with
the information of a design at hand, the effect of one run more at *every* candidate costs no more
than a product of matrices. For cell j with design row x, assumed observation y, weight δ = 1/u²:

    s = xᵀ M⁻¹ x,  r = y - xᵀ θ,  g = 1/(1/δ + s)
    c θ  ->  c θ + c M⁻¹ x g r          (location of a target c)
    c M⁻¹ cᵀ  ->  c M⁻¹ cᵀ - g (c M⁻¹ x)²   (its variance in the cell)
    ln w  ->  ln w - g r²/2 - ln(1 + δ s)/2  (weight of the cell, as evidence)

The observations are those that the assumed truth would give without error, so that cells that the
runs would contradict lose their weight, and the variance expected is that within cells plus that
between them. Results are reported from :mod:`.plan_expectation`, through the solver that fits real
runs; this is the fast road to the design only.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

if TYPE_CHECKING:
    from knought.arrays import FloatArray
    from knought.laws.surface import Rows

__all__ = ["CellInformation", "CellState", "Moments"]

#: Precision that every scaled parameter has before any run, beside that of one run: so small that
#: it changes u by less than 0.01 %, and enough that a design which leaves a parameter open is
#: merely very bad, and an update from it still good to 0.001 %.
_RIDGE = 1e-7


@dataclass(frozen=True, eq=False)
class Moments:
    """What is known of t targets after each of d designs, cell by cell.

    Attributes
    ----------
    log_weight : (c, d) ndarray
        Logarithm of each cell's weight, up to a constant for each design.
    location : (c, d, t) ndarray
    covariance : (c, d, t, t) ndarray
    """

    log_weight: FloatArray
    location: FloatArray
    covariance: FloatArray

    @property
    def weight(self) -> FloatArray:
        """Weights of the cells, adding up to one for each design, shape ``(c, d)``."""
        weight = np.exp(self.log_weight - self.log_weight.max(axis=0))
        return np.asarray(weight / weight.sum(axis=0))

    @property
    def total(self) -> FloatArray:
        """Covariance of the mixture, within cells plus between them, ``(d, t, t)``."""
        weight = self.weight
        mean = np.einsum("cd,cdt->dt", weight, self.location)
        away = self.location - mean
        within = np.einsum("cd,cdtu->dtu", weight, self.covariance)
        return np.asarray(within + np.einsum("cd,cdt,cdu->dtu", weight, away, away))


@dataclass(frozen=True, eq=False)
class CellState:
    """The information of d designs: what the updates start from.

    Attributes
    ----------
    inverse : (d, c, p, p) ndarray
    theta : (d, c, p) ndarray
    log_weight : (d, c) ndarray
    chi_square : (d, c) ndarray
        Misfit of the assumed observations, priors included.
    """

    inverse: FloatArray
    theta: FloatArray
    log_weight: FloatArray
    chi_square: FloatArray


class CellInformation:
    """Candidates of a plan as seen by every cell.

    Parameters
    ----------
    rows : (c, N, p) ndarray
        Design row of each candidate in each cell; columns of shared errors included.
    observed : (c, N) ndarray
        Assumed observation less the known part of it.
    u : (N,) ndarray
        Standard uncertainty of ln k of one run at each candidate.
    log_prior : (c,) ndarray
        Logarithm of the cells' weights before any run.
    prior_rows, prior_values : (r, p), (r,) ndarray
        Gaussian priors, each row divided by its standard uncertainty.
    made : tuple of ndarray, optional
        Rows ``(c, m, p)``, observations ``(c, m)`` and u ``(m,)`` of runs already made.
    """

    def __init__(
        self,
        rows: FloatArray,
        observed: FloatArray,
        u: FloatArray,
        log_prior: FloatArray,
        prior_rows: FloatArray,
        prior_values: FloatArray,
        made: tuple[FloatArray, FloatArray, FloatArray] | None = None,
    ) -> None:
        p = rows.shape[-1]
        size = np.abs(rows).max(axis=(0, 1))
        # Scaled columns keep the sums well conditioned: energies have columns of 1e-5 mol/J.
        self._scale = np.where(size > 0, size, 1.0)
        self._rows = rows / self._scale
        self._observed = observed
        self._precision = 1.0 / u**2
        self._log_prior = log_prior
        prior = prior_rows / self._scale
        base = np.eye(p) * _RIDGE * self._precision.min() + prior.T @ prior
        cells = len(log_prior)
        self._base = np.broadcast_to(base, (cells, p, p)).copy()
        self._vector = np.broadcast_to(prior.T @ prior_values, (cells, p)).copy()
        self._square = np.full(cells, float(prior_values @ prior_values))
        if made is not None:
            self._add_made(*made)

    def _add_made(self, rows: FloatArray, observed: FloatArray, u: FloatArray) -> None:
        whitened = rows / self._scale / u[:, None]
        target = observed / u
        self._base += np.swapaxes(whitened, 1, 2) @ whitened
        self._vector += np.einsum("cmp,cm->cp", whitened, target)
        self._square += np.einsum("cm,cm->c", target, target)

    def __len__(self) -> int:
        return len(self._precision)

    def state(self, runs: FloatArray) -> CellState:
        """Return the information of designs.

        Parameters
        ----------
        runs : (d, N) ndarray
            Number of runs at each candidate; any number at least zero.
        """
        weight = runs * self._precision
        weighted = self._rows[None] * weight[:, None, :, None]
        information = self._base + np.swapaxes(weighted, -1, -2) @ self._rows
        vector = self._vector + np.einsum("dcnp,cn->dcp", weighted, self._observed)
        square = self._square + weight @ (self._observed**2).T
        inverse = np.asarray(np.linalg.inv(information), dtype=float)
        theta = np.einsum("dcpq,dcq->dcp", inverse, vector)
        misfit = np.maximum(square - np.einsum("dcp,dcp->dc", theta, vector), 0.0)
        determinant = np.linalg.slogdet(information)[1]
        return CellState(inverse, theta, self._log_prior - 0.5 * misfit - 0.5 * determinant, misfit)

    def moments(self, state: CellState, target: Rows) -> Moments:
        """Return what is known of `target` in each of the designs of `state`."""
        c = target.rows / self._scale
        location = target.offset + np.einsum("ctp,dcp->dct", c, state.theta)
        covariance = np.einsum("ctp,dcpq,cuq->dctu", c, state.inverse, c)
        return Moments(
            state.log_weight.T, np.swapaxes(location, 0, 1), np.swapaxes(covariance, 0, 1)
        )

    def moments_with_one_more(self, state: CellState, target: Rows, amount: float = 1.0) -> Moments:
        """Return what is known of `target` after one run more at each of the N candidates.

        Parameters
        ----------
        state
            Of one design.
        target
            Affine functions of the parameters, offset ``(c, t)`` and rows ``(c, t, p)``.
        amount
            How much of a run is added.
        """
        c = target.rows / self._scale
        inverse, theta = state.inverse[0], state.theta[0]
        moved, gain, residual, grown = self._update(state, amount)
        across = moved @ np.swapaxes(c, 1, 2)
        location = target.offset + np.einsum("ctp,cp->ct", c, theta)
        covariance = c @ inverse @ np.swapaxes(c, 1, 2)
        return Moments(
            state.log_weight[0][:, None] - 0.5 * gain * residual**2 - 0.5 * np.log1p(grown),
            location[:, None, :] + across * (gain * residual)[..., None],
            covariance[:, None] - across[..., :, None] * (across * gain[..., None])[..., None, :],
        )

    def misfit_with_one_more(self, state: CellState, amount: float = 1.0) -> FloatArray:
        """Return χ² after one run more at each candidate, ``(c, N)``."""
        _, gain, residual, _ = self._update(state, amount)
        return np.asarray(state.chi_square[0][:, None] + gain * residual**2)

    def _update(
        self, state: CellState, amount: float
    ) -> tuple[FloatArray, FloatArray, FloatArray, FloatArray]:
        moved = self._rows @ state.inverse[0]
        spread = np.einsum("cnp,cnp->cn", moved, self._rows)
        residual = self._observed - np.einsum("cnp,cp->cn", self._rows, state.theta[0])
        weight = amount * self._precision
        return moved, 1.0 / (1.0 / weight + spread), residual, weight * spread
