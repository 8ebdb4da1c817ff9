"""Codes and series for parts, as the standards print them."""

from fractions import Fraction

import pytest
from hypothesis import given
from hypothesis import strategies as st

from bitweight.quantities import parse_quantity

# IEC 60062, marking codes for resistors and capacitors: the letter stands for the decimal mark.
CODES = [
    ("R47", "0.47", "ohm"),
    ("4R7", "4.7", "ohm"),
    ("470R", "470", "ohm"),
    ("4K7", "4700", "ohm"),
    ("4k7", "4700", "ohm"),
    ("47K3", "47300", "ohm"),
    ("4M7", "4700000", "ohm"),
    ("R047", "0.047", "ohm"),
    ("4L7", "0.0047", "ohm"),
    ("1G0", "1000000000", "ohm"),
    ("1T0", "1000000000000", "ohm"),
    ("10p", "0.00000000001", "F"),
    ("4n7", "0.0000000047", "F"),
    ("n47", "0.00000000047", "F"),
    ("100n", "0.0000001", "F"),
    ("1u0", "0.000001", "F"),
    ("4µ7", "0.0000047", "F"),
    ("1m0", "0.001", "F"),
    ("1F0", "1", "F"),
]

# IEC 60062, letters for the tolerance, in percent (F and K read in print, the others from memory).
LETTERS = {
    "B": "0.1",
    "C": "0.25",
    "D": "0.5",
    "F": "1",
    "G": "2",
    "H": "3",
    "J": "5",
    "K": "10",
    "M": "20",
    "N": "30",
}

# IEC 60063, preferred number series for resistors and capacitors.
E12 = (10, 12, 15, 18, 22, 27, 33, 39, 47, 56, 68, 82)
E24 = (*E12, 11, 13, 16, 20, 24, 30, 36, 43, 51, 62, 75, 91)


@pytest.mark.parametrize(("code", "value", "unit"), CODES)
def test_a_code_is_worth_what_the_standard_says(code: str, value: str, unit: str) -> None:
    """The letter is the decimal mark and the multiplier (IEC 60062)."""
    quantity = parse_quantity(code)
    assert (quantity.value, quantity.unit.text) == (Fraction(value), unit)


@pytest.mark.parametrize(("letter", "percent"), LETTERS.items())
def test_a_letter_after_the_code_is_its_tolerance(letter: str, percent: str) -> None:
    """A second letter says the tolerance (IEC 60062)."""
    quantity = parse_quantity(f"4K7{letter}")
    assert quantity.half_width == 4700 * Fraction(percent) / 100


def test_a_capacitor_with_its_letters() -> None:
    """100nK is 100 nF with 10 %; 100nF is 100 nF without a tolerance."""
    assert parse_quantity("100nK").half_width == Fraction(1, 10**8)
    assert parse_quantity("100nF").half_width == 0


@pytest.mark.parametrize("number", E24)
@pytest.mark.parametrize(("letter", "factor"), [("R", 1), ("k", 1000), ("M", 10**6)])
def test_the_series_reads_in_every_decade(number: int, letter: str, factor: int) -> None:
    """Each value of E24 reads the same as code and as number with unit (IEC 60063)."""
    for code, value in (
        (f"{number // 10}{letter}{number % 10}", Fraction(number, 10)),
        (f"{number}{letter}", Fraction(number)),
        (f"{number}0{letter}", Fraction(number * 10)),
    ):
        assert parse_quantity(code).value == value * factor
        assert parse_quantity(f"{float(value * factor):f} ohm").value == value * factor


@given(st.integers(0, 999), st.sampled_from("RkM"), st.integers(0, 99))
def test_any_code_reads_as_its_decimal_number(whole: int, letter: str, decimals: int) -> None:
    """A code and the number with a decimal point are one value (IEC 60062)."""
    factor = {"R": 1, "k": 1000, "M": 10**6}[letter]
    value = Fraction(f"{whole}.{decimals:02}") * factor
    assert parse_quantity(f"{whole}{letter}{decimals:02}").value == value
