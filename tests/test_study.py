"""Study files: what they say, what is refused, and folders written whole or not at all."""

from __future__ import annotations

import json
from typing import TYPE_CHECKING

import pytest

import knought as kn
from knought.cli import main
from knought.study import read_study
from tests.test_cli import LIKE_CHARGES

if TYPE_CHECKING:
    from pathlib import Path

STUDY = """\
[study]
title = "Like charges"
reference_temperature = "25 °C"

[rates]
file = "rates.csv"
"""


@pytest.fixture
def folder(tmp_path: Path) -> Path:
    (tmp_path / "rates.csv").write_text(LIKE_CHARGES, encoding="utf-8")
    (tmp_path / "study.toml").write_text(STUDY, encoding="utf-8")
    return tmp_path


def with_lines(folder: Path, *lines: str) -> Path:
    path = folder / "study.toml"
    path.write_text("\n".join([STUDY, *lines]), encoding="utf-8")
    return path


def test_a_study_makes_one_folder_with_everything(folder: Path) -> None:
    report = kn.run_study(folder / "study.toml", folder / "out", figure_formats=["svg"])
    made = {str(path.relative_to(folder / "out")) for path in (folder / "out").rglob("*.*")}
    assert {
        "report.html",
        "results.json",
        "summary.txt",
        "figures/single-column/temperature.svg",
    } <= made
    assert {"tables/parameters.txt", "tables/laws.txt", "tables/runs.txt"} <= made
    record = json.loads((folder / "out" / "results.json").read_text(encoding="utf-8"))
    assert [each["path"] for each in record["inputs"]] == ["study.toml", "rates.csv"]
    assert record["reference_temperature"] == {"value": 298.15, "unit": "K"}
    assert report.title == "Like charges"
    assert not [path for path in folder.iterdir() if path.name.startswith(".")]
    for path in (folder / "out").rglob("*.*"):  # no absolute path in any output
        assert str(folder).encode() not in path.read_bytes()


def test_laws_priors_and_reactants_are_taken_from_the_file(folder: Path) -> None:
    path = with_lines(
        folder,
        "[reaction]",
        'reactants = "A^2- + B^-"',
        "[laws]",
        'temperature = "arrhenius"',
        "[priors]",
        'ion_size = ["3 Å", "0.6 nm"]',
        'linear_coefficient = ["0.1 L/mol", "0.1 L/mol"]',
        'interaction_coefficient = ["0 L/mol", "0.05 L/mol"]',
    )
    found = read_study(path).report().assessment
    assert found.temperature_law == "arrhenius"
    assert found.choices.charge_product == 2
    assert found.choices.priors.ion_size == pytest.approx((3e-10, 6e-10))
    assert found.choices.priors.interaction_coefficient == pytest.approx((0.0, 0.05))


@pytest.mark.parametrize(
    ("lines", "messages"),
    [
        (["[lawz]"], ["no such key", "'laws'"]),
        (["[laws]", 'temprature = "eyring"'], ["[laws] temprature", "'temperature'"]),
        (["[reaction]", "charge_product = 'two'"], ["[reaction] charge_product"]),
        (["[priors]", "ion_size = [3, 6]"], ["a quantity is a string with its unit"]),
        (["[priors]", 'ion_size = ["3 K", "6 Å"]'], ["[priors.ion_size] 0"]),
        (["[laws"], ["not valid TOML"]),
    ],
)
def test_what_is_wrong_in_a_study_file_is_named_with_its_remedy(
    folder: Path, lines: list[str], messages: list[str]
) -> None:
    path = with_lines(folder, *lines)
    with pytest.raises(kn.InputError) as caught:
        read_study(path)
    for message in ["study.toml", *messages]:
        assert message in str(caught.value)


def test_all_problems_of_a_study_file_are_told_at_once(folder: Path) -> None:
    path = with_lines(folder, "[laws]", 'tempreature = "x"', "[reaction]", "reactant = 1")
    with pytest.raises(kn.InputError) as caught:
        read_study(path)
    assert len(caught.value.problems) == 2


def test_a_study_file_needs_its_table(folder: Path) -> None:
    (folder / "study.toml").write_text("[study]\n", encoding="utf-8")
    with pytest.raises(kn.InputError, match="name one of the two sections"):
        read_study(folder / "study.toml")
    with pytest.raises(kn.InputError, match="cannot be read"):
        read_study(folder / "no.toml")


def test_a_table_outside_the_folder_is_refused(folder: Path) -> None:
    inner = folder / "inner"
    inner.mkdir()
    text = STUDY.replace('"rates.csv"', '"../rates.csv"')
    (inner / "study.toml").write_text(text, encoding="utf-8")
    with pytest.raises(kn.InputError, match="outside the folder"):
        read_study(inner / "study.toml").report()


@pytest.mark.usefixtures("undrawn")
def test_an_existing_folder_is_not_replaced_without_being_told(folder: Path) -> None:
    out = folder / "out"
    out.mkdir()
    (out / "report.html").write_text("mine", encoding="utf-8")
    assert main(["report", str(folder / "study.toml"), "--out", str(out)]) == 2
    assert (out / "report.html").read_text(encoding="utf-8") == "mine"
    assert (
        main(
            [
                "report",
                str(folder / "study.toml"),
                "--out",
                str(out),
                "--overwrite",
                "--figures",
                "none",
            ]
        )
        == 0
    )
    assert "Like charges" in (out / "report.html").read_text(encoding="utf-8")


def test_a_failing_study_leaves_nothing(folder: Path) -> None:
    (folder / "rates.csv").write_text("T/K,k/s^-1\n298,x\n", encoding="utf-8")
    with pytest.raises(kn.InputError):
        kn.run_study(folder / "study.toml", folder / "out")
    assert sorted(path.name for path in folder.iterdir()) == ["rates.csv", "study.toml"]


LITERATURE = """\
label,year,T/K,I/(mol/L),k/(L mol^-1 s^-1),u(k)/(L mol^-1 s^-1)
Paper A,1988,298.15,0.1,16.1,0.5
Paper B,1995,303.15,0.05,18.6,0.6
"""


@pytest.mark.usefixtures("undrawn")
def test_a_study_with_literature_and_candidates_discusses_them(folder: Path) -> None:
    (folder / "literature.csv").write_text(LITERATURE, encoding="utf-8")
    path = with_lines(
        folder,
        "[literature]",
        'file = "literature.csv"',
        "[[candidates]]",
        'name = "direct"',
        'reactants = "A^2- + B^-"',
        "[[candidates]]",
        'name = "protonated"',
        'reactants = "A^2- + X"',
    )
    report = read_study(path).report()
    record = json.loads(report.record())
    assert [each["label"] for each in record["literature"]] == ["Paper A", "Paper B"]
    weights = {each["name"]: each["weight"] for each in record["candidates"]}
    assert weights["direct"] > 0.99
    assert [each["path"] for each in record["inputs"]][-1] == "literature.csv"
    names = [section.name for section in report.sections]
    assert names[-3:] == ["literature", "mechanism", "results-text"]
    assert any("Paper A" in sentence for sentence in report.discussion)
    assert len(report.discussion) > 4
    assert not any("proves" in sentence for sentence in report.discussion)


@pytest.mark.usefixtures("undrawn")
def test_shared_errors_of_a_study_file_reach_the_budget(folder: Path) -> None:
    path = with_lines(
        folder,
        "[[shared_errors]]",
        'name = "probe offset"',
        'kind = "temperature-offset"',
        'u = "0.3 K"',
        "[[shared_errors]]",
        'name = "absorptivity"',
        'kind = "factor"',
        'u = "3 %"',
        "[[shared_errors]]",
        'name = "thermometer"',
        'kind = "temperature-offset"',
        'u = "0.1 K"',
        'distribution = "rectangular"',
        "each_run = true",
    )
    found = read_study(path).report().assessment
    sources = set(found.budget("rate_constant").variances)
    assert {"probe offset", "absorptivity", "thermometer"} <= sources
    k = float(found.parameters["rate_constant"].value)
    assert found.budget("rate_constant").uncertainty("absorptivity") == pytest.approx(0.03 * k)


@pytest.mark.parametrize(
    ("line", "message"),
    [
        ('u = "3 K"', "is not a quantity in %"),
        ('kind = "colour"', "temperature-offset"),
        ('battch = "A"', "'batch'"),
    ],
)
def test_a_wrong_shared_error_is_named(folder: Path, line: str, message: str) -> None:
    lines = ["[[shared_errors]]", 'name = "x"', 'kind = "factor"', 'u = "3 %"']
    key = line.split(" ", 1)[0]
    lines = [each for each in lines if not each.startswith(f"{key} ")] + [line]
    with pytest.raises(kn.InputError) as caught:
        read_study(with_lines(folder, *lines))
    assert message in str(caught.value)


@pytest.mark.usefixtures("undrawn")
def test_checks_of_a_study_file_reach_page_tables_and_record(folder: Path) -> None:
    path = with_lines(
        folder,
        "[laws]",
        'salt = "davies"',
        "[checks]",
        "monte_carlo = 20_000",
        "bootstrap = 100",
    )
    told: list[tuple[str, int]] = []
    report = kn.run_study(
        path, folder / "out", figure_formats=[], progress=lambda *each: told.append(each)
    )
    assert told[-1] == ("refits", 100)
    assert ("draws", 20_000) in told
    record = json.loads((folder / "out" / "results.json").read_text(encoding="utf-8"))
    drawn, again = record["monte_carlo"], record["bootstrap"]
    assert drawn["draws"] == 20_000
    assert drawn["seed"] == again["seed"] == record["seed"]
    for name in ("rate_constant", "activation_energy", "charge_product"):
        closed = record["parameters"][name]
        assert drawn["parameters"][name]["unit"] == closed["unit"]
        for other in (drawn, again):
            low, high = other["parameters"][name]["interval"]
            assert low < closed["value"] < high
        assert again["parameters"][name]["standard_uncertainty"] == pytest.approx(
            closed["standard_uncertainty"], rel=0.3
        )
    page = (folder / "out" / "report.html").read_text(encoding="utf-8")
    assert "Monte Carlo, 20000 draws" in page
    assert "no draw was refitted" in page
    assert (folder / "out" / "tables" / "bootstrap.txt").is_file()
    assert len(report.tables) > 6


@pytest.mark.usefixtures("undrawn")
def test_an_interrupt_during_the_checks_leaves_nothing_behind(folder: Path) -> None:
    path = with_lines(folder, "[checks]", 'monte_carlo = "adaptive"')

    def interrupted(what: str, done: int) -> None:
        raise KeyboardInterrupt

    before = sorted(folder.iterdir())
    with pytest.raises(KeyboardInterrupt):
        kn.run_study(path, folder / "out", progress=interrupted)
    assert sorted(folder.iterdir()) == before


@pytest.mark.parametrize(
    ("line", "message"),
    [
        ('monte_carlo = "many"', "adaptive"),
        ("monte_carlo = 10", "1000"),
        ("bootstrap = 3", "100"),
        ('bootstrap_kind = "casual"', "parametric"),
        ("montecarlo = 1000", "'monte_carlo'"),
    ],
)
def test_wrong_checks_are_named(folder: Path, line: str, message: str) -> None:
    with pytest.raises(kn.InputError) as caught:
        read_study(with_lines(folder, "[checks]", line))
    assert message in str(caught.value)


@pytest.mark.usefixtures("undrawn")
def test_a_study_runs_from_traces_to_the_report(tmp_path: Path) -> None:
    from tests.measurement.test_absorbance import _write_study

    record = json.loads(read_study(_write_study(tmp_path)).report().record())
    assert [each["path"] for each in record["inputs"]] == ["study.toml", "runs.csv", "traces.csv"]
    assert "molar absorptivity" in record["budget"]["rate_constant"]["variances"]
    assert record["parameters"]["charge_product"]["standard_uncertainty"] > 0


def test_a_study_takes_its_rates_from_one_source(folder: Path) -> None:
    path = with_lines(folder, "[traces]", 'runs = "runs.csv"', 'kind = "first-order"')
    with pytest.raises(kn.InputError, match="name one of the two sections"):
        read_study(path)
