"""Repairs in words."""

from fractions import Fraction

from bitweight.judge.roles import WrongConstant, explain
from operands import Board, const, question, raw


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
