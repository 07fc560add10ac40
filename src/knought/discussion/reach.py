"""What can be reached in the laboratory: temperatures, ionic strengths, and what is forbidden.

A plan chooses among candidates, one for each temperature and ionic strength that can be set
together. What cannot be set together (a salt that falls out in the cold, a reaction too fast to
follow when hot) is taken out before anything is optimised.
"""

from __future__ import annotations

import math
from dataclasses import dataclass, field
from typing import TYPE_CHECKING

import numpy as np

from knought.arrays import BoolArray, FloatArray, IndexArray, frozen
from knought.errors import InputError, Problem
from knought.given import real_array

if TYPE_CHECKING:
    from collections.abc import Iterable, Mapping, Sequence

    from numpy.typing import ArrayLike

__all__ = ["Forbidden", "Reach"]

#: Conditions closer than this are the same condition: K, and a fraction of I.
_SAME_TEMPERATURE = 1e-6
_SAME_IONIC_STRENGTH = 1e-9

#: More candidates than this are a slip (a step given in the wrong unit).
_MOST_CANDIDATES = 20_000


@dataclass(frozen=True)
class Forbidden:
    """Temperatures and ionic strengths that must not be set together, bounds included.

    Parameters
    ----------
    temperature
        Lowest and highest T in K; everything if not given.
    ionic_strength
        Lowest and highest I in mol/L; everything if not given.
    """

    temperature: tuple[float, float] = (0.0, math.inf)
    ionic_strength: tuple[float, float] = (0.0, math.inf)

    def holds(self, T: FloatArray, I: FloatArray) -> BoolArray:
        """Return which conditions it forbids, shape of `T`."""
        coldest, hottest = self.temperature
        lowest, highest = self.ionic_strength
        slack = _SAME_IONIC_STRENGTH
        return np.asarray(
            (coldest - _SAME_TEMPERATURE <= T)
            & (hottest + _SAME_TEMPERATURE >= T)
            & (lowest * (1 - slack) <= I)
            & (highest * (1 + slack) >= I)
        )


@dataclass(frozen=True, eq=False)
class Reach:
    """Candidates of a plan: every temperature and ionic strength that can be set together.

    Attributes
    ----------
    T : (N,) ndarray
        Temperatures in K, ascending.
    I : (N,) ndarray or None
        Ionic strengths in mol/L; None where a plan is of temperatures only.
    salts
        Highest ionic strength in mol/L that each salt may set; empty where no salt is named.
    """

    T: FloatArray
    I: FloatArray | None
    salts: Mapping[str, float] = field(default_factory=dict)

    def __len__(self) -> int:
        return len(self.T)

    @property
    def ionic_strength(self) -> FloatArray:
        """I of each candidate; zeros where there is none (no law then reads it)."""
        return np.zeros(len(self)) if self.I is None else self.I

    @property
    def temperature_level(self) -> IndexArray:
        """Number of the temperature of each candidate, shape ``(N,)``."""
        return np.asarray(np.unique(self.T, return_inverse=True)[1])

    @property
    def ionic_strength_level(self) -> IndexArray:
        """Number of the ionic strength of each candidate, shape ``(N,)``."""
        return np.asarray(np.unique(self.ionic_strength, return_inverse=True)[1])

    def salts_for(self, I: float) -> tuple[str, ...]:
        """Return the salts that may set the ionic strength `I` (mol/L)."""
        return tuple(
            salt for salt, most in self.salts.items() if most * (1 + _SAME_IONIC_STRENGTH) >= I
        )

    def nearest(self, T: ArrayLike, I: ArrayLike | None = None) -> IndexArray:
        """Return the candidate nearest to each condition, shape ``(n,)``."""
        T = np.atleast_1d(np.asarray(T, dtype=float))
        away = np.abs(T[:, None] - self.T)
        if self.I is not None and I is not None:
            wanted = np.atleast_1d(np.asarray(I, dtype=float))
            away = away + 1e3 * np.abs(np.sqrt(wanted)[:, None] - np.sqrt(self.I))
        return np.asarray(np.argmin(away, axis=1))

    @classmethod
    def of(
        cls,
        temperatures: ArrayLike,
        ionic_strengths: ArrayLike | None = None,
        *,
        salts: Mapping[str, float] | None = None,
        forbidden: Sequence[Forbidden | tuple[float, float]] = (),
    ) -> Reach:
        """Cross temperatures with ionic strengths and leave out what is forbidden.

        Parameters
        ----------
        temperatures
            T in K that can be set.
        ionic_strengths
            I in mol/L that can be set; none for a plan of temperatures only.
        salts
            Salts by their highest ionic strength in mol/L; ionic strengths that none of them
            reaches are left out.
        forbidden
            Combinations that cannot be: ranges, or pairs (T, I).

        Returns
        -------
        Reach

        Raises
        ------
        InputError
            If a temperature or an ionic strength cannot be, or nothing is left.
        """
        T = _levels(temperatures, "temperatures", "K", zero=False)
        I = (
            None
            if ionic_strengths is None
            else _levels(ionic_strengths, "ionic strengths", "mol/L", zero=True)
        )
        if len(T) * (1 if I is None else len(I)) > _MOST_CANDIDATES:
            raise InputError(
                f"{len(T)} temperatures and {1 if I is None else len(I)} ionic strengths are more "
                f"than {_MOST_CANDIDATES} combinations",
                "give coarser steps: a plan hardly changes with them",
            )
        grid_T, grid_I = np.meshgrid(T, np.zeros(1) if I is None else I, indexing="ij")
        T, strengths = grid_T.ravel(), grid_I.ravel()
        kept = np.ones(len(T), dtype=bool)
        for each in forbidden:
            rule = each if isinstance(each, Forbidden) else _pair(*each)
            kept &= ~rule.holds(T, strengths)
        if salts and I is not None:
            kept &= strengths <= _highest(salts) * (1 + _SAME_IONIC_STRENGTH)
        if not kept.any():
            raise InputError(
                "no temperature and ionic strength is left that can be set together",
                "forbid less, or give more of either",
            )
        return cls(
            frozen(T[kept]), None if I is None else frozen(strengths[kept]), dict(salts or {})
        )


def _pair(T: float, I: float) -> Forbidden:
    return Forbidden((T, T), (I, I))


def _highest(salts: Mapping[str, float]) -> float:
    """Return the highest limit.

    Raises
    ------
    InputError
        If a limit is not above zero.
    """
    wrong = [salt for salt, most in salts.items() if not 0 < most < math.inf]
    if wrong:
        raise InputError(
            f"the salt {wrong[0]!r} has the highest ionic strength {salts[wrong[0]]:g} mol/L",
            "give the highest ionic strength that it may set, above zero",
        )
    return max(salts.values())


def _levels(values: ArrayLike, what: str, unit: str, *, zero: bool) -> FloatArray:
    """Return distinct values, ascending.

    Raises
    ------
    InputError
        If there are none, or one cannot be.
    """
    array = np.atleast_1d(real_array(values, what))
    if array.size == 0 or array.ndim != 1:
        raise InputError(f"no {what} are given", "give those that can be set, as a list")
    wrong = ~np.isfinite(array) | ((array < 0) if zero else (array <= 0))
    if wrong.any():
        raise InputError(list(_wrong(array[wrong], what, unit, zero=zero)))
    return np.unique(array)


def _wrong(values: Iterable[float], what: str, unit: str, *, zero: bool) -> Iterable[Problem]:
    least = "at least zero" if zero else "above zero"
    for value in values:
        yield Problem(f"among the {what} is {value:g} {unit}", f"give {what} in {unit}, {least}")
