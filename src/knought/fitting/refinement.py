"""How fine the grid of the open law must be: as fine as the runs ask for."""

from __future__ import annotations

from typing import TYPE_CHECKING, Protocol, Self, TypeVar

import numpy as np

from knought.errors import Caveat

if TYPE_CHECKING:
    from collections.abc import Callable, Mapping

    from knought.arrays import FloatArray
    from knought.fitting.distribution import ParameterDistribution
    from knought.fitting.estimate import Estimate
    from knought.laws.open_law import OpenGrid

__all__ = ["FEWEST_CELLS", "FINEST", "SETTLED_GRID", "OnGrid", "refined"]

#: A grid is refined where its effective number of cells is below this, up to this refinement,
#: until results move by less than this part of their u.
FEWEST_CELLS = 12
FINEST = 8
SETTLED_GRID = 0.01


class OnGrid(Protocol):
    """What a fit on a grid tells of itself."""

    @property
    def grid(self) -> OpenGrid:
        """The cells."""
        ...

    @property
    def cell_weights(self) -> FloatArray:
        """Weight of each cell after the data."""
        ...

    @property
    def distribution(self) -> ParameterDistribution:
        """What is known of the linear parameters."""
        ...

    @property
    def parameters(self) -> Mapping[str, Estimate]:
        """Every parameter by its name."""
        ...

    def with_caveat(self, caveat: Caveat) -> Self:
        """Return the fit with one more caveat."""
        ...


Fitted = TypeVar("Fitted", bound=OnGrid)


def refined(fitted: Callable[[int], Fitted]) -> Fitted:
    """Return a fit on a grid fine enough.

    Parameters
    ----------
    fitted
        Fits on the grid with that refinement.

    Returns
    -------
    OnGrid
        On the default grid, where many of its cells carry the weight; else on one doubled until
        neither ln k° nor the charge product moves by a hundredth of its standard uncertainty, or
        with a caveat that none is fine enough.
    """
    found, finer = fitted(1), 1
    while _few_cells(found) and finer < FINEST:
        finer *= 2
        before, found = found, fitted(finer)
        if _moved(before, found) < SETTLED_GRID:
            return found
    if _few_cells(found):
        caveat = Caveat(
            "coarse-grid",
            "The runs are so precise that few shapes of the salt law carry all the weight: the "
            "intervals may be off by more than a hundredth of u. Narrow the priors about "
            f"å = {found.parameters['ion_size'].written()}.",
        )
        return found.with_caveat(caveat)
    return found


def _few_cells(found: OnGrid) -> bool:
    """Return whether too few cells of a grid with several carry the weight."""
    if found.grid.cells == 1:
        return False
    return 1.0 / float(np.sum(found.cell_weights**2)) < FEWEST_CELLS


def _moved(before: OnGrid, after: OnGrid) -> float:
    """Return by how much a finer grid moved value or u of any parameter, over its u."""
    moves = []
    for name in ("ln_rate_constant", "charge_product"):
        if name in after.distribution.names:
            one, other = (each.distribution.parameter(name) for each in (before, after))
            u = float(other.standard_deviation)
            moves += [
                abs(float(one.mean - other.mean)) / u,
                abs(float(one.standard_deviation) / u - 1),
            ]
    return max(moves)
