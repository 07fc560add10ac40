"""The front door for many data sets of one design: simulation, planning and bootstrap use it.

What depends on the conditions alone is made once, and every data set is then solved by the
equations that solve one (:func:`knought.assess`): the same grid, the same rule for the headline ±,
the same named laws beside it.
"""

from __future__ import annotations

from concurrent.futures import ProcessPoolExecutor
from dataclasses import dataclass, replace
from functools import partial
from types import MappingProxyType
from typing import TYPE_CHECKING

import numpy as np

from knought.arrays import BoolArray, FloatArray, frozen
from knought.errors import InputError
from knought.fitting.assess import Refusal
from knought.fitting.fit import Choices, resolve
from knought.fitting.many_named import ManyNamed, NamedResults, named_or_refused
from knought.fitting.many_open import ManyOpen
from knought.fitting.many_results import ManyResults, joined
from knought.fitting.observations import observe
from knought.laws.salt import OPEN, SALT_LAWS

if TYPE_CHECKING:
    from collections.abc import Iterator, Mapping, Sequence

    from numpy.typing import ArrayLike

    from knought.fitting.observations import Observations
    from knought.fitting.scatter import ScatterChoice
    from knought.laws.open_law import Priors
    from knought.measurement.shared_errors import SharedError
    from knought.measurement.table import RateTable

__all__ = ["ManyAssessments", "assess_many"]

#: Data sets are handed out in portions of this size, whatever the number of workers, so that the
#: numbers do not depend on it.
_PORTION = 500


@dataclass(frozen=True, eq=False)
class ManyAssessments:
    """What m data sets of one design tell.

    Attributes
    ----------
    choices
        What was fitted and how.
    headline
        The answer in each data set: value, u and interval of every quantity.
    charge_product_weights : (m, 19) ndarray or None
        Weights of the integer charge products from -9 to 9 under the open law; None where the
        charges are given or the headline is a named law.
    coarse : (m,) ndarray of bool
        Data sets so precise that no grid of the open law was fine enough.
    laws
        Name of a salt law to what it gives.
    refused
        Laws that the runs cannot carry, and why.
    """

    choices: Choices
    headline: ManyResults
    charge_product_weights: FloatArray | None
    coarse: BoolArray
    laws: Mapping[str, NamedResults]
    refused: tuple[Refusal, ...]

    def __len__(self) -> int:
        return len(self.headline)

    def value(self, name: str) -> FloatArray:
        """Return a headline quantity in every data set, ``(m,)``; see :class:`ManyResults`."""
        return self.headline.value(name)

    def standard_uncertainty(self, name: str) -> FloatArray:
        """Return its standard uncertainty, ``(m,)``; see :class:`ManyResults`."""
        return self.headline.standard_uncertainty(name)

    def interval(self, name: str) -> tuple[FloatArray, FloatArray]:
        """Return the ends of its interval, ``(m,)`` each; see :class:`ManyResults`."""
        return self.headline.interval(name)


def assess_many(
    rates: RateTable,
    k: ArrayLike,
    *,
    temperature_law: str | None = None,
    salt_law: str | None = None,
    reference_temperature: float | None = None,
    standard_concentration: float = 1.0,
    charge_product: float | None = None,
    reactants: str | None = None,
    ion_size: float | None = None,
    priors: Priors | None = None,
    scatter: ScatterChoice | None = None,
    shared_errors: Sequence[SharedError] = (),
    coverage: float = 0.95,
    quantities: Sequence[str] | None = None,
    named_laws: bool = True,
    workers: int = 1,
) -> ManyAssessments:
    """Assess many data sets measured at the conditions of one table.

    Parameters
    ----------
    rates
        The design: conditions, relative uncertainties u(k)/k (or none) and batches of the runs;
        the values of its k are not used.
    k : (m, n) array_like
        Rate constants of m data sets, in the unit of the table, one column for each run of the
        table that counts.
    temperature_law, salt_law, reference_temperature, standard_concentration
        As for :func:`knought.assess`.
    charge_product, reactants, ion_size, priors, scatter, shared_errors
        As for :func:`knought.assess`.
    coverage
        Of the intervals.
    quantities
        Names of the results that are wanted; all if not given.
    named_laws
        Whether every named law is fitted beside the headline.
    workers
        Processes to share the work; the numbers do not depend on how many.

    Returns
    -------
    ManyAssessments
        Each data set's results are those of :func:`knought.assess` on it alone. Errors of T and I
        (of each run or shared) are the exception: they are carried into ln k along the slopes of
        the fit to the mean of all data sets, and no run's conditions are adjusted.

    Raises
    ------
    InputError
        If k does not fit the table or is not above zero, a law or quantity is unknown, or the runs
        cannot determine the parameters of the headline.
    """
    seen = observe(rates, shared_errors)
    ln_k = _ln_k(k, seen)
    if not 0 < coverage < 1:
        raise InputError(f"a coverage must lie between 0 and 1, not {coverage}", "give it as 0.95")
    seen = replace(seen, ln_k=frozen(ln_k.mean(axis=0)))
    choices = resolve(
        seen,
        temperature_law=temperature_law,
        salt_law=salt_law,
        reference_temperature=reference_temperature,
        standard_concentration=standard_concentration,
        charge_product=charge_product,
        reactants=reactants,
        ion_size=ion_size,
        priors=priors,
        scatter=scatter,
    )
    if workers > 1:
        # Messages name cells of the table; it need not travel to every process.
        seen = replace(seen, rates=None)
    work = _Work(seen, choices, coverage, None if quantities is None else tuple(quantities))
    solve = partial(work.solve, named_laws=named_laws)
    portions = [ln_k[start : start + _PORTION] for start in range(0, len(ln_k), _PORTION)]
    return _joined(choices, list(_solved(solve, portions, workers)))


def _ln_k(k: ArrayLike, seen: Observations) -> FloatArray:
    values = np.asarray(k, dtype=float)
    if values.ndim != 2 or values.shape[1] != seen.runs or not len(values):
        raise InputError(
            f"k has shape {values.shape} and the table {seen.runs} runs that count",
            "give k as (data sets, runs), one data set at least",
        )
    if not (np.all(values > 0) and np.all(np.isfinite(values))):
        raise InputError("k holds a value that is not positive", "give positive rate constants")
    return np.asarray(np.log(values))


def _solved(
    solve: partial[_Portion], portions: list[FloatArray], workers: int
) -> Iterator[_Portion]:
    if workers < 2 or len(portions) == 1:
        yield from map(solve, portions)
        return
    with ProcessPoolExecutor(max_workers=min(workers, len(portions))) as pool:
        yield from pool.map(solve, portions)


@dataclass(frozen=True, eq=False)
class _Portion:
    """Results of a portion of the data sets."""

    headline: ManyResults
    weights: FloatArray | None
    coarse: BoolArray
    laws: dict[str, NamedResults]
    refused: tuple[Refusal, ...]


@dataclass(frozen=True)
class _Work:
    """What is done to every portion."""

    seen: Observations
    choices: Choices
    coverage: float
    wanted: tuple[str, ...] | None

    def solve(self, ln_k: FloatArray, *, named_laws: bool) -> _Portion:
        """Solve one portion."""
        laws, refused = self._named(ln_k) if named_laws else ({}, ())
        if self.choices.salt_law == OPEN:
            opened = ManyOpen(self.seen, self.choices, self.coverage, self.wanted).solve(ln_k)
            weights = opened.charge_product_weights
            return _Portion(opened.results, weights, opened.coarse, laws, refused)
        found = ManyNamed(self.seen, self.choices, self.coverage, self.wanted).solve(ln_k)
        coarse = np.zeros(len(ln_k), dtype=bool)
        return _Portion(found.results, None, coarse, laws, refused)

    def _named(self, ln_k: FloatArray) -> tuple[dict[str, NamedResults], tuple[Refusal, ...]]:
        found: dict[str, NamedResults] = {}
        refused = []
        for name in SALT_LAWS:
            if self.seen.I is None and name != "none":
                continue
            size = self.choices.ion_size if name == "extended" else None
            choices = replace(self.choices, salt_law=name, ion_size=size)
            law = named_or_refused(self.seen, choices, self.coverage, None)
            if isinstance(law, InputError):
                refused.append(Refusal(choices.temperature_law, name, str(law)))
            else:
                found[name] = law.solve(ln_k)
        return found, tuple(refused)


def _joined(choices: Choices, portions: list[_Portion]) -> ManyAssessments:
    first = portions[0]
    weights = [each.weights for each in portions if each.weights is not None]
    coarse = np.concatenate([each.coarse for each in portions])
    coarse.setflags(write=False)
    laws = {
        name: NamedResults(
            joined([each.laws[name].results for each in portions]),
            frozen(np.concatenate([each.laws[name].aicc for each in portions])),
        )
        for name in first.laws
    }
    return ManyAssessments(
        choices,
        joined([each.headline for each in portions]),
        frozen(np.concatenate(weights)) if weights else None,
        coarse,
        MappingProxyType(laws),
        first.refused,
    )
