"""The open law fitted to many data sets of one design, by the solver that fits one.

Everything that depends on the conditions alone is made once: the grid, its factorised designs, the
errors of the runs. A data set then is a few products of small matrices. Where the scatter gives the
±, each data set has nodes of σ of its own; they stand on one lattice, so that data sets with the
same nodes are solved together. Data sets that are too precise for the grid are solved on finer ones
by the rule of :mod:`knought.fitting.refinement`.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

import numpy as np

from knought.arrays import BoolArray, FloatArray, IndexArray, frozen
from knought.fitting import checks
from knought.fitting.many_results import ManyResults, joined, result_rows, results_of
from knought.fitting.open_fit import (
    CHARGE_PRODUCTS,
    flat_parameters,
    open_solver,
    settled_errors,
)
from knought.fitting.refinement import FEWEST_CELLS, FINEST, SETTLED_GRID
from knought.fitting.scatter import first_scale_node, from_scatter_many, scale_nodes_from
from knought.laws.open_law import open_grid
from knought.laws.surface import Surface
from knought.laws.temperature import temperature_law as named_temperature_law
from knought.numerics.quantiles import Mixture

if TYPE_CHECKING:
    from collections.abc import Sequence

    from knought.fitting.fit import Choices
    from knought.fitting.observations import Observations
    from knought.fitting.run_errors import RunErrors
    from knought.laws.open_law import OpenGrid
    from knought.laws.surface import Rows
    from knought.numerics.marginal import CellSolutions, CellSolver

__all__ = ["ManyOpen", "OpenResults"]

#: Data sets are solved in blocks of about this many numbers, so that memory stays bounded.
_BLOCK_NUMBERS = 4_000_000

#: Components that together weigh less than this in every data set of a block are left out.
_NEGLIGIBLE = 1e-10

#: Results whose movement decides whether a grid is fine enough.
_WATCHED = ("rate_constant", "charge_product")


@dataclass(frozen=True, eq=False)
class OpenResults:
    """What the open law gives for m data sets.

    Attributes
    ----------
    results
        Value, u and interval of every quantity.
    charge_product_weights : (m, 19) ndarray or None
        Weights of the integer charge products from -9 to 9; None where the charges are given.
    coarse : (m,) ndarray of bool
        Whether no grid was fine enough (the caveat ``coarse-grid`` of one data set).
    """

    results: ManyResults
    charge_product_weights: FloatArray | None
    coarse: BoolArray


class ManyOpen:
    """The open law at the conditions of one design.

    Parameters
    ----------
    seen
        The runs; their ln k is the mean of the data sets, along whose slopes errors of T and I are
        carried.
    choices
        What is fitted and how.
    coverage
        Of the intervals.
    wanted
        Names of results; all if None.

    Raises
    ------
    InputError
        If the runs cannot determine the parameters.
    """

    def __init__(
        self,
        seen: Observations,
        choices: Choices,
        coverage: float,
        wanted: Sequence[str] | None = None,
    ) -> None:
        self._seen, self._choices, self._coverage = seen, choices, coverage
        grid, surface = self._on(1)
        charges_given = choices.charge_product is not None
        checks.require_levels(seen, surface, charges_given=charges_given)
        centre = replace(surface, salt_law=grid.central)
        errors, _ = settled_errors(seen, centre, choices.priors)
        self._errors = at_measured_conditions(seen, errors)
        self._freedom = seen.runs - flat_parameters(surface)
        self._wanted = wanted
        self._solvers: dict[int, tuple[OpenGrid, CellSolver, dict[str, Rows]]] = {}

    def solve(self, ln_k: FloatArray) -> OpenResults:
        """Solve data sets.

        Parameters
        ----------
        ln_k : (m, n) ndarray
            ln k of the runs in each data set.

        Returns
        -------
        OpenResults
        """
        found, few = self._at(1, ln_k)
        refinement, pending = 1, np.flatnonzero(few)
        coarse = np.zeros(len(ln_k), dtype=bool)
        while len(pending) and refinement < FINEST:
            refinement *= 2
            before = _taken(found, pending)
            after, few = self._at(refinement, ln_k[pending])
            settled = _moved(before.results, after.results) < SETTLED_GRID
            found = _replaced(found, after, pending)
            pending = pending[few & ~settled]
        coarse[pending] = True
        results = found.results if self._wanted is None else found.results.only(self._wanted)
        return replace(found, results=results, coarse=coarse)

    def _on(self, refinement: int) -> tuple[OpenGrid, Surface]:
        choices = self._choices
        grid = open_grid(choices.priors, refinement)
        if choices.charge_product is not None:
            grid = grid.with_charges(choices.charge_product)
        surface = Surface(
            named_temperature_law(choices.temperature_law),
            grid.law,
            choices.reference_temperature,
            self._seen.order,
            choices.standard_concentration,
        )
        return grid, surface

    def _solver(self, refinement: int) -> tuple[OpenGrid, CellSolver, dict[str, Rows]]:
        if refinement not in self._solvers:
            grid, surface = self._on(refinement)
            solver = open_solver(self._seen, surface, grid, self._errors)
            rows = result_rows(surface)
            if self._wanted is not None:
                result_rows(surface, self._wanted)  # refuses what is not there
                # What decides on the grid is looked at whether or not it is wanted.
                looked_at = {*self._wanted, *_WATCHED}
                rows = {name: each for name, each in rows.items() if name in looked_at}
            self._solvers[refinement] = (grid, solver, rows)
        return self._solvers[refinement]

    def _at(self, refinement: int, ln_k: FloatArray) -> tuple[OpenResults, BoolArray]:
        """Solve data sets on one grid; say for which too few of its cells carry the weight."""
        grid, solver, rows = self._solver(refinement)
        chi_square = np.concatenate(
            [
                solver.solve(ln_k[block]).chi_square.min(axis=(1, 2))
                for block in _blocks(len(ln_k), grid.cells * ln_k.shape[1])
            ]
        )
        scattered = from_scatter_many(
            chi_square,
            self._freedom,
            stated=self._seen.u_given,
            choice=self._choices.scatter,
        )
        parts: list[OpenResults] = []
        places: list[IndexArray] = []
        few: list[BoolArray] = []
        for chosen, own in self._groups(chi_square, scattered, solver):
            size = grid.cells * len(own.scales) * (3 + len(rows))
            for block in _blocks(len(chosen), size):
                part = chosen[block]
                found, sparse = self._reduced(
                    own.solve(ln_k[part]), grid, rows, chi_square[part], scattered[part]
                )
                parts.append(found)
                places.append(part)
                few.append(sparse)
        order = np.concatenate(places)
        sparse = np.empty(len(ln_k), dtype=bool)
        sparse[order] = np.concatenate(few)
        return _joined(parts, order), sparse

    def _groups(
        self, chi_square: FloatArray, scattered: BoolArray, solver: CellSolver
    ) -> list[tuple[IndexArray, CellSolver]]:
        """Return the data sets that share values of σ, with the solver at these."""
        groups = []
        plain = np.flatnonzero(~scattered)
        if len(plain):
            groups.append((plain, solver))
        rest = np.flatnonzero(scattered)
        if len(rest):
            first, spacing = first_scale_node(chi_square[rest], self._freedom)
            for node in np.unique(first):
                scales = scale_nodes_from(int(node), spacing)
                groups.append((rest[first == node], solver.with_scales(scales)))
        return groups

    def _reduced(
        self,
        solutions: CellSolutions,
        grid: OpenGrid,
        rows: dict[str, Rows],
        chi_square: FloatArray,
        scattered: BoolArray,
    ) -> tuple[OpenResults, BoolArray]:
        """Turn solutions in all cells into results."""
        weights = solutions.weights
        m, cells, scales, p = solutions.means.shape
        by_cell = weights.reshape(m, cells, scales).sum(axis=2)
        few = (1.0 / np.sum(by_cell**2, axis=1) < FEWEST_CELLS) & (grid.cells > 1)
        heavy = np.flatnonzero(np.max(weights, axis=0) > _NEGLIGIBLE / weights.shape[1])
        weights = weights[:, heavy]
        weights = (weights / weights.sum(axis=1, keepdims=True)).T
        mixtures = {}
        for name, each in rows.items():
            row = np.broadcast_to(each.rows, (cells, 1, p))[:, 0]
            offset = np.broadcast_to(each.offset, (cells, 1))[:, 0]
            location = np.einsum("mcsp,cp->csm", solutions.means, row) + offset[:, None, None]
            variance = np.einsum("cp,cspq,cq->cs", row, solutions.covariances, row)
            scale = np.sqrt(np.maximum(variance, 0.0)).reshape(-1, 1)
            mixtures[name] = Mixture(weights, location.reshape(-1, m)[heavy], scale[heavy])
        charges = None
        if "charge_product" in mixtures:
            mixture = mixtures["charge_product"]
            density = np.stack([mixture.pdf(float(z)) for z in CHARGE_PRODUCTS], axis=1)
            total = density.sum(axis=1, keepdims=True)
            charges = frozen(density / np.where(total > 0, total, np.nan))
        results = results_of(mixtures, self._coverage, chi_square, self._freedom, scattered)
        return OpenResults(results, charges, np.zeros(m, dtype=bool)), few


def at_measured_conditions(seen: Observations, errors: RunErrors) -> RunErrors:
    """Return errors with every run at the conditions measured, none of them adjusted.

    Which way a run's T and I are adjusted depends on its k, and so on the data set.
    """
    zero = frozen(np.zeros(seen.runs))
    return replace(errors, T=seen.T, I=frozen(seen.ionic_strength), shift=zero)


def _blocks(count: int, numbers: int) -> list[slice]:
    size = max(1, _BLOCK_NUMBERS // max(1, numbers))
    return [slice(start, start + size) for start in range(0, count, size)]


def _moved(before: ManyResults, after: ManyResults) -> FloatArray:
    """Return how far value and u moved, over u, the larger of the two; see :func:`refined`."""
    moves = []
    for name in _WATCHED:
        if name in after.names:
            u, was = after.standard_uncertainty(name), before.standard_uncertainty(name)
            one, other = before.value(name), after.value(name)
            if name == "rate_constant":
                # Of k, what is watched is ln k.
                u, was, one, other = u / other, was / one, np.log(one), np.log(other)
            moves += [np.abs(one - other) / u, np.abs(was / u - 1)]
    return np.asarray(np.max(moves, axis=0))


def _joined(parts: Sequence[OpenResults], order: IndexArray) -> OpenResults:
    weights = [part.charge_product_weights for part in parts]
    charges = None
    if weights[0] is not None:
        charges = np.empty((len(order), len(CHARGE_PRODUCTS)))
        charges[order] = np.concatenate([each for each in weights if each is not None])
    return OpenResults(
        joined([part.results for part in parts], order),
        None if charges is None else frozen(charges),
        np.zeros(len(order), dtype=bool),
    )


def _taken(found: OpenResults, places: IndexArray) -> OpenResults:
    """Return the results of some data sets."""
    every = found.results
    kept = {
        name: getattr(every, name)[places]
        for name in ("values", "uncertainties", "low", "high", "chi_square", "from_scatter")
    }
    weights = found.charge_product_weights
    return OpenResults(
        replace(every, **kept),
        None if weights is None else frozen(weights[places]),
        found.coarse[places],
    )


def _replaced(found: OpenResults, other: OpenResults, places: IndexArray) -> OpenResults:
    """Return results with those at `places` replaced."""
    rest = np.setdiff1d(np.arange(len(found.coarse)), places)
    if not len(rest):
        return other
    return _joined([_taken(found, rest), other], np.concatenate([rest, places]))
