"""Profile likelihood of the ion size: an interval that follows the real shape of χ².

χ² is minimised over everything else at each å; the interval holds every å whose χ² exceeds the
minimum by less than the quantile of its distribution (Bates and Watts 1988, section 6.1; lmfit's
``conf_interval`` does the same by an F test).
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from knought.errors import InputError
from knought.fitting.fit import resolve
from knought.fitting.ion_size import ION_SIZE_BOUNDS, fit_ion_size
from knought.fitting.observations import observe
from knought.fitting.surface_fit import fit_surface
from knought.laws.salt import salt_law
from knought.numerics.quantiles import student_quantile

if TYPE_CHECKING:
    from knought.measurement.table import RateTable

__all__ = ["IonSizeProfile", "profile_ion_size"]


@dataclass(frozen=True)
class IonSizeProfile:
    """The profile interval of the ion size.

    Attributes
    ----------
    value
        å at the minimum, in m.
    low, high
        Ends of the interval in m; a bound of the search where χ² never rises enough.
    coverage
        Of the interval.
    open_below, open_above
        Whether that end is only the bound of the search.
    """

    value: float
    low: float
    high: float
    coverage: float
    open_below: bool
    open_above: bool


def profile_ion_size(
    rates: RateTable,
    *,
    coverage: float = 0.95,
    temperature_law: str | None = None,
    reference_temperature: float | None = None,
) -> IonSizeProfile:
    """Return the profile-likelihood interval of å in the extended law.

    Parameters
    ----------
    rates
        The table, with at least three ionic strengths.
    coverage
        Of the interval.
    temperature_law, reference_temperature
        As for :func:`knought.fit`.

    Raises
    ------
    InputError
        If å cannot be fitted, or the coverage is not between 0 and 1.
    """
    if not 0 < coverage < 1:
        raise InputError(f"a coverage lies between 0 and 1, not {coverage}", "give it as 0.95")
    best = fit_ion_size(
        rates, temperature_law=temperature_law, reference_temperature=reference_temperature
    )
    seen = observe(rates)
    choices = resolve(
        seen,
        temperature_law=temperature_law,
        salt_law="extended",
        reference_temperature=reference_temperature,
    )

    def chi_square(size: float) -> float:
        return fit_surface(
            seen,
            temperature_law=choices.temperature_law,
            salt_law=salt_law("extended", ion_size=size),
            reference_temperature=choices.reference_temperature,
        ).solution.chi_square

    value = float(best.parameters["ion_size"].value)
    nu = best.scatter.headline_degrees_of_freedom
    step = student_quantile((1 + coverage) / 2, nu) * best.scatter.factor
    goal = best.solution.chi_square + step**2
    ends = []
    for bound in ION_SIZE_BOUNDS:
        if chi_square(bound) <= goal:
            ends.append((bound, True))
            continue
        from scipy.optimize import brentq

        near, far = sorted((bound, value))
        root = brentq(lambda size: chi_square(size) - goal, near, far, xtol=1e-16)
        ends.append((float(root), False))
    (low, below), (high, above) = ends
    return IonSizeProfile(value, low, high, coverage, below, above)
