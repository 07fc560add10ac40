"""Water against the check values of its own releases and the reference formulations."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

import numpy as np
import pytest

from knought.chemistry import water
from knought.errors import InputError
from tests import water_tables as tables

if TYPE_CHECKING:
    from collections.abc import Callable

    from knought.arrays import FloatArray

T = np.array(tables.CELSIUS) + 273.15
CHECK_T = np.array([260.0, 298.15, 375.0])

#: Every property and slope of the public door.
DOORS: tuple[Callable[[Any], FloatArray], ...] = (
    water.density,
    water.density_derivative,
    water.viscosity,
    water.viscosity_derivative,
    water.relative_permittivity,
    water.relative_permittivity_derivative,
)


def test_density_and_viscosity_reproduce_the_check_values_of_sr6_08() -> None:
    """IAPWS SR6-08(2011), Table 8, at 0.1 MPa; every printed digit."""
    density, _ = water.density_kernel(CHECK_T)
    assert density == pytest.approx([997.06836, 997.047013, 957.00971], abs=5e-6)
    assert float(density[1]) == pytest.approx(997.047013, abs=5e-7)
    viscosity = water.viscosity_kernel(CHECK_T) * 1e6
    assert viscosity == pytest.approx([3058.36075, 889.996774, 276.207245], abs=5e-6)
    assert viscosity[1:] == pytest.approx([889.996774, 276.207245], abs=5e-7)


def test_the_short_permittivity_reproduces_the_check_values_of_sr6_08() -> None:
    """IAPWS SR6-08(2011), Table 8; every printed digit."""
    assert water.simple_permittivity_kernel(CHECK_T) == pytest.approx(
        [93.455835, 78.375218, 55.266199], abs=5e-7
    )


def test_the_permittivity_reproduces_the_program_check_of_r8_97() -> None:
    """IAPWS R8-97: ε at given density and temperature; every printed digit."""
    found, _ = water.permittivity_kernel(
        np.array([298.15, 873.15]), np.array([999.242866, 26.0569558])
    )
    assert float(found[0]) == pytest.approx(78.590725, abs=5e-7)
    assert float(found[1]) == pytest.approx(1.1262097, abs=5e-8)


def test_the_permittivity_reproduces_the_row_of_table_4_that_our_density_reaches() -> None:
    """IAPWS R8-97, Table 4: 77.74735 at 300 K and 0.101325 MPa.

    The table's own rise to 78.11269 at 10 MPa makes the 1.325 kPa above our 0.1 MPa worth 4.9e-5.
    """
    per_pressure = (78.11269 - 77.74735) / (10 - 0.101325)
    expected = 77.74735 - per_pressure * 0.001325
    assert float(water.relative_permittivity(300.0)) == pytest.approx(expected, abs=1e-5)


def test_water_follows_the_reference_formulations_from_0_to_100_celsius() -> None:
    """IAPWS-95 density (the 1.3 kPa between the pressures is 6e-7), R8-97 and R12-08."""
    assert water.density(T) == pytest.approx(tables.DENSITY, rel=3e-6)
    assert water.relative_permittivity(T) == pytest.approx(tables.PERMITTIVITY, rel=1e-5)
    assert water.viscosity(T) * 1e6 == pytest.approx(tables.VISCOSITY, rel=3e-4)


def test_the_short_permittivity_is_not_good_enough_for_the_coefficients() -> None:
    """Why R8-97 is used: at 100 °C the short form is 0.3 % off, and A goes as ε^-1.5."""
    off = water.simple_permittivity_kernel(T) / np.array(tables.PERMITTIVITY) - 1
    assert abs(off[-1]) > 3e-3
    assert abs(off[tables.CELSIUS.index(25)]) < 6e-4


def complex_step(value: Callable[[Any], Any], at: FloatArray) -> FloatArray:
    """Return the derivative by a complex step, exact to rounding: no difference is taken."""
    h = 1e-30
    return np.asarray(value(at + 1j * h).imag / h)


def test_slopes_are_the_exact_derivatives() -> None:
    at = np.linspace(274.0, 372.0, 25)

    def permittivity(at: Any) -> Any:
        return water.permittivity_kernel(at, water.density_kernel(at)[0])[0]

    assert water.density_derivative(at) == pytest.approx(
        complex_step(lambda at: water.density_kernel(at)[0], at), rel=1e-11
    )
    assert water.viscosity_derivative(at) == pytest.approx(
        complex_step(water.viscosity_kernel, at), rel=1e-12
    )
    assert water.relative_permittivity_derivative(at) == pytest.approx(
        complex_step(permittivity, at), rel=1e-12
    )


def test_the_partial_slope_of_the_permittivity_keeps_the_density() -> None:
    at, rho = np.array([280.0, 298.15, 350.0]), np.array([990.0, 1000.0, 1010.0])
    _, slope = water.permittivity_kernel(at, rho)
    numeric = complex_step(lambda at: water.permittivity_kernel(at, rho)[0], at)
    assert slope == pytest.approx(numeric, rel=1e-12)


def test_water_is_densest_at_4_celsius() -> None:
    """The maximum lies at 3.98 °C (common knowledge; 3.978 °C by IAPWS-95, from memory)."""
    low, high = (float(water.density_derivative(273.15 + t)) for t in (3.96, 4.0))
    assert low > 0 > high


@pytest.mark.parametrize("wrong", [273.0, 373.2, -5.0, np.nan, np.inf])
@pytest.mark.parametrize("door", DOORS)
def test_what_is_not_liquid_water_is_refused(
    door: Callable[[Any], FloatArray], wrong: float
) -> None:
    with pytest.raises(InputError, match=f"{wrong:g} K.*0-100 °C"):
        door(np.array([298.15, wrong]))


def test_a_temperature_in_celsius_is_recognised() -> None:
    with pytest.raises(InputError, match=r"25 °C is 298\.15 K"):
        water.density(25.0)


@pytest.mark.parametrize("door", DOORS)
def test_properties_come_in_the_shape_of_the_temperatures(
    door: Callable[[Any], FloatArray],
) -> None:
    # 100 °C may be a rounding error above 373.15 K when it was read from text.
    ends = np.array([[273.15], [373.15 + 1e-12]])
    before = ends.copy()
    found = door(ends)
    assert found.shape == ends.shape
    assert np.isfinite(found).all()
    assert np.array_equal(ends, before)
    assert isinstance(door(298.15), np.ndarray)
    assert float(door([300.0])[0]) == pytest.approx(float(door(300)), rel=1e-13)
