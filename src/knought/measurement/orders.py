"""From rates to partial orders, and from rates or k_obs to k.

The idea first: rate = k Π c_i^n_i is linear in logarithms, so all orders come from one fit of
ln rate, jointly, each with its interval and a test against whole numbers (and halves are told).
With the orders settled, k is the slope of rate against the product of concentrations; an intercept
that is not zero means a path that does not need the reactants, or a blank. Likewise k_obs against
the concentration in excess: its slope is k, its intercept a reverse or a parallel path.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from knought.arrays import FloatArray, frozen
from knought.errors import Caveat, InputError
from knought.numerics.least_squares import LinearFit, RankDeficiencyError, solve
from knought.numerics.quantiles import chi_square_survival, student_quantile

if TYPE_CHECKING:
    from collections.abc import Mapping, Sequence

    from numpy.typing import ArrayLike

__all__ = ["Line", "Order", "Orders", "partial_orders", "rate_line"]

_SIGNIFICANCE = 0.05


@dataclass(frozen=True)
class Order:
    """A partial order.

    Attributes
    ----------
    species
        In which reactant.
    value, standard_uncertainty
        The order.
    interval
        95 % interval, Student t.
    nearest_integer
        The whole number next to it.
    integer_probability
        Two-sided probability of being so far from that whole number by chance.
    """

    species: str
    value: float
    standard_uncertainty: float
    interval: tuple[float, float]
    nearest_integer: int
    integer_probability: float

    @property
    def is_integer(self) -> bool:
        """Whether a whole number, and only one, lies in the interval."""
        low, high = self.interval
        return math.floor(high) - math.ceil(low) == 0


@dataclass(frozen=True, eq=False)
class Orders:
    """Partial orders from one joint fit.

    Attributes
    ----------
    orders
        One a reactant.
    ln_k, u_ln_k
        ln of the rate constant of the first group with these orders, and its standard uncertainty.
    chi_square, degrees_of_freedom
        Of the fit with the uncertainties as given; from scatter where none were.
    caveats
        What a reader must know.
    """

    orders: tuple[Order, ...]
    ln_k: float
    u_ln_k: float
    chi_square: float
    degrees_of_freedom: int
    caveats: tuple[Caveat, ...] = ()


@dataclass(frozen=True, eq=False)
class Line:
    """A straight line through rates.

    Attributes
    ----------
    slope, u_slope
        k, and its standard uncertainty.
    intercept, u_intercept
        Rate without reactants, or k_obs without the one in excess.
    intercept_probability
        Two-sided probability of an intercept so far from zero by chance.
    through_origin, u_through_origin
        k where the line is held to zero.
    degrees_of_freedom
        Of the line with intercept.
    caveats
        What a reader must know.
    """

    slope: float
    u_slope: float
    intercept: float
    u_intercept: float
    intercept_probability: float
    through_origin: float
    u_through_origin: float
    degrees_of_freedom: int
    caveats: tuple[Caveat, ...] = ()

    @property
    def rate_constant(self) -> tuple[float, float]:
        """Return k and u: with the intercept where it is significant at 5 %, else without."""
        if self.intercept_probability < _SIGNIFICANCE:
            return self.slope, self.u_slope
        return self.through_origin, self.u_through_origin


def partial_orders(
    rates: ArrayLike,
    concentrations: Mapping[str, ArrayLike],
    u_rates: ArrayLike | None = None,
    groups: Sequence[int] | None = None,
) -> Orders:
    """Return the partial orders in all reactants from one fit of ln rate.

    Parameters
    ----------
    rates : (n,) array_like
        Rates, above zero.
    concentrations
        Concentrations in mol/L by reactant, each ``(n,)``, above zero.
    u_rates : (n,) array_like, optional
        Standard uncertainties of the rates. Where the scatter is larger than they say (or none
        are given) u is from the scatter.
    groups
        Condition of each run by number, 0, 1, ...: runs of one group share T and I, and each group
        has a rate constant of its own. One group if not given.

    Raises
    ------
    InputError
        If a number cannot be, there are too few runs, or the concentrations were varied together
        so that their orders cannot be told apart.
    """
    rate = _positive(rates, "rate")
    names = tuple(concentrations)
    columns = [_positive(concentrations[name], f"c({name})") for name in names]
    member = np.zeros(len(rate), dtype=int) if groups is None else np.asarray(groups, dtype=int)
    blocks = (member[:, None] == np.unique(member)).astype(float)
    n, p = len(rate), len(names) + blocks.shape[1]
    if any(len(column) != n for column in (*columns, member)) or n <= p:
        raise InputError(
            f"{n} rates for {p} unknowns", "give each run its concentrations, and more runs"
        )
    u = None if u_rates is None else _positive(u_rates, "u(rate)") / rate
    centred = [np.log(column) for column in columns]
    design = np.column_stack([blocks, *centred])
    fit, factor, nu = _solved(design, np.log(rate), u, names)
    u_all = np.sqrt(np.diag(fit.covariance)) * factor
    orders = tuple(
        _order(name, float(fit.parameters[i]), float(u_all[i]), nu)
        for i, name in enumerate(names, start=blocks.shape[1])
    )
    return Orders(
        orders,
        float(fit.parameters[0]),
        float(u_all[0]),
        fit.chi_square,
        fit.degrees_of_freedom,
        tuple(_order_caveats(orders)),
    )


def _solved(
    design: FloatArray, y: FloatArray, u: FloatArray | None, names: tuple[str, ...]
) -> tuple[LinearFit, float, float]:
    """Solve; return the fit, the factor on its standard errors, and their degrees of freedom.

    Raises
    ------
    InputError
        If the columns depend on each other.
    """
    try:
        fit = solve(design, y, u)
    except RankDeficiencyError as error:
        raise InputError(
            f"the runs cannot tell {', '.join(names)} apart",
            "vary one concentration at a time, each over a factor of three or more",
        ) from error
    left = fit.degrees_of_freedom
    scatter = math.sqrt(fit.chi_square / left)
    too_small = u is None or chi_square_survival(fit.chi_square, left) < _SIGNIFICANCE
    return (fit, scatter, float(left)) if too_small else (fit, 1.0, math.inf)


def _order(name: str, value: float, u: float, nu: float) -> Order:
    reach = student_quantile(0.975, nu) * u
    nearest = round(value)
    away = abs(value - nearest) / u if u > 0 else math.inf * (value != nearest)
    return Order(
        name, value, u, (value - reach, value + reach), nearest, _two_sided(float(away), nu)
    )


def _two_sided(standard: float, nu: float) -> float:
    from scipy.special import ndtr, stdtr

    below = ndtr(-standard) if math.isinf(nu) else stdtr(nu, -standard)
    return float(2 * below)


def _order_caveats(orders: tuple[Order, ...]) -> list[Caveat]:
    said = []
    for each in orders:
        low, high = each.interval
        between = f"{each.value:.2f} (95 %: {low:.2f} to {high:.2f})"
        if each.integer_probability < _SIGNIFICANCE:
            said.append(
                Caveat(
                    "order-not-integer",
                    f"The order in {each.species} is {between}: no whole number. A rate law with "
                    "several terms, a pre-equilibrium, or a half order?",
                )
            )
        elif not each.is_integer:
            said.append(
                Caveat(
                    "order-undecided",
                    f"The order in {each.species} is {between}: more than one whole number fits. "
                    "Vary its concentration over a wider range.",
                )
            )
    return said


def rate_line(
    rates: ArrayLike,
    product: ArrayLike,
    u_rates: ArrayLike | None = None,
) -> Line:
    """Return k as the slope of rates against a product of concentrations, intercept tested.

    Parameters
    ----------
    rates : (n,) array_like
        Rates in mol L^-1 s^-1 against Π c^n, or k_obs in s^-1 against the concentration in excess.
    product : (n,) array_like
        The abscissa.
    u_rates : (n,) array_like, optional
        Standard uncertainties. Where the scatter is larger than they say (or none are given) u is
        from the scatter.

    Raises
    ------
    InputError
        If a number cannot be, there are fewer than 3 runs, or all share one abscissa.
    """
    y, x = np.asarray(rates, dtype=float), _positive(product, "product of concentrations")
    if y.shape != x.shape or len(x) < 3 or not np.isfinite(y).all():
        raise InputError(f"{len(x)} runs for a line", "give three or more rates, one a run")
    u = None if u_rates is None else _positive(u_rates, "u(rate)")
    line, factor, nu = _solved(np.column_stack([np.ones(len(x)), x]), y, u, ("concentrations",))
    held, held_factor, _ = _solved(x[:, None], y, u, ("concentrations",))
    u_both = np.sqrt(np.diag(line.covariance)) * factor
    intercept = float(line.parameters[0])
    standard = abs(intercept) / float(u_both[0]) if u_both[0] > 0 else math.inf
    chance = _two_sided(standard, nu)
    return Line(
        float(line.parameters[1]),
        float(u_both[1]),
        intercept,
        float(u_both[0]),
        chance,
        float(held.parameters[0]),
        float(math.sqrt(held.covariance[0, 0]) * held_factor),
        line.degrees_of_freedom,
        tuple(_line_caveats(intercept, float(u_both[0]), chance)),
    )


def _line_caveats(intercept: float, u: float, chance: float) -> list[Caveat]:
    if chance >= _SIGNIFICANCE:
        return []
    reason = (
        "a reverse or parallel path, or a blank that was not taken off"
        if intercept > 0
        else "an order above one, or an error of the smallest concentrations"
    )
    return [
        Caveat(
            "line-intercept",
            f"The line does not go through zero: intercept {intercept:.3g} ± {u:.2g} "
            f"(p = {chance:.2g}): {reason}. k is the slope of the line with intercept.",
        )
    ]


def _positive(values: ArrayLike, name: str) -> FloatArray:
    """Return values as an array, if all are above zero.

    Raises
    ------
    InputError
        If one is not.
    """
    array = frozen(values)
    if array.ndim != 1 or not np.all(np.isfinite(array) & (array > 0)):
        raise InputError(f"a {name} is not above zero", "leave such runs out; a log needs it")
    return array
