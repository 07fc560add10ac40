"""One value from several: published results, and what must hold whatever the values."""

from __future__ import annotations

import math
from typing import TYPE_CHECKING

import numpy as np
import pytest
import statsmodels.api
from hypothesis import given, settings
from hypothesis import strategies as st
from statsmodels.stats.meta_analysis import combine_effects

from knought.discussion.consensus import ConsensusMethod, consensus
from knought.errors import InputError

if TYPE_CHECKING:
    from knought.arrays import FloatArray

#: Nine laboratories: values and variances, and what the R package metafor publishes for them
#: (read): DerSimonian-Laird, Paule-Mandel and fixed-effect results, Q, I², H², and the standard
#: error of Hartung and Knapp with DerSimonian-Laird weights.
VALUES = np.array([61.0, 61.4, 62.21, 62.3, 62.34, 62.6, 62.7, 62.84, 65.9])
VARIANCES = np.array([0.2025, 1.21, 0.09, 0.2025, 0.3844, 0.5625, 0.0676, 0.0225, 1.8225])
UNCERTAINTIES = np.sqrt(VARIANCES)

#: The published between-source variances carry the tolerance of an iteration.
METHODS: tuple[ConsensusMethod, ...] = ("dersimonian-laird", "paule-mandel", "fixed")


def test_dersimonian_and_laird_as_metafor_publishes_it() -> None:
    found = consensus(VALUES, UNCERTAINTIES, method="dersimonian-laird")
    assert found.between_variance == pytest.approx(0.288049246973751, rel=1e-10)
    assert found.value == pytest.approx(62.3901386044504, rel=1e-12)
    assert found.standard_uncertainty == pytest.approx(0.245749668040304, rel=1e-10)
    assert found.interval(0.95) == pytest.approx((61.9084781058787, 62.8717991030221), rel=1e-12)
    assert found.q == pytest.approx(24.801897741835, rel=1e-11)
    assert found.probability == pytest.approx(0.00167935146372742, rel=1e-9)
    assert 100 * found.i_squared == pytest.approx(67.744403741711, rel=1e-10)
    assert found.h_squared == pytest.approx(3.10023721772938, rel=1e-11)
    assert found.hartung_knapp_uncertainty == pytest.approx(0.29477605699879, rel=1e-10)


def test_paule_and_mandel_as_metafor_publishes_it() -> None:
    found = consensus(VALUES, UNCERTAINTIES, method="paule-mandel")
    # metafor stops its iteration near 1e-11 of tau²; ours goes on to rounding.
    assert found.between_variance == pytest.approx(0.705395309224248, rel=1e-10)
    assert found.value == pytest.approx(62.4076199113286, rel=1e-12)
    assert found.standard_uncertainty == pytest.approx(0.338030602684471, rel=1e-10)
    assert found.interval(0.95) == pytest.approx((61.7450921043947, 63.0701477182625), rel=1e-12)


def test_fixed_weights_and_birge_ratio_as_published() -> None:
    found = consensus(VALUES, UNCERTAINTIES, method="fixed")
    assert found.value == pytest.approx(62.58339709399823, rel=1e-14)
    assert found.standard_uncertainty == pytest.approx(0.10784570549823093, rel=1e-13)
    assert found.between_variance == 0.0
    # Birge = √(Q/(k - 1)) = √H², computed from the published Q.
    assert found.birge_ratio == pytest.approx(1.7607490501824905, rel=1e-11)


def test_hartung_knapp_interval_is_t_times_its_standard_error() -> None:
    """t(0.975; 8) = 2.306004135 (Student's table, from memory); se from metafor."""
    low, high = consensus(VALUES, UNCERTAINTIES).hartung_knapp_interval(0.95)
    half = 2.306004135204166 * 0.29477605699879
    assert (low, high) == pytest.approx((62.3901386044504 - half, 62.3901386044504 + half))


@pytest.mark.parametrize(
    ("method", "name"), [("dersimonian-laird", "chi2"), ("paule-mandel", "iterated")]
)
def test_agrees_with_statsmodels(method: ConsensusMethod, name: str) -> None:
    theirs = combine_effects(VALUES, VARIANCES, method_re=name)
    ours = consensus(VALUES, UNCERTAINTIES, method=method)
    # statsmodels iterates Paule-Mandel to 1e-5 of the scatter by default.
    tolerance = 1e-11 if name == "chi2" else 1e-4
    assert ours.between_variance == pytest.approx(theirs.tau2, rel=tolerance)
    assert ours.value == pytest.approx(theirs.mean_effect_re, rel=tolerance)
    assert ours.standard_uncertainty == pytest.approx(theirs.sd_eff_w_re, rel=tolerance)
    assert ours.q == pytest.approx(theirs.q, rel=1e-11)
    assert ours.hartung_knapp_uncertainty == pytest.approx(theirs.sd_eff_w_re_hksj, rel=tolerance)


@pytest.mark.parametrize("method", METHODS)
def test_leaving_one_out_is_the_consensus_of_the_rest(method: ConsensusMethod) -> None:
    without = consensus(VALUES, UNCERTAINTIES, method).leave_one_out()
    assert len(without) == len(VALUES)
    for i, each in enumerate(without):
        rest = consensus(np.delete(VALUES, i), np.delete(UNCERTAINTIES, i), method)
        assert each.value == rest.value
        assert each.standard_uncertainty == rest.standard_uncertainty


def test_paule_and_mandel_makes_the_scatter_what_is_expected() -> None:
    found = consensus(VALUES, UNCERTAINTIES, "paule-mandel")
    weights = 1 / (VARIANCES + found.between_variance)
    assert weights @ (VALUES - found.value) ** 2 == pytest.approx(len(VALUES) - 1, rel=1e-12)


values_and_u = st.integers(2, 7).flatmap(
    lambda k: st.tuples(
        st.lists(st.floats(-50, 50), min_size=k, max_size=k),
        st.lists(st.floats(0.05, 20), min_size=k, max_size=k),
    )
)


@pytest.mark.parametrize("method", METHODS)
@settings(max_examples=30)
@given(sample=values_and_u, shift=st.floats(-100, 100), scale=st.floats(0.1, 10))
def test_a_change_of_unit_changes_nothing_else(
    method: ConsensusMethod, sample: tuple[list[float], list[float]], shift: float, scale: float
) -> None:
    y, u = (np.array(each) for each in sample)
    here, there = consensus(y, u, method), consensus(shift + scale * y, scale * u, method)
    size = 1e-7 * (abs(shift) + scale * (np.abs(y).max() + u.max()))
    assert there.value == pytest.approx(shift + scale * here.value, abs=size)
    assert there.standard_uncertainty == pytest.approx(
        scale * here.standard_uncertainty, rel=1e-5, abs=size
    )


@pytest.mark.parametrize("method", METHODS)
@settings(max_examples=30)
@given(sample=values_and_u)
def test_the_order_of_the_papers_does_not_matter(
    method: ConsensusMethod, sample: tuple[list[float], list[float]]
) -> None:
    y, u = (np.array(each) for each in sample)
    here, there = consensus(y, u, method), consensus(y[::-1], u[::-1], method)
    assert there.value == pytest.approx(here.value, rel=1e-7, abs=1e-6)


@pytest.mark.parametrize("method", METHODS)
def test_values_that_agree_need_no_variance_between_them(method: ConsensusMethod) -> None:
    found = consensus([5.0, 5.0, 5.0], [0.1, 0.2, 0.3], method)
    assert (found.value, found.between_variance) == (5.0, 0.0)
    assert found.q == pytest.approx(0.0)
    assert found.i_squared == 0.0


def test_one_value_has_no_scatter() -> None:
    found = consensus([5.0], [0.1])
    assert found.value == 5.0
    assert found.standard_uncertainty == pytest.approx(0.1)
    assert math.isnan(found.birge_ratio)
    assert found.hartung_knapp_interval() == (-math.inf, math.inf)
    assert found.leave_one_out() == ()


def random_common(k: int = 9) -> FloatArray:
    """What three shared errors do to k sources."""
    jacobian = np.random.default_rng(5).normal(size=(k, 3))
    return np.asarray(0.1 * jacobian @ jacobian.T)


def test_shared_errors_make_it_generalised_least_squares() -> None:
    """The mean and its u as statsmodels' GLS gives them for the same covariance."""
    common = random_common()
    found = consensus(VALUES, UNCERTAINTIES, "fixed", common=common)
    sigma = np.diag(VARIANCES) + common
    theirs = statsmodels.api.GLS(VALUES, np.ones(9), sigma=sigma).fit()
    assert found.value == pytest.approx(float(theirs.params[0]), rel=1e-12)
    assert found.standard_uncertainty**2 == pytest.approx(
        float(theirs.normalized_cov_params[0, 0]), rel=1e-10
    )
    assert found.q == pytest.approx(float(theirs.ssr), rel=1e-10)
    assert found.weights.sum() == pytest.approx(1.0)
    assert found.uncertainties == pytest.approx(np.sqrt(np.diagonal(sigma)))


@pytest.mark.parametrize("method", METHODS)
def test_an_error_that_moves_all_sources_alike_only_widens(method: ConsensusMethod) -> None:
    apart = consensus(VALUES, UNCERTAINTIES, method)
    found = consensus(VALUES, UNCERTAINTIES, method, common=np.full((9, 9), 0.3**2))
    assert found.value == pytest.approx(apart.value, rel=1e-12)
    assert found.between_variance == pytest.approx(apart.between_variance, rel=1e-9)
    assert found.q == pytest.approx(apart.q, rel=1e-10)
    assert found.standard_uncertainty == pytest.approx(
        math.hypot(apart.standard_uncertainty, 0.3), rel=1e-12
    )


def test_the_moments_of_both_methods_hold_with_shared_errors() -> None:
    """By the definition of each: E[Q] = k - 1 + τ² tr P, and the scatter at τ² is k - 1."""
    common = random_common()
    covariance = np.diag(VARIANCES) + common

    def residual_form(between: float) -> FloatArray:
        W = np.linalg.inv(covariance + between * np.eye(9))
        ones = np.ones(9)
        return np.asarray(W - np.outer(W @ ones, ones @ W) / (ones @ W @ ones))

    moment = consensus(VALUES, UNCERTAINTIES, "dersimonian-laird", common=common)
    P = residual_form(0.0)
    assert moment.between_variance == pytest.approx((VALUES @ P @ VALUES - 8) / np.trace(P))
    root = consensus(VALUES, UNCERTAINTIES, "paule-mandel", common=common)
    assert VALUES @ residual_form(root.between_variance) @ VALUES == pytest.approx(8.0)


@pytest.mark.parametrize(
    "common", [np.eye(3), np.full((9, 9), math.nan), -np.eye(9), np.triu(np.ones((9, 9)))]
)
def test_what_is_no_covariance_of_the_sources_is_refused(common: FloatArray) -> None:
    with pytest.raises(InputError):
        consensus(VALUES, UNCERTAINTIES, common=common)


def test_inputs_stay_as_they_are_and_results_cannot_be_changed() -> None:
    y, u = VALUES.copy(), UNCERTAINTIES.copy()
    found = consensus(y, u)
    assert np.array_equal(y, VALUES)
    with pytest.raises(ValueError, match="read-only"):
        found.values[0] = 1.0


@pytest.mark.parametrize(
    ("y", "u", "method"),
    [
        ([1.0, 2.0], [0.1], "fixed"),
        ([], [], "fixed"),
        ([1.0, math.nan], [0.1, 0.1], "fixed"),
        ([1.0, 2.0], [0.1, 0.0], "fixed"),
        ([1.0, 2.0], [0.1, 0.1], "median"),
    ],
)
def test_what_cannot_be_combined_is_refused(y: list[float], u: list[float], method: str) -> None:
    with pytest.raises(InputError):
        consensus(y, u, method)  # type: ignore[arg-type]


def test_a_coverage_must_be_a_fraction() -> None:
    with pytest.raises(InputError):
        consensus(VALUES, UNCERTAINTIES).interval(95)
    with pytest.raises(InputError):
        consensus(VALUES, UNCERTAINTIES).hartung_knapp_interval(1.0)
