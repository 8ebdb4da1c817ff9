"""What one count of a result stands for where nothing states it: the likeliest power of ten."""

import math
from fractions import Fraction

import numpy as np
from numpy.typing import NDArray

from bitweight.judge.evaluations import Evaluation, Frame
from bitweight.judge.explanations import Explanation

Array = NDArray[np.float64]


def inferred_scale(frame: Frame, computed: Evaluation, explanation: Explanation) -> Fraction:
    """The power of ten under which the explanation holds, or the likeliest where it has no line."""
    if explanation.gain is not None:
        return Fraction(10) ** explanation.decade
    inside = computed.in_range
    return rough_scale(frame.side.quantity(computed.codes)[inside], computed.real[inside])


def rough_scale(quantity: Array, held: Array) -> Fraction:
    """The power of ten that brings the slope of one curve nearest to that of the other."""
    wanted, found = _slope(quantity), _slope(held)
    if not (wanted > 0 and found > 0):
        return Fraction(1)
    return Fraction(10) ** round(math.log10(wanted / found))


def _slope(curve: Array) -> float:
    """The median change from code to code where there is one: clamps do not count."""
    with np.errstate(invalid="ignore"):
        changes = np.abs(np.diff(curve))
    moving = changes[np.isfinite(changes) & (changes > 0)]
    return float(np.median(moving)) if moving.size else 0.0
