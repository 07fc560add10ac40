"""Quantiles of mixtures: against scipy.stats, their own distribution function, and limits."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy import stats

from knought.errors import InputError
from knought.numerics.quantiles import (
    Histogram,
    Mixture,
    chi_square_survival,
    normal_quantile,
    student_quantile,
)


@pytest.mark.parametrize("probability", [1e-6, 0.025, 0.5, 0.975])
def test_quantiles_agree_with_scipy_stats(probability: float) -> None:
    assert normal_quantile(probability) == pytest.approx(stats.norm.ppf(probability), abs=1e-12)
    assert student_quantile(probability, 4) == pytest.approx(stats.t.ppf(probability, 4), rel=1e-9)
    assert student_quantile(probability, math.inf) == normal_quantile(probability)
    assert chi_square_survival(7.0, 3) == pytest.approx(stats.chi2.sf(7.0, 3), rel=1e-12)


def test_one_component_is_a_normal_distribution() -> None:
    mixture = Mixture(np.ones(1), np.array([2.0]), np.array([0.5]))
    low, high = mixture.interval(0.95)
    assert float(low) == pytest.approx(2 - 0.5 * 1.959963984540054, abs=1e-12)
    assert float(high) == pytest.approx(2 + 0.5 * 1.959963984540054, abs=1e-12)
    assert float(mixture.pdf(2.0)) == pytest.approx(stats.norm.pdf(2, 2, 0.5), rel=1e-12)


def test_student_components_have_their_own_tails_and_density() -> None:
    mixture = Mixture(np.ones(1), np.array([2.0]), np.array([0.5]), degrees_of_freedom=3)
    assert float(mixture.quantile(0.975)) == pytest.approx(stats.t.ppf(0.975, 3, 2, 0.5), rel=1e-9)
    assert float(mixture.pdf(2.4)) == pytest.approx(stats.t.pdf(2.4, 3, 2, 0.5), rel=1e-12)
    assert float(mixture.cdf(2.4)) == pytest.approx(stats.t.cdf(2.4, 3, 2, 0.5), rel=1e-12)


@given(
    locations=st.lists(st.floats(-5, 5), min_size=2, max_size=6),
    seed=st.integers(0, 100),
    probability=st.floats(0.001, 0.999),
)
@settings(max_examples=60, deadline=None)
def test_a_quantile_is_where_the_distribution_function_says(
    locations: list[float], seed: int, probability: float
) -> None:
    random = np.random.default_rng(seed)
    count = len(locations)
    weights = random.dirichlet(np.ones(count))
    mixture = Mixture(weights, np.array(locations), random.uniform(0.05, 2.0, count))
    assert float(mixture.cdf(mixture.quantile(probability))) == pytest.approx(probability, abs=1e-9)


def test_quantiles_of_an_array_are_those_of_its_members() -> None:
    random = np.random.default_rng(3)
    weights = np.array([0.2, 0.5, 0.3])
    locations, scales = random.normal(size=(3, 4)), random.uniform(0.1, 1, (3, 4))
    together = Mixture(weights, locations, scales).quantile(0.9)
    for j in range(4):
        alone = Mixture(weights, locations[:, j], scales[:, j]).quantile(0.9)
        assert float(together[j]) == pytest.approx(float(alone), abs=1e-11)


def test_the_interval_is_not_that_of_a_normal_with_the_same_variance() -> None:
    mixture = Mixture(np.array([0.5, 0.5]), np.array([-3.0, 3.0]), np.array([0.1, 0.1]))
    _, high = mixture.interval(0.95)
    normal = 1.96 * float(mixture.standard_deviation)
    assert float(high) == pytest.approx(3.164, abs=0.01)
    assert normal > 5.8


def test_mean_and_deviation_are_those_of_draws() -> None:
    weights, locations, scales = np.array([0.3, 0.7]), np.array([0.0, 2.0]), np.array([1.0, 0.2])
    mixture = Mixture(weights, locations, scales)
    random = np.random.default_rng(1)
    which = random.choice(2, size=200_000, p=weights)
    draws = random.normal(locations[which], scales[which])
    assert float(mixture.mean) == pytest.approx(draws.mean(), abs=0.01)
    assert float(mixture.standard_deviation) == pytest.approx(draws.std(), abs=0.01)


def test_a_certain_value_has_an_interval_without_width() -> None:
    certain = Mixture(np.ones(1), np.array([2.0]), np.zeros(1))
    assert [float(end) for end in certain.interval(0.95)] == [2.0, 2.0]
    assert float(certain.cdf(1.9)) == 0.0
    assert float(certain.cdf(2.0)) == 1.0


@pytest.mark.parametrize("wrong", [0.0, 1.0, 95.0, -0.1])
def test_a_coverage_that_is_no_probability_is_refused(wrong: float) -> None:
    mixture = Mixture(np.ones(1), np.zeros(1), np.ones(1))
    with pytest.raises(InputError, match=r"0\.95"):
        mixture.interval(wrong)
    with pytest.raises(InputError, match="probability"):
        mixture.quantile(wrong)


def test_a_histogram_of_equal_weights_is_uniform() -> None:
    nodes = np.arange(0.5, 10.0)
    uniform = Histogram(nodes, np.full(10, 0.1), (0.0, 10.0))
    assert [float(end) for end in uniform.interval(0.9)] == pytest.approx([0.5, 9.5])
    assert float(uniform.mean) == pytest.approx(5.0)
    assert float(uniform.standard_deviation) == pytest.approx(np.sqrt(8.25))


def test_a_histogram_with_one_node_is_that_value() -> None:
    assert float(Histogram(np.array([4.0]), np.ones(1)).quantile(0.3)) == 4.0
