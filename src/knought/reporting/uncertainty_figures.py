"""Figures that say where an uncertainty comes from; each draws on the Axes it is given."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from knought.reporting.style import INK, legend_beside, plain_text, sequential
from knought.reporting.uncertainty_tables import BUDGETED

if TYPE_CHECKING:
    from matplotlib.axes import Axes

    from knought.fitting.assess import Assessment

__all__ = ["budget_bars"]

#: Shares smaller than this are not labelled inside their bar.
_LABELLED = 0.08

_HATCHES = ("", "///", "..", "xx", "\\\\\\", "|||", "--", "++")


def budget_bars(assessment: Assessment, ax: Axes) -> Axes:
    """Draw the share of each source of error in the variance of the headline results.

    Parameters
    ----------
    assessment
        What was found.
    ax
        Where to draw.

    Returns
    -------
    Axes
        The same Axes.
    """
    parameters = assessment.headline.parameters
    names = [n for n in BUDGETED if n in parameters and not parameters[n].given]
    budgets = [assessment.budget(name) for name in names]
    sources: list[str] = []
    for each in budgets:
        sources += [source for source in each.variances if source not in sources]
    places = np.arange(len(names))[::-1]
    left = np.zeros(len(names))
    for j, (source, colour) in enumerate(zip(sources, sequential(len(sources)), strict=True)):
        shares = np.array([each.shares.get(source, 0.0) for each in budgets])
        ax.barh(
            places,
            shares,
            left=left,
            height=0.62,
            color=colour,
            edgecolor="white",
            linewidth=0.6,
            hatch=_HATCHES[j % len(_HATCHES)],
            label=plain_text(source, 28),
        )
        for place, start, share in zip(places, left, shares, strict=True):
            if share >= _LABELLED:
                ax.text(
                    start + share / 2,
                    place,
                    f"{share:.0%}",
                    ha="center",
                    va="center",
                    color=INK,
                    bbox={"facecolor": "white", "edgecolor": "none", "pad": 1.2, "alpha": 0.85},
                )
        left = left + shares
    ax.set_yticks(places, [f"${parameters[n].quantity.symbol.latex}$" for n in names])
    ax.set_xlim(0, 1)
    ax.set_xticks(np.linspace(0, 1, 6), [f"{share:.0%}" for share in np.linspace(0, 1, 6)])
    ax.set_xlabel("share of the variance")
    ax.tick_params(axis="y", length=0)
    handles, _ = ax.get_legend_handles_labels()
    legend_beside(ax, handles)
    return ax
