"""The two kinds of numbers in which the real value of an expression is found.

`ExactNumbers` are single fractions, `FloatNumbers` arrays of binary64. Both share Python's
operators for `+ - *` and comparisons; what differs stands here. NaN marks what has no value.
"""

import math
from collections.abc import Callable
from fractions import Fraction
from typing import Any, Protocol

import numpy as np

from bitweight.arithmetic import scalars

_LARGEST_SHIFT = 128
_LONGEST_FRACTION = 20_000
"""Bits of a numerator or denominator; filters of some thousand steps stay below."""


class Numbers(Protocol):
    """The operations that differ between one exact number and an array; NaN has no value."""

    def literal(self, value: Fraction) -> Any:
        """The number, or an array of it alone."""

    def divide(self, left: Any, right: Any) -> Any:
        """The quotient; NaN for a division by zero."""

    def within(self, value: Any, low: int, high: int) -> bool:
        """Whether every value lies between two bounds; False where one has no value."""

    def floor(self, value: Any) -> Any:
        """The largest whole number that is not above the value."""

    def bitwise(self, operate: Callable[[Any, Any], Any], left: Any, right: Any) -> Any:
        """`operate` on the whole parts of both, as integers."""

    def power(self, count: Any) -> Any:
        """2**count; NaN for a count that no shift has."""

    def holds(self, condition: Any, *operands: Any) -> Any:
        """1 where a comparison is true, else 0; NaN where an operand has no value."""

    def select(self, condition: Any, then: Any, other: Any) -> Any:
        """`then` where the condition is not 0, else `other`; NaN where it has no value."""

    def bounded(self, value: Any) -> Any:
        """The value, or NaN where it takes too many digits to go on with."""


class ExactNumbers:
    """One exact number: a Fraction, or NaN."""

    def literal(self, value: Fraction) -> Any:
        return value

    def divide(self, left: Any, right: Any) -> Any:
        return math.nan if right == 0 else left / right

    def within(self, value: Any, low: int, high: int) -> bool:
        return bool(low <= value <= high)

    def floor(self, value: Any) -> Any:
        return Fraction(math.floor(value)) if value == value else value

    def bitwise(self, operate: Callable[[Any, Any], Any], left: Any, right: Any) -> Any:
        if left != left or right != right:
            return math.nan
        return Fraction(operate(math.floor(left), math.floor(right)))

    def power(self, count: Any) -> Any:
        if not (count == self.floor(count) and 0 <= count < _LARGEST_SHIFT):
            return math.nan
        return Fraction(1 << int(count))

    def holds(self, condition: Any, *operands: Any) -> Any:
        return math.nan if any(x != x for x in operands) else Fraction(int(condition))

    def select(self, condition: Any, then: Any, other: Any) -> Any:
        return math.nan if condition != condition else then if condition else other

    def bounded(self, value: Any) -> Any:
        if not isinstance(value, Fraction):
            return math.nan
        longest = max(value.numerator.bit_length(), value.denominator.bit_length())
        return value if longest <= _LONGEST_FRACTION else math.nan


class FloatNumbers:
    """Numbers of binary64 for many codes; whole numbers are exact up to 2**53."""

    def literal(self, value: Fraction) -> Any:
        return np.array([scalars.nearest(value, 64)])

    def divide(self, left: Any, right: Any) -> Any:
        if np.size(right) == 1 and np.all(right):
            return left / right
        return np.where(right == 0, np.nan, left / np.where(right == 0, 1.0, right))

    def within(self, value: Any, low: int, high: int) -> bool:
        return bool(np.size(value) and np.min(value) >= low and np.max(value) <= high)

    def floor(self, value: Any) -> Any:
        return np.floor(value)

    def bitwise(self, operate: Callable[[Any, Any], Any], left: Any, right: Any) -> Any:
        usable = (np.abs(left) < 2.0**62) & (np.abs(right) < 2.0**62)
        whole = [np.floor(np.where(usable, x, 0.0)).astype(np.int64) for x in (left, right)]
        return np.where(usable, operate(*whole).astype(np.float64), np.nan)

    def power(self, count: Any) -> Any:
        usable = (count == np.floor(count)) & (count >= 0) & (count < _LARGEST_SHIFT)
        return np.where(usable, np.exp2(np.where(usable, count, 0.0)), np.nan)

    def holds(self, condition: Any, *operands: Any) -> Any:
        result = np.asarray(condition).astype(np.float64)
        for operand in operands:
            result = np.where(np.isnan(operand), np.nan, result)
        return result

    def select(self, condition: Any, then: Any, other: Any) -> Any:
        chosen = np.where(condition != 0, then, other)
        return np.where(np.isnan(condition), np.nan, chosen)

    def bounded(self, value: Any) -> Any:
        return value
