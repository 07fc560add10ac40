"""Monte Carlo against JCGM 101's own examples, the mixture, and linear propagation."""

from __future__ import annotations

from dataclasses import replace
from fractions import Fraction

import numpy as np
import pytest

import knought as kn
from knought.arrays import FloatArray, frozen
from knought.chemistry.constants import GAS_CONSTANT
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


@pytest.mark.parametrize(
    "kind",
    ["named", "named, scatter", "open", "open, scatter", "named, refitted", "open, refitted"],
)
def test_monte_carlo_agrees_with_the_closed_form(kind: str) -> None:
    """Value, u and both interval ends of every parameter within Monte Carlo error.

    Refitted: with errors of T and I of each run and of all, small enough to act in proportion.
    """
    seen = study(*SHARED) if "refitted" in kind else study(*SHARED[:1])
    if "refitted" in kind:
        seen = replace(seen, u_T=frozen(np.full(16, 0.1)), u_I=frozen(0.01 * seen.ionic_strength))
    choice = "scatter" if "scatter" in kind else "given"
    if "named" in kind:
        found: object = fit_surface(seen, salt_law="guntelberg", scatter=choice)  # type: ignore[arg-type]
    else:
        found = fit_open(seen, scatter=choice)  # type: ignore[arg-type]
    draws = DRAWS // 5 if "refitted" in kind else DRAWS
    result = monte_carlo(found, draws, seed=3)  # type: ignore[arg-type]
    assert result.refitted == ("refitted" in kind)
    for name, drawn in result.parameters.items():
        s = drawn.linear_uncertainty
        error = 5 * s / np.sqrt(draws)
        tolerance = 0.05 * s if "scatter" in kind else 3 * error + 0.01 * s
        if result.refitted:
            tolerance += 0.04 * s  # the second order of a gain of 1 % and a scale of 2 %
        for one, other in zip(drawn.interval(), drawn.linear_interval, strict=True):
            assert abs(one - other) < tolerance, name


def offset_line(runs: int, u: float, offset: float) -> Observations:
    """A line without error but for one reading of temperature that is off for all runs alike."""
    T = np.linspace(288.15, 328.15, runs)
    return Observations(
        frozen(-80_000 / GAS_CONSTANT * (1 / T - 1 / 298.15)),
        frozen(np.full(runs, u)),
        frozen(T),
        None,
        None,
        None,
        u_given=True,
        order=Fraction(1),
        shared=(
            SharedError("probe offset", "temperature-offset", offset, distribution="rectangular"),
        ),
    )


def test_a_large_error_of_temperature_acts_through_the_law_itself() -> None:
    """A rectangular offset of ±10.4 K: the ends are the two-point Arrhenius line through the runs
    at the ends of the offset, worked out here; the linear interval is elsewhere.
    """
    seen = offset_line(2, 1e-4, 6.0)
    found = fit_surface(seen, temperature_law="arrhenius", scatter="given")
    drawn = monte_carlo(found, 40_000, seed=2)

    def line(offset: float) -> tuple[float, float]:
        (a, b), (y, z) = seen.T + offset, seen.ln_k
        energy = GAS_CONSTANT * (z - y) / (1 / a - 1 / b)
        return float(energy), float(np.exp(y - energy / GAS_CONSTANT * (1 / 298.15 - 1 / a)))

    (low_E, high_k), (high_E, low_k) = (line(0.95 * sign * 6 * np.sqrt(3)) for sign in (-1, 1))
    energy, k = (drawn.parameters[name] for name in ("activation_energy", "rate_constant"))
    assert energy.interval() == pytest.approx((low_E, high_E), rel=2e-3)
    assert k.interval() == pytest.approx((low_k, high_k), rel=0.01)
    assert not k.validates_linear()
    assert drawn.refitted
    assert "refitted at temperatures" in drawn.how


def test_scatter_beside_an_error_of_temperature_is_drawn_for_real() -> None:
    """u(k) from the scatter of nine runs, with one rectangular error of T besides."""
    straight = offset_line(9, 1.0, 0.2)
    noise = 0.02 * np.random.default_rng(4).standard_normal(9)
    bent = replace(straight, u_given=False, ln_k=frozen(straight.ln_k + noise))
    found = fit_surface(bent, temperature_law="arrhenius")
    drawn = monte_carlo(found, 20_000, seed=2)
    assert "6.4.9" in drawn.how
    for each in drawn.parameters.values():
        assert each.mean == pytest.approx(
            np.mean(each.linear_interval), abs=0.05 * each.linear_uncertainty
        )
        assert each.standard_uncertainty == pytest.approx(
            np.sqrt(7 / 5) * each.linear_uncertainty, rel=0.2
        )


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
