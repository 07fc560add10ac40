"""Partial orders and lines of rates."""

from __future__ import annotations

import numpy as np
import pytest

from knought.errors import InputError
from knought.measurement.orders import partial_orders, rate_line
from knought.numerics.seeds import generator

_A = np.array([1, 2, 4, 8, 2, 2, 2, 4]) * 1e-3
_B = np.array([1, 1, 1, 1, 2, 4, 8, 4]) * 1e-2


def test_exact_rates_give_exact_orders_and_k() -> None:
    found = partial_orders(0.5 * _A * _B**0.5, {"A": _A, "B": _B}, 0.01 * _A * _B**0.5)
    assert [each.value for each in found.orders] == pytest.approx([1.0, 0.5], abs=1e-10)
    assert np.exp(found.ln_k) == pytest.approx(0.5, rel=1e-9)
    assert found.orders[0].is_integer
    assert "order-not-integer" in {each.code for each in found.caveats}  # that of B


def test_orders_intervals_hold_the_truth_as_often_as_they_say() -> None:
    random = generator(20_250_505, 1)
    held = []
    for _ in range(400):
        rates = 0.5 * _A * _B**2 * np.exp(0.05 * random.standard_normal(len(_A)))
        low, high = partial_orders(rates, {"A": _A, "B": _B}).orders[1].interval
        held.append(low <= 2 <= high)
    assert 0.93 <= np.mean(held) <= 0.97


def test_rates_from_a_narrow_range_leave_the_order_undecided() -> None:
    random = generator(20_250_505, 2)
    A = np.linspace(1.0, 1.2, 8) * 1e-3
    rates = A * np.exp(0.1 * random.standard_normal(8))
    found = partial_orders(rates, {"A": A})
    assert not found.orders[0].is_integer
    assert "order-undecided" in {each.code for each in found.caveats}


def test_concentrations_that_were_varied_together_are_refused() -> None:
    with pytest.raises(InputError, match="cannot tell A, B apart"):
        partial_orders(_A, {"A": _A, "B": 3 * _A})


def test_stated_uncertainties_are_taken_and_small_ones_scaled() -> None:
    random = generator(20_250_505, 3)
    rates = _A * np.exp(0.05 * random.standard_normal(len(_A)))
    honest = partial_orders(rates, {"A": _A}, 0.05 * rates)
    boasting = partial_orders(rates, {"A": _A}, 0.001 * rates)
    assert boasting.orders[0].standard_uncertainty > 0.3 * honest.orders[0].standard_uncertainty


def test_a_line_through_the_origin_gives_k_and_no_caveat() -> None:
    random = generator(20_250_505, 4)
    x = np.linspace(0.01, 0.1, 8)
    y = 2.0 * x + 1e-3 * random.standard_normal(8)
    line = rate_line(y, x, np.full(8, 1e-3))
    assert line.caveats == ()
    k, u = line.rate_constant
    assert k == line.through_origin
    assert abs(k - 2.0) < 4 * u


def test_a_reverse_path_shows_as_an_intercept_and_k_stays_right() -> None:
    random = generator(20_250_505, 5)
    x = np.linspace(0.01, 0.1, 8)
    y = 0.05 + 2.0 * x + 1e-3 * random.standard_normal(8)
    line = rate_line(y, x, np.full(8, 1e-3))
    assert [each.code for each in line.caveats] == ["line-intercept"]
    assert line.intercept == pytest.approx(0.05, abs=4 * line.u_intercept)
    k, u = line.rate_constant
    assert abs(k - 2.0) < 4 * u


def test_a_line_of_exact_rates_is_exact() -> None:
    line = rate_line([0.3, 0.5, 0.7], [1.0, 2.0, 3.0])
    assert (line.slope, line.intercept) == pytest.approx((0.2, 0.1), rel=1e-12)


def test_what_has_no_logarithm_is_refused() -> None:
    with pytest.raises(InputError, match="not above zero"):
        partial_orders([1.0, -1.0, 2.0, 3.0], {"A": [1, 2, 3, 4]})
    with pytest.raises(InputError, match="for a line"):
        rate_line([1.0, 2.0], [1.0, 2.0])
