"""Traces, signal against time: what every reduction asks of them."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from knought.arrays import FloatArray, frozen
from knought.errors import InputError
from knought.given import real_array

if TYPE_CHECKING:
    from numpy.typing import ArrayLike

__all__ = ["Trace", "checked_trace"]

#: Squares of larger numbers are no longer finite.
_LARGEST = 1e100


@dataclass(frozen=True, eq=False)
class Trace:
    """A recorded trace.

    Parameters
    ----------
    run
        Label of the run.
    time : (n,) array_like
        s from mixing, rising.
    signal : (n,) array_like
        Absorbance, or another signal.

    Raises
    ------
    InputError
        If times do not rise, or lengths differ, or a value is not finite.
    """

    run: str
    time: FloatArray
    signal: FloatArray

    def __post_init__(self) -> None:
        t, y = checked_trace(self.time, np.asarray(self.signal, dtype=float)[None], where=self.run)
        object.__setattr__(self, "time", frozen(t))
        object.__setattr__(self, "signal", frozen(y[0]))


def checked_trace(
    time: ArrayLike,
    signals: ArrayLike,
    dead_time: float | None = None,
    window: float | None = None,
    where: str = "",
) -> tuple[FloatArray, FloatArray]:
    """Return times and records as arrays, without what lies outside the window.

    Parameters
    ----------
    time : (n,) array_like
        Rising times.
    signals : (m, n) array_like
        Records on them.
    dead_time, window
        First and last time to use; everything if not given.
    where
        Label for messages.

    Returns
    -------
    tuple of ndarray
        Times ``(k,)`` and records ``(m, k)``.

    Raises
    ------
    InputError
        If times do not rise, lengths differ, a value is not finite, or fewer than 2 points are
        left.
    """
    t, y = real_array(time, "time"), real_array(signals, "signal")
    named = f"trace {where}: " if where else ""
    if t.ndim != 1 or y.ndim != 2 or y.shape[1] != len(t):
        raise InputError(
            f"{named}there are {t.size} times and {y.shape[-1] if y.ndim else 1} signals",
            "give one signal for each time",
        )
    if not (np.isfinite(t).all() and np.isfinite(y).all()):
        raise InputError(f"{named}a time or signal is not a number", "leave such points out")
    if max(np.abs(t).max(initial=0.0), np.abs(y).max(initial=0.0)) > _LARGEST:
        raise InputError(
            f"{named}a time or signal is larger than any instrument reads", "check the numbers"
        )
    steps = np.diff(t)
    if np.any(steps <= 0):
        at = int(np.argmax(steps <= 0))
        raise InputError(
            f"{named}times do not rise: {t[at]:g} is followed by {t[at + 1]:g}",
            "sort the points by time; average those that share one",
        )
    inside = np.ones(len(t), dtype=bool)
    if dead_time is not None:
        inside &= t >= dead_time
    if window is not None:
        inside &= t <= window * (1 + 1e-12)
    if inside.sum() < 2:
        raise InputError(
            f"{named}{int(inside.sum())} points lie between dead time and end of the window",
            "check dead time, window and the unit of time",
        )
    return t[inside], y[:, inside]
