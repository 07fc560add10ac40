"""Whether residuals of a single exponential follow a pattern that two exponentials would cure.

Two exponentials are what A → B → C and two parallel first-order processes both give, so the trace
alone does not tell these apart: for the consecutive reaction either rate constant may belong to
either step. They are offered with their numbers, and never chosen silently.

A pattern is claimed where the signs of the residuals (averaged in bins) run together too long
(runs test at 1 %) and a second exponential helps more than chance would (F-test at 1 %), allowing
for its being searched over. Runs without that help are correlated noise, which u(k) allows for.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from knought.errors import InputError
from knought.measurement.traces import checked_trace
from knought.numerics.correlated_noise import binned
from knought.numerics.runs_test import runs_probability

if TYPE_CHECKING:
    from numpy.typing import ArrayLike

    from knought.arrays import FloatArray

__all__ = ["Pattern", "TwoExponentials", "pattern_of", "two_exponentials"]

_SIGNIFICANCE = 0.01

#: With fewer points two exponentials are not tried.
_FEWEST = 12

_GRID = 40


@dataclass(frozen=True)
class TwoExponentials:
    """A sum of two exponentials and a level.

    Attributes
    ----------
    fast, slow
        The rate constants.
    u_fast, u_slow
        Their standard uncertainties with independent noise.
    fast_amplitude, slow_amplitude, final_level
        Linear coefficients.
    residual_deviation
        √(RSS/ν).
    """

    fast: float
    slow: float
    u_fast: float
    u_slow: float
    fast_amplitude: float
    slow_amplitude: float
    final_level: float
    residual_deviation: float


@dataclass(frozen=True)
class Pattern:
    """What the residuals of a single exponential look like.

    Attributes
    ----------
    found
        Whether a single exponential fails.
    runs_probability
        Of so few runs of signs by chance.
    second_probability
        Of a second exponential helping so much by chance; 1 where it was not tried.
    offer
        Two exponentials where they help, for the user to choose.
    """

    found: bool
    runs_probability: float
    second_probability: float
    offer: TwoExponentials | None = None

    @property
    def sentence(self) -> str:
        """What to tell the user."""
        if not self.found or self.offer is None:
            return "The residuals of a single exponential show no pattern."
        return (
            "The residuals follow a pattern: a single exponential does not describe the trace "
            f"(runs test p = {self.runs_probability:.1g}, second exponential p = "
            f"{self.second_probability:.1g}). Two exponentials would have k = "
            f"{self.offer.fast:.4g} and {self.offer.slow:.4g} s^-1, as consecutive or parallel "
            "steps have; the trace does not say which belongs to which step. The value given is "
            "still that of a single exponential."
        )


def pattern_of(
    time: FloatArray, signal: FloatArray, residual: FloatArray, unknowns: int
) -> Pattern:
    """Judge the residuals of a single exponential.

    Parameters
    ----------
    time, signal, residual : (n,) ndarray
        The trace and what the single exponential leaves.
    unknowns
        Of the single exponential.
    """
    runs = runs_probability(binned(time, residual[None]).values[0])
    if len(time) < _FEWEST or runs > _SIGNIFICANCE:
        return Pattern(found=False, runs_probability=runs, second_probability=1.0)
    offer = two_exponentials(time, signal)
    left = len(time) - 5
    large = offer.residual_deviation**2 * left
    more = max(5 - unknowns, 1)
    gain = (float(residual @ residual) - large) / more / (large / left)
    from scipy.special import fdtrc

    # The search over the second k is worth some further tries (Bonferroni, one a decade or so).
    chance = min(1.0, 5 * float(fdtrc(more, left, max(gain, 0.0))))
    found = chance < _SIGNIFICANCE and _cures(time, signal, offer, runs)
    return Pattern(found, runs, chance, offer if found else None)


def _cures(time: FloatArray, signal: FloatArray, offer: TwoExponentials, before: float) -> bool:
    """Whether the runs become much less conspicuous, as wander's would not."""
    fitted = (
        offer.final_level
        + offer.fast_amplitude * np.exp(-offer.fast * time)
        + offer.slow_amplitude * np.exp(-offer.slow * time)
    )
    after = runs_probability(binned(time, (signal - fitted)[None]).values[0])
    return after > max(100 * before, 1e-4)


def two_exponentials(time: ArrayLike, signal: ArrayLike) -> TwoExponentials:
    """Fit a level and two exponentials; no starting values are needed.

    Separable least squares: a grid over both rate constants, refined by Gauss-Newton steps.

    Parameters
    ----------
    time, signal : (n,) array_like
        The trace.

    Raises
    ------
    InputError
        If there are fewer than 12 points.
    """
    t, y = checked_trace(time, np.asarray(signal, dtype=float)[None])
    y = y[0]
    if len(t) < _FEWEST:
        raise InputError(
            f"{len(t)} points are too few for two exponentials", f"record at least {_FEWEST}"
        )
    ln_k = _searched(t, y)
    for _ in range(100):
        step, ln_moved = np.zeros(2), ln_k
        jacobian, residual = _linearised(t, y, ln_k)
        step = np.clip(np.linalg.lstsq(jacobian, residual, rcond=None)[0][-2:], -0.5, 0.5)
        before = float(residual @ residual)
        while np.max(np.abs(step)) > 1e-12:
            ln_moved = ln_k + step
            after = _linearised(t, y, ln_moved)[1]
            if float(after @ after) <= before:
                break
            step = step / 2
        ln_k = ln_k + step
        if np.max(np.abs(step)) < 1e-10:
            break
    return _described(t, y, ln_k)


def _columns(t: FloatArray, ln_k: FloatArray) -> FloatArray:
    return np.column_stack([np.ones_like(t), *(np.exp(-np.exp(each) * t) for each in ln_k)])


def _searched(t: FloatArray, y: FloatArray) -> FloatArray:
    span = t[-1] - t[0]
    grid = np.linspace(np.log(0.05 / span), np.log(1.0 / np.min(np.diff(t))), _GRID)
    best, found = np.inf, grid[:2]
    for i in range(_GRID):
        for j in range(i + 2, _GRID):
            pair = grid[[i, j]]
            basis = np.linalg.qr(_columns(t, pair))[0]
            left = y - basis @ (basis.T @ y)
            if float(left @ left) < best:
                best, found = float(left @ left), pair
    return found


def _linearised(t: FloatArray, y: FloatArray, ln_k: FloatArray) -> tuple[FloatArray, FloatArray]:
    columns = _columns(t, ln_k)
    levels = np.linalg.lstsq(columns, y, rcond=None)[0]
    k = np.exp(ln_k)
    slopes = -levels[1:] * (k * t[:, None]) * columns[:, 1:]
    return np.column_stack([columns, slopes]), y - columns @ levels


def _described(t: FloatArray, y: FloatArray, ln_k: FloatArray) -> TwoExponentials:
    jacobian, residual = _linearised(t, y, ln_k)
    levels = np.linalg.lstsq(_columns(t, ln_k), y, rcond=None)[0]
    deviation = float(np.sqrt(residual @ residual / (len(t) - 5)))
    scale = np.linalg.norm(jacobian, axis=0)
    u = deviation * np.linalg.norm(np.linalg.pinv(jacobian / scale), axis=1) / scale
    k = np.exp(ln_k)
    slow, fast = (0, 1) if k[0] < k[1] else (1, 0)
    return TwoExponentials(
        fast=float(k[fast]),
        slow=float(k[slow]),
        u_fast=float(k[fast] * u[3 + fast]),
        u_slow=float(k[slow] * u[3 + slow]),
        fast_amplitude=float(levels[1 + fast]),
        slow_amplitude=float(levels[1 + slow]),
        final_level=float(levels[0]),
        residual_deviation=deviation,
    )
