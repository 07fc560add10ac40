"""Activation parameters as slopes of the surface ln k(T, I).

Whatever the laws, at temperature T and ionic strength I (IUPAC Gold Book; Green Book 2.12):

    E_a  = R T² ∂ln k/∂T                       (activation energy)
    ΔH‡  = E_a - R T                           (reactions in solution)
    ΔG‡  = R T [ln(k_B T/h) - ln(k c°^(n-1))]  (c° = 1 mol/L)
    ΔS‡  = (ΔH‡ - ΔG‡)/T
    ln A = ln k + E_a/(R T)

All are affine in the parameters of the surface, so their covariance follows from the joint
covariance without linearisation. As the Debye-Hückel A rises with temperature, E_a, ΔH‡ and ΔS‡
depend on I even where the law at zero ionic strength is a straight line: each is given at a stated
I.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from knought.chemistry.constants import BOLTZMANN, PLANCK
from knought.chemistry.constants import GAS_CONSTANT as R

if TYPE_CHECKING:
    from numpy.typing import ArrayLike

    from knought.laws.surface import Rows, Surface

__all__ = ["activation_rows"]

_LN_BOLTZMANN_OVER_PLANCK = float(np.log(BOLTZMANN / PLANCK))


def activation_rows(surface: Surface, T: ArrayLike, I: ArrayLike = 0.0) -> dict[str, Rows]:
    """Return the activation parameters at `T` and `I` as affine functions of the parameters.

    Parameters
    ----------
    surface
        The surface.
    T, I
        Temperatures in K and ionic strengths in mol/L, broadcast to shape ``(n,)``.

    Returns
    -------
    dict
        Quantity name to :class:`Rows`, in SI units; ``ln_rate_constant`` and
        ``activation_gibbs_energy`` only where the temperature law says nothing of a slope.
    """
    T = np.asarray(T, dtype=float)
    T = np.atleast_1d(np.broadcast_arrays(T, np.asarray(I, dtype=float))[0]).astype(float)
    ln_k = surface.ln_k(T, I)
    standard_state = float(surface.order - 1) * np.log(surface.standard_concentration)
    universal = _LN_BOLTZMANN_OVER_PLANCK + np.log(T)
    gibbs = ln_k.plus(standard_state).times(-R * T).plus(R * T * universal)
    found = {"ln_rate_constant": ln_k, "activation_gibbs_energy": gibbs}
    if "activation_energy" in surface.temperature_law.parameters or (
        "activation_enthalpy" in surface.temperature_law.parameters
    ):
        energy = surface.ln_k_dT(T, I).times(R * T**2)
        enthalpy = energy.plus(-R * T)
        found |= {
            "activation_energy": energy,
            "activation_enthalpy": enthalpy,
            "activation_entropy": (enthalpy - gibbs).times(1.0 / T),
            "ln_pre_exponential_factor": ln_k + energy.times(1.0 / (R * T)),
        }
    return found
