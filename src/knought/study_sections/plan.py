"""``[plan]`` of a study file: what can be reached next, and what the next runs are for."""

from __future__ import annotations

from typing import TYPE_CHECKING, Annotated, Any

from pydantic import BeforeValidator, Field

from knought.discussion.reach import Forbidden
from knought.discussion.reach_text import read_levels
from knought.study_sections.base import Energy, Entropy, Kelvin, MolPerLitre, Section, in_unit

if TYPE_CHECKING:
    from collections.abc import Callable

__all__ = ["ForbiddenSection", "PlanSection"]


def _levels_in(unit: str) -> Callable[[object], tuple[float, ...]]:
    def read(value: object) -> tuple[float, ...]:
        if not isinstance(value, str):
            raise ValueError(f'levels are one string with their unit, "1, 2, 5 {unit}"')
        return read_levels(value, unit)

    return read


Fraction = Annotated[float, BeforeValidator(in_unit("1"))]
Temperatures = Annotated[tuple[float, ...], BeforeValidator(_levels_in("K"))]
IonicStrengths = Annotated[tuple[float, ...], BeforeValidator(_levels_in("mol L^-1"))]


class ForbiddenSection(Section):
    """``[[plan.forbidden]]``: conditions that cannot be set together; bounds left out are open."""

    temperature_from: Kelvin = 0.0
    temperature_to: Kelvin = float("inf")
    ionic_strength_from: MolPerLitre = 0.0
    ionic_strength_to: MolPerLitre = float("inf")

    def forbidden(self) -> Forbidden:
        """Return it as a plan takes it."""
        return Forbidden(
            (self.temperature_from, self.temperature_to),
            (self.ionic_strength_from, self.ionic_strength_to),
        )


class PlanSection(Section):
    """``[plan]``: what the next runs can be, and what they are for."""

    temperatures: Temperatures
    ionic_strengths: IonicStrengths | None = None
    runs: int = Field(ge=1, le=500)
    repeatability: Fraction
    aim: str = "activation_energy"
    temperature_uncertainty: Kelvin = 0.0
    ionic_strength_uncertainty: Fraction = 0.0
    activation_energy: Energy = 50e3
    charge_product: float | None = None
    salts: dict[str, MolPerLitre] = Field(default_factory=dict)
    forbidden: tuple[ForbiddenSection, ...] = ()
    least_temperatures: int | None = Field(default=None, ge=1)
    least_ionic_strengths: int | None = Field(default=None, ge=1)
    runs_a_day: int | None = Field(default=None, ge=1)
    temperature_change_cost: float = Field(default=0.0, ge=0)
    heat_capacity: Entropy = 200.0
    hazards: tuple[str, ...] = ()
    most_runs: int | None = Field(default=None, ge=1, le=200)

    def arguments(self) -> dict[str, Any]:
        """Return it as the keywords of :func:`knought.discussion.next_runs.plan`."""
        return {
            "temperatures": self.temperatures,
            "ionic_strengths": self.ionic_strengths,
            "runs": self.runs,
            "repeatability": self.repeatability,
            "aim": self.aim,
            "u_T": self.temperature_uncertainty,
            "u_I": self.ionic_strength_uncertainty,
            "activation_energy": self.activation_energy,
            "charge_product": self.charge_product,
            "salts": self.salts or None,
            "forbidden": tuple(each.forbidden() for each in self.forbidden),
            "least_temperatures": self.least_temperatures,
            "least_ionic_strengths": self.least_ionic_strengths,
            "runs_a_day": self.runs_a_day,
            "temperature_change_cost": self.temperature_change_cost,
            "heat_capacity": self.heat_capacity,
            "hazards": self.hazards,
        }
