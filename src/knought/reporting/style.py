"""One look for all figures: colours that survive colour blindness and grey print, sober lines."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

import numpy as np

from knought.rounding import unit_text

if TYPE_CHECKING:
    from collections.abc import Sequence

    from matplotlib.artist import Artist
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

    from knought.arrays import FloatArray
    from knought.chemistry.quantities import Quantity

__all__ = [
    "DOUBLE_COLUMN",
    "INK",
    "IONIC_STRENGTH_LABEL",
    "MUTED",
    "ROOT_LABEL",
    "SINGLE_COLUMN",
    "STYLE",
    "axis_label",
    "blank_figure",
    "celsius_axis",
    "is_wide",
    "legend_beside",
    "marker",
    "padded",
    "plain_text",
    "run_point",
    "sequential",
    "unit_in_brackets",
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
    # Embedded and searchable; fonts of type 42 would take longer than all the rest of a figure.
    "pdf.fonttype": 3,
    "hatch.linewidth": 0.6,
}

#: Labels that several figures share.
IONIC_STRENGTH_LABEL = "$I$ / (mol L⁻¹)"
ROOT_LABEL = "√[$I$ / (mol L⁻¹)]"

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

    # 72 dots per inch as in SVG and PDF: text measured for the layout is not measured again there.
    figure = Figure(figsize=(width, height), dpi=72, layout="constrained")
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


def legend_beside(ax: Axes, handles: Sequence[Artist], title: str | None = None) -> None:
    """Put a legend to the right of a wide figure, above a narrow one; never over the data.

    Parameters
    ----------
    ax
        Where it belongs.
    handles
        What it explains; each has a label.
    title
        Above it.
    """
    labels = [str(handle.get_label()) for handle in handles]
    if is_wide(ax):
        ax.legend(handles=handles, title=title, loc="upper left", bbox_to_anchor=(1.01, 1.0))
        return
    longest = max((len(label) for label in labels), default=0)
    ax.legend(
        handles=handles,
        title=title,
        loc="upper center",
        bbox_to_anchor=(0.5, -0.2),
        ncols=max(1, min(len(labels), 36 // (longest + 5))),
        columnspacing=1.2,
        handlelength=1.6,
    )


def is_wide(ax: Axes) -> bool:
    """Return whether the figure of `ax` is nearer to double- than to single-column width."""
    figure = ax.get_figure(root=True)
    return figure is None or figure.get_size_inches()[0] > (SINGLE_COLUMN + DOUBLE_COLUMN) / 2


def run_point(ax: Axes, x: float, y: float, level: int, colour: object, row: int) -> None:
    """Draw one run; its gid ``run-<row>`` is by what the page gives it its title."""
    (point,) = ax.plot(
        [x], [y], marker=marker(level), color=colour, ls="none", mec=INK, mew=0.4, gid=f"run-{row}"
    )
    # It lies within the axes, so that the layout need not ask for its size.
    point.set_in_layout(False)


def padded(values: FloatArray, share: float = 0.06) -> tuple[float, float]:
    """Return limits around `values` with a margin of `share` of their range."""
    low, high = float(np.min(values)), float(np.max(values))
    margin = share * (high - low) or 0.5
    return low - margin, high + margin


def axis_label(what: Quantity) -> str:
    """Return ``quantity/unit`` for an axis, in the unit in which the quantity is read."""
    unit = unit_in_brackets(what.shown_unit)
    return f"${what.symbol.latex}$" + (f" / {unit}" if unit else "")


def unit_in_brackets(unit: str) -> str:
    """Return a unit, in brackets where it has several parts; nothing for a number."""
    if unit == "1":
        return ""
    written = unit_text(unit)
    return f"({written})" if " " in unit else written


def plain_text(text: str, longest: int = 44) -> str:
    """Return text of the user for a figure: not too long, and never read as mathematics."""
    short = text if len(text) <= longest else text[: longest - 1].rstrip() + "…"
    return short.replace("$", r"\$")
