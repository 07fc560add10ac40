"""How likely a verdict is: by formula, and through the solver that fits real runs."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest

from knought.discussion.plan_expectation import simulate_runs
from knought.discussion.plan_model import PlanModel, Repeatability, assumed_model
from knought.discussion.power import (
    assessed,
    charge_power,
    detection,
    heat_capacity_power,
    nearest_integer_right,
    one_integer_left,
    planned_table,
)
from knought.fitting.assess import assess
from knought.fitting.fit_many import fit_many
from knought.measurement.shared_errors import SharedError
from knought.measurement.table import RateTable
from tests.discussion.test_exchange import model
from tests.simulation import guntelberg, simulate

T, I = (
    grid.ravel()
    for grid in np.meshgrid(
        np.array([15.0, 25.0, 35.0, 45.0]) + 273.15, [0.01, 0.02, 0.05, 0.1], indexing="ij"
    )
)


def guntelberg_model(error: float) -> PlanModel:
    return assumed_model(
        Repeatability(error),
        activation_energy=50e3,
        charge_product=2.0,
        charges_known=False,
        temperature_law="eyring",
        salt_law="guntelberg",
        reference_temperature=298.15,
    )


@pytest.mark.parametrize(("error", "right"), [(0.05, 1.00), (0.10, 0.99), (0.20, 0.83)])
def test_the_nearest_integer_is_right_as_often_as_it_should_be(error: float, right: float) -> None:
    """z_A z_B = 2, Güntelberg's law known, 15-45 °C and I = 0.01-0.1 mol/L: 100, 99, 83 %."""
    expected = simulate_runs(guntelberg_model(error), T, I, data_sets=5, seed=1).expected
    power = charge_power(
        guntelberg_model(error), T, I, expected["charge_product"], data_sets=4000, seed=1
    )[0]
    assert power.by_formula == pytest.approx(right, abs=0.02)
    assert power.by_simulation == pytest.approx(right, abs=0.02)
    assert power.by_simulation == pytest.approx(
        power.by_formula, abs=4 * power.simulation_error + 1e-3
    )


@pytest.mark.parametrize(("error", "right"), [(0.05, 1.00), (0.10, 0.99), (0.20, 0.83)])
def test_the_same_holds_of_named_fits_to_a_truth_written_out_elsewhere(
    error: float, right: float
) -> None:
    studies = simulate(
        guntelberg, 2, np.array([0.01, 0.02, 0.05, 0.1]), studies=4000, seed=5, u=error,
        temperatures=(288.15, 298.15, 308.15, 318.15),
    )  # fmt: skip
    k = np.exp(studies.ln_k)
    many = fit_many(k, error * k, T=T, I=I, order=2, salt_law="guntelberg")
    share = np.mean(np.rint(many.value("charge_product")) == 2)
    assert share == pytest.approx(right, abs=0.02)


def test_a_coin_flip_and_a_certainty_are_the_limits_of_the_formulas() -> None:
    assert nearest_integer_right(1e-3) == pytest.approx(1)
    assert nearest_integer_right(1e3) < 1e-3
    assert one_integer_left(0.1) == pytest.approx(1)
    assert one_integer_left(0.6) == 0
    assert detection(0.0, 1.0) == pytest.approx(0.05, abs=1e-9)
    # 80 % power at 2.8 u: 1.96 + 0.84 (from memory, every table of sample sizes).
    assert detection(2.8016, 1.0) == pytest.approx(0.80, abs=1e-3)


@pytest.mark.parametrize("aim", ["none", "guntelberg"])
def test_a_heat_capacity_is_detected_as_often_as_the_formula_says(aim: str) -> None:
    power = heat_capacity_power(model(salt_law=aim), T, I, 300.0, data_sets=4000, seed=2)
    assert power is not None
    assert 0.2 < power.by_formula < 0.99
    assert power.by_simulation == pytest.approx(power.by_formula, abs=4 * power.simulation_error)


def test_without_curvature_it_is_found_in_one_case_of_twenty() -> None:
    power = heat_capacity_power(model(), T, I, 0.0, data_sets=4000, seed=3)
    assert power is not None
    assert power.by_simulation == pytest.approx(0.05, abs=4 * power.simulation_error)


def test_two_temperatures_say_nothing_of_a_heat_capacity() -> None:
    cold = np.repeat([288.15, 308.15], 4)
    assert heat_capacity_power(model(), cold, np.zeros(8), 200.0, data_sets=10, seed=1) is None


def test_a_plan_without_charges_has_no_charge_power() -> None:
    assert charge_power(model(), T, I, 1.0, data_sets=10, seed=1) == ()


@pytest.mark.parametrize("salt_law", ["open", "guntelberg"])
def test_every_simulated_plan_is_what_assess_says_of_its_runs(salt_law: str) -> None:
    """Member by member, through the front door, a shared error and the rule for ± included."""
    stock = SharedError("stock", kind="factor", u=0.02)
    planned = replace(model(salt_law=salt_law), shared_errors=(stock,))
    found, made = assessed(planned, T, I, "charge_product", data_sets=6, seed=4, remade=False)
    table = planned_table(planned, T, I)
    assert table.u_k is not None
    enlarged = 0
    for i in range(6):
        k = np.exp(made.ln_k[i])
        rates = RateTable(k=k, T=T, order=table.order, I=I, u_k=table.u_k / table.k * k)
        one = assess(rates, salt_law=salt_law, shared_errors=[stock])
        z = one.parameters["charge_product"]
        u = float(z.standard_uncertainty)
        low, high = z.interval(0.95)
        enlarged += one.headline.scatter.from_scatter
        assert found.value("charge_product")[i] == pytest.approx(float(z.value), abs=1e-7 * u)
        assert found.interval("charge_product")[0][i] == pytest.approx(float(low), abs=1e-7 * u)
        assert found.interval("charge_product")[1][i] == pytest.approx(float(high), abs=1e-7 * u)
    assert int(found.headline.from_scatter.sum()) == enlarged
