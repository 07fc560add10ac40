"""Sentences on the mechanism: each with its number and the law it rests on. None says "proves"."""

from __future__ import annotations

import math
from typing import TYPE_CHECKING

from knought.discussion.literature_sentences import probability_text, signed_fixed
from knought.discussion.standing import law_words, signed
from knought.rounding import brief

if TYPE_CHECKING:
    from collections.abc import Sequence

    from knought.discussion.activation_shift import Shift
    from knought.discussion.background import Background
    from knought.discussion.compensation import Compensation
    from knought.discussion.electrostatics import ElectrostaticPart
    from knought.discussion.encounter_check import EncounterCheck
    from knought.discussion.entropy_sign import EntropySign
    from knought.discussion.mechanism import Met, Weighed, Weighing
    from knought.discussion.salt_pairing import SaltDisagreement
    from knought.discussion.solvent import SolventSeries
    from knought.discussion.telling_run import TellingRun

__all__ = [
    "background_sentences",
    "compensation_sentences",
    "electrostatic_sentence",
    "encounter_sentences",
    "entropy_sentence",
    "salt_sentence",
    "shift_sentence",
    "solvent_sentence",
    "telling_sentence",
    "weighing_sentences",
]

_NAMES = {
    "activation_entropy": ("ΔS‡", 1.0, "J/(K mol)"),
    "activation_enthalpy": ("ΔH‡", 1e-3, "kJ/mol"),
    "activation_energy": ("Eₐ", 1e-3, "kJ/mol"),
}


def weighing_sentences(weighing: Weighing) -> list[str]:
    """Return what the salt effect says of the candidates."""
    listed = weighing.candidates
    if weighing.fit is None:
        sentences = [
            "The runs alone say nothing of the charges (one ionic strength, or none): the weights "
            "of the candidates are those before the data. We cannot tell. Measure at three more "
            "ionic strengths at least."
        ]
    else:
        laws = law_words(weighing.fit)
        prior = ", ".join(f"{_share(each.prior)} for {each.candidate.name}" for each in listed)
        after = ", ".join(
            f"{_share(each.weight)} for {each.candidate.name} ({each.candidate.text}, z_A z_B = "
            f"{signed(each.candidate.charge_product)})"
            for each in sorted(listed, key=lambda each: -each.weight)
        )
        sentences = [
            f"Weights of the candidates from the salt effect: {after} ({laws}; before the data "
            f"{prior}). They compare the candidates given and no others.",
            _verdict(weighing),
        ]
    for each in listed:
        sentences += _candidate(each)
    if weighing.none_fits:
        nearest = min(abs(each.distances[0].standard_uncertainties) for each in listed)
        sentences.append(
            "No candidate's charge product is near the one that the runs give (the nearest is "
            f"{nearest:.1f} standard uncertainties away): the weights say which is least far, and "
            "another mechanism should be thought of."
        )
    if weighing.telling is not None:
        sentences.append(telling_sentence(weighing.telling))
    return sentences + [salt_sentence(each) for each in weighing.salts]


def _verdict(weighing: Weighing) -> str:
    change, weight = weighing.groups[0]
    named = [
        each.candidate.name
        for each in weighing.candidates
        if each.candidate.charge_change == change
    ]
    alike = (
        f" {' and '.join(named)} share it and cannot be told apart by the salt effect, whatever "
        "the data."
        if len(named) > 1
        else ""
    )
    if len(weighing.groups) < 2:
        return (
            f"All candidates have Δz² = {signed(change)}: the salt effect cannot tell them apart."
        )
    if weighing.cannot_tell:
        return (
            f"We cannot tell: no Δz² carries 95 % of the weight (the heaviest, {signed(change)}, "
            f"carries {_share(weight)}).{alike}"
        )
    return (
        f"The runs favour Δz² = {signed(change)} ({' or '.join(named)}), with {_share(weight)} of "
        f"the weight among these candidates.{alike}"
    )


def _candidate(each: Weighed) -> list[str]:
    name = each.candidate.name
    if each.excluded:
        return [f"{name} is left out: {each.excluded}."]
    sentences = []
    if each.distances:
        sentences.append(_distance(each))
    return sentences + [_met(name, met) for met in each.met]


def _distance(each: Weighed) -> str:
    """Return how far a candidate's charges are from those found, under the open law and others."""
    first, *others = each.distances
    text = (
        f"{each.candidate.name}: its z_A z_B = {signed(each.candidate.charge_product)} lies "
        f"{signed_one(first.standard_uncertainties)} standard uncertainties from the "
        f"{signed(round(first.found, 2))} ± {first.standard_uncertainty:.2g} found "
        f"({first.temperature_law}, {first.salt_law} law)"
    )
    named = [other for other in others if other.describes and other.salt_law != first.salt_law]
    if named:
        ends = sorted(named, key=lambda other: other.standard_uncertainties)
        low, high = ends[0], ends[-1]
        text += (
            f", and {signed_one(low.standard_uncertainties)} ({low.salt_law}) to "
            f"{signed_one(high.standard_uncertainties)} ({high.salt_law}) under the named laws "
            "that describe the runs"
        )
    return text + "."


def _met(name: str, met: Met) -> str:
    sign, factor, unit = _NAMES[met.expectation.name]
    low, high = met.expectation.low * factor, met.expectation.high * factor
    if math.isinf(low):
        span = f"below {signed(high)} {unit}"
    elif math.isinf(high):
        span = f"above {signed(low)} {unit}"
    else:
        span = f"between {signed(low)} and {signed(high)} {unit}"
    if math.isnan(met.probability):
        return f"{name} expects {sign} {span}; the runs, at one temperature, do not say."
    return (
        f"{name} expects {sign} {span} at I → 0; with its charges given, that holds with "
        f"probability {_share(met.probability)} (not part of its weight)."
    )


def telling_sentence(run: TellingRun) -> str:
    """Return which single further run would tell the two leading charge products."""
    first, second = (signed(each) for each in run.charge_products)
    return (
        f"The one further run that would tell z_A z_B = {first} from {second} best: "
        f"{run.T:.2f} K and I = {run.I:.3g} mol/L, where the two expect k to differ by a factor "
        f"{max(run.predicted) / min(run.predicted):.3g} (open law, u(k)/k = "
        f"{run.run_uncertainty:.2g}: {run.separation:.1f} standard uncertainties apart)."
        + ("" if run.tells else " One run will hardly be enough; plan several.")
    )


def salt_sentence(found: SaltDisagreement) -> str:
    """Return where salts disagree, and what that usually means."""
    listed = ", ".join(f"{each.salt} ({each.runs} runs)" for each in found.salts)
    return (
        f"At {found.T:.2f} K and I = {found.I:.3g} mol/L the salts {listed} give rate constants "
        f"that differ by up to a factor {found.ratio:.3g} "
        f"({probability_text(found.probability)}): I alone "
        "does not say what k is. Ion pairing or the counter-ion in the transition state is to be "
        "thought of; for like-charged ions the counter-ion can matter more than I (Olson and "
        "Simonson 1949)."
    )


def encounter_sentences(check: EncounterCheck) -> list[str]:
    """Return how far k is from the diffusion limit."""
    limit = check.limit
    place = int(limit.T.argmin())
    highest = int(check.share.argmax())
    sentences = [
        f"The diffusion limit is {brief(float(limit.rate_constant.min()), 2)} to "
        f"{brief(float(limit.rate_constant.max()), 2)} L mol⁻¹ s⁻¹ over {limit.T.min():.2f} to "
        f"{limit.T.max():.2f} K (Debye factor {limit.debye_factor[place]:.3g} at the lowest, "
        f"R = {limit.contact_distance * 1e10:.3g} Å, z_A z_B = {signed(limit.charge_product)}; "
        f"{limit.source}), with an apparent activation energy of "
        f"{limit.activation_energy[place] / 1e3:.1f} kJ/mol of its own."
    ]
    share = check.share[highest]
    if not check.near:
        sentences.append(
            f"k is at most {brief(float(share), 1)} of it: meeting is not what limits the rate, "
            "and no correction is made."
        )
        return sentences
    activated = check.activated
    if activated is None or not math.isfinite(float(activated[highest])):
        sentences.append(
            f"k reaches the limit at {limit.T[highest]:.2f} K ({brief(float(share), 2)} of it): "
            "its temperature dependence is that of diffusion, and says little of the step itself."
        )
        return sentences
    sentences.append(
        f"k comes within a factor of 10 of it ({brief(float(share), 2)} of it at "
        f"{limit.T[highest]:.2f} K): "
        f"corrected for encounter, 1/k = 1/k_D + 1/k_act, the step itself has k_act = "
        f"{brief(float(activated[highest]), 3)} L mol⁻¹ s⁻¹ there."
    )
    return sentences


def electrostatic_sentence(part: ElectrostaticPart) -> str:
    """Return what the charges alone bring to ΔG‡, ΔH‡ and ΔS‡; for one temperature."""
    spread = (
        f" ± {float(part.uncertainty('entropy')):.2g}" if part.contact_distance_uncertainty else ""
    )
    return (
        f"Of ΔS‡, about {signed_one(float(part.entropy))}{spread} J/(K mol) is what charges of "
        f"z_A z_B = {signed(part.charge_product)} bring at {float(part.T):.2f} K and r = "
        f"{part.contact_distance * 1e10:.3g} Å in water (double sphere; of ΔG‡ "
        f"{signed_one(float(part.gibbs_energy) / 1e3)} and of ΔH‡ "
        f"{signed_one(float(part.enthalpy) / 1e3)} kJ/mol): that much of its sign and size says "
        "nothing of how ordered the transition state is."
    )


def entropy_sentence(sign: EntropySign) -> str:
    """Return how sure the sign of ΔS‡ is under every law tried."""
    first = sign.laws[0]
    others = ""
    if len(sign.laws) > 1:
        others = f", at the least {_share(sign.lowest)} under any law that describes the runs"
    text = f"ΔS‡ is negative with probability {_share(first.negative)} ({first.laws}){others}: "
    if sign.supported:
        return text + f"a {sign.supported} ΔS‡ is supported under every law tried."
    return text + "its sign is not settled."


def background_sentences(found: Background) -> list[str]:
    """Return what charges, diffusion and ionic strength bring for one candidate."""
    sentences = []
    if found.shifts:
        sentences.append(shift_sentence(found.shifts, found.laws))
    if found.sign is not None:
        sentences.append(entropy_sentence(found.sign))
    if found.electrostatic is not None:
        sentences.append(electrostatic_sentence(found.electrostatic))
    if found.encounter is not None:
        sentences += encounter_sentences(found.encounter)
    return [*sentences, *found.left_out]


def shift_sentence(shifts: Sequence[Shift], laws: str) -> str:
    """Return how much the highest ionic strength changes k, E_a and ΔS‡."""
    last = max(shifts, key=lambda each: each.I)
    text = (
        f"At I = {last.I:.3g} mol/L and {last.T:.2f} K, k is {last.ratio:.3g} times that at I → 0"
    )
    if last.activation_energy is not None and last.activation_entropy is not None:
        text += (
            f", Eₐ differs by {signed_one(last.activation_energy[0] / 1e3)} ± "
            f"{last.activation_energy[1] / 1e3:.1f} kJ/mol and ΔS‡ by "
            f"{signed_one(last.activation_entropy[0])} ± {last.activation_entropy[1]:.1f} "
            "J/(K mol)"
        )
    return f"{text} ({laws}): values at different ionic strengths are not comparable as they stand."


def compensation_sentences(found: Compensation) -> list[str]:
    """Return what a plot of ΔH‡ against ΔS‡ does and does not say."""
    low, high = (signed_fixed(end, 0) for end in found.slope_interval)
    sentences = [
        f"ΔH‡ against ΔS‡ of {len(found.points)} reactions has a slope of "
        f"{signed_fixed(found.slope, 0)} K (95 % interval {low} to {high} K from the scatter, "
        f"ν = {found.degrees_of_freedom}); the harmonic mean of the experimental temperatures is "
        f"{found.harmonic_mean_temperature:.0f} K."
    ]
    if found.artefact_suspected:
        sentences.append(
            "The interval holds that temperature: errors of ΔH‡ and ΔS‡ alone, which go together, "
            "could give such a line (the isokinetic artefact; Krug, Hunter and Grieger 1976). It "
            "is no evidence of a common mechanism."
        )
    sentences.append(
        f"Against ΔG‡ at {found.harmonic_mean_temperature:.0f} K, where the errors are nearly "
        f"uncorrelated, ΔH‡ has a slope of {signed_fixed(found.gibbs_slope, 2)} with a "
        f"standard uncertainty of {found.gibbs_slope_uncertainty:.2g} from the scatter: "
        + ("a relation beyond the errors." if found.related else "no relation is shown.")
    )
    return sentences


def solvent_sentence(series: SolventSeries) -> str:
    """Return what the slope of ln k against 1/ε_r supports."""
    low, high = series.interval()
    sign = {1: "like charges", -1: "opposite charges", 0: "no sign of z_A z_B at 95 %"}
    return (
        f"ln k against 1/ε_r has a slope of {signed(float(f'{series.slope:.3g}'))} ± "
        f"{series.slope_uncertainty:.2g} (95 % interval {signed(float(f'{low:.3g}'))} to "
        f"{signed(float(f'{high:.3g}'))}, {len(series.ln_k)} solvents at {series.T:.2f} K): under "
        f"the double-sphere model it supports {sign[series.supported_sign]}."
    )


def signed_one(number: float) -> str:
    """Return a number with one decimal and its sign, the minus typographic."""
    return f"{number:+.1f}".replace("-", "−")


def _share(probability: float) -> str:
    """Return a probability as percent, never as 0 % or 100 %."""
    if probability >= 0.9995:
        return "more than 99.9 %"
    if probability < 0.0005:
        return "less than 0.1 %"
    digits = 1 if probability > 0.99 or probability < 0.01 else 0
    return f"{probability * 100:.{digits}f} %"
