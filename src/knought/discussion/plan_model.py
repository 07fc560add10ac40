"""What a plan assumes: which surface will be fitted, what is taken as true, how well runs repeat.

A plan is made before its runs, so something must be taken as true: the energy, the charge product
and a salt law. Under the open law no single form is: every å, c and β that its priors allow is a
possible truth (or, where runs are already made, what they leave of them), and the plan is judged on
all of them. u of a linear model does not depend on the size of k, so that k itself is not assumed.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from fractions import Fraction
from typing import TYPE_CHECKING

import numpy as np

from knought.arrays import FloatArray, frozen
from knought.chemistry.constants import GAS_CONSTANT as R
from knought.errors import InputError
from knought.fitting.distribution import ParameterDistribution
from knought.fitting.open_fit import OpenFit
from knought.given import given_number
from knought.laws.open_law import DEFAULT_PRIORS, Priors, open_grid
from knought.laws.salt import OPEN
from knought.laws.salt import salt_law as named_salt_law
from knought.laws.surface import Rows, Surface
from knought.laws.temperature import temperature_law as named_temperature_law

if TYPE_CHECKING:
    from collections.abc import Sequence

    from knought.fitting.found import Found
    from knought.measurement.shared_errors import SharedError

__all__ = ["PlanModel", "Repeatability", "assumed_model", "interaction_prior", "model_of"]

#: The law with a heat capacity that contains each straight one.
_CURVED = {"arrhenius": "modified-arrhenius", "eyring": "eyring-cp"}


@dataclass(frozen=True)
class Repeatability:
    """How well one run will repeat.

    Attributes
    ----------
    k
        Relative standard uncertainty of one rate constant.
    T
        Standard uncertainty of each run's own temperature in K.
    I
        Relative standard uncertainty of each run's own ionic strength.
    """

    k: float
    T: float = 0.0
    I: float = 0.0

    def __post_init__(self) -> None:
        object.__setattr__(self, "k", given_number(self.k, "the repeatability"))
        if not 1e-12 <= self.k < 1:
            raise InputError(
                f"the repeatability is {self.k:g}",
                "give the relative standard uncertainty of one k as a fraction: 3 % is 0.03",
            )
        if not (0 <= self.T < 50 and 0 <= self.I < 1):
            raise InputError(
                f"the repeatability of T is {self.T:g} K and that of I {self.I:g}",
                "give u(T) in K and u(I)/I as a fraction, at least zero",
            )


@dataclass(frozen=True, eq=False)
class PlanModel:
    """The surface that will be fitted, and what is taken as true of it.

    Attributes
    ----------
    surface
        What will be fitted; stacked over c cells for the open law.
    log_prior : (c,) ndarray
        Logarithm of each cell's weight before any run.
    prior_rows, prior_values : (r, p), (r,) ndarray
        Gaussian priors of the parameters, each row divided by its standard uncertainty.
    possible
        What may be true: before any run the priors, afterwards what the runs leave.
    repeatability
        How well one run repeats.
    shared_errors
        Errors that all runs share.
    found
        The fit to the runs already made, if any.
    priors
        Of the open law.
    """

    surface: Surface
    log_prior: FloatArray
    prior_rows: FloatArray
    prior_values: FloatArray
    possible: ParameterDistribution
    repeatability: Repeatability
    shared_errors: tuple[SharedError, ...] = ()
    found: Found | None = None
    priors: Priors = DEFAULT_PRIORS

    @property
    def cells(self) -> int:
        """Number of cells."""
        return len(self.log_prior)

    @property
    def parameters(self) -> tuple[str, ...]:
        """Names of the linear parameters."""
        return self.surface.parameters

    @property
    def describes_salt(self) -> bool:
        """Whether the surface depends on ionic strength."""
        return self.surface.salt_law.form is not None

    @property
    def flat_parameters(self) -> int:
        """Number of parameters that the runs alone must determine."""
        return len(self.parameters) - len(self.prior_rows)

    @property
    def ion_sizes(self) -> tuple[float, float]:
        """Smallest and largest å in m that the open law allows."""
        return self.priors.ion_size

    def rows(self, T: FloatArray, I: FloatArray) -> Rows:
        """Return design and offset of conditions in every cell, ``(c, n, p)`` and ``(c, n)``."""
        return self.in_cells(self.surface.ln_k(T, I))

    def in_cells(self, rows: Rows) -> Rows:
        """Return affine functions with the axis of the cells, whether or not they have it."""
        n, p = rows.rows.shape[-2:]
        return Rows(
            np.broadcast_to(rows.offset, (self.cells, n)),
            np.broadcast_to(rows.rows, (self.cells, n, p)),
        )

    def expected_ln_k(self, T: FloatArray, I: FloatArray) -> FloatArray:
        """Return ln k at conditions as it is taken to be, averaged over what may be true."""
        return self.possible.of(self.surface.ln_k(T, I)).mean

    def slopes(self, T: FloatArray, I: FloatArray) -> tuple[FloatArray, FloatArray]:
        """Return ∂ln k/∂T (K^-1) and ∂ln k/∂I (L/mol; zero where I is) as they are taken to be."""
        slope_T = self.possible.of(self.surface.ln_k_dT(T, I)).mean
        if not self.describes_salt:
            return slope_T, np.zeros_like(slope_T)
        above = np.where(I > 0, I, 1.0)
        slope_I = self.possible.of(self.surface.ln_k_dI(T, above)).mean
        return slope_T, np.where(I > 0, slope_I, 0.0)

    def u(self, T: FloatArray, I: FloatArray) -> FloatArray:
        """Return u of ln k of one run at conditions, its own errors of T and I carried along."""
        said = self.repeatability
        slope_T, slope_I = self.slopes(T, I)
        return np.asarray(
            np.sqrt(said.k**2 + (slope_T * said.T) ** 2 + (slope_I * I * said.I) ** 2)
        )

    def shared(
        self,
        T: FloatArray,
        I: FloatArray,
        batch: tuple[str, ...] | None = None,
        run: tuple[str, ...] | None = None,
    ) -> FloatArray:
        """Return what one u of each shared error does to ln k at conditions, ``(n, q)``.

        Parameters
        ----------
        T, I : (n,) ndarray
            K and mol/L.
        batch
            Batch of each run. Runs to come are in none, so that an error of a batch spares them.
        run
            Label of each run; runs to come have none.
        """
        slope_T, slope_I = self.slopes(T, I)
        columns = [
            each.effect(T, I, slope_T, slope_I, batch, run)
            if each.batch is None or each.batch in (batch or ())
            else np.zeros(len(T))
            for each in self.shared_errors
        ]
        return np.stack(columns, axis=1) if columns else np.zeros((len(T), 0))

    def shared_of_all(self, T: FloatArray, I: FloatArray) -> FloatArray:
        """Return the same for the runs already made with runs at `T` and `I` behind them."""
        if self.found is None:
            return self.shared(T, I)
        seen = self.found.observations
        made = self.shared(seen.T, seen.ionic_strength, seen.batch, seen.run)
        return np.concatenate([made, self.shared(T, I)])

    def with_curvature(self, heat_capacity: float = 0.0) -> PlanModel | None:
        """Return the same with a heat capacity of activation to be found as well.

        Parameters
        ----------
        heat_capacity
            ΔC_p‡ in J/(K mol), taken as true.

        Returns
        -------
        PlanModel or None
            None where there is no temperature law to curve; itself where it is there already.
        """
        law = self.surface.temperature_law
        if "activation_heat_capacity" in law.parameters:
            return self
        if law.name not in _CURVED:
            return None
        surface = replace(self.surface, temperature_law=named_temperature_law(_CURVED[law.name]))
        place = len(law.parameters)
        means = np.insert(self.possible.means, place, heat_capacity, axis=1)
        covariances = np.insert(np.insert(self.possible.covariances, place, 0, 1), place, 0, 2)
        possible = replace(
            self.possible, names=surface.parameters, means=means, covariances=covariances
        )
        rows = np.insert(self.prior_rows, place, 0.0, axis=1)
        return replace(self, surface=surface, possible=possible, prior_rows=rows)


def _prior_covariance(rows: FloatArray, components: int, p: int) -> FloatArray:
    """Return the covariance of what may be true: that of the priors, and certainty elsewhere."""
    covariance = np.zeros((components, p, p))
    if len(rows):
        covariance[:, -1, -1] = 1.0 / rows[0, -1] ** 2
    return covariance


def interaction_prior(surface: Surface, priors: Priors) -> tuple[FloatArray, FloatArray]:
    """Return the prior of β as a row of observations of the parameters; no row without β."""
    if surface.salt_law.name != OPEN or "interaction_coefficient" not in surface.parameters:
        return np.zeros((0, len(surface.parameters))), np.zeros(0)
    mean, deviation = priors.interaction_coefficient
    row = np.zeros((1, len(surface.parameters)))
    row[0, surface.parameters.index("interaction_coefficient")] = 1.0 / deviation
    return row, np.array([mean / deviation])


def assumed_model(
    repeatability: Repeatability,
    *,
    activation_energy: float,
    charge_product: float,
    charges_known: bool,
    temperature_law: str,
    salt_law: str,
    reference_temperature: float,
    order: Fraction = Fraction(2),
    priors: Priors = DEFAULT_PRIORS,
    ion_size: float | None = None,
    shared_errors: Sequence[SharedError] = (),
) -> PlanModel:
    """Return what a plan from nothing assumes.

    Parameters
    ----------
    repeatability
        How well one run repeats.
    activation_energy
        E_a at T_ref, taken as true, in J/mol.
    charge_product
        z_A z_B, taken as true.
    charges_known
        Whether the fit will be told the charges.
    temperature_law, salt_law, reference_temperature, order, priors, ion_size
        Of the fit that will be made.
    shared_errors
        Errors that all runs will share.

    Raises
    ------
    InputError
        If a law is unknown, or a number cannot be.
    """
    if not np.isfinite(activation_energy) or not np.isfinite(charge_product):
        raise InputError(
            f"E_a is {activation_energy} J/mol and z_A z_B {charge_product}",
            "give finite numbers: 50e3 and 2",
        )
    thermal = named_temperature_law(temperature_law)
    log_prior = np.zeros(1)
    if salt_law == OPEN:
        grid = open_grid(priors)
        log_prior, salt = grid.log_weight, grid.law
    else:
        salt = named_salt_law(salt_law, ion_size=ion_size)
    if charges_known:
        salt = salt.with_charges(charge_product)
    surface = Surface(thermal, salt, reference_temperature, order)
    rows, values = interaction_prior(surface, priors)
    energy = {
        "activation_energy": activation_energy,
        "activation_enthalpy": activation_energy - R * reference_temperature,
        "charge_product": charge_product,
        "interaction_coefficient": priors.interaction_coefficient[0] if len(rows) else 0.0,
    }
    mean = np.array([energy.get(name, 0.0) for name in surface.parameters])
    components = len(log_prior)
    weights = np.exp(log_prior - log_prior.max())
    possible = ParameterDistribution(
        names=surface.parameters,
        weights=frozen(weights / weights.sum()),
        means=np.broadcast_to(mean, (components, len(mean))),
        covariances=_prior_covariance(rows, components, len(mean)),
        cell=np.arange(components) if salt_law == OPEN else None,
    )
    return PlanModel(
        surface,
        log_prior,
        rows,
        values,
        possible,
        repeatability,
        tuple(shared_errors),
        priors=priors,
    )


def model_of(
    found: Found, repeatability: Repeatability, shared_errors: Sequence[SharedError] = ()
) -> PlanModel:
    """Return what a plan of further runs assumes: what the runs already made leave possible.

    Parameters
    ----------
    found
        The fit to the runs already made.
    repeatability
        How well one further run repeats.
    shared_errors
        Errors that the runs made and the further runs share; those of the fit if not given.
    """
    if isinstance(found, OpenFit):
        log_prior, priors = found.grid.log_weight, found.grid.priors
    else:
        log_prior, priors = np.zeros(1), DEFAULT_PRIORS
    rows, values = interaction_prior(found.surface, priors)
    return PlanModel(
        found.surface,
        log_prior,
        rows,
        values,
        found.distribution,
        repeatability,
        tuple(shared_errors) or found.observations.shared,
        found,
        priors,
    )
