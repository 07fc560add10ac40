"""One look for all figures: colours that survive colour blindness and grey print, sober lines."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

import numpy as np

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

    from knought.arrays import FloatArray

__all__ = [
    "DOUBLE_COLUMN",
    "INK",
    "MUTED",
    "SINGLE_COLUMN",
    "STYLE",
    "blank_figure",
    "celsius_axis",
    "marker",
    "padded",
    "sequential",
]

#: Text and frame; quieter text, grids and limits.
INK = "#1b1f24"
MUTED = "#6b7280"

#: Single- and double-column width of journals, in inches (86 mm and 178 mm).
SINGLE_COLUMN, DOUBLE_COLUMN = 86 / 25.4, 178 / 25.4

STYLE: Any = {
    "font.family": "sans-serif",
    "font.sans-serif": ["DejaVu Sans"],
    "font.size": 8.0,
    "axes.labelsize": 8.5,
    "axes.titlesize": 8.5,
    "axes.edgecolor": INK,
    "axes.labelcolor": INK,
    "axes.linewidth": 0.7,
    "axes.axisbelow": True,
    "xtick.color": INK,
    "ytick.color": INK,
    "xtick.direction": "in",
    "ytick.direction": "in",
    "legend.frameon": False,
    "legend.fontsize": 7.5,
    "legend.title_fontsize": 7.5,
    "lines.linewidth": 1.1,
    "lines.markersize": 4.5,
    "svg.fonttype": "path",
    "pdf.fonttype": 42,
}

#: Ends of the colour scale that are left out: too dark beside ink, too light on white.
_SCALE_ENDS = (0.02, 0.86)

_MARKERS = ("o", "s", "^", "D", "v", "P", "X", "p", "h", "<", ">", "*")


def sequential(count: int) -> list[tuple[float, float, float, float]]:
    """Return `count` colours from dark to light, ordered for the eye and in grey (cividis)."""
    from matplotlib import colormaps

    positions = np.linspace(*_SCALE_ENDS, max(count, 2))[:count]
    return [colormaps["cividis"](float(position)) for position in positions]


def marker(index: int) -> str:
    """Return the marker of a level, so that levels differ without colour too."""
    return _MARKERS[index % len(_MARKERS)]


def blank_figure(width: float = DOUBLE_COLUMN, height: float = 4.2) -> Figure:
    """Return an empty figure of the given size in inches, without the global state of pyplot."""
    from matplotlib.backends.backend_agg import FigureCanvasAgg
    from matplotlib.figure import Figure

    figure = Figure(figsize=(width, height), layout="constrained")
    FigureCanvasAgg(figure)
    return figure


def celsius_axis(ax: Axes) -> None:
    """Put Celsius temperatures along the top of an axis that shows 1000 K/T."""
    low, high = sorted(ax.get_xlim())
    coldest, hottest = 1000.0 / high - 273.15, 1000.0 / low - 273.15
    step = next(
        (size for size in (1, 2, 5, 10, 20, 50, 100, 200, 500) if (hottest - coldest) / size <= 8),
        1000,
    )
    ticks = np.arange(np.ceil(coldest / step) * step, hottest, step)
    top = ax.secondary_xaxis("top")
    top.set_xticks([1000.0 / (t + 273.15) for t in ticks], [f"{t:.0f}" for t in ticks])
    top.set_xlabel("$t$ / °C")


def padded(values: FloatArray, share: float = 0.06) -> tuple[float, float]:
    """Return limits around `values` with a margin of `share` of their range."""
    low, high = float(np.min(values)), float(np.max(values))
    margin = share * (high - low) or 0.5
    return low - margin, high + margin
