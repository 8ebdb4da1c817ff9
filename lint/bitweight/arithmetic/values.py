"""C values over arrays of codes, and their conversions; a constant is an array of one.

Enters: numbers, raw words, `Value`s and their C types. Leaves: the value each code has on the
target, and a mask of the codes where the conversion loses something. Integers up to 32 bits and
signed 64-bit ones are held in int64, unsigned 64-bit ones in uint64, floating types in their own
width. Bounds travel with integer values, so that an operation that cannot overflow costs nothing.
"""

from dataclasses import dataclass
from enum import Enum
from typing import Any

import numpy as np
import numpy.typing as npt

from bitweight.arithmetic.types import CType, Kind

Array = npt.NDArray[Any]
Mask = npt.NDArray[np.bool_]

_INT64_LOW, _INT64_HIGH = -(1 << 63), (1 << 63) - 1


class FaultKind(Enum):
    """What went wrong at an operator."""

    OVERFLOW = "signed overflow"
    """A signed result, or a quotient, does not fit its type (C11 6.5p5)."""
    DIVISION = "division by zero"
    SHIFT = "oversized shift"
    """The count is negative or not below the width (C11 6.5.7p3)."""
    SIGNED_SHIFT = "signed shift out of range"
    """A signed left shift loses digits or sign: undefined in C, wrapped by every compiler."""
    NEGATIVE_SHIFT = "left shift of a negative value"
    """Undefined in C, exact on every target here."""
    CONVERSION = "floating value out of range"
    """A floating value does not fit the integer type it is converted to (C11 6.3.1.4)."""
    WRAP = "unsigned wrap"
    """An unsigned result was reduced modulo 2**bits; well defined."""
    TRUNCATED = "lost by narrowing"
    """Conversion to a narrower integer type changed the value."""
    SIGN = "sign reinterpreted"
    """Conversion to an integer type of the same or a larger width changed the value."""
    UNKNOWN = "unknown value"
    """The value depends on something that could not be followed."""


@dataclass(frozen=True, slots=True)
class Value:
    """The values of one node for a block of codes; `low` and `high` bound integer values."""

    data: Array
    low: int = 0
    high: int = 0


Faults = tuple[tuple[FaultKind, Mask], ...]
Result = tuple[Value, Faults]


def constant(number: int | float, type_: CType) -> Value:
    """A constant as an array of one."""
    if not type_.is_integer:
        with np.errstate(over="ignore"):
            return Value(np.array([float(number)]).astype(dtype_of(type_)))
    whole = int(number)
    return Value(np.array([whole], dtype=dtype_of(type_)), whole, whole)


def reading(words: Array, type_: CType) -> Result:
    """Raw words as values of the type a reading has; a word it cannot hold at all is cut."""
    if not type_.is_integer:
        return Value(words.astype(dtype_of(type_))), ()
    if not words.size:
        return Value(words.astype(dtype_of(type_))), ()
    low, high = int(words.min()), int(words.max())
    if type_.low <= low and high <= type_.high:
        return Value(words.astype(dtype_of(type_), copy=False), low, high), ()
    value = Value(wrapped(words, type_), type_.low, type_.high)
    if type_.bits >= 64:
        return value, ()
    lost = (words < -(1 << (type_.bits - 1))) | (words >= 1 << type_.bits)
    return value, faults_at((FaultKind.TRUNCATED, lost))


def convert(value: Value, source: CType, target: CType) -> Result:
    """Conversion between arithmetic types (C11 6.3.1.2 to 6.3.1.5)."""
    if target.kind is Kind.BOOL:
        return from_mask(truth(value)), ()
    if target.kind is Kind.FLOATING:
        with np.errstate(over="ignore"):
            return Value(value.data.astype(dtype_of(target), copy=False)), ()
    if source.is_integer:
        return _integer_to_integer(value, source, target)
    return _floating_to_integer(value, target)


def truth(value: Value) -> Mask:
    """Where a value compares unequal to zero."""
    mask: Mask = value.data != 0
    return mask


def choose(condition: Value, then: Value, other: Value) -> Value:
    """`then` where the condition is true, else `other`."""
    if condition.data.size == 1:
        return then if condition.data[0] else other
    data = np.where(truth(condition), then.data, other.data)
    return Value(data, min(then.low, other.low), max(then.high, other.high))


def dtype_of(type_: CType) -> type[np.number[Any]]:
    """The element type of arrays that hold values of a C type."""
    if not type_.is_integer:
        return np.float32 if type_.bits == 32 else np.float64
    return np.int64 if type_.signed or type_.bits < 64 else np.uint64


def from_mask(mask: Mask) -> Value:
    """1 where the mask is set, else 0, as the result of a comparison."""
    return Value(mask.astype(np.int64), 0, 1)


def faults_at(*found: tuple[FaultKind, Mask]) -> Faults:
    """The faults that occur at one code at least."""
    return tuple((kind, mask) for kind, mask in found if mask.any())


def holds(type_: CType, low: int, high: int) -> bool:
    """Whether an integer type holds both ends, and so all between them."""
    return type_.low <= low and high <= type_.high


def wrapped(data: Array, type_: CType) -> Array:
    """The low bits of each element as a value of `type_` (two's complement)."""
    if type_.bits == 64:
        return data.astype(dtype_of(type_), copy=False)
    span = (1 << type_.bits) - 1
    if data.dtype == np.uint64:
        data = (data & np.uint64(span)).astype(np.int64)
    return ((data - type_.low) & span) + type_.low


def _outside(data: Array, type_: CType) -> Mask:
    """Where an element is no value of `type_`; either may be a 64-bit type."""
    mask = np.zeros(data.shape, dtype=np.bool_)
    if data.dtype != np.uint64 and type_.low > _INT64_LOW:
        mask |= data < type_.low
    if data.dtype == np.uint64 or type_.high < _INT64_HIGH:
        mask |= data > type_.high
    return mask


def fitted(exact: Array, low: int, high: int, type_: CType, kind: FaultKind) -> Result:
    """Exact results between `low` and `high` as values of `type_`."""
    if holds(type_, low, high):
        return Value(exact, low, high), ()
    outside = _outside(exact, type_)
    if not outside.any():
        data = exact.astype(dtype_of(type_), copy=False)
        return Value(data, max(low, type_.low), min(high, type_.high)), ()
    return Value(wrapped(exact, type_), type_.low, type_.high), ((kind, outside),)


def _integer_to_integer(value: Value, source: CType, target: CType) -> Result:
    if holds(target, value.low, value.high):
        data = value.data.astype(dtype_of(target), copy=False)
        return Value(data, value.low, value.high), ()
    kind = FaultKind.TRUNCATED if target.bits < source.bits else FaultKind.SIGN
    return fitted(value.data, value.low, value.high, target, kind)


def _floating_to_integer(value: Value, target: CType) -> Result:
    """Truncation toward zero; outside the type, where C gives none, the nearest end (0 for NaN)."""
    whole = np.trunc(value.data.astype(np.float64))
    low, high = (whole.min(), whole.max()) if whole.size else (0.0, 0.0)
    if low >= float(target.low) and high < float(target.high + 1):
        return Value(whole.astype(dtype_of(target)), int(low), int(high)), ()
    above, below = whole >= float(target.high + 1), whole < float(target.low)
    lost = above | below | np.isnan(whole)
    data = np.where(lost, 0.0, whole).astype(dtype_of(target))
    dtype = dtype_of(target)
    data = np.where(above, dtype(target.high), np.where(below, dtype(target.low), data))
    return Value(data, target.low, target.high), ((FaultKind.CONVERSION, lost),)
