"""What is known of the linear parameters: a mixture of multivariate distributions.

A named law gives one component; the open law one for every cell of its grid (and every size of the
scatter, where that is estimated). Everything derived is an affine function of the parameters in
each component, so it is again a mixture, in closed form.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from knought.arrays import FloatArray, IndexArray, frozen
from knought.laws.surface import Rows
from knought.numerics.quantiles import Mixture
from knought.numerics.scatter_beside_known import scatter_beside_known

__all__ = ["ParameterDistribution"]


@dataclass(frozen=True, eq=False)
class ParameterDistribution:
    """A mixture of multivariate normal (or Student t) distributions of the parameters.

    Parameters
    ----------
    names
        Names of the p linear parameters.
    weights : (c,) ndarray
        Weights of the components, adding up to one.
    means : (c, p) ndarray
        Mean of each component.
    covariances : (c, p, p) ndarray
        Covariance of each component (scale matrix of a Student t one).
    degrees_of_freedom
        Infinite for normal components.
    cell : (c,) ndarray of int
        Which cell of a stacked salt law each component belongs to; zeros for a named law.
    known : (p, p) ndarray, optional
        The part of the one component's covariance that has no degrees of freedom because the size
        of its errors is known; the rest is from the scatter and has `degrees_of_freedom`.
    """

    names: tuple[str, ...]
    weights: FloatArray
    means: FloatArray
    covariances: FloatArray
    degrees_of_freedom: float = math.inf
    cell: IndexArray | None = None
    known: FloatArray | None = None

    def of(self, rows: Rows) -> Mixture:
        """Return the distribution of affine functions of the parameters.

        Parameters
        ----------
        rows
            Offsets ``(n,)`` and rows ``(n, p)``, with a leading axis for the cells where they
            differ between them.

        Returns
        -------
        Mixture
            Of n results.
        """
        offset, matrix = self._by_component(rows)
        locations = offset + np.einsum("...np,...p->...n", matrix, self.means)
        half = np.einsum("...np,...pq->...nq", matrix, self.covariances)
        variances = np.maximum(np.einsum("...np,...np->...n", half, matrix), 0)
        if self.known is not None:
            known = np.einsum("np,pq,nq->n", matrix, self.known, matrix)
            known = np.clip(known, 0, variances[0])
            return scatter_beside_known(
                locations[0], variances[0] - known, known, self.degrees_of_freedom
            )
        scales = np.sqrt(variances)
        return Mixture(self.weights, locations, scales, self.degrees_of_freedom)

    def joint(self, rows: Rows) -> tuple[FloatArray, FloatArray]:
        """Return mean ``(n,)`` and covariance ``(n, n)`` of affine functions, jointly."""
        offset, matrix = self._by_component(rows)
        locations = offset + np.einsum("...np,...p->...n", matrix, self.means)
        half = np.einsum("...np,...pq->...nq", matrix, self.covariances)
        each = np.einsum("...np,...mp->...nm", half, matrix)
        within = np.tensordot(self.weights, each, axes=1)
        mean = self.weights @ locations
        away = locations - mean
        return mean, within + np.einsum("c,cn,cm->nm", self.weights, away, away)

    def draws(self, rows: Rows, size: int, random: np.random.Generator) -> FloatArray:
        """Return random values ``(size, n)`` of affine functions of the parameters.

        Parameters
        ----------
        rows
            As for :meth:`of`.
        size
            How many.
        random
            The generator, which the caller has seeded.
        """
        chosen = random.choice(len(self.weights), size, p=self.weights / self.weights.sum())
        known = np.zeros_like(self.covariances[0]) if self.known is None else self.known
        normal = random.standard_normal((size, len(self.names)))
        if math.isfinite(self.degrees_of_freedom):
            nu = self.degrees_of_freedom
            normal *= np.sqrt(nu / random.chisquare(nu, size))[:, None]
        theta = self.means[chosen]
        theta = theta + np.einsum("cpq,cq->cp", _roots(self.covariances - known)[chosen], normal)
        if self.known is not None:
            theta = theta + random.standard_normal(theta.shape) @ _roots(known).T
        offset, matrix = self._by_component(rows)
        offset = offset[chosen] if offset.ndim == 2 else offset
        matrix = matrix[chosen] if matrix.ndim == 3 else matrix
        return np.asarray(offset + np.einsum("...np,...p->...n", matrix, theta))

    @property
    def mean(self) -> FloatArray:
        """Mean of the parameters, shape ``(p,)``."""
        return frozen(self.joint(self._identity())[0])

    @property
    def covariance(self) -> FloatArray:
        """Covariance of the parameters, within components plus between them, ``(p, p)``."""
        return frozen(self.joint(self._identity())[1])

    def parameter(self, name: str) -> Mixture:
        """Return the distribution of one parameter (zero-dimensional)."""
        j = self.names.index(name)
        row = np.zeros((1, len(self.names)))
        row[0, j] = 1.0
        return self.of(Rows(np.zeros(1), row)).first()

    def _identity(self) -> Rows:
        p = len(self.names)
        return Rows(np.zeros(p), np.eye(p))

    def _by_component(self, rows: Rows) -> tuple[FloatArray, FloatArray]:
        cell = np.zeros(len(self.weights), dtype=np.intp) if self.cell is None else self.cell
        offset = rows.offset[cell] if rows.offset.ndim == 2 else rows.offset
        matrix = rows.rows[cell] if rows.rows.ndim == 3 else rows.rows
        return offset, matrix


def _roots(covariances: FloatArray) -> FloatArray:
    """Return roots of covariances, also of singular ones."""
    value, vector = np.linalg.eigh(covariances)
    return np.asarray(vector * np.sqrt(np.maximum(value, 0))[..., None, :])
