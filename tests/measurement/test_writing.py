"""The clean table: read back bit for bit, run by no spreadsheet, described by a schema."""

from __future__ import annotations

import csv
import io
import json
from typing import TYPE_CHECKING, Any

import numpy as np
import pytest
from hypothesis import given, settings

from knought.errors import InputError
from knought.measurement.labels import guarded, unguarded
from knought.measurement.reading import read_rates, read_text
from knought.measurement.table import RateTable
from knought.measurement.writing import clean_csv, table_schema, write_rates
from tests.strategies import labels, rate_tables

if TYPE_CHECKING:
    from pathlib import Path


@settings(max_examples=30, deadline=None)
@given(rate_tables())
def test_a_table_is_read_back_bit_for_bit(table: RateTable) -> None:
    text = clean_csv(table)
    back = read_text(text)
    assert back.same_runs(table)
    assert clean_csv(back) == text


@settings(max_examples=10, deadline=None)
@given(rate_tables())
def test_no_cell_begins_as_a_formula(table: RateTable) -> None:
    for row in csv.reader(io.StringIO(clean_csv(table), newline="")):
        for cell in row:
            assert not cell.startswith(("=", "+", "-", "@", "\t", "\r"))


@settings(max_examples=40, deadline=None)
@given(labels())
def test_an_apostrophe_guards_a_label_and_is_taken_away_again(label: str) -> None:
    assert unguarded(guarded(label)) == label
    assert not guarded(label).startswith(("=", "+", "-", "@"))


def test_labels_that_are_harmless_stay_as_they_are() -> None:
    assert [guarded(label) for label in ("a", "'tis", "", "1", "''")] == [
        "a",
        "'tis",
        "",
        "1",
        "''",
    ]
    assert guarded("=cmd()") == "'=cmd()"
    assert guarded("'=cmd()") == "''=cmd()"


def _table() -> RateTable:
    return RateTable(
        k=np.array([0.5, 0.25]),
        T=np.array([298.15, 308.15]),
        I=np.array([0.1, 0.2]),
        determinations=np.array([3.0, 2.0]),
        concentrations={"NaClO4": np.array([0.1, 0.2])},
        note=("first", ""),
    )


def test_the_clean_form_is_this() -> None:
    assert clean_csv(_table()) == (
        "run,T/K,I/(mol/L),k/s^-1,n,c(NaClO4)/(mol/L),use,reason,note\n"
        "1,298.15,0.1,0.5,3,0.1,yes,,first\n"
        "2,308.15,0.2,0.25,2,0.2,yes,,\n"
    )


def test_the_schema_beside_it_is_one_that_frictionless_takes(tmp_path: Path) -> None:
    frictionless: Any = pytest.importorskip("frictionless")
    path, beside = write_rates(_table(), tmp_path / "rates.csv")
    assert (path.name, beside.name) == ("rates.csv", "rates.schema.json")
    schema = json.loads(beside.read_text(encoding="utf-8"))
    assert schema == table_schema(_table())
    assert [each["name"] for each in schema["fields"]][:3] == ["run", "T/K", "I/(mol/L)"]
    assert schema["fields"][1]["description"] == "temperature, in K"
    assert schema["fields"][3]["description"] == "rate constant of order 1, in s^-1"
    report = frictionless.validate(
        path.name, schema=frictionless.Schema.from_descriptor(schema), basepath=str(tmp_path)
    )
    assert report.valid, report.flatten(["rowNumber", "fieldName", "type"])
    path.write_text(path.read_text().replace("0.25", "soon"), encoding="utf-8")
    broken = frictionless.validate(
        path.name, schema=frictionless.Schema.from_descriptor(schema), basepath=str(tmp_path)
    )
    assert not broken.valid


def test_what_is_written_is_what_was_read(tmp_path: Path) -> None:
    path, _ = write_rates(_table(), tmp_path / "rates.csv")
    back = read_rates(path)
    assert back.same_runs(_table())
    assert not back.same_runs(read_text("T/K,k/s^-1\n298.15,0.5\n"))


@pytest.mark.parametrize("name", ["", "X, excess", "a(b", "SO₄²⁻", " Na", "x" * 300])
def test_a_species_that_would_not_be_read_back_is_refused(name: str) -> None:
    table = RateTable.from_arrays(T=[298.15], k=[1.0])
    named = RateTable(k=table.k, T=table.T, concentrations={name: table.k})
    with pytest.raises(InputError, match="no name of a species"):
        clean_csv(named)
