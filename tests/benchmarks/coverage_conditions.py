"""Cells of the coverage benchmark whose runs have errors of their own T and I.

The errors move the conditions that a study writes down, so that no two studies share a design: each
goes through the fits of the package as a user's would, with conditions adjusted and weights
iterated. Shared errors act for real here too: an offset moves every T, a scale every I.
"""

from __future__ import annotations

from fractions import Fraction
from typing import TYPE_CHECKING

import numpy as np

from knought.arrays import FloatArray, frozen
from knought.fitting.observations import Observations
from knought.fitting.open_fit import fit_open
from knought.fitting.surface_fit import fit_surface
from tests.benchmarks.coverage import (
    LAWS,
    QUANTITIES,
    SHARED,
    T_REF,
    WIDTHS,
    Cell,
    conditions,
    true_ln_k,
    true_values,
)

if TYPE_CHECKING:
    from knought.fitting.found import Found


def written_down(cell: Cell, random: np.random.Generator) -> Observations:
    """One study of a cell as its author sees it."""
    law = LAWS[cell.law]
    T, I = conditions(cell.runs, cell.span)
    n = len(T)
    factor, offset, scale = np.where(cell.shared, random.standard_normal(3), 0.0) * [
        error.u for error in SHARED
    ]
    ln_k = true_ln_k(law.truth, cell.charges, T, I) + factor + cell.u * random.standard_normal(n)
    T_read = T + offset + cell.u_T * random.standard_normal(n)
    I_read = I * (1 + scale) * (1 + cell.u_I * random.standard_normal(n))
    return Observations(
        frozen(ln_k),
        frozen(np.full(n, cell.u)),
        frozen(T_read),
        frozen(I_read),
        frozen(np.full(n, cell.u_T)),
        frozen(cell.u_I * I_read),
        u_given=True,
        order=Fraction(2),
        shared=SHARED if cell.shared else (),
    )


def evaluate_one_by_one(cell: Cell, studies: int) -> dict[str, object]:
    """Count how often the intervals of the open law and of the right law hold the truth."""
    law = LAWS[cell.law]
    random = np.random.default_rng([20261202, cell.number])
    held: dict[str, FloatArray] = {"open": np.zeros(4), "known": np.zeros(4)}
    widths = []
    true = true_values(cell.charges)
    for number in range(studies):
        seen = written_down(cell, random)
        found = fit_open(seen, reference_temperature=T_REF, scatter="given", refinement=1)
        held["open"] += _holds(found, true)
        if number < WIDTHS:
            widths.append(_widths(found))
        if law.known is not None and cell.runs > len(law.known.parameters) + 2:
            named = fit_surface(
                seen, salt_law=law.known, reference_temperature=T_REF, scatter="given"
            )
            held["known"] += _holds(named, true)
    results: dict[str, object] = {
        f"open {name}": float(count) / studies
        for name, count in zip(QUANTITIES, held["open"], strict=True)
    }
    results |= dict(
        zip((f"width {name}" for name in QUANTITIES), np.mean(widths, axis=0).tolist(), strict=True)
    )
    for name, count in zip(QUANTITIES, held["known"], strict=True):
        # A count of zero is a law that was not fitted (or has no charge product).
        results[f"known {name}"] = float(count) / studies if count else float("nan")
    return results


def _holds(found: Found, true: dict[str, float]) -> FloatArray:
    """Whether the 95 % interval of each quantity holds its true value; nan-free zeros if absent."""
    inside = np.zeros(4)
    for j, name in enumerate(QUANTITIES):
        estimate = found.parameters.get(name)
        if estimate is not None and not estimate.given:
            inside[j] = 0.025 <= float(estimate.distribution.cdf(true[name])) <= 0.975  # type: ignore[union-attr]
    return inside


def _widths(found: Found) -> list[float]:
    """Lengths of the 95 % intervals, of ln k for the rate constant."""
    ends = [found.parameters[name].distribution.interval(0.95) for name in QUANTITIES]
    return [float(high - low) for low, high in ends]
