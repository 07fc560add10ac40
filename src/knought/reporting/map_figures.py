"""The rate constant as a map over temperature and ionic strength, with the runs on it."""

from __future__ import annotations

import math
from typing import TYPE_CHECKING, Any

import numpy as np

from knought.chemistry.constants import CELSIUS_ZERO, LN10
from knought.chemistry.quantities import quantity
from knought.chemistry.water import COLDEST, HOTTEST
from knought.reporting.style import INK, ROOT_LABEL, padded, run_point, sequential, unit_in_brackets
from knought.rounding import brief

if TYPE_CHECKING:
    from matplotlib.axes import Axes

    from knought.arrays import FloatArray
    from knought.fitting.assess import Assessment

__all__ = ["rate_constant_map"]

_POINTS = 41

#: About as many contour lines as this are drawn.
_LINES = 9


def rate_constant_map(assessment: Assessment, ax: Axes) -> Axes:
    """Draw contour lines of k over T and √I, with the runs on them.

    Parameters
    ----------
    assessment
        What was found; its headline must describe the salt effect at several temperatures.
    ax
        Where to draw.

    Returns
    -------
    Axes
        The same Axes, with Celsius temperatures along its top.
    """
    found, seen = assessment.headline, assessment.observations
    low, high = padded(seen.T)
    T = np.linspace(max(low, COLDEST), min(high, HOTTEST), _POINTS)
    roots = np.linspace(0.0, math.sqrt(float(seen.ionic_strength.max())) * 1.05, _POINTS)
    grid_T, grid_root = (each.ravel() for each in np.meshgrid(T, roots))
    ln_k = found.distribution.of(found.surface.ln_k(grid_T, grid_root**2)).mean
    lg_k = ln_k.reshape(len(roots), len(T)) / LN10
    levels = _levels(float(lg_k.min()), float(lg_k.max()))
    ends = [float(lg_k.min()) - 1.0, *np.log10(levels), float(lg_k.max()) + 1.0]
    ax.contourf(T, roots, lg_k, levels=ends, colors=_tints(len(ends) - 1))
    lines = ax.contour(
        T, roots, lg_k, levels=np.log10(levels), colors=INK, linewidths=0.8, linestyles="solid"
    )
    ax.clabel(lines, fmt=_written, fontsize=7, inline_spacing=3)
    for row, t, root in zip(
        np.flatnonzero(assessment.rates.used), seen.T, np.sqrt(seen.ionic_strength), strict=True
    ):
        run_point(ax, float(t), float(root), 0, "white", int(row))
    ax.set_xlim(T[0], T[-1])
    ax.set_ylim(0.0, roots[-1])
    ax.set_xlabel("$T$ / K")
    ax.set_ylabel(ROOT_LABEL)
    unit = quantity("measured_rate_constant", assessment.rates.order).shown_unit
    ax.set_title(f"lines: $k$ / {unit_in_brackets(unit)}", loc="left")
    to_celsius: Any = (lambda kelvin: kelvin - CELSIUS_ZERO, lambda t: t + CELSIUS_ZERO)
    top = ax.secondary_xaxis("top", functions=to_celsius)
    top.set_xlabel("$t$ / °C")
    return ax


def _tints(count: int) -> list[tuple[float, ...]]:
    """Return pale colours from dark to light, on which lines and circles stand out."""
    return [
        tuple(1.0 - 0.4 * (1.0 - channel) for channel in colour[:3]) for colour in sequential(count)
    ]


def _written(level: float) -> str:
    return brief(10**level)


def _levels(low: float, high: float) -> FloatArray:
    """Return round rate constants between 10^low and 10^high, about `_LINES` of them."""
    for steps in ((1,), (1, 3), (1, 2, 5), (1, 1.5, 2, 3, 5, 7), tuple(np.arange(1, 10, 0.5))):
        decades = range(math.floor(low), math.ceil(high) + 1)
        levels = np.array([step * 10.0**decade for decade in decades for step in steps])
        levels = levels[(levels > 10**low) & (levels < 10**high)]
        if len(levels) >= _LINES - 3:
            return levels
    # Less than a factor of two altogether: even steps of round size.
    span = 10**high - 10**low
    step = 10.0 ** math.floor(math.log10(span / _LINES))
    step *= next(size for size in (1, 2, 5, 10) if span / (step * size) <= _LINES)
    first, last = math.ceil(10**low / step), math.floor(10**high / step)
    return np.arange(first, last + 1, dtype=float) * step
