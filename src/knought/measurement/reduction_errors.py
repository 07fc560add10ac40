"""Errors that the runs of a reduction share, each by its name.

What one source does to ln k (or to I) is one number for all runs where it is nearly the same for
all; else its root mean square is taken for k, and for I it goes into u(I) of each run, and a line
of the account says so.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from knought.measurement.shared_errors import SharedError

if TYPE_CHECKING:
    from collections.abc import Mapping, Sequence

    from knought.arrays import FloatArray
    from knought.chemistry.medium_series import MediumSeries
    from knought.measurement.reduction import Method
    from knought.measurement.runs_reading import Runs

__all__ = ["shared_errors_of"]

#: Effects of one source on several runs that differ by less than this share are one number.
_ALIKE = 0.1

#: Effects on I below this relative size are not worth a name.
_NEGLIGIBLE = 1e-4


def shared_errors_of(
    runs: Runs, method: Method, media: MediumSeries | None, constants: Sequence[Mapping[str, float]]
) -> tuple[tuple[SharedError, ...], FloatArray | None, list[str]]:
    """Return the shared errors, u(I) of each run's own, and lines that say so.

    Parameters
    ----------
    runs, method, media
        As for :func:`knought.measurement.reduction.reduce_traces`.
    constants
        What one standard uncertainty of each equilibrium constant does to ln k, run by run.
    """
    errors = list(() if method.optics is None else method.optics.shared_errors())
    lines: list[str] = []
    for name, n in method.orders.items():
        u = method.stocks.get(name, 0.0) * abs(float(n))
        if u:
            errors.append(SharedError(f"stock of {name}", kind="factor", u=u))
    for reaction in dict.fromkeys(name for each in constants for name in each):
        effects = np.array([each.get(reaction, 0.0) for each in constants])
        if np.any(effects):
            size = float(np.sqrt(np.mean(effects**2)))
            errors.append(SharedError(f"K of {reaction}", kind="factor", u=size))
            if np.ptp(effects) > _ALIKE * size:
                lines.append(
                    f"K of {reaction} moves ln k by {effects.min():.2g} to {effects.max():.2g} "
                    f"from run to run; the shared error takes their root mean square, {size:.2g}"
                )
    u_I = None
    if media is not None and runs.I is None:
        more, u_I, further = _of_ionic_strength(media)
        errors += more
        lines += further
    return tuple(errors), u_I, lines


def _of_ionic_strength(
    media: MediumSeries,
) -> tuple[list[SharedError], FloatArray | None, list[str]]:
    """Split u(I) into shared factors, where a source moves every I alike, and each run's own."""
    errors: list[SharedError] = []
    lines: list[str] = []
    variance = media.own**2
    for name, column in zip(media.sources, media.shared.T, strict=True):
        relative = column / media.ionic_strength
        size = float(np.sqrt(np.mean(relative**2)))
        if size < _NEGLIGIBLE:
            continue
        if np.ptp(relative) <= _ALIKE * size:
            errors.append(SharedError(f"{name} in I", kind="ionic-strength-factor", u=size))
        else:
            variance = variance + column**2
            lines.append(
                f"{name} moves I by {100 * relative.min():.2g} to {100 * relative.max():.2g} % "
                "from run to run; it is in u(I) of each run"
            )
    u_I = np.sqrt(variance)
    return errors, (u_I if np.all(u_I > 0) else None), lines
