"""What the residuals say: outliers, patterns, curvature, replicates, salts, influence."""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING

import numpy as np
import pytest
import statsmodels.api as sm
from scipy import stats

import knought as kn
from knought.arrays import FloatArray, frozen
from knought.fitting.bootstrap import bootstrap
from knought.fitting.diagnostics import curvature, diagnose, leverage, salt_test
from knought.fitting.influence import influence, refit, subset
from knought.fitting.monte_carlo import monte_carlo
from knought.fitting.open_fit import fit_open
from knought.fitting.profile import profile_ion_size
from knought.fitting.replicates import replicate_groups, replicates
from knought.fitting.sensitivity import prior_sensitivity
from knought.fitting.surface_fit import fit_surface
from knought.laws.salt import SaltLaw, salt_law
from tests.fitting.test_assess import codes, table
from tests.simulation import davies, extended, guntelberg, simulate

if TYPE_CHECKING:
    from knought.fitting.observations import Observations

STRENGTHS = np.array([0.005, 0.01, 0.02, 0.05, 0.1, 0.2])
FIVE = (283.15, 290.65, 298.15, 305.65, 313.15)


def study(seed: int = 1, u: float = 0.02, temperatures: tuple[float, ...] = FIVE) -> Observations:
    return simulate(
        davies(0.3), 2, STRENGTHS, studies=1, seed=seed, u=u, temperatures=temperatures
    ).observations


def with_ln_k(seen: Observations, ln_k: FloatArray) -> Observations:
    return replace(seen, ln_k=frozen(ln_k))


def test_leverage_and_studentised_residuals_are_those_of_statsmodels() -> None:
    seen = study()
    found = fit_surface(seen, salt_law="davies", scatter="given")
    rows = found.surface.ln_k(seen.T, seen.ionic_strength)
    size = np.linalg.norm(rows.rows, axis=0)
    reference = sm.OLS(seen.ln_k - rows.offset, rows.rows / size).fit().get_influence()
    assert np.allclose(leverage(found), reference.hat_matrix_diag, rtol=1e-8)
    scaled = fit_surface(seen, salt_law="davies", scatter="scatter")
    internal = diagnose(scaled).studentised
    assert np.allclose(internal, reference.resid_studentized_internal, rtol=1e-8)


def test_leverages_of_the_open_law_add_up_to_what_the_runs_determine() -> None:
    """Between the flat parameters (3) and all of them with å, c and β (6)."""
    total = float(leverage(fit_open(study(), scatter="given")).sum())
    assert 3 < total < 6


@pytest.mark.parametrize("choice", ["given", "scatter"])
def test_an_outlier_is_flagged_and_not_dropped(choice: str) -> None:
    seen = study(5)
    wild = seen.ln_k.copy()
    wild[7] += 0.2
    found = fit_open(with_ln_k(seen, wild), scatter=choice)  # type: ignore[arg-type]
    assert diagnose(found).outliers == (7,)
    assert found.observations.runs == 30
    assert diagnose(fit_open(seen, scatter=choice)).outliers == ()  # type: ignore[arg-type]


def test_outliers_are_flagged_by_chance_in_five_studies_of_a_hundred_at_most() -> None:
    flagged = 0
    for seed in range(60):
        found = fit_surface(
            study(seed, temperatures=(288.15, 298.15)), salt_law="davies", scatter="given"
        )
        flagged += bool(diagnose(found).outliers)
    assert flagged / 60 < 0.05 + 3 * np.sqrt(0.05 * 0.95 / 60)


def test_a_drift_along_the_runs_is_seen() -> None:
    seen = study()
    drifting = with_ln_k(seen, seen.ln_k + np.where(np.arange(30) % 6 < 3, 0.06, -0.06))
    pattern = diagnose(fit_surface(drifting, salt_law="none", scatter="given")).runs_test
    assert pattern["ionic strength"] < 0.01
    assert set(pattern) == {"order", "temperature", "ionic strength"}


def test_curvature_is_asked_of_five_temperatures_at_least() -> None:
    assert curvature(fit_open(study(temperatures=FIVE[:4]))) is None
    bent = curvature(fit_open(study()))
    assert bent is not None
    assert abs(bent.value) < 4 * bent.standard_uncertainty
    assert curvature(fit_open(study(), temperature_law="eyring-cp")) is None


def test_curvature_is_found_by_chance_in_five_studies_of_a_hundred() -> None:
    """False-positive rate 5 % within simulation error, where there is no ΔC_p‡."""
    count = 4000
    studies = simulate(guntelberg, 2, STRENGTHS[:3], studies=count, seed=1, temperatures=FIVE)
    seen, k = studies.observations, np.exp(studies.ln_k)
    many = kn.fit_many(
        k,
        0.02 * k,
        T=seen.T,
        I=seen.ionic_strength,
        order=2,
        temperature_law="eyring-cp",
        salt_law="guntelberg",
    )
    name = "activation_heat_capacity"
    z = many.value(name) / many.standard_uncertainty(name)
    found = 2 * stats.norm.sf(np.abs(z))
    rate = float(np.mean(found < 0.05))
    assert rate == pytest.approx(0.05, abs=3 * np.sqrt(0.05 * 0.95 / count))
    # The same statement as the one that an assessment makes of a single study.
    alone = curvature(fit_surface(seen, salt_law="guntelberg", scatter="given"))
    assert alone is not None
    assert alone.probability == pytest.approx(float(found[0]), rel=1e-6)


def test_curvature_under_arrhenius_starts_from_its_own_heat_capacity() -> None:
    """A constant E_a is ΔC_p‡ = -R: exact Arrhenius data are not curved."""
    seen = simulate(
        guntelberg, 2, STRENGTHS[:3], studies=1, seed=1, temperatures=FIVE, u=1e-4
    ).observations
    straight = with_ln_k(seen, seen.ln_k - np.log(seen.T))
    for law, curved in (("arrhenius", False), ("eyring", True)):
        found = curvature(
            fit_surface(straight, temperature_law=law, salt_law="guntelberg", scatter="given")
        )
        assert found is not None
        assert (found.probability < 1e-3) is curved


def test_a_real_curvature_is_found_and_other_causes_are_named() -> None:
    seen = study(u=0.01)
    x = seen.T / 298.15 - 1
    bent = with_ln_k(seen, seen.ln_k + 400 / 8.314 * (np.log1p(x) - x / (1 + x)))
    k = np.exp(bent.ln_k)
    assert bent.I is not None
    found = kn.assess(kn.RateTable.from_arrays(bent.T, k, bent.I, 0.01 * k, unit="L mol^-1 s^-1"))
    message = next(c.message for c in found.caveats if c.code == "curvature")
    assert "temperature error" in message
    assert "second path" in message


def repeated(scatter: float, seed: int = 1) -> kn.RateTable:
    """Three runs at each of six conditions, u stated as 2 %, true scatter as given."""
    T = np.repeat([288.15, 298.15, 308.15, 288.15, 298.15, 308.15], 3)
    I = np.repeat([0.01, 0.01, 0.01, 0.1, 0.1, 0.1], 3)
    water = kn.debye_huckel(T)
    root = np.sqrt(I)
    ln_k = -6000 * (1 / T - 1 / 298.15) + np.log(10) * 4 * water.A * root / (1 + root)
    k = np.exp(ln_k + scatter * np.random.default_rng(seed).standard_normal(18))
    return kn.RateTable.from_arrays(T, k, I, 0.02 * k, unit="L mol^-1 s^-1")


def test_replicates_are_found_and_pooled() -> None:
    found = fit_surface(kn.fit(repeated(0.02)).observations, salt_law="guntelberg")
    said = replicates(found)
    assert said is not None
    assert said.groups == 6
    assert said.degrees_of_freedom == 12
    y = found.observations.ln_k.reshape(6, 3)
    assert said.standard_deviation == pytest.approx(
        np.sqrt(np.mean(y.var(axis=1, ddof=1))), rel=1e-6
    )
    assert said.lack_degrees == 18 - 3 - 12
    # χ² about the fit splits into that about the means and that of the means.
    total = float(np.sum((found.residuals / found.errors.u) ** 2))
    assert said.pure_error + said.lack_of_fit == pytest.approx(total, rel=1e-9)


def test_replicates_that_scatter_more_than_stated_say_so() -> None:
    assert "replicates-scatter" in codes(kn.assess(repeated(0.08)))
    assert "replicates-scatter" not in codes(kn.assess(repeated(0.02)))


def test_laws_that_miss_the_means_of_replicates_do_not_fit() -> None:
    rates = repeated(0.005)
    k = rates.k * np.where(np.isclose(rates.T, 298.15), 1.15, 1.0)
    bad = kn.assess(
        kn.RateTable.from_arrays(rates.T, k, rates.I, 0.005 * k, unit="L mol^-1 s^-1"),
        salt_law="guntelberg",
    )
    assert "lack-of-fit" in codes(bad)


def test_runs_at_the_same_conditions_with_another_salt_are_no_replicates() -> None:
    rates = kn.RateTable.from_arrays(
        [298.15] * 4,
        [1.0, 1.1, 1.2, 1.3],
        [0.1] * 4,
        unit="L mol^-1 s^-1",
        salt=["NaCl", "NaCl", "KCl", "KCl"],
    )
    seen = kn.fit(rates).observations
    assert [group.tolist() for group in replicate_groups(seen)] == [[0, 1], [2, 3]]
    assert (
        replicates(kn.fit(kn.RateTable.from_arrays([288.15, 298.15, 308.15], [1.0, 2.0, 4.0])))
        is None
    )


def test_the_salt_is_found_to_matter_where_it_does() -> None:
    rates = table()
    salts = ["NaCl" if i % 2 else "KCl" for i in range(18)]
    k = rates.k * np.where(np.array(salts) == "KCl", 1.10, 1.0)
    matters = kn.RateTable.from_arrays(
        rates.T, k, rates.I, 0.02 * k, unit="L mol^-1 s^-1", salt=salts
    )
    found = kn.assess(matters)
    assert "salt-matters" in codes(found)
    test = found.diagnostics.salt
    assert test is not None
    offset, u = test.offsets["NaCl" if test.reference == "KCl" else "KCl"]
    assert abs(offset) == pytest.approx(np.log(1.10), abs=4 * u)
    same = kn.RateTable.from_arrays(
        rates.T, rates.k, rates.I, 0.02 * rates.k, unit="L mol^-1 s^-1", salt=salts
    )
    assert "salt-matters" not in codes(kn.assess(same))


def test_salts_at_conditions_of_their_own_cannot_be_compared() -> None:
    rates = table()
    assert rates.I is not None
    levels = [f"salt {i % 6}" for i in range(18)]
    own = kn.RateTable.from_arrays(
        rates.T, rates.k, rates.I, 0.02 * rates.k, unit="L mol^-1 s^-1", salt=levels
    )
    test = salt_test(kn.fit(own, salt_law="davies"))
    assert test is not None
    assert test.probability > 0.05
    assert max(u for _, u in test.offsets.values()) > 0.3
    apart = kn.RateTable.from_arrays(
        [288.15, 298.15, 308.15], [1.0, 2.0, 4.0], salt=["NaCl", "KCl", "LiCl"]
    )
    assert salt_test(kn.fit(apart)) is None


def test_leaving_one_out_is_refitting_without_it() -> None:
    seen = study()
    found = fit_surface(seen, salt_law="davies", scatter="given")
    moved = {(each.kind, each.label): each for each in influence(found)}
    assert len([key for key in moved if key[0] == "run"]) == 30
    rest = np.arange(30) != 4
    by_hand = fit_surface(
        replace(
            seen,
            ln_k=seen.ln_k[rest],
            u=seen.u[rest],
            T=seen.T[rest],
            I=seen.ionic_strength[rest],
        ),
        salt_law="davies",
        scatter="given",
    )
    before, after = found.parameters["charge_product"], by_hand.parameters["charge_product"]
    shift = (float(after.value) - float(before.value)) / float(before.standard_uncertainty)
    assert moved["run", "5"].shifts["charge_product"] == pytest.approx(shift, rel=1e-9)
    assert moved["temperature", "298.15 K"].runs == tuple(range(12, 18))
    assert ("ionic strength", "0.05 mol/L") in moved


def test_a_wild_run_moves_most() -> None:
    seen = study()
    wild = seen.ln_k.copy()
    wild[0] += 0.3
    runs = [
        each
        for each in influence(fit_open(with_ln_k(seen, wild), scatter="given"))
        if each.kind == "run"
    ]
    assert max(runs, key=lambda each: each.largest).label == "1"


def test_wider_priors_widen_the_charge_product() -> None:
    cases = prior_sensitivity(fit_open(study(), scatter="given"))
    assert [case.words for case in cases] == ["as they are", "widths halved", "widths doubled"]
    u = [float(case.fit.parameters["charge_product"].standard_uncertainty) for case in cases]
    assert u[1] < u[0] < u[2]
    assert cases[1].priors.linear_coefficient == pytest.approx((0.1, 0.15))


def test_bootstraps_and_monte_carlo_agree_on_a_well_behaved_study() -> None:
    """Linear, Monte Carlo, parametric and case bootstrap, within their errors."""
    found = fit_surface(study(), salt_law="davies", scatter="given")
    u = float(found.parameters["activation_energy"].standard_uncertainty)
    drawn = monte_carlo(found, 50_000).parameters["activation_energy"]
    assert drawn.standard_uncertainty == pytest.approx(u, rel=0.02)
    parametric = bootstrap(found, 150, seed=1)
    assert parametric.standard_uncertainty("activation_energy") == pytest.approx(u, rel=0.2)
    case = bootstrap(found, 150, kind="case", seed=1)
    # The case bootstrap knows only the scatter of these 30 runs.
    scatter = u * found.scatter.birge_ratio
    assert case.standard_uncertainty("activation_energy") == pytest.approx(scatter, rel=0.3)
    low, high = parametric.interval("activation_energy")
    assert low < float(found.parameters["activation_energy"].value) < high
    again = bootstrap(found, 20, seed=1)
    first = parametric.values["charge_product"][:20]
    assert np.array_equal(again.values["charge_product"], first)


def test_too_few_draws_or_runs_are_no_bootstrap() -> None:
    found = fit_surface(study(), salt_law="davies")
    with pytest.raises(kn.InputError, match="200 or more"):
        bootstrap(found, 1)
    few = kn.fit(
        kn.RateTable.from_arrays([288.15, 298.15, 308.15], [1.0, 2.0, 4.0], u_k=[0.1, 0.2, 0.4]),
        temperature_law="eyring-cp",
    )
    with pytest.raises(kn.InputError, match="too few runs"):
        bootstrap(few, 30, kind="case", seed=3)


def test_the_profile_of_the_ion_size_ends_where_chi_square_has_risen_enough() -> None:
    """The minimum is lmfit's; at the ends χ² is 1.96² above it."""
    import lmfit

    studies = simulate(extended(5), 2, STRENGTHS, studies=1, seed=8, u=0.01).observations
    k = np.exp(studies.ln_k)
    rates = kn.RateTable.from_arrays(studies.T, k, studies.I, 0.01 * k, unit="L mol^-1 s^-1")
    found = profile_ion_size(rates)
    assert not found.open_below
    assert not found.open_above

    def residuals(p: lmfit.Parameters) -> FloatArray:
        fit = fit_surface(studies, salt_law=_extended(p["size"].value))
        return np.asarray(fit.residuals / 0.01)

    start = lmfit.create_params(size={"value": 5.0, "min": 0.3, "max": 30})
    goal = float(np.sum(residuals(start) ** 2))
    assert goal > 0
    for end in (found.low, found.high):
        away = fit_surface(studies, salt_law=_extended(end * 1e10)).solution.chi_square
        best = fit_surface(studies, salt_law=_extended(found.value * 1e10)).solution.chi_square
        assert away - best == pytest.approx(1.959964**2, rel=1e-4)
    result = lmfit.minimize(residuals, start, scale_covar=False)
    assert result.params["size"].value == pytest.approx(found.value * 1e10, rel=1e-3)


def test_linear_and_profile_intervals_agree_where_the_runs_are_precise() -> None:
    """Ends of å ± 1.96 u and of the profile; other runs are refitted with an å of their own."""
    seen = simulate(extended(5), 2, STRENGTHS, studies=1, seed=8, u=1e-3).observations
    k = np.exp(seen.ln_k)
    rates = kn.RateTable.from_arrays(seen.T, k, seen.I, 1e-3 * k, unit="L mol^-1 s^-1")
    found = kn.fit_ion_size(rates, scatter="given")
    size = found.parameters["ion_size"]
    u = float(size.standard_uncertainty)
    profile = profile_ion_size(rates)
    assert size.interval(0.95) == pytest.approx((profile.low, profile.high), abs=0.05 * u)
    fewer = subset(found.observations, np.arange(0, seen.runs, 2))
    again, alone = refit(found, fewer), kn.fit_ion_size(fewer, scatter="given")
    assert float(again.parameters["ion_size"].value) == float(alone.parameters["ion_size"].value)


def _extended(size: float) -> SaltLaw:
    return salt_law("extended", ion_size=size * 1e-10)


def test_a_flat_profile_is_open() -> None:
    found = profile_ion_size(table(z=0.2, u=0.1, seed=2))
    assert found.open_below or found.open_above
    with pytest.raises(kn.InputError, match=r"0\.95"):
        profile_ion_size(table(), coverage=95)


def test_the_fit_of_k_stands_beside_that_of_ln_k() -> None:
    found = kn.assess(table())
    assert found.cross_check is not None
    assert found.cross_check.in_ln_k.salt_law == found.cross_check.in_k.salt_law
    assert all(abs(shift) < 0.3 for shift in found.cross_check.shifts.values())
    wild = kn.assess(table(u=0.5, seed=6))
    assert "large-relative-uncertainty" in codes(wild)
