"""The smallest solution."""

from fractions import Fraction

import pytest

from bitweight.judge.searches import smallest
from bitweight.judge.views import views
from operands import Board, Operand, const, question, raw


@pytest.mark.parametrize(
    ("code", "most", "count"),
    [
        (raw() * const("5000UL") / const("1024"), 3, 0),
        (raw() * const("5000UL") / const("1023"), 3, 1),
        (raw() * const("4900UL", "VREF_MV") / const("1023"), 3, 2),
        (raw() * const("4900UL", "VREF_MV") / const("1023"), 1, None),
        (raw() * const("5000UL") / const("1023"), 0, None),
        (raw() * const("4711") / const("777"), 1, None),
    ],
)
def test_the_fewest_repairs_are_taken(code: Operand, most: int, count: int | None) -> None:
    """A search stops at the smallest set, and at its bound."""
    solution = smallest(next(views(question(Board(), code))).search, most)
    assert (None if solution is None else len(solution.repairs)) == count


def test_an_offset_inside_the_tolerance_is_still_named() -> None:
    """A zero code one off is a wrong constant even where a step is coarser than an LSB."""
    code = (raw().cast("int32_t") - const("511", "ZERO_CODE")) * const("5") / const("1024")
    board = Board(zero=Fraction(-5, 2), more=())
    assert smallest(next(views(question(board, code, Fraction(1)))).search, 1) is not None
