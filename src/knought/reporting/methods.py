"""What was done, as sentences for a methods section: weights, laws, constants, version."""

from __future__ import annotations

from typing import TYPE_CHECKING

from knought.fitting.open_fit import OpenFit
from knought.reporting.cells import join_words
from knought.reporting.sentences import prior_sentence

if TYPE_CHECKING:
    from knought.fitting.assess import Assessment
    from knought.fitting.found import Found

__all__ = ["methods_sentences"]

_OPEN_EQUATION = "log10 k = log10 k° + Δz² A(T) [√I/(1 + B å √I) − c I] + β I with Δz² = 2 z_A z_B"


def methods_sentences(assessment: Assessment) -> list[str]:
    """Return sentences for a methods section, each with its numbers.

    Parameters
    ----------
    assessment
        What was found.
    """
    from knought.version import __version__

    found = assessment.headline
    concentration = assessment.choices.standard_concentration
    sentences = [
        f"ln k of {found.observations.runs} runs was fitted by generalised least squares, linear "
        f"in its {len(found.surface.parameters)} parameters, so that every derived quantity comes "
        f"from their joint covariance (knought {__version__}).",
        _weights_sentence(found),
        f"The uncertainties are standard uncertainties {found.includes}. {found.excludes}".strip(),
        _laws_sentence(found),
    ]
    if found.surface.salt_law.needs_water:
        sentences.append(
            "The Debye–Hückel coefficients A(T) and B(T) were computed at every temperature from "
            "the density (IAPWS SR6-08) and permittivity (IAPWS R8-97) of water at 0.1 MPa."
        )
    sentences.append(
        f"Activation parameters hold at {found.reference_temperature:.2f} K, refer to a standard "
        f"concentration of {concentration:g} mol/L and to transition-state theory with a "
        "transmission coefficient of one; constants are the exact ones of the SI and CODATA 2022."
    )
    return sentences


def _weights_sentence(found: Found) -> str:
    seen = found.observations
    if seen.u_given:
        text = "Each run has the weight 1/u², where u = u(k)/k is its relative uncertainty"
    else:
        text = "All runs have the same weight in ln k, as the table states no u(k)"
    if seen.has_abscissa_errors:
        text += ", with its own errors of T and I carried along the slopes of the surface"
    names = found.errors.shared_sources
    if names:
        text += (
            f"; errors that runs share ({join_words(names)}) are further unknowns, known before to "
            "their standard uncertainty"
        )
    return f"{text}."


def _laws_sentence(found: Found) -> str:
    law = found.surface.temperature_law
    text = f"Temperature law ({law.words}): {law.equation.replace(' - ', ' − ')}."
    if isinstance(found, OpenFit):
        return (
            f"{text} Salt law, left open and integrated over: {_OPEN_EQUATION}, "
            f"{prior_sentence(found.grid.priors)}; intervals are exact quantiles of the mixture."
        )
    return f"{text} Salt law: {found.surface.salt_law.words}."
