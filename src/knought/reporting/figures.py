"""The figures of a report; each function draws on the Axes it is given and returns it.

Points carry the gid ``run-<row>``, by which :mod:`knought.reporting.svg` gives each its title.
Captions that define every line and band stand in ``CAPTIONS``.
"""

from __future__ import annotations

import math
from typing import TYPE_CHECKING

import numpy as np

from knought.chemistry.constants import LN10
from knought.chemistry.debye_huckel import debye_huckel
from knought.chemistry.quantities import quantity
from knought.chemistry.water import COLDEST, HOTTEST
from knought.reporting.style import INK, MUTED, celsius_axis, marker, padded, sequential

if TYPE_CHECKING:
    from matplotlib.axes import Axes

    from knought.arrays import BoolArray, FloatArray
    from knought.fitting.assess import Assessment
    from knought.fitting.found import Found
    from knought.fitting.observations import Observations

__all__ = ["residuals_against", "salt_effect", "temperature_dependence"]

_POINTS = 61

#: Fitted lines are drawn for at most this many ionic strengths or temperatures.
_MOST_LINES = 6

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
    T = 1000.0 / np.linspace(*span, _POINTS)
    T = T[_allowed(found, T)]
    for i in _spread(len(levels)):
        _line(ax, found, T, float(levels[i]), colours[i], "-", f"{levels[i]:.3g}")
    if found.describes_salt:
        _line(ax, found, T, 0.0, INK, (0, (4, 2)), "→ 0")
    else:
        _line(ax, found, T, 0.0, INK, "-", "fit")
    _points(ax, assessment, 1000.0 / seen.T, seen.ln_k, _level_of(seen.ionic_strength, levels))
    ax.set_xlim(*span)
    ax.set_xlabel("1000 K / $T$")
    ax.set_ylabel(_ln_k_label(assessment))
    celsius_axis(ax)
    if found.describes_salt:
        ax.legend(title="$I$ / (mol$\\,$L$^{-1}$)", loc="best", ncols=2 if len(levels) > 4 else 1)
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
    roots = np.linspace(0.0, math.sqrt(highest) * 1.03, _POINTS)
    charges = found.parameters.get("charge_product")
    for i in _spread(len(levels)):
        T = float(levels[i])
        mixture = found.distribution.of(found.surface.ln_k(T, roots**2))
        low, high = (end / LN10 for end in mixture.interval(0.95))
        middle = mixture.mean / LN10
        ax.fill_between(roots, low, high, color=colours[i], alpha=0.22, linewidth=0)
        ax.plot(roots, middle, color=colours[i], label=f"{T:.2f}")
        ax.plot([0.0], middle[:1], marker="o", mfc="white", mec=colours[i], clip_on=False)
        if charges is not None:
            # The limiting slope is drawn over the first part only: it leaves the plot otherwise.
            start = roots[: _POINTS // 3]
            slope = 2.0 * float(charges.value) * float(debye_huckel(np.array(T)).A)
            ax.plot(start, middle[0] + slope * start, color=colours[i], ls=":", lw=0.9)
    _points(
        ax,
        assessment,
        np.sqrt(seen.ionic_strength),
        seen.ln_k / LN10,
        _level_of(seen.T, levels),
        scale=1 / LN10,
    )
    ax.set_xlim(0.0, roots[-1])
    ax.set_xlabel(r"$\sqrt{I\,/\,(\mathrm{mol\,L^{-1}})}$")
    ax.set_ylabel(_ln_k_label(assessment).replace("ln", "lg", 1))
    ax.legend(title="$T$ / K", loc="best", ncols=2 if len(levels) > 4 else 1)
    return ax


def residuals_against(assessment: Assessment, what: str, ax: Axes) -> Axes:
    """Draw residuals over their standard uncertainty against T, I or run order.

    Parameters
    ----------
    assessment
        What was found.
    what
        ``"temperature"``, ``"ionic_strength"`` or ``"order"``.
    ax
        Where to draw.

    Returns
    -------
    Axes
        The same Axes.
    """
    found, seen = assessment.headline, assessment.observations
    rows = np.flatnonzero(assessment.rates.used)
    x, label = {
        "temperature": (seen.T, "$T$ / K"),
        "ionic_strength": (seen.ionic_strength, "$I$ / (mol$\\,$L$^{-1}$)"),
        "order": (rows + 1.0, "run, in order"),
    }[what]
    for level, style in ((0.0, "-"), (2.0, ":"), (-2.0, ":")):
        ax.axhline(level, color=MUTED, lw=0.7, ls=style)
    levels = seen.temperature_levels
    colours = sequential(len(levels))
    for i, (place, value, level) in enumerate(
        zip(x, found.standardised_residuals, _level_of(seen.T, levels), strict=True)
    ):
        ax.plot(
            [place],
            [value],
            marker=marker(level),
            color=colours[level],
            ls="none",
            mec=INK,
            mew=0.4,
            gid=f"run-{rows[i]}",
        )
    reach = max(2.6, 1.12 * float(np.abs(found.standardised_residuals).max()))
    ax.set_ylim(-reach, reach)
    ax.set_xlim(*padded(np.asarray(x, dtype=float), 0.08))
    ax.set_xlabel(label)
    ax.set_ylabel("residual of ln $k$ / $u$")
    return ax


def _line(
    ax: Axes,
    found: Found,
    T: FloatArray,
    I: float,
    colour: object,
    dashes: object,
    label: str,
) -> None:
    """Draw one fitted line with its 95 % confidence and prediction bands."""
    mixture = found.distribution.of(found.surface.ln_k(T, I))
    x, middle = 1000.0 / T, mixture.mean
    low, high = mixture.interval(0.95)
    # A further run scatters about the line with the typical u of the runs.
    run = _TWO_SIDED_95 * float(np.median(found.effective_u))
    above, below = np.hypot(high - middle, run), np.hypot(middle - low, run)
    ax.fill_between(x, middle - below, middle + above, color=colour, alpha=0.10, linewidth=0)
    ax.fill_between(x, low, high, color=colour, alpha=0.25, linewidth=0)
    ax.plot(x, middle, color=colour, ls=dashes, label=label)


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
        ax.plot(
            [x[i]],
            [y[i]],
            marker=marker(level[i]),
            color=colours[level[i]],
            ls="none",
            mec=INK,
            mew=0.4,
            gid=f"run-{row}",
        )


def _level_of(values: FloatArray, levels: FloatArray) -> list[int]:
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
    from knought.rounding import unit_text

    unit = quantity("measured_rate_constant", assessment.rates.order).shown_unit
    written = unit_text(unit, "latex")
    inner = f"({written})" if " " in unit else written
    return rf"ln [$k\,/\,{inner}$]"


def sources(observations: Observations) -> list[str]:
    """Return which residual figures the runs support."""
    found = ["temperature"] if len(observations.temperature_levels) > 1 else []
    if len(observations.ionic_strength_levels) > 1:
        found.append("ionic_strength")
    return [*found, "order"]
