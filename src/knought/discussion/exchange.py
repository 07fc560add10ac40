"""Exact designs by exchange: take out each run in turn and put it where it tells most.

Fedorov's exchange (Theory of Optimal Experiments, 1972) with first improvement and many random
starts (Cook and Nachtsheim, Technometrics 22 (1980) 315). A floor of distinct temperatures and
ionic strengths is kept at every step, and the working time that changes of temperature cost is
part of the criterion: what is made small is the criterion per unit of working time. Where there are
few designs, every one is tried instead.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from itertools import combinations_with_replacement
from typing import TYPE_CHECKING

import numpy as np

from knought.errors import InputError

if TYPE_CHECKING:
    from knought.arrays import BoolArray, FloatArray, IndexArray
    from knought.discussion.criteria import Criterion
    from knought.discussion.reach import Reach

__all__ = ["Exchanged", "Floor", "exchange", "random_design", "random_search"]

#: A change counts as an improvement if it lowers the criterion by more than this fraction.
_IMPROVES = 1e-9

#: Passes after which a start is given up as still moving; a handful is usual.
_MOST_PASSES = 60

#: So many of the best single-exchange designs are improved by pairs as well.
_POLISHED = 3

#: Of the places for the first run of a pair, this many of the best are tried.
_FIRST_OF_PAIR = 9

#: Up to so many designs of one run less, every design is tried instead.
COMPLETE = 1500

#: Draws of a random design after which the floor is said to be out of reach.
_MOST_DRAWS = 200

#: Designs that a random search values at once.
_BLOCK = 256


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


@dataclass(frozen=True, eq=False)
class Exchanged:
    """A design that no exchange of one run makes better.

    Attributes
    ----------
    runs : (N,) ndarray of int
        Runs at each candidate.
    value
        Criterion times working time over that of the runs.
    evaluations
        Designs that were valued on the way.
    """

    runs: IndexArray
    value: float
    evaluations: int


def exchange(
    criterion: Criterion,
    runs: int,
    floor: Floor,
    random: np.random.Generator,
    *,
    starts: int = 8,
    begin: tuple[IndexArray, ...] = (),
    complete: int = COMPLETE,
) -> Exchanged:
    """Return the best design of `runs` runs that exchanges from many starts find.

    Parameters
    ----------
    criterion
        What is made small.
    runs
        Number of runs to place.
    floor
        What every design must keep.
    random
        Where the random starts come from.
    starts
        Number of random starts.
    begin
        Designs to start from as well.
    complete
        Up to so many designs of one run less, every design is tried, and the best is the best.

    Raises
    ------
    InputError
        If no design of that many runs keeps the floor.
    """
    designs = [*begin, *(random_design(runs, floor, random) for _ in range(starts))]
    if not designs:
        raise InputError("there is no start to exchange from", "allow at least one start")
    if math.comb(len(criterion) + runs - 2, runs - 1) <= complete:
        return _every_design(criterion, runs, floor)
    found = [_improved(criterion, start.copy(), floor, random) for start in designs]
    distinct = {each.runs.tobytes(): each for each in found}
    leading = sorted(distinct.values(), key=lambda each: each.value)[:_POLISHED]
    polished = [_improved_by_pairs(criterion, each, floor, random) for each in leading]
    evaluations = sum(each.evaluations for each in (*found, *polished))
    valued = [_valued(criterion, each.runs, floor, evaluations) for each in polished]
    return min(valued, key=lambda each: each.value)


def _valued(criterion: Criterion, runs: IndexArray, floor: Floor, evaluations: int) -> Exchanged:
    """Value a design anew: updates from designs that leave a parameter open lose digits."""
    value = float(criterion.values(runs[None].astype(float))[0]) * floor.time_of(runs)
    return Exchanged(runs, value, evaluations)


def _every_design(criterion: Criterion, runs: int, floor: Floor) -> Exchanged:
    """Try every design: those of one run less, with every way to add the last.

    Raises
    ------
    InputError
        If none keeps the floor.
    """
    best, value, evaluations = None, math.inf, 0
    for chosen in combinations_with_replacement(range(len(criterion)), runs - 1):
        design = np.bincount(np.array(chosen, dtype=np.intp), minlength=len(criterion))
        may = floor.allowed(design)
        if not may.any():
            continue
        scores = criterion.with_one_more(design.astype(float)) * floor.time(design)
        scores = np.where(may, scores, np.inf)
        evaluations += len(scores)
        last = int(np.argmin(scores))
        if scores[last] < value:
            best, value = (design, last), float(scores[last])
    if best is None:
        raise InputError("no design can be valued", "allow more temperatures or ionic strengths")
    best[0][best[1]] += 1
    return _valued(criterion, best[0], floor, evaluations)


def _improved_by_pairs(
    criterion: Criterion, found: Exchanged, floor: Floor, random: np.random.Generator
) -> Exchanged:
    """Exchange two runs at a time until no pair makes the design better either.

    Taking out two and putting back two reaches designs that single exchanges cannot (the
    excursions of Mitchell, Technometrics 16 (1974) 203).
    """
    evaluations = 0
    for _ in range(_MOST_PASSES):
        better, used = _better_pair(criterion, found, floor)
        evaluations += used
        if better is None:
            break
        found = _improved(criterion, better, floor, random)
        evaluations += found.evaluations
    return Exchanged(found.runs, found.value, evaluations)


def _better_pair(
    criterion: Criterion, found: Exchanged, floor: Floor
) -> tuple[IndexArray | None, int]:
    """Return the first better design that differs by two runs, and the designs valued."""
    evaluations = 0
    places = np.repeat(np.arange(len(found.runs)), np.minimum(found.runs, 2))
    pairs = sorted({(int(a), int(b)) for i, a in enumerate(places) for b in places[i + 1 :]})
    for one, other in pairs:
        runs = found.runs.copy()
        runs[one] -= 1
        runs[other] -= 1
        scores = criterion.with_one_more(runs.astype(float)) * floor.time(runs)
        scores = np.where(floor.allowed(runs, 2), scores, np.inf)
        evaluations += len(scores)
        for first in np.argsort(scores)[:_FIRST_OF_PAIR]:
            if not np.isfinite(scores[first]):
                break
            begun = runs.copy()
            begun[first] += 1
            seconds = criterion.with_one_more(begun.astype(float)) * floor.time(begun)
            seconds = np.where(floor.allowed(begun), seconds, np.inf)
            evaluations += len(seconds)
            second = int(np.argmin(seconds))
            if seconds[second] < found.value * (1 - _IMPROVES):
                begun[second] += 1
                return begun, evaluations
    return None, evaluations


def _improved(
    criterion: Criterion, runs: IndexArray, floor: Floor, random: np.random.Generator
) -> Exchanged:
    value, evaluations = _valued(criterion, runs, floor, 1).value, 1
    for _ in range(_MOST_PASSES):
        before = value
        for place in random.permutation(np.flatnonzero(runs)):
            runs[place] -= 1
            scores = criterion.with_one_more(runs.astype(float)) * floor.time(runs)
            scores = np.where(floor.allowed(runs), scores, np.inf)
            evaluations += len(scores)
            best = int(np.argmin(scores))
            if scores[best] < value * (1 - _IMPROVES):
                runs[best] += 1
                value = float(scores[best])
            else:
                runs[place] += 1
        if value >= before * (1 - _IMPROVES):
            break
    return Exchanged(runs, value, evaluations)


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


def random_search(
    criterion: Criterion,
    runs: int,
    floor: Floor,
    random: np.random.Generator,
    evaluations: int,
) -> Exchanged:
    """Return the best of `evaluations` random designs: what an exchange must never lose to.

    Parameters
    ----------
    criterion, runs, floor, random
        As for :func:`exchange`.
    evaluations
        Number of random designs.

    Raises
    ------
    InputError
        If no design of that many runs keeps the floor, or none is asked for.
    """
    best: Exchanged | None = None
    for start in range(0, evaluations, _BLOCK):
        count = min(_BLOCK, evaluations - start)
        if max(floor.temperatures, floor.ionic_strengths) <= 1:
            even = np.full(len(criterion), 1.0 / len(criterion))
            designs = random.multinomial(runs, even, size=count)
        else:
            designs = np.array([random_design(runs, floor, random) for _ in range(count)])
        values = criterion.values(designs.astype(float))
        values = values * np.array([floor.time_of(design) for design in designs])
        first = int(np.argmin(values))
        if best is None or values[first] < best.value:
            best = Exchanged(designs[first], float(values[first]), evaluations)
    if best is None:
        raise InputError("a random search needs at least one evaluation", "give a number above 0")
    return best
