"""Quantities: numbers, units, tolerances, designators, resistor codes, and their texts."""

from contextlib import suppress
from fractions import Fraction

import pytest
from hypothesis import given
from hypothesis import strategies as st

from bitweight.quantities import (
    QuantityError,
    engineering,
    parse_number,
    parse_quantity,
    parse_scaled_unit,
    spelled,
)
from bitweight.units import parse_unit

VALUES = [
    ("16 V", "16", "V"),
    ("-0.3 V", "-0.3", "V"),
    ("−0.3 V", "-0.3", "V"),
    ("3.3V", "3.3", "V"),
    ("0.1 kPa", "100", "kPa"),
    ("1.5 us", "0.0000015", "us"),
    ("1.5 µs", "0.0000015", "us"),
    ("1.5 cycles", "1.5", "cycles"),
    ("2 LSB", "2", "LSB"),
    ("10 mV/degC", "0.01", "mV/degC"),
    ("1/512 A", "1/512", "A"),
    ("1e3 Hz", "1000", "Hz"),
    ("2.5E-3 V", "0.0025", "V"),
    (".5 V", "0.5", "V"),
    ("4.7 Ω", "4.7", "ohm"),
    ("10k Ω", "10000", "ohm"),
    ("4k7 ohms", "4700", "ohm"),
    ("100 OHM", "100", "ohm"),
    ("100n F", "1e-7", "F"),
    ("4.7 kohm", "4700", "kohm"),
    ("25 degC", "298.15", "degC"),
    ("25 °C", "298.15", "degC"),
    ("298.15 K", "298.15", "K"),
    ("7 pH", "7", "pH"),
    ("3 NTU", "3", "NTU"),
    ("5 mg/l", "0.005", "mg/l"),
    ("50 %", "0.5", "%"),
    ("100 ppm", "0.0001", "ppm"),
    ("12", "12", ""),
    ("1 bar", "100000", "bar"),
    ("4.7 k", "4700", "kohm"),
    ("10 K", "10", "K"),
    ("10K", "10000", "ohm"),
    ("10m", "10", "m"),
    ("1.65 V  ", "1.65", "V"),
]


@pytest.mark.parametrize(("text", "value", "unit"), VALUES)
def test_a_text_becomes_an_exact_value(text: str, value: str, unit: str) -> None:
    """Number and unit are read exactly, the value in the coherent unit."""
    quantity = parse_quantity(text)
    assert (quantity.value, quantity.unit.text) == (Fraction(value), unit)


@pytest.mark.parametrize(
    ("text", "half_width"),
    [
        ("4.7 kohm ± 1 %", "47"),
        ("10k 1%", "100"),
        ("10k 1 %", "100"),
        ("10k +-1%", "100"),
        ("10k +/- 1 %", "100"),
        ("2.5 V 500 ppm", "0.00125"),
        ("5 V ± 10 mV", "0.01"),
        ("-5 V 1%", "0.05"),
        ("25 degC ± 2 K", "2"),
        ("25 degC 10%", "2.5"),
        ("R100 1%", "0.001"),
        ("50 % ± 1 %", "0.005"),
        ("16 V", "0"),
    ],
)
def test_a_tolerance_is_half_a_width(text: str, half_width: str) -> None:
    """Relative and absolute tolerances give the half-width in the coherent unit."""
    assert parse_quantity(text).half_width == Fraction(half_width)


@pytest.mark.parametrize(
    ("text", "designator", "value"),
    [
        ("R12 100k 1%", "R12", "100000"),
        ("R12 100 kohm", "R12", "100000"),
        ("R1 R47", "R1", "0.47"),
        ("RT1 4k7", "RT1", "4700"),
        ("U3 1.1 V 3%", "U3", "1.1"),
        ("R_SHUNT -5 V", "R_SHUNT", "-5"),
        ("R100", None, "0.1"),
        ("R100 1%", None, "0.1"),
        ("R100 ± 1 %", None, "0.1"),
    ],
)
def test_a_designator_stands_before_a_value(text: str, designator: str | None, value: str) -> None:
    """A part's name is kept apart from its value; a code alone is a value."""
    quantity = parse_quantity(text)
    assert (quantity.designator, quantity.value) == (designator, Fraction(value))


@pytest.mark.parametrize(
    ("text", "message"),
    [
        ("", 'expected a quantity like "16 V" or "4k7", found ""'),
        ("V", 'found "V"'),
        ("abc", 'found "abc"'),
        ("4,7k", 'found "4,7k"'),
        ("1e999 V", 'found "1e999 V"'),
        ("5 V ± 100 %", "expected a tolerance below 100 %"),
        ("10k 250%", "expected a tolerance below 100 %"),
        ("5 V ± -1 %", 'expected a tolerance like "± 1 %"'),
        ("5 V ± x", 'expected a tolerance like "± 1 %"'),
        ("5 V ± 1", "expected a tolerance with its unit"),
        ("5 V ± 1 A", "the tolerance is in A but the value is in V"),
        ("1/0 A", "expected a number like 3, 0.5 or 1/512"),
        ("9" * 300, "very long"),
        ("9" * 60 + " V", "expected a quantity"),
    ],
)
def test_what_is_no_quantity_says_what_was_expected(text: str, message: str) -> None:
    """Each refusal tells what was expected and gives an example."""
    with pytest.raises(ValueError, match=r"expected|tolerance") as caught:
        parse_quantity(text)
    assert message in str(caught.value)


@pytest.mark.parametrize(
    ("text", "scale"),
    [("0.1 kPa", "100"), ("mV", "0.001"), ("1/512 A", "1/512"), ("0.01 pH", "0.01"), ("%", "0.01")],
)
def test_a_counting_unit_may_have_a_number_in_front(text: str, scale: str) -> None:
    """What one count stands for is a unit with an exact scale, shown as written."""
    unit = parse_scaled_unit(text)
    assert (unit.scale, unit.text) == (Fraction(scale), text)


def test_a_tenth_of_a_degree_keeps_its_zero() -> None:
    """0 counts of 0.1 degC are 273.15 K."""
    assert parse_scaled_unit("0.1 degC").zero == Fraction("273.15")


@pytest.mark.parametrize("text", ["0 V", "-1 V"])
def test_a_counting_unit_is_above_zero(text: str) -> None:
    """A count that stands for nothing, or runs backwards, is refused."""
    with pytest.raises(QuantityError, match="expected a unit"):
        parse_scaled_unit(text)


@pytest.mark.parametrize(("text", "value"), [("3", 3), ("-1.5e3", -1500), ("1/4", Fraction(1, 4))])
def test_plain_numbers_are_exact(text: str, value: Fraction) -> None:
    """A number without unit is a fraction."""
    assert parse_number(text) == value


def test_a_temperature_converts_as_a_point_and_as_a_difference() -> None:
    """25 degC is 298.15 K as a point and 25 K as a difference."""
    quantity = parse_quantity("25 degC")
    assert quantity.within(parse_unit("K")) == Fraction("298.15")
    assert (quantity.difference, quantity.number) == (25, 25)


def test_conversion_to_another_kind_is_refused() -> None:
    """Volts are not amperes."""
    with pytest.raises(ValueError, match="V does not convert to A"):
        parse_quantity("1 V").within(parse_unit("A"))


@pytest.mark.parametrize(
    ("value", "unit", "text"),
    [
        (3.3, "V", "3.3 V"),
        (0.004095, "V", "4.095 mV"),
        (0.0000125, "A", "12.5 uA"),
        (4700, "ohm", "4.7 kohm"),
        (0, "V", "0 V"),
        (25.04, "degC", "25.04 degC"),
        (180.0, "kPa", "180 kPa"),
        (123456, "LSB", "123456 LSB"),
        (0.5, "", "0.5"),
        (7.0, "pH", "7 pH"),
    ],
)
def test_numbers_are_shown_with_a_prefix_where_the_unit_takes_one(
    value: float, unit: str, text: str
) -> None:
    """Engineering notation for known units, the number as it is for all others."""
    assert engineering(value, parse_unit(unit)) == text


def test_a_quantity_is_spelled_without_tolerance_and_name() -> None:
    """For a sentence only number and unit matter."""
    assert spelled(parse_quantity("R12 100k 1%")) == "100 kohm"


UNITS = st.sampled_from(["V", "mV", "kPa", "A", "degC", "pH", "mg/l", "%", "LSB", "mV/degC"])
NUMBERS = st.decimals(-10000, 10000, places=4, allow_nan=False, allow_infinity=False)


@given(NUMBERS, UNITS)
def test_writing_and_reading_a_quantity_gives_it_back(number: object, unit: str) -> None:
    """The number read in its own unit is the number written."""
    quantity = parse_quantity(f"{number:f} {unit}")
    assert quantity.number == Fraction(str(number))
    assert parse_quantity(quantity.text) == quantity


@given(NUMBERS, st.sampled_from([("V", "mV"), ("kPa", "bar"), ("degC", "K"), ("A", "uA")]))
def test_conversion_there_and_back_changes_nothing(number: object, pair: tuple[str, str]) -> None:
    """Conversions are exact both ways."""
    there = parse_quantity(f"{number:f} {pair[0]}")
    other = there.within(parse_unit(pair[1]))
    assert parse_quantity(f"{other.numerator}/{other.denominator} {pair[1]}").value == there.value


@given(st.text(max_size=40))
def test_any_text_is_a_quantity_or_a_plain_refusal(text: str) -> None:
    """No text raises anything but a refusal with a message."""
    with suppress(ValueError):
        assert parse_quantity(text).text == " ".join(text.split())
