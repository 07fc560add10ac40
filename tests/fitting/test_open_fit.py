"""The open law: closed forms against brute force, charges, priors, and what it refuses."""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy import integrate, stats

import knought as kn
from knought.arrays import frozen
from knought.chemistry.debye_huckel import debye_huckel
from knought.fitting.open_fit import OpenFit, fit_open
from knought.fitting.surface_fit import fit_surface
from knought.laws.open_law import Priors
from tests.simulation import davies, extended, simulate

if TYPE_CHECKING:
    from knought.fitting.observations import Observations

STRENGTHS = np.array([0.005, 0.01, 0.02, 0.05, 0.1, 0.2])


def seen(seed: int = 1, z: float = 2.0, u: float = 0.02) -> Observations:
    return simulate(extended(5), z, STRENGTHS, studies=1, seed=seed, u=u).observations


def test_the_mixture_is_what_sampling_from_prior_times_likelihood_gives() -> None:
    """Importance sampling of å and c from their priors, everything linear in closed form.

    An independent path: dense covariance of y with β and flat-prior parameters integrated
    analytically cell by cell through scipy's multivariate normal on the residual space.
    """
    study = seen()
    found = fit_open(study, scatter="given", priors=Priors(constant_size=1.0))
    random = np.random.default_rng(1)
    draws = 6_000
    size = random.uniform(1e-10, 12e-10, draws)
    c = random.normal(0.1, 0.3, draws)
    I = study.ionic_strength
    T = study.T
    water = debye_huckel(T)
    root = np.sqrt(I)
    flat = np.column_stack([np.ones_like(T), (1 / 298.15 - 1 / T) * 100])
    y = study.ln_k - np.log(T / 298.15)
    cov = np.diag(study.u**2) + np.outer(I, I) * (np.log(10) * 0.3) ** 2
    inverse = np.linalg.inv(cov)
    log_weight, mean, var = [], [], []
    for a, b in zip(size, c, strict=True):
        f = root / (1 + water.B * a * root) - b * I
        X = np.column_stack([flat, 2 * np.log(10) * water.A * f])
        normal = X.T @ inverse @ X
        theta = np.linalg.solve(normal, X.T @ inverse @ y)
        r = y - X @ theta
        log_weight.append(-0.5 * r @ inverse @ r - 0.5 * np.linalg.slogdet(normal)[1])
        mean.append(theta)
        var.append(np.diag(np.linalg.inv(normal)))
    weight = np.exp(np.array(log_weight) - max(log_weight))
    weight /= weight.sum()
    effective = 1 / np.sum(weight**2)
    for name, column in (("ln_rate_constant", 0), ("charge_product", 2)):
        means, variances = np.array(mean)[:, column], np.array(var)[:, column]
        m = weight @ means
        s = np.sqrt(weight @ (variances + (means - m) ** 2))
        estimate = found.distribution.parameter(name)
        # The grid in c stops at ±3 s of its prior: 0.3 % of the prior lies beyond.
        assert float(estimate.mean) == pytest.approx(m, abs=5 * s / np.sqrt(effective) + 0.02 * s)
        assert float(estimate.standard_deviation) == pytest.approx(s, rel=0.05)


def test_one_cell_is_an_ordinary_fit() -> None:
    """With å, c and β fixed, the open law is the extended law with that å."""
    study = seen()
    fixed = Priors((5e-10, 5e-10), (0.0, 0.0), (0.0, 0.0), constant_size=1.0)
    open_law = fit_open(study, priors=fixed, scatter="given")
    named = fit_surface(study, salt_law="extended", ion_size=5e-10, scatter="given")
    assert np.allclose(open_law.distribution.mean, named.distribution.mean, rtol=1e-9)
    assert np.allclose(open_law.distribution.covariance, named.distribution.covariance, rtol=1e-8)
    for name in ("charge_product", "activation_energy", "rate_constant"):
        assert open_law.parameters[name].interval(0.9) == pytest.approx(
            named.parameters[name].interval(0.9), rel=1e-9
        )


def test_a_finer_grid_does_not_move_the_answer() -> None:
    study = seen()
    coarse, fine = fit_open(study), fit_open(study, refinement=3)
    for name, estimate in coarse.parameters.items():
        other = fine.parameters[name]
        u = float(other.standard_uncertainty)
        assert abs(float(estimate.value) - float(other.value)) < 0.01 * u
        assert float(estimate.standard_uncertainty) == pytest.approx(u, rel=0.01)


def test_giving_the_charges_is_conditioning_on_them() -> None:
    """Evidence at a charge product is the density of the mixture there (flat prior)."""
    study = seen()
    free = fit_open(study, scatter="given", refinement=1)
    known = {
        z: fit_open(study, scatter="given", charge_product=z, refinement=1) for z in (1.8, 2.0, 2.3)
    }
    density = free.distribution.parameter("charge_product").pdf
    for one, other in ((1.8, 2.0), (2.0, 2.3)):
        assert known[one].log_evidence - known[other].log_evidence == pytest.approx(
            float(np.log(density(one) / density(other))), abs=1e-4
        )
    weights = free.charge_product_weights
    assert sum(weights.values()) == pytest.approx(1, abs=1e-12)
    assert weights[2] > 0.9
    assert weights[2] / weights[3] == pytest.approx(float(density(2) / density(3)), rel=1e-9)
    assert known[2.0].charge_product_weights == {}


def test_knowing_the_charges_narrows_the_rate_constant_most() -> None:
    """Design figures: u(ln k°) falls from about 0.04 to about 0.01 for I from 0.005 to 0.2."""
    study = seen()
    free = fit_open(study, scatter="given").parameters["rate_constant"]
    known = fit_open(study, scatter="given", charge_product=2).parameters["rate_constant"]
    relative = [float(each.standard_uncertainty) / float(each.value) for each in (free, known)]
    assert 0.025 < relative[0] < 0.06
    assert 0.006 < relative[1] < 0.015


def test_the_open_charge_product_is_honest_about_its_width() -> None:
    """Median u(z_A z_B) near 0.35 where a single law claims 0.03 (design, section 5)."""
    widths, claimed = [], []
    for seed in range(15):
        study = seen(seed)
        widths.append(
            float(
                fit_open(study, scatter="given").parameters["charge_product"].standard_uncertainty
            )
        )
        law = fit_surface(study, salt_law="davies", scatter="given")
        claimed.append(float(law.parameters["charge_product"].standard_uncertainty))
    assert 0.25 < np.median(widths) < 0.45
    assert np.median(claimed) < 0.05


def test_unknown_scatter_integrated_over_is_student_t() -> None:
    """With the law fixed, σ under 1/σ gives Student's t on n - p degrees of freedom exactly."""
    study = replace(seen(), u=frozen(np.ones(18)), u_given=False)
    fixed = Priors((5e-10, 5e-10), (0.0, 0.0), (0.0, 0.0), constant_size=1.0)
    open_law = fit_open(study, priors=fixed)
    named = fit_surface(study, salt_law="extended", ion_size=5e-10)
    assert open_law.scatter.kind == "scatter"
    for name in ("charge_product", "activation_energy"):
        one, other = open_law.parameters[name], named.parameters[name]
        assert one.degrees_of_freedom == other.degrees_of_freedom == 15
        width = float(other.standard_uncertainty)
        for coverage in (0.5, 0.95, 0.99):
            assert one.interval(coverage) == pytest.approx(
                other.interval(coverage), abs=0.03 * width
            )


@pytest.mark.parametrize("runs", [6, 9])
def test_few_runs_with_unknown_scatter_get_wide_intervals(runs: int) -> None:
    """Student's t on few degrees of freedom: the interval is wider than ±2 u of given u."""
    whole = seen(3)
    kept = np.linspace(0, 17, runs).astype(int)
    part = replace(
        whole,
        ln_k=frozen(whole.ln_k[kept]),
        u=frozen(np.ones(runs)),
        T=frozen(whole.T[kept]),
        I=frozen(whole.ionic_strength[kept]),
        u_given=False,
    )
    found = fit_open(part)
    nu = found.scatter.degrees_of_freedom
    assert nu == runs - 3
    low, high = found.parameters["activation_energy"].interval(0.95)
    s = float(found.parameters["activation_energy"].standard_uncertainty)
    assert (float(high) - float(low)) / 2 / s < stats.t.ppf(0.975, nu)
    assert float(high) > float(low)


def test_stated_uncertainties_that_are_too_small_widen_the_open_law_too() -> None:
    study = seen()
    bold = replace(study, u=frozen(study.u / 4))
    found = fit_open(bold)
    assert found.scatter.kind == "enlarged"
    assert found.scatter.birge_ratio > 2.0
    honest = fit_open(study, scatter="given").parameters["activation_energy"]
    widened = found.parameters["activation_energy"]
    ratio = float(widened.standard_uncertainty) / float(honest.standard_uncertainty)
    # The same scatter, whatever was stated: this study happens to scatter 0.58 of its true u.
    assert ratio == pytest.approx(found.scatter.birge_ratio / 4, rel=0.2)


def test_priors_count_and_their_share_is_said() -> None:
    study = seen()
    wide = fit_open(study, scatter="given")
    assert set(wide.prior_share) == {
        "ion_size",
        "linear_coefficient",
        "interaction_coefficient",
    }
    assert all(0 < share < 1.05 for share in wide.prior_share.values())
    narrow = fit_open(
        study, scatter="given", priors=Priors((4.5e-10, 5.5e-10), (0.0, 0.05), (0.0, 0.05))
    )
    one, other = wide.parameters["charge_product"], narrow.parameters["charge_product"]
    assert float(other.standard_uncertainty) < 0.5 * float(one.standard_uncertainty)


def test_one_ionic_strength_gives_zero_only_when_the_charges_are_known() -> None:
    T = np.array([288.15, 298.15, 308.15])
    k = np.array([1.0, 2.1, 4.2])
    rates = kn.RateTable.from_arrays(T, k, np.full(3, 0.1), 0.02 * k, unit="L mol^-1 s^-1")
    plain = kn.fit(rates)
    assert plain.salt_law == "none"
    known = kn.fit(rates, reactants="A^2- + B^-")
    assert isinstance(known, OpenFit)
    assert known.parameters["charge_product"].given
    low, high = known.parameters["rate_constant"].interval(0.95)
    # Güntelberg by hand: lg(k/k°) = 4 x 0.5105 x 0.2403 = 0.491.
    assert float(low) < 2.1 / 10**0.491 < float(high)


def test_correlated_values_have_the_covariance_of_the_mixture() -> None:
    found = fit_open(seen(), scatter="given")
    values = found.correlated()
    names, covariance = found.covariance()
    for i, one in enumerate(names):
        assert values[one].std_dev == pytest.approx(np.sqrt(covariance[i, i]), rel=1e-9)
    difference = (
        values["activation_enthalpy"]
        - 298.15 * values["activation_entropy"]
        - values["activation_gibbs_energy"]
    )
    assert difference.std_dev == pytest.approx(0, abs=0.05)
    salted = found.correlated(T=298.15, I=0.1)
    at = found.at(T=298.15, I=0.1)
    assert salted["activation_energy"].std_dev == pytest.approx(
        float(at["activation_energy"].standard_uncertainty), rel=1e-6
    )
    # k at 0.1 mol/L is measured; k at zero is an extrapolation: hardly correlated errors.
    assert salted["rate_constant"].std_dev < 0.02 * salted["rate_constant"].nominal_value


def test_intervals_are_quantiles_of_the_density() -> None:
    """Numerical integration of the mixture's density up to each end."""
    mixture = fit_open(seen(), scatter="given").distribution.parameter("charge_product")
    low, high = (float(end) for end in mixture.interval(0.95))
    below, _ = integrate.quad(lambda x: float(mixture.pdf(x)), low - 3, low, limit=200)
    inside, _ = integrate.quad(lambda x: float(mixture.pdf(x)), low, high, limit=200)
    assert below == pytest.approx(0.025, abs=1e-6)
    assert inside == pytest.approx(0.95, abs=1e-6)


@given(seed=st.integers(0, 30))
@settings(max_examples=8, deadline=None)
def test_the_order_of_the_runs_does_not_matter(seed: int) -> None:
    study = seen()
    order = np.random.default_rng(seed).permutation(18)
    other = replace(
        study,
        ln_k=frozen(study.ln_k[order]),
        T=frozen(study.T[order]),
        I=frozen(study.ionic_strength[order]),
    )
    one, two = fit_open(study, scatter="given"), fit_open(other, scatter="given")
    assert np.allclose(one.distribution.mean, two.distribution.mean, rtol=1e-8)
    assert np.allclose(one.cell_weights, two.cell_weights, atol=1e-9)


def test_no_single_ion_size_is_taken_by_the_open_law() -> None:
    rates = kn.RateTable.from_arrays(
        [288.15, 298.15] * 2, [1.0, 2.0, 1.5, 3.0], [0.01, 0.01, 0.1, 0.1], unit="L mol^-1 s^-1"
    )
    with pytest.raises(kn.InputError, match="Narrow its prior"):
        kn.fit(rates, salt_law="open", ion_size=4e-10)


def test_davies_with_both_coefficients_lies_inside() -> None:
    for coefficient in (0.2, 0.3):
        study = simulate(davies(coefficient), -2, STRENGTHS, studies=1, seed=11).observations
        low, high = fit_open(study, scatter="given").parameters["charge_product"].interval(0.95)
        assert float(low) < -2 < float(high)


def test_precise_runs_get_a_finer_grid() -> None:
    """u of 0.05 %: the default grid would be too coarse, and the answer still holds the truth."""
    study = simulate(extended(5.3), 2, STRENGTHS, studies=1, seed=4, u=5e-4).observations
    found = fit_open(study, scatter="given")
    assert found.grid.cells > 17 * 13 * 2
    low, high = found.parameters["charge_product"].interval(0.99)
    assert float(low) < 2 < float(high)
    finest = fit_open(study, scatter="given", refinement=8)
    one, other = (each.parameters["charge_product"] for each in (found, finest))
    assert abs(float(one.value) - float(other.value)) < 0.02 * float(other.standard_uncertainty)


def test_runs_too_precise_for_any_grid_say_so() -> None:
    study = simulate(extended(5.3), 4, STRENGTHS, studies=1, seed=4, u=1e-6).observations
    assert "coarse-grid" in [caveat.code for caveat in fit_open(study, scatter="given").caveats]
