"""The invented studies: reproducible, and found to be what they are."""

from __future__ import annotations

import json
import runpy
from functools import cache
from pathlib import Path

import pytest

import knought as kn
from knought.cli import main
from knought.demo import STUDIES
from knought.reporting.summary import to_ascii
from knought.study_sections.upstream import read_upstream

DATASETS = Path(__file__).parent.parent / "datasets"


@pytest.mark.parametrize("name", STUDIES)
def test_the_script_makes_the_same_bytes_again(name: str, tmp_path: Path) -> None:
    make = runpy.run_path(str(DATASETS / "make.py"))
    make["write"](tmp_path)
    made = [path.name for path in (tmp_path / name).iterdir()]
    assert "truth.json" in made
    assert {"rates.csv"} <= set(made) or {"runs.csv", "traces.csv"} <= set(made)
    for file in made:
        assert (tmp_path / name / file).read_bytes() == (DATASETS / name / file).read_bytes()


@cache
def _measured(name: str) -> tuple[kn.RateTable, tuple[kn.SharedError, ...]]:
    """Return the rate constants of a study, reduced from its traces where it begins with them."""
    if (DATASETS / name / "rates.csv").exists():
        return kn.read_rates(DATASETS / name / "rates.csv"), ()
    upstream = read_upstream(DATASETS / name / "study.toml")
    reduced = upstream.reduced(lambda file, _: DATASETS / name / file)
    return reduced.rates, reduced.shared_errors


@pytest.mark.parametrize("name", STUDIES)
@pytest.mark.parametrize("given", [False, True])
def test_the_true_values_lie_in_the_intervals(name: str, given: bool) -> None:
    truth = json.loads((DATASETS / name / "truth.json").read_text(encoding="utf-8"))["parameters"]
    charges = truth["charge_product"] if given else None
    rates, shared = _measured(name)
    found = kn.assess(rates, charge_product=charges, shared_errors=shared)
    for parameter, true in truth.items():
        estimate = found.parameters[parameter]
        low, high = (estimate.quantity.shown(float(end)) for end in estimate.interval(0.95))
        assert low <= true <= high, parameter


@pytest.mark.usefixtures("undrawn")
def test_the_demo_writes_every_study_and_says_what_is_true(
    tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    out = tmp_path / "demo"
    assert main(["demo", "--out", str(out), "--figures", "none"]) == 0
    said = capsys.readouterr().out
    assert said.count("inside") >= 15
    assert "outside" not in said
    for name in STUDIES:
        page = (out / name / "report" / "report.html").read_text(encoding="utf-8")
        assert "(invented)" in page
        assert (out / name / "study.toml").exists()
    assert to_ascii(said).isascii()
    assert main(["demo", "--out", str(out)]) == 2
