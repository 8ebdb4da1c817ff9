"""The line an expression means in real numbers, with other numbers for some of its constants.

An expression and the words behind some codes enter; gain and offset in counts of the result leave,
exactly.
"""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from fractions import Fraction
from itertools import pairwise

import numpy as np

from bitweight.arithmetic.expressions import Expression
from bitweight.arithmetic.reals import RealForm, real_form
from bitweight.judge.knobs import Key

Values = Mapping[Key, Fraction]
_PROBES = 9
_MOST_NODES = 150_000
_MOST_EXACT_NODES = 3_000
_FEWEST_LINES = 12
"""Nodes evaluated for one sketch, half a second at most; a search beyond explains nothing."""
RELATIVE = Fraction(1, 10**9)
"""Two exact numbers closer than this are one: room for constants that are themselves rounded."""


@dataclass(frozen=True, slots=True)
class RealLine:
    """y = gain * code + offset, in counts of the result."""

    gain: Fraction
    offset: Fraction


class Sketch:
    """One expression, probed at the ends of its straight stretch; counts what it was asked."""

    __slots__ = ("_ends", "_form", "_known", "asked")

    def __init__(self, form: RealForm, ends: tuple[tuple[int, int], tuple[int, int]]) -> None:
        self._form = form
        self._ends = ends
        self._known: dict[frozenset[tuple[Key, Fraction]], RealLine | None] = {}
        self.asked = 0

    @property
    def spent(self) -> bool:
        """Whether it has been asked as often as it answers."""
        work = self.asked * len(self._form.order)
        return self.asked >= _FEWEST_LINES and work >= _MOST_NODES

    def line(self, values: Values) -> RealLine | None:
        """The line with these constants; None where a value is missing or the sketch is spent."""
        asked = frozenset(values.items())
        if asked not in self._known and not self.spent:
            self.asked += 1
            self._known[asked] = self._drawn(values)
        return self._known.get(asked)

    def _drawn(self, values: Values) -> RealLine | None:
        (first, first_word), (last, last_word) = self._ends
        low, high = _values(self._form, (first_word, last_word), values)
        if low is None or high is None:
            return None
        gain = (high - low) / (last - first)
        return RealLine(gain, low - gain * first)


def _values(form: RealForm, words: Sequence[int], values: Values) -> list[Fraction | None]:
    """The real values at some words: exact, or in binary64 where exact numbers would grow long."""
    if len(form.order) <= _MOST_EXACT_NODES:
        return [form.exact(word, values) for word in words]
    column = np.array(words, dtype=np.int64)
    found = np.broadcast_to(form.floats(lambda _: column, values), column.shape)
    return [Fraction(float(value)) if np.isfinite(value) else None for value in found]


def sketch(expression: Expression, codes: Sequence[int], words: Sequence[int]) -> Sketch | None:
    """The sketch of an expression over its longest straight stretch; None without one."""
    form = real_form(expression)
    chosen = sorted({index * (len(codes) - 1) // (_PROBES - 1) for index in range(_PROBES)})
    at = [words[i] for i in chosen] if codes else []
    points = zip((codes[i] for i in chosen), at, _values(form, at, {}), strict=False)
    known = [(code, word, value) for code, word, value in points if value is not None]
    stretch = _longest_straight(known)
    if stretch is None:
        return None
    first, last = stretch
    return Sketch(form, ((first[0], first[1]), (last[0], last[1])))


_Point = tuple[int, int, Fraction]


def _longest_straight(points: Sequence[_Point]) -> tuple[_Point, _Point] | None:
    """The ends of the longest run of equal slopes; two points alone make no line among more."""
    best: tuple[int, int] | None = None
    start = 0
    slopes = [(right[2] - left[2]) / (right[0] - left[0]) for left, right in pairwise(points)]
    for index, slope in enumerate(slopes):
        if not same(slope, slopes[start]):
            start = index
        if slope != 0 and (best is None or index - start > best[1] - best[0]):
            best = (start, index)
    if best is None or (best[0] == best[1] and len(slopes) > 1):
        return None
    return points[best[0]], points[best[1] + 1]


def same(left: Fraction, right: Fraction) -> bool:
    """Whether two numbers are equal but for rounding far below any digit written."""
    return abs(left - right) <= RELATIVE * max(abs(left), abs(right))
