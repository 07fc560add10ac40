"""An observed rate constant, k_obs, and the reagent in excess by which it is to be divided."""

from __future__ import annotations

from typing import TYPE_CHECKING

from knought.errors import Problem

if TYPE_CHECKING:
    from knought.measurement.reading.layout import Column

__all__ = ["excess_column"]


def excess_column(
    rates: list[Column], concentrations: list[Column], named: str | None
) -> tuple[Column | None, list[Problem]]:
    """Return the concentration by which the rate constant is divided, and what is wrong.

    Parameters
    ----------
    rates
        Columns of rate constants.
    concentrations
        Columns of concentrations.
    named
        Species that the user says is in excess; None where they say nothing.

    Returns
    -------
    column, problems
        None where the rate constant is fitted as it stands.
    """
    marked = [column for column in concentrations if _is_in_excess(column, named)]
    observed = any(column.header is not None and column.header.observed for column in rates)
    if named is not None and not marked:
        there = ", ".join(column.title for column in concentrations) or "none"
        return None, [
            Problem(
                f"no column holds the concentration of {named}, which is said to be in excess",
                f"head a column c({named})/(mol/L); columns of concentrations: {there}",
            )
        ]
    if len(marked) > 1:
        return None, [
            Problem(
                "more than one species is marked as in excess",
                "divide by all but one, and mark that one",
                column=marked[1].address,
            )
        ]
    if marked and not observed and named is None:
        return None, [
            Problem(
                "a species is marked as in excess, and the rate constant is headed k: it can be "
                "read as divided by that concentration already, or as still to be divided",
                "head the rate constant k_obs if it is still to be divided, or take the mark away",
                column=marked[0].address,
            )
        ]
    if observed and not marked and concentrations:
        species = "X" if concentrations[0].header is None else concentrations[0].header.species
        return None, [
            Problem(
                "k_obs can be read as the rate constant to fit, or as one to be divided by the "
                "concentration of a reagent in excess",
                f"head it k to fit it as it is; head the concentration c_excess({species}), with "
                "its unit, to divide by it",
                column=rates[0].address,
            )
        ]
    return (marked[0] if marked else None), []


def _is_in_excess(column: Column, named: str | None) -> bool:
    header = column.header
    if header is None:
        return False
    return header.excess if named is None else header.species == named
