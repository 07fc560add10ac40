"""Continuous optima: textbook weights, and the equivalence theorem at every one of them.

x = 1/T is scaled to [-1, 1] for the weights. Textbook results: a straight line has half its weight
at each end, and for the coefficient of the quadratic term 1/4, 1/2, 1/4 (Fedorov, Theory of Optimal
Experiments, 1972; Atkinson and Donev, Optimum Experimental Designs, 1992; from memory). For a slope
at x₀ the design at -1, 0, 1 weighs like |L'(x₀)| of the Lagrange polynomials wherever it is the
optimum: 1/2, 0, 1/2 in the middle, and 1/4, 1/2, 1/4 far outside.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np
import pytest

from knought.discussion.cell_information import CellInformation
from knought.discussion.continuous_design import continuous_design, derivatives
from knought.discussion.criteria import QuantityCriterion, criterion_of
from knought.discussion.design_floor import Floor
from knought.discussion.exchange import exchange
from knought.discussion.plan_aims import Aim, read_aim
from knought.discussion.reach import Reach
from knought.laws.surface import Rows
from knought.numerics.seeds import generator
from tests.discussion.test_exchange import model

if TYPE_CHECKING:
    from knought.arrays import FloatArray

#: 15 to 55 °C, equally spaced in 1/T, middle included.
RECIPROCAL = np.linspace(1 / 288.15, 1 / 328.15, 21)
REACH = Reach.of(np.sort(1 / RECIPROCAL))


@dataclass(frozen=True)
class Weights:
    """Weights at the cold end, in the middle and at the hot end, and what lies elsewhere."""

    cold: float
    middle: float
    hot: float
    elsewhere: float


def weights(values: FloatArray) -> Weights:
    middle = values[9:12].sum()
    elsewhere = values[1:9].sum() + values[12:20].sum()
    return Weights(float(values[0]), float(middle), float(values[20]), float(elsewhere))


def polynomial(coefficient: FloatArray, x: FloatArray, aim: Aim | None = None) -> QuantityCriterion:
    """Polynomial regression in x with unit u, for one combination of coefficients (or for all)."""
    rows = np.stack([x**power for power in range(coefficient.shape[-1])], axis=-1)[None]
    information = CellInformation(
        rows,
        np.zeros((1, len(x))),
        np.ones(len(x)),
        np.zeros(1),
        np.zeros((0, rows.shape[-1])),
        np.zeros(0),
    )
    target = Rows(np.zeros((1, len(coefficient))), coefficient[None])
    return QuantityCriterion(aim or Aim("quantity", "activation_energy"), information, target)


def check_equivalence(criterion: QuantityCriterion, found: FloatArray, runs: float) -> None:
    """No candidate's derivative lies below the mean, and none that carries weight above it."""
    _, towards = derivatives(criterion, found, runs)
    assert towards.min() > -1e-4
    assert np.all(np.abs(towards[found > 0.01]) < 1e-3)


@pytest.mark.parametrize("aim", ["activation_energy", "all"])
def test_a_straight_line_has_half_its_weight_at_each_end(aim: str) -> None:
    criterion = criterion_of(read_aim(aim), model(), REACH)
    assert isinstance(criterion, QuantityCriterion)
    found = continuous_design(criterion, 6)
    at = weights(found.weights)
    assert (at.cold, at.middle, at.hot, at.elsewhere) == pytest.approx((0.5, 0, 0.5, 0), abs=1e-4)
    check_equivalence(criterion, found.weights, 6)


def test_the_quadratic_term_has_a_quarter_a_half_and_a_quarter() -> None:
    criterion = polynomial(np.array([[0.0, 0.0, 1.0]]), np.linspace(-1, 1, 21))
    found = continuous_design(criterion, 12)
    at = weights(found.weights)
    assert (at.cold, at.middle, at.hot) == pytest.approx((0.25, 0.5, 0.25), abs=1e-3)
    assert at.elsewhere == pytest.approx(0, abs=1e-3)
    # Var = 4/n: the square of the leading coefficient's bound, max |T₂| over [-1, 1].
    assert found.value == pytest.approx(4 / 12, rel=1e-4)
    check_equivalence(criterion, found.weights, 12)


def test_the_heat_capacity_has_nearly_the_same_over_the_temperatures_of_a_bath() -> None:
    curved = model(temperature_law="eyring-cp")
    criterion = criterion_of(read_aim("activation_heat_capacity"), curved, REACH)
    assert isinstance(criterion, QuantityCriterion)
    found = continuous_design(criterion, 12)
    at = weights(found.weights)
    assert (at.cold, at.middle, at.hot) == pytest.approx((0.25, 0.5, 0.25), abs=0.02)
    check_equivalence(criterion, found.weights, 12)


def test_the_energy_beside_a_quadratic_term_has_a_quarter_a_half_and_a_quarter() -> None:
    """ln k = a + b/T + c/T²: -R b is E_a at 1/T = 0, far outside the measured range."""
    middle, half = RECIPROCAL.mean(), (RECIPROCAL[0] - RECIPROCAL[-1]) / 2
    x = (1 / REACH.T - middle) / half
    at_zero = -middle / half
    criterion = polynomial(np.array([[0.0, 1.0, 2 * at_zero]]), x)
    found = continuous_design(criterion, 12)
    lagrange = np.abs([(2 * at_zero + 1) / 2, 2 * at_zero, (2 * at_zero - 1) / 2])
    expected = lagrange / lagrange.sum()
    assert expected == pytest.approx([0.25, 0.5, 0.25], abs=0.01)
    at = weights(found.weights)
    assert (at.cold, at.middle, at.hot) == pytest.approx(expected, abs=2e-3)
    check_equivalence(criterion, found.weights, 12)


@pytest.mark.parametrize(("x0", "expected"), [(0.0, (0.5, 0.0, 0.5)), (1.0, (1 / 8, 1 / 2, 3 / 8))])
def test_a_slope_inside_the_range_weighs_by_the_lagrange_polynomials(
    x0: float, expected: tuple[float, float, float]
) -> None:
    criterion = polynomial(np.array([[0.0, 1.0, 2 * x0]]), np.linspace(-1, 1, 21))
    found = continuous_design(criterion, 12)
    at = weights(found.weights)
    assert (at.cold, at.middle, at.hot) == pytest.approx(expected, abs=2e-3)
    check_equivalence(criterion, found.weights, 12)


def test_all_of_a_parabola_has_a_third_at_ends_and_middle() -> None:
    criterion = polynomial(np.eye(3), np.linspace(-1, 1, 21), Aim("all"))
    found = continuous_design(criterion, 12)
    at = weights(found.weights)
    assert (at.cold, at.middle, at.hot) == pytest.approx((1 / 3, 1 / 3, 1 / 3), abs=1e-3)
    check_equivalence(criterion, found.weights, 12)


@pytest.mark.parametrize("aim", ["activation_energy", "charge_product", "all"])
def test_under_the_open_law_no_small_change_helps_and_no_exact_plan_is_better(aim: str) -> None:
    reach = Reach.of([288.15, 308.15, 328.15], [0.005, 0.02, 0.1])
    criterion = criterion_of(read_aim(aim), model(salt_law="open"), reach)
    assert isinstance(criterion, QuantityCriterion)
    found = continuous_design(criterion, 10)
    assert found.gap < 1e-3
    assert found.weights.sum() == pytest.approx(1)
    exact = exchange(criterion, 10, Floor.none(reach), generator(1), starts=3)
    assert 0.8 < found.value / exact.value <= 1 + 1e-6


def test_a_derivative_is_that_of_the_criterion() -> None:
    """Central differences over whole designs, against the updates of rank one."""
    reach = Reach.of([288.15, 308.15, 328.15], [0.005, 0.02, 0.1])
    criterion = criterion_of(read_aim("charge_product"), model(salt_law="open"), reach)
    even = np.full(9, 1 / 9)
    value, towards = derivatives(criterion, even, 12)
    step = 1e-4
    for i in range(9):
        change = step * (np.eye(9)[i] - even)
        up, down = criterion.values(np.array([even + change, even - change]) * 12)
        assert (up - down) / (2 * step) / value == pytest.approx(towards[i], abs=1e-4)
