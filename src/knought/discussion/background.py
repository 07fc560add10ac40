"""What charges, diffusion and ionic strength bring for a candidate, before chemistry is read in.

Gathered in one place, so that a ΔS‡, an E_a or a k is discussed beside what physics alone would
give: the shift with ionic strength, how sure the sign of ΔS‡ is, the electrostatic part of the
activation parameters and the diffusion limit. The last two are those of two species in water; for
anything else the reason why they are not given is kept.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from knought.chemistry.water import COLDEST, HOTTEST
from knought.discussion.activation_shift import Shift, activation_shifts
from knought.discussion.electrostatics import ElectrostaticPart, electrostatic_part
from knought.discussion.encounter_check import EncounterCheck, encounter_check
from knought.discussion.entropy_sign import EntropySign, entropy_sign
from knought.discussion.standing import headline_of, law_words

if TYPE_CHECKING:
    from knought.discussion.candidates import Candidate
    from knought.discussion.standing import Standing

__all__ = ["DEFAULT_CONTACT_DISTANCE", "Background", "background"]

#: Where a candidate gives none, in m: two hydrated ions in contact, common practice, no source.
DEFAULT_CONTACT_DISTANCE = 5e-10


@dataclass(frozen=True, eq=False)
class Background:
    """What charges, diffusion and ionic strength bring.

    Attributes
    ----------
    candidate
        For which.
    laws
        The laws that our numbers rest on, in words.
    shifts
        What the measured ionic strengths change; empty where the fit says nothing of salt.
    sign
        The sign of ΔS‡ under every law tried; None where the runs have one temperature.
    electrostatic
        At T_ref; None where it does not apply.
    encounter
        The diffusion limit beside k; None where it does not apply.
    left_out
        Why something is not given, a sentence each.
    """

    candidate: Candidate
    laws: str
    shifts: tuple[Shift, ...]
    sign: EntropySign | None
    electrostatic: ElectrostaticPart | None
    encounter: EncounterCheck | None
    left_out: tuple[str, ...]


def background(found: Standing, candidate: Candidate) -> Background:
    """Return what charges, diffusion and ionic strength bring for one candidate.

    Parameters
    ----------
    found
        An assessment, or one fit.
    candidate
        The candidate; its contact distance (5 Å if it gives none) and diffusion coefficients are
        used.

    Returns
    -------
    Background

    Raises
    ------
    InputError
        If the contact distance or a diffusion coefficient is out of any sensible range.
    """
    fit = headline_of(found)
    slope = "activation_entropy" in fit.parameters
    left_out = _left_out(found, candidate)
    electrostatic = encounter = None
    distance = candidate.contact_distance or DEFAULT_CONTACT_DISTANCE
    if not left_out:
        electrostatic = electrostatic_part(
            fit.reference_temperature,
            candidate.charge_product,
            distance,
            candidate.contact_distance_uncertainty,
        )
        if fit.observations.order == 2:
            encounter = encounter_check(
                found, candidate.charge_product, distance, candidate.diffusion_coefficients
            )
        else:
            left_out = (
                f"The diffusion limit is that of two species that meet, and k is of order "
                f"{fit.observations.order}: it is not given.",
            )
    return Background(
        candidate=candidate,
        laws=law_words(fit),
        shifts=activation_shifts(found),
        sign=entropy_sign(found) if slope else None,
        electrostatic=electrostatic,
        encounter=encounter,
        left_out=left_out,
    )


def _left_out(found: Standing, candidate: Candidate) -> tuple[str, ...]:
    if candidate.pair is None:
        return (
            f"{candidate.name} is no step of two species: no diffusion limit and no electrostatic "
            "part are given for it.",
        )
    fit = headline_of(found)
    T = np.append(fit.observations.T, fit.reference_temperature)
    if np.any((T < COLDEST) | (T > HOTTEST)):
        return (
            "Temperatures lie outside 0-100 °C, where water is not known to be the solvent: no "
            "diffusion limit and no electrostatic part are given.",
        )
    return ()
