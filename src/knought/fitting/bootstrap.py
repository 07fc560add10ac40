"""Bootstrap: the scatter of the answer under runs drawn again.

Parametric: new ln k from the fitted surface with the errors of the runs and those that they share.
Case: runs drawn with replacement, which trusts no error model but needs many runs (Efron and
Tibshirani 1993, chapters 6 and 9). Both refit the same laws with the same choices.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TYPE_CHECKING, Literal

import numpy as np

from knought.arrays import FloatArray, frozen
from knought.errors import InputError
from knought.fitting.influence import refit, subset
from knought.given import given_count
from knought.measurement.shared_errors import unit_draws
from knought.numerics.seeds import DEFAULT_SEED, generator

if TYPE_CHECKING:
    from collections.abc import Callable, Mapping

    from knought.fitting.found import Found

__all__ = ["Bootstrap", "bootstrap"]


@dataclass(frozen=True, eq=False)
class Bootstrap:
    """Answers from runs drawn again.

    Attributes
    ----------
    kind, seed
        Which bootstrap, and the seed of its generator.
    values
        Parameter to its value in each replicate, ``(m,)``, in SI units.
    refused
        Replicates whose runs could not carry the laws; left out.
    """

    kind: Literal["parametric", "case"]
    seed: int
    values: Mapping[str, FloatArray]
    refused: int

    def standard_uncertainty(self, name: str) -> float:
        """Return the standard deviation of a parameter over the replicates."""
        return float(self.values[name].std(ddof=1))

    def interval(self, name: str, coverage: float = 0.95) -> tuple[float, float]:
        """Return the percentile interval of a parameter."""
        tail = (1 - coverage) / 2
        low, high = np.quantile(self.values[name], [tail, 1 - tail])
        return float(low), float(high)


def bootstrap(
    found: Found,
    replicates: int = 1000,
    *,
    kind: Literal["parametric", "case"] = "parametric",
    seed: int = DEFAULT_SEED,
    progress: Callable[[int], None] | None = None,
) -> Bootstrap:
    """Refit runs drawn again and collect the answers.

    Parameters
    ----------
    found
        The fit.
    replicates
        How many times.
    kind
        ``"parametric"`` or ``"case"``.
    seed
        Of the generator; each replicate has a stream of its own.
    progress
        Told after each replicate how many are done.

    Returns
    -------
    Bootstrap

    Raises
    ------
    InputError
        If fewer than two replicates are asked for, or hardly any of them can be fitted.
    """
    given_count(seed, "the seed", 0, 2**128)
    if given_count(replicates, "the number of replicates", -1, 10**9) < 2:
        raise InputError(f"{replicates} replicates say nothing", "ask for 200 or more")
    names = [name for name, each in found.parameters.items() if not each.given]
    rows: list[list[float]] = []
    for number in range(replicates):
        random = generator(seed, number)
        try:
            again = _again(found, kind, random)
        except InputError:
            continue  # counted below: a draw of runs that cannot carry the laws
        finally:
            if progress is not None:
                progress(number + 1)
        rows.append([float(again.parameters[name].value) for name in names])
    if len(rows) < max(2, replicates // 2):
        raise InputError(
            f"only {len(rows)} of {replicates} draws of the runs can carry the laws",
            "there are too few runs for a bootstrap; use Monte Carlo",
        )
    values = np.array(rows)
    return Bootstrap(
        kind,
        seed,
        {name: frozen(values[:, j]) for j, name in enumerate(names)},
        replicates - len(rows),
    )


def _again(found: Found, kind: Literal["parametric", "case"], random: np.random.Generator) -> Found:
    seen = found.observations
    if kind == "case":
        return refit(found, subset(seen, random.integers(0, seen.runs, seen.runs)))
    ln_k = found.predicted_ln_k + found.effective_u * random.standard_normal(seen.runs)
    for error, effect in zip(seen.shared, found.errors.shared.T, strict=True):
        ln_k = ln_k + effect * unit_draws(error, random, 1)
    return refit(found, replace(seen, ln_k=frozen(ln_k)))
