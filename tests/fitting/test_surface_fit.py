"""Named laws: against statsmodels, under change of units and order, and what is refused."""

from __future__ import annotations

import math
from typing import TYPE_CHECKING

import numpy as np
import pytest
import statsmodels.api as sm
from hypothesis import given, settings
from hypothesis import strategies as st

import knought as kn
from knought.chemistry.constants import GAS_CONSTANT
from knought.fitting.surface_fit import SurfaceFit
from tests.simulation import davies, extended, guntelberg, simulate

if TYPE_CHECKING:
    from pathlib import Path

    from knought.arrays import FloatArray

STRENGTHS = np.array([0.005, 0.01, 0.02, 0.05, 0.1, 0.2])
NAMED = ["none", "linear", "limiting", "guntelberg", "extended", "davies", "sit", "pitzer"]


def table(seed: int = 1, u: float = 0.02, z: float = 2.0, **changes: object) -> kn.RateTable:
    """A study of three temperatures and six ionic strengths, truth Davies."""
    studies = simulate(davies(0.3), z, STRENGTHS, studies=1, seed=seed, u=u)
    seen = studies.observations
    k = np.exp(seen.ln_k)
    columns: dict[str, object] = {"I": seen.I, "u_k": u * k, "unit": "L mol^-1 s^-1"} | changes
    return kn.RateTable.from_arrays(seen.T, k, **columns)  # type: ignore[arg-type]


def strengths(rates: kn.RateTable) -> FloatArray:
    assert rates.I is not None
    return rates.I


def fitted(rates: kn.RateTable, **settings_: object) -> SurfaceFit:
    found = kn.fit(rates, **settings_)  # type: ignore[arg-type]
    assert isinstance(found, SurfaceFit)
    return found


@pytest.mark.parametrize("salt", NAMED)
@pytest.mark.parametrize("temperature", ["arrhenius", "eyring", "eyring-cp"])
def test_a_joint_fit_is_that_of_statsmodels(temperature: str, salt: str) -> None:
    """statsmodels WLS on the same design matrix: parameters and covariance to 1e-9."""
    rates = table()
    found = fitted(rates, temperature_law=temperature, salt_law=salt, scatter="given")
    rows = found.surface.ln_k(rates.T, strengths(rates))
    u = np.full(len(rates), 0.02)
    # Columns scaled to unit length: statsmodels inverts XᵀX through a pseudo-inverse.
    size = np.linalg.norm(rows.rows, axis=0)
    reference = sm.WLS(np.log(rates.k) - rows.offset, rows.rows / size, weights=u**-2).fit(
        cov_type="fixed scale"
    )
    names, covariance = found.covariance()
    assert names == found.surface.parameters
    assert np.allclose(found.distribution.mean, reference.params / size, rtol=1e-9)
    expected = reference.cov_params() / np.outer(size, size)
    assert np.allclose(covariance, expected, rtol=1e-9)


def test_standard_errors_from_the_scatter_are_those_of_statsmodels() -> None:
    """statsmodels OLS, where no uncertainty is stated; Student t in the interval."""
    rates = table(u_k=None)
    found = fitted(rates, salt_law="davies")
    rows = found.surface.ln_k(rates.T, strengths(rates))
    reference = sm.OLS(np.log(rates.k) - rows.offset, rows.rows).fit()
    assert np.allclose(np.sqrt(np.diag(found.covariance()[1])), reference.bse, rtol=1e-8)
    low, high = found.parameters["charge_product"].interval(0.95)
    assert [low, high] == pytest.approx(reference.conf_int(0.05)[-1].tolist(), rel=1e-8)
    assert found.parameters["charge_product"].degrees_of_freedom == 15
    assert found.scatter.kind == "scatter"


def test_entropies_do_not_depend_on_the_unit_of_k() -> None:
    """ΔS‡ is the same whether k comes in s^-1 or min^-1, in mol/L or mmol/L."""
    rates = table()
    reference = fitted(rates, salt_law="davies").parameters["activation_entropy"]
    for unit, factor in (
        ("L mol^-1 min^-1", 60.0),
        ("mM^-1 s^-1", 1e-3),
        ("dm3 mol-1 h-1", 3600.0),
        ("cm3 mol^-1 s^-1", 1e3),
    ):
        other = kn.RateTable.from_arrays(
            rates.T, rates.k * factor, rates.I, u_k=0.02 * rates.k * factor, unit=unit
        )
        found = fitted(other, salt_law="davies").parameters["activation_entropy"]
        assert float(found.value) == pytest.approx(float(reference.value), rel=1e-11)
        assert float(found.standard_uncertainty) == pytest.approx(
            float(reference.standard_uncertainty), rel=1e-9
        )


@given(seed=st.integers(0, 50))
@settings(max_examples=12, deadline=None)
def test_the_order_of_the_runs_does_not_matter(seed: int) -> None:
    rates = table()
    order = np.random.default_rng(seed).permutation(len(rates))
    assert rates.I is not None
    assert rates.u_k is not None
    shuffled = kn.RateTable.from_arrays(
        rates.T[order], rates.k[order], rates.I[order], rates.u_k[order], unit="L mol^-1 s^-1"
    )
    one, other = fitted(rates, salt_law="sit"), fitted(shuffled, salt_law="sit")
    assert np.allclose(other.distribution.mean, one.distribution.mean, rtol=1e-9)
    assert np.allclose(other.residuals, one.residuals[order], atol=1e-11)


@given(factor=st.floats(0.01, 100))
@settings(max_examples=15, deadline=None)
def test_scaling_every_u_scales_every_standard_uncertainty(factor: float) -> None:
    rates = table()
    assert rates.u_k is not None
    scaled = kn.RateTable.from_arrays(
        rates.T, rates.k, rates.I, rates.u_k * factor, unit="L mol^-1 s^-1"
    )
    one = fitted(rates, salt_law="davies", scatter="given").parameters
    other = fitted(scaled, salt_law="davies", scatter="given").parameters
    for name, estimate in one.items():
        assert float(other[name].value) == pytest.approx(float(estimate.value), rel=1e-8)
        assert float(other[name].standard_uncertainty) == pytest.approx(
            factor * float(estimate.standard_uncertainty), rel=1e-8
        )


def test_without_charges_the_salt_leaves_arrhenius_alone() -> None:
    rates = table(z=0.0)
    known = fitted(rates, temperature_law="arrhenius", salt_law="davies", charge_product=0)
    plain = fitted(rates, temperature_law="arrhenius", salt_law="none")
    for name in ("activation_energy", "ln_pre_exponential_factor"):
        one, other = known.parameters[name], plain.parameters[name]
        assert float(one.value) == pytest.approx(float(other.value), rel=1e-10)
    energies = [float(known.at(I=I)["activation_energy"].value) for I in (0.0, 0.2)]
    assert energies[0] == pytest.approx(energies[1], rel=1e-12)


def test_an_exact_surface_is_recovered() -> None:
    """Noise-free Güntelberg: every parameter to the digits that rounding leaves."""
    studies = simulate(guntelberg, -3, STRENGTHS, studies=1, seed=1, u=1e-9)
    seen = studies.observations
    rates = kn.RateTable.from_arrays(
        seen.T, np.exp(seen.ln_k), seen.I, u_k=1e-9 * np.exp(seen.ln_k), unit="L mol^-1 s^-1"
    )
    found = fitted(rates, salt_law="guntelberg").parameters
    assert float(found["charge_product"].value) == pytest.approx(-3, abs=1e-7)
    assert float(found["activation_enthalpy"].value) == pytest.approx(50_000, rel=1e-7)
    assert float(found["activation_entropy"].value) == pytest.approx(-60, rel=1e-6)


def test_every_law_has_the_parameters_of_both_names() -> None:
    """E_a = ΔH‡ + R T_ref under every temperature law, and none is missing."""
    for law in ("arrhenius", "modified-arrhenius", "eyring", "eyring-cp"):
        found = fitted(table(), temperature_law=law, salt_law="davies").parameters
        difference = float(found["activation_energy"].value) - float(
            found["activation_enthalpy"].value
        )
        assert difference == pytest.approx(GAS_CONSTANT * 298.15, rel=1e-9)
        assert {"activation_entropy", "activation_gibbs_energy", "rate_constant"} <= set(found)
    assert (
        "temperature_exponent"
        in fitted(table(), temperature_law="modified-arrhenius", salt_law="davies").parameters
    )


def test_stated_uncertainties_that_are_too_small_are_enlarged_and_said() -> None:
    rates = table()
    assert rates.u_k is not None
    bold = kn.RateTable.from_arrays(rates.T, rates.k, rates.I, rates.u_k / 3, unit="L mol^-1 s^-1")
    found = fitted(bold, salt_law="davies")
    assert found.scatter.kind == "enlarged"
    ratio = found.standard_errors_scatter / found.standard_errors_given
    assert np.allclose(ratio, found.scatter.birge_ratio, rtol=1e-12)
    u = float(found.parameters["charge_product"].standard_uncertainty)
    assert u == pytest.approx(float(found.standard_errors_scatter[-1]), rel=1e-9)
    assert "enlarged" in found.includes
    assert fitted(bold, salt_law="davies", scatter="given").scatter.kind == "given"


def test_uncertain_temperatures_widen_as_their_slope_says() -> None:
    """u(T) = 0.2 K at E_a = 52 kJ/mol is E_a/(R T²) 0.2 = 1.4 % in k: effective variance."""
    rates = table()
    wider = table(u_T=np.full(18, 0.2))
    one = fitted(rates, salt_law="davies", scatter="given")
    other = fitted(wider, salt_law="davies", scatter="given")
    # Slopes are those at the conditions that the fit adjusts within their uncertainty.
    T = other.errors.T
    assert np.all(np.abs(T - rates.T) < 0.2 * 3)
    energy = np.asarray(other.at(T, other.errors.I)["activation_energy"].value)
    slope = energy / (GAS_CONSTANT * T**2)
    assert other.effective_u == pytest.approx(np.hypot(0.02, 0.2 * slope), rel=1e-9)
    assert np.all(other.effective_u > one.effective_u * 1.2)
    assert "temperature" in other.includes


def test_uncertain_ionic_strengths_weigh_most_where_the_slope_is_steep() -> None:
    found = fitted(table(u_I=0.1 * np.tile(STRENGTHS, 3)), salt_law="davies", scatter="given")
    assert np.all(found.effective_u > 0.02)
    assert found.effective_u[3] > found.effective_u[0]


def test_errors_of_temperature_beside_scatter_are_not_counted_twice() -> None:
    one = fitted(table(u_k=None), salt_law="davies")
    other = fitted(table(u_k=None, u_T=np.full(18, 0.2)), salt_law="davies")
    assert np.allclose(other.distribution.covariance, one.distribution.covariance)


def test_a_batch_equals_its_members() -> None:
    studies = simulate(extended(5), 2, STRENGTHS, studies=6, seed=3)
    seen, k = studies.observations, np.exp(studies.ln_k)
    u = 0.02 * k * np.random.default_rng(1).uniform(0.5, 2, k.shape)
    many = kn.fit_many(k, u, T=seen.T, I=seen.ionic_strength, order=2, salt_law="sit")
    assert len(many) == 6
    for i in range(6):
        alone = fitted(
            kn.RateTable.from_arrays(seen.T, k[i], seen.I, u[i], unit="L mol^-1 s^-1"),
            salt_law="sit",
            scatter="given",
        )
        assert np.allclose(many.parameters[i], alone.distribution.mean, rtol=1e-9)
        assert np.allclose(many.covariance[i], alone.distribution.covariance, rtol=1e-9)
        assert many.chi_square[i] == pytest.approx(alone.scatter.chi_square, rel=1e-9)
        u_z = float(alone.parameters["charge_product"].standard_uncertainty)
        assert many.standard_uncertainty("charge_product")[i] == pytest.approx(u_z, rel=1e-9)
        assert many.value("charge_product")[i] == pytest.approx(
            float(alone.parameters["charge_product"].value), rel=1e-9
        )


def test_a_batch_of_wrong_shape_or_sign_is_refused() -> None:
    T, k = np.array([288.15, 298.15, 308.15]), np.ones((2, 3))
    with pytest.raises(kn.InputError, match="data sets, runs"):
        kn.fit_many(np.ones(3), np.ones(3), T=T)
    with pytest.raises(kn.InputError, match="from 1e-150"):
        kn.fit_many(k * [[1, 1, -1]], k * 0.1, T=T)
    with pytest.raises(kn.InputError, match="at least 2 temperatures"):
        kn.fit_many(k, k * 0.1, T=np.full(3, 298.15))


def test_an_ion_size_can_be_fitted() -> None:
    """Noise-free truth of 5 Å: lmfit finds it, and the ± is that of the local slope."""
    studies = simulate(extended(5), 2, STRENGTHS, studies=1, seed=1, u=1e-6)
    seen = studies.observations
    k = np.exp(seen.ln_k)
    rates = kn.RateTable.from_arrays(seen.T, k, seen.I, 1e-6 * k, unit="L mol^-1 s^-1")
    found = kn.fit_ion_size(rates)
    assert float(found.parameters["ion_size"].value) == pytest.approx(5e-10, rel=1e-3)
    assert float(found.parameters["charge_product"].value) == pytest.approx(2, abs=1e-3)
    assert "ion-size-undetermined" not in [caveat.code for caveat in found.caveats]


def test_the_covariance_with_a_fitted_ion_size_is_that_of_lmfit() -> None:
    import lmfit

    rates = table(seed=4, u=0.01)
    found = kn.fit_ion_size(rates, scatter="given")

    def residuals(p: lmfit.Parameters) -> FloatArray:
        trial = fitted(rates, salt_law="extended", ion_size=p["size"].value * 1e-10)
        rows = trial.surface.ln_k(rates.T, strengths(rates))
        theta = [p["ln_k"].value, p["H"].value * 1e3, p["z"].value]
        return np.asarray((np.log(rates.k) - rows.offset - rows.rows @ theta) / 0.01)

    start = lmfit.create_params(ln_k=1.8, H=50.0, z=2.0, size={"value": 4.5, "min": 0.3, "max": 30})
    result = lmfit.minimize(residuals, start, scale_covar=False)
    assert result.params["size"].value == pytest.approx(
        float(found.parameters["ion_size"].value) * 1e10, rel=1e-3
    )
    assert result.params["size"].stderr == pytest.approx(
        float(found.parameters["ion_size"].standard_uncertainty) * 1e10, rel=0.02
    )
    assert result.params["z"].stderr == pytest.approx(
        float(found.parameters["charge_product"].standard_uncertainty), rel=0.02
    )


def test_an_ion_size_that_the_runs_hardly_determine_is_said_so() -> None:
    found = kn.fit_ion_size(table(seed=2, u=0.2, z=0.3))
    assert [caveat.code for caveat in found.caveats][-1] == "ion-size-undetermined"
    with pytest.raises(kn.InputError, match="three ionic strengths"):
        kn.fit_ion_size(table(I=np.tile([0.01, 0.1], 9)))


def test_fits_of_k_and_of_ln_k_agree_where_errors_are_small() -> None:
    rates = table()
    one = fitted(rates, salt_law="davies", scatter="given")
    other = kn.fit_in_k(rates, salt_law="davies", scatter="given")
    for name in ("activation_energy", "charge_product"):
        a, b = one.parameters[name], other.parameters[name]
        assert abs(float(a.value) - float(b.value)) < 0.3 * float(a.standard_uncertainty)
        assert float(b.standard_uncertainty) == pytest.approx(
            float(a.standard_uncertainty), rel=0.02
        )


def test_a_fit_of_k_is_that_of_lmfit() -> None:
    import lmfit

    rates = table(u=0.1, seed=5)
    found = kn.fit_in_k(rates, salt_law="davies", scatter="given")
    rows = found.surface.ln_k(rates.T, strengths(rates))
    assert rates.u_k is not None
    u = rates.u_k

    def residuals(p: lmfit.Parameters) -> FloatArray:
        theta = [p["ln_k"].value, p["H"].value * 1e3, p["z"].value]
        return np.asarray((rates.k - np.exp(rows.offset + rows.rows @ theta)) / u)

    result = lmfit.minimize(
        residuals,
        lmfit.create_params(ln_k=1.8, H=50.0, z=2.0),
        scale_covar=False,
        xtol=1e-12,
        ftol=1e-12,
    )
    names = found.surface.parameters
    mean = dict(zip(names, found.distribution.mean, strict=True))
    assert result.params["z"].value == pytest.approx(mean["charge_product"], rel=1e-6)
    assert result.params["H"].value * 1e3 == pytest.approx(mean["activation_enthalpy"], rel=1e-6)
    assert result.params["z"].stderr == pytest.approx(
        float(found.parameters["charge_product"].standard_uncertainty), rel=1e-3
    )


@pytest.mark.parametrize(
    ("settings_", "message"),
    [
        ({"temperature_law": "eyring-cp", "I": None, "keep": [0, 1]}, "at least 3 temperatures"),
        ({"salt_law": "davies", "I": None}, "Add a column I/"),
        ({"salt_law": "davies", "I": np.full(18, 0.1)}, "at least 2 ionic strengths"),
        ({"salt_law": "sit", "I": np.tile([0.1, 0.01], 9)}, "at least 3 ionic strengths"),
    ],
)
def test_what_the_runs_cannot_carry_is_refused_with_what_to_measure(
    settings_: dict[str, object], message: str
) -> None:
    I = settings_.pop("I", STRENGTHS)
    keep = settings_.pop("keep", None)
    rates = table(I=I)
    if keep is not None:
        rates = kn.RateTable.from_arrays(rates.T[:12], rates.k[:12], unit="L mol^-1 s^-1")
    with pytest.raises(kn.InputError, match=message):
        kn.fit(rates, **settings_)  # type: ignore[arg-type]


def test_temperature_and_ionic_strength_that_change_together_are_refused() -> None:
    T = np.repeat([288.15, 298.15], 3)
    I = np.repeat([0.01, 0.1], 3)
    rates = kn.RateTable.from_arrays(T, np.linspace(1, 2, 6), I, unit="L mol^-1 s^-1")
    with pytest.raises(kn.InputError, match="must not change together"):
        kn.fit(rates, salt_law="davies")


def test_runs_at_more_conditions_that_still_change_together_are_warned_of() -> None:
    T = np.array([283.15, 288.15, 293.15, 298.15, 303.15])
    I = np.array([0.01, 0.02, 0.04, 0.06, 0.1])
    k = np.exp(0.05 * (T - 298.15))
    rates = kn.RateTable.from_arrays(T, k, I, 0.02 * k, unit="L mol^-1 s^-1")
    codes = [caveat.code for caveat in kn.fit(rates, salt_law="davies").caveats]
    assert "confounded" in codes


def test_as_many_parameters_as_runs_need_stated_uncertainties() -> None:
    T, k = np.array([288.15, 298.15]), np.array([1.0, 2.0])
    with pytest.raises(kn.InputError, match="says nothing about u"):
        kn.fit(kn.RateTable.from_arrays(T, k))
    stated = kn.fit(kn.RateTable.from_arrays(T, k, u_k=0.05 * k))
    assert stated.scatter.kind == "given"
    assert math.isnan(fitted(kn.RateTable.from_arrays(T, k, u_k=0.05 * k)).aicc)
    assert [caveat.code for caveat in stated.caveats] == ["two-temperatures"]


def test_determinations_weigh_where_no_uncertainty_is_stated() -> None:
    T, k = np.array([288.15, 298.15, 308.15, 318.15]), np.array([1.0, 2.1, 3.9, 7.5])
    n = np.array([1, 4, 4, 1])
    found = fitted(kn.RateTable.from_arrays(T, k, determinations=n))
    rows = found.surface.ln_k(T)
    reference = sm.WLS(np.log(k) - rows.offset, rows.rows, weights=n).fit()
    assert np.allclose(found.distribution.mean, reference.params, rtol=1e-9)


def test_results_cannot_be_changed() -> None:
    found = fitted(table(), salt_law="davies")
    with pytest.raises(ValueError, match="read-only"):
        found.distribution.mean[0] = 0.0
    with pytest.raises(TypeError):
        found.parameters["charge_product"] = None  # type: ignore[index]


def test_predictions_take_arrays() -> None:
    found = fitted(table(), salt_law="davies")
    many = found.rate_constant(T=[288.15, 298.15], I=[0.01, 0.1])
    for i, (T, I) in enumerate([(288.15, 0.01), (298.15, 0.1)]):
        alone = found.rate_constant(T=T, I=I)
        assert np.asarray(many.value)[i] == pytest.approx(float(alone.value), rel=1e-12)
        assert np.asarray(many.interval(0.95))[:, i] == pytest.approx(alone.interval(0.95))
    assert str(many) == "rate constant: 2 values"


def test_predictions_outside_the_runs_say_so() -> None:
    found = fitted(table(), salt_law="davies")
    assert found.rate_constant(T=300.0, I=0.05).caveats == ()
    far = found.rate_constant(T=360.0, I=1.0)
    assert [caveat.code for caveat in far.caveats] == [
        "extrapolated-temperature",
        "extrapolated-ionic-strength",
    ]
    with pytest.raises(kn.InputError, match="0-100 °C"):
        found.rate_constant(T=400.0)


def test_runs_that_are_not_in_liquid_water_are_named() -> None:
    T = np.array([288.15, 298.15, 398.15, 308.15])
    rates = kn.RateTable.from_arrays(
        T,
        [1.0, 2.0, 30.0, 4.0],
        [0.01, 0.1, 0.01, 0.1],
        unit="L mol^-1 s^-1",
        run=["a", "b", "hot", "d"],
    )
    with pytest.raises(kn.InputError, match=r"run hot was measured at 398\.15 K"):
        kn.fit(rates, salt_law="davies")
    assert kn.fit(rates, salt_law="linear").salt_law == "linear"


def test_runs_that_are_not_in_liquid_water_are_named_by_their_cells(tmp_path: Path) -> None:
    """The run that is left out shifts no row: rows are those of the spreadsheet."""
    path = tmp_path / "hot.csv"
    path.write_text(
        "run,t/°C,I/(mol/L),k/s^-1,use,reason\na,25,0.1,1,no,spilt\nb,120,0.1,2.0,,\n"
        "# a comment\nc,-35,0.2,3,,\nd,35,0.2,3,,\n",
        encoding="utf-8",
    )
    with pytest.raises(kn.InputError) as refused:
        kn.assess(kn.read_rates(path))
    assert [(each.file, each.row, each.column) for each in refused.value.problems] == [
        ("hot.csv", 3, "t/°C"),
        ("hot.csv", 5, "t/°C"),
    ]
    assert "run b was measured at 393.15 K" in refused.value.problems[0].what
