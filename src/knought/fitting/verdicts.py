"""What an assessment must say of itself: agreement of the laws, the charges, the misfit."""

from __future__ import annotations

import math
from typing import TYPE_CHECKING

import numpy as np

from knought.errors import Caveat
from knought.fitting.checks import extrapolation
from knought.rounding import brief, chance

if TYPE_CHECKING:
    from collections.abc import Sequence

    from knought.fitting.diagnostics import Diagnostics
    from knought.fitting.estimate import Estimate
    from knought.fitting.found import Found
    from knought.fitting.k_space import CrossCheck
    from knought.fitting.replicates import Replicates
    from knought.fitting.surface_fit import SurfaceFit
    from knought.measurement.table import RateTable

__all__ = ["NOT_DESCRIBED", "integers_in", "residual_verdicts", "verdicts"]

#: A law whose χ² has a probability below this does not describe the data.
NOT_DESCRIBED = 1e-3

#: Findings among several that are looked for are said below this probability; single tests below
#: the other.
_UNLIKELY, _SIGNIFICANT = 0.01, 0.05

#: More integers than this are not listed one by one.
_MOST_LISTED = 6

#: A shift between the fits of k and of ln k that is said, in standard uncertainties.
_K_SPACE_SHIFT = 1.0


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
            f"The runs scatter {brief(scatter.birge_ratio)} times as much as their stated "
            f"uncertainties allow (χ²/ν = {brief(scatter.reduced_chi_square)}, ν = "
            f"{scatter.degrees_of_freedom}, {chance(scatter.probability, 2)}): every ± here is "
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
            f"No law describes these data within their stated uncertainties (the best has "
            f"{chance(max(chances))}). Look at the residuals before using any number: an outlier, "
            "a second pathway, ion pairing or a change of mechanism would all look like this.",
        )
    ]


#: Integers are listed one by one up to here; no step in solution has such charges.
_LARGEST_CHARGES = 10_000.0


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
    if not -_LARGEST_CHARGES < low <= high < _LARGEST_CHARGES:
        return [
            Caveat(
                "charge-product-undecided",
                f"These runs say nothing of the charge product: its 95 % interval is {low:.3g} to "
                f"{high:.3g}. Check u(k) and its unit.",
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
            f"{_listed(inside)}. Giving the reactants, or runs at lower ionic "
            "strength, would decide it.",
        )
    ]


def _listed(integers: list[int]) -> str:
    if len(integers) > _MOST_LISTED:
        return f"every integer from {integers[0]} to {integers[-1]}"
    return ", ".join(str(z) for z in integers)


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


def residual_verdicts(
    headline: Found,
    diagnostics: Diagnostics,
    repeated: Replicates | None,
    checked: CrossCheck | None,
) -> tuple[Caveat, ...]:
    """Return what the residuals say that must be said.

    Parameters
    ----------
    headline
        The answer.
    diagnostics
        Of its residuals.
    repeated
        What repeated runs say, if any were.
    checked
        The fit of k beside that of ln k.
    """
    return (
        *_replicate_verdict(repeated),
        *_outlier_verdict(headline, diagnostics),
        *_pattern_verdict(diagnostics),
        *_curvature_verdict(diagnostics),
        *_salt_verdict(diagnostics),
        *_k_space_verdict(checked),
    )


def _replicate_verdict(repeated: Replicates | None) -> list[Caveat]:
    if repeated is None:
        return []
    found = []
    if repeated.probability < _UNLIKELY:
        ratio = repeated.standard_deviation / repeated.typical_u
        found.append(
            Caveat(
                "replicates-scatter",
                f"Repeated runs scatter {ratio:.1f} times as much as their stated u (s(ln k) = "
                f"{repeated.standard_deviation:.3f} against {repeated.typical_u:.3f}, "
                f"{chance(repeated.probability)}): u(k) looks like the fit error of one trace. "
                "Take it from replicates instead.",
            )
        )
    if repeated.lack_probability < _UNLIKELY:
        found.append(
            Caveat(
                "lack-of-fit",
                "The laws miss the means of repeated runs by more than the replicates scatter "
                f"({chance(repeated.lack_probability)}): something that the laws do not describe "
                "changes with T, I or time.",
            )
        )
    return found


def _outlier_verdict(headline: Found, diagnostics: Diagnostics) -> list[Caveat]:
    if not diagnostics.outliers:
        return []
    seen = headline.observations
    labels = seen.run or tuple(str(i + 1) for i in range(seen.runs))
    listed = ", ".join(
        f"run {labels[i]} ({diagnostics.studentised[i]:+.1f} u at {seen.T[i]:.2f} K)"
        for i in diagnostics.outliers[:5]
    )
    return [
        Caveat(
            "outlier",
            f"Chance hardly explains {listed}. Nothing is dropped: look for a cause, and leave a "
            "run out only with a reason, which is then printed.",
        )
    ]


def _pattern_verdict(diagnostics: Diagnostics) -> list[Caveat]:
    worst = min(diagnostics.runs_test.items(), key=lambda pair: pair[1])
    if worst[1] >= _UNLIKELY / len(diagnostics.runs_test):
        return []
    along = "the order of the runs" if worst[0] == "order" else worst[0]
    return [
        Caveat(
            "pattern",
            f"Residuals keep their sign along {along} more than chance would have it "
            f"({chance(worst[1])}): drift, or a law that does not fit there.",
        )
    ]


def _curvature_verdict(diagnostics: Diagnostics) -> list[Caveat]:
    bent = diagnostics.curvature
    if bent is None or bent.probability >= _SIGNIFICANT:
        return []
    return [
        Caveat(
            "curvature",
            f"ln k against 1/T is curved: ΔCₚ‡ = ({bent.value:.0f} ± "
            f"{bent.standard_uncertainty:.0f}) J K⁻¹ mol⁻¹, {chance(bent.probability, 2)}. Before "
            "it is called a heat capacity, rule out a temperature error that grows, a second path, "
            "a pre-equilibrium that shifts, and the approach to the diffusion limit.",
        )
    ]


def _salt_verdict(diagnostics: Diagnostics) -> list[Caveat]:
    test = diagnostics.salt
    if test is None or test.probability >= _SIGNIFICANT:
        return []
    listed = ", ".join(
        f"{salt}: {offset:+.3f} ± {u:.3f}" for salt, (offset, u) in test.offsets.items()
    )
    return [
        Caveat(
            "salt-matters",
            f"At the same T and I, ln k depends on the salt (against {test.reference}: {listed}; "
            f"{chance(test.probability)}). I alone does not describe the medium: ions pair, or the "
            "counter-ion takes part.",
        )
    ]


def _k_space_verdict(checked: CrossCheck | None) -> list[Caveat]:
    if checked is None:
        return []
    name, shift = max(checked.shifts.items(), key=lambda pair: abs(pair[1]), default=("", 0.0))
    if abs(shift) < _K_SPACE_SHIFT:
        return []
    words = checked.in_ln_k.parameters[name].quantity.words
    return [
        Caveat(
            "k-space",
            f"Fitting k instead of ln k moves the {words} by {shift:+.1f} of its standard "
            f"uncertainties ({checked.in_ln_k.surface.salt_law.words} law): the answer depends on "
            "how errors of k are distributed. Say which was used, and why.",
        )
    ]


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
