"""Distributions of one result: normal, Student t, and finite mixtures of them.

An answer that leaves the salt law open is a mixture: one component for every form of the law, each
normal (or Student t). Its interval is read from the mixture's own distribution function, and not
from a normal distribution with the mixture's variance, which would be too long where the
components agree and too short where they do not.

The special functions come from ``scipy.special``, at a third of the start-up cost of
``scipy.stats``.
"""

from __future__ import annotations

import math
from dataclasses import dataclass, field

import numpy as np

from knought.arrays import BoolArray, FloatArray, IndexArray, frozen
from knought.errors import InputError
from knought.given import given_number

__all__ = ["Histogram", "Mixture", "chi_square_survival", "normal_quantile", "student_quantile"]

#: A quantile is found when its bracket is this small beside the spread of the mixture.
_RELATIVE_TOLERANCE = 1e-13

_MOST_STEPS = 200

#: Of many results, after so many steps those that are found are put aside.
_STEPS_BETWEEN = 4

#: With this many degrees of freedom, Student's t is the normal distribution to 1e-9.
_AS_GOOD_AS_NORMAL = 1e9


def normal_quantile(probability: float) -> float:
    """Return the standard normal quantile of `probability`."""
    from scipy.special import ndtri

    return float(ndtri(probability))


def student_quantile(probability: float, degrees_of_freedom: float) -> float:
    """Return Student's t quantile; the normal one where `degrees_of_freedom` is infinite."""
    if math.isinf(degrees_of_freedom):
        return normal_quantile(probability)
    from scipy.special import stdtrit

    return float(stdtrit(degrees_of_freedom, probability))


def chi_square_survival(chi_square: float, degrees_of_freedom: float) -> float:
    """Return the probability of a chi-square at least this large."""
    from scipy.special import chdtrc

    return float(chdtrc(degrees_of_freedom, chi_square))


@dataclass(frozen=True, eq=False)
class Mixture:
    """A mixture of normal or Student t distributions, for one result or an array of results.

    Parameters
    ----------
    weights : (c,) or (c, ...) ndarray
        Weights of the components, positive, adding up to one; with further axes where each result
        weighs them differently.
    locations, scales : (c, ...) ndarray
        Location and scale of each component for each result. A scale may be zero: that component
        is then certain.
    degrees_of_freedom : float or (...) ndarray
        Of the Student t components of each result; infinite (the default) makes them normal.
    standard_uncertainty : (...) ndarray, optional
        What stands for the standard deviation, where that is not the standard uncertainty.
    """

    weights: FloatArray
    locations: FloatArray
    scales: FloatArray
    degrees_of_freedom: FloatArray | float = math.inf
    standard_uncertainty: FloatArray | None = None
    _shape: tuple[int, ...] = field(init=False, repr=False)

    def __post_init__(self) -> None:
        locations, scales = np.broadcast_arrays(
            np.asarray(self.locations, dtype=float), np.asarray(self.scales, dtype=float)
        )
        object.__setattr__(self, "weights", frozen(self.weights))
        object.__setattr__(self, "locations", frozen(locations))
        object.__setattr__(self, "scales", frozen(scales))
        object.__setattr__(self, "_shape", locations.shape[1:])

    def first(self) -> Mixture:
        """Return the first of several results alone, zero-dimensional."""
        nu, u = self.degrees_of_freedom, self.standard_uncertainty
        return Mixture(
            self.weights if self.weights.ndim == 1 else self.weights[:, 0],
            self.locations[:, 0],
            self.scales[:, 0],
            float(np.ravel(nu)[0]) if np.ndim(nu) else nu,
            None if u is None else u[0],
        )

    def _average(self, of_components: FloatArray) -> FloatArray:
        """Average over the components, ``(c, ...)`` to ``(...)``."""
        if self.weights.ndim == 1:
            return np.asarray(np.tensordot(self.weights, of_components, axes=1))
        return np.asarray(np.sum(self.weights * of_components, axis=0))

    @property
    def _normal(self) -> bool:
        return bool(np.all(np.isinf(self.degrees_of_freedom)))

    @property
    def mean(self) -> FloatArray:
        """Mean of each result, shape ``(...)``."""
        return self._average(self.locations)

    @property
    def standard_deviation(self) -> FloatArray:
        """Square root of the variance within components plus that between them.

        For Student t components the scale itself stands for the standard uncertainty, as in the
        GUM (5.1.3, G.3); their longer tails are in the interval.
        """
        if self.standard_uncertainty is not None:
            return np.asarray(self.standard_uncertainty)
        within = self._average(self.scales**2)
        between = self._average((self.locations - self.mean) ** 2)
        return np.asarray(np.sqrt(within + between))

    def cdf(self, x: FloatArray | float) -> FloatArray:
        """Return the probability of a result at most `x`, shape ``(...)``."""
        standard = self._standardised(x)
        return self._average(self._component_cdf(standard))

    def pdf(self, x: FloatArray | float) -> FloatArray:
        """Return the probability density at `x`, shape ``(...)``."""
        return self._average(self._component_pdf(self._standardised(x)))

    def quantile(self, probability: float) -> FloatArray:
        """Return the value below which `probability` of the mixture lies, shape ``(...)``.

        The distribution function is monotone, so the root is bracketed by the smallest and the
        largest quantile of the components and found by safeguarded Newton steps.

        Raises
        ------
        InputError
            If `probability` is not between 0 and 1.
        """
        if not 0 < probability < 1:
            raise InputError(
                f"a probability must lie between 0 and 1, not {probability}",
                "give the coverage as a fraction, 0.95",
            )
        step = _quantile_steps(probability, self.degrees_of_freedom)
        ends = self.locations + step * self.scales
        low, high = ends.min(axis=0), ends.max(axis=0)
        if len(self.weights) == 1:
            return np.asarray(low)
        spread = self.standard_deviation
        x = np.clip(self.mean + step * spread, low, high)
        goal = _RELATIVE_TOLERANCE * np.maximum(spread, 1e-300)
        if x.ndim != 1:
            return self._root(probability, x, low, high, goal)[0]
        # Of many results, those that are found are left alone while the others go on.
        found = np.empty_like(x)
        todo, part = np.arange(len(x)), self
        while True:
            x, low, high, done = part._root(probability, x, low, high, goal, _STEPS_BETWEEN)
            found[todo] = x
            if np.all(done):
                return found
            rest = np.flatnonzero(~done)
            todo, part = todo[rest], part._results(rest)
            x, low, high, goal = x[rest], low[rest], high[rest], goal[rest]

    def _results(self, which: IndexArray) -> Mixture:
        """Return some of several results."""
        nu, u = self.degrees_of_freedom, self.standard_uncertainty
        return Mixture(
            self.weights if self.weights.ndim == 1 else self.weights[:, which],
            self.locations[:, which],
            self.scales[:, which],
            nu[which] if isinstance(nu, np.ndarray) and nu.ndim else nu,
            None if u is None else u[which],
        )

    def _root(
        self,
        probability: float,
        x: FloatArray,
        low: FloatArray,
        high: FloatArray,
        goal: FloatArray,
        steps: int = _MOST_STEPS,
    ) -> tuple[FloatArray, FloatArray, FloatArray, BoolArray]:
        """Take Newton steps inside a bracket; return x, the bracket, and what is found."""
        done = np.zeros(np.shape(x), dtype=bool)
        for _ in range(steps):
            standard = self._standardised(x)
            excess = self._average(self._component_cdf(standard)) - probability
            low, high = np.where(excess < 0, x, low), np.where(excess > 0, x, high)
            with np.errstate(divide="ignore", invalid="ignore"):
                newton = x - excess / self._average(self._component_pdf(standard))
            inside = (newton > low) & (newton < high) & np.isfinite(newton)
            moved = np.where(inside, newton, 0.5 * (low + high))
            done = (np.abs(moved - x) <= goal) | (excess == 0) | (high - low <= goal)
            x = np.where(excess == 0, x, moved)
            if np.all(done):
                break
        else:
            # What has not settled after so many steps moves within rounding.
            done = done | (steps == _MOST_STEPS)
        return np.asarray(x), low, high, np.asarray(done)

    def interval(self, coverage: float = 0.95) -> tuple[FloatArray, FloatArray]:
        """Return the probabilistically symmetric interval of the given coverage (JCGM 101, 3.15).

        Raises
        ------
        InputError
            If `coverage` is not between 0 and 1.
        """
        coverage = given_number(coverage, "a coverage")
        if not 0 < coverage < 1:
            raise InputError(
                f"a coverage must lie between 0 and 1, not {coverage}", "give it as 0.95"
            )
        tail = (1 - coverage) / 2
        return self.quantile(tail), self.quantile(1 - tail)

    def _standardised(self, x: FloatArray | float) -> FloatArray:
        with np.errstate(divide="ignore", invalid="ignore"):
            standard = (x - self.locations) / self.scales
        # A certain component (scale 0) is a step: -inf below it, +inf at and above it.
        step = np.where(x >= self.locations, np.inf, -np.inf)
        return np.where(self.scales == 0, step, standard)

    def _component_pdf(self, standard: FloatArray) -> FloatArray:
        if self._normal:
            density = np.exp(-0.5 * standard**2) / math.sqrt(2 * math.pi)
        else:
            density = _student_density(standard, self.degrees_of_freedom)
        return np.asarray(density / self.scales)

    def _component_cdf(self, standard: FloatArray) -> FloatArray:
        from scipy.special import ndtr, stdtr

        if self._normal:
            return np.asarray(ndtr(standard))
        nu = np.minimum(self.degrees_of_freedom, _AS_GOOD_AS_NORMAL)
        return np.asarray(stdtr(nu, standard))


def _quantile_steps(
    probability: float, degrees_of_freedom: FloatArray | float
) -> FloatArray | float:
    """Return Student's quantile for one or several degrees of freedom."""
    if np.ndim(degrees_of_freedom) == 0:
        return student_quantile(probability, float(degrees_of_freedom))
    from scipy.special import stdtrit

    nu = np.minimum(degrees_of_freedom, _AS_GOOD_AS_NORMAL)
    return np.asarray(stdtrit(nu, probability))


def _student_density(standard: FloatArray, degrees_of_freedom: FloatArray | float) -> FloatArray:
    from scipy.special import gammaln

    nu = np.minimum(degrees_of_freedom, _AS_GOOD_AS_NORMAL)
    log_norm = gammaln((nu + 1) / 2) - gammaln(nu / 2) - 0.5 * np.log(nu * np.pi)
    return np.asarray(np.exp(log_norm - (nu + 1) / 2 * np.log1p(standard**2 / nu)))


@dataclass(frozen=True, eq=False)
class Histogram:
    """A distribution known by its weights at nodes: uniform within the cell around each node.

    Parameters
    ----------
    nodes : (c,) ndarray
        Increasing values.
    weights : (c,) ndarray
        Their weights, adding up to one.
    bounds
        Ends of the outermost cells; half a spacing beyond the outermost nodes if not given.
    """

    nodes: FloatArray
    weights: FloatArray
    bounds: tuple[float, float] | None = None
    degrees_of_freedom: float = math.inf

    @property
    def mean(self) -> FloatArray:
        """Mean, a zero-dimensional array."""
        return np.asarray(self.weights @ self.nodes)

    @property
    def standard_deviation(self) -> FloatArray:
        """Standard deviation, a zero-dimensional array."""
        return np.asarray(np.sqrt(self.weights @ (self.nodes - self.mean) ** 2))

    def quantile(self, probability: float) -> FloatArray:
        """Return the value below which `probability` lies, linear within cells."""
        if len(self.nodes) == 1:
            return np.asarray(self.nodes[0])
        middle = (self.nodes[1:] + self.nodes[:-1]) / 2
        half = (self.nodes[1] - self.nodes[0]) / 2, (self.nodes[-1] - self.nodes[-2]) / 2
        low, high = self.bounds or (self.nodes[0] - half[0], self.nodes[-1] + half[1])
        edges = np.concatenate([[low], middle, [high]])
        cumulative = np.concatenate([[0.0], np.cumsum(self.weights)])
        return np.asarray(np.interp(probability, cumulative / cumulative[-1], edges))

    def interval(self, coverage: float = 0.95) -> tuple[FloatArray, FloatArray]:
        """Return the probabilistically symmetric interval of the given coverage."""
        tail = (1 - coverage) / 2
        return self.quantile(tail), self.quantile(1 - tail)
