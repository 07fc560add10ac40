"""What a fit sees of a rate table: ln k with its uncertainty, at T and I, used runs only."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from knought.arrays import FloatArray, frozen
from knought.errors import InputError
from knought.measurement.table import RateTable

if TYPE_CHECKING:
    from collections.abc import Iterator, Sequence
    from fractions import Fraction

    from knought.measurement.shared_errors import SharedError

__all__ = ["Observations", "distinct_levels", "observe"]

#: Temperatures closer than this (K) are one temperature; ionic strengths closer than this
#: fraction of the larger are one ionic strength.
_SAME_TEMPERATURE = 0.5
_SAME_IONIC_STRENGTH = 0.02

#: Neighbours chain into one level up to this many of the distances that they share it within.
_LONGEST_LEVEL = 4.0


@dataclass(frozen=True, eq=False)
class Observations:
    """The runs that a fit uses.

    Attributes
    ----------
    ln_k : (n,) ndarray
        Natural logarithm of k in (L/mol)^(order-1) s^-1.
    u : (n,) ndarray
        Standard uncertainty of ln k: absolute where `u_given`, else relative weights only.
    T : (n,) ndarray
        K.
    I : (n,) ndarray or None
        mol/L; None where the table has no ionic strengths.
    u_T, u_I : (n,) ndarray or None
        Standard uncertainties of each run's own T and I.
    u_given
        Whether the table states uncertainties of k.
    order
        Overall order of the reaction.
    batch, salt
        Batch and salt of each run, where the table has them.
    shared
        Errors that several runs share.
    own
        Named errors that each run has of its own, beside u, u_T and u_I.
    run
        Labels of the runs, for messages.
    rates
        The table that the runs come from, for messages; None where there is none.
    """

    ln_k: FloatArray
    u: FloatArray
    T: FloatArray
    I: FloatArray | None
    u_T: FloatArray | None
    u_I: FloatArray | None
    u_given: bool
    order: Fraction
    batch: tuple[str, ...] | None = None
    salt: tuple[str, ...] | None = None
    shared: tuple[SharedError, ...] = ()
    run: tuple[str, ...] | None = None
    own: tuple[SharedError, ...] = ()
    rates: RateTable | None = None

    @property
    def runs(self) -> int:
        """Number of runs."""
        return len(self.ln_k)

    @property
    def ionic_strength(self) -> FloatArray:
        """I of each run; zeros where the table has none (no law then reads it)."""
        return np.zeros(self.runs) if self.I is None else self.I

    @property
    def temperature_levels(self) -> FloatArray:
        """The distinct temperatures, in K."""
        return distinct_levels(self.T, absolute=_SAME_TEMPERATURE)

    @property
    def ionic_strength_levels(self) -> FloatArray:
        """The distinct ionic strengths, in mol/L; empty where the table has none."""
        if self.I is None:
            return np.zeros(0)
        return distinct_levels(self.I, relative=_SAME_IONIC_STRENGTH)

    @property
    def has_abscissa_errors(self) -> bool:
        """Whether errors of each run's T or I are given and count: beside a stated u(k) only."""
        named = any(error.kind != "factor" for error in self.own)
        return self.u_given and (self.u_T is not None or self.u_I is not None or named)


def observe(rates: RateTable, shared_errors: Sequence[SharedError] = ()) -> Observations:
    """Return what a fit sees of `rates`.

    Where the table states no uncertainty of k, runs that average more determinations weigh more.

    Parameters
    ----------
    rates
        The table.
    shared_errors
        Named errors, those that several runs share and those that each run has of its own.

    Raises
    ------
    InputError
        If no run is used.
    """
    if not isinstance(rates, RateTable):
        raise InputError(
            "the runs are no RateTable", "make one with read_rates or RateTable.from_arrays"
        )
    used = rates.used_only()
    if len(used) == 0:
        raise InputError("no run is used", "set the column use to yes for the runs to fit")
    if used.u_k is not None:
        u = used.u_k / used.k
    elif used.determinations is not None:
        u = 1.0 / np.sqrt(used.determinations)
    else:
        u = np.ones(len(used))
    return Observations(
        ln_k=frozen(np.log(used.k)),
        u=frozen(u),
        T=used.T,
        I=used.I,
        u_T=used.u_T,
        u_I=used.u_I,
        u_given=used.u_k is not None,
        order=used.order,
        batch=used.batch,
        salt=used.salt,
        shared=tuple(error for error in shared_errors if not error.each_run),
        run=used.run,
        own=tuple(error for error in shared_errors if error.each_run),
        rates=used,
    )


def distinct_levels(
    values: FloatArray, *, absolute: float = 0.0, relative: float = 0.0
) -> FloatArray:
    """Return the distinct levels among `values`, each the mean of the values that share it.

    Parameters
    ----------
    values : (n,) ndarray
        Values, at least zero.
    absolute, relative
        Neighbours closer than this (or than this fraction of the larger) share a level, unless so
        many do that its ends lie four times as far apart.
    """
    ordered = np.sort(values)
    gaps = np.diff(ordered) > absolute + relative * ordered[1:]
    chains = np.split(ordered, np.flatnonzero(gaps) + 1)
    return np.array([part.mean() for chain in chains for part in _parts(chain, absolute, relative)])


def _parts(chain: FloatArray, absolute: float, relative: float) -> Iterator[FloatArray]:
    """Cut a chain of neighbours that has grown too long for one level into pieces.

    Many runs at ever other conditions lie close together without sharing one level.
    """
    start = 0
    while start < len(chain):
        longest = _LONGEST_LEVEL * (absolute + relative * chain[start])
        end = int(np.searchsorted(chain, chain[start] + longest, side="right"))
        yield chain[start:end]
        start = end
