"""Water against the check values of its own releases and the reference formulations."""

from __future__ import annotations

import numpy as np
import pytest
from scipy import constants as reference

from knought.chemistry import constants, water
from knought.chemistry.debye_huckel import bjerrum_length, debye_huckel
from knought.errors import InputError
from tests import water_tables as tables

T = np.array(tables.CELSIUS) + 273.15
CHECK_T = np.array([260.0, 298.15, 375.0])


def test_constants_are_those_of_codata() -> None:
    for ours, name in (
        (constants.AVOGADRO, "Avogadro constant"),
        (constants.BOLTZMANN, "Boltzmann constant"),
        (constants.PLANCK, "Planck constant"),
        (constants.ELEMENTARY_CHARGE, "elementary charge"),
        (constants.GAS_CONSTANT, "molar gas constant"),
    ):
        assert ours == pytest.approx(reference.value(name), rel=1e-14)
    # scipy may carry CODATA 2018 or 2022: they differ in ε₀ by 1.1e-10.
    assert pytest.approx(reference.epsilon_0, rel=3e-10) == constants.VACUUM_PERMITTIVITY


def test_density_and_viscosity_reproduce_the_check_values_of_sr6_08() -> None:
    """IAPWS SR6-08(2011), Table 8, at 0.1 MPa; every printed digit."""
    assert water.density_kernel(CHECK_T)[0] == pytest.approx(
        [997.06836, 997.047013, 957.00971], abs=5e-6
    )
    assert water.viscosity_kernel(CHECK_T) * 1e6 == pytest.approx(
        [3058.36075, 889.996774, 276.207245], rel=2e-9
    )


def test_the_short_permittivity_reproduces_the_check_values_of_sr6_08() -> None:
    """IAPWS SR6-08(2011), Table 8."""
    assert water.simple_permittivity_kernel(CHECK_T) == pytest.approx(
        [93.455835, 78.375218, 55.266199], abs=5e-7
    )


def test_the_permittivity_reproduces_the_program_check_of_r8_97() -> None:
    """IAPWS R8-97: ε at given density and temperature."""
    found, _ = water.permittivity_kernel(
        np.array([298.15, 873.15]), np.array([999.242866, 26.0569558])
    )
    assert found == pytest.approx([78.590725, 1.1262097], abs=5e-7)


def test_the_permittivity_reproduces_the_row_of_table_4_that_our_density_reaches() -> None:
    """IAPWS R8-97, Table 4: 300 K, 0.101325 MPa; our density is that of 0.1 MPa (1e-6 off)."""
    assert float(water.relative_permittivity(300.0)) == pytest.approx(77.74735, abs=1e-4)


def test_water_follows_the_reference_formulations_from_0_to_100_celsius() -> None:
    """IAPWS-95 density (the 1.3 kPa between the pressures is 6e-7), R8-97 and R12-08."""
    assert water.density(T) == pytest.approx(tables.DENSITY, rel=3e-6)
    assert water.relative_permittivity(T) == pytest.approx(tables.PERMITTIVITY, rel=1e-5)
    assert water.viscosity(T) * 1e6 == pytest.approx(tables.VISCOSITY, rel=3e-4)


def test_debye_huckel_coefficients_follow_the_computed_table() -> None:
    molal, molar = debye_huckel(T, "molal"), debye_huckel(T, "molar")
    for found, table in (
        (molal.A, tables.A_MOLAL),
        (molar.A, tables.A_MOLAR),
        (molal.B * 1e-10, tables.B_MOLAL),
        (molar.B * 1e-10, tables.B_MOLAR),
        (molal.A * constants.LN10 / 3, tables.A_PHI),
        (bjerrum_length(T) * 1e9, tables.BJERRUM),
    ):
        assert found == pytest.approx(table, rel=1e-5)


def test_debye_huckel_coefficients_follow_the_nea_table() -> None:
    """NEA TDB, Table B.1; 0.0013 is the table's own irregularity at 40 °C."""
    found = debye_huckel(np.array(tables.NEA_CELSIUS) + 273.15, "molal").A
    assert found == pytest.approx(tables.NEA_A, abs=0.0013)


def test_debye_huckel_coefficients_follow_archer_and_wang() -> None:
    """Their permittivity differs from R8-97 by up to 6e-4 relative, so A_φ by up to 9e-4."""
    found = debye_huckel(T, "molal").A * constants.LN10 / 3
    assert found == pytest.approx(tables.ARCHER_WANG_A_PHI, rel=9e-4)


@pytest.mark.parametrize(
    ("value", "slope"),
    [
        (water.density, water.density_derivative),
        (water.relative_permittivity, water.relative_permittivity_derivative),
        (lambda T: debye_huckel(T).A, lambda T: debye_huckel(T).dA_dT),
        (lambda T: debye_huckel(T).B, lambda T: debye_huckel(T).dB_dT),
        (lambda T: debye_huckel(T, "molal").A, lambda T: debye_huckel(T, "molal").dA_dT),
        (lambda T: debye_huckel(T, "molal").B, lambda T: debye_huckel(T, "molal").dB_dT),
    ],
)
def test_slopes_agree_with_finite_differences(value: object, slope: object) -> None:
    at, h = np.linspace(275.0, 371.0, 25), 0.02
    numeric = (
        8 * (value(at + h) - value(at - h)) - (value(at + 2 * h) - value(at - 2 * h))  # type: ignore[operator]
    ) / (12 * h)
    scale = float(np.max(np.abs(numeric)))
    assert slope(at) == pytest.approx(numeric, rel=1e-7, abs=1e-8 * scale)  # type: ignore[operator]


@pytest.mark.parametrize("wrong", [273.0, 373.2, -5.0, np.nan])
def test_what_is_not_liquid_water_is_refused(wrong: float) -> None:
    for ask in (
        water.density,
        water.viscosity,
        water.relative_permittivity,
        water.density_derivative,
        water.relative_permittivity_derivative,
        debye_huckel,
        bjerrum_length,
    ):
        with pytest.raises(InputError, match="0-100 °C"):
            ask(np.array([298.15, wrong]))


def test_the_ends_of_the_range_are_inside() -> None:
    assert np.isfinite(debye_huckel(np.array([273.15, 373.15])).A).all()
