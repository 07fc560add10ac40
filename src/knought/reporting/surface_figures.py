"""The fitted surface beside the runs: against temperature, against ionic strength.

Each function draws on the Axes it is given and returns it. Points carry the gid ``run-<row>``, by
which :mod:`knought.reporting.svg` gives each its title.
"""

from __future__ import annotations

import math
from typing import TYPE_CHECKING
from weakref import WeakKeyDictionary

import numpy as np

from knought.chemistry.constants import LN10
from knought.chemistry.debye_huckel import debye_huckel
from knought.chemistry.quantities import quantity
from knought.chemistry.water import COLDEST, HOTTEST
from knought.reporting.style import (
    INK,
    IONIC_STRENGTH_LABEL,
    ROOT_LABEL,
    celsius_axis,
    legend_beside,
    marker,
    padded,
    run_point,
    sequential,
    unit_in_brackets,
)

if TYPE_CHECKING:
    from matplotlib.artist import Artist
    from matplotlib.axes import Axes

    from knought.arrays import BoolArray, FloatArray
    from knought.fitting.assess import Assessment
    from knought.fitting.found import Found

__all__ = ["level_of", "salt_effect", "temperature_dependence"]

#: Lines against 1/T are nearly straight; those against √I bend near zero.
_POINTS_IN_T, _POINTS_IN_I = 19, 37

#: Fitted lines are drawn for at most this many ionic strengths or temperatures.
_MOST_LINES = 6

#: Bands of each fit, for as long as somebody holds it.
_BANDS: WeakKeyDictionary[
    Found, dict[tuple[bytes, bytes], tuple[FloatArray, FloatArray, FloatArray]]
] = WeakKeyDictionary()

#: Legends list at most this many levels.
_MOST_LISTED = 12

#: 95 % of a normal distribution lies within this many standard deviations.
_TWO_SIDED_95 = 1.959963984540054


def temperature_dependence(assessment: Assessment, ax: Axes) -> Axes:
    """Draw ln k against 1/T with fitted lines at I → 0 and at working ionic strengths.

    Parameters
    ----------
    assessment
        What was found.
    ax
        Where to draw.

    Returns
    -------
    Axes
        The same Axes, with Celsius temperatures along its top.
    """
    found, seen = assessment.headline, assessment.observations
    levels = seen.ionic_strength_levels if found.describes_salt else np.zeros(0)
    colours = sequential(max(len(levels), 1))
    span = padded(1000.0 / seen.T)
    T = 1000.0 / np.linspace(*span, _POINTS_IN_T)
    T = T[_allowed(found, T)]
    for i in _spread(len(levels)):
        _line(ax, found, T, float(levels[i]), colours[i], "-")
    _line(ax, found, T, 0.0, INK, (0, (4, 2)) if found.describes_salt else "-", gid="limit")
    _points(ax, assessment, 1000.0 / seen.T, seen.ln_k, level_of(seen.ionic_strength, levels))
    ax.set_xlim(*span)
    ax.set_xlabel("1000 K / $T$")
    ax.set_ylabel(_ln_k_label(assessment))
    celsius_axis(ax)
    if found.describes_salt:
        handles = _level_handles(levels, "{:.3g}")
        legend_beside(ax, [_limit_handle(), *handles], IONIC_STRENGTH_LABEL)
    return ax


def salt_effect(assessment: Assessment, ax: Axes) -> Axes:
    """Draw lg k against √I at each temperature, with limiting slopes and I → 0.

    Parameters
    ----------
    assessment
        What was found; its headline must describe the salt effect.
    ax
        Where to draw.

    Returns
    -------
    Axes
        The same Axes.
    """
    found, seen = assessment.headline, assessment.observations
    levels = seen.temperature_levels
    colours = sequential(len(levels))
    highest = float(seen.ionic_strength.max())
    roots = np.linspace(0.0, math.sqrt(highest) * 1.03, _POINTS_IN_I)
    charges = found.parameters.get("charge_product")
    for i in _spread(len(levels)):
        T = float(levels[i])
        middle, low, high = (each / LN10 for each in _band(found, np.full(len(roots), T), roots**2))
        ax.fill_between(roots, low, high, color=colours[i], alpha=0.22, linewidth=0)
        ax.plot(roots, middle, color=colours[i])
        ax.plot([0.0], middle[:1], marker="o", mfc="white", mec=colours[i], clip_on=False)
        if charges is not None:
            # The limiting slope is drawn over the first part only: it leaves the plot otherwise.
            start = roots[: _POINTS_IN_I // 3]
            slope = 2.0 * float(charges.value) * float(debye_huckel(np.array(T)).A)
            ax.plot(start, middle[0] + slope * start, color=colours[i], ls=":", lw=0.9)
    _points(
        ax,
        assessment,
        np.sqrt(seen.ionic_strength),
        seen.ln_k / LN10,
        level_of(seen.T, levels),
        scale=1 / LN10,
    )
    ax.set_xlim(0.0, roots[-1])
    ax.set_xlabel(ROOT_LABEL)
    ax.set_ylabel(_ln_k_label(assessment).replace("ln", "lg", 1))
    legend_beside(ax, _level_handles(levels, "{:.2f}"), "$T$ / K")
    return ax


def _line(
    ax: Axes,
    found: Found,
    T: FloatArray,
    I: float,
    colour: object,
    dashes: object,
    gid: str | None = None,
) -> None:
    """Draw one fitted line with its 95 % confidence and prediction bands."""
    x = 1000.0 / T
    middle, low, high = _band(found, T, np.full(len(T), I))
    # A further run scatters about the line with the typical u of the runs.
    run = _TWO_SIDED_95 * float(np.median(found.effective_u))
    above, below = np.hypot(high - middle, run), np.hypot(middle - low, run)
    ax.fill_between(x, middle - below, middle + above, color=colour, alpha=0.10, linewidth=0)
    ax.fill_between(x, low, high, color=colour, alpha=0.25, linewidth=0)
    ax.plot(x, middle, color=colour, ls=dashes, gid=gid)


def _band(found: Found, T: FloatArray, I: FloatArray) -> tuple[FloatArray, FloatArray, FloatArray]:
    """Return mean and 95 % interval of ln k, found once for both widths of a figure."""
    known = _BANDS.setdefault(found, {})
    key = (T.tobytes(), I.tobytes())
    if key not in known:
        mixture = found.distribution.of(found.surface.ln_k(T, I))
        known[key] = (mixture.mean, *mixture.interval(0.95))
    return known[key]


def _points(
    ax: Axes,
    assessment: Assessment,
    x: FloatArray,
    y: FloatArray,
    level: list[int],
    scale: float = 1.0,
) -> None:
    """Draw every run with its standard uncertainty; a level has one colour and one marker."""
    found = assessment.headline
    rows = np.flatnonzero(assessment.rates.used)
    colours = sequential(max(level) + 1 if level else 1)
    ax.errorbar(x, y, yerr=found.effective_u * scale, fmt="none", ecolor=INK, elinewidth=0.7)
    for i, row in enumerate(rows):
        run_point(ax, x[i], y[i], level[i], colours[level[i]], int(row))


def _level_handles(levels: FloatArray, pattern: str) -> list[Artist]:
    """Return one entry of a legend for each level: its marker, and its line where it has one."""
    from matplotlib.lines import Line2D

    colours, drawn = sequential(max(len(levels), 1)), set(_spread(len(levels)))
    listed = range(len(levels)) if len(levels) <= _MOST_LISTED else sorted(drawn)
    return [
        Line2D(
            [],
            [],
            color=colours[i],
            ls="-" if i in drawn else "none",
            marker=marker(i),
            mec=INK,
            mew=0.4,
            label=pattern.format(levels[i]),
        )
        for i in listed
    ]


def _limit_handle() -> Artist:
    from matplotlib.lines import Line2D

    return Line2D([], [], color=INK, ls=(0, (4, 2)), label="→ 0")


def level_of(values: FloatArray, levels: FloatArray) -> list[int]:
    """Return the index of the nearest level of each value; zeros where there is no level."""
    if len(levels) == 0:
        return [0] * len(values)
    return [int(np.argmin(np.abs(levels - value))) for value in values]


def _spread(count: int) -> list[int]:
    """Return indices of at most ``_MOST_LINES`` levels, ends included."""
    if count <= _MOST_LINES:
        return list(range(count))
    return sorted({int(i) for i in np.linspace(0, count - 1, _MOST_LINES).round()})


def _allowed(found: Found, T: FloatArray) -> BoolArray:
    """Return which temperatures lie where the salt law knows water."""
    if not found.surface.salt_law.needs_water:
        return np.ones(len(T), dtype=bool)
    return np.asarray((T >= COLDEST) & (T <= HOTTEST))


def _ln_k_label(assessment: Assessment) -> str:
    unit = quantity("measured_rate_constant", assessment.rates.order).shown_unit
    return f"ln [$k$ / {unit_in_brackets(unit)}]"
