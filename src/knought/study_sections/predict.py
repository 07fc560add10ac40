"""The section ``[predict]``: the conditions at which the report tells k."""

from __future__ import annotations

from itertools import product
from typing import TYPE_CHECKING

from pydantic import model_validator

from knought.discussion.reach_text import read_levels
from knought.study_sections.base import Section

if TYPE_CHECKING:
    from knought.fitting.found import Found

__all__ = ["PredictSection"]

#: More rows than this are a slip.
_MOST_CONDITIONS = 2000


class PredictSection(Section):
    """``[predict]``: temperatures and ionic strengths, told in every combination."""

    temperatures: str | None = None
    ionic_strengths: str | None = None

    @model_validator(mode="after")
    def _levels(self) -> PredictSection:
        if self.ionic_strengths is not None and self.temperatures is None:
            raise ValueError('give the temperatures as well, temperatures = "25, 37 °C"')
        if len(self._combinations()) > _MOST_CONDITIONS:
            raise ValueError(f"these are more than {_MOST_CONDITIONS} combinations")
        return self

    def _combinations(self) -> tuple[tuple[float, float], ...]:
        if self.temperatures is None:
            return ()
        temperatures = read_levels(self.temperatures, "K")
        strengths = (
            (0.0,)
            if self.ionic_strengths is None
            else read_levels(self.ionic_strengths, "mol L^-1")
        )
        return tuple(product(temperatures, strengths))

    def conditions(self, found: Found) -> tuple[tuple[float, float], ...]:
        """Return T in K and I in mol/L of every row; none where none are chosen.

        Parameters
        ----------
        found
            The headline; where it says nothing of salt, every temperature is told once.
        """
        made = self._combinations()
        return made if found.describes_salt else tuple(dict.fromkeys((T, 0.0) for T, _ in made))
