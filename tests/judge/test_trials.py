"""What a search tries."""

from fractions import Fraction

import numpy as np

from bitweight.board.facts import Role
from bitweight.judge.trials import Search, baselines, gain_repairs, offset_repairs
from bitweight.judge.views import views
from operands import Board, Operand, const, number, question, raw

DIVIDED = Board(
    per_volt=Fraction(11),
    more=(number(Role.DIVIDER, "divider", Fraction(1, 11), "divider-ratio"),),
)


def search_of(code: Operand, board: Board = DIVIDED, scale: Fraction = Fraction(1)) -> Search:
    """The plain search of a conversion."""
    return next(views(question(board, code, scale))).search


def by(divider: str, volts: str = "5.0f") -> Operand:
    """raw * volts / 1024 / divider, in float."""
    return raw().cast("float") * const(volts, "VREF") / const("1024.0f") / const(divider, "DIV")


def test_a_right_line_needs_no_other_baseline() -> None:
    """Where the constants as they are give the line, nothing else is looked at."""
    exact = raw() * const("5") / const("1024") * const("11")
    assert baselines(search_of(exact)) == ({},)


def test_rounded_constants_are_taken_exactly() -> None:
    """0.0909 is also tried as 1 / 11, and then the line is exact."""
    search = search_of(by("0.0909f"))
    assert not search.fits({})
    assert any(search.fits(values) for values in baselines(search))


def test_repairs_of_one_constant_mend_the_line() -> None:
    """The repair of a wrong constant, put in, gives the wanted gain."""
    search = search_of(raw() * const("5") / const("1023") * const("11"))
    knob = next(knob for knob in search.knobs if knob.value == 1023)
    exact = [repair.exact for repair in gain_repairs(search, knob, {})]
    assert exact == [1024]
    assert search.fits({knob.key: exact[0]})


def test_offsets_are_near_a_fact_if_rounding_hides_them() -> None:
    """A rounding term moves the offset by half a step: the fact nearby is still proposed."""
    shifted = Board(
        zero=Fraction(-1, 2), more=(number(Role.OFFSET, "offset", Fraction(1, 2), "x"),)
    )
    code = (raw() * const("5000L") + const("512")) / const("1024") - const("400", "OFFSET_MV")
    search = search_of(code, shifted, Fraction(1, 1000))
    knob = next(knob for knob in search.knobs if knob.value == 400)
    assert 500 in [repair.exact for repair in offset_repairs(search, knob, {})]
    assert np.isfinite(float(search.target.tolerance))
