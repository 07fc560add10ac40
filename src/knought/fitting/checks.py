"""What the data cannot carry: refused, or said in words with what to measure instead."""

from __future__ import annotations

from typing import TYPE_CHECKING, NoReturn

import numpy as np

from knought.chemistry.water import COLDEST, HOTTEST
from knought.errors import Caveat, InputError, Problem

if TYPE_CHECKING:
    from knought.arrays import FloatArray
    from knought.fitting.observations import Observations
    from knought.laws.salt import SaltLaw
    from knought.laws.surface import Surface
    from knought.numerics.least_squares import RankDeficiencyError

__all__ = [
    "design_caveats",
    "domain_caveats",
    "excluded",
    "extrapolation",
    "refuse_undetermined",
    "require_levels",
    "uncertainty_caveats",
]

#: A temperature converted from a printed one may miss the bound of liquid water by rounding.
_SLACK = 1e-9

#: Outside the measured temperatures by less than this (K) is not called extrapolation.
_TEMPERATURE_MARGIN = 1.0

#: Relative standard uncertainties above this make ln k skewed; the k-space fit may then differ.
_LARGE_RELATIVE_UNCERTAINTY = 0.20

#: Share of a salt column's variation that the temperature columns explain, above which T and I
#: are said to be confounded: u is then more than seven times what a crossed design gives.
_CONFOUNDED = 0.98


def require_levels(seen: Observations, surface: Surface, *, charges_given: bool) -> None:
    """Refuse laws whose parameters the runs cannot determine, and say what to measure.

    Raises
    ------
    InputError
        If a law needs water and a run lies outside 0-100 °C, a slope with temperature is asked of
        one temperature, a curvature of two, a salt effect of no or one ionic strength, or there
        are fewer runs than parameters.
    """
    _require_water(seen, surface.salt_law)
    temperatures = len(seen.temperature_levels)
    names = surface.parameters
    law = surface.temperature_law
    needed = len(law.parameters)
    if temperatures < needed:
        have = "one temperature" if temperatures == 1 else f"{temperatures} temperatures"
        raise InputError(
            f"the temperature law {law.name!r} needs at least {needed} temperatures; the runs have "
            f"{have}",
            "measure at more temperatures, or choose a law with fewer parameters"
            + (" (isothermal for one temperature)" if temperatures == 1 else ""),
        )
    _require_salt_levels(seen, surface.salt_law, charges_given=charges_given)
    if seen.runs < len(names):
        raise InputError(
            f"{seen.runs} runs cannot determine {len(names)} parameters ({', '.join(names)})",
            "measure more runs, or choose laws with fewer parameters",
        )


def _require_water(seen: Observations, law: SaltLaw) -> None:
    """Refuse runs outside 0-100 °C where a law needs water, each by its cell or label.

    Raises
    ------
    InputError
        If there are any.
    """
    if not law.needs_water:
        return
    outside = np.flatnonzero((seen.T < COLDEST - _SLACK) | (seen.T > HOTTEST + _SLACK))
    if len(outside):
        raise InputError([_outside_water(seen, int(i), law) for i in outside])


def _outside_water(seen: Observations, place: int, law: SaltLaw) -> Problem:
    what = (
        f"was measured at {seen.T[place]:.2f} K, and the salt law {law.name!r} needs liquid water "
        "(0-100 °C)"
    )
    remedy = "check the temperature and its unit; or choose the salt law 'none'"
    if seen.rates is not None:
        return seen.rates.problem(place, "T", what, remedy)
    label = seen.run[place] if seen.run else str(place + 1)
    return Problem(f"run {label} {what}", remedy, column="T")


def _require_salt_levels(seen: Observations, law: SaltLaw, *, charges_given: bool) -> None:
    if law.form is None:
        return
    if seen.I is None:
        raise InputError(
            f"the salt law {law.name!r} needs ionic strengths, and the table has none",
            "add a column I/(mol/L), or choose the salt law 'none'",
        )
    levels = len(seen.ionic_strength_levels)
    # The open law's β has a prior, so that one parameter fewer must come from the data.
    needed = int(law.fits_charge) + int(law.fits_interaction and law.name != "open") + 1
    if levels < needed and not (charges_given and needed == 1):
        have = "one ionic strength" if levels == 1 else f"{levels} ionic strengths"
        raise InputError(
            f"the salt law {law.name!r} needs at least {needed} ionic strengths; the runs have "
            f"{have}",
            "measure at more ionic strengths, give the charges of the reactants, or choose the "
            "salt law 'none'",
        )


def refuse_undetermined(found: RankDeficiencyError, surface: Surface) -> NoReturn:
    """Refuse with the parameters that the runs cannot tell apart.

    Parameters
    ----------
    found
        What the least-squares core found.
    surface
        The surface whose parameters these are.

    Raises
    ------
    InputError
        Always.
    """
    size = np.abs(found.direction) / np.max(np.abs(found.direction))
    involved = [name for name, share in zip(surface.parameters, size, strict=False) if share > 0.1]
    which = " from ".join(involved[:2]) if len(involved) > 1 else ", ".join(involved)
    raise InputError(
        f"the runs cannot tell {which} apart" if len(involved) > 1 else f"nothing fixes {which}",
        "ionic strength and temperature must not change together: measure at least two ionic "
        "strengths at one temperature and two temperatures at one ionic strength",
    ) from found


def design_caveats(seen: Observations, surface: Surface, u: FloatArray) -> tuple[Caveat, ...]:
    """Say what the design of the runs leaves untested or hardly separated.

    Parameters
    ----------
    seen
        The runs.
    surface
        The surface; not stacked.
    u : (n,) ndarray
        Standard uncertainties of ln k, or relative weights.
    """
    found: list[Caveat] = []
    temperatures = len(seen.temperature_levels)
    if temperatures == 1:
        found.append(
            Caveat(
                "one-temperature",
                f"All runs are at {seen.temperature_levels[0]:.2f} K: no activation energy, "
                "enthalpy or entropy can be found. Measure at two more temperatures at least.",
            )
        )
    elif temperatures == 2:
        found.append(
            Caveat(
                "two-temperatures",
                "With two temperatures the temperature law cannot be tested: a third, between or "
                "beyond them, would show whether ln k against 1/T is straight.",
            )
        )
    share = _explained_share(seen, surface, u)
    if share > _CONFOUNDED:
        found.append(
            Caveat(
                "confounded",
                f"Ionic strength changes with temperature ({share:.1%} of the salt effect could be "
                "a temperature effect), so that the charge product and the activation parameters "
                "are hardly separated. Measure several ionic strengths at one temperature.",
            )
        )
    return tuple(found)


def _explained_share(seen: Observations, surface: Surface, u: FloatArray) -> float:
    """Share of the first salt column's variation that the temperature columns explain (R²)."""
    thermal = len(surface.temperature_law.parameters)
    if thermal == len(surface.parameters):
        return 0.0
    rows = surface.ln_k(seen.T, seen.ionic_strength).rows
    weighted = rows / u[:, None]
    basis, _ = np.linalg.qr(weighted[:, :thermal])
    first, _ = np.linalg.qr(weighted[:, :1])
    column = weighted[:, thermal]
    total = column - first @ (first.T @ column)
    left = column - basis @ (basis.T @ column)
    return float(1.0 - (left @ left) / (total @ total)) if total @ total > 0 else 0.0


def domain_caveats(seen: Observations, law: SaltLaw) -> tuple[Caveat, ...]:
    """Say where runs lie outside the customary domain of a named law."""
    if law.form is None or seen.I is None or not law.screens_charges or law.name == "open":
        return ()
    highest, limit = float(seen.I.max()), law.form.domain.upper
    if highest <= limit * (1 + 1e-9):
        return ()
    outside = int(np.sum(limit < seen.I))
    unit = "mol/kg" if law.form.basis == "molal" else "mol/L"
    return (
        Caveat(
            "outside-domain",
            f"{outside} of {seen.runs} runs lie above the customary domain of the {law.words} law "
            f"(I up to {limit:g} {unit}); the highest ionic strength is {highest:.3g} mol/L.",
        ),
    )


def uncertainty_caveats(seen: Observations) -> tuple[Caveat, ...]:
    """Say where relative uncertainties are so large that ln k is no longer nearly normal."""
    if not seen.u_given or float(seen.u.max()) <= _LARGE_RELATIVE_UNCERTAINTY:
        return ()
    many = int(np.sum(seen.u > _LARGE_RELATIVE_UNCERTAINTY))
    return (
        Caveat(
            "large-relative-uncertainty",
            f"{many} of {seen.runs} rate constants have a relative standard uncertainty above "
            f"{_LARGE_RELATIVE_UNCERTAINTY:.0%} (largest {seen.u.max():.0%}): ln k is then skewed. "
            "Compare with the fit of k itself.",
        ),
    )


def excluded(seen: Observations, *, stated: bool, salt: bool) -> str:
    """Say which errors of T and I no ± includes, because nothing is stated of them.

    Parameters
    ----------
    seen
        The runs.
    stated
        Whether u(k) are stated; random errors of T and I are in the scatter otherwise.
    salt
        Whether the surface depends on ionic strength.

    Returns
    -------
    str
        A sentence; empty where everything is stated.
    """
    missing: dict[str, list[str]] = {}
    for name, column, start in (
        ("temperature", seen.u_T, "temperature"),
        ("ionic strength", seen.u_I, "ionic-strength"),
    ):
        if name == "ionic strength" and (seen.I is None or not salt):
            continue
        own = column is not None or any(error.kind.startswith(start) for error in seen.own)
        shared = any(error.kind.startswith(start) for error in seen.shared)
        which = {
            (False, False): "errors of {}",
            (True, False): "errors of {} that runs share",
            (False, True): "errors of each run's {}",
        }.get((own or not stated, shared))
        if which is not None:
            missing.setdefault(which, []).append(name)
    if not missing:
        return ""
    listed = ", ".join(which.format(" and ".join(names)) for which, names in missing.items())
    before = "" if stated else "The scatter holds what errors of T and I differ between runs. "
    return f"{before}Not included, as none are stated: {listed}."


def extrapolation(
    seen: Observations, T: FloatArray, I: FloatArray, *, salt: bool
) -> tuple[Caveat, ...]:
    """Say where a prediction at `T` and `I` goes beyond the runs.

    Parameters
    ----------
    seen
        The runs.
    T, I
        Conditions of the prediction, in K and mol/L.
    salt
        Whether the surface depends on ionic strength.
    """
    found: list[Caveat] = []
    low, high = float(seen.T.min()), float(seen.T.max())
    beyond = max(low - float(np.min(T)), float(np.max(T)) - high)
    if beyond > _TEMPERATURE_MARGIN:
        far = " by more than the measured range itself" if beyond > high - low > 0 else ""
        found.append(
            Caveat(
                "extrapolated-temperature",
                f"{_span(T)} K lies {beyond:.1f} K outside the measured {low:.2f} K to "
                f"{high:.2f} K{far}.",
            )
        )
    if not salt or seen.I is None:
        return tuple(found)
    roots = np.sqrt([seen.I.min(), seen.I.max()])
    wanted = np.sqrt([np.min(I), np.max(I)])
    if wanted[1] ** 2 > roots[1] ** 2 * 1.02:
        found.append(
            Caveat(
                "extrapolated-ionic-strength",
                f"I = {np.max(I):.3g} mol/L lies above the highest measured, "
                f"{seen.I.max():.3g} mol/L.",
            )
        )
    if roots[0] - wanted[0] > roots[1] - roots[0]:
        found.append(
            Caveat(
                "far-from-zero-ionic-strength",
                f"The lowest ionic strength measured is {seen.I.min():.3g} mol/L, farther from "
                f"I = {np.min(I):.3g} than the whole measured range is wide (in √I): the value "
                "there rests on the salt law more than on the runs. Measure at lower I.",
            )
        )
    return tuple(found)


def _span(values: FloatArray) -> str:
    low, high = float(np.min(values)), float(np.max(values))
    return f"{low:.2f}" if low == high else f"{low:.2f} to {high:.2f}"
