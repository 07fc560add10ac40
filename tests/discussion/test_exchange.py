"""Exact designs: published-size uncertainties, floors, and never worse than chance."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from knought.discussion.criteria import criterion_of
from knought.discussion.design_floor import Floor, random_design
from knought.discussion.exchange import exchange, random_search
from knought.discussion.plan_aims import read_aim
from knought.discussion.plan_model import PlanModel, Repeatability, assumed_model
from knought.discussion.reach import Reach
from knought.errors import InputError
from knought.laws.open_law import Priors
from knought.numerics.seeds import generator


def model(
    *, salt_law: str = "none", temperature_law: str = "eyring", priors: Priors | None = None
) -> PlanModel:
    return assumed_model(
        Repeatability(0.03),
        activation_energy=50e3,
        charge_product=2.0,
        charges_known=False,
        temperature_law=temperature_law,
        salt_law=salt_law,
        reference_temperature=298.15,
        priors=priors or Priors(),
    )


CELSIUS = np.arange(15.0, 56.0, 5.0) + 273.15


def test_six_runs_for_the_energy_go_half_to_each_end_of_the_range() -> None:
    """0.48 kJ/mol by R s/√Σ(1/T - mean)², as for every straight line."""
    reach = Reach.of(CELSIUS)
    criterion = criterion_of(read_aim("activation_energy"), model(), reach)
    found = exchange(criterion, 6, Floor.none(reach), generator(1))
    assert found.runs.tolist() == [3, *[0] * 7, 3]
    x = 1 / np.repeat(reach.T, found.runs)
    by_hand = 8.31446261815324 * 0.03 / np.sqrt(np.sum((x - x.mean()) ** 2))
    assert np.sqrt(found.value) == pytest.approx(by_hand, rel=1e-6)
    assert np.sqrt(found.value) / 1e3 == pytest.approx(0.48, abs=0.005)


@pytest.mark.parametrize(
    ("aim", "salt_law", "temperature_law", "runs"),
    [
        # So few designs that every one is tried:
        ("activation_energy", "guntelberg", "eyring", 5),
        ("charge products 2 and 1", "open", "eyring", 4),
        # Exchanged:
        ("charge_product", "guntelberg", "eyring", 7),
        ("all", "sit", "eyring", 7),
        ("activation_heat_capacity", "none", "eyring-cp", 7),
        ("laws guntelberg and davies", "guntelberg", "eyring", 7),
    ],
)
def test_exchange_is_never_worse_than_ten_times_as_many_random_designs(
    aim: str, salt_law: str, temperature_law: str, runs: int
) -> None:
    # å alone is left open here: 50 000 random designs in all 221 cells would take minutes.
    narrow = Priors(linear_coefficient=(0.1, 0.0))
    chosen = model(salt_law=salt_law, temperature_law=temperature_law, priors=narrow)
    few = runs < 6
    strengths = [0.01, 0.05, 0.1] if few else [0.005, 0.01, 0.02, 0.05, 0.1]
    reach = Reach.of(CELSIUS[::4] if few else CELSIUS[::2], strengths)
    criterion = criterion_of(read_aim(aim), chosen, reach)
    found = exchange(criterion, runs, Floor.none(reach), generator(3), starts=2)
    evaluations = 10 * found.evaluations
    chance = random_search(criterion, runs, Floor.none(reach), generator(4), evaluations)
    assert found.value <= chance.value * (1 + 1e-12)


def test_it_is_not_worse_either_where_a_floor_is_kept() -> None:
    reach = Reach.of(CELSIUS[::2])
    criterion = criterion_of(read_aim("activation_energy"), model(), reach)
    floor = Floor(reach.temperature_level, reach.ionic_strength_level, temperatures=3)
    found = exchange(criterion, 6, floor, generator(3), starts=1, complete=0)
    chance = random_search(criterion, 6, floor, generator(4), 10 * found.evaluations)
    assert found.value <= chance.value * (1 + 1e-12)
    whole = exchange(criterion, 6, floor, generator(3))
    assert found.value == pytest.approx(whole.value, rel=1e-6)


@given(
    runs=st.integers(4, 9),
    temperatures=st.integers(1, 4),
    strengths=st.integers(1, 3),
    seed=st.integers(0, 50),
)
@settings(max_examples=6, deadline=None)
def test_every_design_keeps_its_floor(
    runs: int, temperatures: int, strengths: int, seed: int
) -> None:
    reach = Reach.of([288.15, 298.15, 308.15, 318.15], [0.01, 0.05, 0.1])
    floor = Floor(reach.temperature_level, reach.ionic_strength_level, temperatures, strengths)
    criterion = criterion_of(read_aim("charge_product"), model(salt_law="guntelberg"), reach)
    found = exchange(criterion, runs, floor, generator(seed), starts=1)
    used = found.runs > 0
    assert found.runs.sum() == runs
    assert len(set(reach.T[used])) >= temperatures
    assert len(set(reach.ionic_strength[used])) >= strengths


def test_runs_already_made_count_towards_the_floor() -> None:
    reach = Reach.of([288.15, 308.15, 328.15])
    floor = Floor(
        reach.temperature_level,
        reach.ionic_strength_level,
        temperatures=3,
        made_temperature=frozenset({0, -1}),
    )
    assert floor.allowed(np.zeros(3, dtype=np.intp)).tolist() == [False, True, True]


def test_a_floor_that_cannot_be_kept_is_refused() -> None:
    reach = Reach.of([288.15, 308.15, 328.15])
    floor = Floor(reach.temperature_level, reach.ionic_strength_level, temperatures=4)
    with pytest.raises(InputError, match="cannot have 4 temperatures"):
        random_design(3, floor, generator(1))


def test_costly_changes_of_temperature_make_fewer_temperatures() -> None:
    reach = Reach.of(CELSIUS)
    curved = model(temperature_law="eyring-cp")
    criterion = criterion_of(read_aim("all"), curved, reach)
    free = exchange(criterion, 9, Floor.none(reach), generator(5))
    costly = exchange(criterion, 9, Floor.none(reach, change=5.0), generator(5))
    assert np.count_nonzero(costly.runs) <= np.count_nonzero(free.runs)
    assert Floor.none(reach, change=5.0).time_of(costly.runs) == pytest.approx((9 + 10) / 9)
