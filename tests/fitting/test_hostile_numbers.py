"""Designs at the edge of arithmetic, held to rational arithmetic; a right answer or a refusal."""

from __future__ import annotations

from fractions import Fraction
from typing import TYPE_CHECKING

import numpy as np
import pytest

import knought as kn
from knought.fitting.observations import distinct_levels
from knought.laws.salt import salt_law
from knought.laws.surface import Surface
from knought.laws.temperature import temperature_law
from knought.numerics.least_squares import RankDeficiencyError, solve, solve_many

if TYPE_CHECKING:
    from knought.arrays import FloatArray

UNIT = "L mol^-1 s^-1"


def exactly(
    design: FloatArray, observed: FloatArray, u: FloatArray
) -> tuple[FloatArray, FloatArray]:
    """Parameters and standard errors by exact fractions: normal equations without a rounding."""
    p = design.shape[1]
    X = [[Fraction(float(value)) for value in row] for row in design]
    y = [Fraction(float(value)) for value in observed]
    w = [1 / Fraction(float(value)) ** 2 for value in u]
    rows = [
        [
            sum((w_i * r[i] * r[j] for w_i, r in zip(w, X, strict=True)), Fraction(0))
            for j in range(p)
        ]
        + [Fraction(int(i == j)) for j in range(p)]
        + [sum((w_i * r[i] * y_i for w_i, r, y_i in zip(w, X, y, strict=True)), Fraction(0))]
        for i in range(p)
    ]
    for i in range(p):
        pivot = next(j for j in range(i, p) if rows[j][i] != 0)
        rows[i], rows[pivot] = rows[pivot], rows[i]
        rows[i] = [value / rows[i][i] for value in rows[i]]
        for j in range(p):
            if j != i:
                rows[j] = [a - rows[j][i] * b for a, b in zip(rows[j], rows[i], strict=True)]
    parameters = np.array([float(row[-1]) for row in rows])
    return parameters, np.sqrt([float(rows[i][p + i]) for i in range(p)])


def collinear(decades: float, seed: int = 1) -> tuple[FloatArray, FloatArray, FloatArray]:
    """A design of condition number near 10^decades, observations, and their u."""
    random = np.random.default_rng(seed)
    x = random.uniform(0, 1, 12)
    design = np.column_stack([np.ones(12), x, x + 10.0**-decades * random.normal(size=12)])
    return design, design @ [1.0, 2.0, -1.0] + 0.01 * random.normal(size=12), np.full(12, 0.01)


@pytest.mark.parametrize("decades", [2, 5, 8, 10])
def test_collinear_designs_are_solved_to_nine_digits(decades: int) -> None:
    """QR with refinement keeps every digit that the parameters have; u loses some with κ."""
    design, observed, u = collinear(decades)
    found = solve(design, observed, u)
    parameters, errors = exactly(design, observed, u)
    np.testing.assert_allclose(found.parameters, parameters, rtol=1e-9)
    digits = max(1e-10, found.condition * 1e-15)
    np.testing.assert_allclose(np.sqrt(np.diag(found.covariance)), errors, rtol=digits)


def test_designs_beyond_double_precision_are_refused() -> None:
    for decades in (12, 13, 15):
        with pytest.raises(RankDeficiencyError):
            solve(*collinear(decades))


@pytest.mark.parametrize("place", [0, 5, 11])
def test_one_run_a_million_times_as_certain_as_the_others(place: int) -> None:
    design, observed, u = collinear(1)
    u[place] *= 1e-6
    parameters, errors = exactly(design, observed, u)
    one, many = solve(design, observed, u), solve_many(design, observed[None], u[None])
    for theta, covariance in (
        (one.parameters, one.covariance),
        (many.parameters[0], many.covariance[0]),
    ):
        np.testing.assert_allclose(theta, parameters, rtol=1e-10)
        np.testing.assert_allclose(np.sqrt(np.diag(covariance)), errors, rtol=1e-7)


def grid(temperatures: list[float], strengths: list[float]) -> tuple[FloatArray, FloatArray]:
    return np.repeat(temperatures, len(strengths)), np.tile(strengths, len(temperatures))


def rates(T: FloatArray, I: FloatArray, energy: float = 50e3) -> kn.RateTable:
    wobble = 0.02 * np.cos(np.arange(len(T)) * 1.7)
    roots = np.sqrt(I) / (1 + np.sqrt(I))
    k = np.exp(2 - energy / 8.314 * (1 / T - 1 / 298.15) + 2.3 * roots + wobble)
    return kn.RateTable.from_arrays(T, k, I, 0.02 * k, unit=UNIT)


CASES = {
    "sixty decades": (*grid([278.15, 298.15, 318.15], [0.005, 0.02, 0.1]), 2.6e6),
    "one kelvin": (*grid([297.65, 298.15, 298.7], [0.005, 0.02, 0.1]), 50e3),
    "wide in I": (*grid([288.15, 298.15, 308.15], [1e-9, 1e-4, 5.0]), 50e3),
    "at the edge of water": (*grid([273.150000001, 283.15], [0.005, 0.02, 0.1]), 50e3),
}


@pytest.mark.parametrize("case", CASES)
def test_hostile_conditions_are_fitted_to_nine_digits(case: str) -> None:
    T, I, energy = CASES[case]
    table = rates(T, I, energy)
    if case == "sixty decades":
        assert np.ptp(np.log10(table.k)) > 50
    found = kn.fit(table, salt_law="davies", scatter="given")
    surface = Surface(temperature_law("eyring"), salt_law("davies"), 298.15, Fraction(2))
    rows = surface.ln_k(T, I)
    parameters, errors = exactly(rows.rows, table.ln_k - rows.offset, np.full(len(T), 0.02))
    np.testing.assert_allclose(found.distribution.mean, parameters, rtol=1e-9, atol=1e-9)
    u = np.sqrt(np.diag(found.covariance()[1]))
    np.testing.assert_allclose(u, errors, rtol=1e-9)


@pytest.mark.parametrize("case", CASES)
def test_each_cell_of_the_open_law_is_right_at_hostile_conditions(case: str) -> None:
    """The prior of β is one more observation; the heaviest and the lightest cell are held to it."""
    T, I, energy = CASES[case]
    table = rates(T, I, energy)
    found = kn.fit(table, scatter="given")
    assert isinstance(found, kn.OpenFit)
    rows = found.surface.ln_k(T, I)
    order = np.argsort(found.distribution.weights)
    beta = found.surface.parameters.index("interaction_coefficient")
    mean, deviation = found.grid.priors.interaction_coefficient
    for component in (order[0], order[-1]):
        cells = found.distribution.cell
        assert cells is not None
        cell = int(cells[component])
        prior = np.zeros((1, rows.rows.shape[-1]))
        prior[0, beta] = 1.0
        offset = np.broadcast_to(rows.offset, rows.rows.shape[:-1])[cell]
        parameters, errors = exactly(
            np.concatenate([rows.rows[cell], prior]),
            np.append(table.ln_k - offset, mean),
            np.append(table.u_k / table.k if table.u_k is not None else 0, deviation),
        )
        np.testing.assert_allclose(
            found.distribution.means[component], parameters, rtol=1e-8, atol=1e-8
        )
        u = np.sqrt(np.diag(found.distribution.covariances[component]))
        np.testing.assert_allclose(u, errors, rtol=1e-8)


def test_temperatures_a_hundredth_of_a_kelvin_apart_are_one_temperature() -> None:
    table = rates(*grid([298.14, 298.15, 298.16], [0.005, 0.02, 0.1]))
    for law in ("davies", "open"):
        with pytest.raises(kn.InputError, match="one temperature"):
            kn.fit(table, temperature_law="eyring", salt_law=law)
    assert "activation_energy" not in kn.fit(table).parameters


def test_ionic_strengths_that_cannot_be_told_apart_leave_the_charges_open() -> None:
    table = rates(*grid([288.15, 298.15, 308.15], [0.1, 0.1 + 1e-9, 0.1 + 2e-9]))
    with pytest.raises(kn.InputError, match="one ionic strength"):
        kn.fit(table, salt_law="davies")
    found = kn.fit(table)
    assert "charge_product" not in found.parameters
    assert "one-ionic-strength" in {caveat.code for caveat in kn.assess(table).caveats}


@pytest.mark.parametrize("decades", [6, 9, 12])
def test_ionic_strength_that_follows_temperature_is_called_confounded(decades: int) -> None:
    T = np.linspace(288.0, 308.0, 9)
    I = ((T - 287) / 210) ** 2 * (1 + 10.0**-decades * np.cos(np.arange(9)))
    for law in ("davies", "open"):
        found = kn.fit(rates(T, I), salt_law=law)
        assert "confounded" in {caveat.code for caveat in found.caveats}


def test_two_runs_give_an_answer_where_u_is_stated_and_a_refusal_where_not() -> None:
    T, k = [298.15, 308.15], [1.0, 2.0]
    found = kn.fit(kn.RateTable.from_arrays(T, k, u_k=[0.02, 0.04]))
    # From two points: E_a = R ln 2/(1/T1 - 1/T2), less the difference of Eyring's law.
    energy = found.parameters["activation_energy"].value
    assert energy == pytest.approx(8.314462618 * np.log(2) / (1 / T[0] - 1 / T[1]), rel=2e-3)
    with pytest.raises(kn.InputError, match="as many parameters as runs"):
        kn.fit(kn.RateTable.from_arrays(T, k))


def test_ten_thousand_runs_all_at_other_conditions_are_fitted() -> None:
    random = np.random.default_rng(7)
    T, I = random.uniform(283, 313, 10_000), random.uniform(0.001, 0.2, 10_000)
    table = rates(T, I)
    found = kn.fit(table, salt_law="davies")
    surface = Surface(temperature_law("eyring"), salt_law("davies"), 298.15, Fraction(2))
    rows = surface.ln_k(T, I)
    scaled = rows.rows / np.linalg.norm(rows.rows, axis=0)
    expected = np.linalg.lstsq(scaled, table.ln_k - rows.offset, rcond=None)[0]
    expected = expected / np.linalg.norm(rows.rows, axis=0)
    np.testing.assert_allclose(found.distribution.mean, expected, rtol=1e-9)


def test_values_that_chain_into_one_another_are_no_single_level() -> None:
    assert distinct_levels(np.array([298.0, 298.2, 298.4]), absolute=0.5).tolist() == [298.2]
    spread = distinct_levels(np.linspace(280.0, 320.0, 1000), absolute=0.5)
    assert 10 < len(spread) < 40
    assert spread[0] == pytest.approx(281.0, abs=0.1)


def test_uncertainties_far_above_k_leave_the_charges_open() -> None:
    """A wrong unit of u(k) once made a list of every integer of the interval, without end."""
    table = rates(*grid([288.15, 298.15, 308.15], [0.005, 0.02, 0.1]))
    found = kn.assess(kn.RateTable.from_arrays(table.T, table.k, table.I, 1e7 * table.k, unit=UNIT))
    said = {caveat.code: caveat.message for caveat in found.caveats}
    assert "say nothing of the charge product" in said["charge-product-undecided"]
