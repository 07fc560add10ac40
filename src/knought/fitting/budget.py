"""Uncertainty budgets: what each source of error adds to the variance of a result.

Every estimate is linear in the observations, the shared errors and the priors, each in units of its
standard uncertainty; so the squares of those coefficients ("gain") are the contributions, and they
add up to the variance exactly. Under the open law they are averaged over its cells, and what the
cells disagree by is the contribution of not knowing the salt law: first that of å (the variance of
the means given å), then that of c, then that of what stays constant with temperature.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from knought.errors import InputError
from knought.fitting.open_fit import OpenFit
from knought.fitting.surface_fit import SurfaceFit
from knought.laws.activation import activation_rows
from knought.laws.surface import Rows

if TYPE_CHECKING:
    from collections.abc import Mapping

    import numpy.typing as npt

    from knought.arrays import FloatArray, IndexArray
    from knought.chemistry.quantities import Quantity
    from knought.fitting.found import Found
    from knought.fitting.run_errors import RunErrors
    from knought.laws.open_law import OpenGrid

__all__ = ["Budget", "budget"]

_BETA = "prior of β"
_ION_SIZE = "open law: å"
_LINEAR = "open law: c"
_FOLLOWS = "open law: å or B å constant"
_SCATTER = "size of the scatter"

#: What rounding leaves of a contribution that is zero, relative to the variance.
_ROUNDING = 1e-20


@dataclass(frozen=True)
class Budget:
    """What adds to the variance of one result.

    Attributes
    ----------
    quantity
        Of what.
    variances
        Source to its contribution to the variance, in the squared unit of the quantity (SI; for a
        rate constant through u(k) = k u(ln k)); they add up to the variance.
    """

    quantity: Quantity
    variances: Mapping[str, float]

    @property
    def total(self) -> float:
        """The variance."""
        return sum(self.variances.values())

    @property
    def shares(self) -> Mapping[str, float]:
        """Source to its share of the variance."""
        total = self.total
        return {name: part / total if total else 0.0 for name, part in self.variances.items()}

    def uncertainty(self, source: str) -> float:
        """Return the standard uncertainty that `source` alone would leave."""
        return float(np.sqrt(self.variances[source]))


def budget(found: Found, name: str, *, T: float | None = None, I: float = 0.0) -> Budget:
    """Return what each source adds to the variance of a result.

    Parameters
    ----------
    found
        The fit.
    name
        A parameter, ``"activation_energy"``.
    T, I
        Where, for the rate constant and the activation parameters; T_ref and I → 0 if not given.

    Returns
    -------
    Budget

    Raises
    ------
    InputError
        If the fit has no such parameter, or it was given and not found.
    """
    rows, quantity, factor = _result(found, name, T, I)
    if isinstance(found, OpenFit):
        variances = _open_variances(found, rows)
    elif isinstance(found, SurfaceFit):
        gain = (rows.rows[0] @ found.headline_solution.gain)[None]
        variances = _by_source(found.errors, gain**2, np.ones(1))
    else:
        raise InputError("this fit has no budget", "ask a fit of a named law or the open law")
    # An error that a result does not feel at all leaves the rounding of its gain.
    least = _ROUNDING * sum(variances.values())
    felt = {source: part if part > least else 0.0 for source, part in variances.items()}
    return Budget(quantity, {source: part * factor**2 for source, part in felt.items()})


def _result(found: Found, name: str, T: float | None, I: float) -> tuple[Rows, Quantity, float]:
    """Return a result as an affine function of the parameters, and dy/d(that).

    Raises
    ------
    InputError
        If the fit has no such result.
    """
    at_reference = T is None and I == 0
    parameters = found.parameters if at_reference else found.at(T, I)
    if name not in parameters or parameters[name].given:
        raise InputError(f"there is no budget of {name!r}", f"choose from {', '.join(parameters)}")
    estimate = parameters[name]
    if at_reference and name in found.distribution.names:
        row = np.zeros((1, len(found.distribution.names)))
        row[0, found.distribution.names.index(name)] = 1.0
        return Rows(np.zeros(1), row), estimate.quantity, 1.0
    made = activation_rows(found.surface, found.reference_temperature if T is None else T, I)
    if name == "rate_constant":
        return made["ln_rate_constant"], estimate.quantity, float(estimate.value)
    if name not in made:
        raise InputError(
            f"there is no budget of {name!r}", f"choose from rate_constant, {', '.join(made)}"
        )
    return made[name], estimate.quantity, 1.0


def _by_source(errors: RunErrors, squares: FloatArray, weights: FloatArray) -> dict[str, float]:
    """Share squared gains out among the sources.

    Parameters
    ----------
    errors
        Errors of the runs.
    squares : (c, n + s + r) ndarray
        Squared gains of a result in each component: runs, shared errors, priors.
    weights : (c,) ndarray
        Weights of the components.
    """
    mean = weights @ squares
    n, s = errors.shared.shape
    part = errors.variances / errors.variances.sum(axis=0)
    found: dict[str, float] = {}
    for source, share in zip(errors.sources, part, strict=True):
        found[source] = found.get(source, 0.0) + float(share @ mean[:n])
    for j, source in enumerate(errors.shared_sources):
        found[source] = found.get(source, 0.0) + float(mean[n + j])
    if mean.size > n + s:
        found[_BETA] = float(mean[n + s :].sum())
    return found


def _open_variances(found: OpenFit, rows: Rows) -> dict[str, float]:
    distribution = found.distribution
    gains = found.solver.gains()
    gains = gains.reshape(-1, *gains.shape[-2:])[found.kept]
    cell = distribution.cell if distribution.cell is not None else np.zeros(1, dtype=np.intp)
    matrix = (
        rows.rows[cell, 0]
        if rows.rows.ndim == 3
        else np.broadcast_to(rows.rows[0], (len(gains), rows.rows.shape[-1]))
    )
    squares = np.einsum("cp,cpg->cg", matrix, gains) ** 2
    variances = _by_source(found.errors, squares, distribution.weights)
    means = distribution.of(rows).locations[:, 0]
    grid = found.grid
    total = sum(variances.values())
    for source, part in _between(means, distribution.weights, grid, cell).items():
        if part > _ROUNDING * total:
            variances[source] = part
    return variances


def _between(
    means: FloatArray, weights: FloatArray, grid: OpenGrid, cell: IndexArray
) -> dict[str, float]:
    """Split the variance between components: å, then c, then what is constant in T, then σ."""
    overall = float(weights @ means)
    by_size = _conditional_means(means, weights, grid.ion_size[cell])
    by_shape = _conditional_means(
        means, weights, grid.ion_size[cell] + 1j * grid.linear_coefficient[cell]
    )
    by_cell = _conditional_means(means, weights, cell)
    return {
        _ION_SIZE: float(weights @ (by_size - overall) ** 2),
        _LINEAR: float(weights @ (by_shape - by_size) ** 2),
        _FOLLOWS: float(weights @ (by_cell - by_shape) ** 2),
        _SCATTER: float(weights @ (means - by_cell) ** 2),
    }


def _conditional_means(
    means: FloatArray, weights: FloatArray, label: npt.NDArray[np.generic]
) -> FloatArray:
    """Return for each component the mean over all components with its label."""
    _, where = np.unique(label, return_inverse=True)
    total = np.bincount(where, weights)
    return np.asarray((np.bincount(where, weights * means) / total)[where])
