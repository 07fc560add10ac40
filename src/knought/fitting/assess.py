"""The front door: a table of rate constants in, everything that is known of its surface out."""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

from knought.errors import Caveat, InputError
from knought.fitting.budget import Budget, budget
from knought.fitting.diagnostics import diagnose
from knought.fitting.fit import Choices, fit_chosen, resolve
from knought.fitting.influence import influence
from knought.fitting.k_space import cross_check
from knought.fitting.monte_carlo import monte_carlo
from knought.fitting.observations import observe
from knought.fitting.open_fit import OpenFit
from knought.fitting.replicates import replicates
from knought.fitting.sensitivity import prior_sensitivity
from knought.fitting.surface_fit import SurfaceFit
from knought.fitting.verdicts import residual_verdicts, verdicts
from knought.laws.salt import SALT_LAWS
from knought.laws.temperature import TEMPERATURE_LAWS
from knought.numerics.seeds import DEFAULT_SEED

if TYPE_CHECKING:
    from collections.abc import Mapping, Sequence

    from numpy.typing import ArrayLike
    from uncertainties import AffineScalarFunc

    from knought.arrays import FloatArray
    from knought.fitting.diagnostics import Diagnostics
    from knought.fitting.estimate import Estimate
    from knought.fitting.found import Found
    from knought.fitting.influence import Influence
    from knought.fitting.k_space import CrossCheck
    from knought.fitting.monte_carlo import MonteCarlo
    from knought.fitting.observations import Observations
    from knought.fitting.replicates import Replicates
    from knought.fitting.scatter import ScatterChoice
    from knought.fitting.sensitivity import PriorCase
    from knought.laws.open_law import Priors
    from knought.measurement.shared_errors import SharedError
    from knought.measurement.table import RateTable

__all__ = ["Assessment", "Refusal", "assess"]


@dataclass(frozen=True)
class Refusal:
    """A law that was not fitted, and why.

    Attributes
    ----------
    temperature_law, salt_law
        Names of the laws.
    reason
        Why the runs cannot carry it.
    """

    temperature_law: str
    salt_law: str
    reason: str


@dataclass(frozen=True, eq=False)
class Assessment:
    """The headline, every named law beside it, and what must be said.

    Attributes
    ----------
    rates
        The table as it was read.
    choices
        What was fitted and how.
    headline
        The answer: the open law, unless another was asked for or the runs carry none.
    data_alone
        Where the charges are given: what the runs alone say, charges left open. None where they
        are not given, or the runs cannot say.
    laws
        The chosen temperature law with every named salt law that the runs can carry.
    temperature_laws
        The headline's salt law with every other temperature law that the runs can carry.
    refused
        Laws that the runs cannot carry, and why.
    diagnostics
        What the residuals of the headline say.
    replicates
        What repeated runs say; None where nothing was repeated.
    cross_check
        The best named law fitted to k itself beside ln k; None where it cannot be.
    caveats
        What must be said with the headline.
    """

    rates: RateTable
    choices: Choices
    headline: Found
    data_alone: Found | None
    laws: tuple[SurfaceFit, ...]
    temperature_laws: tuple[Found, ...]
    refused: tuple[Refusal, ...]
    diagnostics: Diagnostics
    replicates: Replicates | None
    cross_check: CrossCheck | None
    caveats: tuple[Caveat, ...]

    @property
    def parameters(self) -> Mapping[str, Estimate]:
        """Every parameter of the headline at T_ref and I → 0; see :attr:`Found.parameters`."""
        return self.headline.parameters

    @property
    def reference_temperature(self) -> float:
        """T_ref in K."""
        return self.headline.reference_temperature

    @property
    def temperature_law(self) -> str:
        """Name of the headline's temperature law."""
        return self.headline.temperature_law

    @property
    def salt_law(self) -> str:
        """Name of the headline's salt law."""
        return self.headline.salt_law

    @property
    def observations(self) -> Observations:
        """The runs that were fitted."""
        return self.headline.observations

    def at(self, T: ArrayLike | None = None, I: ArrayLike = 0.0) -> Mapping[str, Estimate]:
        """Return rate constant and activation parameters at `T` and `I`; see :meth:`Found.at`."""
        return self.headline.at(T, I)

    def rate_constant(self, T: ArrayLike | None = None, I: ArrayLike = 0.0) -> Estimate:
        """Return the rate constant at `T` (K) and `I` (mol/L); see :meth:`Found.at`."""
        return self.headline.rate_constant(T, I)

    def correlated(self, T: float | None = None, I: float = 0.0) -> dict[str, AffineScalarFunc]:
        """Return values that keep their correlations; see :meth:`Found.correlated`."""
        return self.headline.correlated(T, I)

    def budget(self, name: str, *, T: float | None = None, I: float = 0.0) -> Budget:
        """Return what each source adds to the variance of a result; see :func:`budget`."""
        return budget(self.headline, name, T=T, I=I)

    def monte_carlo(self, draws: int | None = None, *, seed: int = DEFAULT_SEED) -> MonteCarlo:
        """Propagate every distribution by Monte Carlo; see :func:`monte_carlo`."""
        return monte_carlo(self.headline, draws, seed=seed)

    def influence(self) -> tuple[Influence, ...]:
        """Return what moves when runs or conditions are left out; see :func:`influence`."""
        return influence(self.headline)

    def prior_sensitivity(self) -> tuple[PriorCase, ...]:
        """Return the answer under other priors; empty where the salt law is not open."""
        return prior_sensitivity(self.headline) if isinstance(self.headline, OpenFit) else ()

    def covariance(self) -> tuple[tuple[str, ...], FloatArray]:
        """Return names and covariance of the linear parameters; see :meth:`Found.covariance`."""
        return self.headline.covariance()


def assess(
    rates: RateTable,
    *,
    temperature_law: str | None = None,
    salt_law: str | None = None,
    reference_temperature: float | None = None,
    standard_concentration: float = 1.0,
    charge_product: float | None = None,
    reactants: str | None = None,
    ion_size: float | None = None,
    priors: Priors | None = None,
    scatter: ScatterChoice | None = None,
    shared_errors: Sequence[SharedError] = (),
) -> Assessment:
    """Find everything a table of rate constants can tell, with every named law beside it.

    Parameters
    ----------
    rates
        The table of rate constants.
    temperature_law, salt_law, reference_temperature, standard_concentration
        As for :func:`knought.fit`; the headline's.
    charge_product, reactants
        z_A z_B, or the reactants that give it, where the charges are known; this narrows k at
        I → 0 more than anything else. What the runs alone say of the charges stands beside it.
    ion_size, priors, scatter, shared_errors
        As for :func:`knought.fit`.

    Returns
    -------
    Assessment

    Raises
    ------
    InputError
        If a law is unknown, or the runs cannot determine the parameters of the headline.
    """
    seen = observe(rates, shared_errors)
    choices = resolve(
        seen,
        temperature_law=temperature_law,
        salt_law=salt_law,
        reference_temperature=reference_temperature,
        standard_concentration=standard_concentration,
        charge_product=charge_product,
        reactants=reactants,
        ion_size=ion_size,
        priors=priors,
        scatter=scatter,
    )
    headline = fit_chosen(seen, choices)
    data_alone = _data_alone(seen, choices)
    laws, refused = _named_laws(seen, choices)
    variants, refused_variants = _other_temperature_laws(seen, choices)
    diagnostics, repeated = diagnose(headline), replicates(headline)
    checked = cross_check(laws)
    return Assessment(
        rates=rates,
        choices=choices,
        headline=headline,
        data_alone=data_alone,
        laws=laws,
        temperature_laws=variants,
        refused=(*refused, *refused_variants),
        diagnostics=diagnostics,
        replicates=repeated,
        cross_check=checked,
        caveats=(
            *choices.caveats,
            *headline.caveats,
            *verdicts(headline, data_alone, laws, rates),
            *residual_verdicts(headline, diagnostics, repeated, checked),
        ),
    )


def _data_alone(seen: Observations, choices: Choices) -> Found | None:
    if choices.charge_product is None or choices.salt_law == "none":
        return None
    if len(seen.ionic_strength_levels) < 2:
        return None
    return fit_chosen(seen, replace(choices, charge_product=None, reactants=None))


def _named_laws(
    seen: Observations, choices: Choices
) -> tuple[tuple[SurfaceFit, ...], tuple[Refusal, ...]]:
    """Fit the chosen temperature law with every named salt law."""
    fitted: list[SurfaceFit] = []
    refused: list[Refusal] = []
    for name in SALT_LAWS:
        if seen.I is None and name != "none":
            continue
        try:
            found = fit_chosen(
                seen,
                replace(
                    choices,
                    salt_law=name,
                    ion_size=choices.ion_size if name == "extended" else None,
                ),
            )
        except InputError as error:
            refused.append(Refusal(choices.temperature_law, name, str(error)))
            continue
        if isinstance(found, SurfaceFit):
            fitted.append(found)
    return tuple(fitted), tuple(refused)


def _other_temperature_laws(
    seen: Observations, choices: Choices
) -> tuple[tuple[Found, ...], tuple[Refusal, ...]]:
    """Fit the headline's salt law with every temperature law that says something of a slope."""
    fitted: list[Found] = []
    refused: list[Refusal] = []
    if choices.temperature_law == "isothermal":
        return (), ()
    for name in TEMPERATURE_LAWS:
        if name == "isothermal":
            continue
        try:
            fitted.append(fit_chosen(seen, replace(choices, temperature_law=name)))
        except InputError as error:
            refused.append(Refusal(name, choices.salt_law, str(error)))
    return tuple(fitted), tuple(refused)
