"""Small studies with a known truth that the tests of the discussion share."""

from __future__ import annotations

import math
from typing import TYPE_CHECKING

import numpy as np

from knought.measurement.table import RateTable
from tests.simulation import Truth, guntelberg

if TYPE_CHECKING:
    from knought.arrays import FloatArray

GAS_CONSTANT = 8.31446261815324

TEMPERATURES = (288.15, 298.15, 308.15, 318.15)
STRENGTHS = (0.005, 0.02, 0.05, 0.1)

#: ln A and E_a (J/mol) at I → 0 of the study.
LN_A, ENERGY = math.log(1e10), 60_000.0


def arrhenius(T: FloatArray | float) -> FloatArray:
    """ln k at I → 0."""
    return np.asarray(LN_A - ENERGY / (GAS_CONSTANT * np.asarray(T, dtype=float)))


def study(
    charge_product: float = 2.0,
    *,
    truth: Truth = guntelberg,
    u: float = 0.02,
    noise: float = 0.0,
    seed: int = 0,
    temperatures: tuple[float, ...] = TEMPERATURES,
    strengths: tuple[float, ...] = STRENGTHS,
    energy: float = ENERGY,
    ln_a: float = LN_A,
    stated: bool = True,
) -> RateTable:
    """A table of order 2; `noise` in units of `u`."""
    T, I = (each.ravel() for each in np.meshgrid(temperatures, strengths, indexing="ij"))
    ln_k = ln_a - energy / (GAS_CONSTANT * T) + np.log(10.0) * truth(T, I, charge_product)
    ln_k = ln_k + noise * u * np.random.default_rng(seed).standard_normal(len(T))
    k = np.exp(ln_k)
    return RateTable.from_arrays(T=T, k=k, I=I, u_k=u * k if stated else None, unit="L mol^-1 s^-1")
