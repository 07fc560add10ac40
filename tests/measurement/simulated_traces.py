"""Noise of a photometer: white, and wander that is correlated from one point to the next."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from knought.numerics.seeds import generator

if TYPE_CHECKING:
    from knought.arrays import FloatArray


def noisy(
    records: int, points: int, phi: float, share: float, size: float, seed: int
) -> FloatArray:
    """Records of noise, share of variance an autoregression of first order with `phi`."""
    # Not the seeds with which the noise's priors and the rule of the slope were chosen.
    random = generator(41_771, seed)
    white = random.standard_normal((records, points))
    wander = random.standard_normal((records, points))
    for i in range(1, points):
        wander[:, i] = phi * wander[:, i - 1] + np.sqrt(1 - phi**2) * wander[:, i]
    return np.asarray(size * (np.sqrt(1 - share) * white + np.sqrt(share) * wander))
