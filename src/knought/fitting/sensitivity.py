"""How much an answer rests on the priors of the open law: their widths halved and doubled."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from knought.fitting.open_fit import OpenFit, fit_open
from knought.laws.open_law import narrowed

if TYPE_CHECKING:
    from knought.laws.open_law import Priors

__all__ = ["PriorCase", "prior_sensitivity"]


@dataclass(frozen=True)
class PriorCase:
    """The answer under other priors.

    Attributes
    ----------
    words
        What was changed.
    priors
        The priors.
    fit
        The fit with them.
    """

    words: str
    priors: Priors
    fit: OpenFit


def prior_sensitivity(found: OpenFit) -> tuple[PriorCase, ...]:
    """Fit again with every width of the priors as it is, halved and doubled.

    Parameters
    ----------
    found
        The fit with the priors as they are.
    """
    cases = [PriorCase("as they are", found.grid.priors, found)]
    for words, factor in (("widths halved", 0.5), ("widths doubled", 2.0)):
        priors = narrowed(found.grid.priors, factor)
        fit = fit_open(
            found.observations,
            temperature_law=found.temperature_law,
            reference_temperature=found.reference_temperature,
            standard_concentration=found.surface.standard_concentration,
            charge_product=found.charge_product_given,
            priors=priors,
            scatter="scatter" if found.scatter.from_scatter else "given",
        )
        cases.append(PriorCase(words, priors, fit))
    return tuple(cases)
