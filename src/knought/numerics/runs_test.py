"""The runs test asks whether signs follow each other as chance would have them.

Exact distribution of the number of runs of two kinds of signs (Wald and Wolfowitz, Ann. Math.
Statist. 11 (1940) 147), by counting.
"""

from __future__ import annotations

from math import comb
from typing import TYPE_CHECKING

import numpy as np

if TYPE_CHECKING:
    from knought.arrays import FloatArray

__all__ = ["runs_probability"]


def runs_probability(values: FloatArray) -> float:
    """Return the probability of as few runs of signs as there are, or fewer.

    Parameters
    ----------
    values : (n,) ndarray
        Residuals in order; zeros count as positive.

    Returns
    -------
    float
        Small where neighbours share their sign too often; 1 where all signs are alike, of which
        the test says nothing.
    """
    signs = np.asarray(values) >= 0
    plus, minus = int(signs.sum()), int((~signs).sum())
    if plus == 0 or minus == 0:
        return 1.0
    seen = 1 + int(np.sum(signs[1:] != signs[:-1]))
    ways = sum(_ways(plus, minus, count) for count in range(2, seen + 1))
    return ways / comb(plus + minus, plus)


def _ways(plus: int, minus: int, runs: int) -> int:
    """Count the arrangements with exactly that many runs."""
    half, odd = divmod(runs, 2)
    if not odd:
        return 2 * comb(plus - 1, half - 1) * comb(minus - 1, half - 1)
    return comb(plus - 1, half) * comb(minus - 1, half - 1) + comb(plus - 1, half - 1) * comb(
        minus - 1, half
    )
