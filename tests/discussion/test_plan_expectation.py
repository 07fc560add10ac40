"""The predicted u is what simulation gives, through the solver that fits real runs."""

from __future__ import annotations

from dataclasses import replace
from fractions import Fraction

import numpy as np
import pytest

from knought.arrays import frozen
from knought.discussion.plan_expectation import made_data, simulate_runs, solver_of
from knought.discussion.plan_model import PlanModel, Repeatability, assumed_model, model_of
from knought.fitting.observations import Observations
from knought.fitting.open_fit import fit_open
from knought.fitting.surface_fit import fit_surface
from knought.measurement.shared_errors import SharedError
from tests.discussion.test_exchange import model

T, I = (
    grid.ravel()
    for grid in np.meshgrid([288.15, 308.15, 328.15], [0.005, 0.02, 0.05, 0.1], indexing="ij")
)

NAMES = ("rate_constant", "activation_energy", "activation_entropy", "charge_product")


def seen(ln_k: object, T: object, I: object) -> Observations:
    values = np.asarray(ln_k)
    return Observations(
        frozen(values), frozen(np.full(len(values), 0.03)), frozen(np.asarray(T)),
        frozen(np.asarray(I)), None, None, u_given=True, order=Fraction(2),
    )  # fmt: skip


@pytest.mark.parametrize("salt_law", ["open", "guntelberg", "sit"])
def test_expected_u_is_the_root_mean_square_error_of_independent_simulations(
    salt_law: str,
) -> None:
    """Truths from the priors: by the law of total variance the two agree but for chance."""
    predicted = simulate_runs(model(salt_law=salt_law), T, I, seed=1).expected
    again = simulate_runs(model(salt_law=salt_law), T, I, data_sets=3000, seed=2)
    for name in NAMES:
        # √(1/2m) is 1.3 % for 3000 data sets, 2.2 % for the 1000 of the prediction's own.
        assert again.error[name] == pytest.approx(predicted[name], rel=0.07)


def test_every_simulated_data_set_is_solved_as_fit_open_solves_it() -> None:
    opened = model(salt_law="open")
    rng = np.random.default_rng(4)
    ln_k = opened.expected_ln_k(T, I) + 0.03 * rng.standard_normal((3, 12))
    solutions = solver_of(opened, T, I).solve(ln_k)
    for i in range(3):
        found = fit_open(seen(ln_k[i], T, I), scatter="given")
        assert np.allclose(solutions.weights[i], found.cell_weights, atol=1e-8)
        mean = solutions.weights[i] @ solutions.means[i, :, 0]
        assert np.allclose(mean, found.distribution.mean, rtol=1e-7, atol=1e-7)


@pytest.mark.parametrize(
    ("temperatures", "expected"),
    [
        ([15, 15, 15, 55, 55, 55], 0.48),
        ([15, 15, 35, 35, 55, 55], 0.59),
        ([15, 23, 31, 39, 47, 55], 0.70),
        ([25, 30, 35, 40, 45, 50], 1.15),
    ],
    ids=["ends only", "three levels", "even spacing", "25-50 °C even"],
)
def test_six_runs_at_three_percent_give_the_known_u_of_the_energy(
    temperatures: list[float], expected: float
) -> None:
    """u(E_a) = R s/√Σ(1/T - mean)²: 0.48, 0.59, 0.70 and 1.15 kJ/mol."""
    kelvin = np.array(temperatures) + 273.15
    found = simulate_runs(model(), kelvin, np.zeros(6), data_sets=5, seed=1)
    x = 1 / kelvin
    by_hand = 8.31446261815324 * 0.03 / np.sqrt(np.sum((x - x.mean()) ** 2))
    assert found.expected["activation_energy"] == pytest.approx(by_hand, rel=1e-9)
    assert found.expected["activation_energy"] / 1e3 == pytest.approx(expected, abs=0.005)
    # One linear law: every data set reports the same u.
    assert np.ptp(found.u[:, 1]) < 1e-6


def test_a_shared_error_does_not_average_out() -> None:
    """A probe offset of 0.3 K moves E_a by 2 u/T of itself and ln k by E_a u/(R T²)."""
    offset = SharedError("probe offset", kind="temperature-offset", u=0.3)
    plain = simulate_runs(model(), np.tile(T, 50), np.zeros(600), data_sets=5, seed=1)
    shared = replace(model(), shared_errors=(offset,))
    many = simulate_runs(shared, np.tile(T, 50), np.zeros(600), data_sets=3000, seed=1)
    by_hand = 50e3 / 8.314 / 298.15**2 * 0.3
    assert plain.expected["rate_constant"] < 0.1 * by_hand
    assert many.expected["rate_constant"] == pytest.approx(by_hand, rel=0.02)
    assert many.error["rate_constant"] == pytest.approx(by_hand, rel=0.06)


def with_temperature_errors() -> PlanModel:
    return assumed_model(
        Repeatability(0.01, T=0.2, I=0.05), activation_energy=50e3, charge_product=2.0,
        charges_known=True, temperature_law="arrhenius", salt_law="guntelberg",
        reference_temperature=298.15,
    )  # fmt: skip


def test_errors_of_each_runs_temperature_and_ionic_strength_enter_through_the_slopes() -> None:
    u = with_temperature_errors().u(np.array([298.15]), np.array([0.0]))
    by_hand = np.hypot(0.01, 50e3 / 8.31446261815324 / 298.15**2 * 0.2)
    assert u[0] == pytest.approx(by_hand, rel=1e-9)
    salted = with_temperature_errors().u(np.array([298.15]), np.array([0.1]))
    assert salted[0] > u[0]


def test_further_runs_start_from_what_the_runs_made_leave_open() -> None:
    opened = model(salt_law="open")
    rng = np.random.default_rng(8)
    made = fit_open(
        seen(opened.expected_ln_k(T, I) + 0.03 * rng.standard_normal(12), T, I), scatter="given"
    )
    further = model_of(made, Repeatability(0.03))
    after = simulate_runs(further, T, I, data_sets=2000, seed=1)
    for name in NAMES:
        before = float(made.parameters[name].standard_uncertainty)
        if name == "rate_constant":
            before /= float(made.parameters[name].value)
        assert 0.5 * before < after.expected[name] < before
        assert after.error[name] == pytest.approx(after.expected[name], rel=0.08)


def test_further_runs_share_the_errors_that_the_runs_made_had() -> None:
    """By the law of total variance again: with the stock's error drawn given the runs made."""
    stock = SharedError("stock", kind="factor", u=0.05)
    opened = model(salt_law="guntelberg")
    rng = np.random.default_rng(8)
    T_made, I_made = T[:8], I[:8]
    off = 0.05 * 1.3  # what the stock was off by when the runs were made
    ln_k = opened.expected_ln_k(T_made, I_made) + off + 0.03 * rng.standard_normal(8)
    made = fit_surface(
        replace(seen(ln_k, T_made, I_made), shared=(stock,)),
        salt_law="guntelberg",
        scatter="given",
    )
    further = model_of(made, Repeatability(0.03))
    after = simulate_runs(further, T, I, data_sets=3000, seed=1)
    for name in NAMES:
        assert after.error[name] == pytest.approx(after.expected[name], rel=0.06)
    # More runs with the same stock leave what it does to k°.
    assert after.expected["rate_constant"] > 0.9 * 0.05
    # Further runs lie off by what the runs made were, less what is not known of it.
    made_again = made_data(further, T, I, data_sets=3000, seed=1)
    rows = further.rows(T, I)
    exact = rows.offset[0] + made_again.theta @ rows.rows[0].T
    common = (made_again.ln_k[:, 8:] - exact).mean(axis=1)
    assert 0.03 < common.std() < 0.06
