"""The table of rate constants: what was measured, in one system of units, checked once.

Everything further down takes a :class:`RateTable` and trusts it: k, T and uncertainties are
positive, ionic strengths are not negative, and every run that is left out says why.
"""

from __future__ import annotations

from dataclasses import dataclass, field, replace
from fractions import Fraction
from types import MappingProxyType
from typing import TYPE_CHECKING, Any

import numpy as np

from knought.arrays import BoolArray, FloatArray, frozen
from knought.chemistry.quantities import quantity, rate_constant_unit
from knought.chemistry.units import parse_unit, reaction_order
from knought.errors import InputError, Problem

if TYPE_CHECKING:
    from collections.abc import Mapping, Sequence

    import pandas as pd
    from numpy.typing import ArrayLike

__all__ = ["RateTable", "Source"]


@dataclass(frozen=True)
class Source:
    """Where a table was read from.

    Attributes
    ----------
    name
        File name, never with a folder.
    sha256
        Hash of its bytes.
    sheet
        Sheet of a spreadsheet.
    """

    name: str
    sha256: str
    sheet: str | None = None


@dataclass(frozen=True, eq=False)
class RateTable:
    """Rate constants with their conditions and uncertainties, one row a run.

    Parameters
    ----------
    k : (n,) array_like
        Rate constants in (L/mol)^(order-1) s^-1.
    T : (n,) array_like
        Temperatures in K.
    order
        Overall order of the reaction.
    I : (n,) array_like, optional
        Ionic strengths in mol/L.
    u_k : (n,) array_like, optional
        Standard uncertainties of k, in its unit.
    u_T, u_I : (n,) array_like, optional
        Standard uncertainties of each run's own T (K) and I (mol/L).
    determinations : (n,) array_like, optional
        Number of determinations that each k averages.
    run
        Labels; ``"1"``, ``"2"``, ... if not given.
    salt, batch
        What sets the ionic strength; runs that share a stock, a day or an instrument.
    used : (n,) array_like of bool, optional
        Which runs count; all if not given.
    reason
        Why a run is left out; needed for each that is.
    note
        Free text.
    concentrations
        Concentrations in mol/L by species, each ``(n,)``.
    source
        Where the table was read from.
    account
        What was understood on reading, a line each.

    Raises
    ------
    InputError
        If a column has the wrong length or a value that cannot be; every problem is told.
    """

    k: FloatArray
    T: FloatArray
    order: Fraction = Fraction(1)
    I: FloatArray | None = None
    u_k: FloatArray | None = None
    u_T: FloatArray | None = None
    u_I: FloatArray | None = None
    determinations: FloatArray | None = None
    run: tuple[str, ...] = ()
    salt: tuple[str, ...] | None = None
    batch: tuple[str, ...] | None = None
    used: BoolArray = field(default_factory=lambda: np.ones(0, dtype=bool))
    reason: tuple[str, ...] = ()
    note: tuple[str, ...] = ()
    concentrations: Mapping[str, FloatArray] = field(default_factory=dict)
    source: Source | None = None
    account: tuple[object, ...] = ()

    def __post_init__(self) -> None:
        n = np.size(self.k)
        for name in ("k", "T", *_OPTIONAL_NUMBERS):
            values = getattr(self, name)
            if values is not None:
                object.__setattr__(self, name, frozen(values))
        if not self.run:
            object.__setattr__(self, "run", tuple(str(i + 1) for i in range(n)))
        used = np.ones(n, dtype=bool) if np.size(self.used) == 0 else np.array(self.used, bool)
        used.setflags(write=False)
        object.__setattr__(self, "used", used)
        for name in ("reason", "note"):
            object.__setattr__(self, name, tuple(getattr(self, name)) or ("",) * n)
        kept = {key: frozen(value) for key, value in self.concentrations.items()}
        object.__setattr__(self, "concentrations", MappingProxyType(kept))
        object.__setattr__(self, "order", Fraction(self.order))
        problems = [*self._length_problems(n)] or [*self._value_problems()]
        if problems:
            raise InputError(problems)

    def _length_problems(self, n: int) -> list[Problem]:
        """Columns that are not as long as k."""
        if np.ndim(self.k) != 1 or n == 0:
            return [Problem("the table has no runs", "give at least one row")]
        columns: dict[str, Any] = {name: getattr(self, name) for name in _COLUMNS}
        columns |= {f"c({name})": values for name, values in self.concentrations.items()}
        return [
            Problem(f"has {len(values)} values for {n} runs", "give one a run", column=name)
            for name, values in columns.items()
            if values is not None and (np.ndim(values) != 1 or len(values) != n)
        ]

    def _value_problems(self) -> list[Problem]:
        """Values that cannot be, run by run."""
        problems = []
        for name, lowest_allowed, rule in _RULES:
            values = getattr(self, name)
            if values is None:
                continue
            wrong = ~np.isfinite(values) | (values < 0 if lowest_allowed else values <= 0)
            problems += [
                Problem(f"run {self.run[i]}: {name} is {values[i]:g}", rule, column=name)
                for i in np.flatnonzero(wrong)
            ]
        problems += [
            Problem(
                f"run {self.run[i]} is left out without a reason",
                "say why in the column reason",
                column="reason",
            )
            for i in np.flatnonzero(~self.used)
            if not self.reason[i].strip()
        ]
        return problems

    @classmethod
    def from_arrays(
        cls,
        T: ArrayLike,
        k: ArrayLike,
        I: ArrayLike | None = None,
        u_k: ArrayLike | None = None,
        *,
        unit: str = "s^-1",
        u_T: ArrayLike | None = None,
        u_I: ArrayLike | None = None,
        determinations: ArrayLike | None = None,
        run: Sequence[str] = (),
        salt: Sequence[str] | None = None,
        batch: Sequence[str] | None = None,
    ) -> RateTable:
        """Make a table from arrays.

        Parameters
        ----------
        T
            Temperatures in K.
        k, u_k
            Rate constants and their standard uncertainties in `unit`.
        I
            Ionic strengths in mol/L.
        unit
            Unit of k, ``"L mol^-1 min^-1"``; the order of the reaction is read from it.
        u_T, u_I, determinations, run, salt, batch
            As for :class:`RateTable`.

        Raises
        ------
        InputError
            If the unit is no unit of a rate constant, or a value cannot be.
        """
        parsed = parse_unit(unit)
        order = reaction_order(parsed)
        factor = float(parsed.factor_to(parse_unit(rate_constant_unit(order))))
        return cls(
            k=np.asarray(k, dtype=float) * factor,
            T=np.asarray(T, dtype=float),
            order=order,
            I=_maybe(I),
            u_k=None if u_k is None else np.asarray(u_k, dtype=float) * factor,
            u_T=_maybe(u_T),
            u_I=_maybe(u_I),
            determinations=_maybe(determinations),
            run=tuple(run),
            salt=None if salt is None else tuple(salt),
            batch=None if batch is None else tuple(batch),
        )

    def __len__(self) -> int:
        return len(self.k)

    @property
    def rate_constant_unit(self) -> str:
        """Unit of k, ``"L mol^-1 s^-1"``."""
        return rate_constant_unit(self.order)

    def used_only(self) -> RateTable:
        """Return the table with only the runs that count."""
        if bool(np.all(self.used)):
            return self
        kept = np.flatnonzero(self.used)

        def words(values: tuple[str, ...]) -> tuple[str, ...]:
            return tuple(values[i] for i in kept)

        changes: dict[str, Any] = {"k": self.k[kept], "T": self.T[kept]}
        for name in _OPTIONAL_NUMBERS:
            values = getattr(self, name)
            changes[name] = None if values is None else values[kept]
        for name in ("salt", "batch"):
            values = getattr(self, name)
            changes[name] = None if values is None else words(values)
        return replace(
            self,
            **changes,
            run=words(self.run),
            used=self.used[kept],
            reason=words(self.reason),
            note=words(self.note),
            concentrations={key: values[kept] for key, values in self.concentrations.items()},
        )

    def to_frame(self) -> pd.DataFrame:
        """Return the table as a pandas frame with ``quantity/unit`` headers."""
        import pandas as pd

        k = quantity("measured_rate_constant", self.order).unit
        columns: dict[str, object] = {"run": list(self.run), "T/K": self.T}
        columns.update(
            {
                header: values
                for header, values in (
                    ("I/(mol/L)", self.I),
                    (f"k/({k})", self.k),
                    (f"u(k)/({k})", self.u_k),
                    ("u(T)/K", self.u_T),
                    ("u(I)/(mol/L)", self.u_I),
                    ("n", self.determinations),
                    ("salt", self.salt),
                    ("batch", self.batch),
                )
                if values is not None
            }
        )
        for name, amounts in self.concentrations.items():
            columns[f"c({name})/(mol/L)"] = amounts
        columns["use"] = ["yes" if used else "no" for used in self.used]
        columns["reason"], columns["note"] = list(self.reason), list(self.note)
        return pd.DataFrame(columns)


_OPTIONAL_NUMBERS = ("I", "u_k", "u_T", "u_I", "determinations")
_COLUMNS = ("T", *_OPTIONAL_NUMBERS, "run", "salt", "batch", "used", "reason", "note")

#: Column, whether zero is allowed, and what to do about a value that is not.
_RULES = (
    ("k", False, "a rate constant is positive; leave the run out with a reason if it failed"),
    ("T", False, "give temperatures in K above zero"),
    ("I", True, "an ionic strength is at least zero"),
    ("u_k", False, "an uncertainty is positive; leave the column out if it is unknown"),
    ("u_T", False, "an uncertainty is positive; leave the column out if it is unknown"),
    ("u_I", False, "an uncertainty is positive; leave the column out if it is unknown"),
    ("determinations", False, "give how many determinations were averaged, at least 1"),
)


def _maybe(values: ArrayLike | None) -> FloatArray | None:
    return None if values is None else np.asarray(values, dtype=float)
