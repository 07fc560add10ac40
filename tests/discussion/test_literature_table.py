"""Tables of literature values: units, conditions and ± read in one way only, or refused."""

from __future__ import annotations

import math
from fractions import Fraction
from typing import TYPE_CHECKING

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from knought.discussion.literature import LiteratureValue, literature_values
from knought.discussion.literature_headers import read_heading
from knought.discussion.literature_spread import NO_SPREAD, Spread, parse_spread_meaning
from knought.discussion.literature_table import read_literature, read_literature_text
from knought.errors import InputError

if TYPE_CHECKING:
    from pathlib import Path


def one(text: str, **options: str) -> LiteratureValue:
    values = read_literature_text(text, **options)
    assert len(values) == 1
    return values[0]


def test_a_row_with_several_quantities_becomes_several_values() -> None:
    first, second, third = read_literature_text(
        "label\tyear\tt/°C\tI/(mmol/L)\tk/(L mol^-1 min^-1)\tu(k)/%\tE_a/(kJ/mol)"
        "\tU95(E_a)/(kJ/mol)\tΔS‡/(J K^-1 mol^-1)\tmedium\tnote\n"
        "King\t1931\t25\t100\t0.66\t3\t51.2\t1.6\t-70(4)\tNaCl\tby hand\n",
        uncertainty_means="2 s",
    )
    assert (first.name, second.name, third.name) == (
        "rate_constant",
        "activation_energy",
        "activation_entropy",
    )
    assert first.value == pytest.approx(0.011, rel=1e-15)
    assert first.standard_uncertainty == pytest.approx(0.011 * 0.03)
    assert first.compared_uncertainty == pytest.approx(0.03)
    assert (first.T, first.I, first.order, first.year) == (298.15, 0.1, Fraction(2), 1931)
    assert (first.medium, first.note, first.source) == ("NaCl", "by hand", "King (1931)")
    # t(95 %) of a normal distribution is 1.959964.
    assert second.value == 51_200.0
    assert second.standard_uncertainty == pytest.approx(1600 / 1.959964, rel=1e-6)
    assert (third.value, third.standard_uncertainty) == (-70.0, 2.0)
    assert first.place == "pasted cells, row 2"


@pytest.mark.parametrize(
    ("header", "cell", "expected"),
    [
        ("ln A", "23.0259", 23.0259),
        ("ln(A/s^-1)", "23.0259", 23.0259),
        ("lg(A/(L mol^-1 s^-1))", "10", 10 * math.log(10)),
        ("log10 A", "10", 10 * math.log(10)),
        ("A/(L mol^-1 min^-1)", "6e11", 10 * math.log(10)),
        ("lg(A/(cm3 mol^-1 s^-1))", "13", 10 * math.log(10)),
    ],
)
def test_pre_exponential_factors_end_as_ln_a(header: str, cell: str, expected: float) -> None:
    value = one(f"label;{header};T/K\nX;{cell};298.15\n")
    assert value.name == "ln_pre_exponential_factor"
    assert value.value == pytest.approx(expected, rel=1e-12)


@pytest.mark.parametrize(
    ("header", "name", "unit"),
    [
        ("Eₐ/(kJ/mol)", "activation_energy", 1e3),
        ("Ea (kcal/mol)", "activation_energy", 4184.0),
        ("dH++/(kJ/mol)", "activation_enthalpy", 1e3),
        ("ΔH‡ / (kJ mol⁻¹)", "activation_enthalpy", 1e3),
        ("DeltaS#/(J/(K mol))", "activation_entropy", 1.0),
        ("ΔG‡/(kJ/mol)", "activation_gibbs_energy", 1e3),
        ("z_A z_B", "charge_product", 1.0),
    ],
)
def test_headers_are_read_as_they_are_written(header: str, name: str, unit: float) -> None:
    value = one(f"label\t{header}\tT/K\nX\t-2\t298.15\n")
    assert value.name == name
    assert value.value == pytest.approx(-2 * unit)


@pytest.mark.parametrize(
    ("means", "divisor"),
    [
        ("1 s", 1.0),
        ("standard error", 1.0),
        ("2 s", 2.0),
        ("2σ", 2.0),
        ("95 %", 1.959963984540054),
        ("half-range", math.sqrt(3)),
    ],
)
def test_every_meaning_of_plus_minus_has_its_divisor(means: str, divisor: float) -> None:
    value = one(f"label\tE_a/(kJ/mol)\t± means\nX\t50 ± 2\t{means}\n")
    assert value.standard_uncertainty == pytest.approx(2000 / divisor)


def test_a_logarithm_of_k_with_its_own_plus_minus() -> None:
    value = one("label\tT/K\tlg(k/(L mol^-1 s^-1))\t± means\nX\t298\t-1.00(5)\t1 s\n")
    assert value.value == pytest.approx(0.1)
    assert value.compared_uncertainty == pytest.approx(0.05 * math.log(10))


def test_none_means_that_nothing_is_known() -> None:
    value = one("label\tE_a/(kJ/mol)\t±(E_a)/(kJ/mol)\t± means\nX\t50\t2\tnone\n")
    assert value.standard_uncertainty is None
    assert value.spread == NO_SPREAD


def test_an_f_factor_grows_away_from_its_temperature() -> None:
    """F(T) = F₀ exp(g |1/T - 1/T₀|): by hand 1.2 exp(100 |1/250 - 1/298|) = 1.27986."""
    value = one(
        "label\tT/K\tk/(cm3 molecule^-1 s^-1)\tF_0\tg/K\tT_0/K\nX\t250\t2e-12\t1.2\t100\t298\n"
    )
    assert value.spread.factor(250.0) == pytest.approx(1.27986, rel=1e-5)
    assert value.compared_uncertainty == pytest.approx(math.log(1.27986), rel=1e-4)
    assert value.spread.factor(298.0) == 1.2
    half = Spread("F-factor", 1.2, factor_coverage="2 s")
    assert half.standard_uncertainty(1.0, 298.0) == pytest.approx(math.log(1.2) / 2)


@pytest.mark.parametrize(
    ("k", "u", "expected"),
    [
        ("k/(L mol^-1 s^-1)", "u(k)/(L mol^-1 min^-1)", 0.3 / 60 / 2),
        ("10^3 k/(L mol^-1 s^-1)", "10^3 u(k)/(L mol^-1 s^-1)", 0.3 / 2),
        ("k/(L mol^-1 s^-1)", "u_r(k)", 0.3),
        ("lg(k/(L mol^-1 s^-1))", "u(lg k)", 0.3 * math.log(10)),
        ("k/(L mol^-1 s^-1)", "u(ln k)", 0.3),
    ],
)
def test_uncertainties_of_k_keep_their_own_unit(k: str, u: str, expected: float) -> None:
    value = one(f"label\tT/K\t{k}\t{u}\nX\t298\t2\t0.3\n")
    assert value.compared_uncertainty == pytest.approx(expected)


def test_a_plus_minus_without_a_meaning_is_told_with_its_place() -> None:
    with pytest.raises(InputError) as caught:
        read_literature_text("label\tE_a/(kJ/mol)\nA\t50 ± 2\nB\t51(3)\n", name="lit.tsv")
    problems = caught.value.problems
    assert [(p.file, p.row, p.column) for p in problems] == [
        ("lit.tsv", 2, "E_a/(kJ/mol)"),
        ("lit.tsv", 3, "E_a/(kJ/mol)"),
    ]
    assert "half-range" in problems[0].remedy


@pytest.mark.parametrize(
    ("text", "what"),
    [
        ("label\tT/K\tk/s^-1\nX\t298\tabc\n", "number"),
        ("label\tT/K\tk/s^-1\nX\t\t2\n", "temperature"),
        ("label\tT/K\tk/s^-1\nX\t298\t-2\n", "positive"),
        ("label\tE_a\nX\t50\n", "unit"),
        ("label\tE_a/s\nX\t50\n", "unit"),
        ("label\tE_a/(kJ/mol)\tyear\nX\t50\tlast\n", "year"),
        ("label\tE_a/(kJ/mol)\torder\nX\t50\ttwo\n", "order"),
        ("label\tT/K\tk/s^-1\torder\nX\t298\t2\t2\n", "order"),
        ("label\tE_a/(kJ/mol)\tT/K\nX\t\t298\n", "no value"),
        ("label\tE_a/(kJ/mol)\tEa/(kJ/mol)\nX\t50\t50\n", "same"),
        ("label\tE_a/(kJ/mol)\t± means\nX\t50(2)\tperhaps\n", "meaning"),
        ("label\tE_a/(kJ/mol)\t± means\nX\t50(2)\tF-factor\n", "F_0"),
        ("label\tE_a/(kJ/mol)\tu(E_a)/(kJ/mol)\nX\t50(2)\t2\n", "twice"),
        ("label\tE_a/(kJ/mol)\tu(E_a)/(kJ/mol)\t± means\nX\t50\t2\t2 s\n", "header says"),
        ("label;E_a/(kJ/mol);T/K\nX;50,5;298.15\n", "comma"),
        ("label\tE_a/(kJ/mol)\n", "no values"),
        ("one\ttwo\n1\t2\n", "headers"),
    ],
)
def test_what_cannot_be_read_in_one_way_is_refused(text: str, what: str) -> None:
    with pytest.raises(InputError, match=what):
        read_literature_text(text)


def test_decimal_commas_are_read_where_all_are() -> None:
    value = one("label;E_a/(kJ/mol);T/K\nX;50,5;298,15\n")
    assert (value.value, value.T) == (50_500.0, 298.15)


def test_files_are_read_like_text(tmp_path: Path) -> None:
    path = tmp_path / "literature.csv"
    path.write_text('label,T/K,k/s^-1\n"Smith, J.",298.15,2.5e-3\n', encoding="utf-8-sig")
    (value,) = read_literature(path)
    assert (value.label, value.value, value.order) == ("Smith, J.", 2.5e-3, Fraction(1))
    assert value.place == "literature.csv, row 2"
    with pytest.raises(InputError, match="no sheets"):
        read_literature(path, sheet="A")


def test_comment_rows_and_columns_of_others_are_left_out() -> None:
    value = one("label\tT/K\tk/s^-1\tcolour\n# old\t298\t1\t-\nX\t298\t2\tblue\n")
    assert value.label == "X"


@settings(max_examples=30)
@given(
    st.floats(1e-12, 1e12),
    st.sampled_from([("L mol^-1 s^-1", 1.0), ("M^-1 min^-1", 1 / 60), ("dm3 mmol-1 s-1", 1e3)]),
)
def test_a_change_of_unit_changes_nothing_else(k: float, unit: tuple[str, float]) -> None:
    text, factor = unit
    value = one(f"label\tT/K\tk/({text})\nX\t298\t{k!r}\n")
    assert value.value == pytest.approx(k * factor, rel=1e-12)


def test_headers_of_others_are_none() -> None:
    assert read_heading("colour") is None
    assert read_heading("") is None


def test_values_of_ones_own_are_checked_together() -> None:
    with pytest.raises(InputError) as caught:
        LiteratureValue("X", "rate_constant", -1.0, T=-5.0, I=-0.1)
    assert len(caught.value.problems) == 3
    with pytest.raises(InputError):
        LiteratureValue("X", "colour", 1.0)
    with pytest.raises(InputError):
        LiteratureValue("X", "activation_energy", 1.0, Spread("F-factor", 1.2))
    with pytest.raises(InputError):
        literature_values([])
    with pytest.raises(InputError):
        Spread("2 s", -1.0)
    with pytest.raises(InputError):
        Spread("1 s", 0.1).factor(300.0)
    assert parse_spread_meaning("") == "none"
    assert LiteratureValue("X", "activation_energy", 1.0, order=Fraction(2)).source == "X"
