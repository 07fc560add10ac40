"""Several reactions, and a series of solvents: artefacts shown, slopes with their meaning."""

from __future__ import annotations

import math

import numpy as np
import pytest

from knought.discussion.compensation import Compensation, compensation
from knought.discussion.mechanism_sentences import compensation_sentences, solvent_sentence
from knought.discussion.solvent import solvent_series
from knought.errors import InputError
from knought.fitting.fit import fit
from tests.discussion.studies import GAS_CONSTANT, LN_A, TEMPERATURES, study

#: e²/(4 π ε₀ k_B T) at 25 °C in m: the Bjerrum length of water, 0.714794 nm (computed with iapws
#: 1.5.5), times its ε_r, 78.408 (IAPWS R8-97).
UNIT_LENGTH = 0.714794e-9 * 78.40848


def series(energies: list[float], ln_a: list[float], noise: float, seed: int = 0) -> Compensation:
    return compensation(
        {
            f"reaction {i + 1}": fit(
                study(energy=energy, ln_a=a, noise=noise, seed=seed + i), salt_law="guntelberg",
                charge_product=2.0, scatter="given",
            )
            for i, (energy, a) in enumerate(zip(energies, ln_a, strict=True))
        }
    )  # fmt: skip


def test_one_reaction_measured_over_and_over_shows_the_isokinetic_artefact() -> None:
    """Twelve times the same reaction: errors alone give a line of slope T_hm (Krug 1976)."""
    found = series([60e3] * 12, [LN_A] * 12, noise=1.0)
    expected = 1 / np.mean(1 / np.array(TEMPERATURES))
    assert found.harmonic_mean_temperature == pytest.approx(expected, rel=1e-12)
    assert found.slope == pytest.approx(expected, rel=0.02)
    assert found.artefact_suspected
    assert not found.related
    text = " ".join(compensation_sentences(found))
    assert "isokinetic artefact" in text
    assert "no evidence of a common mechanism" in text
    assert "no relation is shown" in text


def test_reactions_that_differ_by_enthalpy_alone_are_related_and_no_artefact() -> None:
    found = series([50e3, 55e3, 60e3, 65e3, 70e3], [LN_A] * 5, noise=1.0)
    assert found.related
    assert found.gibbs_slope == pytest.approx(1.0, abs=0.1)
    assert "a relation beyond the errors" in " ".join(compensation_sentences(found))


def test_an_exact_isokinetic_line_is_recovered() -> None:
    """ΔH‡ = H₀ + 450 K ΔS‡: ln A rises by ΔE/(R 450 K)."""
    energies = [50e3, 56e3, 62e3, 70e3]
    ln_a = [LN_A + (energy - 60e3) / (GAS_CONSTANT * 450) for energy in energies]
    found = series(energies, ln_a, noise=0.0)
    assert found.slope == pytest.approx(450, rel=1e-6)
    assert not found.artefact_suspected


def test_enthalpy_and_gibbs_energy_at_the_harmonic_mean_are_uncorrelated() -> None:
    """The reason for plotting them (Krug, Hunter and Grieger 1976)."""
    for point in series([60e3] * 3, [LN_A] * 3, noise=1.0).points:
        assert abs(point.correlation) > 0.99
        assert abs(point.correlation_with_gibbs) < 0.05


def test_the_ellipse_holds_what_it_says() -> None:
    """Every point of it lies at χ² = -2 ln(0.05) = 5.99 (two degrees of freedom)."""
    (point, *_) = series([60e3] * 3, [LN_A] * 3, noise=1.0).points
    away = point.ellipse(0.95) - np.array([point.entropy, point.enthalpy])
    scale = np.array([point.entropy_uncertainty, point.enthalpy_uncertainty])
    shape = point.covariance / np.outer(scale, scale)
    chi_square = np.einsum("ni,ni->n", away / scale, np.linalg.solve(shape, (away / scale).T).T)
    assert chi_square == pytest.approx(np.full(len(away), 5.991464547), rel=1e-5)
    with pytest.raises(InputError):
        point.ellipse(95)


def test_the_covariance_is_that_of_the_correlated_values() -> None:
    import uncertainties

    fitted = fit(study(noise=1.0, seed=4))
    point = compensation({"a": fitted, "b": fitted, "c": fit(study(seed=5, noise=1.0))}).points[0]
    values = fitted.correlated()
    theirs = uncertainties.covariance_matrix(
        [values["activation_entropy"], values["activation_enthalpy"]]
    )
    assert point.covariance == pytest.approx(np.array(theirs), rel=1e-6)


def test_too_few_reactions_are_refused() -> None:
    fitted = fit(study())
    with pytest.raises(InputError):
        compensation({"a": fitted, "b": fitted})
    with pytest.raises(InputError, match="one temperature"):
        compensation({"a": fitted, "b": fitted, "c": fit(study(temperatures=(298.15,)))})


EPSILON = np.array([78.4, 70.0, 60.0, 50.0, 40.0])


def test_a_solvent_series_gives_back_charges_and_distance() -> None:
    """ln k = ln k_∞ - z_A z_B (e²/(4πε₀k_BT r))/ε_r with z_A z_B = -2, r = 4 Å."""
    k = np.exp(3.0 + 2 * UNIT_LENGTH / 4e-10 / EPSILON)
    found = solvent_series(EPSILON, k, 0.01 * k)
    z, _ = found.charge_product(4e-10)
    assert z == pytest.approx(-2.0, rel=1e-5)
    r, u_r = found.contact_distance(-2)
    assert r == pytest.approx(4e-10, rel=1e-5)
    assert u_r / r == pytest.approx(found.slope_uncertainty / found.slope)
    assert found.intercept == pytest.approx(3.0, abs=1e-4)
    assert found.supported_sign == -1
    assert "opposite charges" in solvent_sentence(found)
    with pytest.raises(InputError, match="other charges"):
        found.contact_distance(2)
    with pytest.raises(InputError):
        found.contact_distance(0)


def test_uncertainties_of_the_series_by_hand() -> None:
    """u of a slope: σ/√Σ(x - x̄)²; of the intercept σ √(1/n + x̄²/Σ(x - x̄)²)."""
    k = np.exp(1.0 - 50 / EPSILON)
    found = solvent_series(EPSILON, k, 0.02 * k)
    x = 1 / EPSILON
    total = float(np.sum((x - x.mean()) ** 2))
    assert found.slope_uncertainty == pytest.approx(0.02 / math.sqrt(total), rel=1e-9)
    expected = 0.02 * math.sqrt(1 / 5 + x.mean() ** 2 / total)
    assert found.intercept_uncertainty == pytest.approx(expected, rel=1e-9)
    assert math.isinf(found.degrees_of_freedom)
    assert found.supported_sign == 1


def test_scatter_speaks_where_it_is_larger() -> None:
    bent = np.exp(1.0 - 50 / EPSILON + np.array([0.1, -0.2, 0.2, -0.2, 0.1]))
    stated = solvent_series(EPSILON, bent, 0.001 * bent)
    alone = solvent_series(EPSILON, bent)
    assert stated.slope_uncertainty == pytest.approx(alone.slope_uncertainty, rel=1e-9)
    assert stated.degrees_of_freedom == 3
    low, high = alone.interval()
    # t(0.975; 3) = 3.182446 (Student's table, from memory).
    assert (high - low) / 2 == pytest.approx(3.182446 * alone.slope_uncertainty, rel=1e-6)


def test_a_flat_series_supports_no_sign() -> None:
    k = np.array([1.0, 1.02, 0.99, 1.01, 1.0])
    found = solvent_series(EPSILON, k)
    assert found.supported_sign == 0
    assert "no sign" in solvent_sentence(found)


@pytest.mark.parametrize(
    ("epsilon", "k", "u", "T"),
    [
        ([78, 70], [1, 2], None, 298.15),
        ([78, 78, 78], [1, 2, 3], None, 298.15),
        ([78, 70, 60], [1, 2], None, 298.15),
        ([78, 70, 0.5], [1, 2, 3], None, 298.15),
        ([78, 70, 60], [1, -2, 3], None, 298.15),
        ([78, 70, 60], [1, 2, 3], [0.1, 0.1, 0.0], 298.15),
        ([78, 70, 60], [1, 2, 3], None, -1.0),
    ],
)
def test_what_is_no_series_is_refused(
    epsilon: list[float], k: list[float], u: list[float] | None, T: float
) -> None:
    with pytest.raises(InputError):
        solvent_series(epsilon, k, u, T=T)


def test_a_coverage_of_the_slope_is_a_fraction() -> None:
    with pytest.raises(InputError):
        solvent_series(EPSILON, np.exp(1 / EPSILON)).interval(95)
    with pytest.raises(InputError):
        solvent_series(EPSILON, np.exp(1 / EPSILON)).charge_product(4.0)
