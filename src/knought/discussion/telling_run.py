"""Which one further run would tell two charge products apart.

Each charge product, taken as true, predicts k at any T and I from the runs there are. A run tells
where the two predictions lie far apart beside what both leave open and the error of the run itself:

    separation = |μ₁ - μ₂|/√((σ₁² + σ₂²)/2 + u²)

in ln k. Runs are tried at the measured temperatures, and over ionic strengths that the open law
still describes. Planning whole series is another matter; this is the one run to begin with.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from knought.errors import InputError
from knought.fitting.open_fit import OpenFit, fit_open

if TYPE_CHECKING:
    from knought.fitting.found import Found

__all__ = ["TellingRun", "telling_run"]

#: Ionic strengths tried, in mol/L: from what reagents alone bring (common practice, no source), to
#: where the open law still holds.
LOWEST, _HIGHEST, _STRENGTHS = 1e-3, 0.5, 37

#: A separation of this many units tells the two.
TELLS = 3.0


@dataclass(frozen=True)
class TellingRun:
    """The one further run that separates two charge products best.

    Attributes
    ----------
    T, I
        Where to measure, in K and mol/L.
    charge_products
        The two that it separates.
    predicted
        k that each predicts there, in the unit of k.
    run_uncertainty
        u(ln k) assumed of the run: the middle of those there are.
    separation
        As above.
    """

    T: float
    I: float
    charge_products: tuple[float, float]
    predicted: tuple[float, float]
    run_uncertainty: float
    separation: float

    @property
    def tells(self) -> bool:
        """Whether the one run is expected to tell them: separated by 3 u or more."""
        return self.separation >= TELLS


def telling_run(
    fit: Found, first: float, second: float, lowest_ionic_strength: float = LOWEST
) -> TellingRun | None:
    """Return the run that would separate two charge products best.

    Parameters
    ----------
    fit
        The open fit to the runs there are.
    first, second
        The two charge products.
    lowest_ionic_strength
        The lowest that can be reached, in mol/L.

    Returns
    -------
    TellingRun or None
        None where the fit is not that of the open law.

    Raises
    ------
    InputError
        If the lowest ionic strength is not between 0 and 0.5 mol/L, or the runs cannot
        determine the parameters with the charges given.
    """
    if not isinstance(fit, OpenFit) or first == second:
        return None
    seen = fit.observations
    # The salt effect grows slowly with T; the ends of the measured range are enough to look at.
    temperatures = np.unique([seen.T.min(), seen.T.mean(), seen.T.max()])
    if not 0 < lowest_ionic_strength < _HIGHEST:
        raise InputError(
            f"the lowest ionic strength is {lowest_ionic_strength:g} mol/L",
            f"give one between 0 and {_HIGHEST} mol/L",
        )
    strengths = np.geomspace(lowest_ionic_strength, _HIGHEST, _STRENGTHS)
    T, I = (grid.ravel() for grid in np.meshgrid(temperatures, strengths, indexing="ij"))
    means, deviations = [], []
    for product in (first, second):
        given = fit_open(
            seen,
            temperature_law=fit.temperature_law,
            reference_temperature=fit.reference_temperature,
            standard_concentration=fit.surface.standard_concentration,
            charge_product=product,
            priors=fit.grid.priors,
            scatter="given" if fit.scatter.kind == "given" else None,
        )
        mixture = given.distribution.of(given.surface.ln_k(T, I))
        means.append(mixture.mean)
        deviations.append(mixture.standard_deviation)
    u = float(np.median(fit.effective_u))
    spread = np.sqrt((deviations[0] ** 2 + deviations[1] ** 2) / 2 + u**2)
    separation = np.abs(means[0] - means[1]) / spread
    best = int(np.argmax(separation))
    return TellingRun(
        T=float(T[best]),
        I=float(I[best]),
        charge_products=(first, second),
        predicted=(float(np.exp(means[0][best])), float(np.exp(means[1][best]))),
        run_uncertainty=u,
        separation=float(separation[best]),
    )
