"""Tables and figures of a plan, the command, and the section of a study file."""

from __future__ import annotations

import argparse
from typing import TYPE_CHECKING

import numpy as np
import pytest
from pydantic import ValidationError

import knought as kn
from knought.cli import plan as command
from knought.discussion.next_runs import Plan, plan
from knought.discussion.runs_curve import RunsCurve, runs_curve
from knought.reporting.plan_figures import CAPTIONS, information_map, u_against_runs
from knought.reporting.plan_tables import (
    curve_table,
    expectation_table,
    plan_summary,
    planned_runs_table,
    power_table,
)
from knought.reporting.style import blank_figure
from knought.study_sections.plan import PlanSection

if TYPE_CHECKING:
    from pathlib import Path

    from knought.arrays import FloatArray

#: å alone is left open: 17 cells instead of 221, so that plans take little time.
NARROW = kn.Priors(linear_coefficient=(0.1, 0.0))


@pytest.fixture(scope="module")
def salted() -> Plan:
    return plan(
        [288.15, 308.15, 328.15], [0.01, 0.05, 0.1], runs=8, repeatability=0.03,
        aim="charge_product", charge_product=2, starts=2, data_sets=200, priors=NARROW,
        hazards=["volatile"], salts={"NaCl": 0.1}, forbidden=[(328.15, 0.1)],
    )  # fmt: skip


@pytest.fixture(scope="module")
def curve(salted: Plan) -> RunsCurve:
    return runs_curve(salted, 9, least=6)


def test_the_table_of_runs_is_in_working_order(salted: Plan) -> None:
    table = planned_runs_table(salted)
    assert [row[1].raw for row in table.rows] == [run.T for run in salted.runs]
    assert [column.sign("ascii") for column in table.columns] == [
        "run", "T", "t", "I", "salt", "day",
    ]  # fmt: skip


def test_expected_uncertainties_stand_in_their_customary_units(salted: Plan) -> None:
    rows = {row[1].raw: row for row in expectation_table(salted).rows}
    u = salted.expected_uncertainty
    assert rows["activation_energy"][2].raw == pytest.approx(u["activation_energy"] / 1e3)
    assert rows["rate_constant"][2].raw == pytest.approx(u["rate_constant"] * 100)
    notes = " ".join(expectation_table(salted).notes)
    assert "Efficiency" in notes
    assert "3 temperatures and 3 ionic strengths" in notes


def test_verdicts_stand_by_formula_and_by_simulation(salted: Plan) -> None:
    table = power_table(salted)
    assert table is not None
    assert len(table.rows) == len(salted.powers) == 3
    assert power_table(plan([288.15, 328.15], runs=4, repeatability=0.03, data_sets=5)) is None


def test_the_summary_holds_runs_expectations_assumptions_and_cautions(salted: Plan) -> None:
    text = plan_summary(salted)
    for words in ("working order", "expected to give", "verdict", "assumes", "Cautions", "fume"):
        assert words in text
    assert all(len(line) <= 110 for line in text.splitlines())


def test_the_curve_as_a_table(curve: RunsCurve) -> None:
    table = curve_table(curve)
    assert [row[0].raw for row in table.rows] == [6.0, 7.0, 8.0, 9.0]
    headings = [column.heading("ascii") for column in table.columns]
    assert headings[:3] == ["runs", "u(k0) / %", "u(E_a) / (kJ mol^-1)"]


def test_the_map_shows_every_run_and_leaves_what_is_forbidden_white(salted: Plan) -> None:
    ax = blank_figure().add_subplot()
    assert information_map(salted, ax) is ax
    shown: np.ma.MaskedArray[tuple[int, ...], np.dtype[np.float64]]
    shown = np.ma.asarray(ax.collections[0].get_array())
    field: FloatArray = np.ma.filled(shown, np.nan).reshape(3, 3)
    assert np.isnan(field[2, 2])
    assert np.isfinite(field).sum() == 8
    assert len(ax.lines) == np.count_nonzero(salted.counts)
    assert set(CAPTIONS) == {"information", "runs"}


def test_a_map_of_temperatures_only_has_one_column() -> None:
    found = plan([288.15, 308.15, 328.15], runs=5, repeatability=0.03, data_sets=5)
    ax = information_map(found, blank_figure().add_subplot())
    assert len(ax.get_yticks()) == 3
    assert len(ax.get_xticks()) == 0


@pytest.mark.parametrize("name", ["rate_constant", "activation_energy", "charge_product"])
def test_the_curve_is_drawn_in_customary_units(curve: RunsCurve, name: str) -> None:
    wanted = float(curve.u[name][1])
    ax = u_against_runs(curve, name, blank_figure().add_subplot(), wanted=wanted)
    drawn = np.asarray(ax.lines[0].get_ydata(), dtype=float)
    factor = {"rate_constant": 100.0, "activation_energy": 1e-3, "charge_product": 1.0}[name]
    assert np.allclose(drawn, curve.u[name] * factor)
    assert len(ax.lines) == 3
    ax.figure.canvas.draw()


def run(*words: str) -> None:
    parser = argparse.ArgumentParser()
    command.add_arguments(parser)
    command.run(parser.parse_args(list(words)))


def test_the_command_prints_the_plan_and_writes_the_form(
    tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    form = tmp_path / "form.csv"
    run(
        "--temperatures", "15 to 55 °C by 20", "--runs", "6", "--repeatability", "3 %",
        "--most", "8", "--csv", str(form), "--format", "ascii",
    )  # fmt: skip
    said = capsys.readouterr().out
    assert said.isascii()
    for words in ("working order", "assumes", "against the number of runs", "form.csv"):
        assert words in said
    assert len(form.read_text(encoding="utf-8").splitlines()) == 7


def test_the_command_adds_to_runs_already_made(
    tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    table = tmp_path / "made.csv"
    table.write_text("T/K,k/s^-1,u_r(k)/%\n288.15,1.0,3\n298.15,2.0,3\n308.15,3.9,3\n")
    run(
        "--temperatures", "15, 35, 55 °C", "--runs", "3", "--repeatability", "3 %",
        "--made", str(table), "--format", "text",
    )  # fmt: skip
    said = capsys.readouterr().out
    assert "u before" in said
    assert "3 runs already made" in said


def test_the_section_of_a_study_file_is_what_plan_takes() -> None:
    section = PlanSection.model_validate(
        {
            "temperatures": "15, 35, 55 °C",
            "ionic_strengths": "0.01, 0.05, 0.1 mol/L",
            "runs": 8,
            "repeatability": "3 %",
            "aim": "charge_product",
            "charge_product": 2,
            "temperature_uncertainty": "0.1 K",
            "salts": {"NaCl": "0.1 mol/L"},
            "forbidden": [{"temperature_from": "50 °C", "ionic_strength_from": "0.1 mol/L"}],
        }
    )
    found = plan(**section.arguments(), starts=1, data_sets=20)
    assert len(found.reach) == 8
    assert found.request.u_T == pytest.approx(0.1)


@pytest.mark.parametrize(
    "changes",
    [{"runs": 0}, {"repeatability": 0.03}, {"temperatures": [288.15]}, {"colour": "red"}],
)
def test_what_is_wrong_in_the_section_is_refused(changes: dict[str, object]) -> None:
    wanted: dict[str, object] = {"temperatures": "15, 35 °C", "runs": 4, "repeatability": "3 %"}
    with pytest.raises(ValidationError):
        PlanSection.model_validate({**wanted, **changes})


def test_a_misspelt_aim_is_told_by_the_plan() -> None:
    section = PlanSection.model_validate(
        {"temperatures": "15, 35 °C", "runs": 4, "repeatability": "3 %", "aim": "colour"}
    )
    with pytest.raises(kn.InputError, match="no plan has the aim"):
        plan(**section.arguments())
