"""What is known of two activation parameters at once: ΔH‡ with ΔS‡, and ΔH‡ with ΔG‡.

ΔH‡ and ΔS‡ come from one slope, so that their joint region is a thin slanting ellipse; ΔG‡ at T_ref
is nearly independent of ΔH‡, so that theirs is nearly round when each axis spans as many of its own
standard uncertainties.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from knought.chemistry.quantities import quantity
from knought.fitting.joint_region import joint_region
from knought.reporting.style import INK, MUTED, axis_label, sequential

if TYPE_CHECKING:
    from matplotlib.axes import Axes

    from knought.fitting.assess import Assessment

__all__ = ["enthalpy_entropy_region", "enthalpy_gibbs_region"]

#: Both axes reach this much farther than the region.
_MARGIN = 1.22


def enthalpy_entropy_region(assessment: Assessment, ax: Axes, *, coverage: float = 0.95) -> Axes:
    """Draw the joint region of ΔH‡ and ΔS‡ at T_ref and I → 0.

    Parameters
    ----------
    assessment
        What was found; its temperature law must have a slope.
    ax
        Where to draw.
    coverage
        Probability that the region holds both.

    Returns
    -------
    Axes
        The same Axes.

    Raises
    ------
    InputError
        If the runs say nothing of ΔH‡, or `coverage` is not between 0 and 1.
    """
    return _region(assessment, "activation_entropy", ax, coverage)


def enthalpy_gibbs_region(assessment: Assessment, ax: Axes, *, coverage: float = 0.95) -> Axes:
    """Draw the joint region of ΔH‡ and ΔG‡ at T_ref and I → 0.

    Parameters
    ----------
    assessment
        What was found; its temperature law must have a slope.
    ax
        Where to draw.
    coverage
        Probability that the region holds both.

    Returns
    -------
    Axes
        The same Axes.

    Raises
    ------
    InputError
        If the runs say nothing of ΔH‡, or `coverage` is not between 0 and 1.
    """
    return _region(assessment, "activation_gibbs_energy", ax, coverage)


def _region(assessment: Assessment, beside: str, ax: Axes, coverage: float) -> Axes:
    names = (beside, "activation_enthalpy")
    region = joint_region(assessment.headline, names, coverage=coverage)
    shown = [quantity(name) for name in names]
    factors = np.array([what.shown(1.0) for what in shown])
    ring, centre = region.ring * factors, region.centre * factors
    colour = sequential(2)[0]
    ax.fill(*ring.T, color=colour, alpha=0.16, linewidth=0)
    ax.plot(*ring.T, color=colour, gid="region")
    ax.plot(*centre[:, None], marker="+", color=INK, ms=7, mew=1.0, ls="none")
    reach = _MARGIN * np.abs(ring - centre).max(axis=0)
    u = np.sqrt(np.diag(region.covariance)) * factors
    # Bars along the middle: one standard uncertainty of each alone.
    ax.errorbar(
        centre[:1],
        centre[1:],
        xerr=u[:1],
        yerr=u[1:],
        fmt="none",
        ecolor=MUTED,
        elinewidth=0.9,
    )
    ax.set_xlim(centre[0] - reach[0], centre[0] + reach[0])
    ax.set_ylim(centre[1] - reach[1], centre[1] + reach[1])
    ax.locator_params(axis="both", nbins=5)
    ax.set_xlabel(axis_label(shown[0]))
    ax.set_ylabel(axis_label(shown[1]))
    ax.text(
        0.04,
        0.95,
        rf"{coverage:.0%}, $\rho$ = {_correlation_text(region.correlation)}",
        transform=ax.transAxes,
        va="top",
        color=INK,
    )
    return ax


def _correlation_text(correlation: float) -> str:
    """Return a correlation with as many digits as tell it from one."""
    decimals = 2
    while decimals < 6 and abs(correlation) > 1 - 5 * 10.0**-decimals:
        decimals += 1
    return f"{correlation:.{decimals}f}".replace("-", "−")
