"""Figures of the way from traces to rate constants; each draws on the Axes it is given."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from knought.reporting.style import INK, MUTED, SINGLE_COLUMN, sequential

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

    from knought.measurement.reduction import Reduction
    from knought.measurement.reduction_run import ReducedRun
    from knought.measurement.traces import Trace

__all__ = ["across", "trace_panels", "traces_shown"]

#: At most this many traces are drawn: the slowest, the fastest, and evenly between.
_MOST_TRACES = 6


def traces_shown(reduction: Reduction) -> tuple[int, ...]:
    """Return which runs are drawn: from the slowest to the fastest, evenly by rank."""
    traced = [i for i, each in enumerate(reduction.runs) if each.window is not None]
    ranked = sorted(traced, key=lambda i: reduction.runs[i].measured)
    if len(ranked) <= _MOST_TRACES:
        return tuple(ranked)
    return tuple(ranked[int(i)] for i in np.linspace(0, len(ranked) - 1, _MOST_TRACES).round())


def across(width: float) -> int:
    """Return how many traces stand beside each other in a figure of `width` inches."""
    return 2 if width <= SINGLE_COLUMN * 1.1 else 3


def trace_panels(reduction: Reduction, figure: Figure) -> None:
    """Draw some traces with what was read off them, each on Axes of its own.

    Parameters
    ----------
    reduction
        The reduction.
    figure
        Where to draw.
    """
    shown = traces_shown(reduction)
    columns = min(len(shown), across(float(figure.get_size_inches()[0])))
    axes = figure.subplots(-(-len(shown) // columns), columns, squeeze=False)
    for ax, place in zip(axes.flat, shown, strict=False):
        one = reduction.runs[place]
        _trace(ax, reduction.traces[one.run], one)
        T = reduction.rates.T[place]
        said = f"run {one.run}\n{T:.2f} K"
        if reduction.rates.I is not None:
            said += f", {reduction.rates.I[place]:.3g} mol/L"
        ax.set_title(said, fontsize=7.0)
    for ax in axes.flat[len(shown) :]:
        ax.set_visible(False)
    for ax in axes[:, 0]:
        ax.set_ylabel("$A$")
    for ax in axes[-1]:
        ax.set_xlabel("$t$ / s")


def _trace(ax: Axes, trace: Trace, one: ReducedRun) -> None:
    """Draw one trace: points, window, fitted curve, and the slope at t = 0 where that was read."""
    low, high = one.window or (float(trace.time[0]), float(trace.time[-1]))
    inside = (trace.time >= low) & (trace.time <= high)
    ax.axvspan(low, high, color=MUTED, alpha=0.12, linewidth=0)
    for part, colour in ((inside, sequential(1)[0]), (~inside, MUTED)):
        ax.plot(trace.time[part], trace.signal[part], ".", color=colour, ms=2.2, alpha=0.8)
    t = np.linspace(0.0, high, 200)
    start, end = one.levels or (0.0, None)
    if end is not None:
        ax.plot(t, end + (start - end) * np.exp(-one.measured * t), color=INK, lw=0.9)
    elif one.polynomial is not None:
        curve = np.polynomial.Polynomial.fit(
            trace.time[inside], trace.signal[inside], one.polynomial
        )
        ax.plot(t, curve(t), color=INK, lw=0.9)
        ax.plot(t, start + one.measured * t, color=INK, lw=0.9, ls=(0, (4, 2)))
    seen = trace.signal[trace.time >= low]  # not what the beam saw before it was mixed
    margin = 0.08 * float(np.ptp(seen)) or 0.01
    ax.set_ylim(min(float(seen.min()), start) - margin, float(seen.max()) + 2 * margin)
    ax.set_xlim(0.0, float(trace.time[-1]))
