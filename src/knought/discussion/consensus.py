"""One value from several, with how far they disagree.

The idea first: values y_i with standard uncertainties u_i have the weighted mean Σ w y/Σ w. If they
scatter no more than the u_i allow, w = 1/u² ("fixed"). If they scatter more, each source carries an
error of its own besides the stated one, of variance τ²; then w = 1/(u² + τ²), and τ² is found

- in closed form from Cochran's Q (DerSimonian and Laird, Control. Clin. Trials 7 (1986) 177), or
- so that Σ w (y - μ)² = k - 1 (Paule and Mandel, J. Res. Natl. Bur. Stand. 87 (1982) 377).

As τ² is itself known poorly from few sources, the interval of Hartung and Knapp (Stat. Med. 20
(2001) 1771) takes its width from the weighted scatter with Student's t of k - 1 degrees of freedom.
The Birge ratio √(Q/(k - 1)) (Birge, Phys. Rev. 40 (1932) 207) says by what factor the stated
uncertainties would have to grow to explain the scatter.

Sources may share errors. With their whole covariance V in place of the u², the weights are
W = (V + τ² 1)⁻¹, the mean is that of generalised least squares, and Σ w (y - μ)² becomes the
quadratic form (y - μ)ᵀ W (y - μ); the moment and the root for τ² are taken of that in the same way.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import TYPE_CHECKING, Literal, TypeAlias, get_args

import numpy as np

from knought.arrays import FloatArray, frozen
from knought.errors import InputError
from knought.numerics.quantiles import chi_square_survival, normal_quantile, student_quantile

if TYPE_CHECKING:
    from numpy.typing import ArrayLike

__all__ = ["Consensus", "ConsensusMethod", "consensus"]

ConsensusMethod: TypeAlias = Literal["dersimonian-laird", "paule-mandel", "fixed"]

_METHODS: tuple[str, ...] = get_args(ConsensusMethod)

#: The between-source variance is found to this fraction of itself.
_RELATIVE_TOLERANCE = 1e-14
_MOST_STEPS = 400


@dataclass(frozen=True, eq=False)
class Consensus:
    """A consensus value, and how far its sources agree.

    Attributes
    ----------
    method
        How the between-source variance was found.
    values : (k,) ndarray
        What was combined.
    covariance : (k, k) ndarray
        Its stated covariance; diagonal where no errors are shared.
    value
        The weighted mean.
    standard_uncertainty
        √(1/Σ w).
    between_variance
        τ², the variance between sources that their stated uncertainties leave open.
    q
        Cochran's Q: Σ (y - ȳ)²/u² about the mean with the weights 1/u².
    """

    method: ConsensusMethod
    values: FloatArray
    covariance: FloatArray
    value: float
    standard_uncertainty: float
    between_variance: float
    q: float

    @property
    def uncertainties(self) -> FloatArray:
        """Stated standard uncertainty of each value, shape ``(k,)``."""
        return np.sqrt(np.diagonal(self.covariance))

    @property
    def sources(self) -> int:
        """Number k of values combined."""
        return len(self.values)

    @property
    def degrees_of_freedom(self) -> int:
        """Sources less one."""
        return self.sources - 1

    @property
    def weights(self) -> FloatArray:
        """Weight of each value, adding up to one, shape ``(k,)``.

        One may be below zero where sources share most of their errors: what they share is then
        taken off by their difference.
        """
        return _Weighted(self.values, self.covariance, self.between_variance).weights

    @property
    def probability(self) -> float:
        """Probability of a Q at least this large if the stated uncertainties are all there is."""
        if self.degrees_of_freedom == 0:
            return math.nan
        return chi_square_survival(self.q, self.degrees_of_freedom)

    @property
    def h_squared(self) -> float:
        """H² = Q/(k - 1); nan for one source (Higgins and Thompson, Stat. Med. 21 (2002) 1539)."""
        return self.q / self.degrees_of_freedom if self.degrees_of_freedom else math.nan

    @property
    def i_squared(self) -> float:
        """I²: fraction of the scatter beyond the stated uncertainties, 0 to 1 (same source)."""
        if self.degrees_of_freedom == 0:
            return math.nan
        return max(0.0, 1.0 - self.degrees_of_freedom / self.q) if self.q > 0 else 0.0

    @property
    def birge_ratio(self) -> float:
        """√(Q/(k - 1)): scatter over stated uncertainty; nan for one source."""
        return math.sqrt(self.h_squared)

    @property
    def hartung_knapp_uncertainty(self) -> float:
        """√(Σ w (y - μ)²/((k - 1) Σ w)): the uncertainty that the scatter itself shows."""
        if self.degrees_of_freedom == 0:
            return math.nan
        weighted = _Weighted(self.values, self.covariance, self.between_variance)
        return weighted.uncertainty * math.sqrt(weighted.scatter / self.degrees_of_freedom)

    def interval(self, coverage: float = 0.95) -> tuple[float, float]:
        """Return the interval from the standard uncertainty and the normal distribution.

        Raises
        ------
        InputError
            If `coverage` is not between 0 and 1.
        """
        half = normal_quantile(_upper_tail(coverage)) * self.standard_uncertainty
        return self.value - half, self.value + half

    def hartung_knapp_interval(self, coverage: float = 0.95) -> tuple[float, float]:
        """Return the interval of Hartung and Knapp; infinite for one source.

        Raises
        ------
        InputError
            If `coverage` is not between 0 and 1.
        """
        tail = _upper_tail(coverage)
        if self.degrees_of_freedom == 0:
            return -math.inf, math.inf
        half = student_quantile(tail, self.degrees_of_freedom) * self.hartung_knapp_uncertainty
        return self.value - half, self.value + half

    def leave_one_out(self) -> tuple[Consensus, ...]:
        """Return the consensus without each source in turn; empty for one source."""
        if self.sources == 1:
            return ()
        keep = ~np.eye(self.sources, dtype=bool)
        return tuple(
            _combined(self.values[rest], self.covariance[np.ix_(rest, rest)], self.method)
            for rest in keep
        )

    def without(self, place: int) -> Consensus:
        """Return the consensus without the source at `place`."""
        return self.leave_one_out()[place]


def consensus(
    values: ArrayLike,
    uncertainties: ArrayLike,
    method: ConsensusMethod = "dersimonian-laird",
    *,
    common: ArrayLike | None = None,
) -> Consensus:
    """Combine values of one quantity from several sources.

    Parameters
    ----------
    values : (k,) array_like
        The values, in one unit and at one set of conditions; rate constants as ln k.
    uncertainties : (k,) array_like
        Their standard uncertainties from errors of their own, in the same unit.
    method
        ``"dersimonian-laird"``, ``"paule-mandel"`` or ``"fixed"``.
    common : (k, k) array_like, optional
        Covariance of further errors that sources share; none if not given.

    Returns
    -------
    Consensus

    Raises
    ------
    InputError
        If the method is unknown, lengths differ, there is no value, a number is not finite, an
        uncertainty is not above zero, or `common` is no covariance of k values.
    """
    if method not in _METHODS:
        raise InputError(
            f"no way to combine values is called {method!r}", f"choose from {', '.join(_METHODS)}"
        )
    y, u = _checked(values, uncertainties)
    covariance = np.diag(u**2)
    if common is not None:
        covariance = covariance + _checked_common(common, len(y))
    return _combined(y, frozen(covariance), method)


class _Weighted:
    """The mean of generalised least squares with W = (V + τ² 1)⁻¹, by a Cholesky factor."""

    def __init__(self, y: FloatArray, covariance: FloatArray, between: float) -> None:
        lower = np.linalg.cholesky(covariance + between * np.eye(len(y)))
        ones = np.linalg.solve(lower, np.ones(len(y)))
        information = float(ones @ ones)
        self.uncertainty = 1.0 / math.sqrt(information)
        self.weights: FloatArray = np.linalg.solve(lower.T, ones) / information
        self.mean = float(self.weights @ y)
        # About the mean first: squares of large numbers would cancel.
        away = np.linalg.solve(lower, y - self.mean)
        self.scatter = float(away @ away)
        self._inverse = np.linalg.inv(lower)

    @property
    def expected_per_variance(self) -> float:
        """Trace of P, the residual form W - W 1 1ᵀ W/(1ᵀ W 1): what a unit of τ² adds to Q."""
        squares = float(np.sum(self._inverse**2))
        return squares - float(np.sum(self.weights**2)) / self.uncertainty**2


def _combined(y: FloatArray, covariance: FloatArray, method: ConsensusMethod) -> Consensus:
    fixed = _Weighted(y, covariance, 0.0)
    if method == "dersimonian-laird":
        between = _dersimonian_laird(fixed, len(y))
    elif method == "paule-mandel":
        between = _paule_mandel(y, covariance)
    else:
        between = 0.0
    final = _Weighted(y, covariance, between)
    return Consensus(
        method=method,
        values=y,
        covariance=covariance,
        value=final.mean,
        standard_uncertainty=final.uncertainty,
        between_variance=between,
        q=fixed.scatter,
    )


def _checked(values: ArrayLike, uncertainties: ArrayLike) -> tuple[FloatArray, FloatArray]:
    y, u = frozen(values), frozen(uncertainties)
    if y.ndim != 1 or y.shape != u.shape or y.size == 0:
        raise InputError(
            f"values have shape {y.shape} and uncertainties {u.shape}",
            "give one uncertainty for each value, and one value at least",
        )
    if not (np.all(np.isfinite(y)) and np.all(np.isfinite(u)) and np.all(u > 0)):
        raise InputError(
            "a value or uncertainty is not a finite number, or an uncertainty is not above zero",
            "leave out sources without an uncertainty: they cannot be weighted",
        )
    return y, u


def _checked_common(common: ArrayLike, k: int) -> FloatArray:
    shared = np.asarray(common, dtype=float)
    if shared.shape != (k, k) or not np.all(np.isfinite(shared)):
        raise InputError(
            f"the covariance of shared errors has shape {shared.shape} for {k} values, or holds "
            "numbers that are not finite",
            f"give a {k} by {k} matrix",
        )
    size = float(np.abs(shared).max())
    least = float(np.linalg.eigvalsh(0.5 * (shared + shared.T)).min())
    if np.abs(shared - shared.T).max() > 1e-9 * size or least < -1e-9 * size:
        raise InputError(
            "the covariance of shared errors is not symmetric, or has a negative variance",
            "build it as J Jᵀ from what each shared error does to each value",
        )
    return np.asarray(0.5 * (shared + shared.T))


def _dersimonian_laird(fixed: _Weighted, k: int) -> float:
    """τ² = max(0, (Q - (k - 1))/tr P); tr P is Σ w - Σ w²/Σ w where nothing is shared."""
    return max(0.0, (fixed.scatter - (k - 1)) / fixed.expected_per_variance) if k > 1 else 0.0


def _paule_mandel(y: FloatArray, covariance: FloatArray) -> float:
    """Return τ² for which the scatter equals its expectation; zero where it never exceeds it.

    The scatter falls steadily with τ², so that halving a bracket finds the one root.
    """

    def scatter(between: float) -> float:
        return _Weighted(y, covariance, between).scatter

    wanted = len(y) - 1
    if scatter(0.0) <= wanted:
        return 0.0
    low, high = 0.0, float(np.ptp(y) ** 2)
    while scatter(high) > wanted:
        high *= 2.0
    for _ in range(_MOST_STEPS):
        middle = 0.5 * (low + high)
        low, high = (middle, high) if scatter(middle) > wanted else (low, middle)
        if high - low <= _RELATIVE_TOLERANCE * high:
            break
    return 0.5 * (low + high)


def _upper_tail(coverage: float) -> float:
    if not 0 < coverage < 1:
        raise InputError(f"a coverage must lie between 0 and 1, not {coverage}", "give it as 0.95")
    return (1 + coverage) / 2
