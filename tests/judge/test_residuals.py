"""What no constant explains."""

from fractions import Fraction

import pytest

from bitweight.board.converters import Coding
from bitweight.judge.residuals import bends, culprit, curve_leaves, is_level, residual
from bitweight.judge.views import views
from operands import Board, Operand, const, question, raw

SIGNED = Board(bits=12, counts=(2048,), volts="2.5 V", coding=Coding.OFFSET_BINARY)


@pytest.mark.parametrize(
    ("code", "left"),
    [
        (raw() * const("5000UL") / const("1024"), None),
        (raw() * const("5000UL") / const("900"), "gain"),
        (raw() * const("5000UL") / const("1024") + const("50"), "offset"),
        (raw() * const("5000UL") / const("1024") + const("4"), None),
        (raw() * const("5000UL") / const("1023"), None),
    ],
)
def test_only_what_leaves_the_allowed_error_is_left_over(code: Operand, left: str | None) -> None:
    """Gain or offset are told where they take the line out of the allowed error."""
    asked = question(Board(), code)
    assert residual(asked, next(views(asked))) == left


def test_a_missed_coding_is_left_to_its_own_rule() -> None:
    """An offset of half of all codes is a coding, not an offset."""
    asked = question(SIGNED, raw().cast("int32_t") * const("2500") / const("2048"))
    assert residual(asked, next(views(asked))) is None


def test_curves_and_level_lines() -> None:
    """A square leaves the error as a curve; a constant is level."""
    square = question(Board(), raw() * raw() / const("200"))
    assert curve_leaves(square)
    assert not is_level(square)
    assert is_level(question(Board(), raw() * const("0")))


def test_a_straight_line_does_not_bend() -> None:
    """What is one line over the whole range does not bend."""
    asked = question(Board(), raw() * const("5000UL") / const("1024"))
    assert not bends(asked, next(views(asked)))


def test_the_only_unknown_constant_is_the_culprit() -> None:
    """Exactly one constant that is no board fact is offered its value; of two, none."""
    one = question(Board(), raw().cast("float") * const("0.006f"), Fraction(1))
    found = culprit(next(views(one)))
    assert found is not None
    assert found.exact == Fraction(5, 1024)
    two = question(Board(), raw() * const("5381") / const("917"))
    assert culprit(next(views(two))) is None


@pytest.mark.parametrize(
    "code",
    [
        (raw() & const("0x1FF", line=7)) * const("5000UL") / const("1024"),
        (raw() & const("0x2FF", line=7)) * const("5000UL") / const("1024"),
    ],
)
def test_a_sawtooth_bends(code: Operand) -> None:
    """Code that starts again from 0 leaves its own line, even by one and the same jump."""
    asked = question(Board(), code)
    assert bends(asked, next(views(asked)))
