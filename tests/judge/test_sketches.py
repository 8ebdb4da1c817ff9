"""The line that an expression means."""

from fractions import Fraction

import pytest

from bitweight.judge.knobs import knobs
from bitweight.judge.sketches import RealLine, Sketch, same, sketch
from operands import Operand, const, raw

CODES = list(range(1024))


def drawn(code: Operand) -> Sketch:
    """The sketch over all codes of 10 bits."""
    found = sketch(code.node, CODES, CODES)
    assert found is not None
    return found


@pytest.mark.parametrize(
    ("code", "gain", "offset"),
    [
        (raw() * const("5000UL") / const("1024"), Fraction(5000, 1024), 0),
        (raw() * const("3") - const("7"), 3, -7),
        (raw() >> const("2"), Fraction(1, 4), 0),
        (raw().cast("float") * const("0.1f"), Fraction(1, 10), 0),
    ],
)
def test_the_line_is_exact_and_without_truncation(
    code: Operand, gain: Fraction, offset: int
) -> None:
    """Gain and offset are those of the exact numbers that the text spells."""
    assert drawn(code).line({}) == RealLine(Fraction(gain), Fraction(offset))


def test_other_constants_give_another_line() -> None:
    """A constant can be turned without rebuilding the expression, and asking twice costs once."""
    code = raw() * const("5000UL", "VREF_MV") / const("1024")
    sketched = drawn(code)
    key = knobs(code.node)[0].key
    line = sketched.line({key: Fraction(1024)})
    assert line is not None
    assert line.gain == 1
    asked = sketched.asked
    sketched.line({key: Fraction(1024)})
    assert sketched.asked == asked


def test_a_curve_and_a_level_line_have_no_sketch() -> None:
    """What is no straight line, or level, has none."""
    for code in (raw() * raw(), raw() * const("0")):
        assert sketch(code.node, CODES, CODES) is None


def test_division_by_zero_has_no_line() -> None:
    """A constant of zero below the bar leaves no line."""
    code = raw() * const("5") / const("1024", "F")
    sketched = drawn(code)
    key = next(knob.key for knob in knobs(code.node) if knob.named)
    assert sketched.line({key: Fraction(0)}) is None


def test_long_expressions_are_drawn_in_floating_point() -> None:
    """Thousands of nodes are drawn as well, to many digits."""
    code = raw().cast("double")
    for _ in range(1200):
        code = code * const("0.5", "A") + raw().cast("double") * const("0.5", "B")
    line = drawn(code).line({})
    assert line is not None
    assert same(line.gain, Fraction(1))
