"""The table of rate constants: one system of units, checked once, never changed."""

from __future__ import annotations

from dataclasses import FrozenInstanceError
from fractions import Fraction
from typing import Any

import numpy as np
import pytest
from hypothesis import given, settings

from knought.errors import InputError
from knought.measurement.table import RateTable, Source
from tests.strategies import rate_tables


def _table(**changes: Any) -> RateTable:
    given_: dict[str, Any] = {"k": np.array([1.0, 2.0]), "T": np.array([290.0, 300.0])}
    return RateTable(**(given_ | changes))


def test_the_least_table_is_k_and_t() -> None:
    table = _table()
    assert len(table) == 2
    assert (table.I, table.u_k, table.u_ln_k, table.salt) == (None, None, None, None)
    assert table.run == ("1", "2")
    assert table.used.all()
    assert table.rate_constant_unit == "s^-1"
    np.testing.assert_array_equal(table.ln_k, np.log([1.0, 2.0]))


def test_the_order_comes_from_the_unit_and_k_is_converted() -> None:
    table = RateTable.from_arrays(
        T=[290, 300], k=[60.0, 120.0], u_k=[6.0, 6.0], unit="dm3 mol^-1 min^-1", I=[0.1, 0.2]
    )
    assert table.order == Fraction(2)
    assert table.k.tolist() == [1.0, 2.0]
    assert table.u_k is not None
    assert table.u_k.tolist() == [0.1, 0.1]
    assert table.u_ln_k is not None
    assert table.u_ln_k.tolist() == [0.1, 0.05]
    assert table.rate_constant_unit == "L mol^-1 s^-1"


@pytest.mark.parametrize(
    ("unit", "factor"),
    [("L mol^-1 s^-1", 1.0), ("M-1 min-1", 60.0), ("mM^-1 s^-1", 1e-3), ("cm3 mol^-1 s^-1", 1e3)],
)
def test_the_same_data_in_other_units_are_the_same_table(unit: str, factor: float) -> None:
    table = RateTable.from_arrays(T=[290.0], k=[0.25 * factor], unit=unit)
    assert table.k[0] == pytest.approx(0.25, rel=3e-16)


def test_arrays_are_kept_read_only_and_the_callers_are_left_alone() -> None:
    k = np.array([1.0, 2.0])
    table = _table(k=k)
    k[0] = 9.0
    assert table.k[0] == 1.0
    for values in (table.k, table.T, table.used, table.ln_k):
        with pytest.raises(ValueError, match="read-only"):
            values[0] = 5
    with pytest.raises(FrozenInstanceError):
        table.order = Fraction(3)  # type: ignore[misc]
    with pytest.raises(TypeError):
        table.concentrations["x"] = k  # type: ignore[index]


@pytest.mark.parametrize(
    ("changes", "what"),
    [
        ({"k": np.array([])}, "no runs"),
        ({"k": np.array([[1.0, 2.0]])}, "no runs"),
        ({"T": np.array([290.0])}, "1 values for 2 runs"),
        ({"T": np.array([[290.0, 300.0]])}, "one-dimensional"),
        ({"run": ("a",)}, "1 values for 2 runs"),
        ({"k": np.array([1.0, -2.0])}, "run 2: k is -2"),
        ({"k": np.array([1.0, 0.0])}, "run 2: k is 0"),
        ({"k": np.array([1.0, np.nan])}, "run 2: k is nan"),
        ({"k": np.array([1.0, np.inf])}, "run 2: k is inf"),
        ({"T": np.array([0.0, 300.0])}, "run 1: T is 0"),
        ({"I": np.array([0.1, -0.1])}, "run 2: I is -0.1"),
        ({"u_k": np.array([0.1, 0.0])}, "run 2: u_k is 0.*leave the whole column out"),
        ({"u_k": np.array([0.1, np.nan])}, "run 2: u_k is nan"),
        ({"u_T": np.array([0.1, -1.0])}, "run 2: u_T is -1"),
        ({"determinations": np.array([0.0, 1.0])}, "run 1: determinations is 0"),
        ({"used": np.array([True, False])}, "run 2 is left out without a reason"),
        ({"concentrations": {"NaCl": np.array([0.1])}}, "1 values for 2 runs"),
        ({"concentrations": {"NaCl": np.array([0.1, -0.1])}}, r"c\(NaCl\) is -0.1"),
        ({"note": ("a\x00", "")}, "control characters"),
        ({"run": ("\ud800", "b")}, "control characters"),
    ],
)
def test_what_cannot_be_is_refused_by_run_and_column(changes: dict[str, Any], what: str) -> None:
    with pytest.raises(InputError, match=what) as refusal:
        _table(**changes)
    assert all(problem.remedy for problem in refusal.value.problems)
    str(refusal.value).encode("utf-8")


def test_every_problem_is_told_at_once() -> None:
    with pytest.raises(InputError) as refusal:
        _table(k=np.array([-1.0, 0.0]), T=np.array([0.0, 300.0]), I=np.array([-1.0, 0.0]))
    assert len(refusal.value.problems) == 4


def test_used_runs_alone_keep_every_column() -> None:
    table = _table(
        I=np.array([0.1, 0.2]), u_k=np.array([0.1, 0.1]), salt=("NaCl", "KCl"), note=("a", "b"),
        used=np.array([False, True]), reason=("spilled", ""), run=("x", "y"),
        concentrations={"NaCl": np.array([0.1, 0.2])}, source=Source("a.csv", "0" * 64),
    )  # fmt: skip
    used = table.used_only()
    assert (len(used), used.run, used.salt, used.note) == (1, ("y",), ("KCl",), ("b",))
    assert used.I is not None
    assert used.I.tolist() == [0.2]
    assert used.concentrations["NaCl"].tolist() == [0.2]
    assert used.source == table.source
    assert used.used_only() is used


def test_labels_are_stripped_and_runs_without_one_are_numbered() -> None:
    table = _table(run=(" a ", ""), salt=("", " "), batch=("m", ""))
    assert (table.run, table.salt, table.batch) == (("a", "2"), None, ("m", ""))


def test_the_frame_has_section_headers() -> None:
    table = RateTable.from_arrays(
        T=[290.0], k=[1.0], I=[0.1], u_k=[0.1], u_T=[0.1], u_I=[0.01], determinations=[3],
        unit="M^-1 s^-1", salt=["NaCl"], batch=["a"], run=["7"],
    )  # fmt: skip
    frame = table.to_frame()
    assert list(frame.columns) == [
        "run", "T/K", "I/(mol/L)", "k/(L mol^-1 s^-1)", "u(k)/(L mol^-1 s^-1)", "u(T)/K",
        "u(I)/(mol/L)", "n", "salt", "batch", "use", "reason", "note",
    ]  # fmt: skip
    assert frame.loc[0, "k/(L mol^-1 s^-1)"] == 1.0
    assert frame.loc[0, "use"] == "yes"
    frame.loc[0, "T/K"] = 0.0
    assert table.T[0] == 290.0


@settings(max_examples=25, deadline=None)
@given(rate_tables())
def test_a_table_is_the_same_as_itself_and_as_no_changed_one(table: RateTable) -> None:
    assert table.same_runs(table)
    other = RateTable(k=table.k * 2, T=table.T, order=table.order)
    assert not table.same_runs(other)
    assert not other.same_runs(table)
