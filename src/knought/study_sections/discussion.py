"""``[literature]`` and ``[[candidates]]`` of a study file."""

from __future__ import annotations

import math
from fractions import Fraction
from typing import Literal

from pydantic import Field

from knought.chemistry.order_text import parse_order
from knought.discussion.candidates import Candidate, Expectation
from knought.study_sections.base import (
    Diffusivity,
    Energy,
    Entropy,
    Kelvin,
    Metre,
    MolPerLitre,
    Section,
)

__all__ = ["CandidateSection", "LiteratureSection"]


#: A sign, or a range of which one end may be left out.
Sign = Literal["negative", "positive"]


class LiteratureSection(Section):
    """``[literature]``: the table of literature values, and how papers are combined."""

    file: str
    sheet: str | int | None = None
    uncertainty_means: str | None = None
    consensus: Literal["dersimonian-laird", "paule-mandel", "fixed"] = "dersimonian-laird"
    temperature: Kelvin | None = None
    ionic_strength: MolPerLitre | None = None


class CandidateSection(Section):
    """``[[candidates]]``: one candidate mechanism."""

    name: str
    reactants: str
    releases: str = ""
    prior: float = Field(default=1.0, gt=0)
    order: int | float | str | None = None
    entropy_sign: Sign | None = None
    lowest_entropy: Entropy | None = None
    highest_entropy: Entropy | None = None
    lowest_enthalpy: Energy | None = None
    highest_enthalpy: Energy | None = None
    contact_distance: Metre | None = None
    contact_distance_uncertainty: Metre = 0.0
    diffusion_coefficients: tuple[Diffusivity, Diffusivity] | None = None
    note: str = ""

    def candidate(self) -> Candidate:
        """Return it as the weighing takes it.

        Raises
        ------
        InputError
            If its species or its order cannot be read, or a range is out of order.
        """
        return Candidate(
            name=self.name,
            reactants=self.reactants,
            releases=self.releases,
            prior=self.prior,
            expectations=self._expectations(),
            order=None if self.order is None else self._order(self.order),
            contact_distance=self.contact_distance,
            contact_distance_uncertainty=self.contact_distance_uncertainty,
            diffusion_coefficients=self.diffusion_coefficients,
            note=self.note,
        )

    @staticmethod
    def _order(order: float | str) -> Fraction:
        return parse_order(str(order))

    def _expectations(self) -> tuple[Expectation, ...]:
        found = []
        low, high = self.lowest_entropy, self.highest_entropy
        if self.entropy_sign == "negative":
            high = 0.0 if high is None else min(high, 0.0)
        elif self.entropy_sign == "positive":
            low = 0.0 if low is None else max(low, 0.0)
        for name, ends in (
            ("activation_entropy", (low, high)),
            ("activation_enthalpy", (self.lowest_enthalpy, self.highest_enthalpy)),
        ):
            if ends != (None, None):
                found.append(
                    Expectation(
                        name,
                        -math.inf if ends[0] is None else ends[0],
                        math.inf if ends[1] is None else ends[1],
                    )
                )
        return tuple(found)
