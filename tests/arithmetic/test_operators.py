"""Operators over arrays against the same operators on single numbers."""

import numpy as np
import pytest

from bitweight.arithmetic import operators, scalars, values
from bitweight.arithmetic.types import MODELS, CType
from bitweight.arithmetic.values import FaultKind, Value
from properties.strategies import BOUNDARY_WORDS

AVR, HOST = MODELS["avr"], MODELS["host"]
PROMOTED = [
    *(AVR.types[name] for name in ("int", "unsigned int", "long", "unsigned long", "double")),
    *(HOST.types[name] for name in ("long", "unsigned long", "double")),
]
ARITHMETIC = ("+", "-", "*", "/", "%", "&", "|", "^", "<<", ">>", "<", "<=", "==", "!=", "&&")
NO_VALUE = (FaultKind.DIVISION, FaultKind.SHIFT)


def pairs(type_: CType) -> tuple[Value, Value]:
    """Every pair of boundary values of a type."""
    words = values.reading(np.array(BOUNDARY_WORDS), HOST.long)[0]
    words = values.convert(words, HOST.long, type_)[0]
    count = words.data.size
    left = Value(np.repeat(words.data, count), words.low, words.high)
    right = Value(np.tile(words.data, count), words.low, words.high)
    return left, right


@pytest.mark.parametrize("symbol", ARITHMETIC)
@pytest.mark.parametrize("type_", PROMOTED, ids=lambda t: f"{t.name} of {t.bits}")
def test_arrays_and_single_numbers_agree(symbol: str, type_: CType) -> None:
    """Every operator gives each pair what it gives single numbers, and stays in its bounds."""
    if not type_.is_integer and symbol in ("%", "&", "|", "^", "<<", ">>"):
        symbol = "*"
    left, right = pairs(type_)
    truth = symbol in ("<", "<=", "==", "!=", "&&")
    to = HOST.int_ if truth else type_
    result, faults = operators.binary(symbol, left, right, type_, to)
    missing = np.zeros(left.data.shape, dtype=bool)
    for kind, mask in faults:
        missing |= mask if kind in NO_VALUE else False
    for a, b, found, none in zip(left.data, right.data, result.data, missing, strict=True):
        wanted = scalars.binary(symbol, a.item(), b.item(), type_, to)
        assert (wanted is None) == none, (a, b)
        assert none or found.item() == wanted, (a, b)
    if to.is_integer:
        assert result.low <= int(result.data.min())
        assert int(result.data.max()) <= result.high


@pytest.mark.parametrize("symbol", ["+", "-", "*", "<<"])
@pytest.mark.parametrize(
    "type_", [t for t in PROMOTED if t.is_integer], ids=lambda t: f"{t.name} of {t.bits}"
)
def test_overflow_is_where_the_exact_result_does_not_fit(symbol: str, type_: CType) -> None:
    """Overflow and wrap are reported at exactly the pairs whose exact result leaves the type."""
    left, right = pairs(type_)
    if symbol == "<<":
        right = Value(right.data % right.data.dtype.type(type_.bits), 0, type_.bits - 1)
    result, faults = operators.binary(symbol, left, right, type_, type_)
    found = np.zeros(result.data.shape, dtype=bool)
    for kind, mask in faults:
        found |= mask if kind is not FaultKind.NEGATIVE_SHIFT else False
    exact = {
        "+": lambda a, b: a + b,
        "-": lambda a, b: a - b,
        "*": lambda a, b: a * b,
        "<<": lambda a, b: a << b,
    }[symbol]
    wanted = [
        not type_.low <= exact(int(a), int(b)) <= type_.high
        for a, b in zip(left.data, right.data, strict=True)
    ]
    assert found.tolist() == wanted
    assert any(wanted)


@pytest.mark.parametrize("symbol", ["-", "+", "~", "!"])
@pytest.mark.parametrize("type_", PROMOTED, ids=lambda t: f"{t.name} of {t.bits}")
def test_unary_operators_agree(symbol: str, type_: CType) -> None:
    """Unary operators give each element what they give a single number."""
    if not type_.is_integer and symbol == "~":
        symbol = "-"
    operand, _ = pairs(type_)
    to = HOST.int_ if symbol == "!" else type_
    result, _ = operators.unary(symbol, operand, type_)
    wanted = [scalars.unary(symbol, each.item(), type_) for each in operand.data]
    assert result.data.tolist() == wanted
    if to.is_integer:
        assert result.low <= min(wanted)
        assert max(wanted) <= result.high


def test_a_count_of_any_type_shifts() -> None:
    """The count of a shift may be of another type and width than the shifted value."""
    count = values.constant(3, HOST.unsigned_long_long)
    shifted, faults = operators.binary(
        "<<", values.constant(5, AVR.int_), count, AVR.int_, AVR.int_
    )
    assert shifted.data.tolist() == [40]
    assert faults == ()


def test_oversized_shifts_leave_nothing() -> None:
    """A count beyond the width is a fault; what is left is 0, or the sign shifted right."""
    many = Value(np.array([16, -1, 2]), -1, 16)
    for symbol, value, wanted in (("<<", 5, [0, 0, 20]), (">>", -8, [-1, -1, -2])):
        result, faults = operators.binary(
            symbol, values.constant(value, AVR.int_), many, AVR.int_, AVR.int_
        )
        assert result.data.tolist() == wanted
        assert (FaultKind.SHIFT, [True, True, False]) in [(k, m.tolist()) for k, m in faults]
