"""How often nominal 95 % intervals hold the truth: simulated studies over a seeded design.

    python -m tests.benchmarks.coverage run [--cells 360] [--studies 4000] [--workers 2]
    python -m tests.benchmarks.coverage recount
    python -m tests.benchmarks.coverage table

``run`` goes on where it stopped (results are kept line by line in ``coverage.csv`` beside this
script), ``table`` prints the summary that stands in DEVELOPERS.md. A cell is one truth, charge
product, range of I, design of runs, size of u, stated or from scatter, with or without shared
errors. Cells 360 to 387 have errors of each run's T and I besides, and a fit of their own for every
study (:mod:`tests.benchmarks.coverage_conditions`). ``recount`` counts the named laws' intervals of
scatter beside shared errors once more, which is quick, and keeps what stands of the open law.
Whether an interval holds the truth is read from the distribution function at the truth, which is
the same statement and needs no root; mean widths come from a hundred studies.
"""

from __future__ import annotations

import argparse
import csv
import math
from concurrent.futures import ProcessPoolExecutor
from dataclasses import dataclass
from fractions import Fraction
from pathlib import Path

import numpy as np

from knought.arrays import FloatArray, frozen
from knought.chemistry.activity import DaviesForm
from knought.fitting.observations import Observations
from knought.fitting.open_fit import open_solver
from knought.fitting.run_errors import RunErrors, run_errors
from knought.laws.activation import activation_rows
from knought.laws.open_law import open_grid
from knought.laws.salt import SALT_LAWS, SaltLaw, salt_law
from knought.laws.surface import Surface
from knought.laws.temperature import temperature_law
from knought.measurement.shared_errors import SharedError
from knought.numerics.least_squares import solve
from knought.numerics.quantiles import Mixture
from knought.numerics.scatter_beside_known import scatter_beside_known
from tests.simulation import (
    BOLTZMANN,
    GAS_CONSTANT,
    PLANCK,
    Truth,
    davies,
    extended,
    guntelberg,
    pitzer,
    sit,
)

RESULTS = Path(__file__).with_name("coverage.csv")

T_REF, ENTHALPY, ENTROPY = 298.15, 55_000.0, -50.0
QUANTITIES = ("activation_energy", "activation_entropy", "rate_constant", "charge_product")
NAMED = ("limiting", "guntelberg", "extended", "davies", "sit", "pitzer")
CHUNK, WIDTHS = 100, 100


def second_order(T: FloatArray, I: FloatArray, z: float) -> FloatArray:
    """Pitzer form with a second-order term that depends on I: outside the open law's form."""
    x = 2 * np.sqrt(I)
    return np.asarray(pitzer(T, I, z) + 0.3 * I * 2 / x**2 * (1 - (1 + x) * np.exp(-x)))


def ion_pair(T: FloatArray, I: FloatArray, z: float) -> FloatArray:
    """Güntelberg, and a reactant that pairs with the salt (K = 4 L/mol), inert in the pair."""
    return np.asarray(guntelberg(T, I, z) - np.log10(1 + 4 * I / (1 + 10 * np.sqrt(I))))


@dataclass(frozen=True)
class Law:
    """A truth, the law that is right for it, and whether the open law's priors cover it."""

    truth: Truth
    known: SaltLaw | None
    covered: bool = True
    only_neutral: bool = False


def _linear(T: FloatArray, I: FloatArray, z: float) -> FloatArray:
    return 0.3 * I


LAWS: dict[str, Law] = {
    "extended 3 Å": Law(extended(3), salt_law("extended", ion_size=3e-10)),
    "extended 4.5 Å": Law(extended(4.5), salt_law("extended")),
    "extended 6 Å": Law(extended(6), salt_law("extended", ion_size=6e-10)),
    "extended 9 Å": Law(extended(9), salt_law("extended", ion_size=9e-10)),
    "Güntelberg": Law(guntelberg, SALT_LAWS["guntelberg"]),
    "Davies 0.2": Law(davies(0.2), SaltLaw("davies", "Davies 0.2", DaviesForm(0.2))),
    "Davies 0.3": Law(davies(0.3), SALT_LAWS["davies"]),
    "SIT +0.4": Law(sit(0.4), SALT_LAWS["sit"]),
    "SIT +0.1": Law(sit(0.1), SALT_LAWS["sit"]),
    "SIT -0.3": Law(sit(-0.3), SALT_LAWS["sit"]),
    "Pitzer form": Law(pitzer, SALT_LAWS["pitzer"]),
    "linear +0.3": Law(_linear, SALT_LAWS["linear"], only_neutral=True),
    "second-order term": Law(second_order, None, covered=False),
    "ion pair": Law(ion_pair, None, covered=False),
}

CHARGES = (0, 1, -1, 2, -2, 4, -4)
RANGES = ((0.005, 0.1), (0.005, 0.2), (0.02, 0.5))
DESIGNS = (5, 6, 9, 12, 18, 30)
SHARED = (
    SharedError("absorptivity", "factor", 0.03),
    SharedError("probe offset", "temperature-offset", 0.2),
    SharedError("salt scale", "ionic-strength-factor", 0.02),
)


@dataclass(frozen=True)
class Cell:
    """One cell of the design."""

    number: int
    law: str
    charges: int
    span: tuple[float, float]
    runs: int
    u: float
    stated: bool
    shared: bool
    u_T: float = 0.0
    u_I: float = 0.0


#: The first cell whose runs have errors of T and I, and how many such cells there are.
CONDITIONS_FROM, CONDITIONS_CELLS = 360, 28


def cells_with_condition_errors() -> list[Cell]:
    """Cells whose runs have errors of their own T (K) and I (relative): two of every truth."""
    random = np.random.default_rng(20261202)
    names = list(LAWS)
    return [
        Cell(
            CONDITIONS_FROM + number,
            names[number % len(names)],
            0 if LAWS[names[number % len(names)]].only_neutral else int(random.choice(CHARGES)),
            RANGES[random.integers(len(RANGES))],
            int(random.choice(DESIGNS)),
            float(random.choice([0.01, 0.02, 0.04])),
            stated=True,
            shared=bool(random.integers(2)),
            u_T=float(random.choice([0.05, 0.1, 0.3])),
            u_I=float(random.choice([0.01, 0.03])),
        )
        for number in range(CONDITIONS_CELLS)
    ]


def cells(count: int) -> list[Cell]:
    """A seeded fraction of the full design: every truth equally often, the rest drawn."""
    random = np.random.default_rng(20261201)
    made = []
    names = list(LAWS)
    for number in range(count):
        name = names[number % len(names)]
        made.append(
            Cell(
                number,
                name,
                0 if LAWS[name].only_neutral else int(random.choice(CHARGES)),
                RANGES[random.integers(len(RANGES))],
                int(random.choice(DESIGNS)),
                float(random.choice([0.01, 0.02, 0.04])),
                bool(random.integers(2)),
                bool(random.integers(2)),
            )
        )
    return made


def conditions(runs: int, span: tuple[float, float]) -> tuple[FloatArray, FloatArray]:
    """Temperatures and ionic strengths of a design with that many runs."""
    if runs == 5:  # a cross: three ionic strengths in the middle, the other temperatures beside it
        I = np.geomspace(*span, 3)
        return np.array([288.15, 298.15, 298.15, 298.15, 308.15]), I[[1, 0, 1, 2, 1]]
    temperatures, strengths = {6: (2, 3), 9: (3, 3), 12: (3, 4), 18: (3, 6), 30: (5, 6)}[runs]
    T, I = np.meshgrid(
        np.linspace(288.15, 318.15, temperatures), np.geomspace(*span, strengths), indexing="ij"
    )
    return T.ravel(), I.ravel()


def evaluate(cell: Cell, studies: int) -> dict[str, object]:
    """Simulate a cell and count how often each interval holds the truth."""
    if cell.u_T > 0:
        from tests.benchmarks.coverage_conditions import evaluate_one_by_one

        return labels(cell, studies) | evaluate_one_by_one(cell, studies)
    law = LAWS[cell.law]
    seen, errors, observed = simulated(cell, studies)
    true = true_values(cell.charges)
    found = labels(cell, studies)
    held, width = _open(seen, errors, observed, true, cell.stated)
    found |= {f"open {name}": value for name, value in held.items()}
    found |= {f"width {name}": value for name, value in width.items()}
    return found | _named_laws(law, seen, errors, observed, true, cell.stated)


def simulated(cell: Cell, studies: int) -> tuple[Observations, RunErrors, FloatArray]:
    """Return the conditions of a cell, the errors of its runs, and ln k of every study."""
    law = LAWS[cell.law]
    T, I = conditions(cell.runs, cell.span)
    n = len(T)
    exact = true_ln_k(law.truth, cell.charges, T, I)
    seen = Observations(
        frozen(exact),
        frozen(np.full(n, cell.u)),
        frozen(T),
        frozen(I),
        None,
        None,
        u_given=cell.stated,
        order=Fraction(2),
        shared=SHARED if cell.shared else (),
    )
    errors = run_errors(seen, *_true_slopes(law.truth, cell.charges, T, I))
    random = np.random.default_rng([20261201, cell.number])
    noise = cell.u * random.standard_normal((studies, n))
    common = random.standard_normal((studies, errors.shared.shape[1])) @ errors.shared.T
    observed = exact + noise + common
    return seen, errors, observed


def labels(cell: Cell, studies: int) -> dict[str, object]:
    """What a line of the results says of its cell."""
    return {
        "cell": cell.number,
        "law": cell.law,
        "charges": cell.charges,
        "span": f"{cell.span[0]}-{cell.span[1]}",
        "runs": cell.runs,
        "u": cell.u,
        "u from": "stated" if cell.stated else "scatter",
        "shared": int(cell.shared),
        "u(T)": cell.u_T,
        "u(I)": cell.u_I,
        "studies": studies,
        "covered": int(LAWS[cell.law].covered),
    }


def _named_laws(
    law: Law,
    seen: Observations,
    errors: RunErrors,
    observed: FloatArray,
    true: dict[str, float],
    stated: bool,
) -> dict[str, object]:
    found: dict[str, object] = {}
    if law.known is not None:
        held = _named(law.known, seen, errors, observed, true, stated)
        found |= {f"known {name}": value for name, value in held.items()}
    for name in NAMED:
        held = _named(SALT_LAWS[name], seen, errors, observed, true, stated)
        for quantity in ("rate_constant", "charge_product"):
            found[f"{name} {quantity}"] = held[quantity]
    return found


def recount(studies: int) -> None:
    """Count the named laws' intervals of scatter beside shared errors once more."""
    rows, made = read(), {cell.number: cell for cell in cells(CONDITIONS_FROM)}
    for row in rows:
        cell = made.get(int(row["cell"]))
        if cell is None or cell.stated or not cell.shared or int(row["studies"]) != studies:
            continue
        known = true_values(cell.charges)
        fresh = _named_laws(LAWS[cell.law], *simulated(cell, studies), known, cell.stated)
        row |= {key: str(_short(value)) for key, value in fresh.items()}
        print(f"cell {cell.number}: {cell.law}", flush=True)
    with RESULTS.open("w", newline="", encoding="utf-8") as stream:
        writer = csv.DictWriter(stream, COLUMNS, lineterminator="\n", restval="0")
        writer.writeheader()
        writer.writerows(rows)


def true_ln_k(truth: Truth, charges: float, T: FloatArray, I: FloatArray) -> FloatArray:
    """ln k of a truth without error."""
    return np.asarray(_eyring(T) + np.log(10) * truth(T, I, charges))


def _eyring(T: FloatArray) -> FloatArray:
    eyring = np.log(BOLTZMANN * T / PLANCK) + ENTROPY / GAS_CONSTANT
    return np.asarray(eyring - ENTHALPY / GAS_CONSTANT / T)


def true_values(charges: int) -> dict[str, float]:
    """The four quantities of a truth at T_ref and I → 0."""
    return {
        "activation_energy": ENTHALPY + GAS_CONSTANT * T_REF,
        "activation_entropy": ENTROPY,
        "rate_constant": float(_eyring(np.array([T_REF]))[0]),
        "charge_product": float(charges),
    }


def _true_slopes(
    truth: Truth, charges: float, T: FloatArray, I: FloatArray
) -> tuple[FloatArray, FloatArray]:
    def ln_k(T: FloatArray, I: FloatArray) -> FloatArray:
        return true_ln_k(truth, charges, T, I)

    h, e = 1e-3, 1e-5 * I
    return (
        (ln_k(T + h, I) - ln_k(T - h, I)) / (2 * h),
        (ln_k(T, I + e) - ln_k(T, I - e)) / (2 * e),
    )


def quantity_rows(surface: Surface) -> tuple[list[str], FloatArray, FloatArray]:
    """The four quantities as affine functions of the parameters at T_ref and I → 0."""
    made = activation_rows(surface, T_REF)
    names, rows, offsets = [], [], []
    p = len(surface.parameters)
    for name in QUANTITIES:
        if name == "charge_product":
            if name not in surface.parameters:
                continue
            row, offset = np.eye(p)[surface.parameters.index(name)], 0.0
        else:
            each = made["ln_rate_constant" if name == "rate_constant" else name]
            row = each.rows.reshape(-1, p)[0]
            offset = float(each.offset.reshape(-1)[0])
        names.append(name)
        rows.append(row)
        offsets.append(offset)
    return names, np.array(rows), np.array(offsets)


def _open(
    seen: Observations,
    errors: RunErrors,
    observed: FloatArray,
    true: dict[str, float],
    stated: bool,
) -> tuple[dict[str, float], dict[str, float]]:
    grid = open_grid()
    surface = Surface(temperature_law("eyring"), grid.law, T_REF, seen.order)
    scales = None
    if not stated:
        # σ in units of its true value, over all that any study may find.
        nu = seen.runs - 3
        scales = np.geomspace(0.05, 3 * (2000.0 ** (1 / nu)) if nu > 1 else 1e3, 28)
    solver = open_solver(seen, surface, grid, errors, scales)
    names, rows, offsets = quantity_rows(surface)
    variances = np.einsum("qp,cspr,qr->csq", rows, solver.covariances, rows)
    deviations = np.sqrt(variances).reshape(-1, len(names))
    inside = np.zeros(len(names))
    widths: list[list[float]] = []
    goal = np.array([true[name] for name in names])
    for start in range(0, len(observed), CHUNK):
        part = solver.solve(observed[start : start + CHUNK])
        weights = part.weights
        places = part.means.reshape(len(weights), -1, rows.shape[1]) @ rows.T + offsets
        one = Mixture(np.ones(1), places[None], deviations[None, None])
        chance = np.einsum("mc,mcq->mq", weights, one.cdf(goal))
        inside += np.sum((chance >= 0.025) & (chance <= 0.975), axis=0)
        for m in range(min(len(weights), max(0, WIDTHS - start))):
            heavy = weights[m] > 1e-9
            mixture = Mixture(
                weights[m][heavy] / weights[m][heavy].sum(), places[m][heavy], deviations[heavy]
            )
            low, high = mixture.interval(0.95)
            widths.append((high - low).tolist())
    mean = np.mean(widths, axis=0)
    return (
        {name: inside[j] / len(observed) for j, name in enumerate(names)},
        {name: float(mean[j]) for j, name in enumerate(names)},
    )


def _named(
    law: SaltLaw,
    seen: Observations,
    errors: RunErrors,
    observed: FloatArray,
    true: dict[str, float],
    stated: bool,
) -> dict[str, float]:
    surface = Surface(temperature_law("eyring"), law, T_REF, seen.order)
    design = surface.ln_k(seen.T, seen.ionic_strength)
    names, rows, offsets = quantity_rows(surface)
    if seen.runs <= len(surface.parameters):
        return dict.fromkeys(QUANTITIES, math.nan)
    fit = solve(design.rows, observed[0] - design.offset, errors.u, shared=errors.shared)
    theta = (observed - design.offset) @ fit.estimator.T
    places = theta @ rows.T + offsets
    n, nu = seen.runs, fit.degrees_of_freedom
    parts = rows @ fit.gain
    own, shared = np.sum(parts[:, :n] ** 2, axis=1), np.sum(parts[:, n:] ** 2, axis=1)
    goal = np.array([true[name] for name in names])
    one = np.ones(1)
    if stated:
        deviation = np.broadcast_to(np.sqrt(own + shared), places.shape)
        chance = Mixture(one, places[None], deviation[None]).cdf(goal)
    else:
        # Generalised χ² of each study; shared errors keep their size, the scatter is scaled and
        # integrated over. The estimator keeps the weights of the true ratio, which real studies
        # find by iteration.
        residual = (observed - design.offset - theta @ design.rows.T) / errors.u
        J = errors.shared / errors.u[:, None]
        pulled = residual @ J
        inner = np.linalg.inv(np.eye(J.shape[1]) + J.T @ J)
        chi = np.sum(residual**2, axis=1) - np.einsum("mi,ij,mj->m", pulled, inner, pulled)
        scatter = chi[:, None] / nu * own
        chance = np.concatenate(
            [
                scatter_beside_known(places[part], scatter[part], shared, nu).cdf(goal)
                for part in np.array_split(np.arange(len(places)), 8)
            ]
        )
    inside = np.mean((chance >= 0.025) & (chance <= 0.975), axis=0)
    return dict.fromkeys(QUANTITIES, math.nan) | dict(zip(names, inside.tolist(), strict=True))


COLUMNS = (
    "cell",
    "law",
    "charges",
    "span",
    "runs",
    "u",
    "u from",
    "shared",
    "u(T)",
    "u(I)",
    "studies",
    "covered",
    *(f"open {name}" for name in QUANTITIES),
    *(f"width {name}" for name in QUANTITIES),
    *(f"known {name}" for name in QUANTITIES),
    *(f"{law} {name}" for law in NAMED for name in ("rate_constant", "charge_product")),
)


def run(count: int, studies: int, workers: int) -> None:
    """Evaluate the cells that are not yet in the results."""
    done = {int(row["cell"]) for row in read()} if RESULTS.exists() else set()
    wanted = cells(min(count, CONDITIONS_FROM)) + cells_with_condition_errors()
    left = [cell for cell in wanted if cell.number not in done]
    fresh = not RESULTS.exists()
    with RESULTS.open("a", newline="", encoding="utf-8") as stream:
        writer = csv.DictWriter(stream, COLUMNS, lineterminator="\n")
        if fresh:
            writer.writeheader()
        with ProcessPoolExecutor(workers) as pool:
            for number, row in enumerate(pool.map(evaluate, left, [studies] * len(left)), 1):
                writer.writerow({key: _short(value) for key, value in row.items()})
                stream.flush()
                print(f"{number}/{len(left)} {row['law']} z={row['charges']}", flush=True)


def _short(value: object) -> object:
    return f"{value:.5g}" if isinstance(value, float) else value


def read() -> list[dict[str, str]]:
    """The results so far."""
    with RESULTS.open(newline="", encoding="utf-8") as stream:
        return list(csv.DictReader(stream))


def table() -> str:
    """The summary: per truth, the lowest coverage in any cell, and what named laws reach."""
    rows = read()
    lines = [
        "| truth | cells | open law, lowest of E_a, ΔS‡ | open law, lowest of k°, z_A z_B | law "
        "known, lowest and highest | widest 95 % interval of z_A z_B (mean) | best wrong named law "
        "for z_A z_B, mean |",
        "|---|---|---|---|---|---|---|",
    ]
    for name, law in LAWS.items():
        own = [row for row in rows if row["law"] == name]
        if not own:
            continue
        thermal = [float(row[f"open {q}"]) for row in own for q in QUANTITIES[:2]]
        salt = [float(row[f"open {q}"]) for row in own for q in QUANTITIES[2:]]
        known = [
            float(row[f"known {q}"])
            for row in own
            for q in QUANTITIES
            if row[f"known {q}"] not in {"", "nan"}
        ]
        right = "" if law.known is None else law.known.name
        reach = {
            other: np.nanmean([float(row[f"{other} charge_product"] or "nan") for row in own])
            for other in NAMED
            if other != right
        }
        best = max(reach, key=lambda key: reach[key])
        shown = f"{min(known):.1%} to {max(known):.1%}" if known else "–"
        lines.append(
            f"| {name}{'' if law.covered else ' (outside)'} | {len(own)} | {min(thermal):.1%} | "
            f"{min(salt):.1%} | {shown} | "
            f"{max(float(row['width charge_product']) for row in own):.2f} | "
            f"{best} {reach[best]:.0%} |"
        )
    return "\n".join(lines)


def main() -> None:
    """Read the call."""
    parser = argparse.ArgumentParser(description=__doc__)
    parser.add_argument("what", choices=("run", "recount", "table"))
    parser.add_argument("--cells", type=int, default=360)
    parser.add_argument("--studies", type=int, default=4000)
    parser.add_argument("--workers", type=int, default=2)
    options = parser.parse_args()
    if options.what == "run":
        run(options.cells, options.studies, options.workers)
    elif options.what == "recount":
        recount(options.studies)
    print(table())


if __name__ == "__main__":
    main()
