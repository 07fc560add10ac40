"""How fast the work is, beside what it would take otherwise: ratios measured in one run.

Each row times ours and the other alternately and prints the ratio of the medians, so that a loaded
machine slows both. Run on demand:

    python -m tests.benchmarks.speed             all rows
    python -m tests.benchmarks.speed fit import  rows whose name holds one of the words
    python -m tests.benchmarks.speed growth      cost over three decades
"""

from __future__ import annotations

import json
import os
import subprocess
import sys
import tempfile
import time
from dataclasses import dataclass
from functools import cache
from pathlib import Path
from typing import TYPE_CHECKING, Any

import numpy as np

import knought as kn
from knought.laws.open_law import open_grid
from tests.simulation import davies, simulate

if TYPE_CHECKING:
    from collections.abc import Callable

    from knought.arrays import FloatArray

__all__ = ["ROWS", "Row", "main"]

RUNS = 30
STRENGTHS = np.array([0.005, 0.01, 0.02, 0.05, 0.1, 0.2])
TEMPERATURES = (288.15, 295.65, 303.15, 310.65, 318.15)


@dataclass(frozen=True)
class Row:
    """One comparison.

    Attributes
    ----------
    name, other
        What is timed, and against what.
    reach
        What it must reach: ``"10x faster"``.
    ours, theirs
        Time in seconds of one turn of each.
    turns
        How often the two alternate.
    """

    name: str
    other: str
    reach: str
    ours: Callable[[], float]
    theirs: Callable[[], float]
    turns: int = 5


def timed(work: Callable[[], object]) -> float:
    """Return the time of one call."""
    start = time.perf_counter()
    work()
    return time.perf_counter() - start


@cache
def study(studies: int = 1) -> tuple[kn.RateTable, FloatArray]:
    """Thirty runs, truth Davies, z_A z_B = 2, u = 2 %; and k of several studies of that design."""
    made = simulate(
        davies(0.3), 2, STRENGTHS, studies=studies, seed=1, u=0.02, temperatures=TEMPERATURES
    )
    seen, k = made.observations, np.exp(made.ln_k)
    return (
        kn.RateTable.from_arrays(
            seen.T, k[0], seen.ionic_strength, 0.02 * k[0], unit="L mol^-1 s^-1"
        ),
        k,
    )


def _surface(x: FloatArray, ln_k: float, enthalpy: float, charges: float) -> FloatArray:
    """ln k(T, I) of Eyring and Davies with A(T) precomputed in x = (T, A f)."""
    T, screening = x
    R = 8.31446261815324
    law = ln_k + np.log(T / 298.15) - enthalpy / R * (1 / T - 1 / 298.15)
    return np.asarray(law + np.log(10) * 2 * charges * screening)


@cache
def _prepared() -> tuple[FloatArray, FloatArray, FloatArray]:
    rates, _ = study()
    I = np.asarray(rates.I)
    root = np.sqrt(I)
    A = np.array([float(kn.debye_huckel(float(T)).A) for T in rates.T])
    x = np.stack([rates.T, A * (root / (1 + root) - 0.3 * I)])
    return x, np.log(rates.k), np.full(len(rates), 0.02)


def lmfit_once() -> float:
    """One fit of the same surface by lmfit, covariance included."""
    import lmfit

    x, y, u = _prepared()
    model = lmfit.Model(_surface)
    start = model.make_params(ln_k=1.0, enthalpy=50e3, charges=1.0)
    return timed(lambda: model.fit(y, start, x=x, weights=1 / u))


def curve_fit_many(count: int) -> float:
    """So many fits of the same surface by scipy's curve_fit, each to other data."""
    from scipy.optimize import curve_fit

    x, y, u = _prepared()
    noise = 0.02 * np.random.default_rng(2).standard_normal((count, len(y)))

    def loop() -> None:
        for each in noise:
            curve_fit(_surface, x, y + each, p0=(1.0, 50e3, 1.0), sigma=u, absolute_sigma=True)

    return timed(loop)


def bare_draws(draws: int, runs: int, parameters: int) -> float:
    """Draw the normal numbers in blocks and multiply them by one matrix, in bare NumPy."""
    matrix = np.random.default_rng(0).standard_normal((runs, parameters))
    random = np.random.default_rng(1)

    def work() -> None:
        for _ in range(draws // 10_000):
            _ = random.standard_normal((10_000, runs)) @ matrix

    return timed(work)


@cache
def _many(sets: int) -> tuple[FloatArray, FloatArray, kn.RateTable]:
    rates, _ = study()
    random = np.random.default_rng(5)
    u = 0.01 * (1 + random.random((sets, RUNS)))
    k = rates.k * np.exp(u * random.standard_normal((sets, RUNS)))
    return k, u * k, rates


def fit_many(sets: int) -> float:
    """Ours: many data sets with weights of their own."""
    k, u_k, rates = _many(sets)
    return timed(lambda: kn.fit_many(k, u_k, T=rates.T, I=rates.I, order=2, salt_law="davies"))


def normal_equations(sets: int) -> float:
    """Bare batched normal equations, from the same k and u(k)."""
    k, u_k, _ = _many(sets)
    x, _, _ = _prepared()
    X = np.stack([np.ones(RUNS), 1 / x[0] - 1 / 298.15, x[1]], axis=1)

    def work() -> None:
        y, weight = np.log(k), (k / u_k) ** 2
        normal = np.einsum("mn,np,nq->mpq", weight, X, X, optimize=True)
        right = np.einsum("mn,np->mp", weight * y, X)
        theta = np.linalg.solve(normal, right[..., None])[..., 0]
        covariance = np.linalg.inv(normal)
        _ = np.sum(weight * (y - theta @ X.T) ** 2, axis=1), covariance

    return timed(work)


def assess_alone(count: int, of: int) -> float:
    """`count` single assessments, scaled to `of`."""
    rates, k = study(200)
    u = 0.02

    def one(i: int) -> object:
        table = kn.RateTable.from_arrays(rates.T, k[i], rates.I, u * k[i], unit="L mol^-1 s^-1")
        return kn.assess(table).parameters["charge_product"].interval(0.95)

    return timed(lambda: [one(i) for i in range(count)]) * of / count


def assess_batch(sets: int, workers: int = 1) -> float:
    """The same in a batch: open law and every named law of each."""
    rates, k = study(10_000)
    return timed(lambda: kn.assess_many(rates, k[:sets], workers=workers))


def process(*words: str, **more: Any) -> float:
    """Time of a process of this Python."""
    return timed(
        lambda: subprocess.run([sys.executable, *words], check=True, capture_output=True, **more)
    )


def report_once() -> float:
    """``knought report`` on a demo study, as a process."""
    with tempfile.TemporaryDirectory() as folder:
        from importlib import resources

        source = resources.files("knought") / "datasets" / "opposite-charges" / "study.toml"
        out = Path(folder) / "report"
        took = process("-m", "knought", "report", str(source), "--out", str(out))
        _written.clear()
        _written.extend(
            path.suffix[1:] for path in sorted(out.rglob("*")) if path.suffix[1:] in _FORMATS
        )
    return took


_FORMATS = ("svg", "pdf", "png")

#: Formats of the figures that the last report wrote.
_written: list[str] = []


def empty_figures() -> float:
    """Importing matplotlib and saving as many empty figures in the same formats, as a process."""
    code = (
        "import json, os, sys, tempfile\n"
        "from matplotlib.figure import Figure\n"
        "from matplotlib.backends.backend_agg import FigureCanvasAgg\n"
        "formats = json.loads(sys.argv[1])\n"
        "folder = tempfile.mkdtemp()\n"
        "for i, each in enumerate(formats):\n"
        "    figure = Figure(figsize=(7.0 if i % 2 else 3.4, 2.6), dpi=600)\n"
        "    FigureCanvasAgg(figure)\n"
        "    figure.subplots()\n"
        "    figure.savefig(os.path.join(folder, f'{i}.{each}'), format=each)\n"
    )
    return process("-c", code, json.dumps(_written))


def draws(count: int, salt_law: str) -> float:
    """Monte Carlo draws through a named law or the open law."""
    found = kn.fit(study()[0], salt_law=salt_law)
    return timed(lambda: kn.monte_carlo(found, count, seed=1))


def single_fit() -> float:
    """One joint fit of ours, from a table, covariance included."""
    rates, _ = study()
    return timed(lambda: kn.fit(rates, salt_law="davies").covariance())


def single_assess() -> float:
    """One assessment: the open law's whole grid and every named law."""
    rates, _ = study()
    return timed(lambda: kn.assess(rates))


CELLS = open_grid().cells

ROWS = (
    Row("fit, one law pair, 30 runs", "lmfit Model.fit", "10x faster", single_fit, lmfit_once, 15),
    Row(
        "assess, 30 runs",
        f"lmfit in each of {CELLS} cells (20 timed, scaled)",
        "100x faster",
        single_assess,
        lambda: sum(lmfit_once() for _ in range(20)) * CELLS / 20,
    ),
    Row(
        "Monte Carlo, 1e6 draws, one law",
        "the same normal numbers and one product",
        "at most 1.5x",
        lambda: draws(1_000_000, "davies"),
        lambda: bare_draws(1_000_000, RUNS, 3),
    ),
    Row(
        "Monte Carlo, 1e5 draws, open law",
        "curve_fit once a draw (200 timed, scaled)",
        "1000x faster",
        lambda: draws(100_000, "open"),
        lambda: curve_fit_many(200) * 500,
    ),
    Row(
        "fit_many, 100 000 x 30, own weights",
        "bare batched normal equations",
        "at most 3x",
        lambda: fit_many(100_000),
        lambda: normal_equations(100_000),
    ),
    Row(
        "assess_many, 10 000 studies",
        "single calls (50 timed, scaled)",
        "30x faster",
        lambda: assess_batch(10_000),
        lambda: assess_alone(50, 10_000),
        1,
    ),
    Row(
        "knought --help",
        "python -c pass",
        "within 100 ms",
        lambda: process("-m", "knought", "--help"),
        lambda: process("-c", "pass"),
        11,
    ),
    Row(
        "import knought",
        "import numpy",
        "within 250 ms",
        lambda: process("-c", "import knought; knought.assess"),
        lambda: process("-c", "import numpy"),
        11,
    ),
    Row(
        "knought report, a demo study",
        "as many empty figures in the same formats",
        "at most 3x",
        report_once,
        empty_figures,
        3,
    ),
    Row(
        "assess_many, 2 000 studies, two processes",
        "one process",
        "about twice as fast",
        lambda: assess_batch(2_000, 2),
        lambda: assess_batch(2_000, 1),
        1,
    ),
)


def compare(row: Row) -> str:
    """Return one line of the table."""
    ours, theirs = [], []
    for _ in range(row.turns):
        ours.append(row.ours())
        theirs.append(row.theirs())
    one, other = float(np.median(ours)), float(np.median(theirs))
    ratio = other / one
    said = f"{ratio:.3g}x faster" if ratio >= 1 else f"{1 / ratio:.3g}x its time"
    if "ms" in row.reach:
        said = f"{(one - other) * 1e3:+.0f} ms"
    return f"| {row.name} | {row.other} | {row.reach} | {said} | {one:.3g} s | {other:.3g} s |"


def _growing_fit(runs: int) -> float:
    rates, _ = study()
    copies = runs // RUNS
    T, I, k = (np.tile(np.asarray(each), copies) for each in (rates.T, rates.I, rates.k))
    table = kn.RateTable.from_arrays(T, k, I, 0.02 * k, unit="L mol^-1 s^-1")
    return timed(lambda: kn.fit(table, salt_law="davies"))


GROWTH: dict[str, tuple[tuple[int, ...], Callable[[int], float]]] = {
    "runs in one fit": (
        (30, 300, 3_000, 30_000),
        _growing_fit,
    ),
    "Monte Carlo draws, open law": (
        (10_000, 100_000, 1_000_000, 10_000_000),
        lambda n: draws(n, "open"),
    ),
    "data sets of fit_many": ((300, 3_000, 30_000, 300_000), fit_many),
    "data sets of assess_many": ((10, 100, 1_000, 10_000), assess_batch),
}


def growth() -> None:
    """Print time against size over three decades."""
    for name, (sizes, work) in GROWTH.items():
        work(sizes[0])
        times = [work(size) for size in sizes]
        slope = np.log(times[-1] / times[-2]) / np.log(sizes[-1] / sizes[-2])
        cells = ", ".join(f"{size:g}: {t:.3g} s" for size, t in zip(sizes, times, strict=True))
        print(f"{name}: {cells}; last decade grows as size^{slope:.2f}", flush=True)


def main(words: list[str]) -> None:
    """Print the rows that were asked for."""
    os.environ.setdefault("OPENBLAS_NUM_THREADS", "1")
    if words == ["growth"]:
        growth()
        return
    print("| what | against | reach | measured | ours | theirs |\n|---|---|---|---|---|---|")
    for row in ROWS:
        if not words or any(word in row.name for word in words):
            print(compare(row), flush=True)


if __name__ == "__main__":
    main(sys.argv[1:])
