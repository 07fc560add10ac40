"""Separable least squares of a single exponential, many records at once.

Everything but k is linear, so that k alone is searched for: over a grid of everything a record can
tell, then by Gauss-Newton steps, halved where they overshoot (Golub and Pereyra, SIAM J. Numer.
Anal. 10 (1973) 413; Kaufman, BIT 15 (1975) 49).
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from knought.errors import InputError

if TYPE_CHECKING:
    from knought.arrays import FloatArray, IndexArray

__all__ = [
    "SingleExponential",
    "jacobian",
    "ordinary",
    "refined",
    "residuals",
    "rough_rate_constants",
    "searched",
]

#: Search over k times the span of the trace.
_SLOWEST, _GRID = 1e-3, 120
_MOST_STEPS, _LAST_STEP = 80, 1e-14


@dataclass(frozen=True)
class SingleExponential:
    """Which levels are unknown.

    Attributes
    ----------
    initial, final
        Levels that are known.
    drift
        Whether a linear drift is fitted.
    """

    initial: float | None
    final: float | None
    drift: bool

    def data(self, y: FloatArray) -> FloatArray:
        """Return the signals less the level that is known."""
        known = self.initial if self.initial is not None else self.final
        return y if known is None else y - known

    def columns(self, t: FloatArray, k: FloatArray) -> FloatArray:
        """Return the linear columns for each k, ``(m, n, q)``; the amplitude's is the first."""
        shape = (len(k), len(t))
        decay = np.exp(-k[:, None] * t)
        columns = [-np.expm1(-k[:, None] * t) if self.initial is not None else decay]
        if self.initial is None and self.final is None:
            columns.append(np.ones(shape))
        if self.drift:
            columns.append(np.broadcast_to(t / t[-1], shape))
        return np.stack(columns, axis=2)

    def slope(self, t: FloatArray, k: FloatArray) -> FloatArray:
        """Return ∂(first column)/∂ln k, ``(m, n)``."""
        sign = 1.0 if self.initial is not None else -1.0
        x = k[:, None] * t
        return np.asarray(sign * x * np.exp(-x))


def searched(model: SingleExponential, t: FloatArray, y: FloatArray) -> FloatArray:
    """Return the best k of a grid for each record.

    Raises
    ------
    InputError
        If it is the slowest or the fastest of the grid.
    """
    grid = _grid(t)
    place = _best_of(grid, model, t, y)
    ends = {0: "slower", len(grid) - 1: "faster"}
    for end, word in ends.items():
        if np.any(place == end):
            remedy = (
                "follow it for at least one half-life, or use the initial slope"
                if end == 0
                else "record faster, or check dead time and the unit of time"
            )
            raise InputError(f"the trace is {word} than its points can tell", remedy)
    return grid[place]


def _grid(t: FloatArray) -> FloatArray:
    """Return rate constants from a line's to one that is over at the second point."""
    span, fastest = float(t[-1] - t[0]), 6.0 / float(np.min(np.diff(t)))
    count = max(_GRID, int(20 * np.log(fastest * span)))
    return np.geomspace(_SLOWEST / span, fastest, count)


def _best_of(
    grid: FloatArray, model: SingleExponential, t: FloatArray, y: FloatArray
) -> IndexArray:
    """Return the place in the grid of each record's best k."""
    best, place = np.full(len(y), -np.inf), np.zeros(len(y), dtype=np.intp)
    for i, k in enumerate(grid):
        basis = np.linalg.qr(model.columns(t, np.array([k]))[0])[0]
        explained = np.sum((y @ basis) ** 2, axis=1)
        better = explained > best
        best[better], place[better] = explained[better], i
    return place


def rough_rate_constants(time: FloatArray, signals: FloatArray) -> FloatArray:
    """Return k of m records within a few per cent, whatever they look like.

    Parameters
    ----------
    time, signals : (n,), (m, n) ndarray
        Records that were checked.
    """
    grid = _grid(time)
    return grid[_best_of(grid, SingleExponential(None, None, drift=False), time, signals)]


def refined(model: SingleExponential, t: FloatArray, y: FloatArray, k: FloatArray) -> FloatArray:
    """Refine each k by Gauss-Newton steps of the separable problem, halved where they overshoot."""
    k = k.copy()
    rss = _rss(model, t, y, k)
    rounding = 1e-28 * np.sum(y**2, axis=1)
    for _ in range(_MOST_STEPS):
        step = np.clip(_step(model, t, y, k), -0.3, 0.3)
        for _halving in range(30):
            moved = _rss(model, t, y, k * np.exp(step))
            worse = moved > rss * (1 + 1e-13) + rounding
            if not np.any(worse):
                break
            step = np.where(worse, step / 2, step)
        k *= np.exp(step)
        rss = np.minimum(rss, moved)
        if np.max(np.abs(step)) < _LAST_STEP:
            break
    return k


def _levels(model: SingleExponential, t: FloatArray, y: FloatArray, k: FloatArray) -> FloatArray:
    basis, upper = np.linalg.qr(model.columns(t, k))
    along = np.swapaxes(basis, 1, 2) @ y[..., None]
    return np.asarray(np.linalg.solve(upper, along)[..., 0])


def residuals(model: SingleExponential, t: FloatArray, y: FloatArray, k: FloatArray) -> FloatArray:
    """Return what the best levels at each k leave, ``(m, n)``."""
    fitted = model.columns(t, k) @ _levels(model, t, y, k)[..., None]
    return np.asarray(y - fitted[..., 0])


def _rss(model: SingleExponential, t: FloatArray, y: FloatArray, k: FloatArray) -> FloatArray:
    return np.asarray(np.sum(residuals(model, t, y, k) ** 2, axis=1))


def jacobian(
    model: SingleExponential, t: FloatArray, k: FloatArray, levels: FloatArray
) -> FloatArray:
    """Return ∂signal/∂(levels, ln k), ``(m, n, q + 1)``."""
    last = levels[:, :1] * model.slope(t, k)
    return np.concatenate([model.columns(t, k), last[..., None]], axis=2)


def _step(model: SingleExponential, t: FloatArray, y: FloatArray, k: FloatArray) -> FloatArray:
    levels = _levels(model, t, y, k)
    basis, upper = np.linalg.qr(jacobian(model, t, k, levels))
    along = np.swapaxes(basis, 1, 2) @ residuals(model, t, y, k)[..., None]
    return np.asarray(along[:, -1, 0] / upper[:, -1, -1])


def ordinary(
    model: SingleExponential, t: FloatArray, y: FloatArray, k: FloatArray
) -> tuple[FloatArray, FloatArray, FloatArray]:
    """Return levels, covariance of (levels, ln k), and √(RSS/ν), with independent noise."""
    levels = _levels(model, t, y, k)
    columns = jacobian(model, t, k, levels)
    upper = np.linalg.qr(columns)[1]
    inverse = np.linalg.inv(upper)
    left = len(t) - columns.shape[2]
    deviation = np.sqrt(_rss(model, t, y, k) / left)
    covariance = inverse @ np.swapaxes(inverse, 1, 2) * deviation[:, None, None] ** 2
    return levels, covariance, deviation
