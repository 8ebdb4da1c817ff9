"""Corrected constants in the style of those they replace."""

from fractions import Fraction

import pytest
from hypothesis import given
from hypothesis import strategies as st

from bitweight.arithmetic.literals import exact_value
from bitweight.arithmetic.types import MODELS
from bitweight.judge.spellings import is_coarse, plain, replacement, shown, spelled


@pytest.mark.parametrize(
    ("text", "value", "expected"),
    [
        ("1023", 1024, "1024"),
        ("1023UL", 1024, "1024UL"),
        ("0x3FF", 1024, "0x400"),
        ("0x0fffu", 4096, "0x1000u"),
        ("0b11", 4, "0b100"),
        ("0777", 512, "01000"),
        ("1023.0f", 1024, "1024.0f"),
        ("3.30", 3, "3.00"),
        ("5.", 4, "4."),
        ("0.0909", Fraction(2, 23), "0.0869565"),
        ("11.0", Fraction(1122, 100), "11.22"),
        ("1e3", 2000, "2e3"),
        ("3.3e3f", 5000, "5.0e3f"),
        ("41", Fraction(165, 4), "41"),
    ],
)
def test_base_suffix_and_digits_are_kept(text: str, value: Fraction | int, expected: str) -> None:
    """A constant keeps its base, suffix and decimals; more digits only where they are needed."""
    assert spelled(text, Fraction(value)) == expected


@pytest.mark.parametrize("text", ["'A'", "0x1p3", "VREF", "", "1 + 2"])
def test_other_text_is_not_rewritten(text: str) -> None:
    """What is no decimal, hexadecimal, octal or binary number cannot be rewritten."""
    assert spelled(text, Fraction(7)) is None


def test_negative_values_are_no_constants() -> None:
    """C has no negative constants, so none is written."""
    assert spelled("5", Fraction(-5)) is None


def test_a_value_of_another_type_is_no_replacement() -> None:
    """65536 is a long where int has 16 bits: the constant's type would change."""
    assert replacement("1023", Fraction(65536), MODELS["avr"]) is None
    assert replacement("1023", Fraction(65536), MODELS["arm"]) == "65536"


@given(st.fractions(min_value=Fraction(1, 1000), max_value=10**6, max_denominator=10**6))
def test_a_fraction_is_right_to_six_digits(value: Fraction) -> None:
    """A fraction is written with enough digits to be right to a millionth."""
    text = spelled("1.5", value)
    assert text is not None
    exact = exact_value(text)
    assert exact is not None
    assert abs(exact - value) <= value / 10**5


def test_people_see_no_suffix() -> None:
    """For people the suffix goes and whole numbers stay in full."""
    assert [plain(text) for text in ("1023UL", "0x3FFu", "5.0f")] == ["1023", "0x3FF", "5.0"]
    assert shown(Fraction(65536)) == "65536"
    assert shown(Fraction(1, 3)) == "0.333333"


@pytest.mark.parametrize(
    ("written", "exact", "coarse"),
    [
        (0, Fraction(1, 5), True),
        (3, Fraction(5, 2), True),
        (41, Fraction(165, 4), False),
        (11, Fraction(11), False),
    ],
)
def test_a_coarse_value_says_something_else(written: int, exact: Fraction, coarse: bool) -> None:
    """A rounding matters where it leaves nothing, or more than the share that is allowed."""
    assert is_coarse(Fraction(written), exact, Fraction(1, 100)) is coarse
