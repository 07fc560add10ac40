"""The surface ln k(T, I): a temperature law and a salt law together, linear in its parameters.

    ln k = offset(T) + Σ_j θ_j column_j(T, I)

One object gives the design matrix and its exact derivatives in T and I, from which every derived
quantity follows: activation parameters are slopes of this surface.
"""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from typing import TYPE_CHECKING

import numpy as np

from knought.chemistry.constants import COLDEST, HOTTEST
from knought.given import given_number

if TYPE_CHECKING:
    from collections.abc import Sequence

    from numpy.typing import ArrayLike

    from knought.arrays import FloatArray
    from knought.laws.salt import SaltLaw
    from knought.laws.temperature import TemperatureLaw

__all__ = ["Rows", "Surface"]


@dataclass(frozen=True, eq=False)
class Rows:
    """An affine function of the parameters at some conditions: offset + rows · θ.

    Attributes
    ----------
    offset : (..., n) ndarray
    rows : (..., n, p) ndarray
        Leading axes, if any, run over the cells of a stacked salt law.
    """

    offset: FloatArray
    rows: FloatArray

    def __add__(self, other: Rows) -> Rows:
        return Rows(self.offset + other.offset, self.rows + other.rows)

    def __sub__(self, other: Rows) -> Rows:
        return self + other.times(-1.0)

    def times(self, factor: FloatArray | float) -> Rows:
        """Multiply by a number, or by one number for each condition."""
        factor = np.asarray(factor, dtype=float)
        return Rows(self.offset * factor, self.rows * factor[..., None])

    def plus(self, constant: FloatArray | float) -> Rows:
        """Add a known number, or one for each condition."""
        return Rows(self.offset + constant, self.rows)

    @staticmethod
    def stacked(parts: Sequence[Rows]) -> Rows:
        """Join functions, some of which may carry the cells' axis, along the conditions' axis."""
        cells = np.broadcast_shapes(
            *(part.offset.shape[:-1] or part.rows.shape[:-2] for part in parts)
        )
        return Rows(
            np.concatenate(
                [np.broadcast_to(part.offset, (*cells, part.offset.shape[-1])) for part in parts],
                axis=-1,
            ),
            np.concatenate(
                [np.broadcast_to(part.rows, (*cells, *part.rows.shape[-2:])) for part in parts],
                axis=-2,
            ),
        )


@dataclass(frozen=True)
class Surface:
    """A temperature law and a salt law together.

    Parameters
    ----------
    temperature_law, salt_law
        The two laws.
    reference_temperature
        T_ref in K, at which the parameters hold.
    order
        Overall order n of the reaction; k is in (L/mol)^(n-1) s^-1.
    standard_concentration
        c° in mol/L, to which ΔG‡ and ΔS‡ refer.
    """

    temperature_law: TemperatureLaw
    salt_law: SaltLaw
    reference_temperature: float
    order: Fraction = Fraction(1)
    standard_concentration: float = 1.0

    def __post_init__(self) -> None:
        for name, low, high in (
            ("reference_temperature", COLDEST, HOTTEST),
            ("standard_concentration", 1e-30, 1e30),
        ):
            value = given_number(
                getattr(self, name),
                f"the {name.replace('_', ' ')} (above 0 K, or mol/L)",
                low,
                high,
            )
            object.__setattr__(self, name, value)

    @property
    def parameters(self) -> tuple[str, ...]:
        """Names of the linear parameters, in the order of the design's columns."""
        return self.temperature_law.parameters + self.salt_law.parameters

    def ln_k(self, T: ArrayLike, I: ArrayLike = 0.0) -> Rows:
        """Return ln k at `T` (K) and `I` (mol/L) as an affine function of the parameters.

        Parameters
        ----------
        T, I
            Conditions, broadcast against each other to shape ``(n,)``.

        Returns
        -------
        Rows
            Offset ``(n,)`` and design matrix ``(n, p)``; ``(c, n, p)`` for a stacked salt law.
        """
        T, I = _conditions(T, I)
        law = self.temperature_law
        return _rows(
            law.offset(T, self.reference_temperature) + self.salt_law.offset(T, I),
            law.columns(T, self.reference_temperature) + self.salt_law.columns(T, I),
        )

    def ln_k_dT(self, T: ArrayLike, I: ArrayLike = 0.0) -> Rows:
        """Return ∂ ln k/∂T at constant molarity, in K^-1; arguments as for :meth:`ln_k`."""
        T, I = _conditions(T, I)
        law = self.temperature_law
        return _rows(
            law.offset_dT(T, self.reference_temperature) + self.salt_law.offset_dT(T, I),
            law.columns_dT(T, self.reference_temperature) + self.salt_law.columns_dT(T, I),
        )

    def ln_k_dI(self, T: ArrayLike, I: ArrayLike) -> Rows:
        """Return ∂ ln k/∂I in L/mol; arguments as for :meth:`ln_k`, I above zero."""
        T, I = _conditions(T, I)
        zeros = [np.zeros_like(T) for _ in self.temperature_law.parameters]
        return _rows(self.salt_law.offset_dI(T, I), zeros + self.salt_law.columns_dI(T, I))


def _conditions(T: ArrayLike, I: ArrayLike) -> tuple[FloatArray, FloatArray]:
    T, I = np.broadcast_arrays(np.asarray(T, dtype=float), np.asarray(I, dtype=float))
    return np.atleast_1d(T).copy(), np.atleast_1d(I).copy()


def _rows(offset: FloatArray, columns: list[FloatArray]) -> Rows:
    """Stack columns that may or may not carry the cells' axis."""
    return Rows(offset, np.stack(np.broadcast_arrays(*columns), axis=-1))
