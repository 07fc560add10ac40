"""Slope to rate, and the whole road from simulated chemistry to fitted parameters."""

from __future__ import annotations

import math
from dataclasses import dataclass
from fractions import Fraction
from typing import TYPE_CHECKING

import numpy as np
import pytest

import knought as kn
from knought.chemistry.debye_huckel import debye_huckel
from knought.chemistry.medium import prepare
from knought.errors import InputError
from knought.fitting.fit_many import fit_many
from knought.measurement.absorbance import Optics
from knought.measurement.complexed_product import ComplexedProduct
from knought.measurement.first_order import first_orders
from knought.measurement.initial_slope_rule import initial_slopes
from knought.study_sections.upstream import read_upstream
from tests.chemistry.test_equilibria import TRIIODIDE
from tests.measurement.simulated_traces import noisy

if TYPE_CHECKING:
    from pathlib import Path

    from knought.arrays import FloatArray

_ENTHALPY, _ENTROPY, _CHARGE_PRODUCT = 51e3, -80.0, 2
_TEMPERATURES, _SALTS = (288.15, 298.15, 308.15), (0.0, 0.02, 0.05, 0.1)
#: Of k at 298.15 K and I = 0.
_LN_K_298 = (
    math.log(1.380649e-23 * 298.15 / 6.62607015e-34)
    + _ENTROPY / 8.31446261815324
    - _ENTHALPY / 8.31446261815324 / 298.15
)
_OXIDANT, _IODIDE, _EPSILON = 1.0e-4, 0.01, 26_000.0


def test_a_slope_becomes_a_rate_by_its_absorptivity_path_and_number() -> None:
    rate = Optics(5000.0, 2.0, 2.0).rate(1e-3, 1e-5)
    assert rate.value == pytest.approx(1e-3 / (5000 * 2 * 2), rel=1e-14)
    assert rate.standard_uncertainty == pytest.approx(1e-5 / 20_000, rel=1e-14)


def test_a_reactant_that_disappears_has_a_negative_number() -> None:
    assert Optics(5000.0, stoichiometric_number=-1.0).rate(-1e-3, 1e-5).value > 0


def test_errors_of_optics_leave_by_name() -> None:
    errors = Optics(5000.0, u_absorptivity=0.02, u_path_length=0.005).shared_errors()
    assert [(each.name, each.kind, each.u) for each in errors] == [
        ("molar absorptivity", "factor", 0.02),
        ("path length", "factor", 0.005),
    ]


def test_optics_need_exactly_one_absorptivity() -> None:
    with pytest.raises(InputError, match="one absorptivity"):
        Optics()
    product = ComplexedProduct("I2", (TRIIODIDE,), {"I3^-": _EPSILON})
    with pytest.raises(InputError, match="one absorptivity"):
        Optics(5000.0, product=product)


@dataclass(frozen=True)
class _Condition:
    T: float
    salt: float

    @property
    def I(self) -> float:  # noqa: E743
        salts = {"K2CrO4": _OXIDANT, "KI": _IODIDE, "KNO3": self.salt}
        return prepare(salts, self.T).ionic_strength

    @property
    def k(self) -> float:
        """Eyring with Güntelberg's law, written out."""
        eyring = math.log(1.380649e-23 * self.T / 6.62607015e-34)
        ln_k = eyring + _ENTROPY / 8.31446261815324 - _ENTHALPY / 8.31446261815324 / self.T
        root = math.sqrt(self.I)
        lg = 2 * _CHARGE_PRODUCT * float(debye_huckel(self.T).A) * root / (1 + root)
        return math.exp(ln_k + math.log(10) * lg)

    def absorbance(self, t: FloatArray) -> FloatArray:
        """Iodine grows as the oxidant falls, iodide in excess; what absorbs is I3-."""
        K_I = math.exp(TRIIODIDE.ln_K_zero(self.T)) * _IODIDE
        formed = _OXIDANT * -np.expm1(-self.k * _IODIDE * t)
        return np.asarray(_EPSILON * K_I / (1 + K_I) * formed)


_CONDITIONS = tuple(_Condition(T, salt) for T in _TEMPERATURES for salt in _SALTS)


def _held(k: FloatArray, u: FloatArray, parameter: str, truth: float) -> float:
    T = np.array([each.T for each in _CONDITIONS])
    I = np.array([each.I for each in _CONDITIONS])
    fits = fit_many(k, u, T=T, I=I, order=2, salt_law="guntelberg")
    place = fits.names.index(parameter)
    away = (fits.parameters[:, place] - truth) / np.sqrt(fits.covariance[:, place, place])
    return float(np.mean(np.abs(away) <= 1.96))


def test_the_fit_recovers_the_truth_from_traces_at_the_stated_rate() -> None:
    studies, t = 120, np.linspace(0, 120, 400)
    k, u = np.empty((2, studies, len(_CONDITIONS)))
    product = Optics(product=ComplexedProduct("I2", (TRIIODIDE,), {"I3^-": _EPSILON}))
    for i, each in enumerate(_CONDITIONS):
        y = each.absorbance(t) + noisy(studies, 400, 0.5, 0.5, 0.002, 100 + i)
        slopes = initial_slopes(t, y, dead_time=2.0)
        rate = product.rate(1.0, 1.0, T=each.T, ligands={"I-": _IODIDE})
        k[:, i] = slopes.value * rate.value / (_OXIDANT * _IODIDE)
        u[:, i] = slopes.standard_uncertainty * rate.value / (_OXIDANT * _IODIDE)
    held = [
        _held(k, u, "activation_enthalpy", _ENTHALPY),
        _held(k, u, "ln_rate_constant", _LN_K_298),
        _held(k, u, "charge_product", _CHARGE_PRODUCT),
    ]
    # 120 studies: two standard deviations of a rate of 95 % are 4 %.
    assert min(held) > 0.90, held
    assert np.mean(held) > 0.915, held


def test_the_fit_recovers_the_truth_from_first_order_traces() -> None:
    studies = 120
    k, u = np.empty((2, studies, len(_CONDITIONS)))
    for i, each in enumerate(_CONDITIONS):
        t = np.linspace(0, 4 / (each.k * _IODIDE), 300)
        y = each.absorbance(t) + noisy(studies, 300, 0.5, 0.5, 0.01, 200 + i)
        found = first_orders(t, y)
        k[:, i] = found.value / _IODIDE
        u[:, i] = found.standard_uncertainty / _IODIDE
    held = [
        _held(k, u, "activation_enthalpy", _ENTHALPY),
        _held(k, u, "charge_product", _CHARGE_PRODUCT),
    ]
    assert min(held) > 0.90, held


_STUDY = """
[medium]
equilibria = ["water"]

[traces]
runs = "runs.csv"
file = "traces.csv"
kind = "initial-slope"
orders = {K2CrO4 = 1, KI = 1}
dead_time = "2 s"
stocks = {KI = "0.5 %"}

[traces.optics]
u_absorptivity = "2 %"
u_path_length = "0.5 %"

[traces.product]
formula = "I2"
absorptivities = {"I3^-" = "26000 L mol^-1 cm^-1"}

[[traces.product.equilibria]]
reaction = "I2 + I- = I3^-"
K = 698
u_K = "1.4 %"
enthalpy = "-17.0 kJ mol^-1"
u_enthalpy = "0.6 kJ mol^-1"
heat_capacity = "-21 J K^-1 mol^-1"
basis = "molal"
"""


def _write_study(folder: Path) -> Path:
    t = np.linspace(0, 120, 300)
    labels = [str(i + 1) for i in range(len(_CONDITIONS))]
    noise = noisy(len(labels), len(t), 0.3, 0.3, 5e-4, 77)
    signals = [c.absorbance(t) + e for c, e in zip(_CONDITIONS, noise, strict=True)]
    rows = ["t/s," + ",".join(labels)]
    rows += [",".join(repr(float(x)) for x in row) for row in zip(t, *signals, strict=True)]
    (folder / "traces.csv").write_text("\n".join(rows) + "\n", encoding="utf-8")
    runs = ["run,T/K,c(K2CrO4)/(mol/L),c(KI)/(mol/L),c(KNO3)/(mol/L)"]
    runs += [
        f"{label},{each.T},{_OXIDANT},{_IODIDE},{each.salt}"
        for label, each in zip(labels, _CONDITIONS, strict=True)
    ]
    (folder / "runs.csv").write_text("\n".join(runs) + "\n", encoding="utf-8")
    (folder / "study.toml").write_text(_STUDY, encoding="utf-8")
    return folder / "study.toml"


def test_a_study_file_runs_from_traces_to_a_table_that_fits(tmp_path: Path) -> None:
    study = _write_study(tmp_path)
    found = read_upstream(study).reduced(lambda name, _: study.parent / name)
    assert found.rates.order == Fraction(2)
    # The study counts water's own ions, too.
    assert pytest.approx([each.I for each in _CONDITIONS], rel=3e-5) == found.rates.I
    away = (found.rates.k - np.array([each.k for each in _CONDITIONS])) / found.rates.u_k
    assert np.abs(away).max() < 4
    assert [each.name for each in found.shared_errors] == [
        "molar absorptivity",
        "path length",
        "stock of KI",
        "K of I2 + I- = I3^-",
        "ΔH of I2 + I- = I3^-",
    ]
    assert len(found.account) >= len(_CONDITIONS) + 1
    fit = kn.fit(found.rates, salt_law="guntelberg", shared_errors=found.shared_errors)
    for name, truth in (
        ("activation_enthalpy", _ENTHALPY),
        ("charge_product", float(_CHARGE_PRODUCT)),
    ):
        estimate = fit.parameters[name]
        assert abs(float(estimate.value) - truth) < 3.5 * float(estimate.standard_uncertainty)


def test_the_commands_write_a_table_that_is_read_back(
    tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    import argparse

    from knought.cli import medium, reduce

    study, parser = _write_study(tmp_path), argparse.ArgumentParser()
    reduce.add_arguments(parser)
    reduce.run(parser.parse_args([str(study), "--out", str(tmp_path / "out")]))
    assert "the errors that runs share: molar absorptivity" in capsys.readouterr().out
    assert len(kn.read_rates(tmp_path / "out" / "rates.csv")) == len(_CONDITIONS)

    parser, columns = argparse.ArgumentParser(), tmp_path / "medium.csv"
    medium.add_arguments(parser)
    words = ["Na2SO4=0.05", "--reach", "0.3", "--salt", "NaCl", "--csv", str(columns)]
    medium.run(parser.parse_args(words))
    said = capsys.readouterr().out
    assert "I = 0.15 mol/L" in said
    assert "0.15 mol/L of NaCl bring I to 0.3 mol/L" in said
    assert columns.read_text(encoding="utf-8").startswith("run,T/K,I/(mol/L)")


@pytest.mark.parametrize(
    ("old", "new", "words"),
    [
        ("KI = 1", "KBr = 1", r"no column c\(KBr\)"),
        ('kind = "initial-slope"', 'kind = "slopes"', "slopes or their u are missing"),
        ("K = 698", "K = 698\nlg_K = 2.8", "one of lg_K and K"),
        ('dead_time = "2 s"', "dead_time = 2", "string with its unit"),
        ('formula = "I2"', 'formula = "Br2"', "no form of the product|does not form"),
    ],
)
def test_a_wrong_study_is_refused_with_what_is_wrong(
    old: str, new: str, words: str, tmp_path: Path
) -> None:
    study = _write_study(tmp_path)
    study.write_text(_STUDY.replace(old, new), encoding="utf-8")
    with pytest.raises(InputError, match=words):
        read_upstream(study).reduced(lambda name, _: study.parent / name)
