"""What every design of a plan must keep: distinct temperatures and ionic strengths; its price.

Curvature and lack of fit stay testable only where there are levels to test them at; and a change of
temperature costs working time.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from knought.errors import InputError

if TYPE_CHECKING:
    from knought.arrays import BoolArray, FloatArray, IndexArray
    from knought.discussion.reach import Reach

__all__ = ["Floor", "random_design"]

#: Draws of a random design after which the floor is said to be out of reach.
_MOST_DRAWS = 200


@dataclass(frozen=True, eq=False)
class Floor:
    """How many temperatures and ionic strengths a design must have, and what changes cost.

    Attributes
    ----------
    temperature_level, ionic_strength_level : (N,) ndarray of int
        Level of each candidate.
    temperatures, ionic_strengths
        Least number of distinct levels, runs already made included.
    made_temperature, made_ionic_strength
        Levels that runs already made have; -1 for one that no candidate has.
    change
        What one change of temperature costs, in working times of a run.
    """

    temperature_level: IndexArray
    ionic_strength_level: IndexArray
    temperatures: int = 1
    ionic_strengths: int = 1
    made_temperature: frozenset[int] = frozenset()
    made_ionic_strength: frozenset[int] = frozenset()
    change: float = 0.0

    @classmethod
    def none(cls, reach: Reach, change: float = 0.0) -> Floor:
        """Return the floor that forbids nothing."""
        return cls(reach.temperature_level, reach.ionic_strength_level, change=change)

    def allowed(self, runs: IndexArray, left: int = 1) -> BoolArray:
        """Return which candidates one of `left` further runs may take, ``(N,)``.

        Parameters
        ----------
        runs : (N,) ndarray of int
            The design without the further runs.
        left
            Runs still to be placed, this one included.
        """
        may = np.ones(len(runs), dtype=bool)
        for level, least, made in (
            (self.temperature_level, self.temperatures, self.made_temperature),
            (self.ionic_strength_level, self.ionic_strengths, self.made_ionic_strength),
        ):
            have = set(level[runs > 0].tolist()) | made
            if least - len(have) > left:
                may[:] = False
            elif least - len(have) == left:
                may &= ~np.isin(level, list(have))
        return may

    def time(self, runs: IndexArray) -> FloatArray:
        """Return the working time with one run more at each candidate, over that of the runs."""
        if self.change == 0:
            return np.ones(len(runs))
        have = set(self.temperature_level[runs > 0].tolist())
        new = ~np.isin(self.temperature_level, list(have))
        total = float(runs.sum()) + 1
        return np.asarray((total + self.change * np.maximum(len(have) + new - 1, 0)) / total)

    def time_of(self, runs: IndexArray) -> float:
        """Return the working time of a design over that of its runs."""
        levels = len(set(self.temperature_level[runs > 0].tolist()))
        total = float(runs.sum())
        return (total + self.change * max(levels - 1, 0)) / total


def random_design(runs: int, floor: Floor, random: np.random.Generator) -> IndexArray:
    """Return a design drawn at random that keeps the floor, ``(N,)``.

    Raises
    ------
    InputError
        If there are too few runs, or what is forbidden leaves too few levels.
    """
    for _ in range(_MOST_DRAWS):
        design = np.zeros(len(floor.temperature_level), dtype=np.intp)
        for left in range(runs, 0, -1):
            may = np.flatnonzero(floor.allowed(design, left))
            if len(may) == 0:
                # The last run may need a new temperature and a new ionic strength that cannot be
                # set together: draw again.
                break
            design[random.choice(may)] += 1
        else:
            return design
    raise InputError(
        f"{runs} runs cannot have {floor.temperatures} temperatures and "
        f"{floor.ionic_strengths} ionic strengths here",
        "plan more runs, or ask for fewer distinct temperatures or ionic strengths",
    )
