"""The command: answers, exit codes, and nothing half-written."""

from __future__ import annotations

import io
import json
import re
from itertools import product
from typing import TYPE_CHECKING

import pytest

import knought
from knought.cli import main
from tests.published import (
    DITHIONATE_K,
    NITROGEN_PENTOXIDE_K,
    PEROXODISULFATE_I,
    PEROXODISULFATE_K,
)

if TYPE_CHECKING:
    from pathlib import Path

LIKE_CHARGES = """\
t/°C,I/(mol/L),k/(L mol^-1 s^-1),u_r(k)/%
15,0.01,4.62,2
15,0.05,6.60,2
15,0.1,8.10,2
25,0.01,9.40,2
25,0.05,13.5,2
25,0.1,16.6,2
35,0.01,18.1,2
35,0.05,26.3,2
35,0.1,32.8,2
"""


def run(*words: str | Path) -> int:
    try:
        return main([str(word) for word in words])
    except SystemExit as done:
        return int(done.code or 0)


def written(folder: Path, text: str, name: str = "rates.csv") -> str:
    path = folder / name
    path.write_text(text, encoding="utf-8")
    return str(path)


def record(folder: Path, table: str, *words: str) -> dict[str, object]:
    out = folder / "results.json"
    assert run("fit", table, "--json", out, *words) == 0
    found: dict[str, object] = json.loads(out.read_text(encoding="utf-8"))
    return found


def value(found: dict[str, object], name: str) -> tuple[float, float]:
    entry = found["parameters"][name]  # type: ignore[index]
    return entry["value"], entry["standard_uncertainty"]


def test_dithionate_as_a_table_gives_the_published_fit(tmp_path: Path) -> None:
    """Lente, Fábián and Poë 2005: ΔH‡ 120.27 (0.15) kJ/mol, ΔS‡ 11.33 (0.45) J/(K mol)."""
    rows = [f"{50 + 5 * i},{k!r}" for i, k in enumerate(DITHIONATE_K.tolist())]
    table = written(tmp_path, "\n".join(["t/°C,k/(L mol^-1 s^-1)", *rows]))
    found = record(tmp_path, table, "--temperature-law", "eyring")
    for name, expected in (
        ("activation_enthalpy", (120.27, 0.15)),
        ("activation_entropy", (11.33, 0.45)),
    ):
        assert value(found, name) == pytest.approx(expected, abs=0.005)


def test_nitrogen_pentoxide_as_a_table(tmp_path: Path) -> None:
    """Daniels and Johnston 1921 (from memory): E_a 103.0 (0.5) kJ/mol."""
    celsius = (0, 25, 35, 45, 55, 65)
    rows = [f"{t},{k}" for t, k in zip(celsius, NITROGEN_PENTOXIDE_K, strict=True)]
    table = written(tmp_path, "\n".join(["t/°C,k/s^-1", *rows]))
    energy, u = value(
        record(tmp_path, table, "--temperature-law", "arrhenius"), "activation_energy"
    )
    assert energy == pytest.approx(103.0, abs=0.1)
    assert u == pytest.approx(0.47, abs=0.01)


@pytest.mark.parametrize(("law", "charges"), [("limiting", 1.81), ("guntelberg", 2.11)])
def test_peroxodisulfate_as_a_table(tmp_path: Path, law: str, charges: float) -> None:
    """King and Jacobs 1931 (ratios, from memory): one temperature, exit 0, the charge product."""
    rows = [f"25,{I},{k}" for I, k in zip(PEROXODISULFATE_I, PEROXODISULFATE_K, strict=True)]
    table = written(tmp_path, "\n".join(["t/°C,I/(mol/L),k/(L mol^-1 min^-1)", *rows]))
    found = record(tmp_path, table, "--salt-law", law)
    assert value(found, "charge_product")[0] == pytest.approx(charges, abs=0.02)
    assert found["temperature_law"] == "isothermal"
    assert "activation_energy" not in found["parameters"]  # type: ignore[operator]


def test_the_summary_says_what_plus_minus_means(
    tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    assert run("fit", written(tmp_path, LIKE_CHARGES)) == 0
    text = capsys.readouterr().out
    assert "u is a standard uncertainty, from the stated uncertainties of k" in text
    assert "95 % interval" in text
    assert "Does the conclusion survive another salt law?" in text
    assert "t/°C" in text  # the account of what was understood
    assert max(len(line) for line in text.splitlines()) <= 120


def test_given_reactants_are_named_with_their_charges(
    tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    assert run("fit", written(tmp_path, LIKE_CHARGES), "--reactants", "A^2- + B^-") == 0
    text = capsys.readouterr().out
    assert "A²⁻ + B⁻" in text
    assert "What the runs alone say" in text


def test_ascii_is_ascii(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    assert run("fit", written(tmp_path, LIKE_CHARGES), "--format", "ascii") == 0
    text = capsys.readouterr().out
    assert text.isascii()
    assert "?" not in text.replace("law?", "")


def test_pasted_cells_are_read_from_the_terminal(
    monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> None:
    pasted = io.BytesIO(LIKE_CHARGES.replace(",", "\t").encode())
    monkeypatch.setattr("sys.stdin", io.TextIOWrapper(pasted))
    assert run("fit", "-") == 0
    assert "9 runs" in capsys.readouterr().out


def test_two_columns_work_and_say_what_they_could_not_determine(
    tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    table = written(tmp_path, "T/K,k/s^-1\n288.15,1e-3\n298.15,2.2e-3\n308.15,4.6e-3\n")
    assert run("fit", table) == 0
    text = " ".join(capsys.readouterr().out.split())
    assert "nothing is said of I → 0" in text
    assert "from the scatter" in text


@pytest.mark.parametrize(
    ("table", "words", "message"),
    [
        ("T/K,k/s^-1\n298.15,abc\n", (), "row 2"),
        ("T/K,k/s^-1\n298.15,1\n308,2\n", ("--temperature-law", "arhenius"), "arrhenius"),
        (LIKE_CHARGES, ("--salt-law", "debye"), "guntelberg"),
        (LIKE_CHARGES, ("--reactants", "SO42- + H+"), "SO4^2-"),
        (LIKE_CHARGES, ("--reference-temperature", "-3"), "above 0 K"),
        ("", (), "empty"),
    ],
)
def test_wrong_input_is_one_message_and_exit_two(
    tmp_path: Path,
    capsys: pytest.CaptureFixture[str],
    table: str,
    words: tuple[str, ...],
    message: str,
) -> None:
    out = tmp_path / "results.json"
    assert run("fit", written(tmp_path, table), "--json", out, *words) == 2
    said = capsys.readouterr()
    assert message in said.err
    assert "Traceback" not in said.err
    assert not out.exists()


def test_a_file_that_is_not_there_is_exit_two(
    tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    assert run("fit", tmp_path / "nothing.csv") == 2
    assert "nothing.csv" in capsys.readouterr().err


def test_words_that_are_no_call_are_exit_two() -> None:
    assert run("fitt") == 2
    assert run("fit") == 2
    assert run("--version") == 0
    assert run() == 0


def test_an_interrupt_is_exit_130(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> None:
    def interrupted(*_: object, **__: object) -> None:
        raise KeyboardInterrupt

    monkeypatch.setattr("knought.fitting.assess.assess", interrupted)
    assert run("fit", written(tmp_path, LIKE_CHARGES)) == 130
    assert "interrupted" in capsys.readouterr().err


@pytest.mark.usefixtures("undrawn")
def test_the_template_is_a_study_that_only_lacks_its_runs(
    tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    folder = tmp_path / "mine"
    assert run("template", "--out", folder) == 0
    assert sorted(path.name for path in folder.iterdir()) == ["rates.xlsx", "study.toml"]
    assert run("report", folder / "study.toml", "--out", tmp_path / "report") == 2
    assert "rates.xlsx" in capsys.readouterr().err
    assert not (tmp_path / "report").exists()
    from openpyxl import load_workbook

    book = load_workbook(folder / "rates.xlsx")
    for row in LIKE_CHARGES.splitlines()[1:]:
        t, I, k, u = (float(cell) for cell in row.split(","))
        book.worksheets[0].append([None, t, I, k, u / 100 * k])
    book.save(folder / "rates.xlsx")
    done = run("report", folder / "study.toml", "--out", tmp_path / "report", "--figures", "none")
    assert done == 0
    assert (tmp_path / "report" / "report.html").stat().st_size > 10_000


def test_reading_shows_what_was_understood_and_writes_it_clean(
    tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    messy = "t/°C;I/(mol/L);k/(L mol^-1 s^-1)\n15,0;0,01;4,62\n25,0;0,01;9,40\n35,0;0,01;18,1\n"
    table = written(tmp_path, messy, "messy.csv")
    clean = tmp_path / "clean.csv"
    assert run("read", table, "--out", clean) == 0
    said = capsys.readouterr().out
    assert "read as temperature, +273.15: 15,0 → 288.15 K" in said
    assert clean.read_text(encoding="utf-8").splitlines()[0].startswith("run,T/K,I/(mol/L)")
    assert (tmp_path / "clean.schema.json").exists()
    assert run("fit", clean) == 0


def test_monte_carlo_stands_beside_the_closed_form(
    tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    table = written(tmp_path, LIKE_CHARGES)
    assert run("fit", table, "--monte-carlo", "20000", "--seed", "7") == 0
    said = capsys.readouterr().out
    assert "Monte Carlo, 20000 draws, seed 7" in said
    assert said.count(" yes") >= 6


def test_predict_says_k_as_python_does_and_marks_what_lies_outside(
    tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    table = written(tmp_path, LIKE_CHARGES)
    asked = ("--temperatures", "25, 50 °C", "--ionic-strengths", "0.05, 0.3 mol/L")
    assert run("predict", table, *asked, "--format", "ascii") == 0
    said = capsys.readouterr().out
    rows = [line.split() for line in said.splitlines() if re.match(r"\d+\.\d+ +\d", line)]
    found = knought.assess(knought.read_rates(table))
    for row, (T, I) in zip(rows, product((298.15, 323.15), (0.05, 0.3)), strict=True):
        k = found.headline.rate_constant(T, I)
        assert [float(each) for each in row[:2]] == [T, I]
        assert float(row[2]) == pytest.approx(float(k.value), rel=0.01)
        assert float(row[3]) == pytest.approx(float(k.standard_uncertainty), rel=0.05)
        outside = [each.code.rpartition("-")[2] for each in k.caveats]
        assert ("measured T" in " ".join(row)) == ("temperature" in outside)
        assert ("measured I" in " ".join(row)) == ("strength" in outside)
    assert "follow local codes and licensed practice" in said.replace("\n", " ")


@pytest.mark.parametrize("conditions", ["25", "0 to 90 °C by 0.01", "200 °C"])
def test_predict_refuses_conditions_that_cannot_be(
    tmp_path: Path, conditions: str, capsys: pytest.CaptureFixture[str]
) -> None:
    assert run("predict", written(tmp_path, LIKE_CHARGES), "--temperatures", conditions) == 2
    assert "knought:" in capsys.readouterr().err
