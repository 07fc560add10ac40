"""The slope of a trace at t = 0, with an uncertainty that can be believed.

The rule, stated once:

1. Points before the dead time are left out; the polynomial is in t from the moment of mixing, so
   its linear coefficient is the slope at t = 0 whatever was left out.
2. How the noise is correlated is learnt from the whole record, against a smooth curve of six
   terms (:mod:`knought.numerics.correlated_noise`); what stays unknown of it is in the answer.
3. Of the windows 1, 3/4, 9/16, ... of the record, all from its beginning, the longest is taken in
   which a polynomial of order 1, 2 or 3 leaves nothing that terms up to the fifth order explain
   (F-test at 5 %).
4. The slope is read one order above the lowest such order: curvature too small to be seen must not
   bias it unseen. That costs precision, and is the honest price of an extrapolation.

A user who knows better gives window and order; then nothing is chosen.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import TYPE_CHECKING

import numpy as np

from knought.errors import Caveat, InputError
from knought.measurement.first_order import rough_rate_constants
from knought.measurement.traces import checked_trace
from knought.numerics.correlated_noise import (
    Noise,
    Projected,
    binned,
    correlation_times,
    mixture_of,
    project,
)

if TYPE_CHECKING:
    from numpy.typing import ArrayLike

    from knought.arrays import BoolArray, FloatArray, IndexArray
    from knought.numerics.correlated_noise import Binned
    from knought.numerics.quantiles import Mixture

__all__ = ["InitialSlope", "Slopes", "initial_slope", "initial_slopes"]

#: With fewer points correlation cannot be told, and every point is used.
ENOUGH_POINTS = 24

_WINDOWS = tuple(0.75**i for i in range(13))

#: A smooth curve for learning the noise bends at least this much over the record.
_LEAST_BEND = 2.0
_HIGHEST_TESTED, _HIGHEST_ADEQUATE = 5, 3
_SIGNIFICANCE = 0.05

#: A window in which the slope falls by more than this share says much of the curve, not of t = 0.
_MUCH_CONVERSION = 0.3

#: Fewer correlation times than this in the record, and its correlation is poorly known.
_FEW_CORRELATION_TIMES = 20


@dataclass(frozen=True, eq=False)
class Slopes:
    """Initial slopes of m records on the same times.

    Attributes
    ----------
    weights, values, scales : (m, c) ndarray
        Mixture of Student t distributions of each slope.
    degrees_of_freedom, order, points : (m,) ndarray of int
        Of each record's fit.
    window_end : (m,) ndarray
        Last time used.
    adequate : (m,) ndarray of bool
        Whether some window and order passed the test.
    curvature, end_ratio : (m,) ndarray
        Second derivative at t = 0, and slope at the window's end over slope at t = 0.
    correlation_share, correlation_time : (m,) ndarray
        Mean share of correlated noise in one point's variance, and its mean correlation time.
    """

    weights: FloatArray
    values: FloatArray
    scales: FloatArray
    degrees_of_freedom: IndexArray
    order: IndexArray
    points: IndexArray
    window_end: FloatArray
    adequate: BoolArray
    curvature: FloatArray
    end_ratio: FloatArray
    correlation_share: FloatArray
    correlation_time: FloatArray

    @property
    def value(self) -> FloatArray:
        """Mean of each slope."""
        return np.asarray(np.sum(self.weights * self.values, axis=1))

    @property
    def standard_uncertainty(self) -> FloatArray:
        """Standard uncertainty of each slope."""
        spread = (self.values - self.value[:, None]) ** 2
        return np.asarray(np.sqrt(np.sum(self.weights * (self.scales**2 + spread), axis=1)))

    def covered(self, truth: float, coverage: float = 0.95) -> FloatArray:
        """Whether each interval of that coverage holds `truth`, as ones and zeros."""
        from scipy.special import stdtr

        standard = (truth - self.values) / self.scales
        cdf = np.sum(self.weights * stdtr(self.degrees_of_freedom[:, None], standard), axis=1)
        return np.asarray(np.abs(cdf - 0.5) <= coverage / 2, dtype=float)


@dataclass(frozen=True, eq=False)
class InitialSlope:
    """The slope of a trace at t = 0.

    Attributes
    ----------
    value, standard_uncertainty
        In the signal's unit a second (or a unit of time).
    distribution
        The mixture of Student t distributions that they come from.
    naive_uncertainty
        What least squares with independent noise would claim with the same polynomial.
    window
        First and last time used.
    order
        Order of the polynomial.
    points
        Points in the window.
    degrees_of_freedom
        Of the Student t distributions.
    curvature
        Second derivative at t = 0.
    conversion
        Share of the total change that falls into the window: of `total_change` where it was
        given, else estimated from how much the slope falls (exact for a first-order course).
    correlation_share, correlation_time
        Mean share of correlated noise in one point's variance, and its mean correlation time.
    caveats
        What a reader must know.
    """

    value: float
    standard_uncertainty: float
    distribution: Mixture = field(repr=False)
    naive_uncertainty: float
    window: tuple[float, float]
    order: int
    points: int
    degrees_of_freedom: int
    curvature: float
    conversion: float
    correlation_share: float
    correlation_time: float
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


def initial_slopes(
    time: ArrayLike,
    signals: ArrayLike,
    *,
    dead_time: float = 0.0,
    window: float | None = None,
    order: int | None = None,
) -> Slopes:
    """Return the initial slopes of m records on the same times, by the rule of the module.

    Parameters
    ----------
    time : (n,) array_like
        Times from mixing, rising.
    signals : (m, n) array_like
        Records.
    dead_time
        Points before it are left out.
    window
        Last time to use; chosen if not given.
    order
        Order of the polynomial, 1 to 5; chosen if not given.

    Raises
    ------
    InputError
        If times or signals cannot be, or too few points are left.
    """
    t, y = checked_trace(time, signals, dead_time, window)
    fewest = 4 if order is None else order + 3
    if len(t) < fewest or (order is not None and not 1 <= order <= _HIGHEST_TESTED):
        raise InputError(
            f"{len(t)} points are left for a polynomial"
            + ("" if order is None else f" of order {order}"),
            f"record at least {fewest} points, and give an order from 1 to {_HIGHEST_TESTED}",
        )
    whole = binned(t, y)
    times = correlation_times(whole)
    wander = len(t) >= ENOUGH_POINTS
    noise = Noise(whole, times, wander=wander)
    smooth = _smooth(t, y, whole)
    weights = project(whole, smooth, noise).weights(smooth.shape[-1])
    choice = _Choice(len(y), weights)
    choice.correlation(noise)
    windows = _WINDOWS if window is None and wander else (1.0,)
    for share in windows:
        inside = t <= t[0] + share * (t[-1] - t[0]) * (1 + 1e-12)
        if inside.sum() < min(ENOUGH_POINTS // 2, len(t)):
            break
        _try_window(choice, t[inside], y[:, inside], times, wander=wander, order=order)
    return choice.made()


def _smooth(t: FloatArray, y: FloatArray, whole: Binned) -> FloatArray:
    """Return columns of a curve that follows any reasonable course of the whole record.

    A cubic and an exponential of each record's own rate with its slope, for records that go to
    their end; few points get a parabola.
    """
    x = (t - t[0]) / (t[-1] - t[0])
    if len(t) < ENOUGH_POINTS:
        return whole.averaged(x[:, None] ** np.arange(min(3, len(t) - 2)))
    k = np.maximum(rough_rate_constants(whole.time, whole.values) * (t[-1] - t[0]), _LEAST_BEND)
    decay = np.exp(-k[:, None] * x)
    shared = np.broadcast_to(x[:, None] ** np.arange(4), (len(y), len(t), 4))
    columns = np.concatenate([shared, decay[..., None], (x * decay)[..., None]], axis=2)
    return whole.averaged(columns)


def _try_window(
    choice: _Choice,
    t: FloatArray,
    y: FloatArray,
    times: FloatArray,
    *,
    wander: bool,
    order: int | None,
) -> None:
    """Fit one window; records that have no answer yet and pass the test take it."""
    record = binned(t, y)
    end = float(t[-1])
    highest = min(_HIGHEST_TESTED, len(record.time) // 3)
    if order is not None:
        highest = max(highest, order)
    columns = record.averaged((t / end)[:, None] ** np.arange(highest + 1))
    fits = project(record, columns, Noise(record, times, wander=wander))
    if order is not None:
        choice.take(np.ones(len(y), dtype=bool), fits, order, end, len(t))
        return
    last = min(_HIGHEST_ADEQUATE, highest - 1)
    for p in range(1, last + 1):
        chance = fits.tail_probability(p + 1, highest + 1, choice.weights)
        choice.take(chance > _SIGNIFICANCE, fits, p + 1, end, len(t))
    choice.fall_back(fits, max(last + 1, 1), end, len(t))


class _Choice:
    """What has been chosen for each record so far."""

    def __init__(self, records: int, weights: FloatArray) -> None:
        self.weights = weights
        self.open = np.ones(records, dtype=bool)
        self.values = np.empty_like(weights)
        self.scales = np.empty_like(weights)
        self.whole = np.zeros((3, records), dtype=np.intp)  # dof, order, points
        self.real = np.zeros((3, records))  # end, curvature, end ratio
        self.noise = np.zeros((2, records))

    def correlation(self, noise: Noise) -> None:
        """Note mean share and time of correlation."""
        shares = self.weights * noise.shares
        self.noise[0] = shares.sum(axis=1)
        each = np.zeros(len(noise.shares))
        per_time = (len(noise.shares) - 1) // len(noise.times)
        each[1:] = np.repeat(noise.times, per_time)
        self.noise[1] = (shares * each).sum(axis=1) / np.maximum(self.noise[0], 1e-300)

    def take(self, passed: BoolArray, fits: Projected, order: int, end: float, points: int) -> None:
        """Give the records that pass and are still open this window and order."""
        chosen = self.open & passed
        self._note(chosen, fits, order, end, points)
        self.open &= ~chosen

    def fall_back(self, fits: Projected, order: int, end: float, points: int) -> None:
        """Note the highest order for records that nothing has described so far."""
        self._note(self.open, fits, order, end, points)

    def _note(
        self, chosen: BoolArray, fits: Projected, order: int, end: float, points: int
    ) -> None:
        if not np.any(chosen):
            return
        value, scale = fits.parameter(1, order + 1)
        self.values[chosen], self.scales[chosen] = value[chosen] / end, scale[chosen] / end
        terms = [
            np.sum(self.weights * fits.parameter(j, order + 1)[0], axis=1)
            for j in range(1, order + 1)
        ]
        at_end = sum(j * term for j, term in enumerate(terms, start=1))
        self.whole[:, chosen] = np.array([[fits.points - order - 1], [order], [points]])
        self.real[0, chosen] = end
        self.real[1, chosen] = (2 * terms[1] / end**2)[chosen] if order > 1 else 0.0
        self.real[2, chosen] = (at_end / terms[0])[chosen]

    def made(self) -> Slopes:
        """Return the slopes."""
        return Slopes(
            self.weights,
            self.values,
            self.scales,
            self.whole[0],
            self.whole[1],
            self.whole[2],
            self.real[0],
            ~self.open,
            self.real[1],
            self.real[2],
            self.noise[0],
            self.noise[1],
        )


def initial_slope(
    time: ArrayLike,
    signal: ArrayLike,
    *,
    dead_time: float = 0.0,
    window: float | None = None,
    order: int | None = None,
    blank: tuple[float, float] | None = None,
    total_change: float | None = None,
) -> InitialSlope:
    """Return the slope of a trace at t = 0, by the rule at the top of the module.

    Parameters
    ----------
    time : (n,) array_like
        Times from mixing, rising; the slope is per their unit.
    signal : (n,) array_like
        Absorbance or another signal linear in concentration.
    dead_time
        Points before it are left out.
    window
        Last time to use; chosen by the rule if not given.
    order
        Order of the polynomial, 1 to 5; chosen by the rule if not given.
    blank
        Slope of a blank (drift of the instrument) with its standard uncertainty, taken off.
    total_change
        Change of the signal over the whole reaction, for the share of conversion.

    Returns
    -------
    InitialSlope

    Raises
    ------
    InputError
        If times or signals cannot be, or too few points are left.
    """
    signal = np.asarray(signal, dtype=float)
    found = initial_slopes(time, signal[None], dead_time=dead_time, window=window, order=order)
    t, y = checked_trace(time, signal[None], dead_time, float(found.window_end[0]))
    blank = (0.0, 0.0) if blank is None else blank
    if not (np.isfinite(blank).all() and blank[1] >= 0):
        raise InputError("the slope of the blank cannot be", "give (slope, standard uncertainty)")
    distribution = mixture_of(
        found.weights[0],
        found.values[0] - blank[0],
        np.hypot(found.scales[0], blank[1]),
        int(found.degrees_of_freedom[0]),
    )
    conversion = 1.0 - float(found.end_ratio[0])
    if total_change:
        fitted = np.polynomial.Polynomial.fit(t, y[0], int(found.order[0]))
        conversion = float(fitted(t[-1]) - fitted(0.0)) / total_change
    return InitialSlope(
        value=float(distribution.mean),
        standard_uncertainty=float(distribution.standard_deviation),
        distribution=distribution,
        naive_uncertainty=_naive(t, y[0], int(found.order[0])),
        window=(float(t[0]), float(t[-1])),
        order=int(found.order[0]),
        points=int(found.points[0]),
        degrees_of_freedom=int(found.degrees_of_freedom[0]),
        curvature=float(found.curvature[0]),
        conversion=conversion,
        correlation_share=float(found.correlation_share[0]),
        correlation_time=float(found.correlation_time[0]),
        caveats=tuple(_caveats(found, t, conversion, np.size(time))),
    )


def _naive(t: FloatArray, y: FloatArray, order: int) -> float:
    """Return u of the slope as if every point were independent."""
    columns = (t / t[-1])[:, None] ** np.arange(order + 1)
    basis, upper = np.linalg.qr(columns)
    left = len(t) - order - 1
    residual = y - basis @ (basis.T @ y)
    row = np.linalg.inv(upper)[1]
    return float(np.sqrt(row @ row * (residual @ residual) / max(left, 1)) / t[-1])


def _caveats(found: Slopes, t: FloatArray, conversion: float, recorded: int) -> list[Caveat]:
    said = []
    if not found.adequate[0]:
        said.append(
            Caveat(
                "slope-no-polynomial",
                "No window of the trace is described by a polynomial of order 3 or less; the slope "
                "is from the shortest window. Look at the trace: mixing, an induction period or a "
                "spike at its beginning?",
            )
        )
    if abs(conversion) > _MUCH_CONVERSION:
        said.append(
            Caveat(
                "slope-conversion",
                f"About {100 * conversion:.0f} % of the reaction falls into the window from "
                f"{t[0]:.4g} to {t[-1]:.4g}: the slope at t = 0 rests on the polynomial. A "
                "first-order fit, or more points early on, would say more.",
            )
        )
    correlated = found.correlation_share[0] > 0.2
    if correlated and (t[-1] - t[0]) < _FEW_CORRELATION_TIMES * found.correlation_time[0]:
        said.append(
            Caveat(
                "slope-correlated-noise",
                f"The noise stays correlated over about {found.correlation_time[0]:.3g} (unit of "
                "time), so the window holds few independent pieces and u is itself uncertain by "
                "tens of per cent. Repeat runs tell the scatter.",
            )
        )
    if recorded < ENOUGH_POINTS:
        said.append(
            Caveat(
                "slope-few-points",
                f"With {recorded} points correlation of the noise cannot be told; u takes the "
                "points as independent.",
            )
        )
    return said
