"""Shared errors and budgets: what each source does to each result, and that it adds up."""

from __future__ import annotations

from dataclasses import replace
from fractions import Fraction
from typing import TYPE_CHECKING

import numpy as np
import pytest
import statsmodels.api as sm

import knought as kn
from knought.arrays import FloatArray, frozen
from knought.chemistry.constants import GAS_CONSTANT
from knought.fitting.budget import budget
from knought.fitting.observations import Observations, observe
from knought.fitting.open_fit import fit_open
from knought.fitting.surface_fit import SurfaceFit, fit_surface
from knought.measurement.shared_errors import SharedError
from tests.simulation import davies, guntelberg, simulate

if TYPE_CHECKING:
    from collections.abc import Callable

    from knought.fitting.found import Found

STRENGTHS = np.array([0.01, 0.02, 0.05, 0.1])
FOUR = (288.15, 298.15, 308.15, 318.15)


def study(
    *shared: SharedError, u: float = 0.02, temperatures: tuple[float, ...] = FOUR, z: float = 2
) -> Observations:
    seen = simulate(
        guntelberg, z, STRENGTHS, studies=1, seed=1, temperatures=temperatures, u=u
    ).observations
    return replace(seen, shared=shared)


def u_of(found: object, name: str) -> float:
    return float(found.parameters[name].standard_uncertainty)  # type: ignore[attr-defined]


def test_an_error_common_to_all_runs_leaves_the_activation_energy_alone() -> None:
    """2 % repeatability with 3 % common, four temperatures x four ionic strengths, Güntelberg:
    u(E_a) is 0.34 kJ/mol; the common part treated as independent gives 0.62 and hides that only
    k° suffers.
    """
    shared = SharedError("absorptivity", "factor", 0.03)
    right = fit_surface(study(shared), salt_law="guntelberg", scatter="given")
    wrong = fit_surface(
        study(u=float(np.hypot(0.02, 0.03))), salt_law="guntelberg", scatter="given"
    )
    assert u_of(right, "activation_energy") == pytest.approx(340, abs=5)
    assert u_of(wrong, "activation_energy") == pytest.approx(620, abs=8)
    alone = fit_surface(study(), salt_law="guntelberg", scatter="given")
    assert u_of(right, "activation_energy") == pytest.approx(u_of(alone, "activation_energy"))
    relative = u_of(right, "rate_constant") / float(right.parameters["rate_constant"].value)
    assert relative > 0.03


SHARED = (
    SharedError("absorptivity", "factor", 0.03),
    SharedError("probe offset", "temperature-offset", 0.2),
    SharedError("probe gain", "temperature-gain", 0.01),
    SharedError("salt scale", "ionic-strength-factor", 0.02),
)


def test_the_fit_is_generalised_least_squares_with_the_dense_covariance() -> None:
    """statsmodels GLS on V = diag(u²) + Σ J Jᵀ written out with the fitted slopes."""
    seen = study(*SHARED)
    found = fit_surface(seen, salt_law="guntelberg", scatter="given")
    rows = found.surface.ln_k(seen.T, seen.ionic_strength)
    slope_T = found.distribution.of(found.surface.ln_k_dT(seen.T, seen.ionic_strength)).mean
    slope_I = found.distribution.of(found.surface.ln_k_dI(seen.T, seen.ionic_strength)).mean
    J = np.column_stack(
        [
            np.full(16, 0.03),
            0.2 * slope_T,
            0.01 * (seen.T - 298.15) * slope_T,
            0.02 * seen.ionic_strength * slope_I,
        ]
    )
    size = np.linalg.norm(rows.rows, axis=0)
    reference = sm.GLS(
        seen.ln_k - rows.offset, rows.rows / size, sigma=np.diag(seen.u**2) + J @ J.T
    ).fit(cov_type="fixed_scale")
    assert np.allclose(found.distribution.mean, reference.params / size, rtol=1e-8)
    expected = reference.cov_params() / np.outer(size, size)
    assert np.allclose(found.distribution.covariance, expected, rtol=1e-7)


@pytest.mark.parametrize(
    "name",
    [
        "activation_energy",
        "activation_entropy",
        "rate_constant",
        "charge_product",
        "activation_gibbs_energy",
    ],
)
@pytest.mark.parametrize(
    "kind", ["named", "named, scatter", "open", "open, charges given", "open, scatter"]
)
def test_contributions_add_up_to_the_variance(kind: str, name: str) -> None:
    seen = replace(
        study(*SHARED), u_T=frozen(np.full(16, 0.1)), u_I=frozen(0.01 * np.ones(16) * 0.01)
    )
    fits: dict[str, Callable[[], Found]] = {
        "named": lambda: fit_surface(seen, salt_law="guntelberg", scatter="given"),
        "named, scatter": lambda: fit_surface(seen, salt_law="guntelberg", scatter="scatter"),
        "open": lambda: fit_open(seen, scatter="given"),
        "open, charges given": lambda: fit_open(seen, scatter="given", charge_product=2),
        "open, scatter": lambda: fit_open(seen, scatter="scatter"),
    }
    found = fits[kind]()
    if name == "charge_product" and "charges" in kind:
        with pytest.raises(kn.InputError, match="no budget"):
            budget(found, name)
        return
    parts = budget(found, name)
    assert parts.total == pytest.approx(u_of(found, name) ** 2, rel=1e-10)
    assert sum(parts.shares.values()) == pytest.approx(1, abs=1e-12)
    assert {"repeatability of k", "absorptivity", "probe offset"} <= set(parts.variances)
    assert parts.uncertainty("absorptivity") >= 0


def test_contributions_at_other_conditions_add_up_too() -> None:
    found = fit_open(study(*SHARED), scatter="given")
    parts = budget(found, "activation_enthalpy", T=310.0, I=0.05)
    u = float(found.at(310.0, 0.05)["activation_enthalpy"].standard_uncertainty)
    assert parts.total == pytest.approx(u**2, rel=1e-8)


def test_a_common_factor_contributes_to_k_what_it_is() -> None:
    found = fit_surface(study(*SHARED[:1]), salt_law="guntelberg", scatter="given")
    k = float(found.parameters["rate_constant"].value)
    assert budget(found, "rate_constant").uncertainty("absorptivity") == pytest.approx(0.03 * k)
    assert budget(found, "activation_energy").uncertainty("absorptivity") == pytest.approx(
        0, abs=1e-6
    )


def test_the_contribution_of_a_source_is_the_drop_in_variance_without_it() -> None:
    """Exact where the source moves parameters and no weights: an error common to all runs."""
    with_it = fit_surface(study(*SHARED[:1]), salt_law="guntelberg", scatter="given")
    without = fit_surface(study(), salt_law="guntelberg", scatter="given")
    parts = budget(with_it, "rate_constant")
    k = float(with_it.parameters["rate_constant"].value)
    drop = u_of(with_it, "rate_constant") ** 2 - u_of(without, "rate_constant") ** 2
    assert parts.variances["absorptivity"] == pytest.approx(drop, rel=1e-9)
    assert parts.variances["absorptivity"] == pytest.approx((0.03 * k) ** 2, rel=1e-9)


def test_an_offset_of_temperature_does_what_arithmetic_says() -> None:
    """+0.5 K over 15-55 °C at E_a = 80 kJ/mol: k(298 K) -5.3 %, E_a +0.33 %."""
    T = np.linspace(288.15, 328.15, 9)
    ln_k = -80_000 / GAS_CONSTANT * (1 / T - 1 / 298.15)
    moved = fitted_line(T + 0.5, ln_k)
    assert np.exp(moved[0]) - 1 == pytest.approx(-0.053, abs=0.0005)
    assert moved[1] / 80_000 - 1 == pytest.approx(0.0033, abs=0.0001)


def test_a_gain_of_temperature_does_what_arithmetic_says() -> None:
    """+1 % about 25 °C: E_a -0.93 %, ΔS‡ -2.5 J/(K mol), k(298 K) unchanged."""
    T = np.linspace(288.15, 328.15, 9)
    ln_k = -80_000 / GAS_CONSTANT * (1 / T - 1 / 298.15)
    ln_k0, energy = fitted_line(298.15 + 1.01 * (T - 298.15), ln_k)
    assert ln_k0 == pytest.approx(0, abs=5e-4)
    assert energy / 80_000 - 1 == pytest.approx(-0.0093, abs=0.0003)
    assert (energy - 80_000) / 298.15 == pytest.approx(-2.5, abs=0.1)


def fitted_line(T: FloatArray, ln_k: FloatArray) -> FloatArray:
    seen = Observations(
        frozen(ln_k),
        frozen(np.ones(len(T))),
        frozen(T),
        None,
        None,
        None,
        u_given=False,
        order=Fraction(1),
    )
    return fit_surface(seen, temperature_law="arrhenius").distribution.mean


def test_the_linear_effect_of_an_offset_is_its_arithmetic_to_first_order() -> None:
    """J of the offset gives u(k(298 K)) = 5.3 % per 0.5 K and u(E_a) = 0.33 %, one direction."""
    T = np.linspace(288.15, 328.15, 9)
    seen = Observations(
        frozen(-80_000 / GAS_CONSTANT * (1 / T - 1 / 298.15)),
        frozen(np.full(9, 1e-3)),
        frozen(T),
        None,
        None,
        None,
        u_given=True,
        order=Fraction(1),
        shared=(SharedError("probe offset", "temperature-offset", 0.5),),
    )
    found = fit_surface(seen, temperature_law="arrhenius", scatter="given")
    k = float(found.parameters["rate_constant"].value)
    relative = budget(found, "rate_constant").uncertainty("probe offset") / k
    assert relative == pytest.approx(0.053, abs=0.002)
    energy = budget(found, "activation_energy").uncertainty("probe offset")
    assert energy / 80_000 == pytest.approx(0.0033, abs=0.0003)


def test_two_measurements_with_a_common_factor_have_a_mean_between_them() -> None:
    """1.5 and 1.0, each 10 % independent and 20 % common: 1.22 in ln k, not 0.88."""
    rates = kn.RateTable.from_arrays([298.15, 298.15], [1.5, 1.0], u_k=[0.15, 0.10])
    found = kn.fit(
        rates, shared_errors=[SharedError("common", "factor", 0.20)], scatter="given"
    ).parameters["rate_constant"]
    assert float(found.value) == pytest.approx(np.sqrt(1.5), rel=1e-9)
    assert float(found.value) == pytest.approx(1.22, abs=0.01)
    relative = float(found.standard_uncertainty) / float(found.value)
    assert relative == pytest.approx(np.sqrt(0.1**2 / 2 + 0.2**2), rel=1e-9)


def test_a_batch_shares_its_error_and_others_do_not() -> None:
    rates = kn.RateTable.from_arrays(
        [288.15, 298.15, 308.15] * 2,
        [1.0, 2.1, 4.2, 1.05, 2.2, 4.0],
        u_k=[0.02, 0.04, 0.08] * 2,
        batch=["a"] * 3 + ["b"] * 3,
    )
    errors = [SharedError("stock of a", "factor", 0.05, batch="a")]
    found = kn.fit(rates, shared_errors=errors)
    assert isinstance(found, SurfaceFit)
    assert found.errors.shared[:, 0] == pytest.approx([0.05] * 3 + [0.0] * 3)
    with pytest.raises(kn.InputError, match="which no run has"):
        kn.fit(rates, shared_errors=[replace(errors[0], batch="c")])


def test_scatter_beside_shared_errors_scales_only_the_independent_part() -> None:
    """u from scatter with 3 % common: u(E_a) as without it, u(ln k) with the 3 % added."""
    plain = replace(study(), u=frozen(np.ones(16)), u_given=False)
    shared = replace(plain, shared=(SharedError("absorptivity", "factor", 0.03),))
    one = fit_surface(plain, salt_law="guntelberg")
    other = fit_surface(shared, salt_law="guntelberg")
    u_E = u_of(one, "activation_energy")
    assert u_of(other, "activation_energy") == pytest.approx(u_E, rel=1e-6)
    k = float(one.parameters["rate_constant"].value)
    expected = np.hypot(u_of(one, "rate_constant"), 0.03 * k)
    assert u_of(other, "rate_constant") == pytest.approx(expected, rel=1e-6)
    # What the scatter tells has Student's t; what is known besides has none.
    narrow, t = other.parameters["activation_energy"], one.parameters["activation_energy"]
    assert narrow.interval(0.95) == pytest.approx(t.interval(0.95), abs=1e-4 * u_E)
    low, high = (np.log(float(end)) for end in other.parameters["rate_constant"].interval(0.95))
    middle = np.log(k)
    assert high - middle == pytest.approx(middle - low, rel=0.02)
    assert (high - low) / 2 > 1.9 * 0.03


def test_the_open_law_takes_shared_errors_as_the_named_ones_do() -> None:
    """With å, c and β fixed, both are the same generalised least squares."""
    seen = study(*SHARED)
    fixed = kn.Priors((5e-10, 5e-10), (0.0, 0.0), (0.0, 0.0), constant_size=1.0)
    one = fit_open(seen, priors=fixed, scatter="given")
    other = fit_surface(seen, salt_law="extended", ion_size=5e-10, scatter="given")
    assert np.allclose(one.distribution.mean, other.distribution.mean, rtol=1e-8)
    assert np.allclose(one.distribution.covariance, other.distribution.covariance, rtol=1e-7)
    assert "probe offset" in one.includes


def test_what_is_not_known_of_the_salt_law_stands_in_the_budget() -> None:
    """Most of u(z_A z_B) is the open law's own; most of u(E_a) is not."""
    found = fit_open(simulate(davies(0.3), 2, STRENGTHS, studies=1, seed=2).observations)
    charges = budget(found, "charge_product").shares
    law = sum(part for name, part in charges.items() if "open law" in name or "prior" in name)
    assert law > 0.8
    assert budget(found, "activation_energy").shares["repeatability of k"] > 0.8


@pytest.mark.parametrize(
    ("changes", "message"),
    [
        ({"kind": "colour"}, "temperature-offset"),
        ({"u": 0.0}, "above zero"),
        ({"u": 3.0}, "2 % is 0.02"),
        ({"distribution": "cauchy"}, "rectangular"),
        ({"distribution": "t"}, "more than 2 degrees"),
        ({"name": " "}, "no name"),
        ({"calibrated_at": -1.0}, "in K"),
    ],
)
def test_impossible_shared_errors_are_refused(changes: dict[str, object], message: str) -> None:
    whole: dict[str, object] = {"name": "x", "kind": "factor", "u": 0.1} | changes
    with pytest.raises(kn.InputError, match=message):
        SharedError(**whole)  # type: ignore[arg-type]


def test_observations_keep_batches_and_salts() -> None:
    rates = kn.RateTable.from_arrays(
        [288.15, 298.15], [1.0, 2.0], salt=["NaCl", "KCl"], batch=["a", "b"]
    )
    seen = observe(rates)
    assert seen.salt == ("NaCl", "KCl")
    assert seen.batch == ("a", "b")
