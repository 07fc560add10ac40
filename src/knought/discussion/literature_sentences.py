"""Sentences on the literature: each with its number and the law it rests on."""

from __future__ import annotations

import math
from typing import TYPE_CHECKING

from knought.discussion.compare import EXTRAPOLATED_K
from knought.discussion.standing import law_words, signed
from knought.rounding import rounded, unit_text

if TYPE_CHECKING:
    from knought.discussion.carried import CarriedConsensus
    from knought.discussion.compare import Comparison
    from knought.discussion.matched import Match

__all__ = [
    "comparison_sentences",
    "consensus_sentences",
    "explanation_text",
    "match_sentence",
    "probability_text",
    "signed_fixed",
    "size_of_difference",
    "verdict_text",
]

#: Fixed-point digits of kJ/mol and J/(K mol) in sentences.
_SHOWN = {
    "activation_energy": (1e-3, "kJ/mol"),
    "activation_enthalpy": (1e-3, "kJ/mol"),
    "activation_gibbs_energy": (1e-3, "kJ/mol"),
    "activation_entropy": (1.0, "J/(K mol)"),
    "ln_pre_exponential_factor": (1.0, ""),
    "charge_product": (1.0, ""),
}

#: Smaller probabilities are not told apart: the errors are not that normal.
_LEAST_PROBABILITY = 1e-6

#: Significant digits of a consensus and its interval.
_CONSENSUS_DIGITS = 4

_METHODS = {
    "dersimonian-laird": "DerSimonian and Laird",
    "paule-mandel": "Paule and Mandel",
    "fixed": "weights 1/u²",
}


def verdict_text(match: Match) -> str:
    """Return the verdict with its number.

    Parameters
    ----------
    match
        A literature value and ours at its conditions.

    Returns
    -------
    str
        ``"agrees within 1.2 combined standard uncertainties"``, ``"differs by a factor 1.8, z =
        4.1"``, ``"cannot judge: no uncertainty given; ours is larger by a factor 1.1"``, ...
    """
    if match.verdict == "not comparable":
        return f"not comparable: {match.reason}"
    size = size_of_difference(match)
    if match.verdict == "cannot judge":
        return f"cannot judge: {match.reason}; {size}"
    if match.verdict == "agrees":
        # Rounded up, so that "within" holds.
        within = math.ceil(abs(match.z) * 10 - 1e-9) / 10
        return f"agrees within {within:.1f} combined standard uncertainties"
    doubt = "questionable: " if match.verdict == "questionable" else ""
    return f"{doubt}differs, {size}, z = {signed_fixed(match.z, 1)}"


def size_of_difference(match: Match) -> str:
    """Return the difference in words, ``"ours is larger by a factor 1.8"``."""
    larger = "larger" if match.difference >= 0 else "smaller"
    if match.literature.logarithmic:
        return f"ours is {larger} by a factor {math.exp(abs(match.difference)):.3g}"
    factor, unit = _SHOWN[match.literature.name]
    return f"ours is {larger} by {abs(match.difference) * factor:.3g} {unit}".rstrip()


def explanation_text(match: Match) -> str:
    """Return the confusions that would bring the paper to ours; empty where none does."""
    parts = []
    for each in match.explanations:
        if match.literature.logarithmic:
            size, left = f"a factor {math.exp(each.shift):.3g}", f"{math.exp(each.left):.3g} times"
        else:
            factor, unit = _SHOWN[match.literature.name]
            size = f"{signed_fixed(each.shift * factor, 2)} {unit}".rstrip()
            left = f"{signed_fixed(each.left * factor, 2)} {unit}".rstrip()
        parts.append(f"{each.words}: would change it by {size} and leave {left}")
    return "; ".join(parts)


def match_sentence(match: Match, laws: str) -> str:
    """Return one literature value beside ours, with the verdict and the laws.

    Parameters
    ----------
    match
        The two values.
    laws
        The laws that ours rests on, in words.
    """
    value = match.literature
    if match.ours is None:
        return f"{value.source}: {verdict_text(match)}."
    what = match.ours.quantity
    theirs = what.written(
        math.exp(match.literature_value) if value.logarithmic else match.literature_value,
        value.standard_uncertainty,
    )
    where = f"{match.T:.2f} K"
    if match.I is not None:
        where += " and I → 0" if match.I == 0 else f" and I = {match.I:.3g} mol/L"
    text = (
        f"{value.source}: {what.symbol.text} = {theirs} ({value.spread.words}), ours at {where} "
        f"{match.ours.written()} ({laws}); {verdict_text(match)}"
    )
    if math.isfinite(match.e_number):
        # Values that differ have their z in the verdict.
        z = f"z = {signed_fixed(match.z, 1)}, " if match.verdict == "agrees" else ""
        text += f" ({z}E_n = {signed_fixed(match.e_number, 2)})"
    text += "."
    if match.assumed:
        text += f" Assumed: {'; '.join(match.assumed)}."
    offered = explanation_text(match)
    if offered:
        text += f" To check in the paper: {offered}."
    if match.caveats:
        text += f" {' '.join(caveat.message for caveat in match.caveats)}"
    return text


def consensus_sentences(carried: CarriedConsensus) -> list[str]:
    """Return what several papers give together on our conditions."""
    where = f"{carried.T:.2f} K"
    if carried.I is not None:
        where += " and I → 0" if carried.I == 0 else f" and I = {carried.I:.3g} mol/L"
    words = carried.ours.quantity.words
    combined = carried.consensus
    if combined is None:
        return [
            f"Fewer than two papers give an uncertainty of the {words}: no consensus is formed."
        ]
    low, high = combined.hartung_knapp_interval()
    ends = [_shown(carried, each) for each in (combined.value, low, high)]
    sentences = [
        f"{sources_text(carried)} carried to {where} along our surface give {ends[0]} together, "
        f"95 % interval {ends[1]} to {ends[2]} ({words}; {_METHODS[combined.method]}, interval of "
        f"Hartung and Knapp); ours lies {signed_fixed(carried.z, 1)} combined standard "
        "uncertainties from it.",
        f"Their scatter is {combined.birge_ratio:.2f} times what their uncertainties allow "
        f"(Q = {combined.q:.3g}, ν = {combined.degrees_of_freedom}, "
        f"{probability_text(combined.probability)}, I² = {combined.i_squared:.0%}).",
    ]
    if combined.sources > 2:
        without = combined.leave_one_out()
        moved = max(range(len(without)), key=lambda i: abs(without[i].value - combined.value))
        sentences.append(
            f"Without {carried.weighted[moved].literature.source}, which moves it most, they give "
            f"{_shown(carried, without[moved].value)}."
        )
    if len({each.literature.source for each in carried.weighted}) < combined.sources:
        sentences.append(
            "Several values of one paper are taken as independent here; errors they share make "
            "the consensus less sure than it looks."
        )
    if carried.carrying_dominates:
        sentences.append(
            "For one paper at least, carrying it here adds more to its uncertainty than its own ±; "
            "what the papers share by being carried along one surface is in the consensus."
        )
    return sentences


def comparison_sentences(comparison: Comparison) -> list[str]:
    """Return everything that is said of the literature, the cautions included."""
    laws = law_words(comparison.fit)
    sentences = [match_sentence(each, laws) for each in comparison.matches]
    for carried in comparison.consensuses.values():
        sentences += consensus_sentences(carried)
    if comparison.extrapolates:
        sentences.append(EXTRAPOLATED_K)
    return sentences


def sources_text(carried: CarriedConsensus) -> str:
    """Return how many values of how many papers are combined."""
    papers = len({each.literature.source for each in carried.weighted})
    values = len(carried.weighted)
    if papers == values:
        return f"{values} papers"
    return f"{values} values of {papers} paper{'s' if papers > 1 else ''}"


def probability_text(probability: float) -> str:
    """Return ``"p = 0.031"``, or ``"p < 1e-6"`` where its size says no more."""
    return "p < 1e-6" if probability < _LEAST_PROBABILITY else f"p = {probability:.2g}"


def signed_fixed(number: float, decimals: int) -> str:
    """Return a number with fixed decimals and a typographic minus."""
    return signed(0.0) if number == 0 else f"{number:.{decimals}f}".replace("-", "−")


def _shown(carried: CarriedConsensus, value: float) -> str:
    what = carried.ours.quantity
    shown = what.shown(math.exp(value) if carried.logarithmic else value)
    unit = unit_text(what.shown_unit)
    return f"{rounded(shown, digits=_CONSENSUS_DIGITS).number()} {unit}".rstrip()
