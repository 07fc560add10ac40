"""The rate constant at conditions that the user chose, each with its interval and what bears it."""

from __future__ import annotations

from typing import TYPE_CHECKING

from knought.chemistry.quantities import quantity
from knought.discussion.compare import EXTRAPOLATED_K
from knought.discussion.standing import headline_of, law_words
from knought.reporting.cells import (
    Cell,
    Column,
    Table,
    estimate_cells,
    interval_cell,
    number,
    quantity_column,
    text_column,
    words,
)

if TYPE_CHECKING:
    from collections.abc import Sequence

    from knought.discussion.standing import Standing
    from knought.fitting.estimate import Estimate
    from knought.fitting.found import Found

__all__ = ["customary_conditions", "predicted_table"]

#: Codes of what is said of a value outside the runs, to the words of the table.
_BEYOND = {
    "extrapolated-temperature": "beyond the measured T",
    "extrapolated-ionic-strength": "above the measured I",
    "far-from-zero-ionic-strength": "far below the measured I",
}


#: Temperatures in K at which k is told where none are chosen: 25 and 37 °C are asked for most.
_CUSTOMARY_TEMPERATURES = (298.15, 310.15)


def customary_conditions(found: Found) -> tuple[tuple[float, float], ...]:
    """Return conditions at which k is told where the user chose none.

    Parameters
    ----------
    found
        A fit.

    Returns
    -------
    tuple
        T in K and I in mol/L: T_ref, and 25 and 37 °C where they lie within the runs, each at
        I → 0 and at the lowest and the highest ionic strength of the runs.
    """
    seen = found.observations
    low, high = seen.temperature_levels[0], seen.temperature_levels[-1]
    inside = {T for T in _CUSTOMARY_TEMPERATURES if low <= T <= high}
    temperatures = sorted({float(found.reference_temperature), *inside})
    levels = seen.ionic_strength_levels if found.describes_salt else ()
    strengths = sorted({0.0, *(float(levels[i]) for i in (0, -1) if len(levels))})
    return tuple((T, I) for T in temperatures for I in strengths)


def predicted_table(found: Standing, conditions: Sequence[tuple[float, float]]) -> Table:
    """Return k at chosen temperatures and ionic strengths.

    Parameters
    ----------
    found
        An assessment, or one fit.
    conditions
        T in K and I in mol/L of each row; I says nothing where the fit says nothing of salt.

    Returns
    -------
    Table
        One row a condition: k, one standard uncertainty, 95 % interval, and whether it lies
        outside the runs.

    Raises
    ------
    InputError
        If a temperature is not above 0 K or outside 0-100 °C where water is needed, or an ionic
        strength is below zero.
    """
    fit = headline_of(found)
    estimates = [fit.rate_constant(T, I) for T, I in conditions]
    notes = [
        f"k of the surface ({law_words(fit)}), as if measured without error there: u is one "
        f"standard uncertainty ({fit.includes}). One further run scatters by its own error besides."
    ]
    caveats = dict.fromkeys(each.message for one in estimates for each in one.caveats)
    if caveats:
        notes += [*caveats, EXTRAPOLATED_K]
    return Table(
        "predicted",
        "Rate constant at chosen conditions",
        _columns(fit),
        tuple(
            _row(fit, T, I, estimate)
            for (T, I), estimate in zip(conditions, estimates, strict=True)
        ),
        tuple(notes),
    )


def _columns(fit: Found) -> tuple[Column, ...]:
    k = quantity_column(quantity("measured_rate_constant", fit.observations.order))
    salt = (quantity_column(quantity("ionic_strength")),) if fit.describes_salt else ()
    return (
        quantity_column(quantity("temperature")),
        *salt,
        k,
        Column((("text", "u"),), k.unit),
        Column((("text", "95 % interval"),), k.unit),
        text_column("outside the runs"),
    )


def _row(fit: Found, T: float, I: float, estimate: Estimate) -> tuple[Cell, ...]:
    strength = (words("→ 0") if I == 0 else number(I, digits=3),) if fit.describes_salt else ()
    beyond = [_BEYOND[each.code] for each in estimate.caveats if each.code in _BEYOND]
    return (
        number(T, decimals=2),
        *strength,
        *estimate_cells(estimate),
        interval_cell(estimate),
        words("; ".join(beyond) or "no"),
    )
