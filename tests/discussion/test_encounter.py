"""The diffusion limit and the electrostatic part: published figures, limits and slopes."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from knought.chemistry.constants import GAS_CONSTANT
from knought.discussion.electrostatics import electrostatic_part
from knought.discussion.encounter import debye_factor, encounter_limit
from knought.errors import InputError

#: Bjerrum length of water at 25 °C (computed with the library iapws 1.5.5 and CODATA 2022).
BJERRUM = 0.714794e-9


def test_neutral_equal_spheres_meet_at_7_4e9_at_25_degrees() -> None:
    """8RT/3η; 7.4e9 L mol^-1 s^-1 is Atkins, Physical Chemistry (from memory)."""
    assert f"{float(encounter_limit(298.15).rate_constant):.1e}" == "7.4e+09"


@pytest.mark.parametrize(
    ("celsius", "expected"), [(0.0, 3.3801e9), (20.0, 6.4893e9), (25.0, 7.4274e9)]
)
def test_neutral_equal_spheres_with_the_viscosity_of_iapws(celsius: float, expected: float) -> None:
    """8RT/3η with IAPWS R12-08 viscosity (computed with iapws 1.5.5).

    Ours is SR6-08: the two viscosities differ by 6e-5 at most here.
    """
    found = encounter_limit(celsius + 273.15, contact_distance=4e-10)
    assert float(found.rate_constant) == pytest.approx(expected, rel=6e-5)


def test_the_size_of_equal_spheres_does_not_matter() -> None:
    small, large = (encounter_limit(contact_distance=R).rate_constant for R in (3e-10, 9e-10))
    assert float(small) == pytest.approx(float(large), rel=1e-14)


@pytest.mark.parametrize(
    ("z", "expected"),
    [(-4, 5.737199), (-2, 3.033016), (-1, 1.879572), (1, 0.449984), (2, 0.17384), (4, 0.018847)],
)
def test_debye_factors_of_the_reference_list(z: int, expected: float) -> None:
    """f = δ/(e^δ - 1) (Debye 1942), l_B = 0.714794 nm, R = 0.5 nm; computed with numpy 2.4.6."""
    assert float(debye_factor(z * BJERRUM / 5e-10)) == pytest.approx(expected, abs=5.1e-7)
    # Through the front door the Bjerrum length is our own, 1e-6 away.
    found = encounter_limit(298.15, z, 5e-10).debye_factor
    assert float(found) == pytest.approx(expected, rel=1e-4)


@given(st.floats(1e-8, 30))
def test_factors_of_opposite_charges_differ_by_delta(delta: float) -> None:
    """f(-δ) - f(δ) = δ, an identity."""
    assert float(debye_factor(-delta) - debye_factor(delta)) == pytest.approx(delta, rel=1e-7)


@given(st.floats(-2e-4, 2e-4))
def test_the_factor_is_smooth_where_the_charges_vanish(delta: float) -> None:
    assert float(debye_factor(delta)) == pytest.approx(1 - delta / 2 + delta**2 / 12, abs=1e-12)


def test_proton_and_hydroxide_by_hand() -> None:
    """k_D = 4π N_A (D_A + D_B) R f with D of H+ and OH- (CRC Handbook): worked by hand.

    4π 6.022e23 x 14.6e-9 x 5e-10 x 1000 x 1.8796 = 1.038e11 L mol^-1 s^-1.
    """
    found = encounter_limit(
        T=298.15,
        charge_product=-1,
        contact_distance=5e-10,
        diffusion_coefficients=(9.3e-9, 5.3e-9),
    )
    by_hand = 4 * math.pi * 6.02214076e23 * 14.6e-9 * 5e-10 * 1000 * 1.879572
    assert float(found.rate_constant) == pytest.approx(by_hand, rel=2e-6)


@pytest.mark.parametrize("z", [-2, 0, 1])
@pytest.mark.parametrize("I", [0.0, 0.05])
@pytest.mark.parametrize("D", [None, (2e-9, 1e-9)])
def test_its_own_activation_energy_is_its_own_slope(
    z: int, I: float, D: tuple[float, float] | None
) -> None:
    T, h = 303.15, 0.02

    def ln_k(temperature: float) -> float:
        found = encounter_limit(temperature, z, 4e-10, D, ionic_strength=I)
        return math.log(float(found.rate_constant))

    slope = (ln_k(T + h) - ln_k(T - h)) / (2 * h)
    found = encounter_limit(T, z, 4e-10, D, ionic_strength=I)
    assert float(found.activation_energy) == pytest.approx(GAS_CONSTANT * T**2 * slope, rel=1e-5)


def test_the_limit_has_some_eighteen_kilojoules_of_its_own_in_water() -> None:
    """Viscosity alone gives 16-17 kJ/mol near 25 °C; R T comes on top."""
    energy = float(encounter_limit(298.15).activation_energy)
    assert 18e3 < energy < 20.5e3


def test_salt_slows_opposite_charges_by_the_limiting_law_at_low_ionic_strength() -> None:
    """lg k/k° = 2 A z_A z_B √I with A = 0.5105 (L/mol)^½ at 25 °C, as I → 0."""
    I = 1e-6
    ratio = float(
        encounter_limit(298.15, -1, ionic_strength=I).rate_constant
        / encounter_limit(298.15, -1).rate_constant
    )
    assert math.log10(ratio) == pytest.approx(-2 * 0.51053 * math.sqrt(I), rel=3e-3)


def test_correction_for_encounter_undoes_a_series_of_meeting_and_reacting() -> None:
    limit = encounter_limit([288.15, 308.15], -1)
    step = np.array([2e9, 8e9])
    measured = 1 / (1 / step + 1 / limit.rate_constant)
    assert limit.near(measured)
    assert limit.activated(measured) == pytest.approx(step, rel=1e-12)
    assert np.all(limit.magnified(measured, 0.05) > 0.05)
    assert np.all(np.isinf(limit.activated(limit.rate_constant)))
    assert not limit.near([10.0, 20.0])


def test_two_radii_give_what_their_coefficients_give() -> None:
    by_radii = encounter_limit(298.15, radii=(1e-10, 4e-10), contact_distance=5e-10)
    equal = encounter_limit(298.15, contact_distance=5e-10)
    # (a + b)²/(4ab) = 25/16 for radii of 1 and 4.
    ratio = float(by_radii.rate_constant / equal.rate_constant)
    assert ratio == pytest.approx(25 / 16, rel=1e-12)


@pytest.mark.parametrize(
    "wrong",
    [
        {"contact_distance": 5.0},
        {"diffusion_coefficients": (9.3e-5, 5.3e-5)},
        {"diffusion_coefficients": (1e-9, 1e-9), "radii": (2e-10, 2e-10)},
        {"radii": (2.0, 2.0)},
        {"ionic_strength": -0.1},
        {"T": 400.0},
    ],
)
def test_slips_of_the_unit_are_refused(wrong: dict[str, object]) -> None:
    with pytest.raises(InputError):
        encounter_limit(**wrong)  # type: ignore[arg-type]


def test_electrostatic_entropy_is_about_minus_forty_for_each_unit_of_charge_product() -> None:
    """Laidler, Chemical Kinetics, section 6.4 (from memory): about -10 cal K^-1 mol^-1, r = 2 Å."""
    for z in (1, 2, -1):
        entropy = float(electrostatic_part(298.15, z, 2e-10).entropy)
        assert entropy / z == pytest.approx(-40.0, abs=1.0)


def test_electrostatic_gibbs_energy_by_hand() -> None:
    """N_A e²/(4π ε₀) = 1389.35 kJ Å/mol; ε_r = 78.408 at 25 °C (IAPWS R8-97, read)."""
    part = electrostatic_part(298.15, 2, 5e-10)
    assert float(part.gibbs_energy) == pytest.approx(2 * 1389.354e3 / (78.408 * 5), rel=1e-5)


@settings(max_examples=30)
@given(st.floats(275, 372), st.integers(-4, 4), st.floats(1.5e-10, 9e-10))
def test_electrostatic_entropy_is_the_slope_of_the_gibbs_energy(T: float, z: int, r: float) -> None:
    h = 0.01
    above, below = (float(electrostatic_part(T + s, z, r).gibbs_energy) for s in (h, -h))
    part = electrostatic_part(T, z, r)
    slope = -(above - below) / (2 * h)
    assert float(part.entropy) == pytest.approx(slope, rel=1e-6, abs=1e-6)
    assert float(part.enthalpy) == pytest.approx(
        float(part.gibbs_energy) + T * float(part.entropy), rel=1e-9, abs=1e-6
    )


def test_uncertainty_of_the_distance_is_carried() -> None:
    part = electrostatic_part(298.15, 2, 5e-10, 0.5e-10)
    nearer = float(electrostatic_part(298.15, 2, 5e-10 / 1.1).entropy)
    assert float(part.uncertainty("entropy")) == pytest.approx(
        abs(nearer - float(part.entropy)), rel=1e-9
    )


def test_a_distance_in_angstroms_is_refused() -> None:
    with pytest.raises(InputError):
        electrostatic_part(298.15, 1, 2.0)
    with pytest.raises(InputError):
        electrostatic_part(298.15, 1, 2e-10, -1e-11)
