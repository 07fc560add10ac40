"""The least-squares core against certified problems, a reference library and identities."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from knought.numerics.least_squares import RankDeficiencyError, solve, solve_many
from tests.certified import LONGLEY, NORRIS, WAMPLER1, WAMPLER3, WAMPLER5, Certified

if TYPE_CHECKING:
    from knought.arrays import FloatArray


def digits(found: FloatArray, certified: FloatArray) -> float:
    """Smallest number of agreeing digits (NIST StRD's log relative error)."""
    relative = np.abs(found - certified) / np.abs(certified)
    return float(-np.log10(np.maximum(relative, 1e-16)).max())


@pytest.mark.parametrize(
    ("problem", "coefficient_digits", "error_digits"),
    [
        pytest.param(NORRIS, 12, 12, id="Norris"),
        pytest.param(LONGLEY, 9, 10, id="Longley"),
        pytest.param(WAMPLER3, 8, 8, id="Wampler3"),
        pytest.param(WAMPLER5, 5, 9, id="Wampler5"),
    ],
)
def test_certified_linear_problems_are_solved_to_the_stated_digits(
    problem: Certified, coefficient_digits: float, error_digits: float
) -> None:
    fit = solve(problem.design, problem.observed)
    errors = np.sqrt(np.diag(fit.covariance) * fit.chi_square / fit.degrees_of_freedom)
    assert -np.log10(1e-16) >= digits(fit.parameters, problem.coefficients) >= coefficient_digits
    assert digits(errors, problem.standard_errors) >= error_digits


def test_the_exact_polynomial_of_wampler1_is_found_with_no_standard_error() -> None:
    fit = solve(WAMPLER1.design, WAMPLER1.observed)
    errors = np.sqrt(np.diag(fit.covariance) * fit.chi_square / fit.degrees_of_freedom)
    assert digits(fit.parameters, WAMPLER1.coefficients) >= 8
    assert np.all(errors < 1e-8)


def _problem(seed: int, n: int = 12, p: int = 3) -> tuple[FloatArray, FloatArray, FloatArray]:
    random = np.random.default_rng(seed)
    x = random.uniform(-1, 1, n)
    design = np.vander(x, p, increasing=True)
    u = random.uniform(0.05, 0.3, n)
    return design, design @ np.arange(1.0, p + 1) + u * random.standard_normal(n), u


def test_shared_errors_give_the_same_answer_as_their_dense_covariance() -> None:
    """Against statsmodels GLS with V = diag(u²) + J Jᵀ written out."""
    import statsmodels.api as sm

    design, y, u = _problem(1)
    shared = np.column_stack([np.full(len(y), 0.4), np.linspace(-0.2, 0.3, len(y))])
    dense = np.diag(u**2) + shared @ shared.T
    reference = sm.GLS(y, design, sigma=dense).fit(cov_type="fixed_scale")
    found = solve(design, y, u, shared=shared)
    assert np.allclose(found.parameters, reference.params, rtol=1e-9)
    assert np.allclose(found.covariance, reference.cov_params(), rtol=1e-9)
    residual = y - design @ found.parameters
    assert np.allclose(found.residuals, residual, atol=1e-12)
    assert found.chi_square == pytest.approx(residual @ np.linalg.solve(dense, residual), rel=1e-9)


def test_the_estimator_maps_observations_to_parameters() -> None:
    design, y, u = _problem(2)
    shared = np.full((len(y), 1), 0.4)
    found = solve(design, y, u, shared=shared)
    assert np.allclose(found.estimator @ y, found.parameters, rtol=1e-11)
    assert np.allclose(found.estimator @ design, np.eye(3), atol=1e-11)
    spread = np.diag(u**2) + shared @ shared.T
    assert np.allclose(found.estimator @ spread @ found.estimator.T, found.covariance, rtol=1e-9)


def test_a_prior_is_one_more_observation() -> None:
    design, y, u = _problem(3)
    row, value, width = np.array([0.0, 0.0, 1.0]), 2.5, 0.1
    found = solve(
        design, y, u, prior_rows=row[None] / width, prior_values=np.array([value / width])
    )
    stacked = solve(np.vstack([design, row]), np.append(y, value), np.append(u, width))
    assert np.allclose(found.parameters, stacked.parameters, rtol=1e-12)
    assert np.allclose(found.covariance, stacked.covariance, rtol=1e-12)
    assert found.degrees_of_freedom == stacked.degrees_of_freedom


def test_leverages_add_up_to_the_number_of_parameters() -> None:
    design, y, u = _problem(4)
    assert float(solve(design, y, u).leverage.sum()) == pytest.approx(3.0, abs=1e-12)


@given(seed=st.integers(0, 1000), factor=st.floats(1e-3, 1e3))
@settings(max_examples=25, deadline=None)
def test_scaling_every_u_scales_every_standard_error_and_no_parameter(
    seed: int, factor: float
) -> None:
    design, y, u = _problem(seed)
    one, other = solve(design, y, u), solve(design, y, factor * u)
    assert np.allclose(other.parameters, one.parameters, rtol=1e-9, atol=1e-12)
    assert np.allclose(other.covariance, factor**2 * one.covariance, rtol=1e-9)


@given(seed=st.integers(0, 1000))
@settings(max_examples=25, deadline=None)
def test_the_order_of_the_observations_does_not_matter(seed: int) -> None:
    design, y, u = _problem(seed)
    order = np.random.default_rng(seed).permutation(len(y))
    one, other = solve(design, y, u), solve(design[order], y[order], u[order])
    assert np.allclose(other.parameters, one.parameters, rtol=1e-9, atol=1e-12)
    assert np.allclose(other.residuals, one.residuals[order], atol=1e-11)


def test_columns_that_cannot_be_told_apart_are_named() -> None:
    x = np.linspace(0, 1, 6)
    design = np.column_stack([np.ones(6), x, 3 * x])
    with pytest.raises(RankDeficiencyError) as caught:
        solve(design, x)
    assert abs(caught.value.direction[0]) < 1e-8
    assert np.all(np.abs(caught.value.direction[1:]) > 0.1)


def test_fewer_observations_than_parameters_are_no_problem_to_solve() -> None:
    with pytest.raises(RankDeficiencyError):
        solve(np.ones((2, 3)) + np.eye(3)[:2], np.ones(2))


def test_a_column_of_zeros_is_named() -> None:
    design = np.column_stack([np.ones(5), np.zeros(5)])
    with pytest.raises(RankDeficiencyError) as caught:
        solve(design, np.ones(5))
    assert caught.value.direction.tolist() == [0.0, 1.0]
    with pytest.raises(RankDeficiencyError):
        solve_many(design, np.ones((2, 5)), np.ones((2, 5)))


@pytest.mark.parametrize("spread", [1.0, 1e6])
def test_a_batch_equals_its_members(spread: float) -> None:
    """Also with one run whose u is a million times smaller than the others'."""
    random = np.random.default_rng(5)
    design, _, u = _problem(5)
    sizes = u * np.exp(random.normal(size=(20, len(u))))
    sizes[:, 0] /= spread
    observed = design @ np.ones(3) + sizes * random.standard_normal(sizes.shape)
    many = solve_many(design, observed, sizes)
    for i in range(20):
        one = solve(design, observed[i], sizes[i])
        assert np.allclose(many.parameters[i], one.parameters, rtol=1e-9)
        assert np.allclose(many.covariance[i], one.covariance, rtol=1e-7)
        assert many.chi_square[i] == pytest.approx(one.chi_square, rel=1e-7)


def test_inputs_are_left_as_they_were() -> None:
    design, y, u = _problem(6)
    before = design.copy(), y.copy(), u.copy()
    solve(design, y, u)
    solve_many(design, y[None], u[None])
    for now, then in zip((design, y, u), before, strict=True):
        assert np.array_equal(now, then)
