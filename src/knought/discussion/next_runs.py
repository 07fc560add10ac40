"""Which runs to do next: the plan that makes the answer come out.

From what can be reached, how well runs repeat and what the answer is for, the plan says where to
put the runs, what u to expect of every headline quantity before and after, how far that is from the
best that could be had, and how likely the verdicts are. Additions to runs already made start from
what those leave open.
"""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from functools import cached_property
from typing import TYPE_CHECKING

import numpy as np

from knought.discussion.continuous_design import ContinuousDesign, continuous_design
from knought.discussion.criteria import Criterion, criterion_of
from knought.discussion.design_floor import Floor
from knought.discussion.exchange import Exchanged, exchange
from knought.discussion.plan_aims import Aim, read_aim
from knought.discussion.plan_assumptions import PlanRequest, assumption_lines, model_for
from knought.discussion.plan_cautions import cautions
from knought.discussion.plan_expectation import DEFAULT_DATA_SETS, SimulatedRuns, simulate_runs
from knought.discussion.plan_floor import floor_of
from knought.discussion.plan_schedule import PlannedRun, form_to_fill_in, working_order
from knought.discussion.power import Power, charge_power, heat_capacity_power
from knought.discussion.reach import Forbidden, Reach
from knought.fitting.assess import Assessment
from knought.laws.open_law import DEFAULT_PRIORS, Priors
from knought.numerics.seeds import DEFAULT_SEED, generator

if TYPE_CHECKING:
    from collections.abc import Mapping, Sequence

    from numpy.typing import ArrayLike

    from knought.arrays import FloatArray, IndexArray
    from knought.discussion.plan_model import PlanModel
    from knought.errors import Caveat
    from knought.fitting.found import Found
    from knought.measurement.shared_errors import SharedError

__all__ = ["Plan", "plan"]


@dataclass(frozen=True, eq=False)
class Plan:
    """A plan of runs, and what is expected of it.

    Attributes
    ----------
    request
        What was asked for.
    aim
        What the plan is for.
    reach
        The candidates.
    model
        What will be fitted, and what is taken as true.
    criterion
        What was made small.
    floor
        Least numbers of temperatures and ionic strengths.
    exchanged
        The design: runs at each candidate.
    runs
        The runs in working order.
    """

    request: PlanRequest
    aim: Aim
    reach: Reach
    model: PlanModel
    criterion: Criterion
    floor: Floor
    exchanged: Exchanged
    runs: tuple[PlannedRun, ...]

    @property
    def counts(self) -> IndexArray:
        """Number of runs at each candidate, ``(N,)``."""
        return self.exchanged.runs

    @property
    def T(self) -> FloatArray:
        """Temperature of each run in working order, K."""
        return np.array([run.T for run in self.runs])

    @property
    def I(self) -> FloatArray | None:  # noqa: E743
        """Ionic strength of each run in working order, mol/L; None for temperatures only."""
        if self.reach.I is None:
            return None
        return np.array([run.I for run in self.runs], dtype=float)

    @cached_property
    def simulated(self) -> SimulatedRuns:
        """Simulated data sets of the plan, from which what is expected is found."""
        return simulate_runs(
            self.model,
            *self._conditions(self.counts),
            data_sets=self.request.data_sets,
            seed=self.request.seed,
        )

    @property
    def expected_uncertainty(self) -> Mapping[str, float]:
        """Expected u of every headline quantity after the runs, J/mol and J/(K mol).

        That of ``rate_constant`` is relative: u(k°)/k° = u(ln k°).
        """
        return self.simulated.expected

    @property
    def uncertainty_before(self) -> Mapping[str, float]:
        """U of the same quantities from the runs already made; empty where there are none."""
        found = self.model.found
        if found is None:
            return {}
        before = {}
        for name in self.expected_uncertainty:
            if name in found.parameters and not found.parameters[name].given:
                estimate = found.parameters[name]
                u = float(estimate.standard_uncertainty)
                before[name] = u / float(estimate.value) if estimate.logarithmic else u
        return before

    @cached_property
    def continuous(self) -> ContinuousDesign:
        """The best division of the same number of runs, without floor or cost of changes."""
        return continuous_design(self.criterion, float(len(self.runs)))

    @property
    def efficiency(self) -> float:
        """Criterion of the best continuous design over that of the plan: 1 is the best there is.

        A plan with an efficiency of 0.8 needs 1/0.8 times the runs for the same variance.
        """
        return self.continuous.value / self._criterion_value(self.counts)

    @cached_property
    def without_floor(self) -> Exchanged:
        """The plan as it would be without the floor of temperatures and ionic strengths."""
        free = Floor.none(self.reach, self.request.temperature_change_cost)
        return exchange(
            self.criterion,
            len(self.runs),
            free,
            generator(self.request.seed, 2),
            starts=self.request.starts,
            begin=(self.counts,),
        )

    @property
    def price_of_floor(self) -> float:
        """Factor by which the floor enlarges the criterion's square root (u of the aim)."""
        free = self._criterion_value(self.without_floor.runs)
        return float(np.sqrt(self._criterion_value(self.counts) / free))

    @cached_property
    def powers(self) -> tuple[Power, ...]:
        """How likely each verdict is: the charge product, and a heat capacity of activation."""
        wanted = self.request
        T, I = self._conditions(self.counts)
        curvature = heat_capacity_power(
            self.model,
            T,
            I,
            wanted.heat_capacity,
            data_sets=wanted.data_sets,
            seed=wanted.seed + 1,
        )
        charges = charge_power(
            self.model,
            T,
            I,
            self.expected_uncertainty.get("charge_product", np.nan),
            data_sets=wanted.data_sets,
            seed=wanted.seed,
        )
        return (*charges, *([] if curvature is None else [curvature]))

    @cached_property
    def information(self) -> FloatArray:
        """By which fraction one run more at each candidate would lower u of the aim, ``(N,)``."""
        runs = self.counts.astype(float)
        now = self._criterion_value(self.counts)
        return np.asarray(1.0 - np.sqrt(self.criterion.with_one_more(runs) / now))

    @property
    def assumptions(self) -> tuple[str, ...]:
        """What the plan assumes, a sentence each."""
        return assumption_lines(self.request, self.model, self.aim)

    @cached_property
    def cautions(self) -> tuple[Caveat, ...]:
        """What to mind when heating."""
        names = [*self.reach.salts, *([self.request.reactants] if self.request.reactants else [])]
        return cautions(self.T, self.request.hazards, names)

    def expected_for(self, T: ArrayLike, I: ArrayLike | None = None) -> Mapping[str, float]:
        """Return what the same assumptions expect of runs of the user's own choosing.

        Parameters
        ----------
        T, I
            Conditions of the runs in K and mol/L, one a run.

        Returns
        -------
        Mapping
            Expected u by quantity, as in :attr:`expected_uncertainty`.

        Raises
        ------
        InputError
            If a property of water is needed outside 0-100 °C, or I is negative.
        """
        T = np.atleast_1d(np.asarray(T, dtype=float))
        strengths = np.broadcast_to(np.asarray(0.0 if I is None else I, dtype=float), T.shape)
        return simulate_runs(
            self.model, T, strengths, data_sets=self.request.data_sets, seed=self.request.seed
        ).expected

    def csv(self) -> str:
        """Return the runs as CSV ready to fill in; see :func:`form_to_fill_in`."""
        return form_to_fill_in(self.runs, self.model.surface.order)

    def _criterion_value(self, runs: IndexArray) -> float:
        return float(self.criterion.values(runs[None].astype(float))[0])

    def _conditions(self, runs: IndexArray) -> tuple[FloatArray, FloatArray]:
        which = np.repeat(np.arange(len(runs)), runs)
        return self.reach.T[which], self.reach.ionic_strength[which]


def plan(
    temperatures: ArrayLike,
    ionic_strengths: ArrayLike | None = None,
    *,
    runs: int,
    repeatability: float,
    aim: str | Aim = "activation_energy",
    activation_energy: float = 50e3,
    charge_product: float | None = None,
    reactants: str | None = None,
    charges_known: bool | None = None,
    found: Assessment | Found | None = None,
    temperature_law: str | None = None,
    salt_law: str | None = None,
    reference_temperature: float = 298.15,
    order: Fraction | int = 2,
    priors: Priors = DEFAULT_PRIORS,
    u_T: float = 0.0,
    u_I: float = 0.0,
    shared_errors: Sequence[SharedError] = (),
    salts: Mapping[str, float] | None = None,
    forbidden: Sequence[Forbidden | tuple[float, float]] = (),
    least_temperatures: int | None = None,
    least_ionic_strengths: int | None = None,
    runs_a_day: int | None = None,
    temperature_change_cost: float = 0.0,
    heat_capacity: float = 200.0,
    hazards: Sequence[str] = (),
    starts: int = 8,
    data_sets: int = DEFAULT_DATA_SETS,
    seed: int = DEFAULT_SEED,
) -> Plan:
    """Say where to put the next runs.

    Parameters
    ----------
    temperatures, ionic_strengths
        What can be set, in K and mol/L; without ionic strengths the plan is of temperatures only.
    runs
        Number of runs to plan.
    repeatability
        Relative standard uncertainty of one rate constant: 3 % is 0.03.
    aim
        What the plan is for; see :func:`knought.discussion.plan_aims.read_aim`.
    activation_energy
        E_a in J/mol, taken as true; counts only where temperatures have errors.
    charge_product
        z_A z_B, taken as true; 1 if nothing is said of the charges.
    reactants
        The reactants with their charges, which then are known (``"A^2- + B^-"``).
    charges_known
        Whether the fit will be told the charges: they are if reactants are given.
    found
        The assessment of (or fit to) runs already made, to which these are added; it then also
        says the laws, the energy and the charge product.
    temperature_law, salt_law, reference_temperature, order, priors
        Of the fit that will be made: Eyring and the open law unless said otherwise.
    u_T, u_I
        Standard uncertainty of each run's own temperature (K) and ionic strength (relative).
    shared_errors
        Errors that all runs share.
    salts
        Salts by the highest ionic strength in mol/L that each may set.
    forbidden
        Conditions that cannot be set together: pairs (T, I) or ranges.
    least_temperatures, least_ionic_strengths
        Distinct levels that the plan keeps with the runs made: 3 and 4, as far as there are.
    runs_a_day
        Runs that a working day has time for.
    temperature_change_cost
        What a change of temperature costs, in working times of a run.
    heat_capacity
        ΔC_p‡ in J/(K mol) whose detection is judged.
    hazards
        ``"volatile"``, ``"unstable"``, ``"oxidiser"``: what cautions are about.
    starts, data_sets, seed
        Of the exchange and of the simulation.

    Returns
    -------
    Plan

    Raises
    ------
    InputError
        If an input cannot be, or no plan of that many runs can give the aim.
    """
    asked = read_aim(aim)
    reach = Reach.of(temperatures, ionic_strengths, salts=salts, forbidden=forbidden)
    request = PlanRequest(
        runs=runs,
        repeatability=repeatability,
        u_T=u_T,
        u_I=u_I,
        activation_energy=activation_energy,
        charge_product=charge_product,
        reactants=reactants,
        charges_known=charges_known,
        temperature_law=temperature_law,
        salt_law=salt_law,
        reference_temperature=reference_temperature,
        order=Fraction(order),
        priors=priors,
        shared_errors=tuple(shared_errors),
        least_temperatures=least_temperatures,
        least_ionic_strengths=least_ionic_strengths,
        runs_a_day=runs_a_day,
        temperature_change_cost=temperature_change_cost,
        heat_capacity=heat_capacity,
        hazards=tuple(hazards),
        starts=starts,
        data_sets=data_sets,
        seed=seed,
    )
    headline = found.headline if isinstance(found, Assessment) else found
    model = model_for(request, reach, asked, headline)
    criterion = criterion_of(asked, model, reach)
    floor = floor_of(request, reach, model)
    exchanged = exchange(criterion, runs, floor, generator(seed, 1), starts=starts)
    made = 0 if headline is None else headline.observations.runs
    in_order = working_order(
        reach,
        exchanged.runs,
        seed,
        runs_a_day=runs_a_day,
        change=temperature_change_cost,
        first=made + 1,
    )
    result = Plan(request, asked, reach, model, criterion, floor, exchanged, in_order)
    # A hazard that is misspelt is told now, and not when the cautions are printed.
    _ = result.cautions
    return result
