"""The runs in working order, the form to fill in, and the cautions."""

from __future__ import annotations

from fractions import Fraction
from itertools import groupby
from typing import TYPE_CHECKING

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

import knought as kn
from knought.discussion.plan_cautions import cautions
from knought.discussion.plan_schedule import form_to_fill_in, working_order
from knought.discussion.reach import Reach

if TYPE_CHECKING:
    from pathlib import Path

REACH = Reach.of([288.15, 308.15, 328.15], [0.01, 0.1], salts={"NaCl": 0.1, "KCl": 0.1})
RUNS = np.array([2, 1, 0, 3, 1, 2])


@given(seed=st.integers(0, 10_000))
@settings(max_examples=20, deadline=None)
def test_runs_of_one_temperature_stand_together_and_none_is_lost(seed: int) -> None:
    planned = working_order(REACH, RUNS, seed)
    temperatures = [run.T for run in planned]
    assert len(list(groupby(temperatures))) == len(set(temperatures))
    which = REACH.nearest(temperatures, [run.I or 0.0 for run in planned])
    assert np.bincount(which, minlength=6).tolist() == RUNS.tolist()


def test_the_order_is_random_and_comes_from_the_seed() -> None:
    orders = {working_order(REACH, RUNS, seed) for seed in range(8)}
    assert len(orders) > 4
    assert working_order(REACH, RUNS, 3) == working_order(REACH, RUNS, 3)


def test_replicates_take_the_salts_in_turn() -> None:
    planned = working_order(REACH, RUNS, 1)
    salts = [run.salt for run in planned if run.I == 0.1]
    assert {salts.count("NaCl"), salts.count("KCl")} == {3}


def test_days_hold_no_more_than_there_is_time_for() -> None:
    planned = working_order(REACH, RUNS, 1, runs_a_day=4, change=1.0)
    for _, day in groupby(planned, key=lambda run: run.day):
        runs = list(day)
        changes = len({run.T for run in runs}) - 1
        assert len(runs) + changes <= 4
    with pytest.raises(kn.InputError, match="at least 1 run a day"):
        working_order(REACH, RUNS, 1, runs_a_day=0)


@pytest.mark.parametrize(
    ("order", "unit"), [(1, "s^-1"), (2, "L mol^-1 s^-1"), (Fraction(3, 2), "")]
)
def test_the_form_is_read_back_once_filled_in(
    order: Fraction | int, unit: str, tmp_path: Path
) -> None:
    planned = working_order(REACH, RUNS, 1)
    lines = form_to_fill_in(planned, order).splitlines()
    assert lines[0].startswith("run,T/K,I/(mol/L),k/(")
    filled = [lines[0]]
    for i, line in enumerate(lines[1:]):
        cells = line.split(",")
        assert cells[3:5] == ["", ""]
        cells[3:5] = [f"{1.5 + i}", "0.05"]
        filled.append(",".join(cells))
    path = tmp_path / "runs.csv"
    path.write_text("\n".join(filled), encoding="utf-8")
    rates = kn.read_rates(path)
    assert rates.order == Fraction(order)
    assert rates.T.tolist() == [run.T for run in planned]
    assert rates.I is not None
    assert rates.I.tolist() == [run.I for run in planned]
    assert rates.k.tolist() == [1.5 + i for i in range(9)]
    assert rates.salt == tuple(run.salt for run in planned)
    assert rates.batch == tuple(f"day {run.day}" for run in planned)
    assert unit in lines[0]


def test_a_plan_of_temperatures_only_has_no_column_of_ionic_strengths() -> None:
    planned = working_order(Reach.of([288.15, 308.15]), np.array([1, 2]), 1)
    assert form_to_fill_in(planned, 1).splitlines()[0] == "run,T/K,k/(s^-1),u(k)/(s^-1),batch,note"


HOT, COLD = np.array([288.15, 328.15]), np.array([288.15, 298.15])


def test_heating_what_is_volatile_unstable_or_an_oxidiser_carries_cautions() -> None:
    found = cautions(HOT, ("volatile", "unstable", "oxidiser"))
    assert [each.code for each in found] == ["heats-volatile", "heats-unstable", "heats-oxidiser"]
    assert all("55 °C" in each.message for each in found)
    assert cautions(COLD, ("volatile", "unstable", "oxidiser")) == ()
    assert cautions(HOT, ()) == ()


@pytest.mark.parametrize("name", ["S2O8^2- + I^-", "NaClO4", "KNO3", "2 I^- + H2O2"])
def test_oxidisers_are_recognised_by_their_formulas(name: str) -> None:
    assert [each.code for each in cautions(HOT, (), (name,))] == ["heats-oxidiser"]


@pytest.mark.parametrize("name", ["A^2- + B^-", "NaCl", "Na2SO4", "S2O3^2- + CH3Br", "KBr"])
def test_what_is_no_oxidiser_carries_no_caution(name: str) -> None:
    assert cautions(HOT, (), (name,)) == ()


def test_an_unknown_hazard_is_refused() -> None:
    with pytest.raises(kn.InputError, match="volatile, unstable, oxidiser"):
        cautions(HOT, ("sticky",))
