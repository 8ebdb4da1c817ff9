"""The value of one constant at which a conversion's line becomes the wanted one.

A sketch, a constant and a `Target` enter; the exact value leaves. Nothing is assumed of how the
constant moves the line: it is turned and the line is looked at.
"""

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from fractions import Fraction

from bitweight.judge.knobs import Knob
from bitweight.judge.sketches import RELATIVE, RealLine, Sketch, Values, same


@dataclass(frozen=True, slots=True, kw_only=True)
class Target:
    """The line that is wanted, in counts of the result; its offset may differ by `tolerance`."""

    gain: Fraction
    offset: Fraction
    tolerance: Fraction

    def has_gain(self, line: RealLine) -> bool:
        """Whether the gain is the wanted one."""
        return same(line.gain, self.gain)

    def has_offset(self, line: RealLine) -> bool:
        """Whether the offset is the wanted one within the tolerance."""
        return abs(line.offset - self.offset) <= self.tolerance

    def fits(self, line: RealLine | None) -> bool:
        """Whether the line is the wanted one."""
        return line is not None and self.has_gain(line) and self.has_offset(line)

    def times(self, factor: Fraction) -> "Target":
        """The wanted line of a result whose count is that many times smaller."""
        return Target(
            gain=self.gain * factor,
            offset=self.offset * factor,
            tolerance=self.tolerance * max(factor, Fraction(1)),
        )


Miss = Callable[[Fraction], Fraction | None]
_MOST_SECANTS = 12


def gain_root(sketch: Sketch, target: Target, knob: Knob, values: Values) -> Fraction | None:
    """The value of the constant that gives the wanted gain; None where none does."""

    def miss(x: Fraction) -> Fraction | None:
        line = sketch.line({**values, knob.key: x})
        return None if line is None else line.gain - target.gain

    return _root(miss, knob.value or Fraction(1), abs(target.gain) * RELATIVE)


def offset_root(sketch: Sketch, target: Target, knob: Knob, values: Values) -> Fraction | None:
    """The value of the constant that gives the wanted offset; None where none does."""

    def miss(x: Fraction) -> Fraction | None:
        line = sketch.line({**values, knob.key: x})
        return None if line is None else line.offset - target.offset

    return _root(miss, knob.value or Fraction(1), target.tolerance * RELATIVE)


def _root(miss: Miss, start: Fraction, near: Fraction) -> Fraction | None:
    """Where `miss` is 0 (within `near`).

    A line depends on nearly every constant as (a*x + b) / (c*x + d), for which the cross-ratio of
    four values is that of the four results; anything more curved is closed in on by secants.
    """
    points = []
    for x in (start, 2 * start, 3 * start):
        y = miss(x)
        if y is None:
            return None
        points.append((x, y))
    if points[0][1] == points[1][1] == points[2][1]:
        return None
    root = _cross_ratio(points)
    left = None if root is None else miss(root)
    if root is None or left is None or abs(left) <= near:
        return root if left is not None else None
    return _by_secants(miss, start, root, near)


def _cross_ratio(points: Sequence[tuple[Fraction, Fraction]]) -> Fraction | None:
    """Where a quotient of two straight lines through three points is 0."""
    (x1, y1), (x2, y2), (x3, y3) = points
    if y3 == 0:
        return x3
    if y1 == y2:
        return None
    ratio = (y2 * (y1 - y3)) / (y3 * (y1 - y2))
    below = (x1 - x3) - ratio * (x1 - x2)
    return (x2 * (x1 - x3) - ratio * x3 * (x1 - x2)) / below if below else None


def _by_secants(miss: Miss, low: Fraction, high: Fraction, near: Fraction) -> Fraction | None:
    left = miss(low)
    for _ in range(_MOST_SECANTS):
        right = miss(high)
        if left is None or right is None or left == right:
            return None
        if abs(right) <= near:
            return high
        following = high - right * (high - low) / (right - left)
        low, high, left = high, following.limit_denominator(10**15), right
    return None
