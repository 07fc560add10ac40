"""What 95 % intervals hold where scatter is added to errors of known size: by integration.

    python -m tests.benchmarks.scatter_beside_known

x ~ N(μ, a² + σ²), ν s²/σ² ~ χ²_ν, a known. For each ν and a/σ, the coverage of the interval that
the package gives, and of the one with g = 1 (a prior of σ that is flat in its logarithm).
"""

from __future__ import annotations

from typing import TYPE_CHECKING
from unittest.mock import patch

import numpy as np
from scipy.special import ndtr
from scipy.stats import chi2

from knought.numerics import scatter_beside_known as module

if TYPE_CHECKING:
    from knought.arrays import FloatArray

RATIOS = (0.01, 0.1, 0.2, 0.35, 0.5, 0.7, 1, 1.4, 2, 3, 5, 10, 30, 100)
DEGREES = (1, 2, 3, 4, 5, 7, 10, 20)


def coverage(nu: int, ratios: tuple[float, ...] = RATIOS, level: float = 0.95) -> list[float]:
    """Coverage for each ratio a/σ."""
    grid = np.geomspace(1e-7, 1e5, 300)
    found = module.scatter_beside_known(np.zeros(300), grid**2, np.ones(300), nu)
    half = found.quantile((1 + level) / 2)
    s = np.sqrt(chi2.ppf((np.arange(20_000) + 0.5) / 20_000, nu) / nu)
    held = []
    for a in ratios:
        width = a * np.exp(np.interp(np.log(s / a), np.log(grid), np.log(half)))
        held.append(float(np.mean(2 * ndtr(width / np.hypot(a, 1)) - 1)))
    return held


def flat(share: FloatArray, degrees_of_freedom: float) -> FloatArray:
    """ln g of the prior that is flat in ln σ."""
    return np.zeros_like(share)


def show(title: str) -> None:
    """Print the coverages of 95 % intervals."""
    print(f"\n{title}: coverage in % of 95 % intervals, by a/σ")
    print("   ν  " + "".join(f"{ratio:>6g}" for ratio in RATIOS))
    for nu in DEGREES:
        print(f"{nu:4d}  " + "".join(f"{100 * held:6.1f}" for held in coverage(nu)))


def main() -> None:
    """Print both tables."""
    show("as used")
    with patch.object(module, "_log_prior", flat):
        show("g = 1")
    print("\nas used, 90 % and 99 % intervals at ν = 1, 2, 3: lowest and highest")
    for level in (0.90, 0.99):
        for nu in (1, 2, 3):
            held = coverage(nu, level=level)
            print(f"{level:.0%} at ν = {nu}: {min(held):.1%} to {max(held):.1%}")


if __name__ == "__main__":
    main()
