"""First-order traces: certified values, coverage, and patterns that are said."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from knought.errors import InputError
from knought.measurement.first_order import first_order, first_orders
from knought.measurement.first_order_pattern import two_exponentials
from tests.measurement.simulated_traces import noisy


def test_boxbod_comes_out_with_certified_values_and_errors_without_a_starting_value() -> None:
    # NIST/ITL StRD, BoxBOD: y = b1 (1 - exp(-b2 x)); certified b and standard deviations.
    x, y = [1, 2, 3, 5, 7, 10], [109, 149, 149, 191, 213, 224]
    found = first_order(x, y, initial=0)
    assert found.value == pytest.approx(5.4723748542e-1, rel=1e-9)
    assert found.standard_uncertainty == pytest.approx(1.0455993237e-1, rel=1e-9)
    assert found.final_level == pytest.approx(2.1380940889e2, rel=1e-9)
    assert found.u_final_level == pytest.approx(1.2354515176e1, rel=1e-9)
    assert found.residual_deviation == pytest.approx(17.088072423, rel=1e-9)
    assert found.degrees_of_freedom == 4
    assert "first-order-few-points" in {each.code for each in found.caveats}


@pytest.mark.parametrize("rate", [1.0, 4.0])
def test_intervals_of_k_hold_the_truth_as_often_as_they_say(rate: float) -> None:
    held = []
    t = np.linspace(0, 1, 600)
    for seed, (phi, share) in enumerate([(0.0, 0.0), (0.6, 1.0), (0.85, 0.5)]):
        for other, dead in enumerate((0.0, 0.02)):
            y = 0.2 + 1 - np.exp(-rate * t) + noisy(200, 600, phi, share, 0.005, seed + 10 * other)
            held.append(first_orders(t, y, dead_time=dead).covered(rate).mean())
    assert 0.93 <= np.mean(held) <= 0.97, held
    assert min(held) > 0.90, held


def test_a_drifting_instrument_is_allowed_for_where_it_is_said() -> None:
    t = np.linspace(0, 1, 300)
    y = np.exp(-5 * t) + 0.1 * t + noisy(400, 300, 0.0, 0.0, 0.004, 11)
    assert 0.93 <= first_orders(t, y, drift=True).covered(5.0).mean() <= 0.975
    assert first_orders(t, y).covered(5.0).mean() < 0.1


def test_correlated_noise_makes_the_naive_error_too_small() -> None:
    t = np.linspace(0, 1, 2000)
    y = 1 - np.exp(-3 * t) + noisy(1, 2000, 0.95, 0.9, 0.01, 4)[0]
    found = first_order(t, y)
    assert found.standard_uncertainty > 2.5 * found.naive_uncertainty


def test_a_second_exponential_is_offered_and_not_chosen() -> None:
    t = np.linspace(0, 10, 300)
    clean = 1 - 0.6 * np.exp(-2 * t) - 0.4 * np.exp(-0.3 * t)
    found = first_order(t, clean + noisy(1, 300, 0.0, 0.0, 0.002, 5)[0])
    assert found.pattern.found
    assert found.pattern.offer is not None
    assert found.pattern.offer.fast == pytest.approx(2.0, abs=4 * found.pattern.offer.u_fast)
    assert found.pattern.offer.slow == pytest.approx(0.3, abs=4 * found.pattern.offer.u_slow)
    assert "first-order-pattern" in {each.code for each in found.caveats}
    assert 0.3 < found.value < 2.0  # still that of one exponential


def test_a_clean_single_exponential_shows_no_pattern() -> None:
    t = np.linspace(0, 4, 300)
    y = 1 - np.exp(-t) + noisy(15, 300, 0.0, 0.0, 0.003, 6)
    assert sum(first_order(t, each).pattern.found for each in y) == 0


def test_two_exponentials_need_no_starting_values() -> None:
    t = np.linspace(0, 10, 200)
    found = two_exponentials(t, 0.5 + 2 * np.exp(-3 * t) - 1 * np.exp(-0.5 * t))
    numbers = (found.fast, found.slow, found.fast_amplitude, found.slow_amplitude)
    assert numbers == pytest.approx((3.0, 0.5, 2.0, -1.0), rel=1e-6)


@settings(max_examples=25, deadline=None)
@given(st.floats(0.3, 8.0), st.floats(-5.0, 5.0), st.floats(0.1, 10.0), st.floats(1e-3, 1e3))
def test_an_exact_trace_gives_k_back_in_any_unit_of_time(
    rate: float, start: float, change: float, unit: float
) -> None:
    t = np.linspace(0, 1, 40)
    y = start + change * -np.expm1(-rate * t)
    found = first_orders(unit * t, y[None])
    assert found.rate_constants[0] * unit == pytest.approx(rate, rel=1e-7)


def test_known_levels_are_used() -> None:
    t = np.linspace(0, 0.8, 60)
    y = 2 * np.exp(-t) + 0.3 + noisy(1, 60, 0.0, 0.0, 0.003, 8)[0]
    free, known = first_order(t, y), first_order(t, y, final=0.3)
    assert known.standard_uncertainty < 0.5 * free.standard_uncertainty
    assert known.value == pytest.approx(1.0, abs=4 * known.standard_uncertainty)
    assert "first-order-far-end" in {each.code for each in free.caveats}


def test_what_cannot_be_fitted_is_refused() -> None:
    t = np.linspace(0, 1, 30)
    with pytest.raises(InputError, match="slower"):
        first_order(t, 1 + 2 * t)
    with pytest.raises(InputError, match="both levels"):
        first_order(t, t, 0.0, final=1.0)
    with pytest.raises(InputError, match="do not rise"):
        first_order([0, 1, 1, 2], [0, 1, 1, 2])
    with pytest.raises(InputError, match="unknowns"):
        first_order([0, 1, 2], [0, 1, 1.5])


def test_the_caller_s_arrays_stay_as_they_are() -> None:
    t, y = np.linspace(0, 3, 50), 1 - np.exp(-np.linspace(0, 3, 50))
    t2, y2 = t.copy(), y.copy()
    first_order(t, y)
    assert np.array_equal(t, t2)
    assert np.array_equal(y, y2)
