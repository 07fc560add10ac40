"""Covariance and correlation of the parameters of the headline."""

from __future__ import annotations

import math
from typing import TYPE_CHECKING

import numpy as np

from knought.chemistry.quantities import quantity
from knought.reporting.cells import (
    LAYOUTS,
    Cell,
    Column,
    Table,
    symbol_cell,
    text_column,
    trimmed,
)

if TYPE_CHECKING:
    from knought.arrays import FloatArray
    from knought.chemistry.quantities import Quantity
    from knought.fitting.assess import Assessment
    from knought.fitting.found import Found

__all__ = ["basis_quantity", "correlation_table", "covariance_table", "shown_covariance"]


def basis_quantity(found: Found, name: str) -> Quantity:
    """Return the quantity behind a name of a fit's covariance."""
    return found.parameters[name].quantity if name in found.parameters else quantity(name)


def shown_covariance(found: Found) -> tuple[tuple[Quantity, ...], FloatArray]:
    """Return the quantities of a fit's covariance, and the matrix in their shown units."""
    names, matrix = found.covariance()
    basis = tuple(basis_quantity(found, name) for name in names)
    factors = np.array([each.shown(1.0) for each in basis])
    return basis, matrix * np.outer(factors, factors)


def covariance_table(assessment: Assessment) -> Table:
    """Return the covariance matrix; units stand beside rows and columns."""
    basis, matrix = shown_covariance(assessment.headline)
    return Table(
        "covariance",
        "Covariance of the parameters",
        _columns(basis),
        tuple(
            (_named(what), *(trimmed(float(value), 4) for value in row))
            for what, row in zip(basis, matrix, strict=True)
        ),
        ("The unit of an element is the product of the units of its row and its column.",),
    )


def correlation_table(assessment: Assessment) -> Table:
    """Return the correlation matrix; a parameter without variance has none with others."""
    basis, matrix = shown_covariance(assessment.headline)
    deviations = np.sqrt(np.diag(matrix))
    rows = []
    for i, what in enumerate(basis):
        cells = [_named(what)]
        for j in range(len(basis)):
            scale = deviations[i] * deviations[j]
            cells.append(_correlation(matrix[i, j] / scale if scale > 0 else math.nan))
        rows.append(tuple(cells))
    heads = [Column(tuple((way, what.symbol.in_layout(way)) for way in LAYOUTS)) for what in basis]
    return Table(
        "correlation",
        "Correlation of the parameters",
        (text_column("parameter"), *heads),
        tuple(rows),
    )


def _columns(basis: tuple[Quantity, ...]) -> tuple[Column, ...]:
    heads = (
        Column(tuple((way, what.symbol.in_layout(way)) for way in LAYOUTS), what.shown_unit)
        for what in basis
    )
    return (text_column("parameter"), *heads)


def _named(what: Quantity) -> Cell:
    return symbol_cell(what.symbol, what.name)


def _correlation(value: float) -> Cell:
    if math.isnan(value):
        return Cell(None, (("text", "–"),))
    text = f"{value:.4f}"
    return Cell(float(value), (("text", text.replace("-", "−")), ("ascii", text), ("latex", text)))
