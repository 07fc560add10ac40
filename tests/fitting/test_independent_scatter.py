"""The size of independent errors beside shared ones, against the likelihood written out densely."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from scipy.linalg import null_space
from scipy.optimize import minimize_scalar

import knought as kn
from knought.arrays import frozen
from knought.fitting.surface_fit import fit_surface
from tests.fitting.test_shared_errors import SHARED, study


def test_the_size_is_that_of_the_restricted_likelihood() -> None:
    """Contrasts free of the parameters are normal with σ² + λ along the eigenvectors of J Jᵀ there:
    the likelihood's maximum, and the information on ln σ there.
    """
    large = replace(SHARED[3], u=0.2)
    seen = replace(study(*SHARED[:3], large), u_given=False, u=frozen(np.ones(16)))
    found = fit_surface(seen, salt_law="guntelberg")
    rows = found.surface.ln_k(found.errors.T, found.errors.I)
    contrasts = null_space(rows.rows.T)
    J = contrasts.T @ found.errors.shared
    size, directions = np.linalg.eigh(J @ J.T)
    y = directions.T @ (contrasts.T @ (seen.ln_k - rows.offset))

    def misfit(ln_sigma: float) -> float:
        variance = np.exp(2 * ln_sigma) + size
        return float(np.sum(np.log(variance) + y**2 / variance))

    best = minimize_scalar(misfit, bounds=(-8, 0), method="bounded", options={"xatol": 1e-9})
    sigma = np.exp(best.x)
    assert found.scatter.factor == pytest.approx(sigma, rel=1e-5)
    informed = np.sum((sigma**2 / (sigma**2 + size)) ** 2)
    nu = found.scatter.headline_degrees_of_freedom
    assert nu == pytest.approx(informed, abs=0.01)
    assert nu < found.scatter.degrees_of_freedom - 0.1


def test_without_shared_errors_it_is_the_birge_ratio() -> None:
    seen = replace(study(), u_given=False)
    scatter = fit_surface(seen, salt_law="guntelberg").scatter
    assert scatter.factor == scatter.birge_ratio
    assert scatter.headline_degrees_of_freedom == 13


def test_a_common_factor_tells_nothing_and_takes_nothing() -> None:
    """It moves k° alone: size and degrees of freedom of the scatter stay as they are."""
    seen = replace(study(), u_given=False)
    plain = fit_surface(seen, salt_law="guntelberg").scatter
    shared = fit_surface(
        replace(seen, shared=(kn.SharedError("absorptivity", "factor", 0.05),)),
        salt_law="guntelberg",
    ).scatter
    assert shared.factor == pytest.approx(plain.factor, rel=1e-8)
    assert shared.headline_degrees_of_freedom == pytest.approx(13, abs=1e-3)


def test_runs_without_any_scatter_leave_a_fit() -> None:
    """The same k at every T and I, and an error of temperature that then moves nothing."""
    seen = replace(
        study(kn.SharedError("probe offset", "temperature-offset", 0.2)),
        u_given=False,
        ln_k=frozen(np.zeros(16)),
    )
    found = fit_surface(seen, salt_law="guntelberg")
    u = found.parameters["rate_constant"].standard_uncertainty
    assert np.isfinite(u)
    assert 0 < float(u) < 1e-3
