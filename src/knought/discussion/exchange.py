"""Exact designs by exchange: take out each run in turn and put it where it tells most.

Fedorov's exchange (Theory of Optimal Experiments, 1972) with first improvement and many random
starts (Cook and Nachtsheim, Technometrics 22 (1980) 315); the best are then improved by pairs, and
shaken. A floor of distinct temperatures and
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

from knought.discussion.design_floor import Floor, random_design
from knought.errors import InputError

if TYPE_CHECKING:
    from knought.arrays import IndexArray
    from knought.discussion.criteria import Criterion

__all__ = ["Exchanged", "exchange", "random_search"]

#: A change counts as an improvement if it lowers the criterion by more than this fraction.
_IMPROVES = 1e-9

#: Passes after which a start is given up as still moving; a handful is usual.
_MOST_PASSES = 60

#: So many of the best single-exchange designs are improved by pairs as well.
_POLISHED = 3

#: Among so few candidates of temperature and ionic strength local optima lie close, and starts cost
#: little: so many at least.
_FEW_CANDIDATES, _STARTS_AMONG_FEW = 12, 40

#: How often the best design is shaken.
_SHAKES = 8

#: Of the places for the first run of a pair, this many of the best are tried.
_FIRST_OF_PAIR = 9

#: Up to so many designs of one run less, every design is tried instead.
COMPLETE = 1500

#: By so much, relatively, may a value be off that comes from a design which leaves parameters open.
_BLURRED = 1e-4

#: Designs that a random search values at once.
_BLOCK = 256


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
    salted = len(set(floor.ionic_strength_level.tolist())) > 1
    if salted and len(criterion) <= _FEW_CANDIDATES and starts:
        starts = max(starts, _STARTS_AMONG_FEW)
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
    best = min(valued, key=lambda each: each.value)
    return _shaken(criterion, _turned(criterion, best, floor, random), floor, random)


def _turned(
    criterion: Criterion, best: Exchanged, floor: Floor, random: np.random.Generator
) -> Exchanged:
    """Start again from the mirror images of a design; the best stays."""
    evaluations = best.evaluations
    for turned in _mirrored(best.runs, floor):
        found = _improved(criterion, turned, floor, random)
        evaluations += found.evaluations
        best = min(best, _valued(criterion, found.runs, floor, 0), key=lambda each: each.value)
    return Exchanged(best.runs, best.value, evaluations)


def _mirrored(runs: IndexArray, floor: Floor) -> list[IndexArray]:
    """Return the design with temperatures, ionic strengths or both in the opposite order.

    Whether high ionic strengths stand at high or at low temperatures makes two optima that no
    exchange leads between.
    """
    T, I = floor.temperature_level, floor.ionic_strength_level
    places = {(int(t), int(i)): place for place, (t, i) in enumerate(zip(T, I, strict=True))}
    designs = []
    for in_T, in_I in ((True, False), (False, True), (True, True)):
        there = [
            places.get((int(T.max() - t) if in_T else int(t), int(I.max() - i) if in_I else int(i)))
            for t, i in zip(T, I, strict=True)
        ]
        if any(place is None for place, count in zip(there, runs, strict=True) if count):
            continue
        design = np.zeros_like(runs)
        for place, count in zip(there, runs, strict=True):
            if place is not None:
                design[place] += count
        designs.append(design)
    return designs


def _shaken(
    criterion: Criterion, best: Exchanged, floor: Floor, random: np.random.Generator
) -> Exchanged:
    """Take out several runs at random, put them back where they tell most, and exchange again.

    Leaves optima that neither single nor double exchanges can; the best stays.
    """
    evaluations = best.evaluations
    for turn in range(_SHAKES):
        runs = best.runs.copy()
        out = 1 + turn % (int(runs.sum()) - 1) if runs.sum() > 1 else 0
        taken = random.choice(np.repeat(np.arange(len(runs)), runs), size=out, replace=False)
        np.subtract.at(runs, taken, 1)
        for left in range(out, 0, -1):
            scores = criterion.with_one_more(runs.astype(float)) * floor.time(runs)
            scores = np.where(floor.allowed(runs, left), scores, np.inf)
            evaluations += len(scores)
            if not np.isfinite(scores).any():
                break
            # Not always the best place: else the same design comes back.
            order = np.argsort(scores)[: np.isfinite(scores).sum()]
            runs[order[min(int(random.integers(3)), len(order) - 1)]] += 1
        if runs.sum() != best.runs.sum():
            continue
        found = _improved(criterion, runs, floor, random)
        evaluations += found.evaluations
        again = _valued(criterion, found.runs, floor, evaluations)
        best = again if again.value < best.value else best
    return Exchanged(best.runs, best.value, evaluations)


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
    near: list[tuple[float, IndexArray]] = []
    lowest, evaluations = math.inf, 0
    for chosen in combinations_with_replacement(range(len(criterion)), runs - 1):
        design = np.bincount(np.array(chosen, dtype=np.intp), minlength=len(criterion))
        may = floor.allowed(design)
        if not may.any():
            continue
        scores = criterion.with_one_more(design.astype(float)) * floor.time(design)
        scores = np.where(may, scores, np.inf)
        evaluations += len(scores)
        lowest = min(lowest, float(scores.min()))
        for last in np.flatnonzero(scores <= lowest * (1 + _BLURRED)):
            whole = design.copy()
            whole[last] += 1
            near.append((float(scores[last]), whole))
    if not math.isfinite(lowest):
        raise InputError("no design can be valued", "allow more temperatures or ionic strengths")
    # Updates from designs that leave a parameter open lose digits: the best are valued anew.
    best = {each.tobytes(): each for score, each in near if score <= lowest * (1 + _BLURRED)}
    valued = [_valued(criterion, each, floor, evaluations) for each in best.values()]
    return min(valued, key=lambda each: each.value)


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
