"""What moves when something is left out: one run, one temperature, one ionic strength, one salt."""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

import numpy as np

from knought.arrays import frozen
from knought.errors import InputError
from knought.fitting.ion_size import fit_ion_size
from knought.fitting.open_fit import OpenFit, fit_open
from knought.fitting.surface_fit import fit_surface

if TYPE_CHECKING:
    from collections.abc import Callable, Mapping, Sequence

    from knought.arrays import IndexArray
    from knought.fitting.found import Found
    from knought.fitting.observations import Observations
    from knought.fitting.scatter import ScatterChoice

__all__ = ["Influence", "influence", "refit", "subset"]


@dataclass(frozen=True)
class Influence:
    """What leaving something out does.

    Attributes
    ----------
    kind
        ``"run"``, ``"temperature"``, ``"ionic strength"``, ``"salt"`` or ``"batch"``.
    label
        Which one.
    runs
        Indices of the runs left out.
    shifts
        Parameter to its change over its standard uncertainty with everything in.
    """

    kind: str
    label: str
    runs: tuple[int, ...]
    shifts: Mapping[str, float]

    @property
    def largest(self) -> float:
        """Largest change of any parameter, in standard uncertainties."""
        return max((abs(shift) for shift in self.shifts.values()), default=0.0)


def influence(
    found: Found,
    names: Sequence[str] = ("rate_constant", "activation_energy", "charge_product"),
    progress: Callable[[int, int], None] | None = None,
) -> tuple[Influence, ...]:
    """Refit without each run, temperature, ionic strength, salt and batch in turn.

    Parameters
    ----------
    found
        The fit.
    names
        Parameters whose changes are reported, where the fit has them.
    progress
        Told after each refit how many of how many are done.

    Returns
    -------
    tuple of Influence
        Those left out of which the rest still carries the fit.
    """
    seen = found.observations
    wanted = [
        name for name in names if name in found.parameters and not found.parameters[name].given
    ]
    groups = [*_groups(seen)]
    made = []
    for done, (kind, label, left_out) in enumerate(groups, start=1):
        rest = np.setdiff1d(np.arange(seen.runs), left_out)
        try:
            other = refit(found, subset(seen, rest))
        except InputError:
            continue  # the rest cannot carry the laws: nothing to compare with
        finally:
            if progress is not None:
                progress(done, len(groups))
        shifts = {}
        for name in wanted:
            before, after = found.parameters[name], other.parameters[name]
            u = float(before.standard_uncertainty)
            shifts[name] = (float(after.value) - float(before.value)) / u
        made.append(Influence(kind, label, tuple(int(i) for i in left_out), shifts))
    return tuple(made)


def _groups(seen: Observations) -> list[tuple[str, str, IndexArray]]:
    names = seen.run or tuple(str(i + 1) for i in range(seen.runs))
    groups = [("run", names[i], np.array([i])) for i in range(seen.runs)]
    for kind, values, levels, unit in (
        ("temperature", seen.T, seen.temperature_levels, "K"),
        ("ionic strength", seen.ionic_strength, seen.ionic_strength_levels, "mol/L"),
    ):
        if len(levels) < 2:
            continue
        nearest = np.argmin(np.abs(values[:, None] - levels), axis=1)
        groups += [
            (kind, f"{level:.5g} {unit}", np.flatnonzero(nearest == j))
            for j, level in enumerate(levels)
        ]
    for kind, labels in (("salt", seen.salt), ("batch", seen.batch)):
        if labels is None or len(set(labels)) < 2:
            continue
        groups += [
            (kind, each, np.array([i for i, label in enumerate(labels) if label == each]))
            for each in sorted(set(labels))
        ]
    return groups


def subset(seen: Observations, kept: IndexArray) -> Observations:
    """Return the observations of some runs only.

    Parameters
    ----------
    seen
        The runs.
    kept : (m,) ndarray of int
        Which to keep; may repeat.
    """

    def part(values: object) -> object:
        if values is None:
            return None
        if isinstance(values, tuple):
            return tuple(values[i] for i in kept)
        return frozen(np.asarray(values)[kept])

    names = ("ln_k", "u", "T", "I", "u_T", "u_I", "batch", "salt", "run")
    rest = replace(seen, **{name: part(getattr(seen, name)) for name in names})  # type: ignore[arg-type]
    # An error of a batch goes with the batch.
    here = {None, *(rest.batch or ())}
    return replace(
        rest,
        shared=tuple(error for error in seen.shared if error.batch in here),
        own=tuple(error for error in seen.own if error.batch in here),
    )


def refit(found: Found, seen: Observations) -> Found:
    """Fit the same laws, with the same choices, to other runs.

    Raises
    ------
    InputError
        If they cannot carry the laws.
    """
    choice: ScatterChoice = "given" if found.scatter.kind == "given" else "scatter"
    if isinstance(found, OpenFit):
        return fit_open(
            seen,
            temperature_law=found.temperature_law,
            reference_temperature=found.reference_temperature,
            standard_concentration=found.surface.standard_concentration,
            charge_product=found.charge_product_given,
            priors=found.grid.priors,
            scatter=choice,
        )
    if "ion_size" in found.surface.parameters:
        # The law of such a fit is linear about its own å; other runs have another.
        return fit_ion_size(
            seen,
            temperature_law=found.temperature_law,
            reference_temperature=found.reference_temperature,
            scatter=choice,
        )
    return fit_surface(
        seen,
        temperature_law=found.temperature_law,
        salt_law=found.surface.salt_law,
        reference_temperature=found.reference_temperature,
        standard_concentration=found.surface.standard_concentration,
        scatter=choice,
    )
