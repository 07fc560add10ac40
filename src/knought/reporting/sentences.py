"""Sentences that carry their numbers: what was read, which laws, what the charges may be."""

from __future__ import annotations

import math
from typing import TYPE_CHECKING

from knought.chemistry.quantities import quantity
from knought.chemistry.species import parse_reactants
from knought.fitting.open_fit import CHARGE_PRODUCTS, OpenFit
from knought.reporting.cells import join_words
from knought.rounding import unit_text

if TYPE_CHECKING:
    from knought.fitting.assess import Assessment
    from knought.fitting.found import Found
    from knought.laws.open_law import Priors

__all__ = [
    "charge_sentences",
    "check_sentences",
    "laws_sentence",
    "prior_sentence",
    "runs_sentence",
]

#: Integer charge products lighter than this are not listed.
_LISTED_WEIGHT = 0.005

_PRIOR_WORDS = {
    "ion_size": "å",
    "linear_coefficient": "c",
    "interaction_coefficient": "β",
}


def runs_sentence(assessment: Assessment) -> str:
    """Return how many runs were read from where, and the conditions that they cover."""
    rates, seen = assessment.rates, assessment.observations
    name = rates.source.name if rates.source is not None else "table"
    temperatures, strengths = seen.temperature_levels, seen.ionic_strength_levels
    parts = [f"{name}: {seen.runs} runs"]
    if seen.runs != len(rates):
        parts[0] += f" used of {len(rates)}"
    span = (
        f"{temperatures[0]:.2f} K"
        if len(temperatures) == 1
        else f"{temperatures[0]:.2f} to {temperatures[-1]:.2f} K ({len(temperatures)} temperatures)"
    )
    parts.append(span)
    if len(strengths) == 1:
        parts.append(f"I = {strengths[0]:.3g} mol/L")
    elif len(strengths) > 1:
        parts.append(
            f"I = {strengths[0]:.3g} to {strengths[-1]:.3g} mol/L ({len(strengths)} levels)"
        )
    parts.append(f"order {rates.order}, k in {unit_text(rates.rate_constant_unit)}")
    return ", ".join(parts) + "."


def laws_sentence(assessment: Assessment) -> str:
    """Return which laws the headline rests on, and its priors or given charges."""
    found, choices = assessment.headline, assessment.choices
    text = f"Temperature law: {found.surface.temperature_law.words}. "
    text += f"Salt law: {found.surface.salt_law.words}"
    if isinstance(found, OpenFit):
        text += f", {prior_sentence(found.grid.priors)}"
    text += "."
    if choices.charge_product is not None:
        source = f"from {written_reactants(choices.reactants)}" if choices.reactants else "given"
        text += f" Charge product {_signed(choices.charge_product)} ({source})."
    return text


def written_reactants(text: str) -> str:
    """Return reactants with their charges raised, ``"A²⁻ + B⁻"``."""
    parts = [
        f"{number} {species}" if number > 1 else str(species)
        for number, species in parse_reactants(text)
    ]
    return " + ".join(parts)


def prior_sentence(priors: Priors) -> str:
    """Return the priors of the open law as a phrase."""
    size = quantity("ion_size")
    low, high = (f"{size.shown(bound):g}" for bound in priors.ion_size)
    parts = [f"å {low} Å" if low == high else f"å uniform from {low} to {high} Å"]
    for sign, (mean, deviation) in (
        ("c", priors.linear_coefficient),
        ("β", priors.interaction_coefficient),
    ):
        parts.append(
            f"{sign} = {mean:g} ± {deviation:g} L/mol" if deviation else f"{sign} {mean:g}"
        )
    if priors.constant_size in {0.0, 1.0}:
        parts.append(f"{'å' if priors.constant_size else 'B å'} the same at every temperature")
    else:
        parts.append(f"å (rather than B å) the same at every T in {priors.constant_size:.0%}")
    return f"with {join_words(parts)} before the data"


def charge_sentences(found: Found) -> list[str]:
    """Return what the runs say of the integer charge products, and of the priors."""
    if not isinstance(found, OpenFit):
        return []
    sentences = []
    weights = found.charge_product_weights
    if weights:
        heavy = sorted(
            (z for z, weight in weights.items() if weight >= _LISTED_WEIGHT),
            key=lambda z: -weights[z],
        )
        listed = [f"{weights[z]:.2f} for {_signed(z)}" for z in heavy]
        ends = f"{_signed(CHARGE_PRODUCTS[0])} to {_signed(CHARGE_PRODUCTS[-1])}"
        sentences.append(
            f"Weights of the integer charge products ({ends}, "
            f"alike before the data): {', '.join(listed)}."
        )
    shares = [f"{_PRIOR_WORDS[name]} {share:.0%}" for name, share in found.prior_share.items()]
    if shares:
        sentences.append(
            "Left of the prior widths after the data (100 % means that the runs say nothing of "
            f"it): {join_words(shares)}."
        )
    return sentences


def check_sentences(assessment: Assessment) -> list[str]:
    """Return how the fit of k compares with that of ln k, and what replicates say."""
    sentences = []
    checked = assessment.cross_check
    if checked is not None and checked.shifts:
        # As printed: among shifts that read alike, rounding noise would choose the name.
        name, shift = max(checked.shifts.items(), key=lambda pair: round(abs(pair[1]), 2))
        words = checked.in_ln_k.parameters[name].quantity.words
        sentences.append(
            f"Fitting k instead of ln k ({checked.in_ln_k.surface.salt_law.words} law) moves no "
            f"result by more than {abs(shift):.2f} of its standard uncertainties ({words})."
        )
    repeated = assessment.replicates
    if repeated is not None:
        stated = (
            ""
            if math.isnan(repeated.typical_u)
            else f", against a stated u of {repeated.typical_u:.3f}"
        )
        sentences.append(
            f"Runs repeated at {_counted(repeated.groups, 'condition')} scatter with s(ln k) = "
            f"{repeated.standard_deviation:.3f} "
            f"({_counted(repeated.degrees_of_freedom, 'degree')} of freedom){stated}."
        )
    return sentences


def _counted(number: int, word: str) -> str:
    return f"{number} {word}" if number == 1 else f"{number} {word}s"


def _signed(number: float) -> str:
    return f"{number:g}".replace("-", "−")
