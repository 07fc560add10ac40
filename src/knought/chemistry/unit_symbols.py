"""The closed list of unit symbols that rate tables, recipes and traces need.

Every symbol is an exact multiple of a coherent base of mol, dm, kg, s and K: with the decimetre as
base length a litre is exactly 1, so that (L/mol)^(1/2) has an exact factor as well.
"""

from __future__ import annotations

from fractions import Fraction
from types import MappingProxyType
from typing import TYPE_CHECKING, NamedTuple

if TYPE_CHECKING:
    from collections.abc import Mapping

__all__ = ["ALIASES", "DIMENSIONLESS", "SYMBOLS", "Dimension"]


class Dimension(NamedTuple):
    """Exponents over amount, length, mass, time and temperature."""

    amount: Fraction = Fraction(0)
    length: Fraction = Fraction(0)
    mass: Fraction = Fraction(0)
    time: Fraction = Fraction(0)
    temperature: Fraction = Fraction(0)

    def times(self, other: Dimension, power: Fraction = Fraction(1)) -> Dimension:
        """Return the dimension of a product with `other` raised to `power`."""
        return Dimension(*(a + power * b for a, b in zip(self, other, strict=True)))


DIMENSIONLESS = Dimension()


def _dimension(**exponents: int) -> Dimension:
    return Dimension(**{name: Fraction(power) for name, power in exponents.items()})


_AMOUNT = _dimension(amount=1)
_LENGTH = _dimension(length=1)
_MASS = _dimension(mass=1)
_TIME = _dimension(time=1)
_TEMPERATURE = _dimension(temperature=1)
_VOLUME = _dimension(length=3)
_CONCENTRATION = _dimension(amount=1, length=-3)
_ENERGY = _dimension(mass=1, length=2, time=-2)
_PRESSURE = _dimension(mass=1, length=-1, time=-2)
_VISCOSITY = _dimension(mass=1, length=-1, time=-1)

_PREFIXES = {
    "k": Fraction(1000),
    "d": Fraction(1, 10),
    "c": Fraction(1, 100),
    "m": Fraction(1, 1000),
    "µ": Fraction(1, 10**6),
    "n": Fraction(1, 10**9),
    "p": Fraction(1, 10**12),
}

#: In the base above: 1 m = 10 dm, so 1 J = 100 kg dm² s^-2 and 1 Pa = 1/10 kg dm^-1 s^-2.
_STEMS: tuple[tuple[str, str, Fraction, Dimension], ...] = (
    ("mol", "kmµnp", Fraction(1), _AMOUNT),
    ("m", "kdcmµnp", Fraction(10), _LENGTH),
    ("Å", "", Fraction(1, 10**9), _LENGTH),
    ("g", "kmµn", Fraction(1, 1000), _MASS),
    ("s", "mµnp", Fraction(1), _TIME),
    ("min", "", Fraction(60), _TIME),
    ("h", "", Fraction(3600), _TIME),
    ("d", "", Fraction(86400), _TIME),
    ("K", "m", Fraction(1), _TEMPERATURE),
    ("L", "dcmµn", Fraction(1), _VOLUME),
    ("M", "mµnp", Fraction(1), _CONCENTRATION),
    ("J", "km", Fraction(100), _ENERGY),
    # The thermochemical calorie, 4.184 J exactly (ISO 80000-5 annex; IUPAC Green Book 7.2).
    ("cal", "k", Fraction(4184, 10), _ENERGY),
    ("Pa", "km", Fraction(1, 10), _PRESSURE),
    ("bar", "m", Fraction(10**4), _PRESSURE),
    ("atm", "", Fraction(1013250, 100), _PRESSURE),
    # 1 P = 0.1 Pa s.
    ("P", "cm", Fraction(1, 100), _VISCOSITY),
    ("%", "", Fraction(1, 100), DIMENSIONLESS),
    ("‰", "", Fraction(1, 1000), DIMENSIONLESS),
    ("ppm", "", Fraction(1, 10**6), DIMENSIONLESS),
    # N_A = 6.02214076e23 mol^-1 exactly (SI Brochure, 9th edition).
    ("molecule", "", Fraction(1, 602214076 * 10**15), _AMOUNT),
)


def _built() -> dict[str, tuple[Fraction, Dimension]]:
    made = {}
    for stem, prefixes, factor, dimension in _STEMS:
        made[stem] = (factor, dimension)
        for prefix in prefixes:
            made[prefix + stem] = (_PREFIXES[prefix] * factor, dimension)
    return made


#: Symbol -> factor to the base, dimension. The degree Celsius stands apart: it has an offset.
SYMBOLS: Mapping[str, tuple[Fraction, Dimension]] = MappingProxyType(_built())

_WORDS = {
    "l": "L", "ℓ": "L", "dl": "dL", "cl": "cL", "ml": "mL", "µl": "µL", "nl": "nL",
    "liter": "L", "litre": "L", "liters": "L", "litres": "L",
    "mole": "mol", "moles": "mol", "mols": "mol",
    "sec": "s", "secs": "s", "second": "s", "seconds": "s",
    "mins": "min", "minute": "min", "minutes": "min",
    "hr": "h", "hrs": "h", "hour": "h", "hours": "h",
    "day": "d", "days": "d",
    "msec": "ms", "µsec": "µs",
    "kelvin": "K", "Kelvin": "K",
    "angstrom": "Å", "Angstrom": "Å", "ångström": "Å", "Ångström": "Å",
    "molecules": "molecule", "molec": "molecule", "molecs": "molecule",
    "percent": "%", "gram": "g", "grams": "g",
}  # fmt: skip

#: Other spellings -> symbol; ``u`` for ``µ`` is added where it makes no other unit.
ALIASES: Mapping[str, str] = MappingProxyType(
    _WORDS
    | {f"u{name[1:]}": name for name in SYMBOLS if name.startswith("µ")}
    | {"ul": "µL", "usec": "µs"}
)
