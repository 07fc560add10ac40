"""The table of several reactions together: ΔH‡, ΔS‡ and how their errors go together."""

from __future__ import annotations

from typing import TYPE_CHECKING

from knought.chemistry.quantities import quantity
from knought.reporting.cells import (
    Cell,
    Table,
    number,
    number_column,
    quantity_column,
    text_column,
    value_cells,
    words,
)

if TYPE_CHECKING:
    from knought.discussion.compensation import Compensation, ReactionPoint

__all__ = ["reactions_table"]


def reactions_table(found: Compensation) -> Table:
    """Return ΔH‡, ΔS‡ and ΔG‡ of every reaction, each with its u, and the two correlations.

    Parameters
    ----------
    found
        Several reactions together.

    Returns
    -------
    Table
        One row a reaction.
    """
    T = found.harmonic_mean_temperature
    return Table(
        "reactions",
        "Several reactions together, at I → 0",
        (
            text_column("reaction"),
            quantity_column(quantity("activation_enthalpy")),
            number_column("u"),
            quantity_column(quantity("activation_entropy")),
            number_column("u"),
            number_column("ρ(ΔH‡, ΔS‡)"),
            quantity_column(quantity("activation_gibbs_energy")),
            number_column("u"),
            number_column("ρ(ΔH‡, ΔG‡)"),
        ),
        tuple(_row(each) for each in found.points),
        (
            f"ΔH‡ and ΔS‡ at each reaction's reference temperature, ΔG‡ at {T:.2f} K, the harmonic "
            "mean of the temperatures of all runs; u is one standard uncertainty and ρ the "
            "correlation of the errors, both from each reaction's joint covariance.",
        ),
    )


def _row(point: ReactionPoint) -> tuple[Cell, ...]:
    return (
        words(point.label),
        *value_cells(quantity("activation_enthalpy"), point.enthalpy, point.enthalpy_uncertainty),
        *value_cells(quantity("activation_entropy"), point.entropy, point.entropy_uncertainty),
        number(point.correlation, decimals=4),
        *value_cells(
            quantity("activation_gibbs_energy"), point.gibbs_energy, point.gibbs_uncertainty
        ),
        number(point.correlation_with_gibbs, decimals=2),
    )
