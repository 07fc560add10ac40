"""What every section of a study file shares: no unknown keys, and quantities with their units."""

from __future__ import annotations

from typing import TYPE_CHECKING, Annotated

from pydantic import BaseModel, BeforeValidator, ConfigDict

from knought.chemistry.units import parse_quantity

if TYPE_CHECKING:
    from collections.abc import Callable

__all__ = [
    "Diffusivity",
    "Energy",
    "Entropy",
    "Kelvin",
    "LitrePerMol",
    "Metre",
    "MolPerLitre",
    "Relative",
    "Section",
    "in_unit",
]


class Section(BaseModel):
    """A section of a study file; what it does not know is refused."""

    model_config = ConfigDict(extra="forbid", frozen=True)


def in_unit(unit: str, per: float = 1.0) -> Callable[[object], float]:
    """Return a reader of quantities given as strings.

    Parameters
    ----------
    unit
        The unit in which the value is wanted.
    per
        What the value is divided by, to make fractions of percentages.

    Raises
    ------
    ValueError
        By the reader, of what is no string; pydantic turns it into a finding.
    """

    def read(value: object) -> float:
        if not isinstance(value, str):
            raise ValueError(f'a quantity is a string with its unit, "1 {unit}"')
        return parse_quantity(value, unit) / per

    return read


Kelvin = Annotated[float, BeforeValidator(in_unit("K"))]
MolPerLitre = Annotated[float, BeforeValidator(in_unit("mol L^-1"))]
LitrePerMol = Annotated[float, BeforeValidator(in_unit("L mol^-1"))]
Metre = Annotated[float, BeforeValidator(in_unit("m"))]
Energy = Annotated[float, BeforeValidator(in_unit("J mol^-1"))]
Entropy = Annotated[float, BeforeValidator(in_unit("J K^-1 mol^-1"))]
Diffusivity = Annotated[float, BeforeValidator(in_unit("m^2 s^-1"))]

#: A relative size, "3 %".
Relative = Annotated[float, BeforeValidator(in_unit("%", per=100.0))]
