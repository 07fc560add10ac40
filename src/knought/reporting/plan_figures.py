"""The figures of a plan: where the information is, and u against the number of runs.

Each function draws on the Axes it is given and returns it; ``CAPTIONS`` defines every mark.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from knought.chemistry.quantities import quantity
from knought.reporting.style import INK, IONIC_STRENGTH_LABEL, MUTED, padded, unit_in_brackets

if TYPE_CHECKING:
    from matplotlib.axes import Axes

    from knought.discussion.next_runs import Plan
    from knought.discussion.runs_curve import RunsCurve

__all__ = ["CAPTIONS", "information_map", "u_against_runs"]

CAPTIONS = {
    "information": (
        "Fields: by how much one further run there would lower u of the aim, in per cent (white "
        "where conditions cannot be set together). Circles: runs of the plan, with their number "
        "where there are several."
    ),
    "runs": (
        "Expected standard uncertainty against the number of runs, each number with its own plan. "
        "Dashed: what is wanted; the open circle marks the first number of runs that reaches it."
    ),
}


def information_map(plan: Plan, ax: Axes) -> Axes:
    """Draw where one further run would tell most, over T and I, with the runs of the plan.

    Parameters
    ----------
    plan
        The plan.
    ax
        Where to draw.

    Returns
    -------
    Axes
        The same Axes.
    """
    T, I = np.unique(plan.reach.T), np.unique(plan.reach.ionic_strength)
    field = np.full((len(T), len(I)), np.nan)
    rows, columns = plan.reach.temperature_level, plan.reach.ionic_strength_level
    field[rows, columns] = plan.information * 100
    # Levels are set one by one, so that each has a field of the same size.
    mesh = ax.pcolormesh(
        np.arange(len(I) + 1) - 0.5,
        np.arange(len(T) + 1) - 0.5,
        field,
        cmap="cividis",
        vmin=0.0,
        edgecolors="white",
        linewidth=0.5,
    )
    for row, column, count in zip(rows, columns, plan.counts, strict=True):
        if count:
            ax.plot(column, row, "o", ms=9, mfc="white", mec=INK, mew=0.8)
            if count > 1:
                ax.text(column, row, str(int(count)), ha="center", va="center", fontsize=6.5)
    ax.set_yticks(range(len(T)), [f"{value:.2f}" for value in T])
    ax.set_ylabel("$T$ / K")
    if plan.reach.I is None:
        ax.set_xticks([])
    else:
        ax.set_xticks(range(len(I)), [f"{value:.3g}" for value in I])
        ax.set_xlabel(IONIC_STRENGTH_LABEL)
    bar = ax.figure.colorbar(mesh, ax=ax)
    bar.set_label("one run more lowers $u$ by / %")
    return ax


def u_against_runs(curve: RunsCurve, name: str, ax: Axes, *, wanted: float | None = None) -> Axes:
    """Draw the expected u of a quantity against the number of runs.

    Parameters
    ----------
    curve
        The curve.
    name
        Name of the quantity.
    ax
        Where to draw.
    wanted
        u that is wanted, in the unit of the registry (relative for k°).

    Returns
    -------
    Axes
        The same Axes.
    """
    what = quantity(name)
    relative = name == "rate_constant"

    def shown(value: float) -> float:
        return value * 100 if relative else what.shown(value)

    u = np.array([shown(float(value)) for value in curve.u[name]])
    ax.plot(curve.runs, u, "o-", color=INK, gid="u-against-runs")
    if wanted is not None:
        ax.axhline(shown(wanted), color=MUTED, ls="--", lw=0.8)
        first = curve.until(name, wanted)
        if first is not None:
            ax.plot(
                [first], [u[curve.runs == first][0]], "o", ms=9, mfc="none", mec=INK, gid="reached"
            )
    ax.set_xlim(*padded(curve.runs.astype(float)))
    ax.set_ylim(0, 1.1 * max(float(u.max()), shown(wanted or 0.0)))
    ax.set_xlabel("number of runs")
    symbol = what.symbol.latex
    written = "%" if relative else unit_in_brackets(what.shown_unit)
    unit = f" / {written}" if written else ""
    ax.set_ylabel(f"expected $u({symbol})${unit}")
    return ax
