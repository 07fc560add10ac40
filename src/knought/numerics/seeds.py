"""Random numbers that can be drawn again: every generator comes from a seed that is kept."""

from __future__ import annotations

import numpy as np

__all__ = ["DEFAULT_SEED", "generator"]

#: Used when the user gives no seed; printed and recorded all the same.
DEFAULT_SEED = 20_250_101


def generator(seed: int, *path: int) -> np.random.Generator:
    """Return a generator for `seed`, independent for each `path`.

    Parameters
    ----------
    seed
        The study's seed, at least zero.
    path
        Numbers that name the piece of work (data set, block), so that its draws do not depend on
        what else was drawn before it, nor on the number of workers.

    Returns
    -------
    numpy.random.Generator
        Philox seeded through SeedSequence's spawn key.
    """
    return np.random.Generator(np.random.Philox(np.random.SeedSequence(seed, spawn_key=path)))
