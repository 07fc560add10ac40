"""What an assessment must say of itself: agreement of the laws, the charges, the misfit."""

from __future__ import annotations

import math
from typing import TYPE_CHECKING

import numpy as np

from knought.errors import Caveat
from knought.fitting.checks import extrapolation

if TYPE_CHECKING:
    from collections.abc import Sequence

    from knought.fitting.estimate import Estimate
    from knought.fitting.found import Found
    from knought.fitting.surface_fit import SurfaceFit
    from knought.measurement.table import RateTable

__all__ = ["NOT_DESCRIBED", "integers_in", "verdicts"]

#: A law whose χ² has a probability below this does not describe the data.
NOT_DESCRIBED = 1e-3


def verdicts(
    headline: Found,
    data_alone: Found | None,
    laws: Sequence[SurfaceFit],
    rates: RateTable,
) -> tuple[Caveat, ...]:
    """Return what must be said with the headline.

    Parameters
    ----------
    headline
        The answer.
    data_alone
        The same with the charges left open, where they are given.
    laws
        Every named law.
    rates
        The table, for its runs that are left out.
    """
    found = [
        *_scatter_verdict(headline),
        *_misfit_verdict(headline, laws),
        *_charge_verdict(data_alone or headline, headline.charge_product_given),
        *_agreement_verdict(laws),
        *extrapolation(
            headline.observations,
            np.array([headline.reference_temperature]),
            np.zeros(1),
            salt=headline.describes_salt,
        ),
        *_left_out(rates),
    ]
    return tuple(found)


def _scatter_verdict(headline: Found) -> list[Caveat]:
    scatter = headline.scatter
    if scatter.kind != "enlarged":
        return []
    return [
        Caveat(
            "u-too-small",
            f"The runs scatter {scatter.birge_ratio:.2f} times as much as their stated "
            f"uncertainties allow (χ²/ν = {scatter.reduced_chi_square:.2f}, ν = "
            f"{scatter.degrees_of_freedom}, p = {scatter.probability:.2g}): every ± here is "
            "enlarged accordingly. Either u(k) leaves an error source out, or the laws do not "
            "describe the data.",
        )
    ]


def _misfit_verdict(headline: Found, laws: Sequence[SurfaceFit]) -> list[Caveat]:
    tried = [headline.scatter, *(law.scatter for law in laws)]
    chances = [each.probability for each in tried if not math.isnan(each.probability)]
    if not chances or max(chances) >= NOT_DESCRIBED:
        return []
    return [
        Caveat(
            "nothing-fits",
            f"No law describes these data within their stated uncertainties (the best has p = "
            f"{max(chances):.1g}). Look at the residuals before using any number: an outlier, a "
            "second pathway, ion pairing or a change of mechanism would all look like this.",
        )
    ]


def _charge_verdict(free: Found, given: float | None) -> list[Caveat]:
    estimate = free.parameters.get("charge_product")
    if estimate is None or estimate.given:
        return []
    low, high = (float(end) for end in estimate.interval(0.95))
    if given is not None:
        if low <= given <= high:
            return []
        return [
            Caveat(
                "charges-contradicted",
                f"The given charges have z_A z_B = {given:g}, but the runs alone give "
                f"{_pair(estimate)}, 95 % interval {low:.2f} to {high:.2f}. Check the "
                "reactants, the ionic strengths, and whether ions pair.",
            )
        ]
    inside = integers_in(low, high)
    if len(inside) == 1:
        return []
    interval = f"95 % interval {low:.2f} to {high:.2f}"
    if not inside:
        return [
            Caveat(
                "no-integer-charge-product",
                f"No integer lies in the {interval} of the charge product: more than one path, "
                "ion pairing, or an error in I would do this.",
            )
        ]
    return [
        Caveat(
            "charge-product-undecided",
            f"These runs cannot tell the charge product: its {interval} holds "
            f"{', '.join(str(z) for z in inside)}. Giving the reactants, or runs at lower ionic "
            "strength, would decide it.",
        )
    ]


def integers_in(low: float, high: float) -> list[int]:
    """Return the integers from `low` to `high`."""
    return list(range(math.ceil(low), math.floor(high) + 1))


def _agreement_verdict(laws: Sequence[SurfaceFit]) -> list[Caveat]:
    """Say where named laws that each describe the data contradict each other."""
    able = [
        law
        for law in laws
        if law.surface.salt_law.screens_charges
        and not (law.scatter.stated and law.scatter.probability < NOT_DESCRIBED)
    ]
    found = []
    for name, words in (("rate_constant", "k°"), ("charge_product", "the charge product")):
        known = [
            (law, law.parameters[name])
            for law in able
            if name in law.parameters and not law.parameters[name].given
        ]
        if len(known) < 2:
            continue
        lowest = min(known, key=lambda pair: float(pair[1].interval(0.95)[1]))
        highest = max(known, key=lambda pair: float(pair[1].interval(0.95)[0]))
        if float(highest[1].interval(0.95)[0]) > float(lowest[1].interval(0.95)[1]):
            found.append(
                Caveat(
                    "laws-disagree",
                    f"Named laws disagree on {words} by more than their own intervals: "
                    f"{_pair(lowest[1])} ({lowest[0].surface.salt_law.words}) against "
                    f"{_pair(highest[1])} ({highest[0].surface.salt_law.words}). The open law "
                    "covers both.",
                )
            )
    return found


def _left_out(rates: RateTable) -> list[Caveat]:
    out = [i for i, used in enumerate(rates.used) if not used]
    if not out:
        return []
    reasons = "; ".join(f"{rates.run[i]}: {rates.reason[i]}" for i in out[:10])
    more = f"; and {len(out) - 10} more" if len(out) > 10 else ""
    return [
        Caveat(
            "runs-left-out",
            f"{len(out)} of {len(rates.run)} runs are left out ({reasons}{more}).",
        )
    ]


def _pair(estimate: Estimate) -> str:
    return estimate.written()
