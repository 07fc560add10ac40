"""Sections of a study file for the main job: rates, reaction, laws, priors, shared errors."""

from __future__ import annotations

from typing import Literal

from pydantic import Field, model_validator

from knought.chemistry.units import parse_quantity
from knought.laws.open_law import DEFAULT_PRIORS, Priors
from knought.measurement.shared_errors import KINDS, SharedError
from knought.study_sections.base import Kelvin, LitrePerMol, Metre, MolPerLitre, Section

__all__ = [
    "LawsSection",
    "PriorsSection",
    "RatesSection",
    "ReactionSection",
    "SharedErrorSection",
    "StudySection",
]


class StudySection(Section):
    """``[study]``: what the whole is called."""

    title: str = "Untitled study"
    reference_temperature: Kelvin | None = None
    seed: int = Field(default=20_250_101, ge=0)
    standard_concentration: MolPerLitre = 1.0


class RatesSection(Section):
    """``[rates]``: the table of rate constants, and what its ± means."""

    file: str
    sheet: str | int | None = None
    uncertainty_means: str | None = None
    decimal: Literal[".", ","] | None = None
    excess: str | None = None


class ReactionSection(Section):
    """``[reaction]``: what is known of the rate-determining step."""

    reactants: str | None = None
    charge_product: float | None = None


class LawsSection(Section):
    """``[laws]``: laws of the headline, where they are not ours to choose."""

    temperature: str | None = None
    salt: str | None = None
    ion_size: Metre | None = None


class PriorsSection(Section):
    """``[priors]``: what is known of the open law's å, c and β."""

    ion_size: tuple[Metre, Metre] = DEFAULT_PRIORS.ion_size
    linear_coefficient: tuple[LitrePerMol, LitrePerMol] = DEFAULT_PRIORS.linear_coefficient
    interaction_coefficient: tuple[LitrePerMol, LitrePerMol] = (
        DEFAULT_PRIORS.interaction_coefficient
    )
    constant_size: float = Field(default=DEFAULT_PRIORS.constant_size, ge=0, le=1)

    def priors(self) -> Priors:
        """Return them as the fit takes them."""
        return Priors(
            (self.ion_size[0], self.ion_size[1]),
            (self.linear_coefficient[0], self.linear_coefficient[1]),
            (self.interaction_coefficient[0], self.interaction_coefficient[1]),
            self.constant_size,
        )


def _relative(text: str) -> float:
    return parse_quantity(text, "%") / 100


class SharedErrorSection(Section):
    """``[[shared_errors]]``: an error that runs share, or one like it that each run has."""

    name: str
    kind: Literal[
        "temperature-offset", "temperature-gain", "factor", "ionic-strength-factor", "by-run"
    ]
    u: str
    batch: str | None = None
    distribution: Literal["normal", "rectangular", "triangular", "t"] = "normal"
    degrees_of_freedom: float | None = None
    calibrated_at: Kelvin = 298.15
    each_run: bool = False
    on_ln_k: dict[str, float] = Field(default_factory=dict)
    on_ln_I: dict[str, float] = Field(default_factory=dict)

    @model_validator(mode="after")
    def _check(self) -> SharedErrorSection:
        self.error()
        return self

    def error(self) -> SharedError:
        """Return it as the fit takes it.

        Raises
        ------
        InputError
            If u has the wrong unit, or a number cannot be.
        """
        return SharedError(
            self.name,
            self.kind,
            _relative(self.u) if KINDS[self.kind] == "1" else parse_quantity(self.u, "K"),
            self.batch,
            self.distribution,
            self.degrees_of_freedom,
            self.calibrated_at,
            self.each_run,
            self.on_ln_k,
            self.on_ln_I,
        )
