"""Errors that the runs of a reduction share, each by its name, and those of each run's recipe.

One source, one name: a stock may move the ionic strength, the concentration that a rate is divided
by, and the share of a product that is bound, all at once and by its own amount in every run. The
effects of one standard uncertainty are gathered by source; where they are alike in all runs the
source is a plain factor, else it keeps its effect on each run (kind ``by-run``).
"""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import TYPE_CHECKING

import numpy as np

from knought.measurement.reduction_amounts import amount_of
from knought.measurement.shared_errors import SharedError

if TYPE_CHECKING:
    from collections.abc import Mapping, Sequence

    from knought.arrays import FloatArray
    from knought.chemistry.medium_series import MediumSeries
    from knought.measurement.reduction_amounts import Amount
    from knought.measurement.reduction_method import Method
    from knought.measurement.reduction_run import ReducedRun
    from knought.measurement.runs_reading import Runs

__all__ = ["ReductionErrors", "errors_of"]

#: Effects of one source that differ by less than this share are one number.
_ALIKE = 1e-6

#: Effects below this relative size are not worth a name.
_NEGLIGIBLE = 1e-6


@dataclass(frozen=True, eq=False)
class ReductionErrors:
    """Errors of a reduction beside those of the traces.

    Attributes
    ----------
    shared
        Errors that runs share.
    own : (n,) ndarray
        Relative standard uncertainty of each k from the volumes of its own recipe.
    u_I : (n,) ndarray or None
        Standard uncertainty of each run's own ionic strength, mol/L.
    lines
        What to say of them.
    """

    shared: tuple[SharedError, ...]
    own: FloatArray
    u_I: FloatArray | None
    lines: tuple[str, ...]


@dataclass
class _Effects:
    """What one standard uncertainty of one source does, run by run."""

    runs: int
    on_ln_k: dict[str, FloatArray] = field(default_factory=dict)
    on_ln_I: dict[str, FloatArray] = field(default_factory=dict)
    u: dict[str, float] = field(default_factory=dict)

    def add(self, source: str, on_ln_k: FloatArray | float, u: float | None = None) -> None:
        zero = np.zeros(self.runs)
        self.on_ln_k[source] = self.on_ln_k.get(source, zero) + on_ln_k
        if u is not None:
            self.u[source] = u

    def errors(self, labels: tuple[str, ...]) -> list[SharedError]:
        names = dict.fromkeys((*self.on_ln_k, *self.on_ln_I))
        found = [self._error(name, labels) for name in names]
        return [each for each in found if each is not None]

    def _error(self, name: str, labels: tuple[str, ...]) -> SharedError | None:
        zero = np.zeros(self.runs)
        in_k, in_I = self.on_ln_k.get(name, zero), self.on_ln_I.get(name, zero)
        size_k, size_I = (float(np.sqrt(np.mean(each**2))) for each in (in_k, in_I))
        if max(size_k, size_I) < _NEGLIGIBLE:
            return None
        if size_I < _NEGLIGIBLE and np.ptp(in_k) <= _ALIKE * size_k:
            return SharedError(name, kind="factor", u=size_k)
        if size_k < _NEGLIGIBLE and np.ptp(in_I) <= _ALIKE * size_I:
            return SharedError(name, kind="ionic-strength-factor", u=size_I)
        u = self.u.get(name, max(size_k, size_I))

        def by_run(effects: FloatArray, size: float) -> Mapping[str, float]:
            if size < _NEGLIGIBLE:
                return {}
            return {
                run: float(f"{each / u:.6g}") for run, each in zip(labels, effects, strict=True)
            }

        return SharedError(
            name, "by-run", u, on_ln_k=by_run(in_k, size_k), on_ln_I=by_run(in_I, size_I)
        )


def errors_of(
    runs: Runs,
    method: Method,
    media: MediumSeries | None,
    amounts: Mapping[str, Amount],
    found: Sequence[ReducedRun],
) -> ReductionErrors:
    """Return the errors that runs share, and those of each run's own recipe.

    Parameters
    ----------
    runs, method, media
        As for :func:`knought.measurement.reduction.reduce_traces`.
    amounts
        Concentrations of what the orders name.
    found
        What each run gave.
    """
    n = len(runs.run)
    effects = _Effects(n)
    for each in () if method.optics is None else method.optics.shared_errors():
        effects.add(each.name, each.u)
    for name, power in method.orders.items():
        if method.stocks.get(name):
            effects.add(f"stock of {name}", -float(power) * method.stocks[name])
    for name in dict.fromkeys(name for each in found for name in each.by_constant):
        effects.add(name, np.array([each.by_constant.get(name, 0.0) for each in found]))
    strengths = _on_rate(runs, method, media, amounts, found)
    own = np.zeros(n)
    if media is not None and media.recipes:
        stocks = {stock.name: stock.u for recipe in media.recipes for stock in recipe.stocks}
        for name, effect in strengths.items():
            if stocks.get(name):
                effects.add(f"stock {name}", effect * stocks[name], stocks[name])
        u_volume = np.array([recipe.u_volume for recipe in media.recipes])
        own = u_volume * np.sqrt(sum((effect**2 for effect in strengths.values()), np.zeros(n)))
    u_I = None
    if media is not None and runs.I is None:
        for name, column in zip(media.sources, media.shared.T, strict=True):
            effects.on_ln_I[name] = column / media.ionic_strength
            stock = name.removeprefix("stock ")
            u = {s.name: s.u for recipe in media.recipes for s in recipe.stocks}.get(stock)
            if name.startswith("stock ") and u:
                effects.u[name] = u
        u_I = media.own if np.all(media.own > 0) else None
    shared = effects.errors(runs.run)
    return ReductionErrors(tuple(shared), own, u_I, tuple(_lines(shared)))


def _on_rate(
    runs: Runs,
    method: Method,
    media: MediumSeries | None,
    amounts: Mapping[str, Amount],
    found: Sequence[ReducedRun],
) -> dict[str, FloatArray]:
    """Return ∂ln k/∂ln c of each stock of the recipes: through the orders, and what binds."""
    total: dict[str, FloatArray] = {}
    for name, power in method.orders.items():
        for stock, share in amounts[name].by_stock.items():
            total[stock] = total.get(stock, np.zeros(len(runs.run))) - float(power) * share
    ligands = dict.fromkeys(name for each in found for name in each.by_ligand)
    if media is None or not media.recipes:
        return total
    for ligand in ligands:
        slope = np.array([each.by_ligand.get(ligand, 0.0) for each in found])
        for stock, share in amount_of(ligand, runs, media).by_stock.items():
            total[stock] = total.get(stock, np.zeros(len(runs.run))) + slope * share
    return total


def _lines(shared: Sequence[SharedError]) -> list[str]:
    """Say which sources move runs unequally, and by how much."""
    lines = []
    for each in shared:
        if each.kind != "by-run":
            continue
        parts = []
        for what, effects in (("k", each.on_ln_k), ("I", each.on_ln_I)):
            if effects:
                parts.append(f"{what} by {_range(100 * each.u * np.array([*effects.values()]))} %")
        lines.append(
            f"one standard uncertainty of {each.name} moves {' and '.join(parts)}, as one shared "
            "error"
        )
    return lines


def _range(values: FloatArray) -> str:
    """Write the ends of values with two digits; one where they read alike."""
    ends = [f"{float(end):.2g}".replace("-", "−") for end in (values.min(), values.max())]
    return ends[0] if ends[0] == ends[1] else " to ".join(ends)
