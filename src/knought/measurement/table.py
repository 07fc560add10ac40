"""The table of rate constants: what was measured, in one system of units, checked once.

Everything further down takes a :class:`RateTable` and trusts it: k, T and uncertainties are
positive, ionic strengths are not negative, and every run that is left out says why.
"""

from __future__ import annotations

from dataclasses import dataclass, field, fields, replace
from fractions import Fraction
from types import MappingProxyType
from typing import TYPE_CHECKING, Any

import numpy as np

from knought.arrays import BoolArray, FloatArray, IndexArray, frozen
from knought.chemistry.quantities import rate_constant_unit
from knought.chemistry.units import parse_unit, reaction_order, scaled
from knought.errors import InputError, Problem
from knought.measurement.table_checks import problems_of

if TYPE_CHECKING:
    from collections.abc import Mapping, Sequence

    import pandas as pd
    from numpy.typing import ArrayLike

__all__ = ["RateTable", "Source"]

_NUMBERS = ("I", "u_k", "u_T", "u_I", "determinations")
_WORDS = ("salt", "batch")


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
        Sheet of a workbook.
    headers
        Header of the column that each quantity was read from, by sign (``"T"``, ``"k"``, ``"I"``).
    """

    name: str
    sha256: str
    sheet: str | None = None
    headers: Mapping[str, str] = field(default_factory=dict)

    def problem(self, what: str, remedy: str, sign: str, row: int | None) -> Problem:
        """Return a problem that names file, sheet, row and the column of a quantity."""
        return Problem(
            what,
            remedy,
            file=self.name,
            sheet=self.sheet,
            row=row,
            column=self.headers.get(sign, sign),
        )


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
        Labels; ``"1"``, ``"2"``, ... where not given.
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
    rows : (n,) array_like of int, optional
        Row of the source that each run was read from, as a spreadsheet shows it.
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
    rows: IndexArray | None = None
    account: tuple[object, ...] = ()

    def __post_init__(self) -> None:
        n = int(np.size(self.k))
        for name in ("k", "T", *_NUMBERS):
            values = getattr(self, name)
            if values is not None:
                object.__setattr__(self, name, frozen(values))
        if self.rows is not None:
            rows = np.array(self.rows, dtype=np.intp)
            rows.setflags(write=False)
            object.__setattr__(self, "rows", rows)
        used = np.ones(n, dtype=bool) if np.size(self.used) == 0 else np.array(self.used, bool)
        used.setflags(write=False)
        object.__setattr__(self, "used", used)
        self._keep_words(n)
        kept = {key: frozen(value) for key, value in self.concentrations.items()}
        object.__setattr__(self, "concentrations", MappingProxyType(kept))
        object.__setattr__(self, "order", Fraction(self.order))
        problems = problems_of(self)
        if problems:
            raise InputError(problems)

    def _keep_words(self, n: int) -> None:
        """Strip labels, number runs that have none, and drop columns without a word."""
        run = tuple(str(label).strip() for label in self.run) or ("",) * n
        labels = tuple(label or str(place) for place, label in enumerate(run, start=1))
        object.__setattr__(self, "run", labels)
        for name in ("reason", "note", *_WORDS):
            given = getattr(self, name)
            words = tuple(str(word).strip() for word in given or ())
            if name in _WORDS:
                object.__setattr__(self, name, words if any(words) else None)
            else:
                object.__setattr__(self, name, words or ("",) * n)

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
        factor = parsed.factor_to(parse_unit(rate_constant_unit(order)))
        return cls(
            k=scaled(k, factor),
            T=frozen(T),
            order=order,
            I=_maybe(I),
            u_k=None if u_k is None else scaled(u_k, factor),
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

    @property
    def ln_k(self) -> FloatArray:
        """Natural logarithm of k in its unit, ``(n,)``."""
        return frozen(np.log(self.k))

    @property
    def u_ln_k(self) -> FloatArray | None:
        """Standard uncertainty of ln k, u(k)/k (GUM 5.1.2), ``(n,)``; None where it is unknown."""
        return None if self.u_k is None else frozen(self.u_k / self.k)

    def problem(self, place: int, sign: str, what: str, remedy: str) -> Problem:
        """Return what is wrong with a quantity of the run at `place`, with the cell it came from.

        Parameters
        ----------
        place
            Which run, from 0.
        sign
            Sign of the quantity, ``"T"``, ``"k"`` or ``"I"``.
        what, remedy
            As for :class:`~knought.errors.Problem`; the run's label is put before `what`.
        """
        words = f"run {self.run[place]} {what}"
        if self.source is None:
            return Problem(words, remedy, column=sign)
        row = None if self.rows is None else int(self.rows[place])
        return self.source.problem(words, remedy, sign, row)

    def used_only(self) -> RateTable:
        """Return the table with only the runs that count."""
        if bool(np.all(self.used)):
            return self
        kept = np.flatnonzero(self.used)
        changes: dict[str, Any] = {
            name: None if getattr(self, name) is None else getattr(self, name)[kept]
            for name in ("k", "T", "used", "rows", *_NUMBERS)
        }
        for name in ("run", "reason", "note", *_WORDS):
            words = getattr(self, name)
            changes[name] = None if words is None else tuple(words[place] for place in kept)
        amounts = {key: values[kept] for key, values in self.concentrations.items()}
        return replace(self, **changes, concentrations=amounts)

    def same_runs(self, other: RateTable) -> bool:
        """Whether both tables hold the same runs, number for number and word for word.

        Source, rows and account don't count.
        """
        mine, theirs = self._compared(), other._compared()
        return mine.keys() == theirs.keys() and all(
            np.array_equal(mine[name], theirs[name]) for name in mine
        )

    def _compared(self) -> dict[str, Any]:
        """Everything that makes the runs, by name; columns that are not there left out."""
        parts: dict[str, Any] = {
            each.name: getattr(self, each.name)
            for each in fields(self)
            if each.name not in {"source", "rows", "account", "concentrations"}
            and getattr(self, each.name) is not None
        }
        return parts | {f"c({name})": values for name, values in self.concentrations.items()}

    def headed_columns(self) -> dict[str, FloatArray | tuple[str, ...]]:
        """Return every column under its ``quantity/unit`` header, numbers in the table's units."""
        k = _headed("k", self.rate_constant_unit)
        columns: dict[str, FloatArray | tuple[str, ...]] = {"run": self.run, "T/K": self.T}
        optional = {
            "I/(mol/L)": self.I,
            k: self.k,
            f"u({k[0]}){k[1:]}": self.u_k,
            "u(T)/K": self.u_T,
            "u(I)/(mol/L)": self.u_I,
            "n": self.determinations,
            "salt": self.salt,
            "batch": self.batch,
        }
        columns |= {header: values for header, values in optional.items() if values is not None}
        columns |= {f"c({name})/(mol/L)": values for name, values in self.concentrations.items()}
        columns["use"] = tuple("yes" if used else "no" for used in self.used)
        columns["reason"], columns["note"] = self.reason, self.note
        return columns

    def to_frame(self) -> pd.DataFrame:
        """Return the table as a pandas frame with ``quantity/unit`` headers."""
        import pandas as pd

        return pd.DataFrame(
            {
                header: list(values) if isinstance(values, tuple) else np.array(values)
                for header, values in self.headed_columns().items()
            }
        )


def _headed(sign: str, unit: str) -> str:
    return f"{sign}/({unit})" if " " in unit else f"{sign}/{unit}"


def _maybe(values: ArrayLike | None) -> FloatArray | None:
    return None if values is None else frozen(values)
