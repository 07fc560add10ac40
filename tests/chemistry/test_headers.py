"""Headers as quantity calculus: what each one means, and which can be read in two ways."""

from __future__ import annotations

from fractions import Fraction
from typing import Any

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from knought.chemistry.headers import parse_header
from knought.chemistry.uncertainty_words import Meaning
from knought.errors import InputError

KELVIN = {"role": "T", "unit": "K"}
CELSIUS = {"role": "T", "unit": "°C"}
FIRST = {"role": "k", "unit": "s^-1"}
STRENGTH = {"role": "I", "unit": "mol L^-1"}

READ: tuple[tuple[str, dict[str, Any]], ...] = (
    *((text, KELVIN) for text in (
        "T/K", "T / K", "T (K)", "T(K)", "T [K]", "T, K", "T in K", "temperature/K", "Temp. (K)",
        "temp/K", "absolute temperature / K",
    )),
    *((text, CELSIUS) for text in (
        "t/°C", "T (°C)", "t(°C)", "temperature / °C", "θ/°C", "T/degC", "Temp (C)", "T/℃",
        "T [ºC]",
    )),
    *((text, STRENGTH) for text in (
        "I/(mol/L)", "I / mol L-1", "I (mol/L)", "ionic strength, mol/L",
        "Ionic strength (mol L⁻¹)",
        "µ/(mol L^-1)", "I_c/(mol/L)",
    )),
    ("I/M", {"role": "I", "unit": "M"}),
    ("I (mM)", {"role": "I", "unit": "mM"}),
    ("I", {"role": "I", "unit": None}),
    ("T", {"role": "T", "unit": None}),
    *((text, FIRST) for text in (
        "k/s^-1", "k/s⁻¹", "k (1/s)", "k(s^-1)", "k [s-1]", "k, s-1", "k_1/s^-1", "k₁ / s⁻¹",
        "rate constant / s^-1", "Rate coefficient (s^-1)", "k_calc/s^-1",
    )),
    *((text, FIRST | {"observed": True}) for text in (
        "k_obs/s^-1", "kobs (s-1)", "k'/s^-1", "k_{obs}/s^-1", "k_ψ/s^-1",
        "observed rate constant / s^-1",
    )),
    ("k", {"role": "k", "unit": None}),
    ("k2/(M-1 s-1)", {"role": "k", "unit": "M^-1 s^-1"}),
    *((text, FIRST | {"prefactor": Fraction(1000)}) for text in (
        "10^3 k/s^-1", "10³ k / s⁻¹", "10^3·k/s^-1", "1000 k/s^-1", "1e3 k/s^-1", "10³k/s⁻¹",
        "10^3 × k / s^-1",
    )),
    ("k/(10^-3 s^-1)", {"role": "k", "unit": "10^-3 s^-1"}),
    ("k (10^-3 s^-1)", {"role": "k", "unit": "10^-3 s^-1"}),
    *((text, {"role": "T", "function": "reciprocal", "prefactor": Fraction(1000), "unit": "K"})
      for text in ("1000 K/T", "10^3 K/T", "10³ K / T", "1000/T", "1000/T (K^-1)", "10³/(T/K)",
                   "1000/(T/K)", "(1000/T)/K^-1")),
    *((text, {"role": "T", "function": "reciprocal", "prefactor": Fraction(1), "unit": "K"})
      for text in ("1/T", "(1/T)/K^-1", "T^-1/K^-1", "1/T (1/K)", "K/T")),
    *((text, FIRST | {"function": "ln"}) for text in (
        "ln(k/s^-1)", "ln (k / s⁻¹)", "ln k/s^-1", "ln[k/s^-1]", "ln{k/(s^-1)}", "log_e(k/s^-1)",
    )),
    *((text, FIRST | {"function": "lg"}) for text in (
        "lg(k/s^-1)", "log10(k/s^-1)", "log_10(k/s^-1)", "lg k/s^-1",
    )),
    ("ln(10^3 k/s^-1)", FIRST | {"function": "ln", "prefactor": Fraction(1000)}),
    ("√I", {"role": "I", "function": "sqrt", "unit": None}),
    *((text, STRENGTH | {"function": "sqrt"}) for text in (
        "√(I/(mol/L))", "sqrt(I/(mol/L))",
    )),
    ("√I/(mol/L)^½", {"role": "I", "function": "sqrt", "unit": "(mol^0.5 L^-0.5)^2"}),
    ("I^(1/2)/(mol/L)^0.5", {"role": "I", "function": "sqrt", "unit": "(mol^0.5 L^-0.5)^2"}),
    ("c(NaClO4)/(mmol/L)", {"role": "c", "species": "NaClO4", "unit": "mmol L^-1"}),
    ("[NaClO4]/mM", {"role": "c", "species": "NaClO4", "unit": "mM"}),
    ("c(S2O8²⁻) / M", {"role": "c", "species": "S2O8^2-", "unit": "M"}),
    ("c(SO₄^2-)/M", {"role": "c", "species": "SO4^2-", "unit": "M"}),
    ("c([Co(NH3)6]^3+)/(mmol/L)", {"role": "c", "species": "[Co(NH3)6]^3+", "unit": "mmol L^-1"}),
    *((text, {"role": "c", "species": "NaOH", "excess": True, "unit": "M"}) for text in (
        "c_excess(NaOH)/M", "c(NaOH, excess)/M", "[NaOH]_excess/M",
    )),
    *((name, {"role": name}) for name in ("run", "salt", "batch", "use", "reason", "note", "n")),
    ("Run no.", {"role": "run"}),
    ("#", {"role": "run"}),
    ("Comments", {"role": "note"}),
    ("t/s", {"role": "time", "unit": "s"}),
    ("t/min", {"role": "time", "unit": "min"}),
)  # fmt: skip


@pytest.mark.parametrize(("text", "expected"), READ, ids=lambda value: value)
def test_a_header_is_read_as(text: str, expected: dict[str, Any]) -> None:
    header = parse_header(text)
    assert header is not None
    assert header.text == text
    found = {name: getattr(header, name) for name in expected}
    if header.unit is not None and "unit" in expected:
        found["unit"] = header.unit.text
    assert found == expected
    assert not header.is_uncertainty
    for name, usual in (("function", ""), ("prefactor", 1), ("observed", False), ("excess", False)):
        assert name in expected or getattr(header, name) == usual


@pytest.mark.parametrize(
    ("text", "role", "meaning", "unit"),
    [
        ("u(k)/s^-1", "k", Meaning("standard", False), "s^-1"),
        ("u (k) / s^-1", "k", Meaning("standard", False), "s^-1"),
        ("u_k/s^-1", "k", Meaning("standard", False), "s^-1"),
        ("SE(k)/s^-1", "k", Meaning("standard", False), "s^-1"),
        ("u_r(k)/%", "k", Meaning("standard", True), "%"),
        ("u(k)/%", "k", Meaning("standard", True), "%"),
        ("u_r(k)", "k", Meaning("standard", True), None),
        ("s(k)/s^-1", "k", Meaning("deviation", False), "s^-1"),
        ("SD(k)/s^-1", "k", Meaning("deviation", False), "s^-1"),
        ("σ_k / s^-1", "k", Meaning("deviation", False), "s^-1"),
        ("SD of k / s^-1", "k", Meaning("deviation", False), "s^-1"),
        ("s_r(k)/%", "k", Meaning("deviation", True), "%"),
        ("2 s(k)/s^-1", "k", Meaning("double deviation", False), "s^-1"),
        ("2σ(k)/s^-1", "k", Meaning("double deviation", False), "s^-1"),
        ("2u(k)/s^-1", "k", Meaning("double", False), "s^-1"),
        ("u(k)/s^-1 (2 s)", "k", Meaning("double deviation"), "s^-1"),
        ("U95(k)/s^-1", "k", Meaning("95 %", False), "s^-1"),
        ("CI95(k)/s^-1", "k", Meaning("95 %", False), "s^-1"),
        ("95 % CI of k/s^-1", "k", Meaning("95 %", False), "s^-1"),
        ("U(k)/s^-1", "k", Meaning("expanded", False), "s^-1"),
        ("Δk/s^-1", "k", Meaning(""), "s^-1"),
        ("±k/s^-1", "k", Meaning(""), "s^-1"),
        ("u(T)/K", "T", Meaning("standard", False), "K"),
        ("u(t)/°C", "T", Meaning("standard", False), "°C"),
        ("u(I)/(mol/L)", "I", Meaning("standard", False), "mol L^-1"),
        ("u_r(I)/%", "I", Meaning("standard", True), "%"),
        ("u(c(NaOH))/M", "c", Meaning("standard", False), "M"),
        ("±", "neighbour", Meaning(""), None),
        ("SD", "neighbour", Meaning("deviation", False), None),
        ("± (2 s)", "neighbour", Meaning("double deviation"), None),
        ("u/s^-1", "neighbour", Meaning("standard", False), "s^-1"),
        ("RSD/%", "neighbour", Meaning("deviation", True), "%"),
        ("RSD %", "neighbour", Meaning("deviation", True), "%"),
        ("Std. Dev.", "neighbour", Meaning("deviation", False), None),
        ("u_r(k) %", "k", Meaning("standard", True), "%"),
    ],
)  # fmt: skip
def test_an_uncertainty_is_read_with_its_meaning(
    text: str, role: str, meaning: Meaning, unit: str | None
) -> None:
    header = parse_header(text)
    assert header is not None
    assert (header.role, header.uncertainty) == (role, meaning)
    assert (None if header.unit is None else header.unit.text) == unit


def test_a_power_of_ten_inside_an_uncertainty_is_the_same_as_before_it() -> None:
    for text in ("10^3 u(k)/s^-1", "u(10^3 k)/s^-1"):
        header = parse_header(text)
        assert header is not None
        assert header.prefactor == 1000


def test_what_plus_minus_means_in_the_cells_of_k_may_stand_in_its_header() -> None:
    for text in ("k/s^-1 (± 2 s)", "k/s^-1 ± 2 s", "k (± 2 s) / s^-1"):
        header = parse_header(text)
        assert header is not None
        assert header.beside == Meaning("double deviation")
        assert not header.is_uncertainty


@pytest.mark.parametrize(
    "text",
    ["", "pH", "A0", "date", "kinetics", "absorbance", "rate", "kelvin", "n/mol", "ln(k/T)",
     "-ln k",
     "ln(k/T)/(s^-1 K^-1)", "time", "file", "298.15", "Temperatures in March", "k(298 K)/s^-1",
     "T, the bath", "k in the second run",
     "x" * 300],
)  # fmt: skip
def test_what_is_no_header_of_ours_is_left_to_the_caller(text: str) -> None:
    assert parse_header(text) is None


@pytest.mark.parametrize(
    ("text", "readings"),
    [
        ("k × 10^3 / s^-1", ("10^3 k/(s^-1) if 2.41 stands for 2.41e-3",
                             "k/(10^3 s^-1) if 2.41 stands for 2.41e3")),
        ("k*1e3 / s^-1", ("10^3 k", "10^3 s^-1")),
        ("k (×10^-3) / s^-1", ("10^-3 k/(s^-1) if 2.41 stands for 2.41e3", "2.41e-3")),
        ("k/s^-1 × 10^3", ("10^3 k/(s^-1)", "k/(10^3 s^-1)")),
        ("k (s-1) (×10³)", ("10^3 k", "2.41e-3")),
        ("k x 10^3 (M^-1 s^-1)", ("10^3 k/(M^-1 s^-1)", "k/(10^3 M^-1 s^-1)")),
        ("log k", ("ln(k/...)", "lg(k/...)")),
        ("log(k/s^-1)", ("ln(k/...)", "lg(k/...)")),
        ("t", ("t/°C", "t/s")),
        ("k/(L/mol/s)", ("L mol^-1 s^-1", "L mol^-1 s")),
    ],
)  # fmt: skip
def test_what_can_be_read_in_two_ways_is_refused_with_both(
    text: str, readings: tuple[str, str]
) -> None:
    with pytest.raises(InputError) as refusal:
        parse_header(text)
    for reading in readings:
        assert reading in str(refusal.value)
    assert f'read: "{text}"' in str(refusal.value)


@pytest.mark.parametrize(
    ("text", "what"),
    [
        ("T/s", "no unit of temperature"), ("I/K", "no unit of concentration"),
        ("I/(mol/kg)", "molalities"), ("k/K", "not the unit of a rate constant"),
        ("k/(furlong s^-1)", "no unit that is known"), ("t/Â°C", "encoding"), ("T/°F", "°C or K"),
        ("1000/T (s^-1)", "not K"), ("k/s^-1 (25 °C)", "words behind its unit"),
        ("c(NaOH)/s", "no unit of concentration"),
    ],
)  # fmt: skip
def test_a_known_quantity_in_a_wrong_unit_is_refused(text: str, what: str) -> None:
    with pytest.raises(InputError, match=what):
        parse_header(text)


@settings(max_examples=40, deadline=None)
@given(st.text(max_size=60) | st.text(alphabet="kTIuscln (/)[]^-+0123×10sKM√%=.,", max_size=40))
def test_any_text_is_a_header_or_none_or_a_refusal(text: str) -> None:
    try:
        header = parse_header(text)
    except InputError as error:
        refused = error
    else:
        assert header is None or header.text == text
        return
    assert all(problem.what and problem.remedy for problem in refused.problems)
