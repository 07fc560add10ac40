"""How much k, E_a and ΔS‡ change with ionic strength, against I → 0.

As the Debye-Hückel A rises with temperature, the salt effect brings an apparent energy and entropy
of activation with it. For z_A z_B = 2 at 0.1 mol/L and 25 °C (Güntelberg) k is some three times k°,
E_a is 1.5 kJ/mol higher and ΔS‡ 14 J/(K mol) higher: papers at different ionic strengths disagree
by that much without any disagreement between them.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from knought.discussion.standing import headline_of
from knought.errors import InputError
from knought.laws.activation import activation_rows

if TYPE_CHECKING:
    from collections.abc import Sequence

    from numpy.typing import ArrayLike

    from knought.discussion.standing import Standing
    from knought.laws.surface import Rows

__all__ = ["Shift", "activation_shifts"]


@dataclass(frozen=True)
class Shift:
    """What an ionic strength changes, against I → 0; each with its standard uncertainty.

    Attributes
    ----------
    T, I
        In K and mol/L.
    ln_rate_constant
        ln k/k°, and u.
    activation_energy, activation_entropy
        Changes in J/mol and J/(K mol), and u; None where the temperature law says nothing of a
        slope.
    """

    T: float
    I: float
    ln_rate_constant: tuple[float, float]
    activation_energy: tuple[float, float] | None
    activation_entropy: tuple[float, float] | None

    @property
    def ratio(self) -> float:
        """k/k°."""
        return float(np.exp(self.ln_rate_constant[0]))


def activation_shifts(
    found: Standing, ionic_strengths: ArrayLike | None = None, T: float | None = None
) -> tuple[Shift, ...]:
    """Return what each ionic strength changes, with the joint covariance.

    Parameters
    ----------
    found
        An assessment, or one fit.
    ionic_strengths
        In mol/L; the measured ones, if not given.
    T
        Temperature in K; T_ref if not given.

    Returns
    -------
    tuple of Shift
        Empty where the fit says nothing of the salt effect.

    Raises
    ------
    InputError
        If an ionic strength is negative, or water is not liquid at `T`.
    """
    fit = headline_of(found)
    if not fit.describes_salt:
        return ()
    T = fit.reference_temperature if T is None else T
    levels = fit.observations.ionic_strength_levels if ionic_strengths is None else ionic_strengths
    strengths = np.atleast_1d(np.asarray(levels, dtype=float))
    if np.any(strengths < 0):
        raise InputError("an ionic strength is negative", "give zero or more, in mol/L")
    here = activation_rows(fit.surface, np.full(len(strengths), T), strengths)
    zero = activation_rows(fit.surface, np.full(len(strengths), T), 0.0)

    def pairs(name: str) -> Sequence[tuple[float, float] | None]:
        if name not in here:
            return [None] * len(strengths)
        return _pairs(here[name] - zero[name])

    def _pairs(rows: Rows) -> list[tuple[float, float] | None]:
        mixture = fit.distribution.of(rows)
        means, deviations = mixture.mean, mixture.standard_deviation
        return [(float(m), float(s)) for m, s in zip(means, deviations, strict=True)]

    ln_k = _pairs(here["ln_rate_constant"] - zero["ln_rate_constant"])
    energy, entropy = pairs("activation_energy"), pairs("activation_entropy")
    return tuple(
        Shift(T, float(I), ln_k[i] or (0.0, 0.0), energy[i], entropy[i])
        for i, I in enumerate(strengths)
    )
