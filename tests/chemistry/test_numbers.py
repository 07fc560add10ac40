"""The one grammar of numbers: every form, every refusal, and no digit lost."""

from __future__ import annotations

import math

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from knought.chemistry.numbers import (
    DecimalMark,
    Number,
    Unreadable,
    decimal_evidence,
    last_step,
    read_number,
)


@pytest.mark.parametrize(
    ("text", "value"),
    [
        ("2.41", 2.41), ("2.41e-3", 2.41e-3), ("2.41E-03", 2.41e-3), ("+2.41", 2.41), ("2.", 2.0),
        (".5", 0.5), ("  7\t", 7.0), ("−2.41", -2.41), ("–5", -5.0), ("- 5", -5.0),
        ("1.2 × 10⁻³", 1.2e-3), ("1.2·10^-3", 1.2e-3), ("1.2*10**-3", 1.2e-3),
        ("1.2x10^-3", 1.2e-3),
        ("1.2 × 10^(-3)", 1.2e-3), ("10^-3", 1e-3), ("10⁻³", 1e-3), ("1 234.5", 1234.5),
        ("1\u2009234\u2009567", 1234567.0), ("1\u00a0234", 1234.0), ("0.001 234", 0.001234),
        ("0.001 234 5", 0.0012345), ("1,234.5", 1234.5), ("1,234,567.8", 1234567.8), ("0e-5", 0.0),
        ("1.234", 1.234), ("4.9406564584124654e-324", 5e-324),
    ],
)  # fmt: skip
def test_a_number_with_a_decimal_point_is_read(text: str, value: float) -> None:
    assert read_number(text) == Number(value)


@pytest.mark.parametrize(
    ("text", "value"),
    [("2,41", 2.41), ("1,2·10⁻³", 1.2e-3), ("1.234,5", 1234.5), ("1,234", 1.234), ("7", 7.0),
     ("1 234,5", 1234.5)],
)  # fmt: skip
def test_a_number_with_a_decimal_comma_is_read(text: str, value: float) -> None:
    assert read_number(text, ",") == Number(value)


@pytest.mark.parametrize(
    ("text", "value", "uncertainty", "sign"),
    [
        ("2.41(5)", 2.41, 0.05, "()"), ("2.41(5)e-3", 2.41e-3, 5e-5, "()"),
        ("2.41(12)", 2.41, 0.12, "()"), ("241(5)", 241.0, 5.0, "()"),
        ("2.41(0.05)e-3", 2.41e-3, 5e-5, "()"), ("2.41(5) × 10⁻³", 2.41e-3, 5e-5, "()"),
        ("2.41e-3 ± 0.05e-3", 2.41e-3, 5e-5, "±"), ("2.41 ± 0.05", 2.41, 0.05, "±"),
        ("2.41+/-0.05", 2.41, 0.05, "±"), ("(2.41 ± 0.05)e-3", 2.41e-3, 5e-5, "±"),
        ("(2.41±0.05)·10⁻³", 2.41e-3, 5e-5, "±"), ("−6.03 ± 0.02", -6.03, 0.02, "±"),
    ],
)  # fmt: skip
def test_a_value_with_its_uncertainty_in_one_cell_is_read(
    text: str, value: float, uncertainty: float, sign: str
) -> None:
    found = read_number(text)
    assert isinstance(found, Number)
    assert (found.value, found.uncertainty, found.sign) == (value, uncertainty, sign)


def test_percent_behind_plus_minus_is_relative() -> None:
    assert read_number("2.41 ± 2 %") == Number(2.41, 0.02, "±", relative=True)
    assert read_number("2 %") == Number(2.0, percent=True)


@pytest.mark.parametrize(
    "text", ["", " ", "-", "–", "n/a", "N/A", "na", "NaN", "n.d.", "?", "\u00a0"]
)
def test_a_cell_that_says_there_is_no_value_is_missing(text: str) -> None:
    assert read_number(text) is None


@pytest.mark.parametrize(
    ("text", "what"),
    [
        ("abc", "not a number"), ("1.2.3", "not a number"), ("1_000", "not a number"),
        ("0x10", "not a number"), ("٢", "not a number"), ("２", "not a number"),
        ("12 34", "not a number"), ("1e5e", "not a number"), ("5 K", "not a number"),
        ("2.41(5", "not a number"), ("1,23,4", "not a number"), ("1e999", "too large"),
        ("1e-999", "too small"), ("inf", "infinite"), ("< 0.01", "bound"), ("~5", "bound"),
        ("1.2x10-3", "superscript"), ("1.2 × 103", "superscript"), ("1'234", "apostrophes"),
        ("2-Mar", "day and month"), ("3/4", "day and month"), ("03.04.2024", "day and month"),
        ("2024-03-04", "date or a time"), ("12:30", "date or a time"), ("#DIV/0!", "error"),
        ("Err:502", "error"), ("=A1*2", "formula"), ("2.41 ± 0.05e-3", "one side"),
        ("2.41e-3 ± 0.05", "one side"), ("2.41(5) ± 0.05", "twice"), ("2,41", "decimal comma"),
        ("1,234", "1.234 or as 1234"), ("1" * 100, "not a number"),
    ],
)  # fmt: skip
def test_what_is_no_number_is_refused_by_name(text: str, what: str) -> None:
    found = read_number(text)
    assert isinstance(found, Unreadable)
    assert what in found.what
    assert found.remedy


def test_thousands_are_refused_with_both_readings_until_the_mark_is_stated() -> None:
    found = read_number("1.234", ",")
    assert isinstance(found, Unreadable)
    assert "1,234 or as 1234" in found.what
    assert read_number("1.234", ",", stated=True) == Number(1234.0)
    assert read_number("1,234", ".", stated=True) == Number(1234.0)
    assert isinstance(read_number("0.123", ",", stated=True), Unreadable)
    assert isinstance(read_number("12.34", ",", stated=True), Unreadable)


@pytest.mark.parametrize(
    ("text", "shows"),
    [("2.41", "."), ("2,41", ","), ("1.234", "?."), ("1,234", "?,"), ("1,234.5", "."),
     ("1.234,5", ","), ("0.123", "."), ("0,123", ","), ("241", ""), ("abc", ""), ("1.2.3", ""),
     ("1,2·10⁻³", ","), ("2.410(5)", "?.")],
)  # fmt: skip
def test_a_cell_shows_this_of_the_decimal_mark(text: str, shows: str) -> None:
    assert decimal_evidence(text) == shows


@pytest.mark.parametrize(
    ("text", "step"),
    [("2.41", 0.01), ("2.41e-3", 1e-5), ("25", 1.0), ("25.0", 0.1), ("10^-3", 1e-3),
     ("(2.41 ± 0.05)e-3", 1e-5), ("1.2 × 10⁻³", 1e-4)],
)  # fmt: skip
def test_a_step_of_the_last_digit_is(text: str, step: float) -> None:
    assert last_step(text) == step


def test_a_step_of_what_is_no_number_is_unknown() -> None:
    assert math.isnan(last_step("abc"))


FORMS = st.sampled_from(["{m}e{e}", "{m}E{e}", "{m} × 10^{e}", "{m}·10^{e}", "{m}*10**({e})"])


@settings(max_examples=40, deadline=None)
@given(
    st.decimals(allow_nan=False, allow_infinity=False, min_value=-1000, max_value=1000, places=6),
    st.integers(-290, 290),
    FORMS,
    st.sampled_from([".", ","]),
)
def test_every_form_of_a_number_is_the_nearest_double(
    mantissa: object, exponent: int, form: str, mark: DecimalMark
) -> None:
    text = form.format(m=mantissa, e=exponent).replace(".", mark)
    found = read_number(text, mark)
    assert isinstance(found, Number)
    assert found.value == float(f"{mantissa}e{exponent}")


@settings(max_examples=40, deadline=None)
@given(st.floats(allow_nan=False, allow_infinity=False))
def test_a_double_is_read_back_from_its_digits(value: float) -> None:
    assert read_number(repr(value)) == Number(value)


@settings(max_examples=40, deadline=None)
@given(st.text(max_size=30) | st.text(alphabet="0123456789.,eE+-± ()×^%*", max_size=20))
def test_any_text_is_a_number_or_missing_or_refused(text: str) -> None:
    for mark in (".", ","):
        for stated in (False, True):
            found = read_number(text, "." if mark == "." else ",", stated=stated)
            assert found is None or isinstance(found, (Number, Unreadable))
            assert not isinstance(found, Number) or math.isfinite(found.value)
    decimal_evidence(text)
