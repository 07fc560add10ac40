"""Debye-Hückel coefficients against published and computed tables, identities and their slopes."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np
import pytest
from hypothesis import given, settings

from knought.chemistry.constants import LN10
from knought.chemistry.debye_huckel import Basis, bjerrum_length, debye_huckel
from knought.chemistry.water import density
from knought.errors import InputError
from tests import water_tables as tables
from tests.chemistry import strategies

if TYPE_CHECKING:
    from collections.abc import Callable

    from knought.arrays import FloatArray

T = np.array(tables.CELSIUS) + 273.15
BASES: tuple[Basis, ...] = ("molar", "molal")

#: NEA TDB, Table B.1 (read): B in 10^10 m^-1 kg^½ mol^-½, at tables.NEA_CELSIUS.
NEA_B = [
    *(0.3246, 0.3254, 0.3261, 0.3268, 0.3277, 0.3284),
    *(0.3292, 0.3300, 0.3312, 0.3326, 0.3371, 0.3422),
]

#: Robinson and Stokes, Electrolyte Solutions, App. 7.1 (from memory): molar A and B/Å^-1.
ROBINSON_STOKES_A = [
    *(0.4918, 0.4952, 0.4989, 0.5028, 0.5070, 0.5115, 0.5161, 0.5211, 0.5262, 0.5317, 0.5373),
    *(0.5432, 0.5494, 0.5558, 0.5625, 0.5695, 0.5767, 0.5842, 0.5920, 0.6001, 0.6086),
]
ROBINSON_STOKES_B = [
    *(0.3248, 0.3256, 0.3264, 0.3273, 0.3282, 0.3291, 0.3301, 0.3312, 0.3323, 0.3334, 0.3346),
    *(0.3358, 0.3371, 0.3384, 0.3397, 0.3411, 0.3426, 0.3440, 0.3456, 0.3471, 0.3488),
]

#: Debye length in nm at I = 1 mol/L, computed with IAPWS-95, R8-97 and CODATA 2022.
DEBYE_LENGTH = [
    *(0.308119, 0.307391, 0.306618, 0.305799, 0.304936, 0.304028, 0.303078, 0.302087, 0.301057),
    *(0.299989, 0.298886, 0.297749, 0.296579, 0.295378, 0.294148, 0.292890, 0.291606, 0.290296),
    *(0.288962, 0.287604, 0.286225),
]


def test_coefficients_follow_the_computed_table() -> None:
    """IAPWS-95 density, R8-97 permittivity, CODATA 2022, six digits printed."""
    molal, molar = debye_huckel(T, "molal"), debye_huckel(T, "molar")
    for found, table in (
        (molal.A, tables.A_MOLAL),
        (molar.A, tables.A_MOLAR),
        (molal.B * 1e-10, tables.B_MOLAL),
        (molar.B * 1e-10, tables.B_MOLAR),
        (molal.A * LN10 / 3, tables.A_PHI),
        (bjerrum_length(T) * 1e9, tables.BJERRUM),
        (1e9 / molar.B, DEBYE_LENGTH),
    ):
        assert found == pytest.approx(table, rel=1e-5)


def test_coefficients_follow_the_nea_table() -> None:
    """NEA TDB, Table B.1: 0.0013 is the table's own irregularity at 40 °C, in B its 4e-4."""
    found = debye_huckel(np.array(tables.NEA_CELSIUS) + 273.15, "molal")
    screening, per_size = found.A, found.B * 1e-10
    assert screening == pytest.approx(tables.NEA_A, abs=0.0013)
    assert per_size == pytest.approx(NEA_B, abs=4e-4)


def test_coefficients_follow_archer_and_wang() -> None:
    """Their permittivity differs from R8-97 by up to 6e-4 relative, so A_φ by up to 9e-4."""
    found = debye_huckel(T, "molal").A * LN10 / 3
    assert found == pytest.approx(tables.ARCHER_WANG_A_PHI, rel=9e-4)


def test_molar_coefficients_follow_robinson_and_stokes() -> None:
    """Their permittivity is older (78.30 at 25 °C would make A 0.2 % higher): to 0.6 and 0.2 %."""
    found = debye_huckel(T, "molar")
    screening, per_size = found.A, found.B * 1e-10
    assert screening == pytest.approx(ROBINSON_STOKES_A, rel=6e-3)
    assert per_size == pytest.approx(ROBINSON_STOKES_B, rel=2e-3)


@given(T=strategies.temperatures)
@settings(max_examples=50, deadline=None)
def test_the_bases_differ_by_the_root_of_the_density(T: float) -> None:
    molal, molar = debye_huckel(T, "molal"), debye_huckel(T, "molar")
    root = np.sqrt(density(T) / 1000)
    assert float(molal.A) == pytest.approx(float(molar.A * root), rel=1e-14)
    assert float(molal.B) == pytest.approx(float(molar.B * root), rel=1e-14)


@pytest.mark.parametrize("basis", BASES)
@given(T=strategies.temperatures)
@settings(max_examples=50, deadline=None)
def test_the_limiting_law_is_the_energy_of_an_ion_in_its_cloud(basis: Basis, T: float) -> None:
    """The cloud lowers it by z² k_B T l_B κ/2 (Debye and Hückel 1923), so A ln10 = l_B B/2."""
    found = debye_huckel(T, basis)
    half = float(bjerrum_length(T) * found.B) / 2
    assert float(found.A) * LN10 == pytest.approx(half, rel=1e-14)


@pytest.mark.parametrize("basis", BASES)
@pytest.mark.parametrize(
    ("value", "slope"),
    [
        (lambda T, basis: debye_huckel(T, basis).A, lambda T, basis: debye_huckel(T, basis).dA_dT),
        (lambda T, basis: debye_huckel(T, basis).B, lambda T, basis: debye_huckel(T, basis).dB_dT),
    ],
    ids=["A", "B"],
)
def test_slopes_agree_with_finite_differences(
    value: Callable[[FloatArray, Basis], FloatArray],
    slope: Callable[[FloatArray, Basis], FloatArray],
    basis: Basis,
) -> None:
    at, h = np.linspace(275.0, 371.0, 25), 0.2

    def central(step: float) -> FloatArray:
        return (value(at + step, basis) - value(at - step, basis)) / (2 * step)

    # Richardson's extrapolation of the central difference: of fourth order.
    numeric = (4 * central(h / 2) - central(h)) / 3
    assert slope(at, basis) == pytest.approx(numeric, rel=1e-8)


def test_results_are_read_only_and_of_the_shape_asked_for() -> None:
    at = np.array([[280.0, 290.0], [300.0, 310.0]])
    before = at.copy()
    found = debye_huckel(at)
    for each in (found.A, found.B, found.dA_dT, found.dB_dT):
        assert each.shape == at.shape
        assert not each.flags.writeable
    assert np.array_equal(at, before)
    assert debye_huckel(298.15).A.shape == ()


def test_a_basis_that_is_none_is_refused() -> None:
    with pytest.raises(InputError, match="no basis is called 'molarity'"):
        debye_huckel(298.15, "molarity")  # type: ignore[arg-type]


@pytest.mark.parametrize("wrong", [273.0, 373.2, np.nan])
def test_what_is_not_liquid_water_is_refused(wrong: float) -> None:
    with pytest.raises(InputError, match="0-100 °C"):
        debye_huckel(np.array([298.15, wrong]))
    with pytest.raises(InputError, match="0-100 °C"):
        bjerrum_length(wrong)
