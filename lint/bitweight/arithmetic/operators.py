"""The operators of C over arrays of codes: what the target computes, and where it goes wrong.

Enters: operands as `Value`s, already converted, and their types. Leaves: the result of the operator
for every code with a mask of its faults.
"""

from collections.abc import Callable, Mapping
from types import MappingProxyType

import numpy as np

from bitweight.arithmetic.types import CType
from bitweight.arithmetic.values import (
    Array,
    FaultKind,
    Faults,
    Mask,
    Result,
    Value,
    constant,
    dtype_of,
    faults_at,
    fitted,
    from_mask,
    holds,
    truth,
    wrapped,
)

_INT64_LOW, _INT64_HIGH = -(1 << 63), (1 << 63) - 1
_EXACT_IN_BINARY64 = 1 << 53
_Operate = Callable[[Array, Array], Array]


def unary(symbol: str, value: Value, type_: CType) -> Result:
    """`-`, `+`, `~` or `!` on a value of the promoted type."""
    if symbol == "!":
        return from_mask(~truth(value)), ()
    if symbol == "+":
        return value, ()
    if not type_.is_integer:
        return Value(-value.data), ()
    if symbol == "-":
        return _ARITHMETIC["-"](constant(0, type_), value, type_)
    flipped = ~value.data if type_.signed else wrapped(~value.data, type_)
    if type_.signed:
        return Value(flipped, ~value.high, ~value.low), ()
    return Value(flipped, type_.high - value.high, type_.high - value.low), ()


def binary(symbol: str, left: Value, right: Value, operand: CType, result: CType) -> Result:
    """A binary operator on values of the type `operand` (shifts: the type of the left one)."""
    if symbol in _COMPARISONS:
        return from_mask(_COMPARISONS[symbol](left.data, right.data)), ()
    if symbol == "&&":
        return from_mask(truth(left) & truth(right)), ()
    if symbol == "||":
        return from_mask(truth(left) | truth(right)), ()
    if not operand.is_integer:
        return _floating(symbol, left, right)
    return _ARITHMETIC[symbol](left, right, result)


def _exact(operate: _Operate, left: Value, right: Value, low: int, high: int, t: CType) -> Result:
    """`operate` where its results, between `low` and `high`, can be held exactly; then fitted."""
    kind = FaultKind.OVERFLOW if t.signed else FaultKind.WRAP
    if holds(t, low, high):
        return Value(operate(left.data, right.data), low, high), ()
    if low >= _INT64_LOW and high <= _INT64_HIGH:
        exact = operate(left.data.astype(np.int64), right.data.astype(np.int64))
    else:
        exact = operate(left.data.astype(np.uint64), right.data.astype(np.uint64))
    return fitted(exact, low, high, t, kind)


def _wide(data: Array, lost: Mask, type_: CType) -> Result:
    kind = FaultKind.OVERFLOW if type_.signed else FaultKind.WRAP
    return Value(data, type_.low, type_.high), faults_at((kind, lost))


def _add(left: Value, right: Value, type_: CType) -> Result:
    low, high = left.low + right.low, left.high + right.high
    if type_.bits < 64 or holds(type_, low, high):
        return _exact(np.add, left, right, low, high, type_)
    total = left.data + right.data
    if not type_.signed:
        return _wide(total, total < left.data, type_)
    return _wide(total, ((left.data ^ total) & (right.data ^ total)) < 0, type_)


def _subtract(left: Value, right: Value, type_: CType) -> Result:
    low, high = left.low - right.high, left.high - right.low
    if type_.bits < 64 or holds(type_, low, high):
        return _exact(np.subtract, left, right, low, high, type_)
    difference = left.data - right.data
    if not type_.signed:
        return _wide(difference, left.data < right.data, type_)
    return _wide(difference, ((left.data ^ right.data) & (left.data ^ difference)) < 0, type_)


def _multiply(left: Value, right: Value, type_: CType) -> Result:
    corners = [a * b for a in (left.low, left.high) for b in (right.low, right.high)]
    low, high = min(corners), max(corners)
    if type_.bits < 64 or holds(type_, low, high):
        return _exact(np.multiply, left, right, low, high, type_)
    product = left.data * right.data
    divisor = np.where(left.data == 0, 1, left.data).astype(product.dtype)
    minus_one = (divisor == -1) if type_.signed else np.zeros(divisor.shape, dtype=np.bool_)
    divisor = np.where(minus_one, 1, divisor).astype(product.dtype)
    lost = (left.data != 0) & ~minus_one & (product // divisor != right.data)
    return _wide(product, lost | (minus_one & (right.data == type_.low)), type_)


def _divide(left: Value, right: Value, type_: CType) -> Result:
    divisor, faults = _divisor(left, right, type_)
    if left.low >= 0 and right.low > 0:
        data = left.data // divisor
        return Value(data, left.low // right.high, left.high // right.low), faults
    data = _quotient(left, divisor, type_)
    bound = max(abs(left.low), abs(left.high))
    if bound > type_.high:
        data = wrapped(data, type_)
    low, high = max(-bound, type_.low), min(bound, type_.high)
    return Value(_zero_where_faulty(data, right), low, high), faults


def _remainder(left: Value, right: Value, type_: CType) -> Result:
    divisor, faults = _divisor(left, right, type_)
    bound = max(abs(left.low), abs(left.high))
    if left.low >= 0 and right.low > 0:
        return Value(left.data % divisor, 0, min(left.high, right.high - 1)), faults
    data = left.data - _quotient(left, divisor, type_) * divisor
    low, high = max(-bound, type_.low), min(bound, type_.high)
    return Value(_zero_where_faulty(data, right), low, high), faults


def _zero_where_faulty(data: Array, divisor: Value) -> Array:
    """0 for a quotient or remainder by zero, which has no value."""
    if divisor.low > 0 or divisor.high < 0:
        return data
    return np.where(divisor.data == 0, 0, data).astype(data.dtype, copy=False)


def _divisor(left: Value, right: Value, type_: CType) -> tuple[Array, Faults]:
    """The divisor with 1 in place of 0, and the faults of a division (C11 6.5.5p5, p6)."""
    divisor, faults = right.data, faults_at()
    if right.low <= 0 <= right.high:
        zero = right.data == 0
        divisor = np.where(zero, 1, right.data).astype(right.data.dtype)
        shape = np.broadcast(left.data, zero).shape
        faults = faults_at((FaultKind.DIVISION, np.broadcast_to(zero, shape)))
    if type_.signed and left.low <= type_.low and right.low <= -1 <= right.high:
        lost = (left.data == type_.low) & (right.data == -1)
        faults += faults_at((FaultKind.OVERFLOW, lost))
    return divisor, faults


def _quotient(left: Value, divisor: Array, type_: CType) -> Array:
    """Quotients truncated toward zero; the most negative value by -1 stays itself."""
    if not type_.signed:
        return left.data // divisor
    if max(abs(left.low), abs(left.high)) < _EXACT_IN_BINARY64:
        # The rounded quotient never reaches the next integer: that is 1 / divisor away, more than
        # half a unit in the last place as long as the dividend has at most 53 bits.
        return np.trunc(left.data / divisor).astype(np.int64)
    minus_one = divisor == -1
    safe = np.where(minus_one, 1, divisor)
    floored = left.data // safe
    inexact = (left.data - floored * safe != 0) & ((left.data < 0) != (safe < 0))
    data = floored + inexact
    quotient: Array = np.where(minus_one, -data, data)
    return quotient


def _count(right: Value, type_: CType) -> tuple[Array, Mask]:
    """Shift counts as the left operand's element type, and where they are out of range."""
    bad = np.zeros(right.data.shape, dtype=np.bool_)
    if right.low < 0:
        bad |= right.data < 0
    if right.high >= type_.bits:
        bad |= right.data >= type_.bits
    counts = np.where(bad, 0, right.data) if bad.any() else right.data
    return counts.astype(dtype_of(type_)), bad


def _shift_left(left: Value, right: Value, type_: CType) -> Result:
    counts, bad = _count(right, type_)
    top = min(max(right.high, 0), type_.bits - 1)
    low, high = min(left.low << top, left.low), max(left.high << top, left.high)
    faults = faults_at((FaultKind.SHIFT, _spread(bad, left.data)))
    shifted = left.data << counts
    if not holds(type_, low, high):
        shifted = wrapped(shifted, type_)
        low, high = type_.low, type_.high
        kind = FaultKind.SIGNED_SHIFT if type_.signed else FaultKind.WRAP
        faults += faults_at((kind, ~bad & ((shifted >> counts) != left.data)))
    if type_.signed and left.low < 0:
        known = [mask for kind, mask in faults if kind is FaultKind.SIGNED_SHIFT]
        negative = _spread(left.data < 0, counts) & ~_spread(bad, left.data)
        for mask in known:
            negative = negative & ~mask
        faults += faults_at((FaultKind.NEGATIVE_SHIFT, negative))
    data = np.where(bad, 0, shifted) if bad.any() else shifted
    return Value(data.astype(dtype_of(type_), copy=False), min(low, 0), max(high, 0)), faults


def _shift_right(left: Value, right: Value, type_: CType) -> Result:
    """Shifts of negative values keep the sign, as every compiler here does (C11 6.5.7p5)."""
    counts, bad = _count(right, type_)
    data = left.data >> counts
    faults = faults_at((FaultKind.SHIFT, _spread(bad, left.data)))
    if bad.any():
        empty = np.where(left.data < 0, -1, 0) if type_.signed else np.zeros_like(left.data)
        data = np.where(bad, empty, data).astype(dtype_of(type_), copy=False)
    fixed = right.low if right.low == right.high and 0 <= right.low < type_.bits else None
    if fixed is not None:
        return Value(data, left.low >> fixed, left.high >> fixed), faults
    return Value(data, min(left.low, 0), max(left.high, 0)), faults


def _spread(mask: Mask, other: Array) -> Mask:
    """A mask of as many elements as it and `other` make together."""
    spread: Mask = np.broadcast_to(mask, np.broadcast(mask, other).shape)
    return spread


def _and(left: Value, right: Value, type_: CType) -> Result:
    data = left.data & right.data
    highs = [value.high for value in (left, right) if value.low >= 0]
    return (Value(data, 0, min(highs)) if highs else Value(data, type_.low, type_.high)), ()


def _or(left: Value, right: Value, type_: CType) -> Result:
    return _joined(left.data | right.data, left, right, type_), ()


def _xor(left: Value, right: Value, type_: CType) -> Result:
    return _joined(left.data ^ right.data, left, right, type_), ()


def _joined(data: Array, left: Value, right: Value, type_: CType) -> Value:
    if left.low < 0 or right.low < 0:
        return Value(data, type_.low, type_.high)
    return Value(data, 0, (1 << max(left.high, right.high).bit_length()) - 1)


def _floating(symbol: str, left: Value, right: Value) -> Result:
    """Floating operators, each rounded to the width of its operands."""
    with np.errstate(all="ignore"):
        data = _FLOATING[symbol](left.data, right.data)
    if symbol != "/":
        return Value(data), ()
    return Value(data), faults_at((FaultKind.DIVISION, _spread(right.data == 0, left.data)))


_COMPARISONS: Mapping[str, Callable[[Array, Array], Mask]] = MappingProxyType(
    {
        "<": np.less,
        ">": np.greater,
        "<=": np.less_equal,
        ">=": np.greater_equal,
        "==": np.equal,
        "!=": np.not_equal,
    }
)
_FLOATING: Mapping[str, _Operate] = MappingProxyType(
    {"+": np.add, "-": np.subtract, "*": np.multiply, "/": np.divide}
)
_ARITHMETIC: Mapping[str, Callable[[Value, Value, CType], Result]] = MappingProxyType(
    {
        "+": _add,
        "-": _subtract,
        "*": _multiply,
        "/": _divide,
        "%": _remainder,
        "<<": _shift_left,
        ">>": _shift_right,
        "&": _and,
        "|": _or,
        "^": _xor,
    }
)
