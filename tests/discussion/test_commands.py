"""``knought compare``, ``knought mechanism`` and their sections of a study file."""

from __future__ import annotations

import argparse
import math
from typing import TYPE_CHECKING

import pytest
from pydantic import ValidationError

from knought.cli import compare, compensation, mechanism
from knought.cli.mechanism import read_candidate
from knought.errors import InputError
from knought.study_sections.discussion import CandidateSection, LiteratureSection
from tests.discussion.studies import study

if TYPE_CHECKING:
    from pathlib import Path
    from types import ModuleType


def call(module: ModuleType, *words: str) -> None:
    parser = argparse.ArgumentParser()
    module.add_arguments(parser)
    module.run(parser.parse_args([*words, "--format", "text"]))


@pytest.fixture
def rates(tmp_path: Path) -> str:
    path = tmp_path / "rates.csv"
    study(noise=1.0, seed=3).to_frame().to_csv(path, index=False)
    return str(path)


@pytest.fixture
def literature(tmp_path: Path) -> str:
    path = tmp_path / "literature.csv"
    path.write_text(
        "label,year,T/K,I/(mol/L),k/(L mol^-1 s^-1),u(k)/%,E_a/(kJ/mol),u(E_a)/(kJ/mol)\n"
        "King,1931,298.15,0.05,0.75,3,60.2,0.8\nOlson,1949,308.15,0.02,1.05,4,61,1\n",
        encoding="utf-8",
    )
    return str(path)


def test_compare_says_verdicts_consensus_and_cautions(
    rates: str, literature: str, tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    figure = tmp_path / "forest.svg"
    call(compare, rates, literature, "--figure", str(figure), "--at-temperature", "298.15")
    said = capsys.readouterr().out
    assert "King (1931)" in said
    assert "combined standard uncertainties" in said
    assert "Several papers together" in said
    assert "<svg" in figure.read_text(encoding="utf-8")


def test_compare_has_no_forest_of_one_paper(rates: str, tmp_path: Path) -> None:
    path = tmp_path / "one.csv"
    path.write_text("label,E_a/(kJ/mol)\nX,60\n", encoding="utf-8")
    with pytest.raises(InputError, match="no two papers"):
        call(compare, rates, str(path), "--figure", str(tmp_path / "f.svg"))


def test_mechanism_says_weights_charges_and_limit(
    rates: str, capsys: pytest.CaptureFixture[str]
) -> None:
    call(
        mechanism, rates, "--candidate", "direct: A^2- + B^-", "--candidate", "H+ + A^2- + B^-",
        "--contact-distance", "5 Å", "--diffusion", "1e-9 m^2 s^-1", "1.2e-9 m^2 s^-1",
    )  # fmt: skip
    said = capsys.readouterr().out
    for words in (
        "favour Δz² = 4 (direct)",
        "diffusion limit",
        "double sphere",
        "ΔS‡ is negative",
        "D = 1 × 10⁻⁹ and 1.2 × 10⁻⁹",
    ):
        assert words in said
    assert "prove" not in said


def test_mechanism_gives_no_limit_for_three_species(
    rates: str, capsys: pytest.CaptureFixture[str]
) -> None:
    call(mechanism, rates, "--candidate", "three: H+ + A^2- + B^-")
    said = capsys.readouterr().out
    assert "no step of two species" in said
    assert "beside the diffusion limit" not in said


def test_candidates_are_read_from_the_command_line() -> None:
    found = read_candidate("acid: HSO3^- + B^- releasing H+")
    assert (found.name, found.charge_change) == ("acid", 8)
    assert read_candidate("A^2- + B^-").name == "A^2- + B^-"


def test_a_candidate_of_a_study_file() -> None:
    section = CandidateSection.model_validate(
        {
            "name": "acid",
            "reactants": "HSO3^- + B^-",
            "releases": "H+",
            "prior": 2,
            "order": "3/2",
            "entropy_sign": "negative",
            "lowest_enthalpy": "40 kJ/mol",
            "contact_distance": "5 Å",
            "contact_distance_uncertainty": "0.5 Å",
        }
    )
    found = section.candidate()
    assert (found.charge_change, found.prior) == (8, 2.0)
    assert str(found.order) == "3/2"
    entropy, enthalpy = found.expectations
    assert (entropy.low, entropy.high) == (-math.inf, 0.0)
    assert (enthalpy.low, enthalpy.high) == (40e3, math.inf)
    assert found.contact_distance == pytest.approx(5e-10)


def test_a_sign_narrows_a_range() -> None:
    section = CandidateSection(
        name="x", reactants="A + B", entropy_sign="positive",
        lowest_entropy="-10 J/(K mol)", highest_entropy="30 J/(K mol)",  # type: ignore[arg-type]
    )  # fmt: skip
    (entropy,) = section.candidate().expectations
    assert (entropy.low, entropy.high) == (0.0, 30.0)


@pytest.mark.parametrize(
    "wrong",
    [
        {"prior": 0},
        {"colour": "red"},
        {"contact_distance": 5e-10},
        {"contact_distance": "5 K"},
        {"entropy_sign": "small"},
    ],
)
def test_a_wrong_candidate_is_refused(wrong: dict[str, object]) -> None:
    with pytest.raises(ValidationError):
        CandidateSection.model_validate({"name": "x", "reactants": "A + B", **wrong})


def test_an_order_in_words_is_refused() -> None:
    with pytest.raises(InputError):
        CandidateSection(name="x", reactants="A + B", order="two").candidate()


def test_the_literature_of_a_study_file() -> None:
    section = LiteratureSection.model_validate(
        {"file": "literature.csv", "temperature": "25 °C", "ionic_strength": "50 mmol/L"}
    )
    assert section.temperature == pytest.approx(298.15)
    assert section.ionic_strength == pytest.approx(0.05)
    assert section.consensus == "dersimonian-laird"
    with pytest.raises(ValidationError):
        LiteratureSection.model_validate({"file": "x", "consensus": "median"})


def test_compensation_names_the_artefact_and_draws_both_plots(
    rates: str, tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    """Three times one reaction with other errors: errors alone make the line."""
    paths = []
    for seed in (4, 5, 6):
        path = tmp_path / f"reaction {seed}.csv"
        study(noise=1.0, seed=seed).to_frame().to_csv(path, index=False)
        paths.append(str(path))
    figure = tmp_path / "both.svg"
    call(compensation, *paths, "--figure", str(figure))
    said = capsys.readouterr().out
    for words in ("reaction 4", "harmonic mean", "isokinetic artefact", "no relation is shown"):
        assert words in said
    assert figure.read_text(encoding="utf-8").count("<svg") == 1


def test_reactions_need_names_of_their_own(rates: str) -> None:
    with pytest.raises(InputError, match="two reactions are called 'rates'"):
        call(compensation, rates, rates, rates)
    with pytest.raises(InputError, match="1 labels for 3 tables"):
        call(compensation, rates, rates, rates, "--label", "a")
    with pytest.raises(InputError, match="three at least"):
        call(compensation, rates, rates, "--label", "a", "--label", "b")
