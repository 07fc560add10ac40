"""Shapes f(I) of the activity coefficient of an ion: log10 γ = -z² A(T) f(I; T) + b I.

| form | f | basis | customary domain |
| limiting | √I | molar | 0.01 mol/L (some say 0.001) |
| Güntelberg | √I/(1 + √I) | molar | 0.1 mol/L |
| extended | √I/(1 + B å √I) | molar | 0.1 mol/L |
| Davies | √I/(1 + √I) - C I | molar | 0.5 mol/L |
| SIT | √I/(1 + 1.5 √I) | molal | 3.5 mol/kg |
| Pitzer | (1/3)[√I/(1 + b √I) + (2/b) ln(1 + b √I)], b = 1.2 | molal | 6 mol/kg |
| open | √I/(1 + B å √I) - c I | molar | as its priors allow |

Every form takes I in mol/L and answers on its own basis: the molal ones turn it into molality with
water's density and use the molal A. What the salt laws need is the product ``screening`` = A f, and
its exact slopes at constant molarity. √I has an infinite slope at I = 0, and so has every form.

To add a form, write one class here: ``name``, ``words``, ``basis``, ``domain`` and ``_shape``.
"""

from __future__ import annotations

from abc import ABC, abstractmethod
from dataclasses import dataclass
from typing import TYPE_CHECKING, ClassVar

import numpy as np

from knought.arrays import frozen
from knought.chemistry import water
from knought.chemistry.debye_huckel import Basis, DebyeHuckel, debye_huckel
from knought.errors import InputError

if TYPE_CHECKING:
    from numpy.typing import ArrayLike

    from knought.arrays import FloatArray

__all__ = [
    "ActivityForm",
    "DaviesForm",
    "Domain",
    "ExtendedForm",
    "GuntelbergForm",
    "LimitingForm",
    "OpenForm",
    "PitzerForm",
    "SITForm",
]

#: kg/m³ in kg/L.
_PER_LITRE = 1e-3

#: Ions, and the open law's widest prior, stay below 100 Å (in m).
_LARGEST_ION = 1e-8


#: B of water at 25 °C on the molar basis, m^-1 (L/mol)^½.
_B_AT_25_CELSIUS = float(debye_huckel(298.15).B)


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
class _Shape:
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
    def _shape(self, I: FloatArray, B: FloatArray) -> _Shape:
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

    def _slope_T(self, at: _At, shape: _Shape) -> FloatArray:
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


def _half_slope(root: FloatArray) -> FloatArray:
    """d√I/dI = 1/(2√I); infinite at zero."""
    with np.errstate(divide="ignore"):
        return np.asarray(0.5 / root)


def _rational(I: FloatArray, q: FloatArray | float) -> tuple[FloatArray, FloatArray, FloatArray]:
    """√I/(1 + q √I) with its slopes in I and q."""
    root = np.sqrt(I)
    below = 1 + q * root
    f = root / below
    return f, _half_slope(root) / below**2, -(f**2)


def _screened(I: FloatArray, B: FloatArray, size: FloatArray | float) -> _Shape:
    """√I/(1 + B å √I) with its slopes in I and B."""
    f, f_I, f_q = _rational(I, B * size)
    return _Shape(f, f_I, size * f_q)


def _require_ion_size(size: FloatArray | float) -> None:
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


@dataclass(frozen=True)
class LimitingForm(ActivityForm):
    """Debye and Hückel's limiting law, √I: the slope that every form has at I → 0."""

    name: ClassVar[str] = "limiting"
    words: ClassVar[str] = "limiting law"
    domain: ClassVar[Domain] = Domain(0.01, "common practice, no source; some say 0.001 mol/L")

    def _shape(self, I: FloatArray, B: FloatArray) -> _Shape:
        root = np.sqrt(I)
        return _Shape(root, _half_slope(root))


@dataclass(frozen=True)
class GuntelbergForm(ActivityForm):
    """√I/(1 + √I) (Güntelberg, Z. phys. Chem. 123 (1926) 199)."""

    name: ClassVar[str] = "guntelberg"
    words: ClassVar[str] = "Güntelberg"
    domain: ClassVar[Domain] = Domain(0.1, "common practice, no source")

    def _shape(self, I: FloatArray, B: FloatArray) -> _Shape:
        f, f_I, _ = _rational(I, 1.0)
        return _Shape(f, f_I)


@dataclass(frozen=True)
class ExtendedForm(ActivityForm):
    """√I/(1 + B å √I) with the ion-size parameter å (Debye and Hückel 1923; Kielland 1937).

    Parameters
    ----------
    ion_size
        å in m, 3e-10 to 9e-10 for most ions.

    Raises
    ------
    InputError
        If `ion_size` is not that of an ion.
    """

    ion_size: float = 4.5e-10

    name: ClassVar[str] = "extended"
    words: ClassVar[str] = "extended Debye–Hückel"
    domain: ClassVar[Domain] = Domain(0.1, "common practice, no source")

    def __post_init__(self) -> None:
        _require_ion_size(self.ion_size)

    def _shape(self, I: FloatArray, B: FloatArray) -> _Shape:
        return _screened(I, B, self.ion_size)


@dataclass(frozen=True)
class DaviesForm(ActivityForm):
    """√I/(1 + √I) - C I (Davies, Ion Association, Butterworths, 1962).

    Parameters
    ----------
    coefficient
        C in L/mol: 0.3 (1962), or the older 0.2 (J. Chem. Soc. 1938, 2093).
    """

    coefficient: float = 0.3

    name: ClassVar[str] = "davies"
    words: ClassVar[str] = "Davies"
    domain: ClassVar[Domain] = Domain(0.5, "common practice, no source; 0.1 mol/L by some authors")

    def _shape(self, I: FloatArray, B: FloatArray) -> _Shape:
        f, f_I, _ = _rational(I, 1.0)
        return _Shape(f - self.coefficient * I, f_I - self.coefficient)


@dataclass(frozen=True)
class SITForm(ActivityForm):
    """√I/(1 + 1.5 √I) of the specific ion interaction theory (Scatchard; NEA TDB-2), molal."""

    name: ClassVar[str] = "sit"
    words: ClassVar[str] = "SIT"
    basis: ClassVar[Basis] = "molal"
    domain: ClassVar[Domain] = Domain(3.5, "NEA TDB-2 (2000), from memory: to 3.5 mol/kg")

    def _shape(self, I: FloatArray, B: FloatArray) -> _Shape:
        f, f_I, _ = _rational(I, 1.5)
        return _Shape(f, f_I)


@dataclass(frozen=True)
class PitzerForm(ActivityForm):
    """(1/3)[√I/(1 + b √I) + (2/b) ln(1 + b √I)], b = 1.2 kg^½ mol^-½, molal.

    The Debye-Hückel part of Pitzer's equation (Pitzer, J. Phys. Chem. 77 (1973) 268); the third
    comes from A_φ = A ln10/3.
    """

    name: ClassVar[str] = "pitzer"
    words: ClassVar[str] = "Pitzer form"
    basis: ClassVar[Basis] = "molal"
    domain: ClassVar[Domain] = Domain(
        6.0, "Pitzer and Mayorga (1973), from memory: to 6 mol/kg with its virials"
    )
    b: ClassVar[float] = 1.2

    def _shape(self, I: FloatArray, B: FloatArray) -> _Shape:
        root = np.sqrt(I)
        below = 1 + self.b * root
        f = (root / below + 2 / self.b * np.log1p(self.b * root)) / 3
        return _Shape(f, _half_slope(root) * (1 / below**2 + 2 / below) / 3)


@dataclass(frozen=True, eq=False)
class OpenForm(ActivityForm):
    """√I/(1 + B å √I) - c I: contains or follows all the others.

    Whether it is å or the product B å that keeps its value when the temperature changes, chemistry
    does not say: the extended law fixes å, while Güntelberg, Davies, SIT and Pitzer fix the number
    before √I. It makes no difference at one temperature, and one of hundreds of J/mol to E_a at
    I → 0 for large charge products.

    Parameters
    ----------
    ion_size, linear_coefficient
        å in m (at 25 °C) and c in L/mol; arrays broadcast against I and T, so that one call serves
        a grid. Kept as read-only copies.
    follows_water
        1 where B follows the temperature, 0 where it keeps its value at 25 °C; broadcasts too.

    Raises
    ------
    InputError
        If an ion size is not that of an ion, or a coefficient is not finite.
    """

    ion_size: FloatArray | float
    linear_coefficient: FloatArray | float
    follows_water: FloatArray | float = 1.0

    name: ClassVar[str] = "open"
    words: ClassVar[str] = "open law"
    domain: ClassVar[Domain] = Domain(0.5, "the design of its priors, tested by simulation")

    def __post_init__(self) -> None:
        _require_ion_size(self.ion_size)
        if not np.all(np.isfinite(self.linear_coefficient)):
            raise InputError("a coefficient c of the open form is not finite", "give it in L/mol")
        object.__setattr__(self, "ion_size", frozen(self.ion_size))
        object.__setattr__(self, "linear_coefficient", frozen(self.linear_coefficient))
        object.__setattr__(self, "follows_water", frozen(self.follows_water))

    def _shape(self, I: FloatArray, B: FloatArray) -> _Shape:
        share = self.follows_water
        shape = _screened(I, share * B + (1 - share) * _B_AT_25_CELSIUS, self.ion_size)
        c = self.linear_coefficient
        return _Shape(shape.f - c * I, shape.f_I - c, share * shape.f_B)
