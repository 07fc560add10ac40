"""One literature value against ours at the paper's own conditions.

Our surface is carried to the paper's T and I with its whole covariance; the paper's number is never
moved. Rate constants are compared as ln k, everything else as it is. With u_c² = u² + u_lit²,

    z = (ours - literature)/u_c,        E_n = (ours - literature)/√(U² + U_lit²)

where U are expanded uncertainties (ISO 13528:2015, 9.7 and 9.6; ISO/IEC 17043): half of our 95 %
interval, and twice the paper's standard uncertainty. |z| below 2 and |E_n| below 1 are agreement.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import TYPE_CHECKING, Literal, TypeAlias

import numpy as np

from knought.chemistry.constants import GAS_CONSTANT as R
from knought.discussion.confusions import Explanation, Setting, explanations
from knought.discussion.standing import charges_open, headline_of
from knought.errors import InputError

if TYPE_CHECKING:
    from knought.discussion.literature import LiteratureValue
    from knought.discussion.standing import Standing
    from knought.errors import Caveat
    from knought.fitting.estimate import Estimate
    from knought.fitting.found import Found

__all__ = ["Match", "Verdict", "e_number", "match"]

Verdict: TypeAlias = Literal["agrees", "questionable", "differs", "cannot judge", "not comparable"]

#: |z| up to which values agree, and beyond which they differ (ISO 13528:2015, 9.4.2).
_AGREES, _DIFFERS = 2.0, 3.0

#: A paper that gives no uncertainty is taken to be this good when confusions are looked for:
#: ln units, J/mol, J/(K mol). A guess of ours that only decides what is offered.
_GUESSED_U = {
    "rate_constant": 0.10,
    "ln_pre_exponential_factor": 0.5,
    "activation_energy": 1000.0,
    "activation_enthalpy": 1000.0,
    "activation_entropy": 3.0,
}

_COVERAGE_FACTOR = 2.0


@dataclass(frozen=True, eq=False)
class Match:
    """A literature value and ours at the same conditions.

    Attributes
    ----------
    literature
        The value as published.
    ours
        Ours at the paper's conditions; None where there is none.
    literature_value
        The published value on our standard state, as compared (ln k for a rate constant).
    T, I
        Conditions of the comparison: K and mol/L; I is None where our fit says nothing of salt.
    difference
        Ours less the literature's, as compared; nan where there is nothing to compare.
    combined_uncertainty
        u_c, as compared; nan where one of the two is not known.
    z, e_number
        As above; nan where u_c is.
    verdict
        What the numbers say.
    reason
        Why there is no judgement, where there is none.
    explanations
        Confusions that would bring the paper to ours.
    caveats
        What must be said of our value there.
    assumed
        What was assumed of the paper's conditions.
    """

    literature: LiteratureValue
    ours: Estimate | None
    literature_value: float
    T: float
    I: float | None
    difference: float
    combined_uncertainty: float
    z: float
    e_number: float
    verdict: Verdict
    reason: str = ""
    explanations: tuple[Explanation, ...] = ()
    caveats: tuple[Caveat, ...] = ()
    assumed: tuple[str, ...] = ()

    @property
    def ratio(self) -> float:
        """Ours over the literature's for a rate constant; nan for what is not compared so."""
        return math.exp(self.difference) if self.literature.logarithmic else math.nan


def e_number(x: float, reference: float, U_x: float, U_reference: float) -> float:
    """Return E_n = (x - X)/√(U_x² + U_X²) (ISO 13528:2015, 9.7; U expanded, k = 2).

    Parameters
    ----------
    x, reference
        The two values.
    U_x, U_reference
        Their expanded uncertainties.
    """
    below = math.hypot(U_x, U_reference)
    return (x - reference) / below if below > 0 else math.nan


def match(found: Standing, value: LiteratureValue) -> Match:
    """Compare one literature value with ours at its conditions.

    Parameters
    ----------
    found
        Our result.
    value
        The literature value.

    Returns
    -------
    Match
        With the verdict ``"not comparable"`` and its reason where ours cannot be carried there.
    """
    fit = headline_of(found)
    T = fit.reference_temperature if value.T is None else value.T
    I, assumed = _strength(fit, value)
    if value.T is None and value.name != "charge_product":
        assumed = (*assumed, f"the paper states no temperature: ours at {T:.2f} K")
    order = fit.observations.order
    if value.depends_on_order and value.order is not None and value.order != order:
        return _not_comparable(
            value, T, I, f"it is of order {value.order} where ours is of order {order}"
        )
    try:
        ours = _ours(found, value.name, T, 0.0 if I is None else I)
    except InputError as error:
        return _not_comparable(value, T, I, f"ours cannot be carried there: {error}")
    if ours is None:
        return _not_comparable(value, T, I, _missing(fit, value))
    return _judged(fit, value, ours, T, I, assumed)


def _strength(fit: Found, value: LiteratureValue) -> tuple[float | None, tuple[str, ...]]:
    if not fit.describes_salt:
        return None, ("our runs say nothing of the salt effect: ours holds in their own medium",)
    if value.I is None and value.name != "charge_product":
        return 0.0, ("the paper states no ionic strength: ours at I → 0",)
    return value.I or 0.0, ()


def _ours(found: Standing, name: str, T: float, I: float) -> Estimate | None:
    if name == "charge_product":
        fit = charges_open(found)
        return None if fit is None else fit.parameters.get(name)
    return headline_of(found).at(T, I).get(name)


def _missing(fit: Found, value: LiteratureValue) -> str:
    if value.name == "charge_product":
        return "our runs alone say nothing of the charges"
    return f"our runs have one temperature, {fit.reference_temperature:.2f} K"


def _not_comparable(value: LiteratureValue, T: float, I: float | None, reason: str) -> Match:
    nan = math.nan
    return Match(
        value, None, value.compared_value, T, I, nan, nan, nan, nan, "not comparable", reason
    )


def on_our_standard_state(fit: Found, value: LiteratureValue, T: float) -> float:
    """Return the published value, as compared, on our standard concentration.

    S(c₂) = S(c₁) + (n - 1) R ln(c₂/c₁), and G follows from G = H - T S.
    """
    surface = fit.surface
    ratio = surface.standard_concentration / value.standard_concentration
    step = float(surface.order - 1) * R * math.log(ratio)
    if value.name == "activation_entropy":
        return value.value + step
    if value.name == "activation_gibbs_energy":
        return value.value - T * step
    return value.compared_value


def _judged(
    fit: Found,
    value: LiteratureValue,
    ours: Estimate,
    T: float,
    I: float | None,
    assumed: tuple[str, ...],
) -> Match:
    published = on_our_standard_state(fit, value, T)
    # Of a rate constant the distribution is that of ln k, which is what is compared.
    middle = float(ours.distribution.mean)
    u = float(ours.distribution.standard_deviation)
    low, high = (float(end) for end in ours.distribution.interval(0.95))
    difference = middle - published
    theirs = value.compared_uncertainty
    combined, z, en = math.nan, math.nan, math.nan
    verdict: Verdict = "cannot judge"
    if theirs is not None:
        combined = math.hypot(u, theirs)
        z = difference / combined
        en = e_number(middle, published, (high - low) / 2, _COVERAGE_FACTOR * theirs)
        verdict = _verdict(z)
    guessed = _GUESSED_U.get(value.name)
    offered: tuple[Explanation, ...] = ()
    if guessed is not None and verdict != "agrees":
        u_fit = combined if theirs is not None else math.hypot(u, guessed)
        if abs(difference) > u_fit:
            offered = explanations(value.name, published, difference, u_fit, _setting(fit, T, I))
    reason = "no uncertainty given" if theirs is None else ""
    return Match(
        literature=value,
        ours=ours,
        literature_value=published,
        T=T,
        I=I,
        difference=difference,
        combined_uncertainty=combined,
        z=z,
        e_number=en,
        verdict=verdict,
        reason=reason,
        explanations=offered,
        caveats=ours.caveats,
        assumed=assumed,
    )


def _verdict(z: float) -> Verdict:
    if abs(z) <= _AGREES:
        return "agrees"
    return "questionable" if abs(z) <= _DIFFERS else "differs"


def _setting(fit: Found, T: float, I: float | None) -> Setting:
    """Return our ln k at I → 0 and at the ends of the measured I, less that at the paper's I."""
    ratios = {}
    if I is not None:
        levels = fit.observations.ionic_strength_levels
        strengths = [0.0, float(levels[0]), float(levels[-1])] if len(levels) else [0.0]
        others = [s for s in dict.fromkeys(strengths) if s != I]
        at = np.array([I, *others])
        ln_k = fit.at(np.full(len(at), T), at)["rate_constant"].distribution.mean
        ratios = {s: float(ln_k[i + 1] - ln_k[0]) for i, s in enumerate(others)}
    return Setting(T, float(fit.surface.order), ratios)
