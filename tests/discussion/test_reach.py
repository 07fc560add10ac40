"""What can be set together, and how people write it."""

from __future__ import annotations

import numpy as np
import pytest

from knought.discussion.reach import Forbidden, Reach
from knought.discussion.reach_text import read_levels
from knought.errors import InputError


def test_temperatures_and_ionic_strengths_are_crossed() -> None:
    reach = Reach.of([308.15, 288.15, 288.15], [0.1, 0.01])
    assert reach.T.tolist() == [288.15, 288.15, 308.15, 308.15]
    assert reach.ionic_strength.tolist() == [0.01, 0.1, 0.01, 0.1]
    assert reach.temperature_level.tolist() == [0, 0, 1, 1]
    assert reach.nearest([300.0], [0.08]).tolist() == [3]
    with pytest.raises(ValueError, match="read-only"):
        reach.T[0] = 1.0


def test_what_is_forbidden_and_what_no_salt_reaches_is_left_out() -> None:
    hot_and_salty = Forbidden((300.0, np.inf), (0.05, np.inf))
    reach = Reach.of(
        [288.15, 308.15],
        [0.01, 0.1, 0.5],
        salts={"NaCl": 0.2},
        forbidden=[hot_and_salty, (288.15, 0.01)],
    )
    assert list(zip(reach.T, reach.ionic_strength, strict=True)) == [(288.15, 0.1), (308.15, 0.01)]


def test_salts_are_those_that_reach_the_ionic_strength() -> None:
    reach = Reach.of([298.15], [0.01, 0.1, 0.3], salts={"NaCl": 0.3, "Na2SO4": 0.1})
    assert reach.salts_for(0.1) == ("NaCl", "Na2SO4")
    assert reach.salts_for(0.3) == ("NaCl",)


@pytest.mark.parametrize(
    ("temperatures", "strengths", "message"),
    [
        ([], None, "no temperatures"),
        ([-3.0], None, "above zero"),
        ([298.15, float("nan")], None, "nan K"),
        ([298.15], [-0.1], "at least zero"),
        (np.linspace(280, 300, 200), np.linspace(0, 1, 200), "coarser steps"),
    ],
)
def test_what_cannot_be_set_is_refused(
    temperatures: list[float], strengths: list[float] | None, message: str
) -> None:
    with pytest.raises(InputError, match=message):
        Reach.of(temperatures, strengths)


def test_nothing_left_and_a_salt_without_limit_are_refused() -> None:
    with pytest.raises(InputError, match="Forbid less"):
        Reach.of([298.15], [0.1], forbidden=[(298.15, 0.1)])
    with pytest.raises(InputError, match="NaCl"):
        Reach.of([298.15], [0.1], salts={"NaCl": 0.0})


@pytest.mark.parametrize(
    ("text", "unit", "expected"),
    [
        ("15, 25, 35 °C", "K", (288.15, 298.15, 308.15)),
        ("15 to 55 °C by 10", "K", (288.15, 298.15, 308.15, 318.15, 328.15)),
        ("15 to 25 by 5 °C", "K", (288.15, 293.15, 298.15)),
        ("298.15 K", "K", (298.15,)),
        ("10, 100 mmol/L", "mol L^-1", (0.01, 0.1)),
        ("10 mmol/L, 0.1 mol/L", "mol L^-1", (0.01, 0.1)),
    ],
)
def test_levels_are_read_as_people_write_them(
    text: str, unit: str, expected: tuple[float, ...]
) -> None:
    assert read_levels(text, unit) == pytest.approx(expected, abs=1e-9)


@pytest.mark.parametrize(
    "text", ["", "15, 25", "warm", "15 to 5 °C by 1", "1 to 2 °C by 0", "1,, °C"]
)
def test_levels_without_a_unit_or_a_sense_are_refused(text: str) -> None:
    with pytest.raises(InputError):
        read_levels(text, "K")
