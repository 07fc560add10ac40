"""The extended law with its ion size fitted: the one nonlinear parameter, through lmfit.

lmfit finds the optimum; the covariance is that of the law linearised there, with exact derivatives,
so that the result speaks the same protocol as every other fit. The profile likelihood of an ion
size is often far from parabolic: the open law, which integrates over it, is the safer answer.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

import numpy as np

from knought.chemistry.activity import ExtendedForm
from knought.chemistry.constants import LN10
from knought.chemistry.debye_huckel import debye_huckel
from knought.errors import Caveat, InputError
from knought.fitting.fit import resolve
from knought.fitting.observations import Observations, observe
from knought.fitting.surface_fit import SurfaceFit, fit_surface
from knought.laws.salt import SaltLaw
from knought.laws.salt import salt_law as named_salt_law

if TYPE_CHECKING:
    from knought.arrays import FloatArray
    from knought.fitting.scatter import ScatterChoice
    from knought.measurement.table import RateTable

__all__ = ["ION_SIZE_BOUNDS", "fit_ion_size"]

#: å is sought between these bounds (m); ions in water are 2 to 11 Å (Kielland 1937).
ION_SIZE_BOUNDS = (0.3e-10, 30e-10)
_START = 4.5e-10
_ANGSTROM = 1e-10


@dataclass(frozen=True)
class _LinearisedExtendedLaw(SaltLaw):
    """The extended law about its fitted (z_A z_B, å): exact there, linear around it."""

    centre_charge_product: float = 0.0

    @property
    def _extended(self) -> ExtendedForm:
        if not isinstance(self.form, ExtendedForm):  # made by fit_ion_size alone
            raise TypeError("only the extended form has a fitted ion size")
        return self.form

    @property
    def parameters(self) -> tuple[str, ...]:
        return ("charge_product", "ion_size")

    def columns(self, T: FloatArray, I: FloatArray) -> list[FloatArray]:
        return [*super().columns(T, I), self._size_column(T, I)]

    def columns_dT(self, T: FloatArray, I: FloatArray) -> list[FloatArray]:
        return [*super().columns_dT(T, I), self._size_column_dT(T, I)]

    def columns_dI(self, T: FloatArray, I: FloatArray) -> list[FloatArray]:
        water, form = debye_huckel(T), self._extended
        slope = -2.0 * water.A * water.B * form.value(I, T) * form.d_dI(I, T)
        return [*super().columns_dI(T, I), self._charge_factor * slope]

    def offset(self, T: FloatArray, I: FloatArray) -> FloatArray:
        return -self._extended.ion_size * self._size_column(T, I)

    def offset_dT(self, T: FloatArray, I: FloatArray) -> FloatArray:
        return -self._extended.ion_size * self._size_column_dT(T, I)

    def offset_dI(self, T: FloatArray, I: FloatArray) -> FloatArray:
        return -self._extended.ion_size * self.columns_dI(T, I)[-1]

    @property
    def _charge_factor(self) -> float:
        return 2.0 * LN10 * self.centre_charge_product

    def _size_column(self, T: FloatArray, I: FloatArray) -> FloatArray:
        """∂ ln k/∂å: f = √I/(1 + B å √I) has ∂f/∂å = -B f²."""
        water = debye_huckel(T)
        return -self._charge_factor * water.A * water.B * self._extended.value(I, T) ** 2

    def _size_column_dT(self, T: FloatArray, I: FloatArray) -> FloatArray:
        water, form = debye_huckel(T), self._extended
        f, f_T = form.value(I, T), form.d_dT(I, T)
        slope = (water.dA_dT * water.B + water.A * water.dB_dT) * f**2
        return -self._charge_factor * (slope + 2.0 * water.A * water.B * f * f_T)


def fit_ion_size(
    rates: RateTable | Observations,
    *,
    temperature_law: str | None = None,
    reference_temperature: float | None = None,
    scatter: ScatterChoice | None = None,
) -> SurfaceFit:
    """Fit the extended law with the ion size å as a parameter.

    Parameters
    ----------
    rates
        The table, or what :func:`observe` made of it, with at least three ionic strengths.
    temperature_law, reference_temperature, scatter
        As for :func:`knought.fit`.

    Returns
    -------
    SurfaceFit
        With ``ion_size`` (m) among its parameters.

    Raises
    ------
    InputError
        If there are too few ionic strengths or runs, or the optimum cannot be found.
    """
    seen = rates if isinstance(rates, Observations) else observe(rates)
    choices = resolve(
        seen,
        temperature_law=temperature_law,
        salt_law="extended",
        reference_temperature=reference_temperature,
    )
    if len(seen.ionic_strength_levels) < 3:
        raise InputError(
            "an ion size needs at least three ionic strengths; the runs have "
            f"{len(seen.ionic_strength_levels)}",
            "measure at more ionic strengths, or give the ion size",
        )
    size, charges = _optimum(seen, choices.temperature_law, choices.reference_temperature)
    law = named_salt_law("extended", ion_size=size)
    linearised = _LinearisedExtendedLaw(
        law.name, f"{law.words}, å fitted", law.form, centre_charge_product=charges
    )
    fitted = fit_surface(
        seen,
        temperature_law=choices.temperature_law,
        salt_law=linearised,
        reference_temperature=choices.reference_temperature,
        scatter=scatter,
    )
    return replace(fitted, caveats=(*fitted.caveats, *_size_caveats(fitted)))


def _optimum(
    seen: Observations, temperature_law: str, reference_temperature: float
) -> tuple[float, float]:
    """Return å and the charge product at the least-squares optimum.

    The linear parameters are solved for exactly at every å (variable projection), so that lmfit
    searches along one dimension.

    Raises
    ------
    InputError
        If lmfit finds no optimum.
    """
    import lmfit

    def fitted(size: float) -> SurfaceFit:
        return fit_surface(
            seen,
            temperature_law=temperature_law,
            salt_law=named_salt_law("extended", ion_size=size),
            reference_temperature=reference_temperature,
        )

    def residuals(parameters: lmfit.Parameters) -> FloatArray:
        found = fitted(parameters["angstrom"].value * _ANGSTROM)
        return np.asarray(found.residuals / found.effective_u * found.scatter.factor)

    parameters = lmfit.Parameters()
    low, high = (bound / _ANGSTROM for bound in ION_SIZE_BOUNDS)
    parameters.add("angstrom", value=_START / _ANGSTROM, min=low, max=high)
    result = lmfit.minimize(residuals, parameters, method="leastsq")
    if not result.success:
        raise InputError(
            f"no ion size fits best: {result.message}", "use the open law, which needs none"
        )
    size = float(result.params["angstrom"].value) * _ANGSTROM
    return size, float(fitted(size).parameters["charge_product"].value)


def _size_caveats(fitted: SurfaceFit) -> tuple[Caveat, ...]:
    size = fitted.parameters["ion_size"]
    value, u = float(size.value), float(size.standard_uncertainty)
    if u < 0.5 * value and ION_SIZE_BOUNDS[0] * 1.05 < value < ION_SIZE_BOUNDS[1] * 0.95:
        return ()
    return (
        Caveat(
            "ion-size-undetermined",
            f"These runs hardly determine the ion size ({size.written()}): its ± is only a local "
            "slope. The open law integrates over what chemistry allows instead.",
        ),
    )
