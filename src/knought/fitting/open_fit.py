"""The salt law left open and integrated over: the headline of an assessment.

Every cell of the open law's grid is an ordinary linear fit; the cells are weighted by how well each
explains the data times what was known of it before (:mod:`knought.numerics.marginal`). The charge
product, ln k and the energy have flat priors; å, c and β those of :class:`Priors`. Intervals are
exact quantiles of the resulting mixture.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from functools import cached_property
from typing import TYPE_CHECKING

import numpy as np

from knought.arrays import FloatArray, IndexArray, frozen
from knought.chemistry.quantities import quantity
from knought.fitting import checks
from knought.fitting.distribution import ParameterDistribution
from knought.fitting.found import Found
from knought.fitting.observations import Observations, observe
from knought.fitting.refinement import refined
from knought.fitting.run_errors import settle
from knought.fitting.scatter import Scatter, judge_scatter, scale_nodes
from knought.fitting.surface_fit import DEFAULT_REFERENCE_TEMPERATURE, DEFAULT_TEMPERATURE_LAW
from knought.laws.open_law import DEFAULT_PRIORS, OpenGrid, Priors, open_grid
from knought.laws.surface import Surface
from knought.laws.temperature import temperature_law as named_temperature_law
from knought.numerics.least_squares import RankDeficiencyError, solve
from knought.numerics.marginal import CellSolutions, CellSolver
from knought.numerics.quantiles import Histogram

if TYPE_CHECKING:
    from collections.abc import Mapping

    from knought.errors import Caveat
    from knought.fitting.estimate import Estimate
    from knought.fitting.run_errors import RunErrors
    from knought.fitting.scatter import ScatterChoice
    from knought.measurement.table import RateTable
    from knought.numerics.least_squares import LinearFit

__all__ = [
    "CHARGE_PRODUCTS",
    "OpenFit",
    "fit_open",
    "flat_parameters",
    "interaction_prior",
    "open_solver",
    "settled_errors",
]

#: Components that together weigh less than this are left out of the mixture.
_NEGLIGIBLE_WEIGHT = 1e-10

#: Integer charge products that are weighed against each other.
CHARGE_PRODUCTS = tuple(range(-9, 10))


@dataclass(frozen=True, eq=False)
class OpenFit(Found):
    """The open law fitted; everything of :class:`Found`, and what became of its priors.

    Attributes
    ----------
    grid
        The open law as cells.
    solver
        The solver of the cells, for budgets and simulations.
    kept : (k,) ndarray of int
        Which of the solver's cells and scales, flattened, the mixture's components are.
    cell_weights : (c,) ndarray
        Weight of each cell after the data.
    log_evidence
        Logarithm of the evidence, comparable between fits to the same runs.
    """

    grid: OpenGrid
    solver: CellSolver
    kept: IndexArray
    cell_weights: FloatArray
    log_evidence: float

    def with_caveat(self, caveat: Caveat) -> OpenFit:
        """Return the fit with one more thing that must be said with it."""
        return replace(self, caveats=(*self.caveats, caveat))

    def _form_parameters(self) -> Mapping[str, Estimate]:
        found = {}
        low, high = self.grid.priors.ion_size
        for name, nodes, bounds in (
            ("ion_size", self.grid.ion_size, (low, high)),
            ("linear_coefficient", self.grid.linear_coefficient, None),
        ):
            distinct, where = np.unique(nodes, return_inverse=True)
            weights = np.bincount(where, weights=self.cell_weights)
            histogram = Histogram(distinct, np.asarray(weights, dtype=float), bounds)
            found[name] = self._estimate(quantity(name), histogram)
        return found

    @cached_property
    def prior_share(self) -> Mapping[str, float]:
        """How much of what is known of å, c and β the data did not change.

        Standard uncertainty after the data over that before, for each that has a prior: near 1 the
        data say nothing of it, near 0 they determine it.
        """
        priors = self.grid.priors
        before = {
            "ion_size": (priors.ion_size[1] - priors.ion_size[0]) / np.sqrt(12.0),
            "linear_coefficient": priors.linear_coefficient[1],
            "interaction_coefficient": priors.interaction_coefficient[1],
        }
        return {
            name: float(self.parameters[name].standard_uncertainty / width)
            for name, width in before.items()
            if width > 0 and name in self.parameters
        }

    @cached_property
    def charge_product_weights(self) -> Mapping[int, float]:
        """Weights of the integer charge products from -9 to 9, alike before the data.

        The prior of the charge product is flat, so that the evidence at an integer is proportional
        to the density there. Empty where the charges are given.
        """
        if "charge_product" not in self.distribution.names:
            return {}
        mixture = self.distribution.parameter("charge_product")
        density = np.array([float(mixture.pdf(float(z))) for z in CHARGE_PRODUCTS])
        if not density.sum() > 0:
            return {}
        return dict(zip(CHARGE_PRODUCTS, (density / density.sum()).tolist(), strict=True))


def fit_open(
    rates: RateTable | Observations,
    *,
    temperature_law: str = DEFAULT_TEMPERATURE_LAW,
    reference_temperature: float = DEFAULT_REFERENCE_TEMPERATURE,
    standard_concentration: float = 1.0,
    charge_product: float | None = None,
    priors: Priors = DEFAULT_PRIORS,
    scatter: ScatterChoice | None = None,
    refinement: int | None = None,
) -> OpenFit:
    """Fit a temperature law with the salt law left open.

    Parameters
    ----------
    rates
        The table; or what :func:`observe` made of it.
    temperature_law, reference_temperature, standard_concentration, charge_product, scatter
        As for :func:`knought.fitting.surface_fit.fit_surface`.
    priors
        What is known of å, c and β.
    refinement
        Multiplies the nodes of the grid in å and c; as fine as the runs need if not given: where
        few cells carry the weight, it is doubled until neither ln k° nor the charge product moves
        by a hundredth of its standard uncertainty.

    Returns
    -------
    OpenFit

    Raises
    ------
    InputError
        If the runs cannot determine the parameters, or a property of water is needed outside
        0-100 °C.
    """
    seen = rates if isinstance(rates, Observations) else observe(rates)

    def fitted(refinement: int) -> OpenFit:
        return _fit_on_grid(
            seen,
            refinement,
            temperature_law=temperature_law,
            reference_temperature=reference_temperature,
            standard_concentration=standard_concentration,
            charge_product=charge_product,
            priors=priors,
            scatter=scatter,
        )

    return fitted(refinement) if refinement is not None else refined(fitted)


def _fit_on_grid(
    seen: Observations,
    refinement: int,
    *,
    temperature_law: str,
    reference_temperature: float,
    standard_concentration: float,
    charge_product: float | None,
    priors: Priors,
    scatter: ScatterChoice | None,
) -> OpenFit:
    grid = open_grid(priors, refinement)
    if charge_product is not None:
        grid = grid.with_charges(charge_product)
    surface = Surface(
        named_temperature_law(temperature_law),
        grid.law,
        reference_temperature,
        seen.order,
        standard_concentration,
    )
    checks.require_levels(seen, surface, charges_given=charge_product is not None)
    centre = replace(surface, salt_law=grid.central)
    errors, unsettled = settled_errors(seen, centre, priors)
    caveats = (
        *checks.uncertainty_caveats(seen),
        *checks.design_caveats(seen, centre, errors.u),
        *unsettled,
    )
    solver = open_solver(seen, surface, grid, errors)
    solutions = solver.solve(seen.ln_k[None])
    flat = flat_parameters(surface)
    best = float(solutions.chi_square.min())
    judged = judge_scatter(best, seen.runs - flat, stated=seen.u_given, choice=scatter)
    if judged.from_scatter:
        scales = scale_nodes(best, seen.runs - flat)
        solver = open_solver(seen, surface, grid, errors, scales)
        solutions = solver.solve(seen.ln_k[None])
    return _collected(seen, surface, grid, solver, solutions, judged, errors, caveats)


def open_solver(
    seen: Observations,
    surface: Surface,
    grid: OpenGrid,
    errors: RunErrors,
    scales: FloatArray | None = None,
) -> CellSolver:
    """Return the solver of the open law at the conditions of `seen`, for any number of data sets.

    Parameters
    ----------
    seen
        Conditions of the runs.
    surface
        The surface with the stacked salt law of `grid`.
    grid
        The open law as cells.
    errors
        Errors of ln k of the runs, or relative weights.
    scales : (s,) ndarray, optional
        Values of σ where it is found from the scatter.
    """
    rows = surface.ln_k(errors.T, errors.I)
    design = np.broadcast_to(rows.rows, (grid.cells, *rows.rows.shape[-2:]))
    prior_rows, prior_values = interaction_prior(surface, grid.priors)
    return CellSolver(
        design,
        rows.offset - errors.shift,
        errors.u,
        grid.log_weight,
        prior_rows=prior_rows,
        prior_values=prior_values,
        shared=errors.shared,
        scales=scales,
    )


def interaction_prior(surface: Surface, priors: Priors) -> tuple[FloatArray, FloatArray]:
    """Return the prior of β as one row of observations of the parameters, if β is a parameter."""
    names = surface.parameters
    if "interaction_coefficient" not in names:
        return np.zeros((0, len(names))), np.zeros(0)
    mean, deviation = priors.interaction_coefficient
    row = np.zeros((1, len(names)))
    row[0, names.index("interaction_coefficient")] = 1.0 / deviation
    return row, np.array([mean / deviation])


def flat_parameters(surface: Surface) -> int:
    """Return how many parameters have flat priors.

    Priors count as observations of the parameters they describe, so that only these use up degrees
    of freedom.
    """
    return len(set(surface.parameters) - {"interaction_coefficient"})


def settled_errors(
    seen: Observations, centre: Surface, priors: Priors
) -> tuple[RunErrors, tuple[Caveat, ...]]:
    """Return the errors of the runs, those of T and I carried along the slope of the central cell.

    Slopes and adjusted conditions hardly depend on å and c, so that one cell's serve for all.

    Parameters
    ----------
    seen
        The runs.
    centre
        The surface with the central cell's salt law.
    priors
        Of the open law.

    Raises
    ------
    InputError
        If the runs leave a combination of parameters undetermined.
    """
    prior_rows, prior_values = interaction_prior(centre, priors)

    def solved(errors: RunErrors) -> LinearFit:
        rows = centre.ln_k(errors.T, errors.I)
        return solve(
            rows.rows,
            seen.ln_k + errors.shift - rows.offset,
            errors.u,
            shared=errors.shared,
            prior_rows=prior_rows,
            prior_values=prior_values,
        )

    try:
        _, errors, unsettled = settle(seen, centre, solved)
    except RankDeficiencyError as found:
        checks.refuse_undetermined(found, centre)
    return errors, unsettled


def _collected(
    seen: Observations,
    surface: Surface,
    grid: OpenGrid,
    solver: CellSolver,
    solutions: CellSolutions,
    judged: Scatter,
    errors: RunErrors,
    caveats: tuple[Caveat, ...],
) -> OpenFit:
    cells, scales, p = solutions.means.shape[1:]
    # A shared error keeps its size, so that scatter and shared errors have no common factor.
    judged = replace(judged, shared_scale=None, shared_degrees_of_freedom=None)
    weights = solutions.weights[0]
    kept = _kept(weights)
    highest = float(solutions.log_weight.max())
    return OpenFit(
        observations=seen,
        surface=surface,
        distribution=ParameterDistribution(
            names=surface.parameters,
            weights=frozen(weights[kept] / weights[kept].sum()),
            means=solutions.means[0].reshape(-1, p)[kept],
            covariances=solutions.covariances.reshape(-1, p, p)[kept],
            cell=np.repeat(np.arange(cells), scales)[kept],
        ),
        scatter=judged,
        errors=errors,
        caveats=caveats,
        grid=grid,
        solver=solver,
        kept=kept,
        cell_weights=frozen(weights.reshape(cells, scales).sum(axis=1)),
        log_evidence=highest + float(np.log(np.exp(solutions.log_weight - highest).sum())),
    )


def _kept(weights: FloatArray) -> IndexArray:
    """Return the heaviest components, all but a negligible weight of them."""
    order = np.argsort(weights)[::-1]
    needed = int(np.searchsorted(np.cumsum(weights[order]), 1 - _NEGLIGIBLE_WEIGHT)) + 1
    return np.sort(order[:needed])
