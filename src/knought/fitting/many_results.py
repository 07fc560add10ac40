"""Results of many data sets of one design: value, u and interval of every quantity, as arrays."""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TYPE_CHECKING, Any

import numpy as np

from knought.arrays import BoolArray, FloatArray, IndexArray, frozen
from knought.errors import InputError
from knought.fitting.found import ACTIVATION, FITTED
from knought.laws.activation import activation_rows
from knought.laws.surface import Rows

if TYPE_CHECKING:
    from collections.abc import Mapping, Sequence

    from knought.laws.surface import Surface
    from knought.numerics.quantiles import Mixture

__all__ = ["ManyResults", "joined", "result_rows", "results_of"]

#: The quantity that is the exponential of what is fitted.
_RATE = "rate_constant"


@dataclass(frozen=True, eq=False)
class ManyResults:
    """Value, standard uncertainty and interval of q quantities in m data sets.

    Attributes
    ----------
    names
        Names of the quantities, at T_ref and I → 0.
    values, uncertainties : (m, q) ndarray
        In SI units; as :class:`~knought.fitting.estimate.Estimate` gives them for one data set.
    low, high : (m, q) ndarray
        Ends of the intervals.
    coverage
        Of the intervals.
    chi_square : (m,) ndarray
        With the uncertainties as given (unit weights where none are).
    degrees_of_freedom
        Runs less parameters that no prior describes.
    from_scatter : (m,) ndarray of bool
        Whether the ± of each data set comes from its scatter.
    """

    names: tuple[str, ...]
    values: FloatArray
    uncertainties: FloatArray
    low: FloatArray
    high: FloatArray
    coverage: float
    chi_square: FloatArray
    degrees_of_freedom: int
    from_scatter: BoolArray

    def __len__(self) -> int:
        return len(self.chi_square)

    def value(self, name: str) -> FloatArray:
        """Return a quantity in every data set, ``(m,)``; raises InputError for an unknown one."""
        return self.values[:, self._place(name)]

    def standard_uncertainty(self, name: str) -> FloatArray:
        """Return its standard uncertainty, ``(m,)``; raises InputError for an unknown one."""
        return self.uncertainties[:, self._place(name)]

    def interval(self, name: str) -> tuple[FloatArray, FloatArray]:
        """Return the ends of its interval, ``(m,)`` each; raises InputError for an unknown one."""
        j = self._place(name)
        return self.low[:, j], self.high[:, j]

    def only(self, names: Sequence[str]) -> ManyResults:
        """Return some of the quantities; raises InputError for an unknown one."""
        places = [self._place(name) for name in names]
        chosen = (self.values, self.uncertainties, self.low, self.high)
        values, u, low, high = (frozen(each[:, places]) for each in chosen)
        return replace(self, names=tuple(names), values=values, uncertainties=u, low=low, high=high)

    def _place(self, name: str) -> int:
        if name not in self.names:
            raise InputError(
                f"there is no result called {name!r}", f"choose from {', '.join(self.names)}"
            )
        return self.names.index(name)


def result_rows(surface: Surface, wanted: Sequence[str] | None = None) -> dict[str, Rows]:
    """Return the results at T_ref and I → 0 as affine functions of the parameters.

    Parameters
    ----------
    surface
        The surface.
    wanted
        Names of results; all that the surface has if not given.

    Returns
    -------
    dict
        Name to rows; that of the rate constant is of its logarithm.

    Raises
    ------
    InputError
        If one is wanted that the surface does not have.
    """
    made = activation_rows(surface, surface.reference_temperature, 0.0)
    rows = {_RATE: made["ln_rate_constant"]}
    rows |= {name: made[name] for name in ACTIVATION if name in made}
    p = len(surface.parameters)
    for name in FITTED:
        if name in surface.parameters:
            rows[name] = Rows(np.zeros(1), np.eye(p)[[surface.parameters.index(name)]])
    missing = [name for name in wanted or () if name not in rows]
    if missing:
        raise InputError(f"these laws have no {missing[0]}", f"choose from {', '.join(rows)}")
    return {name: rows[name] for name in rows if wanted is None or name in wanted}


def results_of(
    mixtures: Mapping[str, Mixture],
    coverage: float,
    chi_square: FloatArray,
    degrees_of_freedom: int,
    from_scatter: BoolArray,
) -> ManyResults:
    """Return what distributions of m results each give.

    Parameters
    ----------
    mixtures
        Name to the distribution of m results; that of the rate constant is of its logarithm.
    coverage, chi_square, degrees_of_freedom, from_scatter
        As of :class:`ManyResults`.
    """
    columns = []
    known: list[tuple[Mixture, tuple[FloatArray, ...]]] = []
    for name, mixture in mixtures.items():
        found = _as_before(mixture, known)
        if found is None:
            found = (mixture.mean, mixture.standard_deviation, *mixture.interval(coverage))
            known.append((mixture, found))
        value, u, low, high = found
        if name == _RATE:
            value, low, high = np.exp(value), np.exp(low), np.exp(high)
            u = value * u
        columns.append(np.stack(np.broadcast_arrays(value, u, low, high)))
    values, u, low, high = (frozen(part) for part in np.stack(columns, axis=-1))
    return ManyResults(
        tuple(mixtures),
        values,
        u,
        low,
        high,
        coverage,
        frozen(chi_square),
        degrees_of_freedom,
        from_scatter,
    )


def _as_before(
    mixture: Mixture, known: Sequence[tuple[Mixture, tuple[FloatArray, ...]]]
) -> tuple[FloatArray, ...] | None:
    """Return a result that is a b + c of one found already, by that; None where there is none.

    E_a and ΔH‡, ΔG‡ and ln k, ln A and ΔS‡ are such pairs: their quantiles are sought once.
    """
    for other, (value, u, low, high) in known:
        if other.scales.shape != mixture.scales.shape or not np.all(other.scales > 0):
            continue
        size = float(mixture.scales.flat[0] / other.scales.flat[0])
        if not np.allclose(mixture.scales, size * other.scales, rtol=1e-11, atol=0):
            continue
        for factor in (size, -size):
            shift = mixture.locations - factor * other.locations
            first = float(shift.flat[0])
            # Locations are compared in units of the spread: that is what quantiles are good to.
            if np.all(np.abs(shift - first) <= 1e-10 * mixture.scales):
                ends = (factor * low + first, factor * high + first)
                return (factor * value + first, size * u, np.minimum(*ends), np.maximum(*ends))
    return None


def joined(parts: Sequence[ManyResults], order: IndexArray | None = None) -> ManyResults:
    """Return the results of several groups of data sets as one.

    Parameters
    ----------
    parts
        Results of the groups, of the same quantities.
    order : (m,) ndarray of int, optional
        Which data set each of the joined results is of; as they stand if not given.
    """

    def together(name: str) -> Any:
        found = np.concatenate([getattr(part, name) for part in parts])
        if order is not None:
            placed = np.empty_like(found)
            placed[order] = found
            found = placed
        found.setflags(write=False)
        return found

    first = parts[0]
    return ManyResults(
        first.names,
        together("values"),
        together("uncertainties"),
        together("low"),
        together("high"),
        first.coverage,
        together("chi_square"),
        first.degrees_of_freedom,
        together("from_scatter"),
    )
