"""One named law fitted to many data sets of one design, by the equations that fit one."""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

import numpy as np

from knought.arrays import BoolArray, FloatArray, frozen
from knought.errors import InputError
from knought.fitting import checks
from knought.fitting.fit import fit_chosen
from knought.fitting.many_open import at_measured_conditions
from knought.fitting.many_results import ManyResults, joined, result_rows, results_of
from knought.fitting.run_errors import settle
from knought.fitting.scatter import from_scatter_many
from knought.fitting.surface_fit import akaike
from knought.laws.salt import salt_law as named_salt_law
from knought.laws.surface import Surface
from knought.laws.temperature import temperature_law as named_temperature_law
from knought.numerics.least_squares import RankDeficiencyError, solve
from knought.numerics.quantiles import Mixture

if TYPE_CHECKING:
    from collections.abc import Sequence

    from knought.fitting.fit import Choices
    from knought.fitting.observations import Observations
    from knought.fitting.run_errors import RunErrors
    from knought.laws.surface import Rows
    from knought.numerics.least_squares import LinearFit

__all__ = ["ManyNamed", "NamedResults"]


@dataclass(frozen=True, eq=False)
class NamedResults:
    """What one named law gives for m data sets.

    Attributes
    ----------
    results
        Value, u and interval of every quantity.
    aicc : (m,) ndarray
        See :attr:`~knought.fitting.surface_fit.SurfaceFit.aicc`.
    """

    results: ManyResults
    aicc: FloatArray


class ManyNamed:
    """A named law at the conditions of one design.

    Parameters
    ----------
    seen
        The runs; their ln k is the mean of the data sets, along whose slopes errors of T and I are
        carried.
    choices
        What is fitted and how; its salt law is a named one.
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
        law = named_salt_law(choices.salt_law, ion_size=choices.ion_size)
        if choices.charge_product is not None:
            law = law.with_charges(choices.charge_product)
        surface = Surface(
            named_temperature_law(choices.temperature_law),
            law,
            choices.reference_temperature,
            seen.order,
            choices.standard_concentration,
        )
        charges_given = choices.charge_product is not None
        checks.require_levels(seen, surface, charges_given=charges_given)
        self._design = surface.ln_k(seen.T, seen.ionic_strength)

        def solved(errors: RunErrors) -> LinearFit:
            rows = surface.ln_k(errors.T, errors.I)
            target = seen.ln_k + errors.shift - rows.offset
            return solve(rows.rows, target, errors.u, shared=errors.shared)

        try:
            _, errors, _ = settle(seen, surface, solved)
            self._errors = at_measured_conditions(seen, errors)
            self._fit = solved(self._errors)
        except RankDeficiencyError as found:
            checks.refuse_undetermined(found, surface)
        self._rows: dict[str, Rows] = result_rows(surface, wanted)

    def solve(self, ln_k: FloatArray) -> NamedResults:
        """Solve data sets.

        Parameters
        ----------
        ln_k : (m, n) ndarray
            ln k of the runs in each data set.

        Returns
        -------
        NamedResults
        """
        theta = (ln_k - self._design.offset) @ self._fit.estimator.T
        chi_square = self._chi_square(ln_k, theta)
        nu, seen = self._fit.degrees_of_freedom, self._seen
        scattered = from_scatter_many(
            chi_square, nu, stated=seen.u_given, choice=self._choices.scatter
        )
        aicc = akaike(chi_square, seen.runs, theta.shape[1], stated=seen.u_given)
        shares = bool(self._errors.shared_sources)
        groups = []
        for chosen in (np.flatnonzero(~scattered), np.flatnonzero(scattered)):
            if not len(chosen):
                continue
            if shares and scattered[chosen[0]]:
                found = self._one_by_one(ln_k[chosen], chi_square[chosen])
            else:
                found = self._together(theta[chosen], chi_square[chosen], scattered[chosen])
            groups.append((chosen, found))
        order = np.concatenate([chosen for chosen, _ in groups])
        return NamedResults(joined([found for _, found in groups], order), frozen(aicc))

    def _chi_square(self, ln_k: FloatArray, theta: FloatArray) -> FloatArray:
        """Return the generalised χ² of each data set (Woodbury's identity for shared errors)."""
        errors = self._errors
        residual = (ln_k - self._design.offset - theta @ self._design.rows.T) / errors.u
        J = errors.shared / errors.u[:, None]
        inner = np.linalg.inv(np.eye(J.shape[1]) + J.T @ J)
        pulled = residual @ J
        shared = np.einsum("mi,ij,mj->m", pulled, inner, pulled)
        return np.asarray(np.sum(residual**2, axis=1) - shared)

    def _together(
        self, theta: FloatArray, chi_square: FloatArray, scattered: BoolArray
    ) -> ManyResults:
        """Return results of data sets whose covariance is one matrix times their own scale."""
        nu = self._fit.degrees_of_freedom
        from_scatter = bool(scattered[0])
        scale = np.sqrt(chi_square / nu) if from_scatter else np.ones(len(theta))
        mixtures = {}
        for name, each in self._rows.items():
            row, offset = each.rows.reshape(-1, theta.shape[1])[0], float(np.ravel(each.offset)[0])
            u = np.sqrt(max(float(row @ self._fit.covariance @ row), 0.0))
            mixtures[name] = Mixture(
                np.ones(1),
                (theta @ row + offset)[None],
                (u * scale)[None],
                float(nu) if from_scatter else np.inf,
            )
        return results_of(mixtures, self._coverage, chi_square, nu, scattered)

    def _one_by_one(self, ln_k: FloatArray, chi_square: FloatArray) -> ManyResults:
        """Fit data sets whose scatter stands beside shared errors: each has weights of its own."""
        parts = []
        for i, each in enumerate(ln_k):
            found = fit_chosen(replace(self._seen, ln_k=frozen(each)), self._choices)
            mixtures = {name: found.distribution.of(rows) for name, rows in self._rows.items()}
            parts.append(
                results_of(
                    mixtures,
                    self._coverage,
                    chi_square[i : i + 1],
                    self._fit.degrees_of_freedom,
                    np.ones(1, dtype=bool),
                )
            )
        return joined(parts)


def named_or_refused(
    seen: Observations,
    choices: Choices,
    coverage: float,
    wanted: Sequence[str] | None,
) -> ManyNamed | InputError:
    """Return a named law at a design, or why the runs cannot carry it."""
    try:
        return ManyNamed(seen, choices, coverage, wanted)
    except InputError as error:
        return error
