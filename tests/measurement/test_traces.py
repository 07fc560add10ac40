"""Traces: what is read from files, and what is refused."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np
import pytest

from knought.errors import InputError
from knought.measurement.runs_reading import read_runs
from knought.measurement.traces import Trace
from knought.measurement.traces_reading import read_trace_text, read_traces

if TYPE_CHECKING:
    from pathlib import Path


def test_a_wide_table_gives_a_trace_a_column() -> None:
    found = read_trace_text("t/s,run 1,run 2\n0,0.10,0.20\n1,0.12,\n2,0.14,0.26\n")
    assert [each.run for each in found] == ["run 1", "run 2"]
    assert found[0].time.tolist() == [0.0, 1.0, 2.0]
    assert found[1].time.tolist() == [0.0, 2.0]  # a blank cell was not recorded
    assert found[1].signal.tolist() == [0.20, 0.26]


@pytest.mark.parametrize(
    ("head", "cells", "seconds"),
    [
        ("t/s", ("0", "1.5"), 1.5),
        ("time (min)", ("0", "1.5"), 90.0),
        ("t/ms", ("0", "250"), 0.25),
        ("t/h", ("0", "0.5"), 1800.0),
        ("time", ("0:00", "1:30"), 90.0),
        ("t (mm:ss)", ("00:00", "02:05.5"), 125.5),
        ("t", ("0:00:00", "1:01:05"), 3665.0),
    ],
)
def test_times_are_read_in_any_unit(head: str, cells: tuple[str, str], seconds: float) -> None:
    found = read_trace_text(f"{head};A\n{cells[0]};0.1\n{cells[1]};0.2\n")
    assert found[0].time[-1] == pytest.approx(seconds, rel=1e-14)


def test_decimal_commas_are_read_between_semicolons() -> None:
    found = read_trace_text("t/s;A\n0;0,100\n1,5;0,125\n")
    assert found[0].time.tolist() == [0.0, 1.5]
    assert found[0].signal.tolist() == [0.1, 0.125]


@pytest.mark.parametrize(
    ("text", "words"),
    [
        ("t,A\n0,1\n1,2\n", "unit of time"),
        ("wavelength/nm,A\n0,1\n1,2\n", "not one of times"),
        ("t/s,A\n0,1\n1,x\n2,y\n", "2 problems"),
        ("t/s,A\n0,1\n0,2\n", "do not rise"),
        ("t/s,A\n", "holds no table"),
    ],
)
def test_what_is_no_trace_is_refused(text: str, words: str) -> None:
    with pytest.raises(InputError, match=words):
        read_trace_text(text)


def test_a_trace_keeps_its_own_copy() -> None:
    t, y = np.array([0.0, 1.0]), np.array([1.0, 2.0])
    trace = Trace("1", t, y)
    y[0] = 9.0
    assert trace.signal[0] == 1.0
    assert not trace.signal.flags.writeable


def test_the_table_of_runs_says_what_each_was(tmp_path: Path) -> None:
    file = tmp_path / "runs.csv"
    file.write_text(
        "run,t/°C,c(KI)/(mmol/L),salt,trace,slope/min^-1,u(slope)/min^-1\n"
        "a,25,20,KNO3,a.csv,0.6,0.006\nb,35,10,KNO3,b.csv,1.2,0.012\n",
        encoding="utf-8",
    )
    found = read_runs(file)
    assert found.run == ("a", "b")
    assert pytest.approx([298.15, 308.15]) == found.T
    assert found.concentrations["KI"] == pytest.approx([0.02, 0.01])
    assert found.words["trace"] == ("a.csv", "b.csv")
    assert found.slopes == pytest.approx([0.01, 0.02])
    assert found.I is None


@pytest.mark.parametrize("head", ["run,T/K,colour", "T/K,c(KI)/(mol/L)", "run,T/K,c(KI)"])
def test_a_table_of_runs_with_unknown_or_missing_columns_is_refused(
    head: str, tmp_path: Path
) -> None:
    file = tmp_path / "runs.csv"
    file.write_text(head + "\n1,298.15,1\n", encoding="utf-8")
    with pytest.raises(InputError):
        read_runs(file)


def test_a_file_that_is_not_there_is_said(tmp_path: Path) -> None:
    with pytest.raises(InputError, match=r"gone\.csv"):
        read_traces(tmp_path / "gone.csv")


def test_a_signal_beyond_any_instrument_is_refused() -> None:
    with pytest.raises(InputError, match="larger than any instrument"):
        Trace("1", np.array([0.0, 1.0]), np.array([1.0, 1e308]))
