"""Our rate constant beside the diffusion limit at every measured temperature."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from knought.arrays import FloatArray, frozen
from knought.discussion.encounter import EncounterLimit, encounter_limit
from knought.discussion.standing import headline_of
from knought.errors import InputError

if TYPE_CHECKING:
    from knought.discussion.standing import Standing

__all__ = ["EncounterCheck", "encounter_check"]


@dataclass(frozen=True, eq=False)
class EncounterCheck:
    """k at I → 0 beside the diffusion limit; arrays over the measured temperatures, ``(n,)``.

    Attributes
    ----------
    limit
        The diffusion limit at each.
    rate_constant, standard_uncertainty : (n,) ndarray
        Ours, in L mol^-1 s^-1.
    activated : (n,) ndarray or None
        k corrected for encounter; None where k is more than a factor of 10 below the limit.
    activated_uncertainty : (n,) ndarray or None
        Of it, from u(k) alone.
    in_medium
        Whether ours holds in the runs' own medium and not at I → 0.
    """

    limit: EncounterLimit
    rate_constant: FloatArray
    standard_uncertainty: FloatArray
    activated: FloatArray | None
    activated_uncertainty: FloatArray | None
    in_medium: bool

    @property
    def near(self) -> bool:
        """Whether k lies within a factor of 10 of the limit at any temperature."""
        return self.activated is not None

    @property
    def share(self) -> FloatArray:
        """k/k_D at each temperature."""
        return np.asarray(self.rate_constant / self.limit.rate_constant)


def encounter_check(
    found: Standing,
    charge_product: float,
    contact_distance: float = 5e-10,
    diffusion_coefficients: tuple[float, float] | None = None,
) -> EncounterCheck:
    """Hold k against the diffusion limit.

    Parameters
    ----------
    found
        An assessment, or one fit, of a reaction of order 2.
    charge_product, contact_distance, diffusion_coefficients
        As for :func:`~knought.discussion.encounter.encounter_limit`.

    Returns
    -------
    EncounterCheck

    Raises
    ------
    InputError
        If the reaction is not of order 2, or a temperature lies outside 0-100 °C.
    """
    fit = headline_of(found)
    order = fit.observations.order
    if order != 2:
        raise InputError(
            f"the diffusion limit is that of two species that meet, and the order is {order}",
            "ask for it with rate constants of order 2 only",
        )
    T = fit.observations.temperature_levels
    limit = encounter_limit(T, charge_product, contact_distance, diffusion_coefficients)
    estimate = fit.rate_constant(T, np.zeros(len(T)))
    k, u = np.asarray(estimate.value), np.asarray(estimate.standard_uncertainty)
    near = limit.near(k)
    activated = limit.activated(k) if near else None
    return EncounterCheck(
        limit=limit,
        rate_constant=frozen(k),
        standard_uncertainty=frozen(u),
        activated=None if activated is None else frozen(activated),
        activated_uncertainty=(
            None if activated is None else frozen(activated * limit.magnified(k, u / k))
        ),
        in_medium=not fit.describes_salt,
    )
