"""Propagation of distributions by Monte Carlo (JCGM 101): the reference for every other ±.

Each draw takes the errors of the runs, the errors they share (each from its own distribution), and,
under the open law, a cell of its grid with its weight and β from its prior. Where temperatures and
ionic strengths are exact, the estimate is linear in all of them (its ``gain``) and a block of draws
is one matrix product; where they have errors, each draw is refitted at the conditions drawn
(:mod:`knought.fitting.condition_draws`). Drawing goes on for a fixed number, or adaptively (7.9)
until standard uncertainties and interval ends are stable to two significant digits of u. Blocks are
seeded one by one, so that the same seed gives the same draws.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from knought.arrays import FloatArray, frozen
from knought.errors import InputError
from knought.fitting.condition_draws import condition_sampler, has_condition_errors
from knought.fitting.open_fit import OpenFit
from knought.fitting.surface_fit import SurfaceFit
from knought.given import given_count
from knought.laws.activation import activation_rows
from knought.measurement.shared_errors import unit_draws
from knought.numerics.seeds import DEFAULT_SEED, generator

if TYPE_CHECKING:
    from collections.abc import Callable, Iterator, Mapping

    from knought.chemistry.quantities import Quantity
    from knought.fitting.found import Found
    from knought.laws.surface import Rows

__all__ = ["Drawn", "MonteCarlo", "monte_carlo"]

_BLOCK = 10_000
_FEWEST_BLOCKS = 10

#: More would take days.
_MOST_ASKED = 10**10

#: Adaptive drawing stops at this many draws at the latest.
_MOST_DRAWS = 5_000_000


@dataclass(frozen=True, eq=False)
class Drawn:
    """Draws of one quantity.

    Attributes
    ----------
    quantity
        Of what.
    values : (m,) ndarray
        The draws, in the quantity's unit.
    linear_uncertainty, linear_interval
        What linear propagation, or the mixture, gives for the same.
    """

    quantity: Quantity
    values: FloatArray
    linear_uncertainty: float
    linear_interval: tuple[float, float]

    @property
    def mean(self) -> float:
        """Mean of the draws."""
        return float(self.values.mean())

    @property
    def standard_uncertainty(self) -> float:
        """Standard deviation of the draws."""
        return float(self.values.std(ddof=1))

    def interval(self, coverage: float = 0.95) -> tuple[float, float]:
        """Return the probabilistically symmetric interval (JCGM 101, 7.7.2)."""
        tail = (1 - coverage) / 2
        low, high = np.quantile(self.values, [tail, 1 - tail])
        return float(low), float(high)

    def shortest_interval(self, coverage: float = 0.95) -> tuple[float, float]:
        """Return the shortest interval that holds `coverage` of the draws (7.7.4)."""
        ordered = np.sort(self.values)
        inside = int(np.ceil(coverage * len(ordered)))
        widths = ordered[inside - 1 :] - ordered[: len(ordered) - inside + 1]
        start = int(np.argmin(widths))
        return float(ordered[start]), float(ordered[start + inside - 1])

    def tolerance(self, digits: int = 2) -> float:
        """Return the numerical tolerance δ of u to `digits` significant digits (7.9.2)."""
        u = self.standard_uncertainty
        if u == 0:
            return 0.0
        return float(0.5 * 10.0 ** (np.floor(np.log10(u)) - digits + 1))

    def validates_linear(self, digits: int = 1) -> bool:
        """Return whether both ends of the linear interval agree within δ (JCGM 101, 8.1)."""
        ends = zip(self.interval(), self.linear_interval, strict=True)
        return all(abs(one - other) <= self.tolerance(digits) for one, other in ends)


@dataclass(frozen=True, eq=False)
class MonteCarlo:
    """Draws of every parameter at T_ref and I → 0.

    Attributes
    ----------
    seed, draws
        Of the generator, and how many.
    converged
        Whether adaptive drawing met its tolerance; True for a fixed number.
    parameters
        Quantity name to its draws.
    refitted
        Whether each draw was refitted at temperatures and ionic strengths of its own.
    scatter_beside_known
        Whether a named law's scatter stands beside errors of known size.
    """

    seed: int
    draws: int
    converged: bool
    parameters: Mapping[str, Drawn]
    refitted: bool = False
    scatter_beside_known: bool = False

    @property
    def how(self) -> str:
        """How the draws were made, as sentences."""
        made = (
            "Each draw was refitted at temperatures and ionic strengths drawn with their errors."
            if self.refitted
            else "Temperatures and ionic strengths have no errors here, so that the answer is "
            "linear in every error and no draw was refitted."
        )
        if not self.scatter_beside_known:
            return made
        return (
            f"{made} The size of the scatter is drawn as JCGM 101, 6.4.9, has it; beside errors of "
            "known size its intervals are longer than those of the closed form, which hold 95 %."
        )


def monte_carlo(
    found: Found,
    draws: int | None = None,
    *,
    seed: int = DEFAULT_SEED,
    progress: Callable[[int], None] | None = None,
) -> MonteCarlo:
    """Propagate every distribution by Monte Carlo.

    Parameters
    ----------
    found
        The fit of a named law or of the open law.
    draws
        How many; adaptively until stable (JCGM 101, 7.9, two digits of u) if not given.
    seed
        Of the generator.
    progress
        Told after each block how many draws are done.

    Returns
    -------
    MonteCarlo

    Raises
    ------
    InputError
        If fewer than two draws are asked for, or the fit is of neither kind.
    """
    if draws is not None and given_count(draws, "the number of draws", -1, _MOST_ASKED) < 2:
        raise InputError(f"{draws} draws say nothing", "ask for 10 000 or more")
    given_count(seed, "the seed", 0, 2**128)
    if not isinstance(found, OpenFit | SurfaceFit):
        raise InputError("this fit has no Monte Carlo", "ask a fit of a named or the open law")
    refitted = has_condition_errors(found.observations)
    sampler = condition_sampler(found) if refitted else _linear_sampler(found)
    rows = activation_rows(found.surface, found.reference_temperature)
    theta: list[FloatArray] = []
    stability = _Stability()
    converged, done = draws is not None, 0
    for size, block in _blocks(draws):
        theta.append(sampler(generator(seed, block), size))
        done += size
        if progress is not None:
            progress(done)
        if draws is None and stability.reached_with(theta[-1]):
            converged = True
            break
    return MonteCarlo(
        seed,
        done,
        converged,
        _drawn(found, np.concatenate(theta), rows),
        refitted=refitted,
        scatter_beside_known=found.distribution.known is not None,
    )


def _blocks(draws: int | None) -> Iterator[tuple[int, int]]:
    total = _MOST_DRAWS if draws is None else draws
    for block, start in enumerate(range(0, total, _BLOCK)):
        yield min(_BLOCK, total - start), block


def _linear_sampler(
    found: OpenFit | SurfaceFit,
) -> Callable[[np.random.Generator, int], FloatArray]:
    """Return a function that draws the linear parameters, shape ``(size, p)``, through the gain."""
    n = found.observations.runs
    shared = found.observations.shared
    if isinstance(found, OpenFit):
        gains = found.solver.gains()
        gains = gains.reshape(-1, *gains.shape[-2:])[found.kept]
        means, weights = found.distribution.means, found.distribution.weights
    else:
        gains = found.headline_solution.gain[None]
        means, weights = found.distribution.means[:1], np.ones(1)
    nu = found.scatter.headline_degrees_of_freedom
    mixed = found.observations.u_given and any(
        error.distribution != "normal" for error in found.observations.own
    )
    named_scatter = isinstance(found, SurfaceFit) and np.isfinite(nu)

    def draw(random: np.random.Generator, size: int) -> FloatArray:
        errors = random.standard_normal((size, gains.shape[-1]))
        if mixed:
            errors[:, :n] = _own_draws(found, random, size)
        for j, error in enumerate(shared):
            errors[:, n + j] = unit_draws(error, random, size)
        if named_scatter:
            # The size of the scatter is itself drawn (6.4.9): its u is known to nu degrees.
            errors[:, :n] *= np.sqrt(nu / random.chisquare(nu, size))[:, None]
        if len(weights) == 1:
            return np.asarray(means[0] + errors @ gains[0].T)
        theta = np.empty((size, gains.shape[1]))
        cell = np.sort(random.choice(len(weights), size, p=weights))
        edges = np.searchsorted(cell, np.arange(len(weights) + 1))
        for c in np.flatnonzero(np.diff(edges)):
            part = slice(edges[c], edges[c + 1])
            theta[part] = means[c] + errors[part] @ gains[c].T
        return theta

    return draw


def _own_draws(found: OpenFit | SurfaceFit, random: np.random.Generator, size: int) -> FloatArray:
    """Draw each run's own errors in units of their joint u, each from its own distribution."""
    seen, errors = found.observations, found.errors
    share = np.sqrt(errors.variances / errors.variances.sum(axis=0))
    plain = len(errors.sources) - len(seen.own)
    drawn = np.einsum("sn,smn->mn", share[:plain], random.standard_normal((plain, size, seen.runs)))
    for error, part in zip(seen.own, share[plain:], strict=True):
        drawn += part * unit_draws(error, random, size * seen.runs).reshape(size, seen.runs)
    return np.asarray(drawn)


class _Stability:
    """JCGM 101, 7.9.4: twice the standard deviation of block averages is below the tolerance."""

    def __init__(self) -> None:
        self._blocks: list[FloatArray] = []

    def reached_with(self, block: FloatArray) -> bool:
        """Add a block ``(size, p)`` of draws, and return whether they are stable now."""
        spread = block.std(axis=0, ddof=1)
        ends = np.quantile(block, [0.025, 0.975], axis=0)
        self._blocks.append(np.stack([block.mean(axis=0), spread, *ends]))
        count = len(self._blocks)
        if count < _FEWEST_BLOCKS:
            return False
        found = np.array(self._blocks)
        u = np.sqrt(np.mean(found[:, 1] ** 2, axis=0))
        tolerance = 0.5 * 10.0 ** (np.floor(np.log10(np.maximum(u, 1e-300))) - 1)
        return bool(np.all(2 * found.std(axis=0, ddof=1) / np.sqrt(count) <= tolerance))


def _drawn(found: Found, theta: FloatArray, rows: Mapping[str, Rows]) -> dict[str, Drawn]:
    made: dict[str, Drawn] = {}
    names = found.distribution.names
    for name, estimate in found.parameters.items():
        source = "ln_rate_constant" if name == "rate_constant" else name
        if source in rows:
            # At I → 0 no row depends on the cell of a stacked law.
            row = rows[source]
            offset = row.offset.reshape(-1, 1)[0]
            values = offset + theta @ row.rows.reshape(-1, row.rows.shape[-1])[0]
        elif source in names:
            values = theta[:, names.index(source)]
        else:
            continue
        if estimate.logarithmic:
            values = np.exp(values)
        low, high = estimate.interval(0.95)
        made[name] = Drawn(
            estimate.quantity,
            frozen(values),
            float(estimate.standard_uncertainty),
            (float(low), float(high)),
        )
    return made
