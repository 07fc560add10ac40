"""Residuals looked at closely: leverage, outliers, patterns, and causes that they may have."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from knought.arrays import FloatArray, frozen
from knought.fitting.open_fit import OpenFit, fit_open
from knought.fitting.surface_fit import SurfaceFit, fit_surface
from knought.numerics.least_squares import RankDeficiencyError, solve
from knought.numerics.quantiles import chi_square_survival
from knought.numerics.runs_test import runs_probability

if TYPE_CHECKING:
    from collections.abc import Mapping

    from knought.fitting.found import Found

__all__ = ["Curvature", "Diagnostics", "SaltTest", "curvature", "diagnose", "leverage"]

#: Below this probability a finding is said.
SIGNIFICANCE = 0.05

#: Curvature is tested only with this many temperatures: with fewer, one bad one makes it.
FEWEST_TEMPERATURES = 5

#: What ΔC_p‡ is under a temperature law without it, in units of R.
_NULL_CAPACITY = {"eyring": 0.0, "arrhenius": -1.0}


@dataclass(frozen=True)
class Curvature:
    """A test for a heat capacity of activation.

    Attributes
    ----------
    value, standard_uncertainty
        ΔC_p‡ in J K^-1 mol^-1.
    probability
        Two-sided probability of a value this far from that of the law without curvature.
    """

    value: float
    standard_uncertainty: float
    probability: float


@dataclass(frozen=True)
class SaltTest:
    """A test whether runs at the same T and I depend on the salt.

    Attributes
    ----------
    offsets
        Salt to its mean departure in ln k from the first one, with its standard uncertainty.
    reference
        The salt that the others are compared with.
    probability
        Of such departures if the salt did not matter.
    """

    offsets: Mapping[str, tuple[float, float]]
    reference: str
    probability: float


@dataclass(frozen=True, eq=False)
class Diagnostics:
    """What the residuals of a fit say.

    Attributes
    ----------
    studentised : (n,) ndarray
        Residual over its own standard deviation, u √(1 - leverage).
    leverage : (n,) ndarray
        Of each run.
    outliers
        Indices of runs whose studentised residual chance hardly explains (Bonferroni, 5 %).
    runs_test
        Probability of as few changes of sign along T, I and the order of the runs.
    curvature
        Test for ΔC_p‡; None with fewer than five temperatures.
    salt
        Test for a dependence on the salt beside I; None with one salt.
    """

    studentised: FloatArray
    leverage: FloatArray
    outliers: tuple[int, ...]
    runs_test: Mapping[str, float]
    curvature: Curvature | None
    salt: SaltTest | None


def diagnose(found: Found) -> Diagnostics:
    """Look at the residuals of a fit.

    Parameters
    ----------
    found
        The fit.
    """
    hat = leverage(found)
    own = np.sqrt(np.maximum(1 - hat, 1e-12))
    studentised = found.residuals / (found.effective_u * own)
    return Diagnostics(
        frozen(studentised),
        frozen(hat),
        _outliers(studentised, found.scatter.headline_degrees_of_freedom),
        _patterns(found),
        curvature(found),
        salt_test(found),
    )


def leverage(found: Found) -> FloatArray:
    """Return how much each run pulls its own fitted value, ``(n,)``, between 0 and 1."""
    if isinstance(found, SurfaceFit):
        return found.solution.leverage
    if not isinstance(found, OpenFit):
        return np.zeros(found.observations.runs)
    seen, distribution = found.observations, found.distribution
    gains = found.solver.gains()
    gains = gains.reshape(-1, *gains.shape[-2:])[found.kept][..., : seen.runs]
    rows = found.surface.ln_k(seen.T, seen.ionic_strength).rows
    cell = np.zeros(1, dtype=np.intp) if distribution.cell is None else distribution.cell
    matrix = rows[cell] if rows.ndim == 3 else np.broadcast_to(rows, (len(gains), *rows.shape))
    pulled = np.einsum("cnp,cpn->cn", matrix, gains)
    return np.asarray(distribution.weights @ pulled / found.effective_u)


def _outliers(studentised: FloatArray, degrees_of_freedom: float) -> tuple[int, ...]:
    from scipy.special import ndtr, stdtr

    n = len(studentised)
    size = np.abs(studentised)
    if math.isinf(degrees_of_freedom):
        chance = 2 * ndtr(-size)
    else:
        # Externally studentised: the run itself is taken out of the scatter it is judged by.
        nu = degrees_of_freedom
        if nu <= 1:
            return ()
        left = np.maximum(nu - size**2, 1e-12)
        chance = 2 * stdtr(nu - 1, -size * np.sqrt((nu - 1) / left))
    return tuple(int(i) for i in np.flatnonzero(chance * n < SIGNIFICANCE))


def _patterns(found: Found) -> dict[str, float]:
    seen, residuals = found.observations, found.residuals
    orders = {"order": np.arange(seen.runs)}
    if len(seen.temperature_levels) > 1:
        orders["temperature"] = np.lexsort((np.arange(seen.runs), seen.T))
    if len(seen.ionic_strength_levels) > 1:
        orders["ionic strength"] = np.lexsort((np.arange(seen.runs), seen.ionic_strength))
    return {name: runs_probability(residuals[order]) for name, order in orders.items()}


def curvature(found: Found) -> Curvature | None:
    """Test for a heat capacity of activation by fitting it; None with fewer than 5 temperatures.

    Parameters
    ----------
    found
        A fit with a law without curvature.
    """
    law = found.temperature_law
    if law not in _NULL_CAPACITY:
        return None
    if len(found.observations.temperature_levels) < FEWEST_TEMPERATURES:
        return None
    from knought.chemistry.constants import GAS_CONSTANT

    bent = _with_curvature(found)
    mixture = bent.distribution.parameter("activation_heat_capacity")
    below = float(mixture.cdf(_NULL_CAPACITY[law] * GAS_CONSTANT))
    return Curvature(
        float(mixture.mean), float(mixture.standard_deviation), 2 * min(below, 1 - below)
    )


def _with_curvature(found: Found) -> Found:
    surface = found.surface
    if isinstance(found, OpenFit):
        return fit_open(
            found.observations,
            temperature_law="eyring-cp",
            reference_temperature=found.reference_temperature,
            charge_product=found.charge_product_given,
            priors=found.grid.priors,
        )
    return fit_surface(
        found.observations,
        temperature_law="eyring-cp",
        salt_law=surface.salt_law,
        reference_temperature=found.reference_temperature,
    )


def salt_test(found: Found) -> SaltTest | None:
    """Test whether the salt matters beside I (Olson and Simonson 1949); None with one salt.

    An offset of ln k for every salt but the most frequent one is added to the fit; the drop in χ²
    is what chance must explain.

    Parameters
    ----------
    found
        The fit.
    """
    seen = found.observations
    if seen.salt is None or len(set(seen.salt)) < 2:
        return None
    counts = sorted(set(seen.salt), key=lambda salt: (-seen.salt.count(salt), salt))  # type: ignore[union-attr]
    reference, others = counts[0], counts[1:]
    dummies = np.array([[float(each == salt) for salt in others] for each in seen.salt])
    surface = found.surface
    if isinstance(found, OpenFit):
        from dataclasses import replace

        best = int(np.argmax(found.cell_weights))
        surface = replace(surface, salt_law=found.grid.cell(best))
    rows = surface.ln_k(seen.T, seen.ionic_strength)
    target, u = seen.ln_k - rows.offset, found.effective_u
    try:
        whole = solve(np.hstack([rows.rows, dummies]), target, u, shared=found.errors.shared)
    except RankDeficiencyError:
        return None  # each salt at conditions of its own: the design cannot separate them
    plain = solve(rows.rows, target, u, shared=found.errors.shared)
    first = rows.rows.shape[1]
    errors = np.sqrt(np.diag(whole.covariance))
    return SaltTest(
        {
            salt: (float(whole.parameters[first + j]), float(errors[first + j]))
            for j, salt in enumerate(others)
        },
        reference,
        chi_square_survival(max(0.0, plain.chi_square - whole.chi_square), len(others)),
    )
