"""Concentrations at equilibrium, and the ionic strength that belongs to them.

The idea first: at a given ionic strength the constants are numbers, and the equilibrium is the
minimum of a convex function, the Gibbs energy of an ideal mixture. Its dual,

    D(λ) = b·λ - Σ_j c_j,     ln c_j = Σ_i L_ij λ_i + constants,

with the conserved totals b = L c, is concave and smooth in λ = ln c of a basis of species, so that
Newton's method with a line search finds the one solution from any start (the log-concentrations
keep everything positive, from trace to concentrated). The basis is chosen anew as the most
abundant species, which keeps the totals free of cancellation and the balances at rounding.

Around it stands one bracketed root: I = ½ Σ c z² of the composition that I itself gives.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from knought.chemistry.constants import LN10
from knought.errors import InputError

if TYPE_CHECKING:
    from collections.abc import Callable, Mapping, Sequence

    from knought.arrays import FloatArray, IndexArray
    from knought.chemistry.activity import ActivityForm
    from knought.chemistry.equilibria import Equilibrium
    from knought.chemistry.species import Species

__all__ = ["Balanced", "solve_equilibria"]

_MOST_STEPS, _LONGEST_STEP = 400, 8.0

#: Worst relative residual of a balance that is accepted.
BALANCE = 1e-12

#: No aqueous solution has more.
_HIGHEST_IONIC_STRENGTH = 60.0


@dataclass(frozen=True, eq=False)
class Balanced:
    """A composition at equilibrium.

    Attributes
    ----------
    concentrations
        mol/L by species.
    ionic_strength
        mol/L, of these concentrations.
    mass_residual
        Largest residual of a conserved total, relative to the concentrations in it.
    charge_residual
        Σ c z before less after equilibrium, relative to Σ c |z|.
    """

    concentrations: Mapping[Species, float]
    ionic_strength: float
    mass_residual: float
    charge_residual: float


def solve_equilibria(
    composition: Mapping[Species, float],
    equilibria: Sequence[Equilibrium],
    T: float,
    form: ActivityForm,
) -> Balanced:
    """Solve all equilibria together with the activity law.

    Parameters
    ----------
    composition
        Concentrations in mol/L before anything reacts.
    equilibria
        Independent equilibria. Those of which nothing is in the solution are left out.
    T
        Temperature in K, 0-100 °C.
    form
        The activity law.

    Returns
    -------
    Balanced

    Raises
    ------
    InputError
        If the equilibria depend on each other, T is outside, or no solution is found.
    """
    system = _System(composition, equilibria)
    if not system.reactions:
        I = _ionic_strength(system.start, system.charges)
        return Balanced(dict(zip(system.species, system.start.tolist(), strict=True)), I, 0.0, 0.0)

    at_zero = np.array([each.ln_K(T, 0.0, form) for each in system.reactions])
    slopes = LN10 * np.array([each.charge_term for each in system.reactions])

    def excess(I: float) -> float:
        constants = at_zero + slopes * float(form.screening(I, T))
        return _ionic_strength(system.solve(constants), system.charges) - I

    I = _root(excess, max(_ionic_strength(system.start, system.charges), 1e-9))
    excess(I)
    c = np.exp(system.ln_c)
    mass, charge = system.residuals(c)
    return Balanced(
        dict(zip(system.species, c.tolist(), strict=True)),
        _ionic_strength(c, system.charges),
        mass,
        charge,
    )


def _ionic_strength(c: FloatArray, charges: FloatArray) -> float:
    return float(0.5 * c @ charges**2)


class _System:
    """Species, reactions and conserved totals of one solution."""

    def __init__(
        self, composition: Mapping[Species, float], equilibria: Sequence[Equilibrium]
    ) -> None:
        present = {species for species, amount in composition.items() if amount > 0}
        self.reactions = _possible(present, equilibria)
        named = dict.fromkeys(composition)
        for reaction in self.reactions:
            named |= dict.fromkeys(reaction.stoichiometry)
        taking_part = {s for r in self.reactions for s in r.stoichiometry}
        self.species = tuple(s for s in named if s in present or s in taking_part)
        self.charges = np.array([s.charge for s in self.species], dtype=float)
        self.start = np.array([composition.get(s, 0.0) for s in self.species])
        place = {species: i for i, species in enumerate(self.species)}
        self.nu = np.zeros((len(self.reactions), len(self.species)))
        for row, reaction in enumerate(self.reactions):
            for species, number in reaction.stoichiometry.items():
                self.nu[row, place[species]] = number
        if self.reactions and np.linalg.matrix_rank(self.nu) < len(self.reactions):
            raise InputError(
                "the equilibria depend on each other: one follows from the rest",
                "leave out the equilibrium that the others add up to",
            )
        self.ln_c = np.log(np.maximum(self.start, 1e-3 * max(self.start.max(initial=0.0), 1e-7)))

    def solve(self, constants: FloatArray) -> FloatArray:
        """Return c for the given ln K, starting from the last solution.

        Raises
        ------
        InputError
            If the steps do not converge.
        """
        ln_c, best = self.ln_c, np.inf
        order: tuple[int, ...] = ()
        for _ in range(_MOST_STEPS):
            wanted = tuple(np.argsort(-ln_c, kind="stable").tolist())
            if wanted != order:
                order = wanted
                basis, dependent, coupling, shift = self._basis(order, constants)
                totals = self.start[basis] + coupling.T @ self.start[dependent]
            try:
                with np.errstate(over="ignore", invalid="ignore"):  # told below
                    ln_c, worst = _step(ln_c, basis, dependent, coupling, shift, totals)
            except np.linalg.LinAlgError:
                worst = np.nan
            if not (np.isfinite(worst) and np.isfinite(ln_c).all()):
                raise InputError(
                    "the equilibria were not solved: a concentration ran out of all bounds",
                    "check constants and concentrations; the activity law may be far out of its "
                    "domain",
                )
            # Within the goal, go on while rounding still lets it improve.
            if worst < BALANCE and worst >= 0.3 * best:
                self.ln_c = ln_c
                return np.asarray(np.exp(ln_c))
            best = min(best, worst)
        raise InputError(
            f"the equilibria were not solved: a balance is still {best:.1e} off",
            "check the constants and concentrations for slips of many powers of ten",
        )

    def _basis(
        self, order: tuple[int, ...], constants: FloatArray
    ) -> tuple[IndexArray, IndexArray, FloatArray, FloatArray]:
        """Choose the scarcest species that the reactions can form from the others.

        Returns places of the basis and of the rest, and M and s with
        ln c_rest = M ln c_basis + s.
        """
        chosen: list[int] = []
        for place in reversed(order):
            if len(chosen) == len(self.nu):
                break
            trial = self.nu[:, [*chosen, place]]
            if np.linalg.matrix_rank(trial) > len(chosen):
                chosen.append(place)
        dependent = np.array(chosen, dtype=np.intp)
        basis = np.array([i for i in order if i not in chosen], dtype=np.intp)
        right = np.column_stack([-self.nu[:, basis], constants])
        solved = np.linalg.solve(self.nu[:, dependent], right)
        # Stoichiometric numbers are small fractions: rounding them off keeps the balances exact.
        coupling = np.round(solved[:, :-1] * 5040) / 5040
        return basis, dependent, coupling, np.asarray(solved[:, -1])

    def residuals(self, c: FloatArray) -> tuple[float, float]:
        """Return the worst relative residual of a conserved total, and that of charge."""
        order = tuple(np.argsort(-c, kind="stable").tolist())
        basis, dependent, coupling, _ = self._basis(order, np.zeros(len(self.nu)))
        # Total by total: of strong acid and base that neutralise each other, next to nothing is
        # left, and c - start would round at the size of what was mixed.
        totals = self.start[basis] + coupling.T @ self.start[dependent]
        lost = c[basis] + coupling.T @ c[dependent] - totals
        there = c[basis] + np.abs(coupling).T @ c[dependent]
        most = max(float(np.abs(self.charges) @ c), 1e-300)
        charge = abs(float(self.charges @ (c - self.start))) / most
        return float(np.max(np.abs(lost) / there)), charge


def _step(
    ln_c: FloatArray,
    basis: IndexArray,
    dependent: IndexArray,
    coupling: FloatArray,
    shift: FloatArray,
    totals: FloatArray,
) -> tuple[FloatArray, float]:
    """Take one Newton step of the dual; return ln c and the worst relative residual."""
    base = ln_c[basis]

    def dual(at: FloatArray) -> float:
        return float(totals @ at - np.exp(at).sum() - np.exp(coupling @ at + shift).sum())

    c, rest = np.exp(base), np.exp(coupling @ base + shift)
    gradient = totals - c - coupling.T @ rest
    hessian = np.diag(c) + coupling.T @ (rest[:, None] * coupling)
    scale = 1.0 / np.sqrt(np.diag(hessian))
    step = scale * np.linalg.solve(hessian * scale[:, None] * scale, gradient * scale)
    step *= min(1.0, _LONGEST_STEP / max(float(np.max(np.abs(step))), 1e-300))
    gain = float(gradient @ step)
    before, size = dual(base), 1.0
    noise = 1e-13 * float(np.abs(totals) @ np.abs(base) + c.sum())
    while dual(base + size * step) < before + 1e-4 * size * gain - noise and size > 1e-6:
        size /= 2
    base = base + size * step
    c, rest = np.exp(base), np.exp(coupling @ base + shift)
    lost = np.abs(totals - c - coupling.T @ rest)
    worst = float(np.max(lost / (c + np.abs(coupling).T @ rest)))
    moved = np.empty(len(base) + len(dependent))
    moved[basis], moved[dependent] = base, coupling @ base + shift
    return moved, worst


def _possible(present: set[Species], equilibria: Sequence[Equilibrium]) -> tuple[Equilibrium, ...]:
    """Return the equilibria of which one whole side can be in the solution."""
    reached = set(present)
    found: dict[int, Equilibrium] = {}
    grown = True
    while grown:
        grown = False
        for index, each in enumerate(equilibria):
            left = {s for s, number in each.stoichiometry.items() if number < 0}
            right = {s for s, number in each.stoichiometry.items() if number > 0}
            if index not in found and (left <= reached or right <= reached):
                found[index] = each
                reached |= left | right
                grown = True
    return tuple(found[index] for index in sorted(found))


def _root(excess: Callable[[float], float], start: float) -> float:
    """Find I with I(composition at I) = I between zero and a bracket grown from `start`.

    Raises
    ------
    InputError
        If no ionic strength that a solution can have fits.
    """
    from scipy.optimize import brentq

    high = start
    while excess(high) > 0:
        high *= 2
        if high > _HIGHEST_IONIC_STRENGTH:
            raise InputError(
                "no ionic strength up to "
                f"{_HIGHEST_IONIC_STRENGTH:g} mol/L agrees with its own composition",
                "check concentrations and constants; the activity law may be far out of its domain",
            )
    return float(brentq(excess, 0.0, high, xtol=1e-18, rtol=1e-14, maxiter=200))
