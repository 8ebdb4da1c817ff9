"""C arithmetic on single numbers."""

import math
from fractions import Fraction

import pytest

from bitweight.arithmetic import scalars
from bitweight.arithmetic.types import MODELS

AVR, HOST = MODELS["avr"], MODELS["host"]


@pytest.mark.parametrize(
    ("value", "name", "wrapped"),
    [
        (40000, "int", -25536),
        (-1, "unsigned int", 65535),
        (65536, "unsigned int", 0),
        (-32769, "int", 32767),
        (300, "unsigned char", 44),
        (200, "signed char", -56),
        (7, "long", 7),
    ],
)
def test_wrapping_keeps_the_low_bits(value: int, name: str, wrapped: int) -> None:
    """A value outside its type is reduced modulo 2**bits (C11 6.3.1.3)."""
    assert scalars.wrap(value, AVR.types[name]) == wrapped


@pytest.mark.parametrize(
    ("value", "bits", "nearest"),
    [
        (16777217, 32, 16777216.0),
        (16777219, 32, 16777220.0),
        (2**61 + 2**37 + 1, 32, 2.0**61 + 2.0**38),
        (Fraction(33, 10), 32, 3.299999952316284),
        (Fraction(33, 10), 64, 3.3),
        (2**53 + 1, 64, 2.0**53),
        (Fraction(1, 2**149), 32, 2.0**-149),
        (Fraction(1, 2**150), 32, 0.0),
        (2**128, 32, math.inf),
        (-(10**400), 64, -math.inf),
        (0, 32, 0.0),
    ],
)
def test_rounding_to_the_nearest(value: Fraction, bits: int, nearest: float) -> None:
    """Exact numbers are rounded once, ties to even, to infinity where too large (IEEE 754)."""
    assert scalars.nearest(value, bits) == nearest


@pytest.mark.parametrize(
    ("value", "source", "target", "converted"),
    [
        (3.99, "double", "int", 3),
        (-3.99, "double", "int", -3),
        (-0.5, "double", "unsigned int", 0),
        (65536.0, "double", "unsigned int", None),
        (-1.0, "double", "unsigned int", None),
        (math.inf, "double", "long", None),
        (math.nan, "double", "long", None),
        (0.25, "double", "_Bool", 1),
        (0, "int", "_Bool", 0),
        (16777217, "long", "float", 16777216.0),
        (3.3, "double", "float", 3.299999952316284),
        (-1, "int", "unsigned long", 2**32 - 1),
    ],
)
def test_conversions(value: float, source: str, target: str, converted: float | None) -> None:
    """Conversions truncate, wrap and round as C11 6.3.1 says, or give nothing."""
    assert scalars.convert(value, AVR.types[source], AVR.types[target]) == converted


@pytest.mark.parametrize(
    ("symbol", "left", "right", "result"),
    [
        ("/", -7, 2, -3),
        ("%", -7, 2, -1),
        ("/", 7, -2, -3),
        ("%", 7, -2, 1),
        ("/", -32768, -1, -32768),
        ("%", -32768, -1, 0),
        ("/", 1, 0, None),
        ("%", 1, 0, None),
        ("<<", 1, 15, -32768),
        ("<<", 1, 16, None),
        ("<<", 1, -1, None),
        (">>", -7, 1, -4),
        ("*", 1023, 64, -64),
        ("&", -1, 0xFF, 0xFF),
        ("|", 5, -8, -3),
        ("^", -1, 5, -6),
        ("<=", 5, 5, 1),
        ("&&", 2, 0, 0),
        ("||", 0, 4, 1),
    ],
)
def test_integer_operators(symbol: str, left: int, right: int, result: int | None) -> None:
    """Integer operators on a 16-bit int, by C11 6.5 and two's complement."""
    assert scalars.binary(symbol, left, right, AVR.int_, AVR.int_) == result


def test_floating_operators_round_to_their_width() -> None:
    """Each floating operator is rounded to the width of its type."""
    pair = HOST.float_, HOST.float_
    assert scalars.binary("+", 16777216.0, 1.0, *pair) == 16777216.0
    assert scalars.binary("*", 1e30, 1e30, *pair) == math.inf
    assert scalars.binary("/", 1.0, 0.0, *pair) is None
    assert scalars.binary("-", 0.3, 0.1, HOST.double, HOST.double) == 0.3 - 0.1


@pytest.mark.parametrize(
    ("symbol", "value", "name", "result"),
    [
        ("-", -32768, "int", -32768),
        ("-", 1, "unsigned int", 65535),
        ("~", 200, "int", -201),
        ("~", 0, "unsigned int", 65535),
        ("+", 5, "int", 5),
        ("!", 0, "int", 1),
        ("!", 0.5, "double", 0),
        ("-", 0.5, "double", -0.5),
    ],
)
def test_unary_operators(symbol: str, value: float, name: str, result: float) -> None:
    """Unary operators stay in their promoted type."""
    assert scalars.unary(symbol, value, AVR.types[name]) == result
