"""What a design will give, found by making its data many times and solving them as real ones.

Truths are drawn from what may be true (the priors of the salt law, or what the runs already made
leave), data from the truths with the errors that are assumed, and every data set is solved in the
cells of the open law by the solver that fits real runs (:mod:`knought.numerics.marginal`). The
expected u is the root mean square of the u that these fits report. By the law of total variance it
is also the root mean square of their errors, which is how it is checked.

With one linear law and given u every data set reports the same u, and one is enough.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property
from typing import TYPE_CHECKING

import numpy as np

from knought.discussion.plan_aims import headline_rows
from knought.numerics.marginal import CellSolver
from knought.numerics.seeds import generator

if TYPE_CHECKING:
    from collections.abc import Mapping

    from knought.arrays import FloatArray, IndexArray
    from knought.discussion.plan_model import PlanModel
    from knought.fitting.found import Found
    from knought.laws.surface import Rows

__all__ = ["MadeData", "SimulatedRuns", "conditions_of_all", "made_data", "simulate_runs"]

#: Data sets from which an expected u is found: its own relative error is then about 1 %.
DEFAULT_DATA_SETS = 1000


@dataclass(frozen=True, eq=False)
class SimulatedRuns:
    """What m simulated data sets of one design gave, in every cell.

    Attributes
    ----------
    weights : (m, c) ndarray
        Weight of each cell.
    names
        Names of the t quantities.
    location : (m, c, t) ndarray
        Best value of each quantity in each cell.
    variance : (c, t) ndarray
        Its variance there.
    truth : (m, t) ndarray
        What was true.
    """

    weights: FloatArray
    names: tuple[str, ...]
    location: FloatArray
    variance: FloatArray
    truth: FloatArray

    @cached_property
    def value(self) -> FloatArray:
        """Reported value of each quantity in each data set, ``(m, t)``."""
        return np.asarray(np.einsum("mc,mct->mt", self.weights, self.location))

    @cached_property
    def u(self) -> FloatArray:
        """Reported standard uncertainty, within cells plus between them, ``(m, t)``."""
        within = self.weights @ self.variance
        away = self.location - self.value[:, None]
        return np.asarray(np.sqrt(within + np.einsum("mc,mct->mt", self.weights, away**2)))

    @property
    def expected(self) -> Mapping[str, float]:
        """Root mean square of the reported u, by quantity; that of k° is relative."""
        return self._by_name(np.sqrt(np.mean(self.u**2, axis=0)))

    @property
    def error(self) -> Mapping[str, float]:
        """Root mean square of value less truth, by quantity."""
        return self._by_name(np.sqrt(np.mean((self.value - self.truth) ** 2, axis=0)))

    def _by_name(self, values: FloatArray) -> dict[str, float]:
        return {name: float(value) for name, value in zip(self.names, values, strict=True)}


def simulate_runs(
    model: PlanModel,
    T: FloatArray,
    I: FloatArray,
    *,
    data_sets: int = DEFAULT_DATA_SETS,
    seed: int,
    targets: Mapping[str, Rows] | None = None,
    remade: bool = False,
) -> SimulatedRuns:
    """Make data of a design and solve them, beside the runs already made.

    Parameters
    ----------
    model
        What will be fitted, and what is taken as true.
    T, I : (n,) ndarray
        Conditions of the runs in K and mol/L.
    data_sets
        How many to make.
    seed
        Of the truths and of the errors.
    targets
        Quantities as rows ``(c, 1, p)``; the headline quantities if not given.
    remade
        Whether the runs already made are made again as well, by the same truth as the others; for
        truths that the real ones contradict.
    """
    rows = headline_rows(model) if targets is None else targets
    made = made_data(model, T, I, data_sets=data_sets, seed=seed, remade=remade)
    solutions = solver_of(model, T, I).solve(made.ln_k)
    matrix = np.concatenate([each.rows for each in rows.values()], axis=1)
    offset = np.concatenate([each.offset for each in rows.values()], axis=1)
    covariance = solutions.covariances[:, 0]
    return SimulatedRuns(
        solutions.weights,
        tuple(rows),
        offset + np.einsum("ctp,mcp->mct", matrix, solutions.means[:, :, 0]),
        np.einsum("ctp,cpq,ctq->ct", matrix, covariance, matrix),
        np.stack([made.truth(each) for each in rows.values()], axis=1),
    )


@dataclass(frozen=True, eq=False)
class MadeData:
    """Data sets made of a design, and what was true of each.

    Attributes
    ----------
    ln_k : (m, n) ndarray
        Of the runs already made, and of the further ones behind them.
    cell : (m,) ndarray of int
        The cell that was true.
    theta : (m, p) ndarray
        The parameters that were.
    """

    ln_k: FloatArray
    cell: IndexArray
    theta: FloatArray

    def truth(self, rows: Rows) -> FloatArray:
        """Return what was true of one quantity, ``(m,)``; `rows` with the axis of the cells."""
        offset, matrix = rows.offset[self.cell, 0], rows.rows[self.cell, 0]
        return np.asarray(offset + np.einsum("mp,mp->m", matrix, self.theta))


def made_data(
    model: PlanModel,
    T: FloatArray,
    I: FloatArray,
    *,
    data_sets: int,
    seed: int,
    remade: bool = False,
) -> MadeData:
    """Draw what is true, and the data that it gives.

    Parameters
    ----------
    model, T, I, data_sets, seed, remade
        As for :func:`simulate_runs`.
    """
    random = generator(seed, len(T))
    component = random.choice(len(model.possible.weights), size=data_sets, p=model.possible.weights)
    cell, theta = _truths(model, component, random)
    return MadeData(_data(model, T, I, cell, theta, random, remade=remade), cell, theta)


def solver_of(model: PlanModel, T: FloatArray, I: FloatArray) -> CellSolver:
    """Return the solver of the runs already made together with runs at `T` and `I`."""
    all_T, all_I, u = conditions_of_all(model, T, I)
    rows = model.rows(all_T, all_I)
    return CellSolver(
        rows.rows,
        rows.offset,
        u,
        model.log_prior,
        prior_rows=model.prior_rows,
        prior_values=model.prior_values,
        shared=model.shared_of_all(T, I),
    )


def _truths(
    model: PlanModel,
    component: IndexArray,
    random: np.random.Generator,
) -> tuple[IndexArray, FloatArray]:
    """Draw parameters from what may be true: cell ``(m,)`` and parameters ``(m, p)``."""
    possible = model.possible
    cells = possible.cell
    cell = np.zeros_like(component) if cells is None else np.asarray(cells)[component]
    values, vectors = np.linalg.eigh(possible.covariances)
    root = vectors * np.sqrt(np.maximum(values, 0.0))[:, None, :]
    standard = random.standard_normal((len(component), possible.means.shape[1]))
    theta = possible.means[component] + np.einsum("mpq,mq->mp", root[component], standard)
    return cell, theta


def _data(
    model: PlanModel,
    T: FloatArray,
    I: FloatArray,
    cell: IndexArray,
    theta: FloatArray,
    random: np.random.Generator,
    *,
    remade: bool,
) -> FloatArray:
    """Make ln k of each data set; what the runs already made gave stands before it."""
    if model.found is None or remade:
        all_T, all_I, u = conditions_of_all(model, T, I)
        shared = model.shared_of_all(T, I)
        hidden = random.standard_normal((len(cell), shared.shape[1])) @ shared.T
        return np.asarray(_noisy(model, all_T, all_I, u, cell, theta, random) + hidden)
    seen = model.found.observations
    made = np.broadcast_to(seen.ln_k, (len(cell), seen.runs))
    further = _noisy(model, T, I, model.u(T, I), cell, theta, random)
    if model.shared_errors:
        # What a shared error was when the runs were made is hidden in their residuals, and the
        # further runs have the same.
        hidden = _hidden(model, model.found, cell, theta, random)
        further += hidden @ model.shared(T, I).T
    return np.concatenate([made, further], axis=1)


def _hidden(
    model: PlanModel,
    found: Found,
    cell: IndexArray,
    theta: FloatArray,
    random: np.random.Generator,
) -> FloatArray:
    """Draw the shared errors given the runs already made and what is true, ``(m, q)``.

    Residuals r = J e + independent errors, e standard normal before them: normal afterwards, with
    the precision 1 + Jᵀ J and the mean (1 + Jᵀ J)⁻¹ Jᵀ r, all divided by u.
    """
    seen, u = found.observations, found.effective_u
    J = model.shared(seen.T, seen.ionic_strength, seen.batch, seen.run) / u[:, None]
    rows = model.rows(seen.T, seen.ionic_strength)
    exact = rows.offset[cell] + np.einsum("mnp,mp->mn", rows.rows[cell], theta)
    lower = np.linalg.cholesky(np.eye(J.shape[1]) + J.T @ J)
    pulled = np.linalg.solve(lower, ((seen.ln_k - exact) / u @ J).T)
    drawn = pulled + random.standard_normal(pulled.shape)
    return np.asarray(np.linalg.solve(lower.T, drawn).T)


def _noisy(
    model: PlanModel,
    T: FloatArray,
    I: FloatArray,
    u: FloatArray,
    cell: IndexArray,
    theta: FloatArray,
    random: np.random.Generator,
) -> FloatArray:
    """Make ln k with independent errors, ``(m, n)``."""
    rows = model.rows(T, I)
    exact = rows.offset[cell] + np.einsum("mnp,mp->mn", rows.rows[cell], theta)
    return np.asarray(exact + u * random.standard_normal(exact.shape))


def conditions_of_all(
    model: PlanModel, T: FloatArray, I: FloatArray
) -> tuple[FloatArray, FloatArray, FloatArray]:
    """Return T, I and u of ln k of the runs already made and of further ones behind them."""
    u = model.u(T, I)
    if model.found is None:
        return T, I, u
    seen = model.found.observations
    return (
        np.concatenate([seen.T, T]),
        np.concatenate([seen.ionic_strength, I]),
        np.concatenate([model.found.effective_u, u]),
    )
