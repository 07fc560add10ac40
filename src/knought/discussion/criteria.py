"""The criterion of a plan: one number for a design, and for every way to add one run to it.

A criterion counts runs at the candidates of a reach, ``runs`` of shape ``(N,)``; fractions of runs
are allowed, so that exact and continuous designs share it.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TYPE_CHECKING, Protocol

import numpy as np

from knought.discussion.cell_information import CellInformation
from knought.discussion.plan_aims import aim_rows, aim_score
from knought.laws.salt import salt_law as named_salt_law
from knought.laws.surface import Rows

if TYPE_CHECKING:
    from knought.arrays import FloatArray
    from knought.discussion.plan_aims import Aim
    from knought.discussion.plan_model import PlanModel
    from knought.discussion.reach import Reach

__all__ = ["Criterion", "QuantityCriterion", "RivalLawsCriterion", "criterion_of"]

#: χ² is never taken as smaller than this, so that a design which tells nothing is merely very bad.
_LEAST_MISFIT = 1e-12


class Criterion(Protocol):
    """What every criterion offers; smaller is better, and it falls like 1/n."""

    def __len__(self) -> int:
        """Return the number of candidates."""
        ...

    def values(self, runs: FloatArray) -> FloatArray:
        """Return the criterion of d designs, ``(d, N)`` to ``(d,)``."""
        ...

    def with_one_more(self, runs: FloatArray, amount: float = 1.0) -> FloatArray:
        """Return the criterion after one run more at each candidate, ``(N,)`` to ``(N,)``."""
        ...


@dataclass(frozen=True, eq=False)
class QuantityCriterion:
    """Variance of a quantity, of all, or the odds of a charge product; see :mod:`.plan_aims`."""

    aim: Aim
    information: CellInformation
    target: Rows

    def __len__(self) -> int:
        return len(self.information)

    def values(self, runs: FloatArray) -> FloatArray:
        """Return the criterion of d designs, ``(d, N)`` to ``(d,)``."""
        state = self.information.state(runs)
        return aim_score(self.aim, self.information.moments(state, self.target))

    def with_one_more(self, runs: FloatArray, amount: float = 1.0) -> FloatArray:
        """Return the criterion after one run more at each candidate, ``(N,)`` to ``(N,)``."""
        state = self.information.state(runs[None])
        moments = self.information.moments_with_one_more(state, self.target, amount)
        return aim_score(self.aim, moments)


@dataclass(frozen=True, eq=False)
class RivalLawsCriterion:
    """1/χ² of a law on the data of its rival, whichever of the two is less.

    Attributes
    ----------
    fits
        Each law as fitted to the other's noise-free data.
    """

    fits: tuple[CellInformation, CellInformation]

    def __len__(self) -> int:
        return len(self.fits[0])

    def values(self, runs: FloatArray) -> FloatArray:
        """Return the criterion of d designs, ``(d, N)`` to ``(d,)``."""
        each = [fit.state(runs).chi_square[:, 0] for fit in self.fits]
        return _of_misfit(np.minimum(*each))

    def with_one_more(self, runs: FloatArray, amount: float = 1.0) -> FloatArray:
        """Return the criterion after one run more at each candidate, ``(N,)`` to ``(N,)``."""
        each = [fit.misfit_with_one_more(fit.state(runs[None]), amount)[0] for fit in self.fits]
        return _of_misfit(np.minimum(*each))


def _of_misfit(misfit: FloatArray) -> FloatArray:
    return np.asarray(1.0 / np.maximum(misfit, _LEAST_MISFIT))


def criterion_of(aim: Aim, model: PlanModel, reach: Reach) -> Criterion:
    """Return the criterion of an aim over the candidates of a reach.

    Parameters
    ----------
    aim
        What the plan is for.
    model
        What will be fitted, and what is taken as true.
    reach
        The candidates.

    Raises
    ------
    InputError
        If the fit will not have the quantity, or a property of water is needed outside 0-100 °C.
    """
    if aim.kind == "laws":
        one, other = (_named(model, name) for name in aim.laws)
        return RivalLawsCriterion(
            (_information(one, reach, truth=other), _information(other, reach, truth=one))
        )
    target = aim_rows(aim, model)
    hidden = np.zeros((*target.rows.shape[:-1], len(model.shared_errors)))
    padded = Rows(target.offset, np.concatenate([target.rows, hidden], axis=-1))
    return QuantityCriterion(aim, _information(model, reach, truth=model), padded)


def _information(model: PlanModel, reach: Reach, truth: PlanModel) -> CellInformation:
    T, I = reach.T, reach.ionic_strength
    rows, observed = _augmented(model, T, I, truth.expected_ln_k(T, I))
    hidden = len(model.shared_errors)
    p = len(model.parameters)
    priors = np.zeros((len(model.prior_rows) + hidden, p + hidden))
    priors[: len(model.prior_rows), :p] = model.prior_rows
    priors[len(model.prior_rows) :, p:] = np.eye(hidden)
    values = np.concatenate([model.prior_values, np.zeros(hidden)])
    made = None
    if model.found is not None:
        seen = model.found.observations
        I_made = seen.ionic_strength
        ln_k = seen.ln_k if truth is model else truth.expected_ln_k(seen.T, I_made)
        rows_made, observed_made = _augmented(model, seen.T, I_made, ln_k, seen.batch)
        made = (rows_made, observed_made, model.found.effective_u)
    return CellInformation(rows, observed, model.u(T, I), model.log_prior, priors, values, made)


def _augmented(
    model: PlanModel,
    T: FloatArray,
    I: FloatArray,
    ln_k: FloatArray,
    batch: tuple[str, ...] | None = None,
) -> tuple[FloatArray, FloatArray]:
    """Return design rows with the columns of shared errors, and observations less offsets."""
    rows = model.rows(T, I)
    shared = model.shared(T, I, batch)
    hidden = np.broadcast_to(shared, (model.cells, *shared.shape))
    return np.concatenate([rows.rows, hidden], axis=-1), ln_k - rows.offset


def _named(model: PlanModel, name: str) -> PlanModel:
    """Return the model with a named salt law, its parameters as they are taken to be."""
    law = named_salt_law(name)
    given = model.surface.salt_law.given_charge_product
    if given is not None:
        law = law.with_charges(given)
    surface = replace(model.surface, salt_law=law)
    taken = dict(zip(model.parameters, model.possible.mean, strict=True))
    mean = np.array([taken.get(parameter, 0.0) for parameter in surface.parameters])
    p = len(mean)
    possible = replace(
        model.possible,
        names=surface.parameters,
        weights=np.ones(1),
        means=mean[None],
        covariances=np.zeros((1, p, p)),
        cell=None,
    )
    return replace(
        model,
        surface=surface,
        log_prior=np.zeros(1),
        prior_rows=np.zeros((0, p)),
        prior_values=np.zeros(0),
        possible=possible,
    )
