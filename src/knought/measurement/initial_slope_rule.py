"""The rule by which window and order of an initial slope are chosen, many records at once.

The rule, stated once:

1. Points before the dead time are left out; the polynomial is in t from the moment of mixing, so
   its linear coefficient is the slope at t = 0 whatever was left out.
2. How the noise is correlated is learnt from the whole record, against a smooth curve of six
   terms (:mod:`knought.numerics.correlated_noise`); what stays unknown of it is in the answer.
3. Of the windows 1, 3/4, 9/16, ... of the record, all from its beginning, the longest is taken in
   which a polynomial of order 1, 2 or 3 leaves nothing that terms up to the fifth order explain
   (F-test at 15 %: what passes unseen would bias the slope).
4. The slope is read one order above the lowest such order: curvature too small to be seen must not
   bias it unseen. That costs precision, and is the honest price of an extrapolation.

A user who knows better gives the order (and a last time); then nothing is chosen.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from knought.errors import InputError
from knought.measurement.first_order_search import rough_rate_constants
from knought.measurement.traces import checked_trace
from knought.numerics.correlated_noise import (
    Noise,
    Projected,
    binned,
    correlation_times,
    project,
)

if TYPE_CHECKING:
    from numpy.typing import ArrayLike

    from knought.arrays import BoolArray, FloatArray, IndexArray
    from knought.numerics.correlated_noise import Binned

__all__ = ["ENOUGH_POINTS", "Slopes", "initial_slopes"]

#: With fewer points correlation cannot be told, and every point is used.
ENOUGH_POINTS = 24

_WINDOWS = tuple(0.75**i for i in range(13))

#: A smooth curve for learning the noise bends at least this much over the record.
_LEAST_BEND = 2.0
_HIGHEST_TESTED, _HIGHEST_ADEQUATE = 5, 3
_SIGNIFICANCE = 0.15


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
        Last time of the record to use; where `order` is given too it is the window itself.
    order
        Order of the polynomial, 1 to 5; it and the window are chosen if not given.

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
    windows = _WINDOWS if order is None and wander else (1.0,)
    for share in windows:
        inside = t <= t[0] + share * (t[-1] - t[0]) * (1 + 1e-12)
        if inside.sum() < min(ENOUGH_POINTS // 2, len(t)) or not choice.open.any():
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
    still = np.flatnonzero(choice.open)
    record = binned(t, y[still])
    end = float(t[-1])
    highest = min(_HIGHEST_TESTED, len(record.time) // 3)
    if order is not None:
        highest = max(highest, order)
    columns = record.averaged((t / end)[:, None] ** np.arange(highest + 1))
    fits = project(record, columns, Noise(record, times, wander=wander))
    window = _Window(fits, still, end, len(t))
    if order is not None:
        choice.take(np.ones(len(still), dtype=bool), window, order)
        return
    last = min(_HIGHEST_ADEQUATE, highest - 1)
    for p in range(1, last + 1):
        chance = fits.tail_probability(p + 1, highest + 1, choice.weights[still])
        choice.take(chance > _SIGNIFICANCE, window, p + 1)
    choice.fall_back(window, max(last + 1, 1))


@dataclass(frozen=True, eq=False)
class _Window:
    """Fits of the records that had no answer when the window was tried."""

    fits: Projected
    records: IndexArray
    end: float
    points: int


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
        self.noise[1] = noise.typical_time(self.weights)

    def take(self, passed: BoolArray, window: _Window, order: int) -> None:
        """Give the records that pass and are still open this window and order."""
        chosen = self.open[window.records] & passed
        self._note(chosen, window, order)
        self.open[window.records[chosen]] = False

    def fall_back(self, window: _Window, order: int) -> None:
        """Note the highest order for records that nothing has described so far."""
        self._note(self.open[window.records], window, order)

    def _note(self, chosen: BoolArray, window: _Window, order: int) -> None:
        if not np.any(chosen):
            return
        at, end = window.records[chosen], window.end
        weights = self.weights[at]
        value, scale = window.fits.parameter(1, order + 1)
        self.values[at], self.scales[at] = value[chosen] / end, scale[chosen] / end
        terms = [np.sum(weights * value[chosen], axis=1)]
        terms += [
            np.sum(weights * window.fits.parameter(j, order + 1)[0][chosen], axis=1)
            for j in range(2, order + 1)
        ]
        at_end = sum(j * term for j, term in enumerate(terms, start=1))
        left = window.fits.points - order - 1
        self.whole[:, at] = np.array([[left], [order], [window.points]])
        self.real[0, at] = end
        self.real[1, at] = 2 * terms[1] / end**2 if order > 1 else 0.0
        self.real[2, at] = at_end / terms[0]

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
