"""The charge product by each salt law, with the integers marked."""

from __future__ import annotations

import math
from typing import TYPE_CHECKING

import numpy as np

from knought.reporting.style import INK, MUTED, sequential

if TYPE_CHECKING:
    from matplotlib.axes import Axes

    from knought.fitting.assess import Assessment
    from knought.fitting.estimate import Estimate
    from knought.fitting.found import Found

__all__ = ["charge_product_by_law", "charge_products"]

#: Not more integers than this are marked with a line.
_MOST_INTEGERS = 13


def charge_products(assessment: Assessment) -> list[tuple[str, Estimate]]:
    """Return the law and the charge product of every fit that leaves it open, headline first."""
    headline = assessment.data_alone or assessment.headline
    fits: list[Found] = [headline]
    if assessment.choices.charge_product is None:
        fits += [law for law in assessment.laws if law.salt_law != headline.salt_law]
    found = []
    for fit in fits:
        estimate = fit.parameters.get("charge_product")
        if estimate is not None and not estimate.given:
            found.append((fit.surface.salt_law.words, estimate))
    return found


def charge_product_by_law(assessment: Assessment, ax: Axes) -> Axes:
    """Draw the charge product of the headline and of every named law with its 95 % interval.

    Parameters
    ----------
    assessment
        What was found; the charge product must be open in at least one law.
    ax
        Where to draw.

    Returns
    -------
    Axes
        The same Axes.
    """
    rows = charge_products(assessment)
    ends = np.array([[float(end) for end in each.interval(0.95)] for _, each in rows])
    given = assessment.choices.charge_product
    low, high = float(ends.min()), float(ends.max())
    if given is not None:
        low, high = min(low, given), max(high, given)
    margin = max(0.35, 0.08 * (high - low))
    integers = range(math.ceil(low - margin), math.floor(high + margin) + 1)
    if len(integers) <= _MOST_INTEGERS:
        for integer in integers:
            ax.axvline(integer, color=MUTED, lw=0.7, ls=(0, (1, 2)), gid=f"integer-{integer}")
        if len(integers) > 2:
            ax.set_xticks(
                list(integers), [f"{z:+d}".replace("-", "−") if z else "0" for z in integers]
            )
    if given is not None:
        ax.axvline(given, color=INK, lw=1.0, ls=(0, (4, 2)), gid="given")
    dark, light = sequential(2)[0], MUTED
    for i, ((_, each), (start, end)) in enumerate(zip(rows, ends, strict=True)):
        colour = dark if i == 0 else light
        ax.plot([start, end], [-i, -i], color=colour, lw=2.2 if i == 0 else 1.1)
        ax.plot(
            [float(each.value)],
            [-i],
            marker="D" if i == 0 else "o",
            color=colour,
            ms=6 if i == 0 else 4.5,
            mec=INK,
            mew=0.4,
            ls="none",
            gid=f"law-{i}",
        )
    ax.set_yticks([-i for i in range(len(rows))], [words for words, _ in rows])
    ax.set_ylim(-len(rows) + 0.4, 0.6)
    ax.set_xlim(low - margin, high + margin)
    ax.tick_params(axis="y", length=0)
    ax.set_xlabel(f"${rows[0][1].quantity.symbol.latex}$")
    return ax
