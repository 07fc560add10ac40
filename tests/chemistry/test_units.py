"""Units: every spelling that chemists use, exact factors, and refusal of what reads two ways."""

from __future__ import annotations

from fractions import Fraction

import numpy as np
import pytest
from hypothesis import assume, given, settings
from hypothesis import strategies as st

from knought.chemistry.constants import AVOGADRO
from knought.chemistry.quantities import QUANTITIES, rate_constant_unit
from knought.chemistry.unit_symbols import ALIASES, SYMBOLS
from knought.chemistry.units import Unit, parse_quantity, parse_unit, reaction_order, scaled
from knought.errors import InputError

SECOND_ORDER = (
    "L mol^-1 s^-1", "M^-1 s^-1", "M-1 s-1", "M⁻¹s⁻¹", "L/(mol s)", "L mol−1 s−1", "L·mol⁻¹·s⁻¹",
    "L*mol**-1*s**-1", "L.mol-1.s-1", "dm3 mol-1 s-1", "dm³ mol⁻¹ s⁻¹", "dm^3/(mol·s)",
    "l mol^-1 sec^-1", "1/(M s)", "(mol/L)^-1 s^-1", "L mol -1 s -1", "litre mole^(-1) second^-1",
    "L\u2009mol⁻¹\u00a0s⁻¹", "s^-1 M^-1", "(L mol^-1 s^-1)", "L mol‐1 s‐1", "M^-1.s^-1",
)  # fmt: skip


@pytest.mark.parametrize("text", SECOND_ORDER)
def test_a_second_order_rate_constant_is_one_unit_in_every_spelling(text: str) -> None:
    assert parse_unit(text) == parse_unit("L mol^-1 s^-1")
    assert parse_unit(text).factor == 1
    assert reaction_order(parse_unit(text)) == 2


@pytest.mark.parametrize(
    ("text", "other", "factor"),
    [
        ("dm3 mol-1 min-1", "L mol^-1 s^-1", Fraction(1, 60)),
        ("mM^-1 s^-1", "L mol^-1 s^-1", Fraction(1000)),
        ("cm3 mol^-1 s^-1", "L mol^-1 s^-1", Fraction(1, 1000)),
        ("h^-1", "s^-1", Fraction(1, 3600)),
        ("d-1", "s^-1", Fraction(1, 86400)),
        ("ms^-1", "s^-1", Fraction(1000)),
        ("10^-3 s^-1", "s^-1", Fraction(1, 1000)),
        ("10³ s⁻¹", "s^-1", Fraction(1000)),
        ("1e-5 s^-1", "s^-1", Fraction(1, 10**5)),
        ("10-3 s-1", "s^-1", Fraction(1, 1000)),
        ("1000 s^-1", "s^-1", Fraction(1000)),
        ("0.001 s^-1", "s^-1", Fraction(1, 1000)),
        ("mol dm-3", "mol/L", Fraction(1)),
        ("mmol/L", "M", Fraction(1, 1000)),
        ("mM", "M", Fraction(1, 1000)),
        ("µM", "M", Fraction(1, 10**6)),
        ("μM", "M", Fraction(1, 10**6)),
        ("uM", "M", Fraction(1, 10**6)),
        ("mol/m^3", "mol/L", Fraction(1, 1000)),
        ("kJ/mol", "J mol^-1", Fraction(1000)),
        ("kcal mol-1", "J mol^-1", Fraction(4184)),  # thermochemical calorie, ISO 80000-5
        ("cal/(K mol)", "J K^-1 mol^-1", Fraction(4184, 1000)),
        ("%", "1", Fraction(1, 100)),
        ("\u00c5", "m", Fraction(1, 10**10)),
        ("\u212b", "m", Fraction(1, 10**10)),
        ("A\u030a", "m", Fraction(1, 10**10)),
        ("nm", "m", Fraction(1, 10**9)),
        ("L mol^-1 cm^-1", "m^2 mol^-1", Fraction(1, 10)),
        ("cm2 s-1", "m^2 s^-1", Fraction(1, 10**4)),
        ("cP", "Pa s", Fraction(1, 1000)),
        ("atm", "Pa", Fraction(101325)),
        ("bar", "Pa", Fraction(10**5)),
        ("J", "kg m^2 s^-2", Fraction(1)),
        ("Pa", "kg m^-1 s^-2", Fraction(1)),
        ("g/mL", "kg/L", Fraction(1)),
        ("mK", "K", Fraction(1, 1000)),
    ],
)  # fmt: skip
def test_a_unit_has_this_exact_factor(text: str, other: str, factor: Fraction) -> None:
    assert parse_unit(text).factor_to(parse_unit(other)) == factor


def test_molecules_are_counted_by_the_avogadro_constant() -> None:
    unit = parse_unit("cm3 molecule^-1 s^-1")
    factor = unit.factor_to(parse_unit("L mol^-1 s^-1"))
    assert float(factor) == pytest.approx(AVOGADRO / 1000, rel=1e-15)
    assert reaction_order(unit) == 2


@pytest.mark.parametrize(
    ("text", "order"),
    [
        ("s^-1", 1), ("mol L^-1 s^-1", 0), ("M/s", 0), ("M^-2 s^-1", 3), ("L^2 mol^-2 min^-1", 3),
        ("L^0.5 mol^-0.5 s^-1", Fraction(3, 2)), ("M^(1/2) s^-1", Fraction(1, 2)),
        ("M^½ s^-1", Fraction(1, 2)), ("cm6 molecule-2 s-1", 3),
    ],
)  # fmt: skip
def test_the_order_is_read_from_the_unit_of_k(text: str, order: Fraction) -> None:
    assert reaction_order(parse_unit(text)) == order


@pytest.mark.parametrize("thirds", range(-3, 13))
def test_the_registry_writes_units_of_k_that_are_read_back(thirds: int) -> None:
    for order in (Fraction(thirds, 3), Fraction(thirds, 2)):
        unit = parse_unit(rate_constant_unit(order))
        assert reaction_order(unit) == order
        assert unit.factor == 1


def test_every_unit_of_the_registry_is_read() -> None:
    for quantity in QUANTITIES.values():
        unit, shown = parse_unit(quantity.unit), parse_unit(quantity.shown_unit)
        assert unit.factor_to(shown) == quantity.shown_factor


def test_celsius_has_its_zero_alone_and_none_inside_a_unit() -> None:
    celsius, kelvin = parse_unit("°C"), parse_unit("K")
    assert celsius.convert([25.0, -273.15], kelvin).tolist() == [298.15, 0.0]
    assert kelvin.convert(298.15, celsius) == pytest.approx(25.0, abs=1e-13)
    assert celsius.factor_to(kelvin) == 1
    assert celsius.difference() == kelvin
    for spelling in ("degC", "deg C", "℃", "ºC", "˚C", "° C"):
        assert parse_unit(spelling) == celsius
    with pytest.raises(InputError, match="only alone"):
        parse_unit("J/(mol °C)")


@pytest.mark.parametrize(
    ("text", "one", "other"),
    [
        ("L/mol/s", "L mol^-1 s^-1", "L mol^-1 s"),
        ("L/mol s", "L mol^-1 s^-1", "L mol^-1 s"),
        ("J/mol K", "J mol^-1 K^-1", "J mol^-1 K"),
        ("1/M s", "M^-1 s^-1", "M^-1 s"),
        ("1/(L/mol/s)", "L mol^-1 s^-1", "L mol^-1 s"),
    ],
)
def test_a_second_solidus_is_refused_with_both_readings(text: str, one: str, other: str) -> None:
    with pytest.raises(InputError) as refusal:
        parse_unit(text)
    assert one in str(refusal.value)
    assert other in str(refusal.value)


@pytest.mark.parametrize(
    ("text", "what"),
    [
        ("", "missing"), ("/s", "1/s"), ("A", "no unit"), ("mos^-1", "did you mean"),
        ("s^0", "exponent"), ("s^-99", "exponent"), ("103 s-1", "power of ten"),
        ("2 s^-1", "power"),
        ("s^-1)", "bracket"), ("(s^-1", "bracket"), ("((((s))))^2 m", "brackets|bracket"),
        ("s*", "dot or asterisk"), ("k", "no unit"), ("min in", "no unit"), ("Â°C", "encoding"),
        ("sâ»Â¹", "encoding"), ("°F", "°C or K"), ("s " * 13, "too many"), ("s" * 200, "too long"),
        ("10^99 10^99 s", "number where"), ("mol%", "goes on|no unit"), ("s^(1/0)", "exponent"),
        ("10^120 L", "power|large"),
    ],
)  # fmt: skip
def test_what_is_no_unit_is_refused_with_a_reason(text: str, what: str) -> None:
    with pytest.raises(InputError, match=f"(?i){what}"):
        parse_unit(text)


@pytest.mark.parametrize(
    ("text", "what"),
    [("L mol^-1", "not the unit"), ("kg mol^-1 s^-1", "molal"), ("bar^-1 s^-1", "pressures"),
     ("K", "not the unit"), ("m s^-1", "not the unit"), ("1", "not the unit")],
)  # fmt: skip
def test_what_is_no_unit_of_a_rate_constant_is_refused(text: str, what: str) -> None:
    with pytest.raises(InputError, match=what):
        reaction_order(parse_unit(text))


def test_unlike_units_are_not_changed_into_each_other() -> None:
    with pytest.raises(InputError, match="different kinds"):
        parse_unit("K").convert(1.0, parse_unit("s"))
    assert not parse_unit("K").is_like(parse_unit("s"))


_SYMBOL = st.sampled_from([*SYMBOLS, *ALIASES])
_POWER = st.integers(-3, 3).filter(bool) | st.sampled_from([Fraction(1, 2), Fraction(-2, 3)])


@settings(max_examples=40, deadline=None)
@given(st.lists(st.tuples(_SYMBOL, _POWER), min_size=1, max_size=4), st.integers(-9, 9))
def test_the_canonical_text_of_a_unit_is_read_as_the_same_unit(
    factors: list[tuple[str, Fraction]], power: int
) -> None:
    # A molecule is 1.7e-24 mol: powers of several leave what a unit may measure.
    assume(sum(abs(exponent) for symbol, exponent in factors if "molec" in symbol) <= 3)
    text = " ".join(f"{symbol}^({exponent})" for symbol, exponent in factors)
    unit = parse_unit(f"10^{power} {text}")
    again = parse_unit(unit.text)
    assert again == unit
    assert again.text == unit.text


@settings(max_examples=40, deadline=None)
@given(
    st.sampled_from(["mM", "min^-1", "kJ mol^-1", "cm3 mol^-1 s^-1", "µM^-1 h^-1"]),
    st.floats(1e-9, 1e9),
)
def test_changing_a_unit_there_and_back_keeps_the_number(text: str, value: float) -> None:
    unit = parse_unit(text)
    base = Unit(Fraction(1), unit.dimension)
    assert unit.factor_to(base) * base.factor_to(unit) == 1
    back = base.convert(unit.convert(value, base), unit)
    assert float(back) == pytest.approx(value, rel=4e-16)


@settings(max_examples=40, deadline=None)
@given(st.text(max_size=40) | st.text(alphabet="molLsMKk^-*/().0123 ⁻¹°C%", max_size=30))
def test_any_text_is_a_unit_or_a_refusal(text: str) -> None:
    try:
        unit = parse_unit(text)
    except InputError as error:
        refused = error
    else:
        assert parse_unit(unit.text) == unit
        return
    assert all(problem.what and problem.remedy for problem in refused.problems)


def test_scaling_rounds_once_where_it_can_and_leaves_the_input_alone() -> None:
    values = np.array([50300.0, 1.0])
    assert scaled(values, Fraction(1, 1000)).tolist() == [50.3, 0.001]
    assert values.tolist() == [50300.0, 1.0]


@pytest.mark.parametrize(
    ("text", "unit", "value"),
    [
        ("298.15 K", "K", 298.15), ("25 °C", "K", 298.15), ("0.2 K", "K", 0.2), ("3 %", "1", 0.03),
        ("1 Å", "m", 1e-10), ("0.1 L/mol", "L mol^-1", 0.1), ("−5 °C", "K", 268.15),
        ("1.2 × 10⁻³ s⁻¹", "s^-1", 1.2e-3), ("5", "1", 5.0), ("1 mmol/L", "mol L^-1", 1e-3),
        ("60 min", "s", 3600.0),
    ],
)  # fmt: skip
def test_a_quantity_of_the_study_file_is_read(text: str, unit: str, value: float) -> None:
    assert parse_quantity(text, unit) == value


@pytest.mark.parametrize(
    ("text", "what"),
    [("5", "no unit"), ("1,5 K", "decimal point"), ("x K", "begin with a number"), ("5 s", "not a"),
     ("1e999 K", "begin with a number"), ("1.2.3 K", "decimal point"), ("5 furlong", "no unit"),
     ("", "begin with a number")],
)  # fmt: skip
def test_what_is_no_quantity_is_refused(text: str, what: str) -> None:
    with pytest.raises(InputError, match=what):
        parse_quantity(text, "K")
