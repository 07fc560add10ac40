"""One law pair fitted to many data sets of one shape, each with uncertainties of its own."""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from typing import TYPE_CHECKING

import numpy as np

from knought.arrays import FloatArray, frozen
from knought.chemistry.constants import COLDEST, HOTTEST, STRONGEST
from knought.errors import InputError
from knought.fitting import checks
from knought.fitting.observations import Observations
from knought.fitting.surface_fit import DEFAULT_REFERENCE_TEMPERATURE, DEFAULT_TEMPERATURE_LAW
from knought.given import given_numbers, given_shape
from knought.laws.salt import salt_law as named_salt_law
from knought.laws.surface import Surface
from knought.laws.temperature import temperature_law as named_temperature_law
from knought.measurement.table_checks import RATE_CONSTANTS, RELATIVE_UNCERTAINTIES
from knought.numerics.least_squares import ManyFits, RankDeficiencyError, solve_many

if TYPE_CHECKING:
    from numpy.typing import ArrayLike

__all__ = ["ManySurfaceFits", "fit_many"]


@dataclass(frozen=True, eq=False)
class ManySurfaceFits:
    """One law pair fitted to m data sets of one shape.

    Attributes
    ----------
    names
        Names of the p linear parameters.
    parameters : (m, p) ndarray
    covariance : (m, p, p) ndarray
        From u(k) as given.
    chi_square : (m,) ndarray
    degrees_of_freedom
        n - p, the same for all.
    surface
        The surface they share.
    """

    names: tuple[str, ...]
    parameters: FloatArray
    covariance: FloatArray
    chi_square: FloatArray
    degrees_of_freedom: int
    surface: Surface

    def __len__(self) -> int:
        return len(self.chi_square)

    def standard_uncertainty(self, name: str) -> FloatArray:
        """Return u of one parameter in every data set, shape ``(m,)``, from u(k) as given."""
        j = self.names.index(name)
        return np.sqrt(self.covariance[:, j, j])

    def value(self, name: str) -> FloatArray:
        """Return one parameter in every data set, shape ``(m,)``."""
        return self.parameters[:, self.names.index(name)]


def fit_many(
    k: ArrayLike,
    u_k: ArrayLike,
    *,
    T: ArrayLike,
    I: ArrayLike | None = None,
    order: Fraction | int = 1,
    temperature_law: str = DEFAULT_TEMPERATURE_LAW,
    salt_law: str = "none",
    reference_temperature: float = DEFAULT_REFERENCE_TEMPERATURE,
    ion_size: float | None = None,
) -> ManySurfaceFits:
    """Fit one law pair to many data sets measured at the same conditions.

    Parameters
    ----------
    k : (m, n) array_like
        Rate constants in (L/mol)^(order-1) s^-1: m data sets of n runs.
    u_k : (m, n) or (n,) array_like
        Their standard uncertainties.
    T, I : (n,) array_like
        Conditions of the runs in K and mol/L, the same for every data set.
    order
        Overall order of the reaction.
    temperature_law, salt_law, reference_temperature, ion_size
        As for :func:`fit_surface`.

    Returns
    -------
    ManySurfaceFits
        Each data set's solution equals that of :func:`fit_surface` on it alone.

    Raises
    ------
    InputError
        If shapes do not match, a value is not positive, or the runs cannot determine the law.
    """
    k, u_k = given_numbers(k, "k", *RATE_CONSTANTS), given_numbers(u_k, "u(k)")
    T = given_numbers(T, "T", COLDEST, HOTTEST)
    if k.ndim != 2 or T.shape != k.shape[1:]:
        raise InputError(
            f"k has shape {k.shape} and T {T.shape}",
            "give k as (data sets, runs) and T as (runs,)",
        )
    u_k = given_shape(u_k, k.shape, "u(k)")
    given_numbers(u_k / k, "u(k)/k", *RELATIVE_UNCERTAINTIES)
    I = None if I is None else given_numbers(I, "I", 0.0, STRONGEST)
    strengths = None if I is None else frozen(given_shape(I, T.shape, "I"))
    surface = Surface(
        named_temperature_law(temperature_law),
        named_salt_law(salt_law, ion_size=ion_size),
        reference_temperature,
        Fraction(order),
    )
    first = Observations(
        frozen(np.log(k[0])),
        frozen(u_k[0] / k[0]),
        frozen(T),
        strengths,
        None,
        None,
        u_given=True,
        order=Fraction(order),
    )
    checks.require_levels(first, surface, charges_given=False)
    rows = surface.ln_k(T, first.ionic_strength)
    try:
        many: ManyFits = solve_many(rows.rows, np.log(k) - rows.offset, u_k / k)
    except RankDeficiencyError as found:
        checks.refuse_undetermined(found, surface)
    return ManySurfaceFits(
        surface.parameters,
        many.parameters,
        many.covariance,
        many.chi_square,
        many.degrees_of_freedom,
        surface,
    )
