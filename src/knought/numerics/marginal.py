"""Linear models with a few nonlinear unknowns on a grid, integrated over in closed form.

At each point of a grid (a "cell") the model is linear with Gaussian errors and priors, so the
parameters' distribution and the evidence are closed forms. A further axis may scale the
uncertainties (σ), for data whose scatter is unknown. The answer is a mixture with one component a
cell and σ, weighted by evidence times prior. No sampling.

One :class:`CellSolver` factorises the designs once and serves any number of data sets measured at
the same conditions with the same weights: the single study and the simulation of thousands run
through the same lines.

For cell j and scale σ, with whitened design A_j (rows divided by u, shared errors as further
columns), the unknowns have the precision  A_jᵀ A_j/σ² + priors.  Two orthogonal factorisations
give it without forming a product: A_j = Q_j R_j, then the small stack (R_j/σ; priors).
"""

from __future__ import annotations

from copy import copy
from dataclasses import dataclass

import numpy as np

from knought.arrays import FloatArray, frozen

__all__ = ["CellSolutions", "CellSolver"]

#: Data sets are solved in blocks of about this many numbers, so that memory stays bounded.
_BLOCK_NUMBERS = 4_000_000


@dataclass(frozen=True, eq=False)
class CellSolutions:
    """Solutions of m data sets in every cell c and at every scale s.

    Attributes
    ----------
    log_weight : (m, c, s) ndarray
        Logarithm of evidence times prior weight, up to a constant that is the same for all m.
    means : (m, c, s, p) ndarray
        Parameters.
    covariances : (c, s, p, p) ndarray
        Their covariance, the same for every data set.
    chi_square : (m, c, s) ndarray
        Data misfit over σ² plus the priors' terms.
    """

    log_weight: FloatArray
    means: FloatArray
    covariances: FloatArray
    chi_square: FloatArray

    @property
    def weights(self) -> FloatArray:
        """Weights of the components, shape ``(m, c s)``, each row adding up to one."""
        flat = self.log_weight.reshape(len(self.log_weight), -1)
        weight = np.exp(flat - flat.max(axis=1, keepdims=True))
        return np.asarray(weight / weight.sum(axis=1, keepdims=True))


class CellSolver:
    """Designs of all cells, factorised once.

    Parameters
    ----------
    design : (c, n, p) ndarray
        Design matrix of each cell.
    offset : (c, n) or (n,) ndarray
        Known part of the observations in each cell.
    uncertainties : (n,) ndarray
        Standard uncertainties of the observations; relative weights where σ is unknown.
    log_prior : (c,) ndarray
        Logarithm of each cell's prior weight.
    prior_rows, prior_values : (r, p), (r,) ndarray
        Gaussian priors of parameters, each row divided by its standard uncertainty.
    shared : (n, q) ndarray, optional
        What one standard deviation of each shared error does to each observation.
    scales : (s,) ndarray
        Values of σ, equally spaced in ln σ under the prior 1/σ; ``[1]`` where u is known.
    """

    def __init__(
        self,
        design: FloatArray,
        offset: FloatArray,
        uncertainties: FloatArray,
        log_prior: FloatArray,
        *,
        prior_rows: FloatArray,
        prior_values: FloatArray,
        shared: FloatArray | None = None,
        scales: FloatArray | None = None,
    ) -> None:
        cells, n, self._p = design.shape
        shared = np.zeros((n, 0)) if shared is None else shared
        self._scales = np.ones(1) if scales is None else np.asarray(scales, dtype=float)
        self._weight = 1.0 / uncertainties
        self._offset = np.broadcast_to(offset, (cells, n))
        self._log_prior = log_prior
        hidden = shared.shape[1]
        whitened = (
            np.concatenate([design, np.broadcast_to(shared, (cells, n, hidden))], axis=2)
            * self._weight[:, None]
        )
        self._whitened = whitened
        self._q, self._r = np.linalg.qr(whitened)
        self._priors = np.zeros((hidden + len(prior_rows), self._p + hidden))
        self._priors[:hidden, self._p :] = np.eye(hidden)
        self._priors[hidden:, : self._p] = prior_rows
        self._prior_values = np.concatenate([np.zeros(hidden), prior_values])
        self._factorise()

    def with_scales(self, scales: FloatArray) -> CellSolver:
        """Return the solver of the same designs at other values of σ, ``(s,)``."""
        other = copy(self)
        other._scales = np.asarray(scales, dtype=float)
        other._factorise()
        return other

    def _factorise(self) -> None:
        """Factorise the small stack (R/σ; priors) of every cell and scale."""
        scaled = self._r[:, None] / self._scales[:, None, None]
        priors = np.broadcast_to(self._priors, (*scaled.shape[:2], *self._priors.shape))
        self._small_q, self._small_r = np.linalg.qr(np.concatenate([scaled, priors], axis=2))
        inverse = np.linalg.inv(self._small_r)  # triangular and small
        self._inverse = inverse
        self._covariances = (inverse @ np.swapaxes(inverse, -1, -2))[..., : self._p, : self._p]
        diagonal = np.abs(np.diagonal(self._small_r, axis1=-2, axis2=-1))
        self._log_determinant = np.log(diagonal).sum(axis=-1)

    @property
    def covariances(self) -> FloatArray:
        """Covariance of the parameters in each cell and at each scale, ``(c, s, p, p)``."""
        return self._covariances

    @property
    def scales(self) -> FloatArray:
        """Values of σ, shape ``(s,)``."""
        return self._scales

    def gains(self) -> FloatArray:
        """Return what one standard deviation of each observation, shared error and prior does.

        Returns
        -------
        (c, s, p, n + q + r) ndarray
            To the parameters in each cell and at each scale; gain gainᵀ is the covariance there.
        """
        size = self._r.shape[-2]
        top = np.swapaxes(self._small_q[..., :size, :], -1, -2)
        bottom = np.swapaxes(self._small_q[..., size:, :], -1, -2)
        data = self._inverse @ (top @ np.swapaxes(self._q, 1, 2)[:, None])
        return np.concatenate([data, self._inverse @ bottom], axis=-1)[..., : self._p, :]

    def solve(self, observed: FloatArray) -> CellSolutions:
        """Solve data sets that share the conditions and the weights.

        Parameters
        ----------
        observed : (m, n) ndarray
            Observations of m data sets.

        Returns
        -------
        CellSolutions
        """
        per_set = self._whitened.shape[0] * (
            self._whitened.shape[1] + 3 * len(self._scales) * self._whitened.shape[2]
        )
        block = max(1, _BLOCK_NUMBERS // per_set)
        parts = [
            self._solve_block(observed[start : start + block])
            for start in range(0, len(observed), block)
        ]
        return CellSolutions(
            frozen(np.concatenate([part[0] for part in parts])),
            frozen(np.concatenate([part[1] for part in parts])),
            self._covariances,
            frozen(np.concatenate([part[2] for part in parts])),
        )

    def _solve_block(self, observed: FloatArray) -> tuple[FloatArray, FloatArray, FloatArray]:
        m, n = observed.shape
        # With fewer observations than unknowns (priors make up for them), R is not square.
        cells, scales, q = len(self._q), len(self._scales), self._r.shape[-2]
        # About a solution of one cell, so that squares of large numbers never cancel. Cells lead
        # in every array here: the products then run as matrix multiplications.
        start = self._starting_point(observed)
        right = (observed - self._offset[:, None, :]) * self._weight
        right -= start @ np.swapaxes(self._whitened, 1, 2)
        projected = right @ self._q
        misfit = np.maximum(
            np.einsum("cmn,cmn->cm", right, right) - np.einsum("cmq,cmq->cm", projected, projected),
            0.0,
        )
        prior_values = self._prior_values - start @ self._priors.T
        scaled = projected[:, None] / self._scales[:, None, None]
        solution = scaled @ self._small_q[..., :q, :]
        solution += prior_values @ self._small_q[..., q:, :]
        length = np.einsum("csmq,csmq->csm", scaled, scaled) + np.sum(prior_values**2, axis=1)
        chi_square = np.maximum(length - np.einsum("csmq,csmq->csm", solution, solution), 0.0)
        chi_square += misfit[:, None] / self._scales[:, None] ** 2
        means = (solution @ np.swapaxes(self._inverse, -1, -2) + start)[..., : self._p]
        constant = n * np.log(self._scales) + self._log_determinant - self._log_prior[:, None]
        log_weight = -0.5 * chi_square - constant[..., None]
        shape = (m, cells, scales)
        return (
            np.moveaxis(log_weight, -1, 0).reshape(shape),
            np.moveaxis(means, 2, 0).reshape(*shape, self._p),
            np.moveaxis(chi_square, -1, 0).reshape(shape),
        )

    def _starting_point(self, observed: FloatArray) -> FloatArray:
        """Solve the middle cell with its priors by least squares, ``(m, p + q)``."""
        middle = int(np.argmax(self._log_prior))
        matrix = np.concatenate([self._whitened[middle], self._priors])
        target = np.concatenate(
            [
                (observed - self._offset[middle]) * self._weight,
                np.broadcast_to(self._prior_values, (len(observed), len(self._prior_values))),
            ],
            axis=1,
        )
        q, upper = np.linalg.qr(matrix)
        return np.asarray(np.linalg.solve(upper, q.T @ target.T).T)
