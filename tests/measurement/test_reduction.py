"""From traces and recipes to a table, with one name for each source of error."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np
import pytest

import knought as kn
from knought.errors import InputError
from knought.measurement.shared_errors import SharedError
from knought.study import read_study
from knought.study_sections.upstream import read_upstream

if TYPE_CHECKING:
    from collections.abc import Callable
    from pathlib import Path

    from knought.measurement.reduction import Reduction

_STUDY = """
[medium]
total_volume = "50 mL"
u_volume = "0.3 %"

[[medium.stocks]]
name = "oxidant"
contents = { "2 K^+ + M^2-" = "20 mmol/L" }
u = "0.8 %"

[[medium.stocks]]
name = "ligand"
contents = { "K^+ + X^-" = "0.2 mol/L" }
u = "0.4 %"

[[medium.stocks]]
name = "salt"
contents = { KNO3 = "1 mol/L" }
u = "0.2 %"

[traces]
runs = "runs.csv"
kind = "slopes"
orders = { "M^2-" = 1, "X^-" = 1 }

[traces.optics]
absorptivity = "20000 L mol^-1 cm^-1"
u_absorptivity = "1.5 %"
"""

_RUNS = """run,t/°C,V(oxidant)/mL,V(ligand)/mL,V(salt)/mL,slope/s^-1,u(slope)/s^-1
a,25,1,5,0.5,1.0e-4,1e-6
b,25,1,5,5,2.0e-4,2e-6
c,35,2,5,0.5,4.0e-4,4e-6
"""


def _reduced(folder: Path, study: str = _STUDY, runs: str = _RUNS) -> Reduction:
    (folder / "study.toml").write_text(study, encoding="utf-8")
    (folder / "runs.csv").write_text(runs, encoding="utf-8")
    return read_upstream(folder / "study.toml").reduced(lambda name, _: folder / name)


def test_volumes_in_the_table_of_runs_are_the_recipe(tmp_path: Path) -> None:
    found = _reduced(tmp_path)
    oxidant, ligand, salt = 0.02 * np.array([1, 1, 2]) / 50, 0.02, np.array([0.5, 5, 0.5]) / 50
    assert pytest.approx(3 * oxidant + ligand + salt, rel=1e-12) == found.rates.I
    assert found.rates.concentrations["X^-"] == pytest.approx([ligand] * 3, rel=1e-12)
    rate = np.array([1e-4, 2e-4, 4e-4]) / 20_000
    assert found.rates.k == pytest.approx(rate / (oxidant * ligand), rel=1e-12)


def test_one_stock_is_one_source_for_k_and_for_the_ionic_strength(tmp_path: Path) -> None:
    found = _reduced(tmp_path)
    errors = {each.name: each for each in found.shared_errors}
    assert list(errors) == ["molar absorptivity", "stock oxidant", "stock ligand", "stock salt"]
    ligand = errors["stock ligand"]
    assert (ligand.kind, ligand.u) == ("by-run", 0.004)
    assert ligand.on_ln_k == pytest.approx({"a": -1.0, "b": -1.0, "c": -1.0}, rel=1e-5)
    assert found.rates.I is not None
    share = dict(zip("abc", 0.02 / found.rates.I, strict=True))
    assert ligand.on_ln_I == pytest.approx(share, rel=1e-4)
    assert not errors["stock salt"].on_ln_k


def test_volumes_of_a_run_are_its_own(tmp_path: Path) -> None:
    found = _reduced(tmp_path)
    # 1 % from the slope, and two pipetted volumes of 0.3 % that k is divided by.
    expected = np.hypot(0.01, 0.003 * np.sqrt(2))
    assert found.rates.u_k == pytest.approx(expected * found.rates.k, rel=1e-9)
    assert found.rates.u_I is not None


def test_the_budget_of_a_fit_names_each_stock(tmp_path: Path) -> None:
    rows = [
        f"{i},{t},1,5,{v},{3e-5 * 2 ** (t / 10 - 2.5) * (1 + 0.02 * v):.5g},1e-7"
        for i, (t, v) in enumerate((t, v) for t in (15, 25, 35) for v in (0.2, 1, 3, 9))
    ]
    found = _reduced(tmp_path, runs="\n".join([_RUNS.splitlines()[0], *rows]) + "\n")
    fit = kn.assess(found.rates, salt_law="davies", shared_errors=found.shared_errors)
    budget, k = fit.budget("rate_constant"), fit.headline.parameters["rate_constant"]
    relative = budget.uncertainty("stock ligand") / float(k.value)
    # 0.4 % through the concentration, less what it moves I.
    assert 0.003 < relative < 0.0045
    assert set(budget.variances) >= {each.name for each in found.shared_errors}


def test_a_common_error_is_the_same_by_run_and_as_a_factor() -> None:
    T, I = np.array([290.0, 300.0]), np.array([0.1, 0.2])
    slopes = np.array([0.05, 0.05]), np.array([1.0, 2.0])
    for kind, key in (("factor", "on_ln_k"), ("ionic-strength-factor", "on_ln_I")):
        plain = SharedError("x", kind, 0.01)  # type: ignore[arg-type]
        by_run = SharedError("x", "by-run", 0.01, **{key: {"a": 1.0, "b": 1.0}})  # type: ignore[arg-type]
        assert by_run.effect(T, I, *slopes, None, ("a", "b")) == pytest.approx(
            plain.effect(T, I, *slopes, None)
        )


def test_a_run_still_to_be_made_takes_the_mean_effect() -> None:
    error = SharedError("x", "by-run", 0.01, on_ln_k={"a": -1.0, "b": -0.5})
    one = np.array([1.0])
    assert error.effect(300 * one, one, one, one, None) == pytest.approx([-0.0075])


@pytest.mark.parametrize(
    ("kind", "effects"), [("by-run", {}), ("factor", {"a": 1.0}), ("by-run", {"a": float("nan")})]
)
def test_effects_on_runs_belong_to_their_kind(kind: str, effects: dict[str, float]) -> None:
    with pytest.raises(InputError, match="effect"):
        SharedError("x", kind, 0.01, on_ln_k=effects)  # type: ignore[arg-type]


@pytest.mark.parametrize(
    ("old", "new", "words"),
    [
        ('"M^2-" = 1', '"L^2-" = 1', "none of it in what run a holds"),
        ("[traces]\nruns", '[[medium.recipes]]\nrun = "a"\n[traces]\nruns', "Keep one of the two"),
        ('name = "salt"', 'name = "brine"', "there is no stock 'salt'"),
    ],
)
def test_a_recipe_that_does_not_fit_is_refused(
    old: str, new: str, words: str, tmp_path: Path
) -> None:
    with pytest.raises(InputError, match=words):
        _reduced(tmp_path, _STUDY.replace(old, new))


def test_what_reduce_writes_reports_as_the_traces_do(tmp_path: Path) -> None:
    from knought.cli import main

    _reduced(tmp_path)
    assert main(["reduce", str(tmp_path / "study.toml"), "--out", str(tmp_path / "out")]) == 0
    direct = read_upstream(tmp_path / "study.toml").reduced(lambda name, _: tmp_path / name)
    written = read_study(tmp_path / "out" / "study.toml")
    errors = [each.error() for each in written.settings.shared_errors]
    assert [each.name for each in errors] == [each.name for each in direct.shared_errors]
    for one, other in zip(errors, direct.shared_errors, strict=True):
        assert one.u == pytest.approx(other.u, rel=1e-9)
        assert (one.on_ln_k, one.on_ln_I) == (other.on_ln_k, other.on_ln_I)
    assert pytest.approx(direct.rates.k) == kn.read_rates(tmp_path / "out" / "rates.csv").k


_SLOPES = """
[traces]
runs = "runs.csv"
kind = "slopes"
orders = ORDERS

[traces.optics]
absorptivity = "10000 L mol^-1 cm^-1"
"""


_RATES: dict[str, Callable[[float, float], float]] = {
    "plain": lambda a, b: 0.5 * a * b,
    "b squared": lambda a, b: 20 * a * b**2,
    "parallel": lambda a, b: 0.5 * a * b + 1e-6,
}


def _varied(folder: Path, orders: str, rate: str = "plain") -> Reduction:
    """Slopes at two temperatures, each concentration varied there; noise of 1 %, seeded."""
    from knought.numerics.seeds import generator

    random = generator(52_610, len(orders))
    rows = ["run,T/K,I/(mol/L),c(A)/(mol/L),c(B)/(mol/L),slope/s^-1,u(slope)/s^-1"]
    design = [(1, 10), (2, 10), (4, 10), (8, 10), (2, 20), (2, 40), (2, 80)]
    for number, (T, (a, b)) in enumerate((T, pair) for T in (298.15, 308.15) for pair in design):
        true = _RATES[rate](1e-4 * a, 1e-3 * b) * (1 + (T > 300))
        slope = 1e4 * true * (1 + 0.01 * random.standard_normal())
        rows.append(f"{number},{T},0.1,{1e-4 * a},{1e-3 * b},{slope:.6g},{100 * true:.3g}")
    return _reduced(folder, _SLOPES.replace("ORDERS", orders), "\n".join(rows) + "\n")


def test_orders_that_are_right_are_borne_out(tmp_path: Path) -> None:
    found = _varied(tmp_path, "{ A = 1, B = 1 }")
    assert not found.caveats
    said = "\n".join(found.notes)
    assert "whole number 1" in said
    assert "intercept" in said
    assert found.rates.k == pytest.approx(0.5 * np.repeat([1, 2], 7), rel=0.04)


def test_an_order_that_is_wrong_is_contradicted(tmp_path: Path) -> None:
    found = _varied(tmp_path, "{ A = 1, B = 1 }", "b squared")
    assert found.caveats[0].code == "order-contradicted"
    assert "The order 1 in B" in found.caveats[0].message
    assert found.rates.order == 2  # as stated, and not chosen anew


def test_a_parallel_path_shows_as_an_intercept(tmp_path: Path) -> None:
    found = _varied(tmp_path, "{ A = 1, B = 1 }", "parallel")
    assert {each.code for each in found.caveats} >= {"order-contradicted", "line-intercept"}


def test_an_open_order_is_told_and_not_chosen(tmp_path: Path) -> None:
    with pytest.raises(InputError) as caught:
        _varied(tmp_path, '{ A = 1, B = "?" }')
    said = str(caught.value)
    assert "the order in B is open; the runs say" in said
    assert "whole number 1" in said
    with pytest.raises(InputError, match="no concentration was varied"):
        _reduced(tmp_path, _STUDY.replace('"X^-" = 1', '"X^-" = "?"'))


def test_a_blank_and_what_is_known_of_the_levels_are_used(tmp_path: Path) -> None:
    from tests.measurement.simulated_traces import noisy

    t = np.linspace(0, 100, 200)
    noise = noisy(2, len(t), 0.0, 0.0, 1e-4, 31)
    signals = [slope * t + 1e-4 * t + e for slope, e in zip((1e-3, 2e-3), noise, strict=True)]
    rows = [
        "t/s,a,b",
        *(",".join(f"{x:.6g}" for x in row) for row in zip(t, *signals, strict=True)),
    ]
    (tmp_path / "traces.csv").write_text("\n".join(rows) + "\n", encoding="utf-8")
    study = _SLOPES.replace("ORDERS", "{ A = 1 }").replace(
        'kind = "slopes"',
        'kind = "initial-slope"\nfile = "traces.csv"\ntotal_change = 10\n'
        'blank_slope = "0.006 min^-1"\nu_blank_slope = "2e-5 s^-1"',
    )
    found = _reduced(tmp_path, study, "run,T/K,c(A)/(mol/L)\na,298.15,0.1\nb,298.15,0.1\n")
    assert [each.measured for each in found.runs] == pytest.approx([1e-3, 2e-3], rel=0.01)
    assert [each.progress for each in found.runs] == pytest.approx([0.011, 0.021], rel=0.02)
    (blank,) = [each for each in found.shared_errors if each.name == "blank"]
    moved = [blank.u * blank.on_ln_k[run] for run in "ab"]
    assert moved == pytest.approx([-0.02, -0.01], rel=0.01)


def test_levels_of_first_order_traces_are_read(tmp_path: Path) -> None:
    t = np.linspace(0, 60, 80)
    rows = ["t (min),a", *(f"{x:.6g},{0.9 - 0.6 * np.exp(-0.02 * x):.8g}" for x in t)]
    (tmp_path / "traces.csv").write_text("\n".join(rows) + "\n", encoding="utf-8")
    for level in ("final = 0.9", "initial = 0.3"):
        study = f'[traces]\nruns = "runs.csv"\nfile = "traces.csv"\n{level}\n'
        found = _reduced(tmp_path, study, "run,T/K\na,298.15\n")
        assert found.rates.k == pytest.approx([0.02 / 60], rel=1e-4)
        assert level.split()[-1] in found.notes[0]
    with pytest.raises(InputError, match="both levels"):
        _reduced(
            tmp_path,
            '[traces]\nruns = "runs.csv"\nfile = "traces.csv"\nfinal = 0.9\ninitial = 0.3\n',
            "run,T/K\na,298.15\n",
        )


def test_the_columns_of_medium_are_read_back_and_fitted(tmp_path: Path) -> None:
    """`knought medium --csv` beside a column of k is a rate table."""
    from knought.cli import main

    recipes = "".join(
        f'[[medium.recipes]]\nrun = "{i}"\nvolumes = {{ salt = "{v} mL" }}\n'
        for i, v in enumerate((0.5, 1, 2, 5, 10))
    )
    section = (
        '[medium]\nu_volume = "0.5 %"\ntotal_volume = "50 mL"\nequilibria = ["water"]\n'
        '[[medium.stocks]]\nname = "salt"\ncontents = { NaCl = "1 mol/L" }\nu = "0.2 %"\n'
    )
    (tmp_path / "recipe.toml").write_text(section + recipes, encoding="utf-8")
    written = tmp_path / "columns.csv"
    assert main(["medium", str(tmp_path / "recipe.toml"), "--csv", str(written)]) == 0
    head, *rows = written.read_text(encoding="utf-8").splitlines()
    I = np.array([float(row.split(",")[2]) for row in rows])
    k = 3.0 * 10 ** (2 * 0.51 * np.sqrt(I) / (1 + np.sqrt(I)))
    table = [f"{head},k/(L mol^-1 s^-1),u_r(k)/%"]
    table += [f"{row},{each:.6g},1" for row, each in zip(rows, k, strict=True)]
    (tmp_path / "rates.csv").write_text("\n".join(table) + "\n", encoding="utf-8")
    rates = kn.read_rates(tmp_path / "rates.csv")
    assert pytest.approx(I, rel=1e-12) == rates.I
    assert rates.u_I is not None
    assert rates.concentrations["Na^+"] == pytest.approx(I, rel=1e-4)
    fit = kn.fit(rates, salt_law="guntelberg")
    assert float(fit.parameters["charge_product"].value) == pytest.approx(1.0, abs=0.01)


_SPOILT = (
    "0", "-1", "1e308", "nan", '"1 mol/L"', '"0 mL"', '"-3 mL"', '""', "{}", "[]", "true",
    '"1e300 mmol/L"', '"-5 %"', '"inf s"', '{ NaCl = "1 mol/L" }', '{ "Na^+" = "1 mol/L" }',
    '["water", "sodium sulfate"]', '{ "M^2-" = 0 }', '{ "M^2-" = "1/0" }', '{ "M^2-" = "1e9" }',
)  # fmt: skip


def test_spoilt_studies_are_refused_or_reduced_but_never_break(tmp_path: Path) -> None:
    from knought.numerics.seeds import generator

    random = generator(66_016)
    lines = _STUDY.splitlines()
    keys = [i for i, line in enumerate(lines) if "=" in line]
    cells = ("", "-1", "0", "nan", "1e308", "abc", "V(water)/mL", "1:30", "1e-300", "no", '"')
    refused = 0
    for _ in range(50):
        spoilt, runs = list(lines), [row.split(",") for row in _RUNS.splitlines()]
        if random.random() < 0.7:
            at = keys[int(random.integers(len(keys)))]
            spoilt[at] = (
                f"{spoilt[at].split('=')[0]}= {_SPOILT[int(random.integers(len(_SPOILT)))]}"
            )
        else:
            row = runs[int(random.integers(len(runs)))]
            row[int(random.integers(len(row)))] = cells[int(random.integers(len(cells)))]
        try:
            _reduced(tmp_path, "\n".join(spoilt), "\n".join(",".join(row) for row in runs) + "\n")
        except InputError:
            refused += 1
    assert 20 < refused < 50
