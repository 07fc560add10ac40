"""Salt laws and surfaces: slopes, limits, and what the temperature dependence of A does."""

from __future__ import annotations

import re
from typing import TYPE_CHECKING, Any

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from knought.chemistry.debye_huckel import debye_huckel
from knought.errors import InputError
from knought.laws.activation import activation_rows
from knought.laws.open_law import DEFAULT_PRIORS, Priors, narrowed, open_grid
from knought.laws.salt import SALT_LAWS, SaltLaw, salt_law
from knought.laws.surface import Surface
from knought.laws.temperature import temperature_law

if TYPE_CHECKING:
    from knought.arrays import FloatArray

T, I = (grid.ravel() for grid in np.meshgrid([283.15, 298.15, 333.15], [0.003, 0.05, 0.4]))
LN10 = np.log(10.0)
CHARGED = [name for name, law in SALT_LAWS.items() if law.fits_charge]


def surface(law: SaltLaw) -> Surface:
    return Surface(temperature_law("eyring"), law, 298.15)


@pytest.mark.parametrize("name", SALT_LAWS)
@pytest.mark.parametrize("given_charges", [None, -2.0])
def test_derivatives_agree_with_finite_differences(name: str, given_charges: float | None) -> None:
    law = SALT_LAWS[name]
    if given_charges is not None:
        law = law.with_charges(given_charges)
    laws = surface(law)
    h = 1e-3
    up, down, slope = laws.ln_k(T + h, I), laws.ln_k(T - h, I), laws.ln_k_dT(T, I)
    assert np.allclose((up.rows - down.rows) / (2 * h), slope.rows, rtol=1e-6, atol=1e-12)
    assert np.allclose((up.offset - down.offset) / (2 * h), slope.offset, rtol=1e-6, atol=1e-12)
    e = 1e-6 * I
    up, down, slope = laws.ln_k(T, I + e), laws.ln_k(T, I - e), laws.ln_k_dI(T, I)
    width = (2 * e)[:, None]
    assert np.allclose((up.rows - down.rows) / width, slope.rows, rtol=1e-6, atol=1e-6)
    assert np.allclose((up.offset - down.offset) / (2 * e), slope.offset, rtol=1e-6, atol=1e-6)


@pytest.mark.parametrize("name", CHARGED)
def test_every_law_of_charges_starts_with_the_limiting_slope(name: str) -> None:
    """d log10 k/d√I → 2 A z_A z_B at I → 0, on the molar basis, whatever the law."""
    tiny = np.array([1e-10])
    at = np.array([298.15])
    column = SALT_LAWS[name].columns(at, tiny)[0]
    slope = float((column / (LN10 * np.sqrt(tiny)))[0])
    assert slope == pytest.approx(2 * float(debye_huckel(at).A[0]), rel=2e-4)


@pytest.mark.parametrize("name", SALT_LAWS)
def test_at_zero_ionic_strength_no_law_adds_anything(name: str) -> None:
    for column in SALT_LAWS[name].columns(np.array([310.0]), np.array([0.0])):
        assert float(column[0]) == 0.0


def test_activation_parameters_shift_with_ionic_strength() -> None:
    """z_A z_B = 2, 0.1 mol/L, 25 °C, Güntelberg: k/k° ≈ 3.1, E_a +1.5 kJ/mol, ΔS‡ +14 J/(K mol).

    By hand: lg(k/k°) = 4 x 0.51053 x 0.24025 = 0.4906, so k/k° = 3.095; with dA/dT = 9.35e-4 K^-1
    (from A at 20 and 30 °C, 0.505985 and 0.515347) E_a rises by R T² ln10 x 4 x 0.24025 x 9.36e-4
    = 1.53 kJ/mol, ΔG‡ falls by RT ln 3.095 = 2.80 kJ/mol, and ΔS‡ rises by 4.33 kJ/mol over T.
    """
    laws = surface(SALT_LAWS["guntelberg"])
    values = np.array([0.0, 50_000.0, 2.0])
    shift = {}
    for name, rows in activation_rows(laws, np.full(2, 298.15), np.array([0.0, 0.1])).items():
        zero, salted = rows.offset + rows.rows @ values
        shift[name] = float(salted - zero)
    assert np.exp(shift["ln_rate_constant"]) == pytest.approx(3.1, abs=0.05)
    assert shift["activation_energy"] == pytest.approx(1530, abs=15)
    assert shift["activation_enthalpy"] == pytest.approx(shift["activation_energy"], abs=1e-6)
    assert shift["activation_entropy"] == pytest.approx(14.5, abs=0.2)


def test_freezing_the_debye_huckel_coefficient_would_bias_the_enthalpy() -> None:
    """Why A(T) is never frozen: over 15-45 °C, z_A z_B = 2, the bias of ΔH‡ exceeds 1 kJ/mol."""
    temperatures = np.repeat([288.15, 298.15, 308.15, 318.15], 4)
    strengths = np.tile([0.01, 0.02, 0.05, 0.1], 4)
    laws = surface(SALT_LAWS["guntelberg"])
    rows = laws.ln_k(temperatures, strengths)
    ln_k = rows.offset + rows.rows @ np.array([0.0, 50_000.0, 2.0])
    frozen = rows.rows.copy()
    frozen[:, 2] = laws.ln_k(np.full(16, 298.15), strengths).rows[:, 2]
    wrong = np.linalg.lstsq(frozen, ln_k - rows.offset, rcond=None)[0]
    residual = ln_k - rows.offset - frozen @ wrong
    assert wrong[1] - 50_000 > 1000
    assert np.abs(residual).max() < 0.02  # and no residual of 2 % runs would show it


@given(z=st.integers(-4, 4), at=st.floats(275, 370), strength=st.floats(0, 0.5))
@settings(max_examples=40, deadline=None)
def test_given_charges_are_the_fitted_law_at_that_value(z: int, at: float, strength: float) -> None:
    law = SALT_LAWS["davies"]
    free, known = surface(law), surface(law.with_charges(z))
    a, b = free.ln_k(at, strength), known.ln_k(at, strength)
    assert known.parameters == free.parameters[:-1]
    assert float(a.offset[0] + a.rows[0] @ [1.0, 5e4, z]) == pytest.approx(
        float(b.offset[0] + b.rows[0] @ [1.0, 5e4]), abs=1e-12
    )


def test_the_open_law_contains_the_named_ones() -> None:
    """å = 1/B gives Güntelberg and Davies; c and β give the rest (SIT on molarity to 0.5 %)."""
    B = float(debye_huckel(np.array([298.15])).B[0])
    at = np.full(4, 298.15)
    strengths = np.array([0.005, 0.05, 0.2, 0.5])
    from knought.chemistry.activity import OpenForm

    def screening(c: float) -> FloatArray:
        return OpenForm(1 / B, c).screening(strengths, at)

    davies = SALT_LAWS["davies"].columns(at, strengths)[0] / (2 * LN10)
    assert np.allclose(screening(0.3), davies, rtol=1e-12)
    guntelberg = SALT_LAWS["guntelberg"].columns(at, strengths)[0] / (2 * LN10)
    assert np.allclose(screening(0.0), guntelberg, rtol=1e-12)
    sit = SALT_LAWS["sit"].columns(at, strengths)[0] / (2 * LN10)
    assert np.allclose(OpenForm(1.5 / B, 0.0).screening(strengths, at), sit, rtol=5e-3)


def test_the_grid_of_the_open_law_carries_its_priors() -> None:
    grid = open_grid()
    weights = np.exp(grid.log_weight)
    assert grid.cells == 17 * 13 * 2
    assert weights.sum() == pytest.approx(1, abs=1e-12)
    assert weights @ grid.ion_size == pytest.approx(6.5e-10, rel=1e-12)
    spread = np.sqrt(weights @ (grid.ion_size - 6.5e-10) ** 2)
    assert spread == pytest.approx(11e-10 / np.sqrt(12), rel=1e-12)
    assert weights @ grid.linear_coefficient == pytest.approx(0.1, abs=1e-12)
    spread = np.sqrt(weights @ (grid.linear_coefficient - 0.1) ** 2)
    assert spread == pytest.approx(0.3, rel=0.02)  # the tails beyond 3 s are left out


def test_priors_without_width_fix_a_coefficient() -> None:
    grid = open_grid(Priors((4e-10, 4e-10), (0.2, 0.0), (0.0, 0.0), constant_size=1.0))
    assert grid.cells == 1
    assert grid.law.parameters == ("charge_product",)


def test_narrowed_priors_keep_their_centres() -> None:
    half = narrowed(DEFAULT_PRIORS, 0.5)
    assert half.ion_size == pytest.approx((3.75e-10, 9.25e-10))
    assert half.linear_coefficient == pytest.approx((0.1, 0.15))
    assert half.interaction_coefficient == pytest.approx((0.0, 0.15))


@pytest.mark.parametrize(
    ("priors", "message"),
    [
        ({"ion_size": (5e-10, 3e-10)}, "lower and an upper bound"),
        ({"ion_size": (1.0, 12.0)}, "4.5 Å is 4.5e-10"),
        ({"linear_coefficient": (0.1, -0.3)}, "at least zero"),
        ({"interaction_coefficient": (0.2, 0.0)}, "small standard uncertainty"),
        ({"constant_size": 1.5}, "between 0 and 1"),
    ],
)
def test_impossible_priors_are_refused(priors: dict[str, Any], message: str) -> None:
    with pytest.raises(InputError, match=re.escape(message)):
        Priors(**priors)


def test_unknown_laws_and_misplaced_ion_sizes_are_refused() -> None:
    with pytest.raises(InputError, match="guntelberg"):
        salt_law("guntelburg")
    with pytest.raises(InputError, match="extended"):
        salt_law("davies", ion_size=4e-10)
    with pytest.raises(InputError, match=r"4\.5e-10"):
        salt_law("extended", ion_size=4.5)


def test_laws_that_screen_charges_refuse_what_is_not_liquid_water() -> None:
    laws = surface(SALT_LAWS["davies"])
    with pytest.raises(InputError, match="0-100 °C"):
        laws.ln_k(400.0, 0.1)
    assert np.isfinite(surface(SALT_LAWS["none"]).ln_k(900.0, 0.1).rows).all()
    assert np.isfinite(surface(SALT_LAWS["linear"]).ln_k(900.0, 0.1).rows).all()
