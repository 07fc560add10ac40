"""What every fit offers, whether its salt law is named or left open: one protocol.

A fit knows the distribution of its linear parameters; everything reported is an affine function of
them (or the exponential of one), so that values, uncertainties, intervals and correlations all come
from the same joint distribution.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from functools import cached_property
from types import MappingProxyType
from typing import TYPE_CHECKING

import numpy as np

from knought.chemistry.constants import COLDEST, HOTTEST, STRONGEST
from knought.chemistry.constants import GAS_CONSTANT as R
from knought.chemistry.quantities import Quantity, quantity
from knought.fitting.checks import excluded, extrapolation
from knought.fitting.estimate import Estimate
from knought.given import given_number, given_numbers, require_same_shape
from knought.laws.activation import activation_rows
from knought.laws.surface import Rows
from knought.numerics.quantiles import Histogram, Mixture

if TYPE_CHECKING:
    from collections.abc import Mapping

    from numpy.typing import ArrayLike
    from uncertainties import AffineScalarFunc

    from knought.arrays import FloatArray
    from knought.errors import Caveat
    from knought.fitting.distribution import ParameterDistribution
    from knought.fitting.observations import Observations
    from knought.fitting.run_errors import RunErrors
    from knought.fitting.scatter import Scatter
    from knought.laws.surface import Surface

__all__ = ["ACTIVATION", "FITTED", "Found"]

#: The activation parameters in the order in which they are reported.
ACTIVATION = (
    "activation_energy",
    "ln_pre_exponential_factor",
    "activation_enthalpy",
    "activation_entropy",
    "activation_gibbs_energy",
)

#: Fitted parameters that are reported as they are.
FITTED = (
    "activation_heat_capacity",
    "charge_product",
    "interaction_coefficient",
    "ion_size",
)


@dataclass(frozen=True, eq=False)
class Found:
    """A fitted surface: parameters, predictions and correlations, all from one distribution.

    Attributes
    ----------
    observations
        The runs that were fitted.
    surface
        The surface; for the open law, stacked over the cells of its grid.
    distribution
        What is known of the linear parameters.
    scatter
        How the runs scatter, and what the headline ± is made of.
    errors
        Errors of ln k of the runs, source by source, with u(k) as given.
    caveats
        What must be said with the result.
    """

    observations: Observations
    surface: Surface
    distribution: ParameterDistribution
    scatter: Scatter
    errors: RunErrors
    caveats: tuple[Caveat, ...]

    @property
    def reference_temperature(self) -> float:
        """T_ref in K, at which the parameters hold."""
        return self.surface.reference_temperature

    @property
    def temperature_law(self) -> str:
        """Name of the temperature law."""
        return self.surface.temperature_law.name

    @property
    def salt_law(self) -> str:
        """Name of the salt law."""
        return self.surface.salt_law.name

    @property
    def charge_product_given(self) -> float | None:
        """z_A z_B (Δz²/2) where the user gave the charges; None where it is found."""
        return self.surface.salt_law.given_charge_product

    @property
    def describes_salt(self) -> bool:
        """Whether the surface says how k depends on I, so that I → 0 has a meaning."""
        return self.surface.salt_law.form is not None

    @property
    def includes(self) -> str:
        """What the standard uncertainties include, as a phrase."""
        parts = [self.scatter.words]
        if self.observations.has_abscissa_errors:
            parts.append("with the stated errors of each run's temperature and ionic strength")
        named = [error.name for error in self.observations.own]
        if named and self.observations.u_given:
            parts.append(f"with errors of each run ({', '.join(named)})")
        if self.errors.shared_sources:
            names = ", ".join(self.errors.shared_sources)
            parts.append(f"with errors that runs share ({names})")
        return ", ".join(parts)

    @property
    def excludes(self) -> str:
        """What the standard uncertainties leave out because nothing is stated of it, a sentence."""
        return excluded(self.observations, stated=self.scatter.stated, salt=self.describes_salt)

    @cached_property
    def parameters(self) -> Mapping[str, Estimate]:
        """Every parameter and derived quantity at T_ref and I → 0, by its name."""
        found = dict(self.at())
        for name in FITTED:
            if name in self.distribution.names:
                found[name] = self._estimate(
                    self._quantity(name), self.distribution.parameter(name)
                )
        if self.temperature_law == "modified-arrhenius":
            capacity = self.distribution.parameter("activation_heat_capacity")
            exponent = Mixture(
                capacity.weights,
                capacity.locations / R + 1,
                capacity.scales / R,
                capacity.degrees_of_freedom,
            )
            found["temperature_exponent"] = self._estimate(
                quantity("temperature_exponent"), exponent
            )
        if self.charge_product_given is not None:
            certain = Mixture(np.ones(1), np.array([self.charge_product_given]), np.zeros(1))
            found["charge_product"] = replace(
                self._estimate(quantity("charge_product"), certain), given=True
            )
        found.update(self._form_parameters())
        return MappingProxyType(found)

    def _form_parameters(self) -> Mapping[str, Estimate]:
        """Parameters of the activity form itself; none for a law that fixes them."""
        return {}

    def _quantity(self, name: str) -> Quantity:
        found = quantity(name, self.observations.order)
        if name == "interaction_coefficient":
            unit = self.surface.salt_law.interaction_unit
            found = replace(found, unit=unit, shown_unit=unit)
        return found

    def _estimate(
        self,
        what: Quantity,
        distribution: Mixture | Histogram,
        *,
        logarithmic: bool = False,
        caveats: tuple[Caveat, ...] = (),
    ) -> Estimate:
        return Estimate(
            what,
            distribution,
            self.includes,
            self.scatter.headline_degrees_of_freedom,
            logarithmic=logarithmic,
            caveats=caveats,
        )

    def at(self, T: ArrayLike | None = None, I: ArrayLike = 0.0) -> Mapping[str, Estimate]:
        """Return rate constant and activation parameters at `T` and `I`.

        Parameters
        ----------
        T
            Temperatures in K; T_ref if not given.
        I
            Ionic strengths in mol/L; broadcast against `T`. A fit that says nothing of salt holds
            for the runs' own medium whatever I is.

        Returns
        -------
        Mapping
            Quantity name to :class:`Estimate`: ``rate_constant`` and those of
            ``activation_energy``, ``ln_pre_exponential_factor``, ``activation_enthalpy``,
            ``activation_entropy``, ``activation_gibbs_energy`` that the temperature law supports;
            arrays where `T` or `I` is one.

        Raises
        ------
        InputError
            If a property of water is needed outside 0-100 °C, or I is negative.
        """
        T = given_numbers(self.reference_temperature if T is None else T, "T", COLDEST, HOTTEST)
        I = given_numbers(I, "I", 0.0, STRONGEST)
        require_same_shape(T, I)
        scalar = np.ndim(T) == 0 and np.ndim(I) == 0
        caveats = extrapolation(
            self.observations, np.atleast_1d(T), np.atleast_1d(I), salt=self.describes_salt
        )
        rows = activation_rows(self.surface, T, I)
        found = {
            "rate_constant": self._estimate(
                self._rate_quantity(I),
                _first(self.distribution.of(rows["ln_rate_constant"]), scalar),
                logarithmic=True,
                caveats=caveats,
            )
        }
        for name in ACTIVATION:
            if name in rows:
                mixture = _first(self.distribution.of(rows[name]), scalar)
                found[name] = self._estimate(quantity(name), mixture, caveats=caveats)
        return MappingProxyType(found)

    def rate_constant(self, T: ArrayLike | None = None, I: ArrayLike = 0.0) -> Estimate:
        """Return the rate constant at `T` (K) and `I` (mol/L); see :meth:`at`."""
        return self.at(T, I)["rate_constant"]

    def _rate_quantity(self, I: ArrayLike) -> Quantity:
        order = self.observations.order
        if not self.describes_salt:
            plain = quantity("measured_rate_constant", order)
            return replace(plain, words="rate constant in the runs' own medium")
        if np.all(np.asarray(I) == 0):
            return quantity("rate_constant", order)
        return quantity("measured_rate_constant", order)

    def correlated(self, T: float | None = None, I: float = 0.0) -> dict[str, AffineScalarFunc]:
        """Return values of the ``uncertainties`` package that keep their correlations.

        Parameters
        ----------
        T, I
            One temperature (T_ref if not given) and one ionic strength, for the rate constant and
            the activation parameters.

        Returns
        -------
        dict
            Quantity name to a number with uncertainty; includes ``ln_rate_constant`` and every
            fitted linear parameter. Under the open law their covariance is the mixture's.

        Raises
        ------
        InputError
            If `T` or `I` is no number that a run could have.
        """
        if T is not None:
            T = given_number(T, "T", COLDEST, HOTTEST)
        I = given_number(I, "I", 0.0, STRONGEST)
        import uncertainties
        from uncertainties import umath

        names = self.distribution.names
        rows = activation_rows(self.surface, self.reference_temperature if T is None else T, I)
        names_at = [name for name in rows if name not in names or T is not None or np.any(I)]
        stacked = Rows.stacked([self._identity_rows(), *(rows[name] for name in names_at)])
        mean, covariance = self.distribution.joint(stacked)
        labels = [f"basis:{name}" for name in names] + names_at
        values = dict(zip(labels, uncertainties.correlated_values(mean, covariance), strict=True))
        found = {name: values[f"basis:{name}"] for name in names}
        found.update({name: values[name] for name in names_at})
        found["rate_constant"] = umath.exp(found["ln_rate_constant"])
        return found

    def covariance(self) -> tuple[tuple[str, ...], FloatArray]:
        """Return names and covariance of the linear parameters at T_ref and I → 0, SI units."""
        return self.distribution.names, self.distribution.covariance

    def _identity_rows(self) -> Rows:
        p = len(self.distribution.names)
        return Rows(np.zeros(p), np.eye(p))

    @cached_property
    def predicted_ln_k(self) -> FloatArray:
        """Mean of ln k at each run's conditions, shape ``(n,)``."""
        seen = self.observations
        return self.distribution.of(self.surface.ln_k(seen.T, seen.ionic_strength)).mean

    @property
    def residuals(self) -> FloatArray:
        """Observed less fitted ln k of each run, shape ``(n,)``."""
        return self.observations.ln_k - self.predicted_ln_k

    @cached_property
    def effective_u(self) -> FloatArray:
        """Standard uncertainty of ln k of each run from all its independent errors, ``(n,)``.

        Multiplied by the scatter's factor where that is the headline.
        """
        return self.errors.u * self.scatter.factor

    @property
    def standardised_residuals(self) -> FloatArray:
        """Residuals over the runs' standard uncertainties, shape ``(n,)``."""
        return self.residuals / self.effective_u


def _first(mixture: Mixture, scalar: bool) -> Mixture:
    return mixture.first() if scalar else mixture
