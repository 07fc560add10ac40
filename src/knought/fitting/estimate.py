"""One result: a value, its standard uncertainty, its interval, and what they mean."""

from __future__ import annotations

import math
from dataclasses import dataclass, field
from typing import TYPE_CHECKING, TypeAlias

import numpy as np

if TYPE_CHECKING:
    from knought.arrays import FloatArray
    from knought.chemistry.quantities import Quantity
    from knought.errors import Caveat
    from knought.numerics.quantiles import Histogram, Mixture
    from knought.rounding import Layout

__all__ = ["Estimate", "Number"]

#: A float for one result, an array for several.
Number: TypeAlias = "float | FloatArray"


@dataclass(frozen=True, eq=False)
class Estimate:
    """A result with its uncertainty.

    Attributes
    ----------
    quantity
        What it is; says the unit of `value` (SI, with mol/L for concentrations).
    distribution
        What is known of it; of its logarithm, if `logarithmic`.
    includes
        What the uncertainty is made of, in words.
    degrees_of_freedom
        Of the standard uncertainty; infinite where it rests on stated uncertainties.
    logarithmic
        Whether the result is the exponential of what `distribution` describes (rate constants).
    given
        Whether the value was told by the user and not found from the data.
    caveats
        What must be said with it, such as that it is extrapolated.
    """

    quantity: Quantity
    distribution: Mixture | Histogram
    includes: str = ""
    degrees_of_freedom: float = math.inf
    logarithmic: bool = False
    given: bool = False
    caveats: tuple[Caveat, ...] = field(default=())

    @property
    def unit(self) -> str:
        """Unit of the value, its uncertainty and its interval."""
        return self.quantity.unit

    @property
    def value(self) -> Number:
        """Best value: the mean; for a rate constant the exponential of the mean of ln k."""
        mean = self.distribution.mean
        return _number(_exponential(mean) if self.logarithmic else mean)

    @property
    def standard_uncertainty(self) -> Number:
        """Standard uncertainty (GUM 2.3.1); for a rate constant k u(ln k)."""
        deviation = self.distribution.standard_deviation
        return _number(self.value * deviation if self.logarithmic else deviation)

    def interval(self, coverage: float = 0.95) -> tuple[Number, Number]:
        """Return the probabilistically symmetric interval.

        Parameters
        ----------
        coverage
            The probability that it holds the value, between 0 and 1.

        Returns
        -------
        tuple
            Lower and upper end, in the unit of the value: exact quantiles of the distribution.

        Raises
        ------
        InputError
            If `coverage` is not between 0 and 1.
        """
        ends = self.distribution.interval(coverage)
        low, high = (_exponential(end) if self.logarithmic else end for end in ends)
        return _number(low), _number(high)

    def written(self, layout: Layout = "text") -> str:
        """Return ``"(50.31 ± 0.42) kJ mol⁻¹"``, rounded by the uncertainty; one result only."""
        deviation = None if self.given else float(self.standard_uncertainty)
        return self.quantity.written(float(self.value), deviation, layout)

    def __str__(self) -> str:
        if np.ndim(self.value):
            return f"{self.quantity.words}: {np.size(self.value)} values"
        return f"{self.quantity.symbol.text} = {self.written()}"


def _exponential(value: FloatArray | float) -> FloatArray:
    """Return e^value; infinite, as it is, where u is so large that an end is beyond doubles."""
    with np.errstate(over="ignore", under="ignore"):
        return np.asarray(np.exp(value))


def _number(value: FloatArray | float) -> Number:
    array = np.asarray(value, dtype=float)
    return float(array) if array.ndim == 0 else array
