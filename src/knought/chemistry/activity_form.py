"""What every activity form offers: f(I) with its slopes, and the screening A f that laws need."""

from __future__ import annotations

from abc import ABC, abstractmethod
from dataclasses import dataclass
from typing import TYPE_CHECKING, ClassVar

import numpy as np

from knought.chemistry import water
from knought.chemistry.debye_huckel import Basis, DebyeHuckel, debye_huckel
from knought.errors import InputError

if TYPE_CHECKING:
    from numpy.typing import ArrayLike

    from knought.arrays import FloatArray

__all__ = [
    "ActivityForm",
    "Domain",
    "Shape",
    "half_slope",
    "rational",
    "require_ion_size",
    "screened",
]

#: kg/m³ in kg/L.
_PER_LITRE = 1e-3

#: Ions, and the open law's widest prior, stay below 100 Å (in m).
_LARGEST_ION = 1e-8


@dataclass(frozen=True)
class Domain:
    """Up to where a form is customarily used; going beyond is warned of, not refused.

    Attributes
    ----------
    upper
        Highest ionic strength, in mol/L or mol/kg by the basis of the form.
    source
        Whose custom it is.
    """

    upper: float
    source: str


@dataclass(frozen=True, eq=False)
class Shape:
    """f at given I of the form's own basis, with its slopes in I and in B(T)."""

    f: FloatArray
    f_I: FloatArray
    f_B: FloatArray | float = 0.0


@dataclass(frozen=True, eq=False)
class _At:
    """Conditions on the form's own basis: I, its slopes, and the coefficients of water."""

    I: FloatArray
    I_c: FloatArray | float  # slope of I (own basis) with molarity
    I_T: FloatArray | float  # slope of I (own basis) with T at constant molarity
    water: DebyeHuckel


class ActivityForm(ABC):
    """A shape of the activity coefficient.

    Attributes
    ----------
    name, words
        Its name in records, and its name for people.
    basis
        ``"molar"`` or ``"molal"``.
    domain
        Up to where it is customarily used.
    """

    name: ClassVar[str]
    words: ClassVar[str]
    basis: ClassVar[Basis] = "molar"
    domain: ClassVar[Domain]

    @abstractmethod
    def _shape(self, I: FloatArray, B: FloatArray) -> Shape:
        """Return f and its slopes at I of the form's own basis."""

    def value(self, I: ArrayLike, T: ArrayLike) -> FloatArray:
        """Return f, on the form's own basis.

        Parameters
        ----------
        I, T
            Ionic strengths in mol/L and temperatures in K, of shapes that broadcast.

        Raises
        ------
        InputError
            If I is negative, or T outside 0-100 °C.
        """
        at = self._at(I, T)
        return np.asarray(self._shape(at.I, at.water.B).f)

    def d_dI(self, I: ArrayLike, T: ArrayLike) -> FloatArray:
        """Return ∂f/∂I at constant T, in L/mol; infinite at I = 0. Arguments as for value."""
        at = self._at(I, T)
        return np.asarray(self._shape(at.I, at.water.B).f_I * at.I_c)

    def d_dT(self, I: ArrayLike, T: ArrayLike) -> FloatArray:
        """Return ∂f/∂T at constant molarity, in K^-1. Arguments as for value."""
        at = self._at(I, T)
        return self._slope_T(at, self._shape(at.I, at.water.B))

    def screening(self, I: ArrayLike, T: ArrayLike) -> FloatArray:
        """Return A(T) f(I; T): what log10 γ is for a unit of -z². Arguments as for value."""
        at = self._at(I, T)
        return np.asarray(at.water.A * self._shape(at.I, at.water.B).f)

    def screening_dI(self, I: ArrayLike, T: ArrayLike) -> FloatArray:
        """Return ∂(A f)/∂I at constant T, in L/mol; infinite at I = 0."""
        at = self._at(I, T)
        return np.asarray(at.water.A * self._shape(at.I, at.water.B).f_I * at.I_c)

    def screening_dT(self, I: ArrayLike, T: ArrayLike) -> FloatArray:
        """Return ∂(A f)/∂T at constant molarity, in K^-1."""
        at = self._at(I, T)
        shape = self._shape(at.I, at.water.B)
        return np.asarray(at.water.dA_dT * shape.f + at.water.A * self._slope_T(at, shape))

    def interaction_abscissa(self, I: ArrayLike, T: ArrayLike) -> FloatArray:
        """Return what an interaction coefficient multiplies: I in mol/L, or in mol/kg."""
        return _own_basis(self.basis, I, T)[0]

    def interaction_abscissa_dI(self, I: ArrayLike, T: ArrayLike) -> FloatArray:
        """Return its slope with molarity."""
        I, I_c, _ = _own_basis(self.basis, I, T)
        return np.asarray(np.broadcast_to(I_c, I.shape))

    def interaction_abscissa_dT(self, I: ArrayLike, T: ArrayLike) -> FloatArray:
        """Return its slope with T at constant molarity, per K."""
        I, _, I_T = _own_basis(self.basis, I, T)
        return np.asarray(np.broadcast_to(I_T, I.shape))

    def _at(self, I: ArrayLike, T: ArrayLike) -> _At:
        return _At(*_own_basis(self.basis, I, T), debye_huckel(T, self.basis))

    def _slope_T(self, at: _At, shape: Shape) -> FloatArray:
        through_B = shape.f_B * at.water.dB_dT
        if self.basis == "molar":
            return np.asarray(through_B + np.zeros_like(shape.f))
        # At I = 0 molality does not move with T: the slope there is 0, not 0 times infinity.
        with np.errstate(invalid="ignore"):
            through_I = np.where(at.I > 0, shape.f_I * at.I_T, 0.0)
        return np.asarray(through_B + through_I)


def _own_basis(
    basis: Basis, I: ArrayLike, T: ArrayLike
) -> tuple[FloatArray, FloatArray | float, FloatArray | float]:
    """Return I on the basis of a form, with its slopes in molarity and in T.

    m = c/ρ with water's density in kg/L: for dilute solutions, as in the conversion of SIT.

    Raises
    ------
    InputError
        If I is negative or not finite.
    """
    I, T = np.asarray(I, dtype=float), np.asarray(T, dtype=float)
    wrong = ~(np.isfinite(I) & (I >= 0))
    if np.any(wrong):
        raise InputError(
            f"an ionic strength is {float(I[wrong].flat[0]):g} mol/L",
            "ionic strengths are finite and at least zero",
        )
    if basis == "molar":
        return np.array(np.broadcast_arrays(I, T)[0]), 1.0, 0.0
    rho, rho_dT = (_PER_LITRE * each for each in water.density_kernel(water.require_liquid(T)))
    return np.asarray(I / rho), 1.0 / rho, -I * rho_dT / rho**2


def half_slope(root: FloatArray) -> FloatArray:
    """d√I/dI = 1/(2√I); infinite at zero."""
    with np.errstate(divide="ignore"):
        return np.asarray(0.5 / root)


def rational(I: FloatArray, q: FloatArray | float) -> tuple[FloatArray, FloatArray, FloatArray]:
    """√I/(1 + q √I) with its slopes in I and q."""
    root = np.sqrt(I)
    below = 1 + q * root
    f = root / below
    return f, half_slope(root) / below**2, -(f**2)


def screened(I: FloatArray, B: FloatArray, size: FloatArray | float) -> Shape:
    """√I/(1 + B å √I) with its slopes in I and B."""
    f, f_I, f_q = rational(I, B * size)
    return Shape(f, f_I, size * f_q)


def require_ion_size(size: FloatArray | float) -> None:
    """Refuse what is not the size of an ion; å given in Å is the usual slip.

    Raises
    ------
    InputError
        If a size is negative, 100 Å or more, or not a number.
    """
    sizes = np.asarray(size, dtype=float)
    wrong = ~((sizes >= 0) & (sizes < _LARGEST_ION))
    if np.any(wrong):
        raise InputError(
            f"an ion size of {float(sizes[wrong].flat[0]):g} m is not that of an ion",
            "give it in m: 4.5 Å is 4.5e-10",
        )
