"""Candidates weighed: charges by hand, calibration of the weights, and saying "cannot tell"."""

from __future__ import annotations

import math
from fractions import Fraction
from functools import cache
from itertools import pairwise
from typing import TYPE_CHECKING

import numpy as np
import pytest

from knought.chemistry.debye_huckel import debye_huckel
from knought.discussion.candidates import Candidate, Expectation
from knought.discussion.mechanism import candidate_weights, weigh
from knought.discussion.mechanism_sentences import weighing_sentences
from knought.discussion.telling_run import telling_run
from knought.errors import InputError
from knought.fitting.assess import assess
from knought.fitting.fit import fit
from knought.fitting.observations import observe
from knought.fitting.open_fit import fit_open, open_solver
from knought.fitting.run_errors import run_errors
from knought.laws.open_law import open_grid
from knought.laws.surface import Surface
from knought.laws.temperature import temperature_law
from knought.measurement.table import RateTable
from tests.discussion.studies import study
from tests.simulation import TRUTHS, simulate

if TYPE_CHECKING:
    from knought.arrays import FloatArray
    from knought.fitting.observations import Observations

DIRECT = Candidate("direct", "A^2- + B^-")
PROTONATED = Candidate("protonated", "HSO3^- + B^-")
ACID = Candidate("acid", "H+ + A^2- + B^-")


@pytest.mark.parametrize(
    ("reactants", "releases", "change"),
    [
        ("A^2- + B^-", "", 4),  # (-3)² - 4 - 1
        ("A^2- + B^+", "", -4),  # (-1)² - 4 - 1
        ("A + B^-", "", 0),
        ("2 H+ + S2O3^2-", "", -6),  # 0 - 2 - 4
        ("H+ + A^2- + B^-", "", -2),  # (-2)² - 1 - 4 - 1
        ("HSO3^- + B^-", "H+", 8),  # (-3)² - 1 - 1 + 1: k = K k2, a proton is released before
        ("HSO3^- + OH^-", "H2O", 2),  # what leaves without a charge changes nothing
    ],
)
def test_charges_follow_from_what_enters_the_transition_state(
    reactants: str, releases: str, change: int
) -> None:
    """Δz² = z‡² - Σ ν z² (Brønsted, Bjerrum), by hand beside each."""
    candidate = Candidate("X", reactants, releases)
    assert candidate.charge_change == change
    assert candidate.charge_product == change / 2


def test_a_pre_equilibrium_may_be_written_out_or_in_one() -> None:
    """A + H+ ⇌ AH+, AH+ + B: k = K k₂ and Δz² = Δz²(K) + Δz²(k₂).

    With A^2-, H+, B^-: Δz²(K) = 1 - 4 - 1 = -4; AH^- + B^-: 4 - 1 - 1 = 2; together -2.
    """
    assert ACID.charge_change == -4 + PROTONATED.charge_change == -2


def test_only_two_species_are_a_pair() -> None:
    assert DIRECT.pair is not None
    assert [each.charge for each in DIRECT.pair] == [-2, -1]
    assert Candidate("X", "2 NO").pair is not None
    assert ACID.pair is None
    assert Candidate("X", "HSO3^- + B^-", "H+").pair is None
    assert Candidate("X", "HSO3^- + B^-", "H+").text == "HSO₃⁻ + B⁻ (releasing H⁺)"


STUDIES = 4000
SPAN = np.geomspace(0.02, 0.3, 5)
PRODUCTS = np.array([1.0, 2.0, 3.0])
SHARES = np.array([0.5, 0.3, 0.2])


def batch_log_evidence(seen: Observations, ln_k: FloatArray, products: FloatArray) -> FloatArray:
    """ln of the posterior density at each charge product in every study, ``(m, c)``."""
    grid = open_grid()
    surface = Surface(temperature_law("eyring"), grid.law, 298.15, seen.order)
    flat = np.zeros(seen.runs)
    solutions = open_solver(seen, surface, grid, run_errors(seen, flat, flat)).solve(ln_k)
    j = surface.parameters.index("charge_product")
    means = solutions.means[:, :, 0, j]
    variances = solutions.covariances[:, 0, j, j]
    log_weight = solutions.log_weight[:, :, 0]
    total = np.logaddexp.reduce(log_weight, axis=1)
    columns = [
        np.logaddexp.reduce(
            log_weight - 0.5 * (z - means) ** 2 / variances - 0.5 * np.log(variances), axis=1
        )
        - total
        for z in products
    ]
    return np.stack(columns, axis=1)


@cache
def simulated_candidates(u: float) -> tuple[FloatArray, FloatArray]:
    """Weights of the candidates and which was true, in studies drawn from the open law's priors."""
    random = np.random.default_rng(20_250_601)
    base = simulate(TRUTHS["Güntelberg"], 0.0, SPAN, studies=1, seed=1, u=u)
    seen = base.observations
    true = random.choice(len(PRODUCTS), size=STUDIES, p=SHARES)
    size = random.uniform(1e-10, 12e-10, STUDIES)[:, None]
    c = random.normal(0.1, 0.3, STUDIES)[:, None]
    beta = random.normal(0.0, 0.3, STUDIES)[:, None]
    water, I = debye_huckel(seen.T), seen.ionic_strength
    form = np.sqrt(I) / (1 + water.B * size * np.sqrt(I)) - c * I
    lg = 2 * PRODUCTS[true][:, None] * water.A * form + beta * I
    # With z_A z_B = 0 the first study is the temperature law and its own errors: draw anew.
    plain = simulate(TRUTHS["Güntelberg"], 0.0, SPAN, studies=1, seed=1, u=1e-12).ln_k[0]
    ln_k = plain + np.log(10.0) * lg + u * random.standard_normal(lg.shape)
    weights = candidate_weights(SHARES, batch_log_evidence(seen, ln_k, PRODUCTS))
    return weights, np.eye(len(PRODUCTS))[true]


def test_a_candidate_is_right_as_often_as_its_weight_says() -> None:
    """Among all candidates given a weight near w, a fraction w is the true one (4 000 studies).

    Bands of three binomial standard deviations, seeded.
    """
    weights, true = simulated_candidates(u=0.03)
    edges = np.linspace(0, 1, 11)
    counted = 0
    for low, high in pairwise(edges):
        inside = (weights >= low) & (weights <= high)
        n = int(inside.sum())
        if n < 50:
            continue
        said, right = float(weights[inside].mean()), float(true[inside].mean())
        assert right == pytest.approx(said, abs=3 * math.sqrt(said * (1 - said) / n) + 2e-3)
        counted += 1
    assert counted >= 8


def test_the_heaviest_candidate_is_the_true_one_as_often_as_it_weighs() -> None:
    weights, true = simulated_candidates(u=0.03)
    heaviest = weights.argmax(axis=1)
    right = float(true[np.arange(STUDIES), heaviest].mean())
    said = float(weights.max(axis=1).mean())
    assert right == pytest.approx(said, abs=3 * math.sqrt(said * (1 - said) / STUDIES))
    assert said > 0.6


@pytest.mark.parametrize("truth", ["extended, 5 Å", "Davies 0.2", "SIT, β = -0.3", "Pitzer form"])
def test_the_true_charges_lead_under_laws_that_are_not_the_open_one(truth: str) -> None:
    """Truths of the named forms: the heaviest is right at least as often as it weighs, nearly."""
    right, said = [], []
    for i, z in enumerate(PRODUCTS):
        made = simulate(TRUTHS[truth], z, SPAN, studies=300, seed=50 + i, u=0.03)
        evidence = batch_log_evidence(made.observations, made.ln_k, PRODUCTS)
        weights = candidate_weights(np.full(3, 1 / 3), evidence)
        right.append(np.mean(weights.argmax(axis=1) == i))
        said.append(np.mean(weights.max(axis=1)))
    assert np.mean(right) >= np.mean(said) - 0.05


def test_the_batch_and_the_single_study_are_one_computation() -> None:
    made = simulate(TRUTHS["Davies 0.3"], 2, SPAN, studies=3, seed=9, u=0.03)
    candidates = [Candidate(f"z{z}", text) for z, text in enumerate(("A^- + B^-", "A^2- + B^-"))]
    products = np.array([each.charge_product for each in candidates])
    batch = candidate_weights(
        np.full(2, 0.5), batch_log_evidence(made.observations, made.ln_k, products)
    )
    for i in range(3):
        seen = type(made.observations)(**{**vars(made.observations), "ln_k": made.ln_k[i]})
        weighing = weigh(fit_open(seen, scatter="given"), candidates)
        assert [each.weight for each in weighing.candidates] == pytest.approx(batch[i], abs=1e-9)


def test_candidates_with_the_same_charges_share_their_weight_by_prior() -> None:
    """The salt effect sees Δz² only."""
    twin = Candidate("twin", "A^2- + C^-", prior=3.0)
    weighing = weigh(fit(study(noise=1.0, seed=2)), [DIRECT, twin])
    assert [each.weight for each in weighing.candidates] == pytest.approx([0.25, 0.75])
    assert weighing.cannot_tell
    assert weighing.telling is None
    assert any("cannot tell them apart" in each for each in weighing_sentences(weighing))


def test_clear_charges_lead() -> None:
    weighing = weigh(assess(study(noise=1.0, seed=3)), [DIRECT, ACID])
    change, weight = weighing.groups[0]
    assert change == 4
    assert weight == pytest.approx(1.0, abs=1e-6)
    assert not weighing.cannot_tell
    text = " ".join(weighing_sentences(weighing))
    assert "favour Δz² = 4 (direct)" in text
    assert "open law" in text
    laws = {each.salt_law for each in weighing.candidates[0].distances}
    assert {"open", "guntelberg", "davies", "sit"} <= laws
    assert "prove" not in text


def test_poor_data_cannot_tell_and_name_the_run_that_would() -> None:
    found = fit(
        study(u=0.05, noise=1.0, seed=4, temperatures=(298.15, 308.15), strengths=(0.1, 0.2, 0.3))
    )
    weighing = weigh(found, [DIRECT, PROTONATED])
    assert weighing.cannot_tell
    telling = weighing.telling
    assert telling is not None
    # What tells charges apart is low ionic strength, far below what was measured.
    assert telling.I < 0.02
    assert set(telling.charge_products) == {1.0, 2.0}
    text = " ".join(weighing_sentences(weighing))
    assert "We cannot tell" in text
    assert f"I = {telling.I:.3g} mol/L" in text


def test_the_named_run_keeps_within_reach() -> None:
    found = fit(
        study(u=0.05, noise=1.0, seed=4, temperatures=(298.15, 308.15), strengths=(0.1, 0.2, 0.3))
    )
    telling = weigh(found, [DIRECT, PROTONATED], lowest_ionic_strength=0.01).telling
    assert telling is not None
    assert pytest.approx(0.01) == telling.I


def test_the_named_run_separates_what_it_says() -> None:
    """Measured there as one candidate predicts, the weights move to it."""
    table = study(
        u=0.05, noise=1.0, seed=4, temperatures=(298.15, 308.15), strengths=(0.1, 0.2, 0.3)
    )
    weighing = weigh(fit(table), [DIRECT, PROTONATED])
    run = weighing.telling
    assert run is not None
    for product, k in zip(run.charge_products, run.predicted, strict=True):
        assert table.I is not None
        assert table.u_k is not None
        more = RateTable.from_arrays(
            T=np.append(table.T, run.T),
            k=np.append(table.k, k),
            I=np.append(table.I, run.I),
            u_k=np.append(table.u_k, 0.05 * k),
            unit="L mol^-1 s^-1",
        )
        after = weigh(fit(more, scatter="given"), [DIRECT, PROTONATED])
        leading = max(after.candidates, key=lambda each: each.weight)
        assert leading.candidate.charge_product == product


def test_one_ionic_strength_leaves_the_weights_as_they_were() -> None:
    found = assess(study(strengths=(0.1,)))
    weighing = weigh(found, [DIRECT, Candidate("other", "A^- + B^-", prior=3.0)])
    assert weighing.fit is None
    assert [each.weight for each in weighing.candidates] == [0.25, 0.75]
    assert weighing.cannot_tell
    assert any("say nothing of the charges" in each for each in weighing_sentences(weighing))


def test_an_order_that_the_unit_of_k_contradicts_excludes() -> None:
    wrong = Candidate("third", "H+ + A^2- + B^-", order=Fraction(3))
    weighing = weigh(fit(study()), [DIRECT, wrong])
    assert weighing.candidates[1].weight == 0.0
    assert "order 3" in weighing.candidates[1].excluded
    assert any("third is left out" in each for each in weighing_sentences(weighing))
    with pytest.raises(InputError, match="every candidate"):
        weigh(fit(study()), [wrong])


def test_when_no_candidate_is_near_that_is_said() -> None:
    far = [Candidate("a", "A^2+ + B^2-"), Candidate("b", "A^3+ + B^2-")]
    weighing = weigh(fit(study()), far)
    assert weighing.none_fits
    assert any("another mechanism should be thought of" in s for s in weighing_sentences(weighing))


def test_evidence_far_out_does_not_underflow() -> None:
    far = [Candidate("a", "A^3+ + B^3-"), Candidate("b", "A^2+ + B^3-")]
    found = fit(study(u=0.001), scatter="given")
    weighing = weigh(found, far)
    assert all(math.isfinite(each.log_evidence) for each in weighing.candidates)
    assert sum(each.weight for each in weighing.candidates) == pytest.approx(1.0)


def test_expectations_are_told_beside_the_weights() -> None:
    expects = Candidate(
        "ordered",
        "A^2- + B^-",
        expectations=(
            Expectation("activation_entropy", high=0.0),
            Expectation("activation_enthalpy", 40e3, 70e3),
            Expectation("activation_energy", low=80e3),
        ),
    )
    weighing = weigh(fit(study(noise=1.0, seed=5)), [expects, ACID])
    entropy, enthalpy, energy = weighing.candidates[0].met
    # ln A = ln 1e10 < ln(e k_B T/h) = 30.46 at 25 °C: ΔS‡ = -61.8 J/(K mol), clearly negative.
    assert entropy.probability == pytest.approx(1.0, abs=1e-6)
    assert enthalpy.probability == pytest.approx(1.0, abs=1e-6)
    assert energy.probability == pytest.approx(0.0, abs=1e-6)
    text = " ".join(weighing_sentences(weighing))
    assert "below 0 J/(K mol)" in text
    assert "between 40 and 70 kJ/mol" in text
    assert "above 80 kJ/mol" in text


def test_charges_given_for_the_headline_do_not_decide_the_weighing() -> None:
    given = assess(study(noise=1.0, seed=6), reactants="A^2- + B^-")
    free = assess(study(noise=1.0, seed=6))
    weights = [
        [each.weight for each in weigh(found, [DIRECT, PROTONATED]).candidates]
        for found in (given, free)
    ]
    assert weights[0] == pytest.approx(weights[1], rel=1e-12)


def test_scatter_that_is_not_stated_weighs_too() -> None:
    weighing = weigh(fit(study(noise=1.0, seed=7, stated=False)), [DIRECT, ACID])
    assert weighing.candidates[0].weight > 0.9


def salted(factor: float) -> RateTable:
    table = study(noise=0.5, seed=8)
    at_high = np.asarray(table.I) >= 0.05
    other = np.where(at_high, factor, 1.0)
    assert table.I is not None
    k = np.concatenate([table.k, table.k * other])
    return RateTable.from_arrays(
        T=np.tile(table.T, 2),
        I=np.tile(table.I, 2),
        k=k,
        u_k=0.02 * k,
        unit="L mol^-1 s^-1",
        salt=["NaClO4"] * len(table) + ["KNO3"] * len(table),
    )


def test_salts_that_disagree_at_one_ionic_strength_name_ion_pairing() -> None:
    weighing = weigh(assess(salted(1.3)), [DIRECT, ACID])
    assert len(weighing.salts) == 8
    first = weighing.salts[0]
    assert first.ratio == pytest.approx(1.3, abs=0.08)
    assert first.salts[0].salt == "KNO3"
    text = " ".join(weighing_sentences(weighing))
    assert "Ion pairing or the counter-ion" in text
    assert "Olson and Simonson 1949" in text


def test_salts_that_agree_are_no_matter() -> None:
    assert weigh(assess(salted(1.0)), [DIRECT, ACID]).salts == ()


@pytest.mark.parametrize(
    "make",
    [
        lambda: Candidate("X", "A^2- + B^-", prior=0.0),
        lambda: Candidate("X", "???"),
        lambda: Expectation("colour", 0, 1),
        lambda: Expectation("activation_entropy"),
        lambda: Expectation("activation_entropy", 2, 1),
        lambda: weigh(fit(study()), []),
        lambda: weigh(fit(study()), [DIRECT, DIRECT]),
        lambda: telling_run(fit(study()), 1.0, 2.0, lowest_ionic_strength=0.0),
    ],
)
def test_what_is_no_candidate_is_refused(make: object) -> None:
    with pytest.raises(InputError):
        make()  # type: ignore[operator]


def test_the_table_is_not_changed() -> None:
    table = study()
    before = observe(table).ln_k.copy()
    weigh(assess(table), [DIRECT, ACID])
    assert np.array_equal(observe(table).ln_k, before)
