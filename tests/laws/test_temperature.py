"""Temperature laws: the textbook equations, their derivatives, and what relates them."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from knought.chemistry.constants import BOLTZMANN, GAS_CONSTANT, PLANCK
from knought.errors import InputError
from knought.laws.activation import activation_rows
from knought.laws.salt import SALT_LAWS
from knought.laws.surface import Surface
from knought.laws.temperature import TEMPERATURE_LAWS, temperature_law

T = np.linspace(275.0, 370.0, 13)
VALUES = {
    "ln_rate_constant": -4.2,
    "activation_energy": 61_000.0,
    "activation_enthalpy": 58_000.0,
    "activation_heat_capacity": -120.0,
}
LAWS = [name for name in TEMPERATURE_LAWS if name != "isothermal"]


def surface(name: str, T_ref: float = 298.15) -> Surface:
    return Surface(temperature_law(name), SALT_LAWS["none"], T_ref)


def theta(name: str) -> np.ndarray:
    return np.array([VALUES[each] for each in surface(name).parameters])


def test_arrhenius_is_a_pre_exponential_factor_and_an_energy() -> None:
    rows = surface("arrhenius").ln_k(T)
    ln_A = -4.2 + 61_000 / (GAS_CONSTANT * 298.15)
    assert np.allclose(
        rows.offset + rows.rows @ theta("arrhenius"), ln_A - 61_000 / GAS_CONSTANT / T
    )


def test_eyring_is_transition_state_theory() -> None:
    rows = surface("eyring").ln_k(T)
    enthalpy, at = 58_000.0, 298.15
    gibbs = GAS_CONSTANT * at * (np.log(BOLTZMANN * at / PLANCK) + 4.2)
    entropy = (enthalpy - gibbs) / at
    expected = np.log(BOLTZMANN * T / PLANCK) + entropy / GAS_CONSTANT - enthalpy / GAS_CONSTANT / T
    assert np.allclose(rows.offset + rows.rows @ theta("eyring"), expected, rtol=1e-13)


def test_the_heat_capacity_of_activation_is_the_slope_of_the_enthalpy() -> None:
    laws = surface("eyring-cp")
    at = activation_rows(laws, np.array([290.0, 310.0]))["activation_enthalpy"]
    low, high = at.offset + at.rows @ theta("eyring-cp")
    assert (high - low) / 20 == pytest.approx(-120.0, rel=1e-9)


def test_modified_arrhenius_is_a_power_of_temperature() -> None:
    rows = surface("modified-arrhenius").ln_k(T)
    ln_k = rows.offset + rows.rows @ theta("modified-arrhenius")
    n = -120.0 / GAS_CONSTANT + 1
    energy = 61_000 - n * GAS_CONSTANT * 298.15
    expected = -4.2 + n * np.log(T / 298.15) - energy / GAS_CONSTANT * (1 / T - 1 / 298.15)
    assert np.allclose(ln_k, expected, rtol=1e-12)


def test_both_laws_with_curvature_are_one_surface() -> None:
    """E_a = ΔH‡ + R T_ref and the same ΔC_p‡ give the same ln k everywhere."""
    arrhenius, eyring = surface("modified-arrhenius").ln_k(T), surface("eyring-cp").ln_k(T)
    one = arrhenius.offset + arrhenius.rows @ np.array([-4.2, 58_000 + GAS_CONSTANT * 298.15, 35.0])
    other = eyring.offset + eyring.rows @ np.array([-4.2, 58_000, 35.0])
    assert np.allclose(one, other, rtol=1e-12)


@pytest.mark.parametrize("name", TEMPERATURE_LAWS)
def test_derivatives_agree_with_finite_differences(name: str) -> None:
    laws, h = surface(name), 1e-3
    up, down, slope = laws.ln_k(T + h), laws.ln_k(T - h), laws.ln_k_dT(T)
    assert np.allclose((up.rows - down.rows) / (2 * h), slope.rows, rtol=1e-7, atol=1e-13)
    assert np.allclose((up.offset - down.offset) / (2 * h), slope.offset, rtol=1e-7, atol=1e-13)


@given(T_ref=st.floats(274, 372), at=st.floats(274, 372))
@settings(max_examples=30, deadline=None)
def test_activation_parameters_satisfy_their_definitions(T_ref: float, at: float) -> None:
    rows = activation_rows(surface("eyring-cp", T_ref), at)
    found = {name: float((r.offset + r.rows @ theta("eyring-cp"))[0]) for name, r in rows.items()}
    assert found["activation_energy"] == pytest.approx(
        found["activation_enthalpy"] + GAS_CONSTANT * at, rel=1e-12
    )
    gibbs = found["activation_enthalpy"] - at * found["activation_entropy"]
    assert found["activation_gibbs_energy"] == pytest.approx(gibbs, rel=1e-11)
    eyring = np.log(BOLTZMANN * at / PLANCK) - gibbs / (GAS_CONSTANT * at)
    assert found["ln_rate_constant"] == pytest.approx(eyring, rel=1e-10, abs=1e-9)
    # A = e (k_B T/h) exp(ΔS‡/R), with E_a = ΔH‡ + RT (Gold Book, "entropy of activation").
    ln_A = 1 + np.log(BOLTZMANN * at / PLANCK) + found["activation_entropy"] / GAS_CONSTANT
    assert found["ln_pre_exponential_factor"] == pytest.approx(ln_A, rel=1e-10)


def test_another_standard_concentration_moves_entropy_and_gibbs_energy_only() -> None:
    from dataclasses import replace
    from fractions import Fraction

    molar = replace(surface("eyring"), order=Fraction(2))
    millimolar = replace(molar, standard_concentration=1e-3)
    values = theta("eyring")
    one, other = activation_rows(molar, 298.15), activation_rows(millimolar, 298.15)
    moved = {
        name: float(
            (other[name].offset - one[name].offset)[0]
            + ((other[name].rows - one[name].rows) @ values)[0]
        )
        for name in one
    }
    assert moved["activation_entropy"] == pytest.approx(GAS_CONSTANT * np.log(1e-3), rel=1e-9)
    assert moved["activation_enthalpy"] == pytest.approx(0, abs=1e-6)


def test_an_unknown_law_is_refused_with_the_known_ones() -> None:
    with pytest.raises(InputError, match="eyring-cp"):
        temperature_law("eyringg")


def test_a_reference_temperature_below_zero_is_refused() -> None:
    with pytest.raises(InputError, match="above 0 K"):
        surface("eyring", -5.0)
