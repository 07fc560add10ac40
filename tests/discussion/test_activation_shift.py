"""What ionic strength changes, how sure the sign of ΔS‡ is, and k beside the diffusion limit."""

from __future__ import annotations

import math

import numpy as np
import pytest

from knought.chemistry.constants import GAS_CONSTANT
from knought.discussion.activation_shift import activation_shifts
from knought.discussion.background import background
from knought.discussion.candidates import Candidate
from knought.discussion.electrostatics import electrostatic_part
from knought.discussion.encounter_check import encounter_check
from knought.discussion.entropy_sign import entropy_sign
from knought.discussion.mechanism_sentences import (
    background_sentences,
    electrostatic_sentence,
    encounter_sentences,
    entropy_sentence,
    shift_sentence,
)
from knought.discussion.standing import law_words
from knought.errors import InputError
from knought.fitting.assess import assess
from knought.fitting.fit import fit
from knought.measurement.table import RateTable
from tests.discussion.studies import study


def test_the_shift_of_the_design() -> None:
    """z_A z_B = 2, I = 0.1 mol/L, 25 °C, Güntelberg: k/k° ≈ 3.1, E_a +1.5 kJ/mol, ΔS‡ +14.5.

    By hand: lg k/k° = 2 x 2 x 0.51053 x 0.31623/1.31623 = 0.4906, and with dA/dT = 9.4e-4 K^-1
    (from the tabulated A at 20 and 30 °C) E_a rises by ln10 R T² x 4 x 9.36e-4 x 0.2403, which is
    1.53 kJ/mol.
    """
    found = fit(study(), salt_law="guntelberg", charge_product=2.0, scatter="given")
    (shift,) = activation_shifts(found, 0.1, 298.15)
    assert shift.ratio == pytest.approx(10**0.4906, rel=1e-3)
    assert shift.ratio == pytest.approx(3.1, abs=0.05)
    assert shift.activation_energy is not None
    assert shift.activation_entropy is not None
    slope = (0.515347 - 0.505985) / 10  # A at 30 and 20 °C: computed with iapws 1.5.5
    energy = (
        math.log(10) * GAS_CONSTANT * 298.15**2 * 4 * slope * math.sqrt(0.1) / (1 + math.sqrt(0.1))
    )
    assert shift.activation_energy[0] == pytest.approx(energy, rel=2e-3)
    assert shift.activation_energy[0] == pytest.approx(1.5e3, abs=50)
    # ΔS‡ = (ΔH‡ - ΔG‡)/T rises by ΔE_a/T + R ln k/k° = 5.14 + 9.39 J/(K mol).
    entropy = energy / 298.15 + GAS_CONSTANT * math.log(10) * 0.4906
    assert shift.activation_entropy[0] == pytest.approx(entropy, rel=2e-3)
    assert shift.activation_entropy[0] == pytest.approx(14.5, abs=0.05)
    # With law and charges given there is nothing left to be unsure of.
    assert shift.ln_rate_constant[1] == pytest.approx(0.0, abs=1e-9)


def test_shifts_carry_the_joint_uncertainty() -> None:
    found = fit(study(noise=1.0, seed=1))
    shifts = activation_shifts(found)
    assert [each.I for each in shifts] == pytest.approx([0.005, 0.02, 0.05, 0.1])
    last = shifts[-1]
    apart = math.hypot(
        *(float(found.rate_constant(I=I).distribution.standard_deviation) for I in (0.0, 0.1))
    )
    assert 0 < last.ln_rate_constant[1] < apart
    ratio = float(found.rate_constant(I=0.1).value) / float(found.rate_constant().value)
    assert last.ratio == pytest.approx(ratio, rel=1e-9)


def test_without_a_salt_law_or_a_slope_there_is_less_to_say() -> None:
    assert activation_shifts(fit(study(), salt_law="none")) == ()
    (shift,) = activation_shifts(fit(study(temperatures=(298.15,))), 0.05)
    assert shift.activation_energy is None
    assert "E" not in shift_sentence([shift], "open law").split("k is")[1].split("(")[0]
    with pytest.raises(InputError):
        activation_shifts(fit(study()), -0.1)


def test_the_shift_is_said_with_its_law() -> None:
    found = fit(study(), salt_law="guntelberg", scatter="given")
    text = shift_sentence(activation_shifts(found), law_words(found))
    assert text.startswith("At I = 0.1 mol/L and 298.15 K, k is 3.09 times that at I → 0")
    assert "Güntelberg" in text


def test_a_clear_sign_is_supported_under_every_law() -> None:
    sign = entropy_sign(assess(study(noise=1.0, seed=2)))
    assert sign.supported == "negative"
    assert sign.lowest > 0.99
    assert len(sign.laws) > 5
    assert "a negative ΔS‡ is supported under every law tried" in entropy_sentence(sign)


def test_a_positive_sign_is_supported_too() -> None:
    sign = entropy_sign(fit(study(ln_a=math.log(1e15), energy=90e3)))
    assert sign.supported == "positive"
    assert len(sign.laws) == 1


def test_a_sign_within_its_uncertainty_is_not_settled() -> None:
    """ln A = 1 + ln(k_B T/h) at 25 °C makes ΔS‡ zero."""
    zero = 1 + math.log(1.380649e-23 * 298.15 / 6.62607015e-34)
    sign = entropy_sign(fit(study(ln_a=zero, energy=70e3, u=0.05)))
    assert sign.supported == ""
    assert sign.laws[0].negative == pytest.approx(0.5, abs=0.35)
    assert "its sign is not settled" in entropy_sentence(sign)
    with pytest.raises(InputError):
        entropy_sign(fit(study(temperatures=(298.15,))))


def fast(share: float) -> RateTable:
    """Rate constants near the diffusion limit of neutral spheres, 7.4e9 at 25 °C."""
    T = np.repeat([288.15, 298.15, 308.15], 2)
    k = share * 7.4e9 * np.exp(-18e3 / GAS_CONSTANT * (1 / T - 1 / 298.15))
    k = k * np.tile([1.01, 0.99], 3)
    return RateTable.from_arrays(T=T, k=k, u_k=0.02 * k, unit="L mol^-1 s^-1")


def test_a_slow_reaction_is_not_corrected() -> None:
    check = encounter_check(fit(study()), 2.0)
    assert not check.near
    assert check.activated is None
    sentences = encounter_sentences(check)
    assert "no correction is made" in sentences[1]
    assert "apparent activation energy" in sentences[0]


def test_a_fast_reaction_is_corrected_within_a_factor_of_ten() -> None:
    check = encounter_check(fit(fast(0.4)), 0.0)
    assert check.near
    assert check.in_medium
    assert check.activated is not None
    assert check.activated_uncertainty is not None
    # 1/k_act = 1/k - 1/k_D: at 40 % of the limit, k_act = k/0.6.
    assert check.activated[1] / check.rate_constant[1] == pytest.approx(1 / 0.6, rel=0.03)
    relative = check.activated_uncertainty / check.activated
    assert np.all(relative > check.standard_uncertainty / check.rate_constant)
    assert "1/k = 1/k_D + 1/k_act" in encounter_sentences(check)[1]


def test_a_reaction_at_the_limit_says_nothing_of_its_step() -> None:
    check = encounter_check(fit(fast(1.2)), 0.0)
    assert "its temperature dependence is that of diffusion" in encounter_sentences(check)[1]


def test_the_background_gathers_what_applies() -> None:
    found = fit(study(noise=1.0, seed=3))
    direct = Candidate("direct", "A^2- + B^-", contact_distance=4e-10)
    whole = background(found, direct)
    assert whole.electrostatic is not None
    assert whole.encounter is not None
    assert whole.electrostatic.contact_distance == whole.encounter.limit.contact_distance == 4e-10
    assert whole.sign is not None
    assert len(whole.shifts) == 4
    three = background(found, Candidate("three", "H+ + A^2- + B^-"))
    assert three.encounter is None
    assert three.electrostatic is None
    assert "no step of two species" in three.left_out[0]
    assert three.left_out[0] in background_sentences(three)


def test_the_background_keeps_out_of_what_is_no_water() -> None:
    T = np.repeat([400.0, 420.0, 440.0], 2)
    k = 1e10 * np.exp(-60e3 / GAS_CONSTANT / T) * np.tile([1.01, 0.99], 3)
    table = RateTable.from_arrays(T=T, k=k, u_k=0.02 * k, unit="L mol^-1 s^-1")
    found = background(fit(table, reference_temperature=420.0), Candidate("x", "A + B"))
    assert found.encounter is None
    assert "outside 0-100 °C" in found.left_out[0]


def test_the_background_of_a_first_order_k_has_no_limit() -> None:
    T = np.repeat([288.15, 298.15, 308.15], 2)
    k = 1e10 * np.exp(-60e3 / GAS_CONSTANT / T) * np.tile([1.01, 0.99], 3)
    found = background(fit(RateTable.from_arrays(T=T, k=k)), Candidate("x", "A^- + B^-"))
    assert found.encounter is None
    assert found.electrostatic is not None
    assert "order 1" in found.left_out[0]


def test_only_second_order_meets_the_limit() -> None:
    table = RateTable.from_arrays(
        T=[288.15, 298.15, 308.15], k=[1e-3, 2e-3, 4e-3], u_k=[1e-5, 2e-5, 4e-5]
    )
    with pytest.raises(InputError):
        encounter_check(fit(table), 0.0)


def test_the_electrostatic_part_is_said_with_its_uncertainty() -> None:
    text = electrostatic_sentence(electrostatic_part(298.15, 1, 2e-10, 0.2e-10))
    assert "about −40.5 ± 4.1 J/(K mol)" in text
    assert "r = 2 Å" in text
