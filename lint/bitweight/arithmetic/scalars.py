"""C arithmetic on one pair of numbers: the quick path for constants.

Enters: Python numbers and their C types. Leaves: the C value, or None where C gives none (division
by zero, a shift beyond the width, a floating value that does not fit its integer type). Signed
overflow wraps, as it does on every target here. `values.py` means the same for arrays; a test
holds the two equal.
"""

import ctypes
import math
import operator
from collections.abc import Callable, Mapping
from fractions import Fraction
from types import MappingProxyType

from bitweight.arithmetic.types import CType, Kind

Number = int | float

_BINARY32_DIGITS = 24
_BINARY32_LOWEST_EXPONENT = -126
_EXACT_IN_BINARY64 = 1 << 53


def wrap(value: int, type_: CType) -> int:
    """The value of `type_` that has the same low bits (C11 6.3.1.3; two's complement)."""
    span = 1 << type_.bits
    return (value - type_.low) % span + type_.low


def nearest(value: Fraction | int, bits: int) -> float:
    """The floating number of `bits` bits nearest to an exact value, ties to even (IEEE 754)."""
    try:
        return _binary32(Fraction(value)) if bits == 32 else float(value)
    except OverflowError:
        return math.inf if value > 0 else -math.inf


def _binary32(value: Fraction) -> float:
    if value == 0:
        return 0.0
    exponent = abs(value.numerator).bit_length() - value.denominator.bit_length()
    if abs(value) < Fraction(2) ** exponent:
        exponent -= 1
    quantum = Fraction(2) ** (max(exponent, _BINARY32_LOWEST_EXPONENT) - _BINARY32_DIGITS + 1)
    return ctypes.c_float(float(round(value / quantum) * quantum)).value


def rounded(value: float, type_: CType) -> float:
    """A binary64 result as `type_` holds it.

    Rounding twice is harmless for + - * /: binary64 has more than twice the digits of binary32.
    """
    return ctypes.c_float(value).value if type_.bits == 32 else value


def convert(value: Number, source: CType, target: CType) -> Number | None:
    """A value converted to `target` (C11 6.3.1.2 to 6.3.1.5)."""
    if target.kind is Kind.BOOL:
        return int(value != 0)
    if target.kind is Kind.FLOATING:
        return _to_floating(value, target)
    if source.is_integer:
        return wrap(int(value), target)
    if not math.isfinite(value):
        return None
    whole = math.trunc(value)
    return whole if target.low <= whole <= target.high else None


def _to_floating(value: Number, target: CType) -> float:
    if isinstance(value, int) and abs(value) > _EXACT_IN_BINARY64:
        return nearest(value, target.bits)
    return rounded(float(value), target)


def unary(symbol: str, value: Number, type_: CType) -> Number | None:
    """`-`, `+`, `~` or `!` of a value of the promoted type."""
    if symbol == "!":
        return int(value == 0)
    if symbol == "~":
        return wrap(~int(value), type_)
    result = -value if symbol == "-" else value
    return wrap(int(result), type_) if type_.is_integer else result


def binary(
    symbol: str, left: Number, right: Number, operand: CType, result: CType
) -> Number | None:
    """A binary operator on values of the type `operand` (shifts: the type of the left one)."""
    if symbol in COMPARISONS:
        return int(COMPARISONS[symbol](left, right))
    if symbol in ("&&", "||"):
        return int(bool(left) and bool(right)) if symbol == "&&" else int(bool(left) or bool(right))
    if not operand.is_integer:
        return _floating(symbol, left, right, result)
    return _integer(symbol, int(left), int(right), result)


COMPARISONS: Mapping[str, Callable[[Number, Number], bool]] = MappingProxyType(
    {
        "<": operator.lt,
        ">": operator.gt,
        "<=": operator.le,
        ">=": operator.ge,
        "==": operator.eq,
        "!=": operator.ne,
    }
)


_EXACT: Mapping[str, Callable[[int, int], int]] = MappingProxyType(
    {
        "+": operator.add,
        "-": operator.sub,
        "*": operator.mul,
        "&": operator.and_,
        "|": operator.or_,
        "^": operator.xor,
    }
)


def _integer(symbol: str, left: int, right: int, type_: CType) -> int | None:
    if symbol in _EXACT:
        return wrap(_EXACT[symbol](left, right), type_)
    if symbol in ("<<", ">>"):
        if not 0 <= right < type_.bits:
            return None
        return wrap(left << right if symbol == "<<" else left >> right, type_)
    if right == 0:
        return None
    quotient = abs(left) // abs(right) * (1 if (left < 0) == (right < 0) else -1)
    return wrap(quotient if symbol == "/" else left - quotient * right, type_)


def _floating(symbol: str, left: float, right: float, type_: CType) -> float | None:
    if symbol == "/":
        return None if right == 0 else rounded(left / right, type_)
    operate = {"+": operator.add, "-": operator.sub, "*": operator.mul}[symbol]
    return rounded(operate(float(left), float(right)), type_)
