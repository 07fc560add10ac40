"""The slope of a trace at t = 0, with an uncertainty that can be believed.

The slope is the linear coefficient of a polynomial in the time from mixing, over a window and with
an order that the rule of :mod:`knought.measurement.initial_slope_rule` chooses, and with noise that
may be correlated. Beside it stand what the rule chose, what independent noise would have claimed,
the curvature, and how much of the reaction the window holds.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import TYPE_CHECKING

import numpy as np

from knought.errors import Caveat, InputError
from knought.given import real_array
from knought.measurement.initial_slope_rule import ENOUGH_POINTS, Slopes, initial_slopes
from knought.measurement.traces import checked_trace
from knought.numerics.correlated_noise import FEW_CORRELATION_TIMES, MUCH_WANDER, mixture_of

if TYPE_CHECKING:
    from numpy.typing import ArrayLike

    from knought.arrays import FloatArray
    from knought.numerics.quantiles import Mixture

__all__ = ["InitialSlope", "initial_slope"]

#: A window in which the slope falls by more than this share says much of the curve, not of t = 0.
_MUCH_CONVERSION = 0.3


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
    level
        Signal at t = 0 of the polynomial, with independent noise.
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
    level: float
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
        Last time of the record to use; where `order` is given too it is the window itself.
    order
        Order of the polynomial, 1 to 5; it and the window are chosen by the rule if not given.
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
    signal = real_array(signal, "signal")
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
    fitted = np.polynomial.Polynomial.fit(t, y[0], int(found.order[0]))
    if total_change:
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
        level=float(fitted(0.0)),
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
    correlated = found.correlation_share[0] > MUCH_WANDER
    if correlated and (t[-1] - t[0]) < FEW_CORRELATION_TIMES * found.correlation_time[0]:
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
