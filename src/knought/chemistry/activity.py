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

from dataclasses import dataclass
from typing import TYPE_CHECKING, ClassVar

import numpy as np

from knought.arrays import frozen
from knought.chemistry.activity_form import (
    ActivityForm,
    Domain,
    Shape,
    half_slope,
    rational,
    require_ion_size,
    screened,
)
from knought.chemistry.debye_huckel import Basis, debye_huckel
from knought.errors import InputError

if TYPE_CHECKING:
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

#: B of water at 25 °C on the molar basis, m^-1 (L/mol)^½.
_B_AT_25_CELSIUS = float(debye_huckel(298.15).B)


@dataclass(frozen=True)
class LimitingForm(ActivityForm):
    """Debye and Hückel's limiting law, √I: the slope that every form has at I → 0."""

    name: ClassVar[str] = "limiting"
    words: ClassVar[str] = "limiting law"
    domain: ClassVar[Domain] = Domain(0.01, "common practice, no source; some say 0.001 mol/L")

    def _shape(self, I: FloatArray, B: FloatArray) -> Shape:
        root = np.sqrt(I)
        return Shape(root, half_slope(root))


@dataclass(frozen=True)
class GuntelbergForm(ActivityForm):
    """√I/(1 + √I) (Güntelberg, Z. phys. Chem. 123 (1926) 199)."""

    name: ClassVar[str] = "guntelberg"
    words: ClassVar[str] = "Güntelberg"
    domain: ClassVar[Domain] = Domain(0.1, "common practice, no source")

    def _shape(self, I: FloatArray, B: FloatArray) -> Shape:
        f, f_I, _ = rational(I, 1.0)
        return Shape(f, f_I)


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
        require_ion_size(self.ion_size)

    def _shape(self, I: FloatArray, B: FloatArray) -> Shape:
        return screened(I, B, self.ion_size)


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

    def _shape(self, I: FloatArray, B: FloatArray) -> Shape:
        f, f_I, _ = rational(I, 1.0)
        return Shape(f - self.coefficient * I, f_I - self.coefficient)


@dataclass(frozen=True)
class SITForm(ActivityForm):
    """√I/(1 + 1.5 √I) of the specific ion interaction theory (Scatchard; NEA TDB-2), molal."""

    name: ClassVar[str] = "sit"
    words: ClassVar[str] = "SIT"
    basis: ClassVar[Basis] = "molal"
    domain: ClassVar[Domain] = Domain(3.5, "NEA TDB-2 (2000), from memory: to 3.5 mol/kg")

    def _shape(self, I: FloatArray, B: FloatArray) -> Shape:
        f, f_I, _ = rational(I, 1.5)
        return Shape(f, f_I)


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

    def _shape(self, I: FloatArray, B: FloatArray) -> Shape:
        root = np.sqrt(I)
        below = 1 + self.b * root
        f = (root / below + 2 / self.b * np.log1p(self.b * root)) / 3
        return Shape(f, half_slope(root) * (1 / below**2 + 2 / below) / 3)


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
        require_ion_size(self.ion_size)
        if not np.all(np.isfinite(self.linear_coefficient)):
            raise InputError("a coefficient c of the open form is not finite", "give it in L/mol")
        object.__setattr__(self, "ion_size", frozen(self.ion_size))
        object.__setattr__(self, "linear_coefficient", frozen(self.linear_coefficient))
        object.__setattr__(self, "follows_water", frozen(self.follows_water))

    def _shape(self, I: FloatArray, B: FloatArray) -> Shape:
        share = self.follows_water
        shape = screened(I, share * B + (1 - share) * _B_AT_25_CELSIUS, self.ion_size)
        c = self.linear_coefficient
        return Shape(shape.f - c * I, shape.f_I - c, share * shape.f_B)
