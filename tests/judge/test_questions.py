"""What `explain` is asked."""

from fractions import Fraction

from operands import Board, const, question, raw


def test_a_question_assumes_nothing_unusual() -> None:
    """Unless told, a code stands at the bottom of its word and no other channel is read."""
    asked = question(Board(), raw() * const("5"), Fraction(1))
    assert (asked.shift, asked.zero, dict(asked.others), asked.stated) == (0, 0, {}, ())
