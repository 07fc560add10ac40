"""First-order and pseudo-first-order traces, with the end point unknown.

The idea first: signal = s∞ + (s₀ - s∞) e^(-kt) is linear in everything but k. For a given k the
levels are a linear least-squares problem (separable least squares, Golub and Pereyra, SIAM J.
Numer. Anal. 10 (1973) 413), so that one search over ln k finds the best fit without a starting
value: a grid over everything the trace can tell, then Gauss-Newton steps inside the best bracket.
Points before the dead time are left out; an exponential doesn't care where it begins.

The noise may be correlated (:mod:`knought.numerics.correlated_noise`): with 24 points or more it is
learnt from the residuals, and k is a mixture over what it may be; with fewer, points count as
independent.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import TYPE_CHECKING

import numpy as np

from knought.errors import Caveat, InputError
from knought.given import real_array
from knought.measurement.first_order_pattern import Pattern, pattern_of
from knought.measurement.first_order_search import (
    SingleExponential,
    jacobian,
    ordinary,
    refined,
    residuals,
    searched,
)
from knought.measurement.traces import checked_trace
from knought.numerics.correlated_noise import (
    FEW_CORRELATION_TIMES,
    MUCH_WANDER,
    Noise,
    Projected,
    binned,
    mixture_of,
    project,
)

if TYPE_CHECKING:
    from numpy.typing import ArrayLike

    from knought.arrays import FloatArray
    from knought.numerics.quantiles import Mixture

__all__ = ["FirstOrder", "FirstOrders", "first_order", "first_orders"]

#: With fewer points correlation cannot be told.
ENOUGH_POINTS = 24

#: k times span below which the end point is guessed from a curve that hardly bends.
_FAR_END = 1.0


@dataclass(frozen=True, eq=False)
class FirstOrders:
    """Rate constants of m records on the same times.

    Attributes
    ----------
    weights, values, scales : (m, c) ndarray
        Mixture of Student t distributions of each k.
    degrees_of_freedom
        The same for all.
    rate_constants, levels : (m,), (m, q) ndarray
        Ordinary least-squares k and linear coefficients, amplitude first.
    u_rate_constants, u_levels : (m,), (m, q) ndarray
        Their standard uncertainties with independent noise.
    residual_deviation : (m,) ndarray
        √(RSS/ν) of the ordinary fit.
    correlation_share, correlation_time : (m,) ndarray
        Mean share of correlated noise in one point's variance, and its typical correlation time.
    """

    weights: FloatArray
    values: FloatArray
    scales: FloatArray
    degrees_of_freedom: int
    rate_constants: FloatArray
    levels: FloatArray
    u_rate_constants: FloatArray
    u_levels: FloatArray
    residual_deviation: FloatArray
    correlation_share: FloatArray
    correlation_time: FloatArray

    @property
    def value(self) -> FloatArray:
        """Mean of each k."""
        return np.asarray(np.sum(self.weights * self.values, axis=1))

    @property
    def standard_uncertainty(self) -> FloatArray:
        """Standard uncertainty of each k."""
        spread = (self.values - self.value[:, None]) ** 2
        return np.asarray(np.sqrt(np.sum(self.weights * (self.scales**2 + spread), axis=1)))

    def covered(self, truth: float, coverage: float = 0.95) -> FloatArray:
        """Whether each interval of that coverage holds `truth`, as ones and zeros."""
        from scipy.special import stdtr

        standard = (truth - self.values) / self.scales
        cdf = np.sum(self.weights * stdtr(self.degrees_of_freedom, standard), axis=1)
        return np.asarray(np.abs(cdf - 0.5) <= coverage / 2, dtype=float)


@dataclass(frozen=True, eq=False)
class FirstOrder:
    """A first-order rate constant from a trace.

    Attributes
    ----------
    value, standard_uncertainty
        k in s^-1 (or one over the unit of time).
    distribution
        The mixture of Student t distributions that they come from.
    naive_uncertainty
        What least squares with independent noise claims.
    initial_level, final_level
        Signal at t = 0 and at the end of the reaction.
    u_initial_level, u_final_level
        Their standard uncertainties with independent noise; zero where the level was given.
    residual_deviation
        √(RSS/ν), in the unit of the signal.
    points
        Points used.
    window
        First and last time used.
    degrees_of_freedom
        Of the Student t distributions.
    half_lives
        How many half-lives the trace covers.
    correlation_share
        Mean share of correlated noise in one point's variance.
    pattern
        Whether the residuals follow a pattern, and what two exponentials would make of it.
    caveats
        What a reader must know.
    """

    value: float
    standard_uncertainty: float
    distribution: Mixture = field(repr=False)
    naive_uncertainty: float
    initial_level: float
    final_level: float
    u_initial_level: float
    u_final_level: float
    residual_deviation: float
    points: int
    window: tuple[float, float]
    degrees_of_freedom: int
    half_lives: float
    correlation_share: float
    pattern: Pattern
    caveats: tuple[Caveat, ...] = ()

    def interval(self, coverage: float = 0.95) -> tuple[float, float]:
        """Return the interval of the given coverage.

        Raises
        ------
        InputError
            If `coverage` is not between 0 and 1.
        """
        low, high = self.distribution.interval(coverage)
        return float(low), float(high)


def first_orders(
    time: ArrayLike,
    signals: ArrayLike,
    initial: float | None = None,
    *,
    final: float | None = None,
    dead_time: float | None = None,
    window: float | None = None,
    drift: bool = False,
) -> FirstOrders:
    """Return k of m records on the same times.

    Parameters
    ----------
    time : (n,) array_like
        Times from mixing, rising.
    signals : (m, n) array_like
        Records.
    initial, final
        A level that is known: at t = 0, or at the end. At most one.
    dead_time
        Points before it are left out.
    window
        Points after it are left out.
    drift
        Whether to fit a linear drift of the instrument as well.

    Raises
    ------
    InputError
        If times or signals cannot be, both levels are given, too few points are left, or a trace
        does not bend.
    """
    t, y = checked_trace(time, signals, dead_time, window)
    if initial is not None and final is not None:
        raise InputError(
            "both levels of a first-order trace are given",
            "give the one that is known best; the trace says the other",
        )
    model = SingleExponential(initial, final, drift)
    unknowns = 2 + (initial is None and final is None) + drift
    if len(t) <= unknowns:
        raise InputError(
            f"{len(t)} points are left for {unknowns} unknowns",
            f"record at least {unknowns + 1} points",
        )
    data = model.data(y)
    k = refined(model, t, data, searched(model, t, data))
    levels, covariance, deviation = ordinary(model, t, data, k)
    fits, record_points = _correlated(model, t, data, k, levels)
    weights = fits.weights(unknowns)
    shift, scale = fits.parameter(unknowns - 1, unknowns)
    u = np.sqrt(np.diagonal(covariance, axis1=1, axis2=2))
    return FirstOrders(
        weights,
        k[:, None] * (1 + shift),
        k[:, None] * scale,
        record_points - unknowns,
        k,
        levels,
        k * u[:, -1],
        u[:, :-1],
        deviation,
        weights @ fits.noise.shares,
        fits.noise.typical_time(weights),
    )


@dataclass(frozen=True, eq=False)
class _Cells(Projected):
    """Fits with the noise of each cell."""

    noise: Noise


def _correlated(
    model: SingleExponential, t: FloatArray, y: FloatArray, k: FloatArray, levels: FloatArray
) -> tuple[_Cells, int]:
    """Linearise about the ordinary fit and solve with every correlation the noise may have.

    Bins are equally wide half in time and half in the progress of the reaction, so that no fast
    part is averaged away.
    """
    typical = float(np.exp(np.median(np.log(k))))
    progress = -np.expm1(-typical * (t - t[0]))
    place = progress / progress[-1] + (t - t[0]) / (t[-1] - t[0])
    record = binned(t, residuals(model, t, y, k), place=place)
    noise = Noise(record, wander=len(t) >= ENOUGH_POINTS)
    fits = project(record, record.averaged(jacobian(model, t, k, levels)), noise)
    return _Cells(**vars(fits), noise=noise), len(record.time)


def first_order(
    time: ArrayLike,
    signal: ArrayLike,
    initial: float | None = None,
    *,
    final: float | None = None,
    dead_time: float | None = None,
    window: float | None = None,
    drift: bool = False,
) -> FirstOrder:
    """Return the first-order rate constant of a trace; no starting value is needed.

    Parameters
    ----------
    time : (n,) array_like
        Times from mixing, rising.
    signal : (n,) array_like
        Absorbance or another signal linear in concentration.
    initial
        The level at t = 0, where it is known: 0 for a product that was not there.
    final
        The level at the end, where it is known instead.
    dead_time
        Points before it are left out.
    window
        Points after it are left out.
    drift
        Whether to fit a linear drift of the instrument as well.

    Returns
    -------
    FirstOrder

    Raises
    ------
    InputError
        If time or signal cannot be, both levels are given, too few points are left, or the trace
        does not bend.
    """
    signal = real_array(signal, "signal")
    found = first_orders(
        time, signal[None], initial, final=final, dead_time=dead_time, window=window, drift=drift
    )
    t, y = checked_trace(time, signal[None], dead_time, window)
    k, levels = float(found.rate_constants[0]), found.levels[0]
    model = SingleExponential(initial, final, drift)
    residual = residuals(model, t, model.data(y), np.array([k]))[0]
    pattern = pattern_of(t, y[0], residual, found.levels.shape[1] + 1)
    amplitude, u_amplitude = float(levels[0]), float(found.u_levels[0, 0])
    if initial is not None:
        ends = (initial, initial + amplitude, 0.0, u_amplitude)
    elif final is not None:
        ends = (final + amplitude, final, u_amplitude, 0.0)
    else:
        u_start = _u_start(model, t, model.data(y), k)
        ends = (
            float(levels[0] + levels[1]),
            float(levels[1]),
            u_start,
            float(found.u_levels[0, 1]),
        )
    distribution = mixture_of(
        found.weights[0], found.values[0], found.scales[0], found.degrees_of_freedom
    )
    half_lives = k * float(t[-1]) / np.log(2.0)
    return FirstOrder(
        value=float(distribution.mean),
        standard_uncertainty=float(distribution.standard_deviation),
        distribution=distribution,
        naive_uncertainty=float(found.u_rate_constants[0]),
        initial_level=ends[0],
        final_level=ends[1],
        u_initial_level=ends[2],
        u_final_level=ends[3],
        residual_deviation=float(found.residual_deviation[0]),
        points=len(t),
        window=(float(t[0]), float(t[-1])),
        degrees_of_freedom=found.degrees_of_freedom,
        half_lives=float(half_lives),
        correlation_share=float(found.correlation_share[0]),
        pattern=pattern,
        caveats=(
            *_caveats(pattern, k * float(t[-1] - t[0]), model, len(t)),
            *_wander_caveat(found, float(t[-1] - t[0])),
        ),
    )


def _u_start(model: SingleExponential, t: FloatArray, y: FloatArray, k: float) -> float:
    """Return u of amplitude plus final level."""
    covariance = ordinary(model, t, y, np.array([k]))[1][0]
    return float(np.sqrt(covariance[:2, :2].sum()))


def _wander_caveat(found: FirstOrders, span: float) -> tuple[Caveat, ...]:
    """Say where the record holds few independent pieces."""
    time = float(found.correlation_time[0])
    if found.correlation_share[0] <= MUCH_WANDER or span >= FEW_CORRELATION_TIMES * time:
        return ()
    return (
        Caveat(
            "first-order-correlated-noise",
            f"The noise stays correlated over about {time:.3g} (unit of time), so the trace holds "
            "few independent pieces and u is itself uncertain by tens of per cent. Repeat runs "
            "tell the scatter.",
        ),
    )


def _caveats(pattern: Pattern, reach: float, model: SingleExponential, points: int) -> list[Caveat]:
    said = []
    if pattern.found:
        said.append(Caveat("first-order-pattern", pattern.sentence))
    if reach < _FAR_END and model.final is None:
        said.append(
            Caveat(
                "first-order-far-end",
                f"The trace ends at k t = {reach:.2f}, before the reaction has gone halfway or "
                "little more; the end level is extrapolated and k rests on the curve's bend. "
                "Follow it longer, give the end level, or use the initial slope.",
            )
        )
    if points < ENOUGH_POINTS:
        said.append(
            Caveat(
                "first-order-few-points",
                f"With {points} points correlation of the noise cannot be told; u takes the points "
                "as independent.",
            )
        )
    return said
