"""A series of solvents: ln k against 1/ε_r, read by the double-sphere model.

    ln k = ln k_∞ - [z_A z_B e²/(4 π ε₀ k_B T r)] (1/ε_r)

(Scatchard, Chem. Rev. 10 (1932) 229; Laidler, Chemical Kinetics, 3rd edition, section 6.4, from
memory). The slope gives the contact distance r where the charges are given, or the charge product
where r is. Permittivities are the user's: no table of solvents is kept here. Preferential
solvation, ion pairing at low ε_r and changes of I bend such lines; the scatter about the line is
the ±.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from knought.arrays import FloatArray, frozen
from knought.chemistry.constants import BOLTZMANN, ELEMENTARY_CHARGE, VACUUM_PERMITTIVITY
from knought.discussion.electrostatics import require_length
from knought.errors import InputError
from knought.numerics.least_squares import solve
from knought.numerics.quantiles import student_quantile

if TYPE_CHECKING:
    from numpy.typing import ArrayLike

__all__ = ["SolventSeries", "solvent_series"]


@dataclass(frozen=True, eq=False)
class SolventSeries:
    """A line of ln k against 1/ε_r.

    Attributes
    ----------
    T
        Temperature in K, the same for all.
    inverse_permittivity, ln_k : (n,) ndarray
        What was fitted.
    slope, slope_uncertainty
        d ln k/d(1/ε_r), and u.
    intercept, intercept_uncertainty
        ln k at infinite permittivity, and u.
    degrees_of_freedom
        Of the scatter; infinite where u(ln k) was given and explains it.
    """

    T: float
    inverse_permittivity: FloatArray
    ln_k: FloatArray
    slope: float
    slope_uncertainty: float
    intercept: float
    intercept_uncertainty: float
    degrees_of_freedom: float

    def interval(self, coverage: float = 0.95) -> tuple[float, float]:
        """Return the interval of the slope (Student's t where u comes from the scatter).

        Raises
        ------
        InputError
            If `coverage` is not between 0 and 1.
        """
        if not 0 < coverage < 1:
            raise InputError(f"a coverage must lie between 0 and 1, not {coverage}", "give 0.95")
        reach = student_quantile((1 + coverage) / 2, self.degrees_of_freedom)
        return (
            self.slope - reach * self.slope_uncertainty,
            self.slope + reach * self.slope_uncertainty,
        )

    @property
    def supported_sign(self) -> int:
        """Sign of z_A z_B that the slope supports at 95 %: 1, -1, or 0 for neither."""
        low, high = self.interval()
        if low > 0:
            return -1
        return 1 if high < 0 else 0

    def charge_product(
        self, contact_distance: float, contact_distance_uncertainty: float = 0.0
    ) -> tuple[float, float]:
        """Return z_A z_B and u, for a contact distance r and u(r) in m.

        Raises
        ------
        InputError
            If the distance is no distance between charges.
        """
        require_length(contact_distance, "the contact distance")
        value = -self.slope * contact_distance / _unit_length(self.T)
        return value, math.hypot(
            self.slope_uncertainty * contact_distance / _unit_length(self.T),
            value * contact_distance_uncertainty / contact_distance,
        )

    def contact_distance(self, charge_product: float) -> tuple[float, float]:
        """Return r and u(r) in m, for given charges.

        Raises
        ------
        InputError
            If the charge product is zero, or has the sign that the slope contradicts: the model
            then has no distance.
        """
        if charge_product == 0:
            raise InputError(
                "with z_A z_B = 0 the double-sphere model has no slope",
                "give the charges of the two species that meet",
            )
        value = -charge_product * _unit_length(self.T) / self.slope
        if value <= 0:
            raise InputError(
                f"the slope of {self.slope:.3g} has the sign of other charges than "
                f"z_A z_B = {charge_product:g}",
                "the series does not follow the double-sphere model with these charges",
            )
        return value, value * abs(self.slope_uncertainty / self.slope)


def _unit_length(T: float) -> float:
    """Return e²/(4 π ε₀ k_B T) in m: the Bjerrum length at ε_r = 1."""
    return ELEMENTARY_CHARGE**2 / (4 * math.pi * VACUUM_PERMITTIVITY * BOLTZMANN * T)


def solvent_series(
    relative_permittivity: ArrayLike,
    k: ArrayLike,
    u_k: ArrayLike | None = None,
    *,
    T: float = 298.15,
) -> SolventSeries:
    """Fit ln k against 1/ε_r over a series of solvents at one temperature.

    Parameters
    ----------
    relative_permittivity : (n,) array_like
        ε_r of each solvent at `T`, n at least 3.
    k : (n,) array_like
        Rate constants, all in one unit.
    u_k : (n,) array_like, optional
        Their standard uncertainties. The larger of what they and the scatter say is the ±.
    T
        Temperature in K.

    Returns
    -------
    SolventSeries

    Raises
    ------
    InputError
        If lengths differ, there are fewer than three solvents, all have one permittivity, or a
        number cannot be.
    """
    epsilon, rate = np.asarray(relative_permittivity, float), np.asarray(k, float)
    u = None if u_k is None else np.asarray(u_k, float)
    _check(epsilon, rate, u, T)
    x, y = 1 / epsilon, np.log(rate)
    design = np.stack([np.ones_like(x), x - x.mean()], axis=1)
    fit = solve(design, y, np.ones_like(x) if u is None else u / rate)
    nu = len(x) - 2
    birge = math.sqrt(fit.chi_square / nu)
    from_scatter = u is None or birge > 1
    covariance = fit.covariance * (birge**2 if from_scatter else 1.0)
    middle, slope = (float(each) for each in fit.parameters)
    u_slope = math.sqrt(covariance[1, 1])
    return SolventSeries(
        T=T,
        inverse_permittivity=frozen(x),
        ln_k=frozen(y),
        slope=slope,
        slope_uncertainty=u_slope,
        intercept=middle - slope * float(x.mean()),
        intercept_uncertainty=math.sqrt(
            covariance[0, 0]
            - 2 * covariance[0, 1] * float(x.mean())
            + covariance[1, 1] * float(x.mean()) ** 2
        ),
        degrees_of_freedom=float(nu) if from_scatter else math.inf,
    )


def _check(epsilon: FloatArray, k: FloatArray, u: FloatArray | None, T: float) -> None:
    if epsilon.ndim != 1 or epsilon.shape != k.shape or (u is not None and u.shape != k.shape):
        raise InputError(
            f"permittivities have shape {epsilon.shape} and k {k.shape}", "give one a solvent"
        )
    if len(k) < 3 or np.ptp(epsilon) == 0:
        raise InputError(
            "a line of ln k against 1/ε_r needs three solvents of different permittivity",
            "add solvents or mixtures",
        )
    if not (np.all(epsilon >= 1) and np.all(k > 0) and np.all(np.isfinite(epsilon + k))):
        raise InputError(
            "a permittivity is below 1, or a rate constant not above zero",
            "give relative permittivities (water: 78 at 25 °C) and positive rate constants",
        )
    if u is not None and not (np.all(u > 0) and np.all(np.isfinite(u))):
        raise InputError("an uncertainty of k is not above zero", "leave u_k out if unknown")
    if not 0 < T < math.inf:
        raise InputError(f"the temperature is {T:g} K", "give a temperature above 0 K")
