"""A normal error of unknown size beside one of known size: limits, and what its intervals hold."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np
import pytest
from scipy.special import ndtr
from scipy.stats import chi2

from knought.numerics.quantiles import normal_quantile, student_quantile
from knought.numerics.scatter_beside_known import scatter_beside_known

if TYPE_CHECKING:
    from knought.arrays import FloatArray


def coverage(degrees_of_freedom: int, known: FloatArray, level: float = 0.95) -> FloatArray:
    """How often intervals hold the truth, σ = 1 and each a = `known`, integrated over s.

    The half-width depends on s/a alone but for its unit; it is found on a grid of s/a.
    """
    nu = degrees_of_freedom
    grid = np.geomspace(1e-7, 1e5, 140)
    half = scatter_beside_known(np.zeros(140), grid**2, np.ones(140), nu).quantile((1 + level) / 2)
    assert np.all(np.diff(half) > -1e-6 * half[1:])  # more scatter never means a shorter interval
    chance = (np.arange(4000) + 0.5) / 4000
    s = np.sqrt(chi2.ppf(chance, nu) / nu)
    held = []
    for a in known:
        width = a * np.exp(np.interp(np.log(s / a), np.log(grid), np.log(half)))
        held.append(float(np.mean(2 * ndtr(width / np.hypot(a, 1)) - 1)))
    return np.array(held)


@pytest.mark.parametrize(
    ("nu", "most"), [(1, 0.0105), (2, 0.003), (3, 0.003), (4, 0.003), (5, 0.003), (10, 0.002)]
)
def test_intervals_hold_what_they_promise_whatever_the_ratio_of_the_errors(
    nu: int, most: float
) -> None:
    """95 % within 0.3 %, within 1.0 % at one degree of freedom, where no exact interval exists."""
    held = coverage(nu, np.geomspace(0.01, 100, 33))
    assert np.max(np.abs(held - 0.95)) < most


@pytest.mark.parametrize("nu", [1, 2, 3, 4, 5, 30])
def test_without_known_errors_it_is_student_and_without_scatter_normal(nu: int) -> None:
    found = scatter_beside_known(
        np.array([1.0, 2.0, 3.0]), np.array([4.0, 0.0, 1e-16]), np.array([0.0, 9.0, 9.0]), nu
    )
    for p in (0.6, 0.975, 0.995):
        t, normal = student_quantile(p, nu), normal_quantile(p)
        expected = [1 + 2 * t, 2 + 3 * normal, 3 + 3 * normal]
        assert found.quantile(p) == pytest.approx(expected, rel=2e-4)
    assert found.standard_deviation == pytest.approx([2, 3, 3])
    assert found.mean == pytest.approx([1, 2, 3])
    assert float(found.first().quantile(0.975)) == pytest.approx(float(found.quantile(0.975)[0]))
    assert float(found.first().standard_deviation) == 2
