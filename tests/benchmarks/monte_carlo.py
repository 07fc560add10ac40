"""Monte Carlo of one law beside the least that it could cost, and the memory it takes.

    python -m tests.benchmarks.monte_carlo

A million draws of one law at 30 runs without errors of T and I, against drawing the standard
normals and one matrix product; and 100 000 draws that are refitted, with errors of T and I.
"""

from __future__ import annotations

import resource
import time
from dataclasses import replace
from typing import TYPE_CHECKING

import numpy as np

from knought.arrays import frozen
from knought.fitting.monte_carlo import monte_carlo
from knought.fitting.surface_fit import fit_surface
from knought.measurement.shared_errors import SharedError
from tests.simulation import guntelberg, simulate

if TYPE_CHECKING:
    from collections.abc import Callable

DRAWS = 1_000_000
STRENGTHS = np.geomspace(0.005, 0.2, 6)
TEMPERATURES = tuple(np.linspace(288.15, 318.15, 5))


def seconds(work: Callable[[], object], times: int = 3) -> float:
    """The shortest of several runs."""
    found = []
    for _ in range(times):
        start = time.perf_counter()
        work()
        found.append(time.perf_counter() - start)
    return min(found)


def least(gain: np.ndarray, seed: int = 1) -> None:
    """Draw normals and multiply, in blocks."""
    random = np.random.Generator(np.random.Philox(seed))
    theta = np.empty((DRAWS, len(gain)))
    for start in range(0, DRAWS, 10_000):
        theta[start : start + 10_000] = random.standard_normal((10_000, gain.shape[1])) @ gain.T


def main() -> None:
    """Measure and print."""
    made = simulate(guntelberg, 2, STRENGTHS, studies=1, seed=1, temperatures=TEMPERATURES)
    seen = made.observations
    found = fit_surface(seen, salt_law="guntelberg", scatter="given")
    before = resource.getrusage(resource.RUSAGE_SELF).ru_maxrss
    ours = seconds(lambda: monte_carlo(found, DRAWS))
    memory = (resource.getrusage(resource.RUSAGE_SELF).ru_maxrss - before) / 1024
    bare = seconds(lambda: least(found.headline_solution.gain))
    print(
        f"{DRAWS} draws of one law, {seen.runs} runs: {ours:.2f} s; normals and one product "
        f"{bare:.2f} s; ratio {ours / bare:.2f}; {memory:.0f} MB more at the peak"
    )
    moved = replace(
        seen,
        u_T=frozen(np.full(seen.runs, 0.1)),
        u_I=frozen(0.01 * seen.ionic_strength),
        shared=(SharedError("probe offset", "temperature-offset", 0.2),),
    )
    other = fit_surface(moved, salt_law="guntelberg", scatter="given")
    refitted = seconds(lambda: monte_carlo(other, DRAWS // 10), 1)
    print(f"{DRAWS // 10} draws refitted at drawn T and I: {refitted:.2f} s")


if __name__ == "__main__":
    main()
