"""``[plan]`` of a study file: what can be reached next, and what the next runs are for."""

from __future__ import annotations

from typing import TYPE_CHECKING, Annotated, Any

from pydantic import BaseModel, BeforeValidator, ConfigDict, Field

from knought.chemistry.units import parse_quantity
from knought.discussion.reach import Forbidden
from knought.discussion.reach_text import read_levels

if TYPE_CHECKING:
    from collections.abc import Callable

__all__ = ["ForbiddenSection", "PlanSection"]


def _in_unit(unit: str) -> Callable[[object], float]:
    def read(value: object) -> float:
        if not isinstance(value, str):
            raise ValueError(f'a quantity is a string with its unit, "1 {unit}"')  # noqa: TRY004
        return parse_quantity(value, unit)

    return read


def _levels_in(unit: str) -> Callable[[object], tuple[float, ...]]:
    def read(value: object) -> tuple[float, ...]:
        if not isinstance(value, str):
            raise ValueError(f'levels are one string with their unit, "1, 2, 5 {unit}"')  # noqa: TRY004
        return read_levels(value, unit)

    return read


Kelvin = Annotated[float, BeforeValidator(_in_unit("K"))]
MolPerLitre = Annotated[float, BeforeValidator(_in_unit("mol L^-1"))]
Fraction = Annotated[float, BeforeValidator(_in_unit("1"))]
Energy = Annotated[float, BeforeValidator(_in_unit("J mol^-1"))]
HeatCapacity = Annotated[float, BeforeValidator(_in_unit("J K^-1 mol^-1"))]
Temperatures = Annotated[tuple[float, ...], BeforeValidator(_levels_in("K"))]
IonicStrengths = Annotated[tuple[float, ...], BeforeValidator(_levels_in("mol L^-1"))]


class _Section(BaseModel):
    model_config = ConfigDict(extra="forbid", frozen=True)


class ForbiddenSection(_Section):
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


class PlanSection(_Section):
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
    salts: dict[str, MolPerLitre] = {}
    forbidden: tuple[ForbiddenSection, ...] = ()
    least_temperatures: int | None = Field(default=None, ge=1)
    least_ionic_strengths: int | None = Field(default=None, ge=1)
    runs_a_day: int | None = Field(default=None, ge=1)
    temperature_change_cost: float = Field(default=0.0, ge=0)
    heat_capacity: HeatCapacity = 200.0
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
