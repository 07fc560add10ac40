"""Generalised linear least squares by orthogonal factorisation.

The problem: observations y with independent standard uncertainties u, and errors that several
observations share, y = X θ + J b + e, e ~ N(0, diag u²), b ~ N(0, 1). The covariance of y is
V = diag(u²) + J Jᵀ, but V is never formed: the shared errors b are unknowns with one further
"observation" b = 0 ± 1 each, and a parameter with a prior is one further observation as well. What
is left is one ordinary least-squares problem,

    [ X/u   J/u ]         [ y/u   ]
    [  0     1  ] (θ)  =  [  0    ]
    [ P/s    0  ] (b)     [ P m/s ]

solved by Householder QR after scaling the columns, with one step of iterative refinement of the
augmented system (Björck, BIT 7 (1967) 257; Numerical Methods for Least Squares Problems, SIAM
1996, sections 2.9.2-2.9.3). No normal equations, no inverse of XᵀX: the covariance comes from the
triangular factor.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TypeAlias

import numpy as np
import numpy.typing as npt

from knought.arrays import FloatArray, frozen

__all__ = ["LinearFit", "ManyFits", "RankDeficiencyError", "solve", "solve_many"]

LongArray: TypeAlias = npt.NDArray[np.longdouble]

#: Singular values below this fraction of the largest (columns scaled to unit length) mean that the
#: observations cannot tell two combinations of parameters apart.
RANK_TOLERANCE = 1e-11

#: Normal equations lose as many digits as the weights 1/u² span decades: beyond this, QR instead.
_LARGEST_WEIGHT_RATIO = 1e6


class RankDeficiencyError(Exception):
    """The observations cannot determine all parameters.

    Parameters
    ----------
    direction : (p,) ndarray
        The combination of parameters (columns scaled to unit length) that they leave free.
    condition
        Ratio of the largest to the smallest singular value of the scaled design.
    """

    def __init__(self, direction: FloatArray, condition: float) -> None:
        self.direction = frozen(direction)
        self.condition = condition
        super().__init__(f"the design is rank-deficient (condition number {condition:.1e})")


@dataclass(frozen=True, eq=False)
class LinearFit:
    """A least-squares solution.

    Attributes
    ----------
    parameters : (p,) ndarray
    covariance : (p, p) ndarray
        From the uncertainties as given (scale one).
    estimator : (p, n) ndarray
        G in θ = G y (+ what the priors add): what each observation contributes.
    gain : (p, n + s + r) ndarray
        What one standard deviation of each observation, shared error and prior does to θ, in that
        order; gain gainᵀ is the covariance, so that its squares are the budget of every result.
    residuals : (n,) ndarray
        y - X θ, in the unit of y; shared errors are not taken out of them.
    independent : (n,) ndarray
        The same with the shared errors found taken out, over u.
    leverage : (n,) ndarray
        Diagonal of the projection of the whitened observations.
    chi_square
        Generalised: (y - Xθ)ᵀ V⁻¹ (y - Xθ), plus the priors' terms.
    degrees_of_freedom
        Observations plus priors less parameters.
    condition
        Condition number of the scaled design.
    """

    parameters: FloatArray
    covariance: FloatArray
    estimator: FloatArray
    gain: FloatArray
    residuals: FloatArray
    independent: FloatArray
    leverage: FloatArray
    chi_square: float
    degrees_of_freedom: int
    condition: float


def solve(
    design: FloatArray,
    observed: FloatArray,
    uncertainties: FloatArray | None = None,
    *,
    shared: FloatArray | None = None,
    prior_rows: FloatArray | None = None,
    prior_values: FloatArray | None = None,
) -> LinearFit:
    """Solve one generalised least-squares problem.

    Parameters
    ----------
    design : (n, p) ndarray
        X.
    observed : (n,) ndarray
        y.
    uncertainties : (n,) ndarray, optional
        Independent standard uncertainties u of y; ones if not given.
    shared : (n, s) ndarray, optional
        J: what one standard deviation of each shared error does to each observation.
    prior_rows : (r, p) ndarray, optional
        Rows P/s of further observations of the parameters, each already divided by its standard
        uncertainty.
    prior_values : (r,) ndarray, optional
        Their observed values, divided likewise; zeros if not given.

    Returns
    -------
    LinearFit

    Raises
    ------
    RankDeficiencyError
        If the observations and priors leave a combination of parameters undetermined.
    """
    n, p = design.shape
    # Weighing in double precision would round the design, and a design of condition number κ
    # makes κ times that of it: the refinement works on rows weighed in extended precision.
    ones = np.ones(n, dtype=np.longdouble)
    long_weight = ones if uncertainties is None else ones / uncertainties
    weight = long_weight.astype(float)
    shared = np.zeros((n, 0)) if shared is None else shared
    prior_rows = np.zeros((0, p)) if prior_rows is None else prior_rows
    s, r = shared.shape[1], len(prior_rows)
    prior_values = np.zeros(r) if prior_values is None else prior_values

    long_matrix = np.zeros((n + s + r, p + s), dtype=np.longdouble)
    long_matrix[:n, :p] = design * long_weight[:, None]
    long_matrix[:n, p:] = shared * long_weight[:, None]
    long_matrix[n : n + s, p:] = np.eye(s)
    long_matrix[n + s :, :p] = prior_rows
    right = np.concatenate([observed * long_weight, np.zeros(s), prior_values])
    matrix = long_matrix.astype(float)

    scale = _column_scale(matrix)
    if len(matrix) < p + s:
        _, _, right_vectors = np.linalg.svd(matrix / scale)
        raise RankDeficiencyError(right_vectors[-1][:p], np.inf)
    q, upper = np.linalg.qr(matrix / scale)
    condition = _condition(upper, p)
    solution, residual = _refined(
        np.asarray(long_matrix / scale, dtype=np.longdouble), right, q, upper
    )

    inverse = _triangular_inverse(upper) / scale[:, None]
    gain = (inverse @ q.T)[:p]
    return LinearFit(
        parameters=frozen((solution / scale)[:p]),
        covariance=frozen((inverse @ inverse.T)[:p, :p]),
        estimator=frozen(gain[:, :n] * weight),
        gain=frozen(gain),
        residuals=frozen(residual[:n] / weight + shared @ (solution / scale)[p:]),
        independent=frozen(residual[:n]),
        leverage=frozen(np.sum(q[:n] ** 2, axis=1)),
        chi_square=float(residual @ residual),
        degrees_of_freedom=n + r - p,
        condition=condition,
    )


def _column_scale(matrix: FloatArray) -> FloatArray:
    """Return powers of two near the columns' lengths: dividing by them rounds nothing.

    Raises
    ------
    RankDeficiencyError
        If a column is zero.
    """
    length = np.linalg.norm(matrix, axis=0)
    if not np.all(length > 0):
        raise RankDeficiencyError(np.where(length > 0, 0.0, 1.0), np.inf)
    return np.asarray(np.exp2(np.round(np.log2(length))))


def _condition(upper: FloatArray, parameters: int) -> float:
    """Return the condition number of the scaled design.

    Raises
    ------
    RankDeficiencyError
        If a direction is undetermined.
    """
    _, singular, right = np.linalg.svd(upper)
    if singular[-1] <= RANK_TOLERANCE * singular[0]:
        raise RankDeficiencyError(right[-1][:parameters], float(np.inf))
    return float(singular[0] / singular[-1])


def _refined(
    long_matrix: LongArray, long_right: LongArray, q: FloatArray, upper: FloatArray
) -> tuple[FloatArray, FloatArray]:
    """Solve and refine twice with residuals in extended precision: x and r = b - A x.

    Refines x and r together (Björck's augmented system), without which the small residual of an
    ill-conditioned problem stays inaccurate, and with it every standard error.
    """
    x = np.zeros(long_matrix.shape[1], dtype=np.longdouble)
    residual = np.zeros(long_matrix.shape[0], dtype=np.longdouble)
    for _ in range(3):
        f = np.asarray(long_right - residual - long_matrix @ x, dtype=float)
        g = np.asarray(-(long_matrix.T @ residual), dtype=float)
        # Solve  dr + A dx = f,  Aᵀ dr = g  with A = Q R.
        lower_solution = np.linalg.solve(upper.T, g)
        projected = q.T @ f
        dx = _solve_upper(upper, projected - lower_solution)
        dr = f - q @ projected + q @ lower_solution
        x += dx
        residual += dr
    return np.asarray(x, dtype=float), np.asarray(residual, dtype=float)


def _solve_upper(upper: FloatArray, right: FloatArray) -> FloatArray:
    # Of a triangular matrix, elimination is substitution; LAPACK's own routine for it comes with
    # scipy.linalg, which takes longer to load than a fit.
    return np.asarray(np.linalg.solve(upper, right))


def _triangular_inverse(upper: FloatArray) -> FloatArray:
    return _solve_upper(upper, np.eye(len(upper)))


@dataclass(frozen=True, eq=False)
class ManyFits:
    """Least-squares solutions of m data sets that share one design.

    Attributes
    ----------
    parameters : (m, p) ndarray
    covariance : (m, p, p) ndarray
        From the uncertainties as given.
    chi_square : (m,) ndarray
    degrees_of_freedom
        The same for all: n - p.
    """

    parameters: FloatArray
    covariance: FloatArray
    chi_square: FloatArray
    degrees_of_freedom: int


def solve_many(design: FloatArray, observed: FloatArray, uncertainties: FloatArray) -> ManyFits:
    """Solve m weighted least-squares problems that share one design.

    The design is made orthonormal once (X = Q R); in that basis the normal equations of each data
    set, Qᵀ W Q, are as well conditioned as its weights, so that solving them costs no digits, and
    one step of refinement removes what rounding is left. Data sets whose weights span more than six
    decades are solved one by one by :func:`solve` instead.

    Parameters
    ----------
    design : (n, p) ndarray
        X, of full rank.
    observed : (m, n) ndarray
        y of each data set.
    uncertainties : (m, n) ndarray
        Standard uncertainties of each data set's own.

    Returns
    -------
    ManyFits

    Raises
    ------
    RankDeficiencyError
        If the design leaves a combination of parameters undetermined.
    """
    n, p = design.shape
    scale = _column_scale(design)
    q, upper = np.linalg.qr(design / scale)
    _condition(upper, p)
    weight = uncertainties**-2.0
    pairs = (q[:, :, None] * q[:, None, :]).reshape(n, p * p)
    normal = (weight @ pairs).reshape(-1, p, p)
    weighted = weight * observed
    inverse = np.linalg.inv(normal)  # p x p, in the orthonormal basis: conditioned by weights only
    coefficients = np.einsum("mij,mj->mi", inverse, weighted @ q)
    residuals = observed - coefficients @ q.T
    correction = np.einsum("mij,mj->mi", inverse, (weight * residuals) @ q)
    coefficients += correction
    residuals -= correction @ q.T
    back = _triangular_inverse(upper) / scale[:, None]
    parameters, covariance = coefficients @ back.T, back @ inverse @ back.T
    chi_square = np.einsum("mn,mn->m", weight * residuals, residuals)
    for i in np.flatnonzero(weight.max(axis=1) > _LARGEST_WEIGHT_RATIO * weight.min(axis=1)):
        one = solve(design, observed[i], uncertainties[i])
        parameters[i], covariance[i], chi_square[i] = (
            one.parameters,
            one.covariance,
            one.chi_square,
        )
    return ManyFits(frozen(parameters), frozen(covariance), frozen(chi_square), n - p)
