"""Make the invented studies: rate tables from stated true values, with seeded errors.

Run from anywhere: ``python datasets/make.py`` writes the tables beside this script again, byte for
byte; ``python datasets/make.py FOLDER`` writes them elsewhere. The salt laws are written out here
on purpose, and not taken from the package that is tested on them; only the Debye-Hückel
coefficients of water are the package's.

One study begins with traces: M^2+ + N^+ -> P^+ + Q^2+, followed by the colour of P', which the
product P^+ forms with the ligand X^- in a fast equilibrium, P^+ + X^- = P'. Its binding, with
van 't Hoff and the activity law, and the course of the reaction are written out here as well.
"""

from __future__ import annotations

import csv
import io
import json
import sys
from dataclasses import dataclass
from pathlib import Path
from typing import TYPE_CHECKING

import numpy as np

from knought.chemistry.debye_huckel import debye_huckel

if TYPE_CHECKING:
    from collections.abc import Callable

BOLTZMANN, PLANCK, GAS_CONSTANT = 1.380649e-23, 6.62607015e-34, 8.31446261815324


#: Stocks in mol/L, volumes in mL in a 25 mL flask.
OXIDANT, REDUCTANT, LIGAND, SALT = 1.0e-3, 1.25e-3, 0.05, 1.0
V_OXIDANT, V_REDUCTANT, V_LIGAND, V_FLASK = 2.0, 1.0, 1.0, 25.0

DEAD_TIME, LAST, STEP = 4.0, 180.0, 1.5  # s


_STOCKS = ("oxidant", "reductant", "ligand", "salt")

#: What the study states of each source, and how well: relative u, of ΔH in J/mol. The true value
#: of each is drawn from these.
STATED = {
    "oxidant stock": (OXIDANT, 0.005),
    "reductant stock": (REDUCTANT, 0.005),
    "ligand stock": (LIGAND, 0.005),
    "salt stock": (SALT, 0.002),
    "absorptivity": (21_500.0, 0.01),
    "path length": (1.0, 0.003),
    "binding constant": (900.0, 0.03),
}
STATED_ENTHALPY, U_ENTHALPY = -18_000.0, 400.0


@dataclass(frozen=True)
class Photometer:
    """How the traces are made.

    Attributes
    ----------
    seed
        Of everything that is drawn.
    repeatability
        Relative scatter of k from run to run beside the noise: mixing, temperature.
    u_volume
        Relative scatter of each pipetted volume.
    noise, wander
        Standard deviations of the absorbance: white, and correlated over `correlation` seconds.
    """

    seed: int = 77
    repeatability: float = 0.01
    u_volume: float = 0.002
    noise: float = 1e-4
    wander: float = 7e-5
    correlation: float = 4.0

    def truth(self) -> dict[str, float]:
        """Return the true value of every stated one, drawn once for the whole study."""
        random = np.random.Generator(np.random.Philox(self.seed + 1))
        drawn = {
            name: float(f"{value * (1 + u * random.standard_normal()):.5g}")
            for name, (value, u) in STATED.items()
        }
        enthalpy = STATED_ENTHALPY + U_ENTHALPY * random.standard_normal()
        return drawn | {"binding enthalpy": round(float(enthalpy))}


def bound(truth: dict[str, float], T: float, I: float, ligand: float, A: float) -> float:
    """Return the share of P that is bound: van 't Hoff, and Davies with 0.3 for Δz² = -2."""
    root = np.sqrt(I)
    lg_gamma = A * (root / (1 + root) - 0.3 * I)
    away = (1 / T - 1 / 298.15) / GAS_CONSTANT
    K = truth["binding constant"] * np.exp(-truth["binding enthalpy"] * away)
    K = K * 10.0 ** (-2 * lg_gamma)
    return float(K * ligand / (1 + K * ligand))


def poured(I: float) -> float:
    """Return the volume of salt stock in mL, to 0.01 mL, that brings a run near I."""
    others = 3 * OXIDANT * V_OXIDANT + REDUCTANT * V_REDUCTANT + LIGAND * V_LIGAND
    return round((I * V_FLASK - others) / SALT, 2)


def course(k: float, t: np.ndarray, oxidant: float, reductant: float) -> np.ndarray:
    """Return the product of a second-order reaction of unequal amounts, mol/L."""
    grown = np.exp(-(reductant - oxidant) * k * t)
    return np.asarray(oxidant * reductant * (1 - grown) / (reductant - oxidant * grown))


def tables(
    conditions: list[tuple[float, float]],
    true_k: Callable[[float, float], float],
    screening: Callable[[float], float],
    photometer: Photometer,
) -> tuple[list[list[str]], list[list[str]]]:
    """Return the table of runs and that of traces, headers first."""
    random = np.random.Generator(np.random.Philox(photometer.seed))
    truth = photometer.truth()
    t = np.arange(0.0, LAST + STEP / 2, STEP)
    runs = [["run", "t/°C", *(f"V({stock})/mL" for stock in _STOCKS), "salt"]]
    columns = [[f"{each:g}" for each in t]]
    for number, place in enumerate(random.permutation(len(conditions)), start=1):
        T, goal = conditions[place]
        volumes = (V_OXIDANT, V_REDUCTANT, V_LIGAND, poured(goal))
        slips = 1 + photometer.u_volume * random.standard_normal(len(volumes))
        oxidant, reductant, ligand, salt = (
            truth[f"{stock} stock"] * volume * slip / V_FLASK
            for stock, volume, slip in zip(_STOCKS, volumes, slips, strict=True)
        )
        I = 3 * oxidant + reductant + ligand + salt
        scatter = np.exp(photometer.repeatability * random.standard_normal())
        made = course(true_k(T, I) * scatter, t, oxidant, reductant)
        share = bound(truth, T, I, ligand, screening(T))
        signal = truth["absorptivity"] * truth["path length"] * share * made
        signal += 0.012 + 0.002 * random.standard_normal() + _noise(photometer, t, random)
        # Before the solution is mixed the beam sees streaks.
        signal[t < DEAD_TIME] += 0.03 * random.random(int(np.sum(t < DEAD_TIME)))
        runs.append(
            [str(number), f"{T - 273.15:.2f}", *(f"{each:g}" for each in volumes), "NaClO4"]
        )
        columns.append([f"{each:.5f}" for each in signal])
    head = ["t/s", *(row[0] for row in runs[1:])]
    return runs, [head, *(list(row) for row in zip(*columns, strict=True))]


def _noise(photometer: Photometer, t: np.ndarray, random: np.random.Generator) -> np.ndarray:
    white, wander = random.standard_normal((2, len(t)))
    phi = np.exp(-STEP / photometer.correlation)
    for i in range(1, len(t)):
        wander[i] = phi * wander[i - 1] + np.sqrt(1 - phi**2) * wander[i]
    return np.asarray(photometer.noise * white + photometer.wander * wander)


@dataclass(frozen=True)
class Invented:
    """An invented study: its design, its truth, and how its errors are drawn."""

    name: str
    seed: int
    temperatures: tuple[float, ...]
    ionic_strengths: tuple[float, ...]
    replicated: tuple[tuple[float, float], ...]
    enthalpy: float  # J/mol, at I = 0
    entropy: float  # J/(K mol), at I = 0, standard concentration 1 mol/L
    charge_product: int
    salt: str
    lg_activity: Callable[[float, float], float]  # (T, I) -> lg k/k° per unit of Δz² and beyond
    relative_u: tuple[float, ...]
    salt_column: str
    literature: tuple[tuple[str, int, float, float, float], ...] = ()  # label, year, T, I, u_r
    photometer: Photometer | None = None  # a study that begins with traces

    def true_k(self, T: float, I: float) -> float:
        """Return the rate constant in L mol^-1 s^-1 without error."""
        eyring = np.log(BOLTZMANN * T / PLANCK) + self.entropy / GAS_CONSTANT
        ln_k = eyring - self.enthalpy / (GAS_CONSTANT * T)
        return float(np.exp(ln_k + np.log(10.0) * self.lg_activity(T, I)))

    def rows(self) -> list[list[str]]:
        """Return the table, header first."""
        random = np.random.Generator(np.random.Philox(self.seed))
        conditions = self.conditions()
        order = random.permutation(len(conditions))
        rows = [["run", "t/°C", "I/(mol/L)", "k/(L mol^-1 s^-1)", "u_r(k)/%", "salt"]]
        for number, place in enumerate(order, start=1):
            T, I = conditions[place]
            u = self.relative_u[int(random.integers(len(self.relative_u)))]
            k = self.true_k(T, I) * np.exp(u * random.standard_normal())
            rows.append(
                [
                    str(number),
                    f"{T - 273.15:.2f}",
                    f"{I:g}",
                    f"{k:.4g}",
                    f"{100 * u:g}",
                    self.salt_column,
                ]
            )
        return rows

    def conditions(self) -> list[tuple[float, float]]:
        """Return T and I of every run, in the order of the design."""
        return [
            *((T, I) for T in self.temperatures for I in self.ionic_strengths),
            *self.replicated,
        ]

    def trace_tables(self, photometer: Photometer) -> tuple[list[list[str]], list[list[str]]]:
        """Return the table of runs and that of traces, headers first."""
        return tables(self.conditions(), self.true_k, lambda T: _screening(T)[0], photometer)

    def _upstream(self) -> dict[str, object]:
        """Return the truth of the traces, where there are any."""
        if self.photometer is None:
            return {}
        return {
            "upstream": {
                "seed": self.photometer.seed,
                "repeatability": self.photometer.repeatability,
                **{name.replace(" ", "_"): x for name, x in self.photometer.truth().items()},
            }
        }

    def literature_rows(self) -> list[list[str]]:
        """Return invented literature values, header first: the truth with an error of size u_r."""
        random = np.random.Generator(np.random.Philox(self.seed + 1000))
        rows = [["label", "year", "T/K", "I/(mol/L)", "k/(L mol^-1 s^-1)", "u_r(k)/%"]]
        for label, year, T, I, u in self.literature:
            k = self.true_k(T, I) * np.exp(u * random.standard_normal())
            rows.append([label, str(year), f"{T:.2f}", f"{I:g}", f"{k:.3g}", f"{100 * u:g}"])
        return rows

    def truth(self) -> dict[str, object]:
        """Return the true values at 298.15 K and I = 0."""
        T = 298.15
        return {
            "invented": True,
            "seed": self.seed,
            **self._upstream(),
            "salt_law": self.salt,
            "parameters": {
                "rate_constant": self.true_k(T, 0.0),
                "activation_energy": (self.enthalpy + GAS_CONSTANT * T) / 1000.0,
                "activation_enthalpy": self.enthalpy / 1000.0,
                "activation_entropy": self.entropy,
                "activation_gibbs_energy": (self.enthalpy - T * self.entropy) / 1000.0,
                "charge_product": self.charge_product,
            },
        }


def _screening(T: float) -> tuple[float, float]:
    water = debye_huckel(np.array([T]), basis="molar")
    return float(water.A[0]), float(water.B[0])


def _extended(charge_product: int, size: float, beta: float) -> Callable[[float, float], float]:
    def lg(T: float, I: float) -> float:
        A, B = _screening(T)
        root = np.sqrt(I)
        return float(2 * charge_product * A * root / (1 + B * size * root) + beta * I)

    return lg


def _davies(charge_product: int, coefficient: float) -> Callable[[float, float], float]:
    def lg(T: float, I: float) -> float:
        A, _ = _screening(T)
        root = np.sqrt(I)
        return float(2 * charge_product * A * (root / (1 + root) - coefficient * I))

    return lg


STUDIES = (
    Invented(
        name="like-charges",
        seed=11,
        temperatures=(283.15, 290.65, 298.15, 305.65, 313.15),
        ionic_strengths=(0.005, 0.01, 0.02, 0.05, 0.1, 0.2),
        replicated=((298.15, 0.01), (298.15, 0.01), (298.15, 0.1), (283.15, 0.05), (313.15, 0.05)),
        enthalpy=47_300.0,
        entropy=-71.0,
        charge_product=2,
        salt="extended Debye–Hückel, å = 5.2 Å, and β = 0.06 L/mol",
        lg_activity=_extended(2, 5.2e-10, 0.06),
        relative_u=(),
        salt_column="NaClO4",
        photometer=Photometer(),
    ),
    Invented(
        name="opposite-charges",
        seed=22,
        temperatures=(288.15, 298.15, 308.15, 318.15),
        ionic_strengths=(0.004, 0.008, 0.015, 0.03, 0.06, 0.1, 0.2, 0.3),
        replicated=((298.15, 0.004), (298.15, 0.03), (298.15, 0.3), (318.15, 0.03)),
        enthalpy=38_900.0,
        entropy=-54.0,
        charge_product=-2,
        salt="Davies with the coefficient 0.3",
        lg_activity=_davies(-2, 0.3),
        relative_u=(0.02, 0.03, 0.04),
        salt_column="NaNO3",
        literature=(
            ("Invented paper A", 1987, 293.15, 0.1, 0.04),
            ("Invented paper B", 1999, 298.15, 0.02, 0.06),
            ("Invented paper C", 2012, 308.15, 0.2, 0.03),
        ),
    ),
    Invented(
        name="neutral-partner",
        seed=35,
        temperatures=(293.15, 303.15, 310.15, 318.15, 328.15, 338.15),
        ionic_strengths=(0.01, 0.05, 0.1, 0.25),
        replicated=((310.15, 0.1), (310.15, 0.1), (338.15, 0.05)),
        enthalpy=63_500.0,
        entropy=-82.0,
        charge_product=0,
        salt="no screening of charges, β = 0.05 L/mol",
        lg_activity=lambda T, I: 0.05 * I,
        relative_u=(0.02, 0.025, 0.05),
        salt_column="KCl",
    ),
)


def write(folder: Path) -> None:
    """Write the table and the true values of every study below `folder`."""
    for study in STUDIES:
        target = folder / study.name
        target.mkdir(parents=True, exist_ok=True)
        if study.photometer is None:
            _write_table(target / "rates.csv", study.rows())
        else:
            runs, traces = study.trace_tables(study.photometer)
            _write_table(target / "runs.csv", runs)
            _write_table(target / "traces.csv", traces)
        if study.literature:
            _write_table(target / "literature.csv", study.literature_rows())
        truth = json.dumps(study.truth(), indent=1, ensure_ascii=False) + "\n"
        (target / "truth.json").write_text(truth, encoding="utf-8", newline="\n")


def _write_table(path: Path, rows: list[list[str]]) -> None:
    text = io.StringIO()
    csv.writer(text, lineterminator="\n").writerows(rows)
    path.write_text(text.getvalue(), encoding="utf-8", newline="\n")


if __name__ == "__main__":
    write(Path(sys.argv[1]) if len(sys.argv) > 1 else Path(__file__).parent)
