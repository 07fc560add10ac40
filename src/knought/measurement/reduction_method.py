"""How traces or slopes become rate constants: what the user decides of a reduction."""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import TYPE_CHECKING, Literal

if TYPE_CHECKING:
    from collections.abc import Mapping
    from fractions import Fraction

    from knought.measurement.absorbance import Optics

__all__ = ["Kind", "Method"]

Kind = Literal["first-order", "initial-slope", "slopes"]


@dataclass(frozen=True, eq=False)
class Method:
    """How traces become rate constants.

    Parameters
    ----------
    kind
        ``"first-order"``, ``"initial-slope"`` or ``"slopes"``.
    orders
        Partial orders by substance. For ``"first-order"`` those of reactants in excess, by whose
        concentration k_obs is divided.
    open_orders
        Substances whose order is not known yet: the reduction says what the runs tell of it, and
        stops.
    initial, final
        Known level of first-order traces at t = 0 or at the end; at most one.
    total_change
        Change of the signal over the whole reaction, for the share of conversion that an initial
        slope's window holds.
    blank
        Slope of a blank (drift of instrument or solution) in s^-1 with its standard uncertainty,
        taken off every initial slope; its error is shared by all runs.
    dead_time, window
        First and last time to use, s.
    polynomial
        Order of the polynomial for initial slopes.
    drift
        Whether first-order traces drift.
    repeatability
        Relative standard uncertainty of one run beside the noise of its trace (mixing, its own
        temperature), as repeats tell it.
    optics
        What makes a slope a rate; needed for slopes.
    stocks
        Relative standard uncertainty of the concentration of each substance, by substance; stocks
        of a recipe bring their own.
    """

    kind: Kind
    orders: Mapping[str, Fraction] = field(default_factory=dict)
    initial: float | None = None
    final: float | None = None
    total_change: float | None = None
    blank: tuple[float, float] | None = None
    dead_time: float = 0.0
    window: float | None = None
    polynomial: int | None = None
    drift: bool = False
    repeatability: float = 0.0
    optics: Optics | None = None
    stocks: Mapping[str, float] = field(default_factory=dict)
    open_orders: tuple[str, ...] = ()

    def lines(self, order: Fraction) -> tuple[str, ...]:
        """Say what is done, for an overall order of the reaction: trace, rate, k."""
        found = [self._trace_line()]
        if self.optics is not None and self.kind != "first-order":
            found.append(self.optics.line())
        if self.orders:
            over = "k_obs" if self.kind == "first-order" else "rate"
            orders = ", ".join(f"{n} in {name}" for name, n in self.orders.items())
            found.append(f"k = {over} over the concentrations, with the orders {orders}")
        found[-1] += f"; overall order {order}"
        if self.repeatability:
            found.append(
                f"u of every k holds {100 * self.repeatability:.2g} % of repeatability, as stated"
            )
        return tuple(found)

    def _trace_line(self) -> str:
        if self.kind == "slopes":
            return "slopes of absorbance and their u as given"
        dead = f"; points before {self.dead_time:g} s are left out" if self.dead_time else ""
        end = f"; points after {self.window:g} s are left out" if self.window else ""
        if self.kind == "first-order":
            known = "".join(
                f", the level at {when} known to be {level:g}"
                for when, level in (("t = 0", self.initial), ("the end", self.final))
                if level is not None
            )
            drift = ", with a linear drift" if self.drift else ""
            return f"single exponential to each trace{known}{drift}{dead}{end}"
        rule = (
            "window and order of the polynomial by the rule: the longest window from the beginning "
            "in which order 3 or less leaves nothing that higher terms explain, and one order more"
            if self.polynomial is None
            else f"polynomial of order {self.polynomial}"
        )
        blank = (
            f"; the blank's slope, {self.blank[0]:.4g} s^-1 with u = {self.blank[1]:.2g} s^-1, "
            "is taken off"
            if self.blank
            else ""
        )
        return (
            f"slope of each trace at t = 0; {rule}; correlation of the noise learnt from the "
            f"trace{dead}{end}{blank}"
        )
