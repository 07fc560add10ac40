"""Ours against the literature at the paper's own conditions: worked by hand, and by definition."""

from __future__ import annotations

import math
from fractions import Fraction
from typing import TYPE_CHECKING

import numpy as np
import pytest

from knought.discussion.compare import EXTRAPOLATED_K, compare
from knought.discussion.literature import LiteratureValue
from knought.discussion.literature_sentences import (
    comparison_sentences,
    explanation_text,
    verdict_text,
)
from knought.discussion.literature_spread import Spread
from knought.discussion.matched import e_number, match
from knought.errors import InputError
from knought.fitting.assess import assess
from knought.fitting.fit import fit
from tests.discussion.studies import (
    ENERGY,
    GAS_CONSTANT,
    STRENGTHS,
    TEMPERATURES,
    arrhenius,
    study,
)

if TYPE_CHECKING:
    from knought.fitting.found import Found

#: Debye-Hückel A of water, molar, at 30 °C: definition with IAPWS-95 density and R8-97 permittivity
#: (computed with the library iapws 1.5.5).
A_30 = 0.515347

FOUND = fit(
    study(), temperature_law="arrhenius", salt_law="guntelberg", charge_product=2.0, scatter="given"
)


def k_paper(value: float, relative: float | None = 0.05, **more: object) -> LiteratureValue:
    spread = Spread() if relative is None else Spread("1 s", relative, relative=True)
    arguments: dict[str, object] = {"T": 303.15, "I": 0.04, **more}
    return LiteratureValue("Paper 1960", "rate_constant", value, spread, **arguments)  # type: ignore[arg-type]


def by_hand() -> tuple[float, float]:
    """Our ln k at 303.15 K and I = 0.04, and its u, without the package.

    ln k = ln A - E/(RT) + ln10 x 2 z_A z_B A(T) √I/(1 + √I), √I = 0.2. With the charges given, ln k
    is a straight line in 1/T with 16 runs of u = 0.02, whose u is σ √(1/n + (x - x̄)²/Σ(x - x̄)²).
    """
    ln_k = float(arrhenius(303.15)) + math.log(10) * 4 * A_30 * 0.2 / 1.2
    x = np.repeat(1 / np.array(TEMPERATURES), len(STRENGTHS))
    away = 1 / 303.15 - x.mean()
    return ln_k, 0.02 * math.sqrt(1 / 16 + away**2 / float(np.sum((x - x.mean()) ** 2)))


def test_a_matched_example_worked_by_hand() -> None:
    """The paper finds 1.25 times ours with u_r = 5 %."""
    ours, u = by_hand()
    found = match(FOUND, k_paper(1.25 * math.exp(ours)))
    assert found.difference == pytest.approx(-math.log(1.25), abs=2e-6)
    assert found.combined_uncertainty == pytest.approx(math.hypot(0.05, u), rel=1e-6)
    assert found.z == pytest.approx(-math.log(1.25) / math.hypot(0.05, u), rel=1e-4)
    # U = 2 u for the paper; half of our 95 % interval is 1.959964 u.
    expected = -math.log(1.25) / math.hypot(1.959964 * u, 2 * 0.05)
    assert found.e_number == pytest.approx(expected, rel=1e-4)
    assert found.ratio == pytest.approx(0.8, rel=1e-5)
    assert found.verdict == "differs"
    assert verdict_text(found) == "differs, ours is smaller by a factor 1.25, z = −4.4"


@pytest.mark.parametrize(
    ("factor", "verdict", "text"),
    [
        (1.06, "agrees", "agrees within 1.2 combined standard uncertainties"),
        (1.13, "questionable", "questionable: differs, ours is smaller by a factor 1.13, z = −2.4"),
        (0.5, "differs", "differs, ours is larger by a factor 2, z = 13.8"),
    ],
)
def test_verdicts_are_plain(factor: float, verdict: str, text: str) -> None:
    found = match(FOUND, k_paper(factor * math.exp(by_hand()[0])))
    assert (found.verdict, verdict_text(found)) == (verdict, text)


def test_without_a_stated_uncertainty_we_cannot_judge() -> None:
    found = match(FOUND, k_paper(1.1 * math.exp(by_hand()[0]), None))
    assert found.verdict == "cannot judge"
    assert math.isnan(found.z)
    assert verdict_text(found) == (
        "cannot judge: no uncertainty given; ours is smaller by a factor 1.1"
    )


def test_e_number_by_definition() -> None:
    """ISO 13528, ISO/IEC 17043: E_n = (x - X)/√(U_x² + U_X²)."""
    assert e_number(10.05, 10.0, 0.04, 0.03) == pytest.approx(1.0, rel=1e-12)
    assert math.isnan(e_number(1.0, 2.0, 0.0, 0.0))


def test_activation_parameters_are_compared_at_the_papers_ionic_strength() -> None:
    """E_a is 1.5 kJ/mol higher at I = 0.1 than at I → 0 for z_A z_B = 2 (design figure)."""
    at_zero = match(FOUND, LiteratureValue("X", "activation_energy", 60e3, T=298.15, I=0.0))
    at_salt = match(FOUND, LiteratureValue("X", "activation_energy", 60e3, T=298.15, I=0.1))
    assert at_zero.difference == pytest.approx(0.0, abs=0.5)
    assert at_salt.difference == pytest.approx(1.5e3, abs=50)


def test_other_standard_states_are_brought_to_ours() -> None:
    """S(1 mol/m³) is lower than S(1 mol/L) by (n - 1) R ln 1000 = 57.4 J/(K mol) for n = 2."""
    here = FOUND.at(298.15, 0.02)
    entropy = float(here["activation_entropy"].value) - GAS_CONSTANT * math.log(1000.0)
    gibbs = float(here["activation_gibbs_energy"].value) + 298.15 * GAS_CONSTANT * math.log(1000.0)
    for name, value in (("activation_entropy", entropy), ("activation_gibbs_energy", gibbs)):
        paper = LiteratureValue(
            "X", name, value, Spread("1 s", 1.0), 298.15, 0.02, standard_concentration=1e-3
        )
        assert match(FOUND, paper).difference == pytest.approx(0.0, abs=1e-6)


def test_what_cannot_be_compared_says_why() -> None:
    other_order = match(FOUND, k_paper(1.0, order=Fraction(1)))
    too_hot = match(FOUND, k_paper(1.0, T=400.0))
    charges = match(FOUND, LiteratureValue("X", "charge_product", 2.0))
    assert "order 1" in other_order.reason
    assert "liquid water" in too_hot.reason
    assert "charges" in charges.reason
    for each in (other_order, too_hot, charges):
        assert each.verdict == "not comparable"
        assert each.ours is None
        assert verdict_text(each).startswith("not comparable: ")


def test_one_temperature_gives_no_activation_energy_to_compare() -> None:
    found = fit(study(temperatures=(298.15,)))
    assert "one temperature" in match(found, LiteratureValue("X", "activation_energy", 1.0)).reason


def test_unstated_conditions_are_assumed_and_said() -> None:
    found = match(FOUND, LiteratureValue("X", "activation_energy", 60e3, Spread("1 s", 1e3)))
    assert (found.T, found.I) == (298.15, 0.0)
    assert any("no ionic strength" in text for text in found.assumed)
    assert any("no temperature" in text for text in found.assumed)
    plain = fit(study(), salt_law="none")
    assert match(plain, k_paper(1.0)).I is None


@pytest.mark.parametrize(
    ("name", "change", "words"),
    [
        ("rate_constant", lambda v: v + math.log(60), "min⁻¹ given as s⁻¹"),
        ("rate_constant", lambda v: v - math.log(60), "s⁻¹ given as min⁻¹"),
        ("rate_constant", lambda v: v + math.log(2), "2k given as k"),
        ("rate_constant", lambda v: v - math.log(1000), "m³ given as L"),
        ("activation_energy", lambda v: v - GAS_CONSTANT * 298.15, "ΔH‡ given as Eₐ"),
        ("activation_energy", lambda v: v / math.log(10), "slope of lg k"),
        ("activation_energy", lambda v: v / 4.184, "kcal given as kJ"),
        ("activation_enthalpy", lambda v: v + GAS_CONSTANT * 298.15, "Eₐ given as ΔH‡"),
        ("ln_pre_exponential_factor", lambda v: v / math.log(10), "lg A given as ln A"),
        ("activation_entropy", lambda v: v - GAS_CONSTANT * math.log(1000), "1 mol/m³"),
        ("activation_entropy", lambda v: v + GAS_CONSTANT * math.log(60), "min⁻¹"),
    ],
)
def test_common_confusions_are_found_with_their_size(name: str, change: object, words: str) -> None:
    """Each published value is ours, changed as the confusion would change it."""
    ours = FOUND.at(298.15, 0.1)[name]
    truth = math.log(float(ours.value)) if name == "rate_constant" else float(ours.value)
    published = change(truth)  # type: ignore[operator]
    value = math.exp(published) if name == "rate_constant" else published
    size = 0.01 * value if name == "rate_constant" else {"activation_entropy": 1.0}.get(name, 300.0)
    size = 0.1 if name == "ln_pre_exponential_factor" else size
    paper = LiteratureValue("X", name, value, Spread("1 s", size), 298.15, 0.1)
    found = match(FOUND, paper)
    assert found.verdict == "differs"
    assert words in found.explanations[0].words
    assert found.explanations[0].left == pytest.approx(0.0, abs=1e-6 * max(1.0, abs(truth)))
    assert words in explanation_text(found)


def test_k_at_an_ionic_strength_quoted_as_k_at_zero_is_found() -> None:
    """k/k° = 3.1 at I = 0.1: the paper quotes k at 0.1 as if at I → 0."""
    value = float(FOUND.rate_constant(298.15, 0.1).value)
    paper = LiteratureValue("X", "rate_constant", value, Spread("1 s", 0.01 * value), 298.15, 0.0)
    (best, *_) = match(FOUND, paper).explanations
    assert best.words == "k measured at I = 0.1 mol/L given as k at the stated ionic strength"
    assert math.exp(-best.shift) == pytest.approx(3.1, abs=0.05)


def test_agreement_needs_no_explanation() -> None:
    assert match(FOUND, k_paper(math.exp(by_hand()[0]))).explanations == ()


def test_extrapolation_is_said_and_widens_ours() -> None:
    found = fit(study())
    inside = match(found, k_paper(1.0, T=303.15, I=0.05))
    outside = match(found, k_paper(1.0, T=363.15, I=0.4))
    assert not inside.caveats
    assert {each.code for each in outside.caveats} == {
        "extrapolated-temperature",
        "extrapolated-ionic-strength",
    }
    assert inside.ours is not None
    assert outside.ours is not None
    u_in, u_out = (
        float(each.ours.distribution.standard_deviation)
        for each in (inside, outside)
        if each.ours is not None
    )
    assert u_out > 3 * u_in
    text = " ".join(comparison_sentences(compare(found, [outside.literature])))
    assert EXTRAPOLATED_K in text


def carried_papers(noise: tuple[float, ...] = (0.0, 0.0, 0.0)) -> list[LiteratureValue]:
    conditions = ((288.15, 0.01), (303.15, 0.05), (313.15, 0.1))
    return [
        k_paper(float(FOUND.rate_constant(T, I).value) * math.exp(each), 0.03, T=T, I=I)
        for (T, I), each in zip(conditions, noise, strict=True)
    ]


def test_papers_on_our_surface_carry_to_our_own_value() -> None:
    found = compare(FOUND, carried_papers())
    together = found.consensuses["rate_constant"]
    assert together.I in {0.0, *STRENGTHS}
    assert FOUND.reference_temperature == together.T
    mean = float(together.ours.distribution.mean)
    assert [each.value for each in together.carried] == pytest.approx([mean] * 3, abs=1e-9)
    assert together.consensus is not None
    assert together.consensus.value == pytest.approx(mean, abs=1e-9)
    assert together.z == pytest.approx(0.0, abs=1e-6)


def test_carrying_adds_the_uncertainty_of_the_way_only() -> None:
    """Where the paper stands at the common conditions already, nothing is added."""
    paper = carried_papers()[1]
    found = compare(FOUND, [paper, *carried_papers()], T=303.15, I=0.05)
    first, far = found.consensuses["rate_constant"].carried[:2]
    assert first.carrying_uncertainty == pytest.approx(0.0, abs=1e-12)
    assert first.standard_uncertainty == pytest.approx(0.03)
    # With charges given only the slope is unknown: u of E_a/R times the step in 1/T.
    u_slope = 0.02 / math.sqrt(
        len(STRENGTHS)
        * float(np.sum((1 / np.array(TEMPERATURES) - np.mean(1 / np.array(TEMPERATURES))) ** 2))
    )
    step = abs(1 / 303.15 - 1 / 288.15)
    assert far.carrying_uncertainty == pytest.approx(u_slope * step, rel=1e-6)


@pytest.mark.parametrize("found", [FOUND, fit(study())], ids=["named law", "open law"])
def test_the_distance_of_ours_to_papers_at_one_point_does_not_depend_on_where_they_meet(
    found: Found,
) -> None:
    """The way there and ours at its end share their errors: what is left is ours at the papers."""
    papers = [k_paper(3e-3, 0.03, T=313.15, I=0.1), k_paper(3.3e-3, 0.05, T=313.15, I=0.1)]
    here = compare(found, papers, T=313.15, I=0.1).consensuses["rate_constant"]
    far = compare(found, papers, T=283.15, I=0.0).consensuses["rate_constant"]
    assert far.z == pytest.approx(here.z, rel=1e-9)
    assert far.carried[0].carrying_uncertainty > 0
    assert here.carried[0].carrying_uncertainty == pytest.approx(0.0, abs=1e-12)


def test_papers_carried_the_same_way_share_its_error() -> None:
    """Two equal papers carried from one point: their own ± averages out, the way does not."""
    papers = [k_paper(3e-3, 0.03, T=288.15, I=0.01)] * 2
    together = compare(FOUND, papers, T=313.15, I=0.1, method="fixed").consensuses["rate_constant"]
    way = together.carried[0].carrying_uncertainty
    assert together.consensus is not None
    assert together.consensus.standard_uncertainty == pytest.approx(
        math.hypot(0.03 / math.sqrt(2), way), rel=1e-9
    )


def test_a_paper_that_disagrees_is_named_as_the_one_that_moves_the_consensus() -> None:
    sentences = comparison_sentences(compare(FOUND, carried_papers((0.0, 0.6, 0.0))))
    assert any("Paper 1960, which moves it most" in each for each in sentences)


def test_papers_without_uncertainty_are_shown_and_not_weighted() -> None:
    papers = [*carried_papers()[:2], k_paper(1e-3, None)]
    together = compare(FOUND, papers, method="paule-mandel").consensuses["rate_constant"]
    assert len(together.carried) == 3
    assert len(together.weighted) == 2
    lonely = compare(FOUND, [papers[0], papers[2]]).consensuses["rate_constant"]
    assert lonely.consensus is None
    assert math.isnan(lonely.z)


def test_literature_is_compared_with_an_assessment_too() -> None:
    found = assess(study(noise=1.0), reactants="A^2- + B^-")
    papers = [
        LiteratureValue("X", "charge_product", 2.0, Spread("1 s", 0.1)),
        LiteratureValue("Y", "activation_energy", ENERGY, Spread("1 s", 500.0), 298.15, 0.0),
    ]
    charges, energy = compare(found, papers).matches
    # The runs alone say what the charges are, though the headline has them given.
    assert charges.ours is not None
    assert not charges.ours.given
    assert energy.verdict == "agrees"


def test_several_values_of_one_paper_are_said_to_be_taken_as_independent() -> None:
    text = " ".join(comparison_sentences(compare(FOUND, carried_papers())))
    assert "3 values of 1 paper carried" in text
    assert "Several values of one paper" in text


def test_every_sentence_names_the_law_it_rests_on() -> None:
    found = compare(fit(study()), carried_papers())
    sentences = comparison_sentences(found)
    assert all("open law" in each for each in sentences[:3])
    assert not any("prove" in each for each in sentences)


def test_nothing_to_compare_with_is_refused() -> None:
    with pytest.raises(InputError):
        compare(FOUND, [])
