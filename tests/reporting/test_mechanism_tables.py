"""Tables of the mechanism, as they are read."""

from __future__ import annotations

import numpy as np
import pytest

from knought.discussion.activation_shift import activation_shifts
from knought.discussion.candidates import Candidate
from knought.discussion.electrostatics import electrostatic_part
from knought.discussion.encounter_check import encounter_check
from knought.discussion.entropy_sign import entropy_sign
from knought.discussion.mechanism import Weighing, weigh
from knought.fitting.assess import Assessment, assess
from knought.fitting.fit import fit
from knought.measurement.table import RateTable
from knought.reporting.cells import plain_lines
from knought.reporting.mechanism_tables import (
    candidates_table,
    distances_table,
    electrostatic_table,
    encounter_table,
    entropy_sign_table,
    shift_table,
)
from tests.discussion.studies import study


@pytest.fixture(scope="module")
def found() -> Assessment:
    return assess(study(noise=1.0, seed=3))


@pytest.fixture(scope="module")
def weighing(found: Assessment) -> Weighing:
    return weigh(
        found,
        [
            Candidate("direct", "A^2- + B^-"),
            Candidate("acid", "H+ + A^2- + B^-"),
            Candidate("third", "A^- + B^-", order=3),  # type: ignore[arg-type]
        ],
    )


def test_candidates_stand_with_charges_and_weights(weighing: Weighing) -> None:
    table = candidates_table(weighing)
    direct, acid, third = table.rows
    assert [cell.written() for cell in direct[:4]] == ["direct", "A²⁻ + B⁻", "4", "2"]
    assert direct[6].written() == "1.000"
    assert acid[2].written() == "−2"
    assert acid[2].written("ascii") == "-2"
    assert acid[6].written() == "< 0.001"
    assert third[6].raw == 0.0
    text = " ".join(plain_lines(table))
    assert "open law" in text
    assert "third is left out" in text


def test_distances_stand_under_every_law(weighing: Weighing) -> None:
    table = distances_table(weighing)
    assert table is not None
    laws = [row[1].raw for row in table.rows]
    assert laws[0] == "open"
    assert {"guntelberg", "limiting", "davies"} <= set(laws)
    assert [column.sign() for column in table.columns[3:6]] == ["direct", "acid", "third"]
    for i, row in enumerate(table.rows):
        assert row[3].raw == weighing.candidates[0].distances[i].standard_uncertainties


def test_nothing_of_the_charges_is_said_where_the_runs_say_nothing() -> None:
    weighing = weigh(assess(study(strengths=(0.1,))), [Candidate("direct", "A^2- + B^-")])
    assert distances_table(weighing) is None
    assert "say nothing of the charges" in " ".join(plain_lines(candidates_table(weighing)))


def test_shifts_are_shown_in_customary_units(found: Assessment) -> None:
    table = shift_table(activation_shifts(found), "Eyring, open law")
    assert table is not None
    assert len(table.rows) == 4
    last = table.rows[-1]
    assert float(str(last[2].raw)) == pytest.approx(1.5, abs=0.5)
    assert shift_table((), "none") is None


def test_signs_stand_under_every_law(found: Assessment) -> None:
    table = entropy_sign_table(entropy_sign(found))
    assert table.rows[0][0].raw == "Eyring, open law"
    assert table.rows[0][2].written() == "1.000"


def test_charges_stand_at_every_temperature() -> None:
    table = electrostatic_table(electrostatic_part([288.15, 298.15], 2, 5e-10, 0.5e-10))
    assert [row[0].written() for row in table.rows] == ["288.15", "298.15"]
    assert table.rows[1][3].written() == "−32.4 ± 3.2"
    assert "5 Å ± 0.5 Å" in table.notes[0]
    assert len(electrostatic_table(electrostatic_part(298.15, 2, 5e-10)).rows) == 1


def test_the_limit_stands_beside_k(found: Assessment) -> None:
    table = encounter_table(encounter_check(found, 2.0))
    assert len(table.rows) == 4
    assert all(row[6].written() == "–" for row in table.rows)
    T = np.repeat([288.15, 298.15, 308.15], 2)
    k = 3e9 * np.tile([1.01, 0.99], 3)
    fast = fit(RateTable.from_arrays(T=T, k=k, u_k=0.02 * k, unit="L mol^-1 s^-1"))
    near = encounter_table(encounter_check(fast, 0.0))
    assert all("±" in row[6].written() for row in near.rows)
    assert "in the runs' own medium" in near.title
