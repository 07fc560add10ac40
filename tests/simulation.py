"""Simulated studies with a known truth, written out independently of the package's own laws."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from fractions import Fraction

import numpy as np

from knought.arrays import FloatArray, frozen
from knought.chemistry.debye_huckel import debye_huckel
from knought.chemistry.water import density
from knought.fitting.observations import Observations

BOLTZMANN, PLANCK, GAS_CONSTANT = 1.380649e-23, 6.62607015e-34, 8.31446261815324

#: lg k/k° per condition: (T, I, charge product) -> array.
Truth = Callable[[FloatArray, FloatArray, float], FloatArray]


def extended(size: float, beta: float = 0.0) -> Truth:
    """Extended Debye-Hückel law with å = `size` Å."""

    def lg(T: FloatArray, I: FloatArray, z: float) -> FloatArray:
        water, root = debye_huckel(T), np.sqrt(I)
        return 2 * z * water.A * root / (1 + water.B * size * 1e-10 * root) + beta * I

    return lg


def guntelberg(T: FloatArray, I: FloatArray, z: float) -> FloatArray:
    """Güntelberg's law."""
    root = np.sqrt(I)
    return np.asarray(2 * z * debye_huckel(T).A * root / (1 + root))


def davies(coefficient: float) -> Truth:
    """Davies's law."""

    def lg(T: FloatArray, I: FloatArray, z: float) -> FloatArray:
        root = np.sqrt(I)
        return np.asarray(2 * z * debye_huckel(T).A * (root / (1 + root) - coefficient * I))

    return lg


def sit(beta: float) -> Truth:
    """Specific ion interaction theory, on molality."""

    def lg(T: FloatArray, I: FloatArray, z: float) -> FloatArray:
        m = I / (density(T) / 1000)
        root = np.sqrt(m)
        return np.asarray(2 * z * debye_huckel(T, "molal").A * root / (1 + 1.5 * root) + beta * m)

    return lg


def pitzer(T: FloatArray, I: FloatArray, z: float) -> FloatArray:
    """The Debye-Hückel part of Pitzer's equation, on molality."""
    root = np.sqrt(I / (density(T) / 1000))
    f = root / (1 + 1.2 * root) + 2 / 1.2 * np.log1p(1.2 * root)
    return np.asarray(2 * z * debye_huckel(T, "molal").A * f / 3)


TRUTHS: dict[str, Truth] = {
    "extended, 3 Å": extended(3),
    "extended, 5 Å": extended(5),
    "extended, 9 Å": extended(9),
    "Güntelberg": guntelberg,
    "Davies 0.2": davies(0.2),
    "Davies 0.3": davies(0.3),
    "SIT, β = +0.4": sit(0.4),
    "SIT, β = -0.3": sit(-0.3),
    "Pitzer form": pitzer,
}

RANGES = ((0.005, 0.1), (0.005, 0.2), (0.02, 0.5))

CHARGE_PRODUCTS = (0, 1, -1, 2, -2, 4, -4)


@dataclass(frozen=True, eq=False)
class Studies:
    """Simulated studies of one truth."""

    observations: Observations  # the first study, and the conditions of all
    ln_k: FloatArray  # (m, n)
    true_ln_k: float  # at 298.15 K and I = 0
    charge_product: float


def simulate(
    truth: Truth,
    charge_product: float,
    strengths: FloatArray,
    *,
    studies: int,
    seed: int,
    temperatures: tuple[float, ...] = (288.15, 298.15, 308.15),
    u: float = 0.02,
    enthalpy: float = 50_000.0,
    entropy: float = -60.0,
) -> Studies:
    """Draw studies with errors of relative size `u` at every T and I."""
    T, I = (grid.ravel() for grid in np.meshgrid(temperatures, strengths, indexing="ij"))
    eyring = np.log(BOLTZMANN * T / PLANCK) + entropy / GAS_CONSTANT - enthalpy / GAS_CONSTANT / T
    exact = eyring + np.log(10.0) * truth(T, I, charge_product)
    random = np.random.default_rng(seed)
    ln_k = exact + u * random.standard_normal((studies, len(T)))
    at = 298.15
    true = np.log(BOLTZMANN * at / PLANCK) + entropy / GAS_CONSTANT - enthalpy / GAS_CONSTANT / at
    seen = Observations(
        frozen(ln_k[0]),
        frozen(np.full(len(T), u)),
        frozen(T),
        frozen(I),
        None,
        None,
        u_given=True,
        order=Fraction(2),
    )
    return Studies(seen, ln_k, float(true), charge_product)
