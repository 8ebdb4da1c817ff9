"""Constants of C: value, type, and how exactly they are written."""

from fractions import Fraction

import pytest

from bitweight.arithmetic.literals import exact_value, half_digit, literal, literal_type
from bitweight.arithmetic.types import MODELS, DataModel

AVR, HOST, DEFAULT = MODELS["avr"], MODELS["host"], DataModel()


@pytest.mark.parametrize(
    ("text", "host", "avr"),
    [
        # sizes measured with gcc 12 and avr-gcc 5.4
        ("32767", "int", "int"),
        ("32768", "int", "long"),
        ("0x8000", "int", "unsigned int"),
        ("65535", "int", "long"),
        ("0xFFFF", "int", "unsigned int"),
        ("65536", "int", "long"),
        # C11 6.4.4.1p5
        ("5000UL", "unsigned long", "unsigned long"),
        ("5000lu", "unsigned long", "unsigned long"),
        ("5000L", "long", "long"),
        ("1u", "unsigned int", "unsigned int"),
        ("65536u", "unsigned int", "unsigned long"),
        ("2147483648", "long", "long long"),
        ("0x80000000", "unsigned int", "unsigned long"),
        ("4294967296", "long", "long long"),
        ("1ull", "unsigned long long", "unsigned long long"),
        ("1LLU", "unsigned long long", "unsigned long long"),
        ("0b1010", "int", "int"),
        ("0777", "int", "int"),
        ("18446744073709551615", "unsigned long long", "unsigned long long"),
        ("3.3", "double", "double"),
        ("3.3f", "float", "float"),
        ("1e3L", "long double", "long double"),
        ("'A'", "int", "int"),
    ],
)
def test_type_of_a_constant(text: str, host: str, avr: str) -> None:
    """A constant has the first type of its list that holds it."""
    assert literal_type(text, HOST).name == host
    assert literal_type(text, AVR).name == avr


@pytest.mark.parametrize(
    ("text", "value"),
    [
        ("0", 0),
        ("010", 8),
        ("0x3fF", 1023),
        ("0B101", 5),
        ("1023u", 1023),
        (".5", 0.5),
        ("5.", 5.0),
        ("1.5e3", 1500.0),
        ("1E-3", 0.001),
        ("0x1.8p3", 12.0),
        ("0x.8P1F", 1.0),
        ("3.3f", 3.299999952316284),
        ("16777217.0f", 16777216.0),
        ("1e60f", float("inf")),
        ("1e-50f", 0.0),
        ("1e-45f", 1.401298464324817e-45),
        ("'A'", 65),
        (r"'\n'", 10),
        (r"'\0'", 0),
        (r"'\x41'", 65),
        (r"'\''", 39),
        (r"'\101'", 65),
    ],
)
def test_value_of_a_constant(text: str, value: float) -> None:
    """A constant has the value its text spells, rounded once to its type."""
    assert literal(text, HOST)[0] == value


def test_a_float_constant_is_rounded_once() -> None:
    """A float constant between two neighbours is not rounded through double first (IEEE 754)."""
    text = "1.00000005960464477540f"  # just above the middle of 1 and its neighbour
    assert literal(text, HOST)[0] == 1 + 2.0**-23


def test_a_character_beyond_seven_bits_follows_plain_char() -> None:
    """'\\xff' is negative where plain char is signed."""
    assert literal(r"'\xff'", AVR)[0] == -1
    assert literal(r"'\xff'", DEFAULT)[0] == 255


@pytest.mark.parametrize(
    "text",
    [
        *("", "abc", "09", "0x", "0b2", "1uu", "1lL", "1.2.3", "1e", "e3", ".", "3f", "1.0ff"),
        *("'ab'", "''", "'", "1_000", "1'000", "-1", " 1", "1e999999999", "0x1p99999", "9" * 2000),
        *("18446744073709551616", "0x1.8", "'€'"),
    ],
)
def test_what_is_no_constant_is_refused(text: str) -> None:
    """Text that is no constant of C, or an absurd one, is a ValueError and never a hang."""
    with pytest.raises(ValueError, match=r"."):
        literal(text, HOST)


@pytest.mark.parametrize(
    ("text", "half"),
    [
        ("3.30", Fraction(5, 1000)),
        ("3.3f", Fraction(5, 100)),
        ("2.", Fraction(1, 2)),
        (".125", Fraction(5, 10000)),
        ("5000UL", Fraction(1, 2)),
        ("0x3FF", Fraction(1, 2)),
        ("1e3", Fraction(1, 2)),
        ("1.50e3", Fraction(5)),
        ("5e-3", Fraction(5, 10000)),
        ("4.88e-3f", Fraction(5, 10**6)),
        ("0x1.8p4", Fraction(1, 2)),
        ("'A'", Fraction(1, 2)),
        ("VREF", None),
        ("1e99999", None),
    ],
)
def test_half_of_the_last_written_digit(text: str, half: Fraction | None) -> None:
    """The last written digit of a constant bounds what it can mean; whole ones mean themselves."""
    assert half_digit(text) == half


@pytest.mark.parametrize(
    ("text", "value"),
    [
        ("3.3f", Fraction(33, 10)),
        ("0x10", Fraction(16)),
        ("1e-3", Fraction(1, 1000)),
        ("'A'", None),
        ("x", None),
    ],
)
def test_the_exact_number_of_a_text(text: str, value: Fraction | None) -> None:
    """The exact value of a constant is free of any rounding."""
    assert exact_value(text) == value
