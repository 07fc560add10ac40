"""Constants against the set that SciPy carries."""

from __future__ import annotations

import math

import pytest
from scipy import constants as reference

from knought.chemistry import constants

#: ε₀ / (F m^-1), by CODATA edition.
CODATA_2018 = 8.8541878128e-12
CODATA_2022 = 8.8541878188e-12


@pytest.mark.parametrize(
    ("ours", "name"),
    [
        (constants.AVOGADRO, "Avogadro constant"),
        (constants.BOLTZMANN, "Boltzmann constant"),
        (constants.PLANCK, "Planck constant"),
        (constants.ELEMENTARY_CHARGE, "elementary charge"),
    ],
)
def test_the_si_constants_are_exact(ours: float, name: str) -> None:
    assert ours == reference.value(name)
    assert reference.precision(name) == 0.0


def test_the_gas_constant_is_the_product_of_two_exact_ones() -> None:
    """CODATA 2022: 8.31446261815324 J mol^-1 K^-1, exact (SciPy cuts it after ten digits)."""
    assert pytest.approx(8.31446261815324, rel=1e-15) == constants.GAS_CONSTANT


def test_the_vacuum_permittivity_is_that_of_codata_2022() -> None:
    """Older versions of SciPy carry the 2018 edition: the two differ by 6.8e-10 relative."""
    assert constants.VACUUM_PERMITTIVITY == CODATA_2022
    carried = reference.value("vacuum electric permittivity")
    assert carried in {CODATA_2018, CODATA_2022}


def test_the_rest_is_by_definition() -> None:
    assert constants.CELSIUS_ZERO == reference.zero_Celsius == 273.15
    assert math.exp(constants.LN10) == pytest.approx(10.0, rel=1e-15)
