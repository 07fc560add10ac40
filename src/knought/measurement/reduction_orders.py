"""Whether the runs of a reduction bear out the orders that were stated, and a line through zero.

Runs at one temperature and one ionic strength (of one salt) whose concentrations were varied say
what the orders are. All such groups are fitted jointly, each with a rate constant of its own; the
orders that come out are held against those stated. Nothing is chosen: an order left open is refused
together with what the runs say of it.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from knought.errors import Caveat, InputError, Problem
from knought.measurement.orders import partial_orders, rate_line

if TYPE_CHECKING:
    from collections.abc import Mapping, Sequence

    from knought.arrays import FloatArray, IndexArray
    from knought.measurement.orders import Order
    from knought.measurement.reduction_amounts import Amount
    from knought.measurement.reduction_method import Method
    from knought.measurement.reduction_run import ReducedRun
    from knought.measurement.runs_reading import Runs

__all__ = ["OrderCheck", "check_orders", "require_orders"]

#: A concentration was varied where its largest value in a group is this many times its smallest.
_VARIED = 1.2

#: Temperatures (K) and ionic strengths (relative) closer than this are one condition.
_SAME_T, _SAME_I = 0.3, 0.05

#: Runs of one condition that a line with intercept needs.
_FOR_A_LINE = 4


@dataclass(frozen=True)
class OrderCheck:
    """What the runs say of the orders.

    Attributes
    ----------
    orders
        From the joint fit; those of the concentrations that were varied.
    lines
        What to say.
    caveats
        What a reader must know.
    """

    orders: tuple[Order, ...]
    lines: tuple[str, ...]
    caveats: tuple[Caveat, ...]


def check_orders(
    runs: Runs,
    amounts: Mapping[str, Amount],
    method: Method,
    found: Sequence[ReducedRun],
    I: FloatArray | None,
) -> OrderCheck:
    """Hold the stated orders against the runs.

    Parameters
    ----------
    runs, method
        As for :func:`knought.measurement.reduction.reduce_traces`.
    amounts
        Concentrations of what the orders name.
    found
        What each run gave.
    I : (n,) ndarray, optional
        Ionic strengths, mol/L.
    """
    named = {**method.orders, **dict.fromkeys(method.open_orders)}
    values = {name: amounts[name].values for name in named}
    group = _groups(runs, I)
    varied = [name for name, c in values.items() if _is_varied(c, group)]
    if not varied:
        said = "no concentration was varied at one T and I: the runs do not test the orders"
        return OrderCheck((), (said,) if named else (), ())
    rates = np.array([each.value for each in found])
    u = np.array([each.u for each in found])
    rest = np.ones(len(rates))
    for name, n in named.items():
        if name not in varied and n is not None:
            rest = rest * values[name] ** float(n)
    usable = (rates > 0) & (u > 0)
    members = np.unique(group[usable], return_inverse=True)[1]
    try:
        fit = partial_orders(
            rates[usable] / rest[usable],
            {name: values[name][usable] for name in varied},
            np.hypot(u[usable], method.repeatability * rates[usable]) / rest[usable],
            members.tolist(),
        )
    except InputError as error:
        said = f"the orders cannot be tested: {error.problems[0].what}"
        return OrderCheck((), (said,), ())
    lines = ["orders from the runs jointly, a rate constant for each T and I: " + _said(fit.orders)]
    caveats = [
        caveat
        for each in fit.orders
        if (caveat := _against(each, method.orders.get(each.species))) is not None
    ]
    if not method.open_orders:
        product = math.prod(values[name] ** float(n) for name, n in method.orders.items())
        line, more = _through_zero(rates, u, np.asarray(product), group, found)
        lines += line
        caveats += more
    return OrderCheck(fit.orders, tuple(lines), tuple(caveats))


def require_orders(method: Method, check: OrderCheck) -> None:
    """Refuse orders that were left open, with what the runs say of them.

    Raises
    ------
    InputError
        If an order is open.
    """
    if not method.open_orders:
        return
    by_name = {each.species: each for each in check.orders}
    raise InputError(
        [
            Problem(
                f"the order in {name} is open; "
                + (f"the runs say {_one(by_name[name])}" if name in by_name else check.lines[0]),
                f'state it in [traces.orders], as in "{name}" = 1, if the mechanism bears it out',
            )
            for name in method.open_orders
        ]
    )


def _groups(runs: Runs, I: FloatArray | None) -> IndexArray:
    """Return the number of the condition of each run."""
    salt = runs.words.get("salt", ("",) * len(runs.run))
    strength = np.zeros(len(runs.run)) if I is None else I
    firsts: list[int] = []
    group = np.zeros(len(runs.run), dtype=np.intp)
    for i in range(len(runs.run)):
        for number, j in enumerate(firsts):
            near = abs(strength[i] - strength[j]) <= _SAME_I * max(strength[i], strength[j])
            if abs(runs.T[i] - runs.T[j]) <= _SAME_T and near and salt[i] == salt[j]:
                group[i] = number
                break
        else:
            group[i] = len(firsts)
            firsts.append(i)
    return group


def _is_varied(c: FloatArray, group: IndexArray) -> bool:
    return any(
        c[group == number].max() > _VARIED * c[group == number].min() for number in np.unique(group)
    )


def _said(orders: Sequence[Order]) -> str:
    return "; ".join(f"{each.species}: {_one(each)}" for each in orders)


def _one(order: Order) -> str:
    low, high = order.interval
    return (
        f"{order.value:.3f} ± {order.standard_uncertainty:.3f}, 95 % {low:.2f} to {high:.2f} "
        f"(whole number {order.nearest_integer}: p = {order.integer_probability:.2g})"
    )


def _against(order: Order, stated: object) -> Caveat | None:
    """Warn where a stated order lies outside the interval of the runs."""
    if stated is None:
        return None
    low, high = order.interval
    if low <= float(stated) <= high:  # type: ignore[arg-type]
        return None
    return Caveat(
        "order-contradicted",
        f"The order {stated} in {order.species} that was stated lies outside what the runs say, "
        f"{order.value:.2f} with a 95 % interval from {low:.2f} to {high:.2f}: k drifts with that "
        "concentration. A parallel path, a pre-equilibrium, or a concentration that is not what "
        "it seems?",
    )


def _through_zero(
    rates: FloatArray,
    u: FloatArray,
    product: FloatArray,
    group: IndexArray,
    found: Sequence[ReducedRun],
) -> tuple[list[str], list[Caveat]]:
    """Test the intercept of rate (k_obs) against the product of concentrations, by condition."""
    lines, caveats = [], []
    for number in np.unique(group):
        inside = (group == number) & (u > 0)
        spread = product[inside]
        if inside.sum() < _FOR_A_LINE or spread.max() <= _VARIED * spread.min():
            continue
        try:
            line = rate_line(rates[inside], spread, u[inside])
        except InputError as error:
            lines.append(f"no line: {error.problems[0].what}")
            continue
        first = found[int(np.flatnonzero(inside)[0])].run
        lines.append(
            f"line through the {int(inside.sum())} runs at the T and I of run {first}: slope "
            f"{line.slope:.4g} ± {line.u_slope:.2g}, intercept {line.intercept:.3g} ± "
            f"{line.u_intercept:.2g} (zero: p = {line.intercept_probability:.2g}); through zero "
            f"{line.through_origin:.4g} ± {line.u_through_origin:.2g}"
        )
        caveats += [
            Caveat(
                each.code,
                f"At the T and I of run {first}: {each.message} The table's k of each run takes "
                "the intercept for zero.",
            )
            for each in line.caveats
        ]
    return lines, caveats
