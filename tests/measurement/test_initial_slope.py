"""Initial slopes: coverage under noise, correlation and dead time, and what is said beside."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from knought.errors import InputError
from knought.measurement.initial_slope import initial_slope
from knought.measurement.initial_slope_rule import initial_slopes
from tests.measurement.simulated_traces import noisy


@pytest.mark.parametrize("reach", [0.2, 1.0])
def test_intervals_of_the_slope_hold_the_truth_as_often_as_they_say(reach: float) -> None:
    held = []
    t = np.linspace(0, 1, 600)
    for seed, (phi, share) in enumerate([(0.0, 0.0), (0.6, 1.0), (0.85, 0.5)]):
        for other, dead in enumerate((0.0, 0.03)):
            y = -np.expm1(-reach * t) / reach + noisy(300, 600, phi, share, 0.01, seed + 10 * other)
            held.append(initial_slopes(t, y, dead_time=dead).covered(1.0).mean())
    assert 0.93 <= np.mean(held) <= 0.97, held
    assert min(held) > 0.90, held


def test_the_naive_error_of_a_wandering_trace_is_far_too_small() -> None:
    t = np.linspace(0, 1, 2000)
    y = 0.3 * t + noisy(1, 2000, 0.97, 0.9, 0.01, 9)[0]
    found = initial_slope(t, y)
    assert found.standard_uncertainty > 3 * found.naive_uncertainty
    assert abs(found.value - 0.3) < 4 * found.standard_uncertainty


def test_an_exponential_followed_to_its_end_is_cut_to_its_beginning() -> None:
    t = np.linspace(0, 10, 500)
    y = -np.expm1(-t) + noisy(1, 500, 0.0, 0.0, 0.002, 3)[0]
    found = initial_slope(t, y)
    assert found.window[1] < 5
    assert found.value == pytest.approx(1.0, abs=4 * found.standard_uncertainty)
    assert found.curvature < 0
    assert "slope-conversion" in {each.code for each in found.caveats}


def test_the_share_of_conversion_is_that_of_the_stated_change() -> None:
    t = np.linspace(0, 0.1, 200)
    y = -np.expm1(-t) + noisy(1, 200, 0.0, 0.0, 1e-4, 2)[0]
    found = initial_slope(t, y, total_change=1.0)
    assert found.conversion == pytest.approx(1 - np.exp(-found.window[1]), abs=0.002)
    assert not found.caveats


def test_points_before_the_dead_time_do_not_count() -> None:
    t = np.linspace(0, 1, 200)
    y = 0.5 * t + noisy(1, 200, 0.0, 0.0, 1e-3, 1)[0]
    spoilt = np.where(t < 0.05, 7.0, y)
    one, other = initial_slope(t, y, dead_time=0.05), initial_slope(t, spoilt, dead_time=0.05)
    assert one.value == other.value
    assert one.window[0] >= 0.05


def test_a_blank_is_taken_off_with_its_uncertainty() -> None:
    t = np.linspace(0, 1, 200)
    y = 0.5 * t + noisy(1, 200, 0.0, 0.0, 1e-3, 1)[0]
    plain, less = initial_slope(t, y), initial_slope(t, y, blank=(0.1, 0.05))
    assert less.value == pytest.approx(plain.value - 0.1, rel=1e-12)
    assert less.standard_uncertainty == pytest.approx(
        np.hypot(plain.standard_uncertainty, 0.05), rel=1e-9
    )


def test_window_and_order_given_are_used() -> None:
    t = np.linspace(0, 1, 100)
    y = t - 0.2 * t**2 + noisy(1, 100, 0.0, 0.0, 1e-3, 1)[0]
    found = initial_slope(t, y, window=0.5, order=2)
    assert found.order == 2
    assert found.window[1] <= 0.5


def test_few_points_are_taken_as_independent_and_it_is_said() -> None:
    found = initial_slope([0, 1, 2, 3, 4, 5], [0.0, 1.01, 1.98, 3.02, 3.99, 5.01])
    assert found.value == pytest.approx(1.0, abs=0.05)
    assert "slope-few-points" in {each.code for each in found.caveats}


@settings(max_examples=8, deadline=None)
@given(st.floats(1e-3, 1e3), st.floats(1e-3, 1e3), st.floats(-10.0, 10.0))
def test_slopes_follow_units_and_do_not_see_the_level(
    unit: float, gain: float, level: float
) -> None:
    t = np.linspace(0, 1, 80)
    y = t - 0.3 * t**2 + noisy(1, 80, 0.3, 0.5, 0.01, 1)[0]
    one, other = initial_slope(t, y), initial_slope(unit * t, gain * y + level * gain)
    assert other.value * unit / gain == pytest.approx(one.value, rel=1e-6)
    assert other.standard_uncertainty * unit / gain == pytest.approx(
        one.standard_uncertainty, rel=1e-5
    )


def test_a_batch_equals_its_members() -> None:
    t = np.linspace(0, 1, 120)
    y = t - 0.4 * t**2 + noisy(5, 120, 0.5, 0.5, 0.01, 1)
    batch = initial_slopes(t, y)
    alone = [initial_slope(t, each) for each in y]
    assert batch.value == pytest.approx([each.value for each in alone], rel=1e-9)
    assert batch.order.tolist() == [each.order for each in alone]


def test_too_few_points_are_refused() -> None:
    with pytest.raises(InputError, match="points are left"):
        initial_slope([0, 1, 2], [0, 1, 2])
    with pytest.raises(InputError, match="not a number"):
        initial_slope([0, 1, 2, 3, 4], [0, 1, np.nan, 3, 4])
