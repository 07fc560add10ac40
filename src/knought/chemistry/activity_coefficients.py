"""Activity coefficients of ions and salts from an activity form."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

if TYPE_CHECKING:
    from numpy.typing import ArrayLike

    from knought.arrays import FloatArray
    from knought.chemistry.activity import ActivityForm

__all__ = ["lg_activity_coefficient", "mean_activity_coefficient"]


def lg_activity_coefficient(
    charge: float, I: ArrayLike, T: ArrayLike, form: ActivityForm, interaction: float = 0.0
) -> FloatArray:
    """Return log10 γ of an ion: -z² A f + b I.

    Parameters
    ----------
    charge
        z of the ion.
    I, T
        Ionic strengths in mol/L and temperatures in K.
    form
        The activity form; γ is on its basis.
    interaction
        b in L/mol (kg/mol for molal forms).

    Raises
    ------
    InputError
        If I is negative, or T outside 0-100 °C.
    """
    return np.asarray(
        -(charge**2) * form.screening(I, T) + interaction * form.interaction_abscissa(I, T)
    )


def mean_activity_coefficient(
    z_plus: float,
    z_minus: float,
    I: ArrayLike,
    T: ArrayLike,
    form: ActivityForm,
    interaction: float = 0.0,
) -> FloatArray:
    """Return γ± of a salt: log10 γ± = -|z₊ z₋| A f + b I (Robinson and Stokes, chapter 9).

    Parameters
    ----------
    z_plus, z_minus
        Charges of cation and anion.
    I, T, form, interaction
        As for :func:`lg_activity_coefficient`; `interaction` is the salt's.

    Raises
    ------
    InputError
        If I is negative, or T outside 0-100 °C.
    """
    screening = abs(z_plus * z_minus) * form.screening(I, T)
    return np.asarray(10 ** (interaction * form.interaction_abscissa(I, T) - screening))
