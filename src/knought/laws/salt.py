"""How log10 k depends on ionic strength: the primary kinetic salt effect.

With the transition state and the reactants described by one activity law,

    log10 k = log10 k° + Δz² A(T) f(I; T) + β I,     Δz² = z‡² - Σ z_i² = 2 z_A z_B

(Brønsted 1922, Bjerrum 1924, Christiansen 1924; IUPAC Gold Book "kinetic salt effect"). f(I) comes
from :mod:`knought.chemistry.activity`; β, where a law has it, lumps the specific interactions of
the ions. Laws on the molal basis (SIT, Pitzer) turn I into molality with water's density.

To add a law, write its activity form, make one :class:`SaltLaw` of it here and name it in
``SALT_LAWS``; the surface, the fits, the tables and the command read the registry.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

import numpy as np

from knought.chemistry.activity import (
    DaviesForm,
    ExtendedForm,
    GuntelbergForm,
    LimitingForm,
    PitzerForm,
    SITForm,
)
from knought.chemistry.constants import LN10
from knought.errors import InputError

if TYPE_CHECKING:
    from collections.abc import Callable, Mapping

    from knought.arrays import FloatArray
    from knought.chemistry.activity import ActivityForm

__all__ = ["OPEN", "SALT_LAWS", "SaltLaw", "salt_law"]

#: The name of the law that is left open; it is a family and lives in ``open_law``.
OPEN = "open"


@dataclass(frozen=True)
class SaltLaw:
    """A salt law: which activity form screens the charges, and whether β is fitted.

    Parameters
    ----------
    name, words
        Its name in commands and records, and its name for people.
    form
        The activity form f(I); also says the basis (molar or molal) of β I. None for the law that
        has no salt effect at all.
    fits_charge
        Whether Δz² A f is part of the law, with the charge product Δz²/2 as a parameter.
    fits_interaction
        Whether β I is part of the law, with β as a parameter.
    given_charge_product
        Δz²/2 where the charges are known: the screening of the charges is then a known offset.
    """

    name: str
    words: str
    form: ActivityForm | None
    fits_charge: bool = True
    fits_interaction: bool = False
    given_charge_product: float | None = None

    @property
    def ion_size(self) -> float | None:
        """Ion-size parameter å in m of the extended law; None for other laws."""
        return self.form.ion_size if isinstance(self.form, ExtendedForm) else None

    @property
    def parameters(self) -> tuple[str, ...]:
        """Names of the law's parameters."""
        named = (
            ("charge_product", self.fits_charge),
            ("interaction_coefficient", self.fits_interaction),
        )
        return tuple(name for name, fitted in named if fitted)

    @property
    def screens_charges(self) -> bool:
        """Whether the charges, fitted or given, are part of the law."""
        return self.fits_charge or self.given_charge_product is not None

    @property
    def needs_water(self) -> bool:
        """Whether properties of water, and so 0-100 °C, are needed."""
        return self.form is not None and (self.screens_charges or self.form.basis == "molal")

    def with_charges(self, charge_product: float) -> SaltLaw:
        """Return the law with the charges known; a law that has none is returned as it is."""
        if not self.screens_charges:
            return self
        return replace(self, fits_charge=False, given_charge_product=float(charge_product))

    @property
    def interaction_unit(self) -> str:
        """Unit of β on the basis of the law."""
        molal = self.form is not None and self.form.basis == "molal"
        return "kg mol^-1" if molal else "L mol^-1"

    def columns(self, T: FloatArray, I: FloatArray) -> list[FloatArray]:
        """Return what each parameter is multiplied by in ln k.

        Parameters
        ----------
        T, I
            Temperatures in K and ionic strengths in mol/L, of shapes that broadcast.

        Returns
        -------
        list of ndarray
            2 ln10 A(T) f(I; T) for the charge product, ln10 I for β.
        """
        return self._columns(lambda form: form.screening(I, T), _abscissa("", I, T))

    def columns_dT(self, T: FloatArray, I: FloatArray) -> list[FloatArray]:
        """Return the columns' derivatives with respect to T at constant molarity."""
        return self._columns(lambda form: form.screening_dT(I, T), _abscissa("_dT", I, T))

    def columns_dI(self, T: FloatArray, I: FloatArray) -> list[FloatArray]:
        """Return the columns' derivatives with respect to I; infinite at I = 0 for the charges."""
        return self._columns(lambda form: form.screening_dI(I, T), _abscissa("_dI", I, T))

    def offset(self, T: FloatArray, I: FloatArray) -> FloatArray:
        """Return the part of ln k that no parameter multiplies: the screening of given charges."""
        return self._offset(T, lambda form: form.screening(I, T))

    def offset_dT(self, T: FloatArray, I: FloatArray) -> FloatArray:
        """Return the offset's derivative with respect to T at constant molarity."""
        return self._offset(T, lambda form: form.screening_dT(I, T))

    def offset_dI(self, T: FloatArray, I: FloatArray) -> FloatArray:
        """Return the offset's derivative with respect to I."""
        return self._offset(T, lambda form: form.screening_dI(I, T))

    def _offset(self, T: FloatArray, screening: Callable[[ActivityForm], FloatArray]) -> FloatArray:
        if self.form is None or self.given_charge_product is None:
            return np.zeros_like(T)
        return 2.0 * LN10 * self.given_charge_product * screening(self.form)

    def _columns(
        self,
        screening: Callable[[ActivityForm], FloatArray],
        abscissa: Callable[[ActivityForm], FloatArray],
    ) -> list[FloatArray]:
        if self.form is None:
            return []
        made = []
        if self.fits_charge:
            made.append(2.0 * LN10 * screening(self.form))
        if self.fits_interaction:
            made.append(LN10 * abscissa(self.form))
        return made


def _abscissa(
    derivative: str, I: FloatArray, T: FloatArray
) -> Callable[[ActivityForm], FloatArray]:
    def evaluate(form: ActivityForm) -> FloatArray:
        method: Callable[[FloatArray, FloatArray], FloatArray] = getattr(
            form, f"interaction_abscissa{derivative}"
        )
        return method(I, T)

    return evaluate


_ALL = (
    SaltLaw("none", "no salt effect", None, fits_charge=False),
    SaltLaw(
        "linear",
        "linear in I",
        LimitingForm(),  # for its molar basis only: no charge is screened
        fits_charge=False,
        fits_interaction=True,
    ),
    SaltLaw("limiting", "limiting law", LimitingForm()),
    SaltLaw("guntelberg", "Güntelberg", GuntelbergForm()),
    SaltLaw("extended", "extended", ExtendedForm()),
    SaltLaw("davies", "Davies", DaviesForm()),
    SaltLaw("sit", "SIT", SITForm(), fits_interaction=True),
    SaltLaw("pitzer", "Pitzer form", PitzerForm(), fits_interaction=True),
)

#: Every named salt law by its name.
SALT_LAWS: Mapping[str, SaltLaw] = {law.name: law for law in _ALL}


def salt_law(name: str, *, ion_size: float | None = None) -> SaltLaw:
    """Return the named salt law called `name`.

    Parameters
    ----------
    name
        A key of ``SALT_LAWS``.
    ion_size
        Ion-size parameter å in m, for the extended law only.

    Raises
    ------
    InputError
        If there is no law of that name, or it takes no ion size.
    """
    if name not in SALT_LAWS:
        raise InputError(
            f"no salt law is called {name!r}", f"choose from {', '.join([OPEN, *SALT_LAWS])}"
        )
    law = SALT_LAWS[name]
    if ion_size is None:
        return law
    if not isinstance(law.form, ExtendedForm):
        raise InputError(
            f"the salt law {name!r} takes no ion size", "give one with the law 'extended' only"
        )
    return SaltLaw(law.name, law.words, ExtendedForm(ion_size=ion_size))
