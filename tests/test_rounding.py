"""Numbers as they are read: rounded by their uncertainty, the same digits in every layout."""

from __future__ import annotations

import math

import pytest
from hypothesis import given
from hypothesis import strategies as st

from knought.chemistry.quantities import QUANTITIES, quantity, rate_constant_unit
from knought.errors import InputError
from knought.rounding import brief, chance, heading, power_of_ten, rounded, superscript, unit_text


@pytest.mark.parametrize(
    ("value", "u", "written"),
    [
        (50.3149, 0.4217, "50.31 ± 0.42"),
        (0.0024137, 0.0000512, "0.002414 ± 0.000051"),
        (2.4137e-7, 5.12e-9, "(2.414 ± 0.051) × 10⁻⁷"),
        (1234567.0, 23456.0, "(1.235 ± 0.023) × 10⁶"),
        (-71.0449, 0.861, "−71.04 ± 0.86"),
        (9.96, 0.0996, "9.96 ± 0.10"),
        (3.0, 0.0, "3"),
        (1234.0, 120.0, "(1.23 ± 0.12) × 10³"),
        (0.03, 1.2, "0.0 ± 1.2"),
    ],
)
def test_values_are_rounded_by_their_uncertainty(value: float, u: float, written: str) -> None:
    """GUM 7.2.6: two significant digits of u, the value to the same place."""
    assert rounded(value, u).pair() == written


@pytest.mark.parametrize(
    ("value", "written"),
    [
        (math.inf, "infinite"),
        (-math.inf, "−infinite"),
        (math.nan, "unknown"),
        (0.1, "0.1"),
        (298.15, "298.15"),
        (6.02214076e23, "6.0221 × 10²³"),
        (0.09999999999, "0.1"),
        (0.0, "0"),
    ],
)
def test_numbers_without_uncertainty_are_short(value: float, written: str) -> None:
    assert rounded(value).number() == written


def test_every_layout_shows_the_same_digits() -> None:
    digits = rounded(-2.4137e-7, 5.12e-9)
    assert digits.pair("ascii") == "(-2.414 +/- 0.051) x 10^-7"
    assert digits.pair("html") == "(−2.414 ± 0.051) × 10<sup>−7</sup>"
    assert digits.pair("latex") == r"(-2.414 \pm 0.051) \times 10^{-7}"
    assert digits.number("text") == "−2.414 × 10⁻⁷"
    assert digits.deviation("text") == "0.051 × 10⁻⁷"


@given(st.floats(-1e12, 1e12), st.floats(1e-9, 1e9))
def test_what_is_shown_is_within_half_a_unit_of_the_last_place(value: float, u: float) -> None:
    digits = rounded(value, u)
    shown = float(digits.value) * 10.0**digits.exponent
    spread = float(digits.uncertainty) * 10.0**digits.exponent
    assert abs(shown - value) <= 0.051 * u + 1e-9 * abs(value)
    assert abs(spread - u) <= 0.051 * u


@pytest.mark.parametrize(
    ("unit", "layout", "written"),
    [
        ("L mol^-1 s^-1", "text", "L mol⁻¹ s⁻¹"),
        ("L mol^-1 s^-1", "html", "L&nbsp;mol<sup>−1</sup>&nbsp;s<sup>−1</sup>"),
        ("L mol^-1 s^-1", "latex", r"\mathrm{L}\,\mathrm{mol}^{-1}\,\mathrm{s}^{-1}"),
        ("Å", "ascii", "Angstrom"),
        ("1", "text", ""),
    ],
)
def test_units_in_every_layout(unit: str, layout: str, written: str) -> None:
    assert unit_text(unit, layout) == written  # type: ignore[arg-type]


def test_headings_follow_quantity_calculus() -> None:
    assert heading("T", "K") == "T / K"
    assert heading("k", "L mol^-1 s^-1") == "k / (L mol⁻¹ s⁻¹)"
    assert heading("z", "1") == "z"
    assert quantity("activation_energy").heading("ascii") == "E_a / (kJ mol^-1)"


@pytest.mark.parametrize(
    ("order", "unit"),
    [
        (0, "mol L^-1 s^-1"),
        (1, "s^-1"),
        (2, "L mol^-1 s^-1"),
        (3, "L^2 mol^-2 s^-1"),
    ],
)
def test_the_unit_of_k_follows_from_the_order(order: int, unit: str) -> None:
    assert rate_constant_unit(order) == unit
    assert quantity("rate_constant", order).unit == unit


def test_every_unit_of_the_registry_is_read_back_by_the_grammar() -> None:
    from knought.chemistry.units import parse_unit

    for each in QUANTITIES.values():
        if each.unit == "°C":
            continue
        factor = parse_unit(each.unit).factor_to(parse_unit(each.shown_unit))
        assert factor == each.shown_factor, each.name


def test_energies_are_shown_in_kilojoules_exactly() -> None:
    assert quantity("activation_energy").shown(50_300.0) == 50.3
    assert quantity("activation_energy").written(50_314.9, 421.7) == "(50.31 ± 0.42) kJ mol⁻¹"
    assert quantity("ion_size").written(4.5e-10) == "4.5 Å"


def test_unknown_quantities_are_refused() -> None:
    with pytest.raises(InputError, match="activation_energy"):
        quantity("activation_energi")


def test_powers_and_superscripts() -> None:
    assert power_of_ten(-3) == "10⁻³"
    assert superscript("2+") == "²⁺"


@pytest.mark.parametrize(
    ("value", "digits", "text"),
    [
        (1.84e10, 2, "1.8 × 10¹⁰"),
        (1e-9, 3, "1 × 10⁻⁹"),
        (0.25, 3, "0.25"),
        (-0.0251, 2, "−0.025"),
        (2076.49, 3, "2.08 × 10³"),
    ],
)
def test_numbers_in_sentences_have_powers_of_ten(value: float, digits: int, text: str) -> None:
    assert brief(value, digits) == text


@pytest.mark.parametrize(
    ("probability", "text"),
    [(0.0, "p < 10⁻⁶"), (1e-7, "p < 10⁻⁶"), (2.3e-5, "p = 2 × 10⁻⁵"), (0.031, "p = 0.03")],
)
def test_chances_are_never_nothing(probability: float, text: str) -> None:
    assert chance(probability) == text
