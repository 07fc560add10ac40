"""Monte Carlo against JCGM 101's own examples, the mixture, and linear propagation."""

from __future__ import annotations

from dataclasses import replace
from fractions import Fraction

import numpy as np
import pytest

import knought as kn
from knought.arrays import FloatArray, frozen
from knought.fitting.monte_carlo import MonteCarlo, monte_carlo
from knought.fitting.observations import Observations
from knought.fitting.open_fit import fit_open
from knought.fitting.surface_fit import fit_surface
from knought.measurement.shared_errors import SharedError
from tests.fitting.test_shared_errors import SHARED, study

DRAWS = 200_000


def additive(*errors: SharedError) -> MonteCarlo:
    """y = x1 + x2 + x3 + x4 of JCGM 101, 9.2: ln k of one run whose errors add up."""
    seen = Observations(
        frozen(np.zeros(1)),
        frozen(np.full(1, 1e-9)),
        frozen(np.full(1, 298.15)),
        None,
        None,
        None,
        u_given=True,
        order=Fraction(1),
        shared=errors,
    )
    found = fit_surface(seen, temperature_law="isothermal")
    return monte_carlo(found, 400_000, seed=1)


def scaled(error: SharedError, size: float) -> SharedError:
    return replace(error, u=error.u * size)


def ln_k(result: MonteCarlo) -> FloatArray:
    return np.log(result.parameters["rate_constant"].values)


def four(distribution: str, sizes: tuple[float, ...]) -> tuple[SharedError, ...]:
    # Relative errors stay below one: the example is scaled by 1/100.
    return tuple(
        SharedError(f"x{i}", "factor", 0.01 * size, distribution=distribution)  # type: ignore[arg-type]
        for i, size in enumerate(sizes)
    )


@pytest.mark.parametrize(
    ("distribution", "sizes", "u", "end"),
    [
        # JCGM 101:2008, Table 2: u = 2.0, interval ±3.92.
        ("normal", (1, 1, 1, 1), 2.0, 3.92),
        # Table 3: u = 2.0, interval ±3.88.
        ("rectangular", (1, 1, 1, 1), 2.0, 3.88),
        # Table 4 (from memory): u = 10.1, interval ±17.0, where a normal would give ±19.9.
        ("rectangular", (1, 1, 1, 10), 10.1, 17.0),
    ],
)
def test_the_additive_model_of_jcgm_101(
    distribution: str, sizes: tuple[float, ...], u: float, end: float
) -> None:
    values = 100 * ln_k(additive(*four(distribution, sizes)))
    assert values.std() == pytest.approx(u, abs=0.06)
    low, high = np.quantile(values, [0.025, 0.975])
    assert low == pytest.approx(-end, abs=0.06)
    assert high == pytest.approx(end, abs=0.06)


def test_one_large_rectangular_error_does_not_validate_the_linear_interval() -> None:
    """JCGM 101, 8: Monte Carlo ±17.0 against ±19.9 of the normal."""
    result = additive(*four("rectangular", (1, 1, 1, 10))).parameters["rate_constant"]
    assert not result.validates_linear(digits=2)
    assert result.interval()[1] < result.linear_interval[1]
    gentle = additive(*four("normal", (1, 1, 1, 1))).parameters["rate_constant"]
    assert gentle.validates_linear()


@pytest.mark.parametrize("kind", ["named", "named, scatter", "open", "open, scatter"])
def test_monte_carlo_agrees_with_the_closed_form(kind: str) -> None:
    """Value, u and both interval ends of every parameter within Monte Carlo error."""
    seen = study(*SHARED)
    choice = "scatter" if "scatter" in kind else "given"
    if "named" in kind:
        found: object = fit_surface(seen, salt_law="guntelberg", scatter=choice)  # type: ignore[arg-type]
    else:
        found = fit_open(seen, scatter=choice)  # type: ignore[arg-type]
    result = monte_carlo(found, DRAWS, seed=3)  # type: ignore[arg-type]
    for name, drawn in result.parameters.items():
        s = drawn.linear_uncertainty
        error = 5 * s / np.sqrt(DRAWS)
        tolerance = 0.05 * s if "scatter" in kind else 3 * error + 0.01 * s
        for one, other in zip(drawn.interval(), drawn.linear_interval, strict=True):
            assert abs(one - other) < tolerance, name


def test_the_same_seed_gives_the_same_draws_and_another_does_not() -> None:
    found = fit_open(study(), scatter="given")
    one, same, other = (monte_carlo(found, 25_000, seed=seed) for seed in (5, 5, 6))
    a, b, c = (each.parameters["charge_product"].values for each in (one, same, other))
    assert np.array_equal(a, b)
    assert not np.array_equal(a, c)
    # Blocks are seeded one by one: more draws begin with the same ones.
    more = monte_carlo(found, 45_000, seed=5).parameters["charge_product"].values
    assert np.array_equal(more[:20_000], a[:20_000])


def test_adaptive_drawing_stops_when_two_digits_are_stable() -> None:
    seen: list[int] = []
    result = monte_carlo(
        fit_surface(study(), salt_law="guntelberg", scatter="given"), progress=seen.append
    )
    assert result.converged
    assert result.draws == seen[-1] >= 100_000
    for drawn in result.parameters.values():
        assert drawn.standard_uncertainty == pytest.approx(drawn.linear_uncertainty, rel=0.01)


def test_the_shortest_interval_is_no_longer_than_the_symmetric_one() -> None:
    result = monte_carlo(fit_open(study(), scatter="given"), 50_000)
    for drawn in result.parameters.values():
        low, high = drawn.interval()
        a, b = drawn.shortest_interval()
        assert b - a <= (high - low) * 1.0001
        inside = np.mean((drawn.values >= a) & (drawn.values <= b))
        assert inside == pytest.approx(0.95, abs=0.001)


def test_one_draw_says_nothing() -> None:
    with pytest.raises(kn.InputError, match="10 000"):
        monte_carlo(fit_surface(study(), salt_law="guntelberg"), 1)
