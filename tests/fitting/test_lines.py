"""Straight lines with errors in both variables, through the same fits.

lg k = lg k° + β I at one temperature is a straight line whose abscissa is an ionic strength: its
published examples go through the code that fits everything else.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np
import pytest

import knought as kn
from knought.fitting.surface_fit import SurfaceFit

if TYPE_CHECKING:
    from knought.arrays import FloatArray

LN10 = np.log(10.0)


@dataclass(frozen=True)
class Line:
    """A fitted line y = a + b x."""

    a: float
    b: float
    u_a: float
    u_b: float
    covariance: float
    chi_square: float
    fit: SurfaceFit


def line(
    x: list[float] | FloatArray,
    y: list[float] | FloatArray,
    *,
    u_x: FloatArray | float | None = None,
    u_y: FloatArray | float | None = None,
    scatter: str | None = "given",
) -> Line:
    x, y = np.asarray(x, float), np.asarray(y, float)
    k = 10.0**y
    rates = kn.RateTable.from_arrays(
        np.full(len(x), 298.15),
        k,
        x,
        None if u_y is None else LN10 * np.broadcast_to(u_y, x.shape) * k,
        u_I=None if u_x is None else np.broadcast_to(u_x, x.shape),
    )
    found = kn.fit(rates, salt_law="linear", scatter=scatter)  # type: ignore[arg-type]
    assert isinstance(found, SurfaceFit)
    names, covariance = found.covariance()
    assert names == ("ln_rate_constant", "interaction_coefficient")
    mean = found.distribution.mean
    return Line(
        mean[0] / LN10,
        mean[1],
        np.sqrt(covariance[0, 0]) / LN10,
        np.sqrt(covariance[1, 1]),
        covariance[0, 1] / LN10,
        found.scatter.chi_square,
        found,
    )


YORK = {
    "x": [0, 0.9, 1.8, 2.6, 3.3, 4.4, 5.2, 6.1, 6.5, 7.4],
    "y": [5.9, 5.4, 4.4, 4.6, 3.5, 3.7, 2.8, 2.8, 2.4, 1.5],
}
#: Ionic strengths are not negative, but an adjusted abscissa near zero may be: the data are moved
#: by one, and the intercept is read one to the right.
MOVED = {"x": np.array(YORK["x"]) + 1, "y": YORK["y"]}
WX = np.array([1000, 1000, 500, 800, 200, 80, 60, 20, 1.8, 1])
WY = np.array([1, 1.8, 4, 8, 20, 20, 70, 70, 100, 500])


def test_pearsons_data_with_yorks_weights() -> None:
    """York et al., Am. J. Phys. 72 (2004) 367: a, b, their standard errors, and S."""
    found = line(**MOVED, u_x=WX**-0.5, u_y=WY**-0.5)  # type: ignore[arg-type]
    at = found.fit.rate_constant(I=1.0)
    assert np.log10(float(at.value)) == pytest.approx(5.47991022403, rel=1e-9)
    assert found.b == pytest.approx(-0.480533407446, rel=1e-9)
    u_a = float(at.standard_uncertainty) / float(at.value) / LN10
    scale = found.fit.scatter.factor
    assert u_a / scale == pytest.approx(0.294970735, rel=1e-6)
    assert found.u_b / scale == pytest.approx(0.057985009, rel=1e-6)
    assert found.covariance + found.u_b**2 == pytest.approx(-0.01647254, rel=1e-5)
    assert found.chi_square == pytest.approx(11.866353194, rel=1e-9)


def test_pearsons_data_scaled_by_their_scatter() -> None:
    """The same with √(S/(n-2)) = 1.217905640539: 0.359246522551 and 0.0706202695288."""
    found = line(**MOVED, u_x=WX**-0.5, u_y=WY**-0.5, scatter="scatter")  # type: ignore[arg-type]
    assert found.fit.scatter.birge_ratio == pytest.approx(1.217905640539, rel=1e-8)
    at = found.fit.rate_constant(I=1.0)
    u_a = float(at.standard_uncertainty) / float(at.value) / LN10
    assert u_a == pytest.approx(0.359246522551, rel=1e-6)
    assert found.u_b == pytest.approx(0.0706202695288, rel=1e-6)


def test_iso_ts_28037_with_equal_uncertainties() -> None:
    """ISO/TS 28037:2010, page 13."""
    found = line([1, 2, 3, 4, 5, 6], [3.3, 5.6, 7.1, 9.3, 10.7, 12.1], u_y=0.5)
    assert found.a == pytest.approx(1.866667, abs=1e-6)
    assert found.b == pytest.approx(1.757143, abs=1e-6)
    assert found.u_a == pytest.approx(0.4654747, abs=1e-7)
    assert found.u_b == pytest.approx(0.1195229, abs=1e-7)
    assert found.covariance == pytest.approx(-0.05, abs=1e-8)
    assert found.chi_square == pytest.approx(1.665, abs=1e-3)


def test_iso_ts_28037_with_uncertainties_in_both_variables() -> None:
    """ISO/TS 28037:2010, page 21."""
    found = line(
        [1.2, 1.9, 2.9, 4.0, 4.7, 5.9],
        [3.4, 4.4, 7.2, 8.5, 10.8, 13.5],
        u_x=0.2,
        u_y=np.array([0.2, 0.2, 0.2, 0.4, 0.4, 0.4]),
    )
    assert found.a == pytest.approx(0.5788, abs=1e-4)
    assert found.b == pytest.approx(2.1597, abs=1e-4)
    assert found.u_a == pytest.approx(0.4764, abs=1e-4)
    assert found.u_b == pytest.approx(0.1355, abs=1e-4)
    assert found.covariance == pytest.approx(-0.0577, abs=1e-4)
    assert found.chi_square == pytest.approx(2.743, abs=1e-3)


def test_absolute_and_scaled_covariance_of_a_weighted_line() -> None:
    """R's lm with weights 1/u² (read): covariance as stated and scaled by the scatter."""
    found = line(
        [1, 2, 3, 4, 5, 6],
        [3.014, 5.225, 7.004, 9.061, 11.201, 12.762],
        u_y=np.array([0.2, 0.2, 0.2, 0.4, 0.4, 0.4]),
    )
    assert found.a == pytest.approx(1.13754, abs=1e-5)
    assert found.b == pytest.approx(1.97264, abs=1e-5)
    assert found.u_a == pytest.approx(0.21188326, abs=1e-8)
    assert found.u_b == pytest.approx(0.07115681, abs=1e-8)
    assert found.covariance == pytest.approx(-0.01316456, abs=1e-8)
    errors = found.fit.standard_errors_scatter
    assert errors[0] / LN10 == pytest.approx(0.12261, abs=1e-5)
    assert errors[1] == pytest.approx(0.04118, abs=1e-5)


def test_the_thermometer_calibration_of_the_gum() -> None:
    """JCGM 100:2008, H.3, Table H.6: values, standard uncertainties, correlation, b(30 °C)."""
    t = np.array(
        [
            21.521,
            22.012,
            22.512,
            23.003,
            23.507,
            23.999,
            24.513,
            25.002,
            25.503,
            26.010,
            26.511,
        ]
    )
    b = np.array(
        [
            -0.171,
            -0.169,
            -0.166,
            -0.159,
            -0.164,
            -0.165,
            -0.156,
            -0.157,
            -0.159,
            -0.161,
            -0.160,
        ]
    )
    found = line(t - 20, b, scatter=None)
    assert found.a == pytest.approx(-0.1712, abs=5e-5)
    assert found.u_a == pytest.approx(0.0029, abs=5e-5)
    assert found.b == pytest.approx(0.00218, abs=5e-6)
    assert found.u_b == pytest.approx(0.00067, abs=5e-6)
    assert found.covariance / (found.u_a * found.u_b) == pytest.approx(-0.930, abs=5e-4)
    assert found.fit.scatter.birge_ratio / LN10 == pytest.approx(0.0035, abs=5e-5)
    at_30 = found.fit.rate_constant(I=10.0)
    assert np.log10(float(at_30.value)) == pytest.approx(-0.1494, abs=5e-5)
    u = float(at_30.standard_uncertainty) / float(at_30.value) / LN10
    assert u == pytest.approx(0.0041, abs=5e-5)


def test_a_line_against_temperature_is_adjusted_the_same_way() -> None:
    """Errors of T along an Arrhenius line: orthogonal distance regression by scipy agrees."""
    from scipy.optimize import least_squares

    T = np.array([288.15, 295.15, 301.15, 308.15, 318.15])
    k = np.array([1.0, 1.75, 2.6, 4.4, 8.9])
    u_T, u = 0.5, 0.02
    rates = kn.RateTable.from_arrays(T, k, u_k=u * k, u_T=np.full(5, u_T))
    found = kn.fit(rates, temperature_law="arrhenius", scatter="given")
    R = 8.31446261815324

    def residuals(p: FloatArray) -> FloatArray:
        true = T + p[2:] * u_T
        model = p[0] - p[1] * 1e4 / R * (1 / true - 1 / 298.15)
        return np.concatenate([(np.log(k) - model) / u, p[2:]])

    reference = least_squares(
        residuals, np.array([0.8, 5.0, 0, 0, 0, 0, 0]), xtol=1e-14, ftol=1e-14
    )
    assert found.distribution.mean == pytest.approx(
        [reference.x[0], reference.x[1] * 1e4], rel=1e-6
    )
    assert found.scatter.chi_square == pytest.approx(2 * reference.cost, rel=1e-6)
