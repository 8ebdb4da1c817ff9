"""Constants computed by hand."""

from fractions import Fraction

import pytest

from bitweight.judge.folds import is_folded, roundings_explain
from bitweight.judge.views import views
from operands import Board, Operand, const, question, raw

FINE = Fraction(1, 40)


@pytest.mark.parametrize(
    ("code", "folded"),
    [
        (raw() * const("4883") / const("1000"), True),
        (raw() * const("4882") / const("1000"), True),
        (raw() * const("4870") / const("1000"), False),
        (raw() * const("1000") / const("205"), True),
        (raw() * const("5000") / const("1023"), False),
        (raw() * const("5") / const("1"), False),
    ],
)
def test_a_constant_is_folded_if_its_digits_are_right(code: Operand, folded: bool) -> None:
    """Rounded down, up or to nearest it is right; a board fact or a scale factor is no fold."""
    search = next(views(question(Board(), code))).search
    assert is_folded(search, ({},), FINE) is folded


def test_several_roundings_may_explain_together() -> None:
    """Two coarse constants may be off together by what neither explains alone."""
    code = raw().cast("float") * const("0.0049f") * const("1.01f")
    search = next(views(question(Board(), code, Fraction(1)))).search
    assert roundings_explain(search)
    far = raw().cast("float") * const("0.0059f") * const("1.01f")
    assert not roundings_explain(next(views(question(Board(), far, Fraction(1)))).search)
