"""The two kinds of numbers behave alike wherever both have a value."""

import math
import operator
from fractions import Fraction
from typing import Any

import numpy as np
import pytest

from bitweight.arithmetic.fields import ExactNumbers, FloatNumbers

EXACT, FLOATS = ExactNumbers(), FloatNumbers()
SAMPLES = [Fraction(text) for text in ("0", "1", "-1", "5/2", "-7/4", "130", "4096", "-32768")]


def array(value: Any) -> Any:
    """A number in the form of arrays."""
    return np.array([float(value)])


def same(exact: Any, quick: Any) -> bool:
    """Whether both forms hold the same number, or both none."""
    found = float(np.broadcast_to(quick, 1)[0])
    return math.isnan(found) if exact != exact else found == float(exact)


@pytest.mark.parametrize("left", [*SAMPLES, math.nan])
@pytest.mark.parametrize("right", [*SAMPLES, math.nan])
def test_operations_agree(left: Any, right: Any) -> None:
    """Division, rounding, bits, comparisons and choices give the same, or none, in both forms."""
    with np.errstate(all="ignore"):
        pair = array(left), array(right)
        assert same(EXACT.divide(left, right), FLOATS.divide(*pair))
        assert same(EXACT.floor(left), FLOATS.floor(pair[0]))
        assert same(EXACT.power(left), FLOATS.power(pair[0]))
        for operate in (operator.and_, operator.or_, operator.xor):
            assert same(EXACT.bitwise(operate, left, right), FLOATS.bitwise(operate, *pair))
        less = EXACT.holds(left < right, left, right), FLOATS.holds(pair[0] < pair[1], *pair)
        assert same(*less)
        chosen = EXACT.select(less[0], left, right), FLOATS.select(less[1], *pair)
        assert same(*chosen)


def test_constants_agree() -> None:
    """A constant is the same number in both forms, to the digits of binary64."""
    assert EXACT.literal(Fraction(33, 10)) == Fraction(33, 10)
    assert FLOATS.literal(Fraction(33, 10)).tolist() == [3.3]


def test_only_exact_numbers_grow() -> None:
    """A fraction of absurd length is given up; binary64 cannot grow."""
    assert EXACT.bounded(Fraction(3)) == 3
    assert math.isnan(EXACT.bounded(Fraction(1, 3**20_000)))
    assert FLOATS.bounded(1.5) == 1.5
