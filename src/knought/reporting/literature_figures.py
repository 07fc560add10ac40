"""The forest figure: papers carried to our conditions, their consensus, and ours.

Captions stand in ``FOREST_CAPTION``; the ellipses of several reactions are drawn here too.
"""

from __future__ import annotations

import math
from typing import TYPE_CHECKING

import numpy as np

from knought.chemistry.quantities import quantity
from knought.reporting.style import INK, MUTED, axis_label, marker, plain_text, sequential

if TYPE_CHECKING:
    from matplotlib.axes import Axes

    from knought.discussion.carried import CarriedConsensus
    from knought.discussion.compensation import Compensation

__all__ = ["COMPENSATION_CAPTION", "FOREST_CAPTION", "compensation_plot", "forest", "gibbs_plot"]

FOREST_CAPTION = (
    "Literature values carried to one temperature and ionic strength along our surface, with 95 % "
    "intervals (1.96 standard uncertainties, that of carrying included; an open circle has no "
    "stated uncertainty). The area of a marker is proportional to its weight. Diamond: consensus "
    "with the interval of Hartung and Knapp. Band and line: ours with its 95 % interval."
)

COMPENSATION_CAPTION = (
    "ΔH‡ against ΔS‡ with joint 95 % ellipses. Broken line: slope of the harmonic mean of the "
    "experimental temperatures, along which errors alone would spread the points."
)

_NORMAL_95 = 1.959963984540054

#: Rate constants within this factor are drawn on a linear axis, whose ticks are easier to read.
_LINEAR_RANGE = 4.0

#: Area of the heaviest marker, in points².
_LARGEST = 60.0


def forest(carried: CarriedConsensus, ax: Axes) -> Axes:
    """Draw papers on our conditions, their consensus, and ours.

    Parameters
    ----------
    carried
        Several papers of one quantity.
    ax
        Where to draw.

    Returns
    -------
    Axes
        The same Axes.
    """
    what = carried.ours.quantity
    low, high = (_shown(carried, float(end)) for end in carried.ours.distribution.interval(0.95))
    ax.axvspan(low, high, color=sequential(2)[0], alpha=0.15, linewidth=0)
    ax.axvline(_shown(carried, float(carried.ours.distribution.mean)), color=INK, lw=1.0)
    labels = []
    weights = iter(carried.consensus.weights if carried.consensus is not None else ())
    for i, each in enumerate(carried.carried):
        place = -float(i)
        labels.append(plain_text(each.literature.source))
        middle = _shown(carried, each.value)
        if not math.isfinite(each.standard_uncertainty):
            ax.plot([middle], [place], marker="o", mfc="white", mec=INK, ls="none")
            continue
        reach = _NORMAL_95 * each.standard_uncertainty
        ends = [_shown(carried, each.value + sign * reach) for sign in (-1, 1)]
        ax.plot(ends, [place, place], color=INK, lw=0.9)
        share = next(weights, 0.3)
        ax.scatter([middle], [place], s=max(8.0, _LARGEST * share), marker="s", color=INK, zorder=3)
    if carried.consensus is not None:
        place = -float(len(carried.carried)) - 0.4
        labels.append("consensus")
        combined = carried.consensus
        ends = [_shown(carried, end) for end in combined.hartung_knapp_interval()]
        middle = _shown(carried, combined.value)
        ax.fill(
            [ends[0], middle, ends[1], middle],
            [place, place + 0.28, place, place - 0.28],
            color=sequential(2)[0],
            alpha=0.8,
        )
    places = [-float(i) for i in range(len(carried.carried))]
    if carried.consensus is not None:
        places.append(-float(len(carried.carried)) - 0.4)
    ax.set_yticks(places, labels)
    ax.set_ylim(places[-1] - 0.8, 0.8)
    left, right = ax.get_xlim()
    if carried.logarithmic and right > _LINEAR_RANGE * max(left, 0.0):
        ax.set_xscale("log")
    ax.set_xlabel(axis_label(what))
    ax.grid(axis="x", color=MUTED, lw=0.3, alpha=0.5)
    return ax


def compensation_plot(found: Compensation, ax: Axes) -> Axes:
    """Draw ΔH‡ against ΔS‡ with joint ellipses and the line that errors alone would give.

    Parameters
    ----------
    found
        Several reactions together.
    ax
        Where to draw.

    Returns
    -------
    Axes
        The same Axes.
    """
    colours = sequential(len(found.points))
    for i, each in enumerate(found.points):
        ring = each.ellipse(0.95)
        ax.plot(ring[:, 0], ring[:, 1] / 1e3, color=colours[i], lw=0.9)
        ax.plot(
            [each.entropy],
            [each.enthalpy / 1e3],
            marker=marker(i),
            color=colours[i],
            mec=INK,
            mew=0.4,
            ls="none",
            label=plain_text(each.label),
        )
    S = np.array([each.entropy for each in found.points])
    H = np.array([each.enthalpy for each in found.points]) / 1e3
    span = np.array([S.min(), S.max()])
    line = H.mean() + found.harmonic_mean_temperature * (span - S.mean()) / 1e3
    ax.plot(span, line, color=MUTED, ls=(0, (4, 2)), lw=0.9)
    ax.set_xlabel(axis_label(quantity("activation_entropy")))
    ax.set_ylabel(axis_label(quantity("activation_enthalpy")))
    ax.legend(loc="best")
    return ax


def gibbs_plot(found: Compensation, ax: Axes) -> Axes:
    """Draw ΔH‡ against ΔG‡ at the harmonic mean temperature, where errors are nearly uncorrelated.

    Parameters
    ----------
    found
        Several reactions together.
    ax
        Where to draw.

    Returns
    -------
    Axes
        The same Axes.
    """
    colours = sequential(len(found.points))
    for i, each in enumerate(found.points):
        ax.errorbar(
            [each.gibbs_energy / 1e3],
            [each.enthalpy / 1e3],
            xerr=[_NORMAL_95 * each.gibbs_uncertainty / 1e3],
            yerr=[_NORMAL_95 * each.enthalpy_uncertainty / 1e3],
            fmt=marker(i),
            color=colours[i],
            elinewidth=0.7,
            label=plain_text(each.label),
        )
    ax.set_xlabel(rf"$\Delta G^\ddagger$ at {found.harmonic_mean_temperature:.0f} K / (kJ mol⁻¹)")
    ax.set_ylabel(axis_label(quantity("activation_enthalpy")))
    ax.legend(loc="best")
    return ax


def _shown(carried: CarriedConsensus, value: float) -> float:
    """Return a compared value on the axis: k itself, on a logarithmic one."""
    plain = math.exp(value) if carried.logarithmic else value
    return carried.ours.quantity.shown(plain)
