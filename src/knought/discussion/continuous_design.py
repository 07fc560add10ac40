"""The best design when runs can be divided at will: what an exact plan is measured against.

With weights w on the candidates instead of whole runs, the criterion Φ is a smooth function on a
simplex. Where Φ is convex (one linear model: D- and c-optimality), the general equivalence theorem
holds (Kiefer and Wolfowitz, Can. J. Math. 12 (1960) 363; Whittle, J. R. Stat. Soc. B 35 (1973)
123): w is optimal exactly if no candidate's derivative lies below the mean over w,

    min_i ∂Φ/∂w_i - Σ_k w_k ∂Φ/∂w_k ≥ 0.

``gap`` is by how much that fails, relative to Φ: Φ lies at most this fraction above the optimum.
Under the open law Φ need not be convex; the gap then says that no small change of w helps.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from knought.arrays import FloatArray, frozen

if TYPE_CHECKING:
    from knought.discussion.criteria import Criterion

__all__ = ["ContinuousDesign", "continuous_design", "derivatives"]

#: Derivatives are differences over this fraction of all runs; updates of rank one keep them exact
#: to about the square root of it.
_STEP = 1e-6

#: A gap below this is no gap.
_CLOSED = 1e-5

#: A gap above this is looked at again, with whole steps of this size.
_SUSPECT = 1e-2
_WHOLE_STEP = 1e-4

#: Weights below this are none.
_NO_WEIGHT = 1e-6

_MOST_ROUNDS = 40


@dataclass(frozen=True, eq=False)
class ContinuousDesign:
    """Weights that make a criterion as small as can be.

    Attributes
    ----------
    weights : (N,) ndarray
        Share of the runs at each candidate; they add up to one.
    value
        The criterion with as many runs as the plan has.
    gap
        How far the equivalence theorem fails, relative to the criterion.
    """

    weights: FloatArray
    value: float
    gap: float


def derivatives(criterion: Criterion, weights: FloatArray, runs: float) -> tuple[float, FloatArray]:
    """Return the criterion and its derivative towards every candidate, over the criterion.

    Parameters
    ----------
    criterion
        The criterion.
    weights : (N,) ndarray
        Shares of the runs.
    runs
        Number of runs.

    Returns
    -------
    value
        The criterion.
    towards : (N,) ndarray
        (∂Φ/∂w_i - Σ w_k ∂Φ/∂w_k)/Φ: at least zero everywhere at the optimum.
    """
    design = weights * runs
    value = float(criterion.values(design[None])[0])
    slope = (criterion.with_one_more(design, _STEP * runs) - value) / (_STEP * value)
    return value, slope - weights @ slope


def continuous_design(criterion: Criterion, runs: float) -> ContinuousDesign:
    """Return the best weights for `runs` runs.

    Parameters
    ----------
    criterion
        What is made small.
    runs
        Number of runs that are divided; beside runs already made and priors it matters.

    Returns
    -------
    ContinuousDesign
    """
    weights = np.full(len(criterion), 1.0 / len(criterion))
    best = ContinuousDesign(weights, *_value_and_gap(criterion, weights, runs))
    for _ in range(_MOST_ROUNDS):
        polished = _descended(criterion, best.weights, runs)
        found = ContinuousDesign(polished, *_value_and_gap(criterion, polished, runs))
        improved = found.value < best.value * (1 - 1e-9)
        best = found if found.value <= best.value else best
        if best.gap < _CLOSED or not improved:
            break
    return ContinuousDesign(frozen(best.weights), best.value, best.gap)


def _value_and_gap(criterion: Criterion, weights: FloatArray, runs: float) -> tuple[float, float]:
    value, towards = derivatives(criterion, weights, runs)
    gap = max(0.0, -float(towards.min()))
    if gap > _SUSPECT:
        # Updates of rank one lose their digits where a design leaves a direction undetermined (one
        # temperature, for a charge product): there each small change is evaluated whole.
        moved = (1 - _WHOLE_STEP) * weights + _WHOLE_STEP * np.eye(len(weights))
        whole = (criterion.values(moved * runs) / value - 1) / _WHOLE_STEP
        gap = min(gap, max(0.0, -float(whole.min())))
    return value, gap


def _descended(criterion: Criterion, weights: FloatArray, runs: float) -> FloatArray:
    """Go down ln Φ by sequential quadratic programming on the simplex."""
    from scipy.optimize import LinearConstraint, minimize

    # A weight of exactly zero may grow again: its derivative is computed all the same.
    def objective(w: FloatArray) -> tuple[float, FloatArray]:
        w = np.clip(w, 0.0, None)
        design = w * runs
        value = float(criterion.values(design[None])[0])
        moved = criterion.with_one_more(design, _STEP * runs)
        return float(np.log(value)), (np.log(moved) - np.log(value)) / _STEP

    count = len(weights)
    result = minimize(
        objective,
        weights,
        jac=True,
        method="SLSQP",
        bounds=[(0.0, 1.0)] * count,
        constraints=LinearConstraint(np.ones((1, count)), 1.0, 1.0),
        options={"maxiter": 200, "ftol": 1e-13},
    )
    found = np.where(result.x < _NO_WEIGHT, 0.0, result.x)
    return np.asarray(found / found.sum())
