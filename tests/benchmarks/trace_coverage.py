"""How often 95 % intervals of slopes and of k_obs hold the truth, over a seeded design of traces.

On demand: ``python -m tests.benchmarks.trace_coverage`` prints the table of DEVELOPERS.md. The
seeds are no seeds of the suite, and none that priors or rules were tuned on.
"""

from __future__ import annotations

import argparse
import sys
from dataclasses import dataclass
from itertools import product

import numpy as np

from knought.measurement.first_order import first_orders
from knought.measurement.initial_slope_rule import initial_slopes
from tests.measurement.simulated_traces import noisy

#: Noise by name: autoregression, its share of the variance.
NOISES = {
    "white": (0.0, 0.0),
    "φ = 0.6": (0.6, 1.0),
    "φ = 0.85, half": (0.85, 0.5),
    "φ = 0.9": (0.9, 1.0),
    "φ = 0.97": (0.97, 1.0),
}
POINTS = (40, 80, 120, 600, 2000)
#: k times the length of the record, for slopes and for k_obs.
REACHES = {"slope": (0.2, 1.0, 3.0), "k_obs": (1.5, 4.0, 8.0)}
SIZES = (0.002, 0.01)
DEAD_TIMES = (0.0, 0.03)


@dataclass(frozen=True)
class Cell:
    """One cell of the design and what was found there."""

    what: str
    noise: str
    points: int
    reach: float
    size: float
    dead_time: float

    def coverage(self, records: int, seed: int) -> float:
        """Return the share of intervals that hold the truth."""
        t = np.linspace(0.0, 1.0, self.points)
        phi, share = NOISES[self.noise]
        noise = noisy(records, self.points, phi, share, self.size, seed)
        if self.what == "slope":
            signal = -np.expm1(-self.reach * t) / self.reach
            slopes = initial_slopes(t, signal + noise, dead_time=self.dead_time)
            return float(slopes.covered(1.0).mean())
        signal = 0.3 - np.expm1(-self.reach * t)
        return float(
            first_orders(t, signal + noise, dead_time=self.dead_time).covered(self.reach).mean()
        )


def design() -> list[Cell]:
    """Return every cell."""
    return [
        Cell(what, noise, points, reach, size, dead)
        for what, reaches in REACHES.items()
        for noise, points, reach, size, dead in product(NOISES, POINTS, reaches, SIZES, DEAD_TIMES)
    ]


def table(found: dict[Cell, float]) -> str:
    """Return lowest and mean coverage by noise and number of points, as Markdown."""
    lines = ["| noise | points | slope, lowest | slope, mean | k_obs, lowest | k_obs, mean |"]
    lines.append("|---|---|---|---|---|---|")
    for noise, points in product(NOISES, POINTS):
        cells = [noise, str(points)]
        for what in REACHES:
            held = [
                share
                for cell, share in found.items()
                if (cell.what, cell.noise, cell.points) == (what, noise, points)
            ]
            cells += [f"{min(held):.1%}", f"{np.mean(held):.1%}"]
        lines.append(f"| {' | '.join(cells)} |")
    return "\n".join(lines)


def main(words: list[str]) -> None:
    """Run the design and print the table."""
    parser = argparse.ArgumentParser(description=__doc__)
    parser.add_argument("--records", type=int, default=400)
    parser.add_argument("--seed", type=int, default=7_310_000)
    options = parser.parse_args(words)
    found = {
        cell: cell.coverage(options.records, options.seed + number)
        for number, cell in enumerate(design())
    }
    print(table(found))


if __name__ == "__main__":
    main(sys.argv[1:])
