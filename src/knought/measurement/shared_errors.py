"""Named errors, those that several runs share and each run's own, and what they do to ln k.

A probe that reads 0.2 K high moves every run the same way: treated as independent, such an error
would seem to average out. Each shared error keeps its name, so that every result has a budget. What
one standard uncertainty of it does to ln k of each run, J, follows from the slopes of the surface,
which the fit supplies:

| kind | u is | J |
| temperature-offset | in K | u ∂ln k/∂T |
| temperature-gain | relative, about a calibration point | u (T - T_cal) ∂ln k/∂T |
| factor | relative, on k | u |
| ionic-strength-factor | relative | u I ∂ln k/∂I |
| by-run | relative, of one source | u (∂ln k/∂ln s + ∂ln I/∂ln s I ∂ln k/∂I) |

Molar absorptivity and path length are factors on k. A stock that runs hold different shares of, or
an equilibrium constant, moves each run by its own amount, perhaps in k and in I at once: ``by-run``
keeps that as one source. An error that each run has of its own (the reading of a thermometer, a
pipette) adds J² to the variance of its ln k.
"""

from __future__ import annotations

import math
from dataclasses import dataclass, field
from types import MappingProxyType
from typing import TYPE_CHECKING, Literal

import numpy as np

from knought.errors import InputError
from knought.given import given_number

if TYPE_CHECKING:
    from collections.abc import Mapping

    from knought.arrays import FloatArray

__all__ = ["DISTRIBUTIONS", "KINDS", "SharedError", "unit_draws"]

Kind = Literal[
    "temperature-offset", "temperature-gain", "factor", "ionic-strength-factor", "by-run"
]
Distribution = Literal["normal", "rectangular", "triangular", "t"]

#: Kinds of shared error, with the unit of u.
KINDS = {
    "temperature-offset": "K",
    "temperature-gain": "1",
    "factor": "1",
    "ionic-strength-factor": "1",
    "by-run": "1",
}

DISTRIBUTIONS = ("normal", "rectangular", "triangular", "t")


@dataclass(frozen=True)
class SharedError:
    """An error common to all runs or to those of a batch, or one that each run has of its own.

    Parameters
    ----------
    name
        What it is called in the budget, ``"probe offset"``.
    kind
        ``"temperature-offset"``, ``"temperature-gain"``, ``"factor"``,
        ``"ionic-strength-factor"`` or ``"by-run"``.
    u
        Its standard uncertainty: in K for an offset, relative for the others. Of a rectangular
        error of half-width a it is a/√3, of a triangular one a/√6 (JCGM 100, 4.3.7 and 4.3.9).
    batch
        The batch that shares it; all runs if not given.
    distribution
        ``"normal"``, ``"rectangular"``, ``"triangular"`` or ``"t"``: its shape in Monte Carlo.
    degrees_of_freedom
        Of a ``"t"`` distribution, above 2.
    calibrated_at
        Temperature in K at which a gain does nothing.
    each_run
        Whether each run has an error like this of its own, instead of one that they share.
    on_ln_k, on_ln_I
        Of the kind ``"by-run"``: ∂ln k/∂ln s and ∂ln I/∂ln s of each run by its label, where s is
        the source that u belongs to. A run that is not named is taken as the mean of those that
        are: a run still to be made.

    Raises
    ------
    InputError
        If the kind or distribution is unknown, or a number cannot be.
    """

    name: str
    kind: Kind
    u: float
    batch: str | None = None
    distribution: Distribution = "normal"
    degrees_of_freedom: float | None = None
    calibrated_at: float = 298.15
    each_run: bool = False
    on_ln_k: Mapping[str, float] = field(default_factory=dict)
    on_ln_I: Mapping[str, float] = field(default_factory=dict)

    def __post_init__(self) -> None:
        object.__setattr__(self, "on_ln_k", MappingProxyType(dict(self.on_ln_k)))
        object.__setattr__(self, "on_ln_I", MappingProxyType(dict(self.on_ln_I)))
        if not all(isinstance(word, str) for word in (self.name, self.kind)):
            raise InputError("name and kind of a shared error are words", "write them as text")
        self._check_runs()
        if not self.name.strip():
            raise InputError("a shared error has no name", "name it as the budget should")
        if self.kind not in KINDS:
            raise InputError(
                f"a shared error is of kind {self.kind!r}", f"choose from {', '.join(KINDS)}"
            )
        if self.distribution not in DISTRIBUTIONS:
            raise InputError(
                f"a shared error has the distribution {self.distribution!r}",
                f"choose from {', '.join(DISTRIBUTIONS)}",
            )
        object.__setattr__(self, "u", given_number(self.u, f"u of {self.name!r}"))
        if not self.u > 0:
            raise InputError(
                f"the shared error {self.name!r} has u = {self.u:g}",
                "give its standard uncertainty, above zero; leave it out if there is none",
            )
        if self.kind != "temperature-offset" and self.u >= 1:
            raise InputError(
                f"the shared error {self.name!r} has a relative u of {self.u:g}",
                "give it as a fraction: 2 % is 0.02",
            )
        needs = self.distribution == "t"
        if needs and not (self.degrees_of_freedom or 0) > 2:
            raise InputError(
                f"the shared error {self.name!r} needs more than 2 degrees of freedom",
                "a t distribution has no standard uncertainty otherwise",
            )
        if self.each_run and self.kind == "temperature-gain":
            raise InputError(
                f"{self.name!r} is a gain of temperature of each run",
                "a gain belongs to a probe and is shared; each run has a temperature-offset",
            )
        if not 0 < self.calibrated_at < math.inf:
            raise InputError(
                f"the shared error {self.name!r} is calibrated at {self.calibrated_at:g} K",
                "give a temperature in K",
            )

    def _check_runs(self) -> None:
        """Refuse effects on runs where they have no meaning, or none where they are needed.

        Raises
        ------
        InputError
            If so.
        """
        effects = (*self.on_ln_k.values(), *self.on_ln_I.values())
        if (self.kind == "by-run") != bool(effects):
            raise InputError(
                f"the shared error {self.name!r} is of kind {self.kind!r} "
                + ("with effects on runs" if effects else "without effects on runs"),
                'on_ln_k and on_ln_I belong to the kind "by-run", and it needs one of them',
            )
        if not all(map(math.isfinite, effects)):
            raise InputError(
                f"an effect of the shared error {self.name!r} is not a number",
                "give ∂ln k/∂ln s by run",
            )

    def effect(
        self,
        T: FloatArray,
        I: FloatArray,
        slope_T: FloatArray,
        slope_I: FloatArray,
        batch: tuple[str, ...] | None,
        run: tuple[str, ...] | None = None,
    ) -> FloatArray:
        """Return what one standard uncertainty does to ln k of each run, shape ``(n,)``.

        Parameters
        ----------
        T, I : (n,) ndarray
            Conditions of the runs, K and mol/L.
        slope_T, slope_I : (n,) ndarray
            ∂ln k/∂T in K^-1 and ∂ln k/∂I in L/mol there, finite.
        batch
            Batch of each run.
        run
            Label of each run; runs without one are runs still to be made.

        Raises
        ------
        InputError
            If the error belongs to a batch that no run has.
        """
        if self.kind == "temperature-offset":
            whole = slope_T
        elif self.kind == "temperature-gain":
            whole = (T - self.calibrated_at) * slope_T
        elif self.kind == "factor":
            whole = np.ones_like(T)
        elif self.kind == "by-run":
            labels = run or ("",) * len(T)
            whole = _of_runs(self.on_ln_k, labels) + _of_runs(self.on_ln_I, labels) * I * slope_I
        else:
            whole = I * slope_I
        return np.asarray(self.u * whole * self.reach(len(T), batch))

    def reach(self, runs: int, batch: tuple[str, ...] | None) -> FloatArray:
        """Return 1 for each run that has the error and 0 for the others, shape ``(n,)``.

        Parameters
        ----------
        runs
            How many.
        batch
            Batch of each run.

        Raises
        ------
        InputError
            If the error belongs to a batch that no run has.
        """
        if self.batch is None:
            return np.ones(runs)
        member = np.array([each == self.batch for each in batch or ("",) * runs], dtype=float)
        if not member.any():
            known = sorted(set(batch or ())) or ["no batches"]
            raise InputError(
                f"the shared error {self.name!r} belongs to the batch {self.batch!r}, which no "
                "run has",
                f"the runs have {', '.join(known)}",
            )
        return member


def _of_runs(effects: Mapping[str, float], labels: tuple[str, ...]) -> FloatArray:
    """Return the effect on each run; their mean for a run that is not named."""
    typical = float(np.mean(list(effects.values()))) if effects else 0.0
    return np.array([effects.get(label, typical) for label in labels])


def unit_draws(error: SharedError, random: np.random.Generator, count: int) -> FloatArray:
    """Draw a shared error in units of its standard uncertainty, mean zero, shape ``(count,)``.

    JCGM 101, 6.4: rectangular ±√3, triangular ±√6, t scaled to unit standard deviation.
    """
    if error.distribution == "rectangular":
        return random.uniform(-math.sqrt(3), math.sqrt(3), count)
    if error.distribution == "triangular":
        return random.triangular(-math.sqrt(6), 0.0, math.sqrt(6), count)
    if error.distribution == "t" and error.degrees_of_freedom is not None:
        nu = error.degrees_of_freedom
        return random.standard_t(nu, count) * math.sqrt((nu - 2) / nu)
    return random.standard_normal(count)
