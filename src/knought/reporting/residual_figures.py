"""The residuals, against temperature, ionic strength and the order of the runs."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from knought.reporting.style import IONIC_STRENGTH_LABEL, MUTED, padded, run_point, sequential
from knought.reporting.surface_figures import level_of

if TYPE_CHECKING:
    from matplotlib.axes import Axes

    from knought.fitting.assess import Assessment
    from knought.fitting.observations import Observations

__all__ = ["residuals_against", "sources"]


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
        "ionic_strength": (seen.ionic_strength, IONIC_STRENGTH_LABEL),
        "order": (rows + 1.0, "run, in order"),
    }[what]
    for level, style in ((0.0, "-"), (2.0, ":"), (-2.0, ":")):
        ax.axhline(level, color=MUTED, lw=0.7, ls=style)
    levels = seen.temperature_levels
    colours = sequential(len(levels))
    for i, (place, value, level) in enumerate(
        zip(x, found.standardised_residuals, level_of(seen.T, levels), strict=True)
    ):
        run_point(ax, float(place), float(value), level, colours[level], int(rows[i]))
    reach = max(2.6, 1.12 * float(np.abs(found.standardised_residuals).max()))
    ax.set_ylim(-reach, reach)
    ax.set_xlim(*padded(np.asarray(x, dtype=float), 0.08))
    ax.set_xlabel(label)
    ax.set_ylabel("residual of ln $k$ / $u$")
    return ax


def sources(observations: Observations) -> list[str]:
    """Return which residual figures the runs support."""
    found = ["temperature"] if len(observations.temperature_levels) > 1 else []
    if len(observations.ionic_strength_levels) > 1:
        found.append("ionic_strength")
    return [*found, "order"]
