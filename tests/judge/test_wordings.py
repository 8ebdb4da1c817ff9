"""Repairs in words."""

from collections.abc import Callable
from fractions import Fraction

import pytest

from bitweight.board.facts import Role
from bitweight.judge.findings import Level
from bitweight.judge.roles import WrongConstant, explain
from operands import Board, Operand, const, fact, number, question, raw


def only(board: Board, code: object, scale: Fraction = Fraction(1, 1000)) -> WrongConstant:
    """The only wrong constant of a conversion."""
    (wrong,) = explain(question(board, code, scale)).wrong  # type: ignore[arg-type]
    return wrong


def test_a_named_constant_is_told_by_its_name_and_unit() -> None:
    """Name, found and expected value carry the unit; the replacement keeps the suffix."""
    wrong = only(Board(), raw() * const("4900UL", "VREF_MV") / const("1024"))
    assert (wrong.text, wrong.found, wrong.expected) == ("VREF_MV", "4900 mV", "5000 mV")
    assert (wrong.role, wrong.replacement) == ("reference vref", "5000UL")


def test_a_count_less_one_loses_its_one() -> None:
    """Of `(1 << 10) - 1` the one is taken away."""
    count = (const("1", line=7) << const("10", "ADC_BITS")) - const("1", line=8)
    wrong = only(Board(), raw() * const("5000UL") / count)
    assert wrong.leaf is not None
    assert wrong.leaf.place.line == 8
    assert wrong.replacement == "0"
    assert "ADC_BITS" in wrong.text


def test_a_count_that_no_single_edit_mends_has_no_replacement() -> None:
    """`1 << 12` cannot become 4095 by changing one of its constants."""
    count = const("1", line=7) << const("12", "ADC_BITS")
    board = Board(bits=12, counts=(4095,))
    wrong = only(board, raw() * const("5000UL", "VREF_MV") / count)
    assert (wrong.rule, wrong.found, wrong.expected) == ("full-scale", "4096", "4095")
    assert wrong.replacement is None


def test_a_fault_without_a_constant_stands_at_the_reading() -> None:
    """A missing shift has no constant: the reading is the place."""
    wrong = only(Board(shift=6), raw().cast("float") * const("4.8828125f"))
    assert wrong.leaf is None
    assert wrong.place.line == 40
    assert wrong.place.column == 5


VERBS = {
    "divides": (lambda count: raw() * const("5000UL") / count, "the code divides by 1023"),
    "multiplies": (
        lambda count: count * raw() * const("5000UL") / const("1048576"),
        "the code multiplies by 1023",
    ),
}


@pytest.mark.parametrize(("code", "held"), VERBS.values(), ids=VERBS.keys())
def test_a_nameless_constant_is_told_by_what_the_code_does_with_it(
    code: Callable[[Operand], Operand], held: str
) -> None:
    """A literal has no name: the sentence says where it stands in the calculation."""
    wrong = explain(question(Board(), code(const("1023")), Fraction(1, 1000))).wrong
    assert held in [one.held for one in wrong]
    assert all(one.text.startswith("the constant ") for one in wrong if one.held == held)


def test_a_name_is_told_with_its_value() -> None:
    """A named constant is what it is, and what the board has stands against it."""
    wrong = only(Board(), raw() * const("4900UL", "VREF_MV") / const("1024"))
    assert wrong.held == "VREF_MV is 4900 mV"
    assert wrong.wanted == "the board's reference vref is 5000 mV"


SENSITIVE = Board(
    per_volt=Fraction(40),
    more=(fact(Role.SENSITIVITY, "sensitivity", "25 mV/kPa", "chain-constant"),),
)


def test_an_unusual_scaling_is_shown_as_it_stands_in_the_code() -> None:
    """The number of the code comes first, what it stands for in the board's unit behind it."""
    volts = raw() * const("5000UL", "VREF_MV") * const("100") / const("1024")
    code = volts / const("240", "INFLOW_SENSITIVITY")
    wrong = only(SENSITIVE, code, Fraction(1))
    assert (wrong.found, wrong.expected) == ("240 (2.4 mV/kPa)", "2500 (25 mV/kPa)")
    assert wrong.held == "INFLOW_SENSITIVITY is 240 (2.4 mV/kPa)"
    assert wrong.wanted == "the board's sensitivity is 25 mV/kPa: 2500 here"


def test_an_inverse_is_what_the_board_needs() -> None:
    """Nobody speaks of an inverse divider: the divider needs a factor."""
    board = Board(
        per_volt=Fraction(11),
        more=(number(Role.INVERSE_DIVIDER, "inverse divider", 11, "divider-ratio"),),
    )
    wrong = only(board, raw() * const("5000UL") / const("1024") * const("10", "BATT_DIV"))
    assert f"{wrong.held}, but {wrong.wanted}" == "BATT_DIV is 10, but the board's divider needs 11"


def test_a_value_that_no_whole_number_holds_is_no_replacement() -> None:
    """Where rounding would spoil the fact the exact value is shown, and no edit is offered."""
    board = Board(
        per_volt=Fraction(5, 2),
        more=(number(Role.GAIN, "gain", Fraction(5, 2), "chain-constant"),),
    )
    wrong = only(board, raw() * const("5000UL") / const("1024") * const("4", "LOOP_GAIN"))
    assert (wrong.found, wrong.expected, wrong.replacement) == ("4", "2.5", None)
    assert wrong.wanted == "the board's gain is 2.5, which no whole number can hold"
    assert wrong.level is Level.ERROR
