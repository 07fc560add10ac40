"""One temperature law and one named salt law, fitted to ln k by generalised least squares."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from knought.fitting import checks
from knought.fitting.found import Found
from knought.fitting.independent_scatter import headline_distribution, independent_scatter
from knought.fitting.observations import Observations, observe
from knought.fitting.run_errors import settle
from knought.fitting.scatter import judge_scatter
from knought.laws.salt import salt_law as named_salt_law
from knought.laws.surface import Surface
from knought.laws.temperature import temperature_law as named_temperature_law
from knought.numerics.least_squares import (
    LinearFit,
    RankDeficiencyError,
    solve,
)

if TYPE_CHECKING:
    from knought.arrays import FloatArray
    from knought.fitting.run_errors import RunErrors
    from knought.fitting.scatter import ScatterChoice
    from knought.laws.salt import SaltLaw
    from knought.measurement.table import RateTable

__all__ = ["DEFAULT_TEMPERATURE_LAW", "SurfaceFit", "akaike", "fit_surface"]

DEFAULT_TEMPERATURE_LAW = "eyring"
DEFAULT_REFERENCE_TEMPERATURE = 298.15


@dataclass(frozen=True, eq=False)
class SurfaceFit(Found):
    """One law pair fitted; everything of :class:`Found`, and the least-squares solution.

    Attributes
    ----------
    solution
        The least-squares solution, with the uncertainties as given.
    scatter_solution
        The same with independent uncertainties that explain the scatter; None without degrees of
        freedom.
    """

    solution: LinearFit
    scatter_solution: LinearFit | None

    @property
    def standard_errors_given(self) -> FloatArray:
        """Standard uncertainties of the linear parameters with u(k) as given, shape ``(p,)``."""
        return np.sqrt(np.diag(self.solution.covariance))

    @property
    def standard_errors_scatter(self) -> FloatArray:
        """The same from the scatter about the fit; nan without degrees of freedom, ``(p,)``."""
        if self.scatter_solution is None:
            return np.full(len(self.distribution.names), np.nan)
        return np.sqrt(np.diag(self.scatter_solution.covariance))

    @property
    def headline_solution(self) -> LinearFit:
        """The solution behind the headline ±."""
        if self.scatter.from_scatter and self.scatter_solution is not None:
            return self.scatter_solution
        return self.solution

    @property
    def leverage(self) -> FloatArray:
        """Leverage of each run, shape ``(n,)``."""
        return self.solution.leverage

    @property
    def aicc(self) -> float:
        """Akaike's information criterion with the small-sample correction; nan where undefined.

        χ² + 2K + 2K(K+1)/(n-K-1) where u is stated; n ln(χ²/n) in place of χ², and one parameter
        more, where it comes from the scatter (Burnham and Anderson 2002, sections 2.2 and 2.4).
        """
        found = akaike(
            np.array([self.scatter.chi_square]),
            self.observations.runs,
            len(self.distribution.names),
            stated=self.scatter.stated,
        )
        return float(found[0])


def akaike(chi_square: FloatArray, runs: int, parameters: int, *, stated: bool) -> FloatArray:
    """Return AICc of fits to data sets of one size; see :attr:`SurfaceFit.aicc`.

    Parameters
    ----------
    chi_square : (m,) ndarray
        Of the fits; with unit weights where u is not stated.
    runs, parameters
        n, and K without σ.
    stated
        Whether u is stated.

    Returns
    -------
    (m,) ndarray
        nan where it is not defined.
    """
    n, K = runs, parameters + (0 if stated else 1)
    if n - K - 1 <= 0:
        return np.full(len(chi_square), np.nan)
    penalty = 2 * K + 2 * K * (K + 1) / (n - K - 1)
    if stated:
        return np.asarray(chi_square + penalty)
    positive = np.where(chi_square > 0, chi_square, np.nan)
    return np.asarray(n * np.log(positive / n) + penalty)


def fit_surface(
    rates: RateTable | Observations,
    *,
    temperature_law: str = DEFAULT_TEMPERATURE_LAW,
    salt_law: str | SaltLaw = "none",
    reference_temperature: float = DEFAULT_REFERENCE_TEMPERATURE,
    standard_concentration: float = 1.0,
    charge_product: float | None = None,
    ion_size: float | None = None,
    scatter: ScatterChoice | None = None,
) -> SurfaceFit:
    """Fit one temperature law and one named salt law to ln k.

    Parameters
    ----------
    rates
        The table; or what :func:`observe` made of it.
    temperature_law
        ``"arrhenius"``, ``"modified-arrhenius"``, ``"eyring"``, ``"eyring-cp"`` or
        ``"isothermal"``.
    salt_law
        ``"none"``, ``"linear"``, ``"limiting"``, ``"guntelberg"``, ``"extended"``, ``"davies"``,
        ``"sit"``, ``"pitzer"``, or a law of your own.
    reference_temperature
        T_ref in K, at which the parameters hold.
    standard_concentration
        c° in mol/L, to which ΔG‡ and ΔS‡ refer.
    charge_product
        z_A z_B (Δz²/2 in general) where it is known; it is then not fitted.
    ion_size
        Ion-size parameter of the extended law in m.
    scatter
        ``"given"`` or ``"scatter"``: what the headline ± is made of, against the rule of
        :func:`judge_scatter`.

    Returns
    -------
    SurfaceFit

    Raises
    ------
    InputError
        If a law is unknown, the runs cannot determine its parameters, or a property of water is
        needed outside 0-100 °C.
    """
    seen = rates if isinstance(rates, Observations) else observe(rates)
    law = named_salt_law(salt_law, ion_size=ion_size) if isinstance(salt_law, str) else salt_law
    if charge_product is not None:
        law = law.with_charges(charge_product)
    surface = Surface(
        named_temperature_law(temperature_law),
        law,
        reference_temperature,
        seen.order,
        standard_concentration,
    )
    checks.require_levels(seen, surface, charges_given=charge_product is not None)

    def solved(errors: RunErrors) -> LinearFit:
        rows = surface.ln_k(errors.T, errors.I)
        target = seen.ln_k + errors.shift - rows.offset
        return solve(rows.rows, target, errors.u, shared=errors.shared)

    try:
        solution, errors, unsettled = settle(seen, surface, solved)
        independent = independent_scatter(solution, errors, solved)
    except RankDeficiencyError as found:
        checks.refuse_undetermined(found, surface)
    judged = judge_scatter(
        solution.chi_square, solution.degrees_of_freedom, stated=seen.u_given, choice=scatter
    )
    judged = independent.told(judged)
    return SurfaceFit(
        observations=seen,
        surface=surface,
        distribution=headline_distribution(surface, solution, independent, judged),
        scatter=judged,
        errors=errors,
        caveats=(
            *checks.uncertainty_caveats(seen),
            *checks.domain_caveats(seen, law),
            *checks.design_caveats(seen, surface, errors.u),
            *unsettled,
        ),
        solution=solution,
        scatter_solution=independent.solution,
    )
