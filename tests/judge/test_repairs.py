"""One correction: its rule, and its rank among others."""

from dataclasses import replace
from fractions import Fraction

import pytest

from bitweight.board.facts import Role
from bitweight.judge.knobs import Knob, knobs
from bitweight.judge.meanings import matches, terms
from bitweight.judge.repairs import (
    Layout,
    Repair,
    divisor_repair,
    fact_repair,
    mask_repair,
    power_repair,
    rank,
    shift_repairs,
)
from operands import Board, const, number, raw

BOARD = Board(more=(number(Role.GAIN, "gain", 11, "chain-constant"),))
TERMS = terms(BOARD.facts, Fraction(1024))
RIGHT = Layout(bits=10, signed=False, shift=0, word_bits=16, word_stated=True, unit_stated=True)
LEFT = Layout(bits=10, signed=False, shift=6, word_bits=16, word_stated=True, unit_stated=True)


def knob(text: str, name: str | None = None) -> Knob:
    """A constant that multiplies the reading."""
    (found,) = knobs((raw() * const(text, name)).node)
    return found


def repair(text: str, wanted: int, layout: Layout = RIGHT, name: str | None = None) -> Repair:
    """The first correction of a constant to a fact of that value."""
    one = knob(text, name)
    found = (fact_repair(one, meaning, layout) for meaning in matches(one, Fraction(wanted), TERMS))
    return next(made for made in found if made is not None)


@pytest.mark.parametrize(
    ("text", "wanted", "layout", "rule"),
    [
        ("1023", 1024, RIGHT, "full-scale"),
        ("1000", 1024, RIGHT, "full-scale"),
        ("4096", 1024, RIGHT, "resolution"),
        ("255", 1024, RIGHT, "resolution"),
        ("65536", 1024, RIGHT, "justification"),
        ("1024", 65536, LEFT, "justification"),
        ("4900", 5000, RIGHT, "reference-value"),
        ("10", 11, RIGHT, "chain-constant"),
    ],
)
def test_the_fact_decides_the_rule(text: str, wanted: int, layout: Layout, rule: str) -> None:
    """The rule is that of the fact; a count of other bits or of a whole word has its own."""
    assert repair(text, wanted, layout).rule == rule


def test_a_constant_that_holds_the_fact_needs_no_repair() -> None:
    """Neither the fact itself nor the fact in another everyday prefix speaks against it."""
    for text in ("5000", "5"):
        one = knob(text)
        meanings = matches(one, Fraction(5000), TERMS)
        assert [fact_repair(one, meaning, RIGHT) for meaning in meanings] == [None]


def test_a_unit_word_that_contradicts_makes_it_a_prefix() -> None:
    """A constant named _MV that holds volts is a matter of prefixes."""
    assert repair("5", 5000, name="VREF_MV").rule == "unit-prefix"


def test_bits_in_shifts_are_the_width_or_the_place_in_the_word() -> None:
    """A shift count may have to be the width; at the reading, what the code stands above."""
    first, second = knobs(((raw() >> const("4")) * const("5000") >> const("12")).node)[::2]
    assert [one.exact for one in shift_repairs(first, LEFT)] == [6, 10]
    assert [one.exact for one in shift_repairs(second, LEFT)] == [10]


def test_powers_of_ten_and_two() -> None:
    """Nameless powers of ten take others; a power of two below the reading takes the code down."""
    assert power_repair(knob("1000"), Fraction(100), RIGHT) is not None
    assert power_repair(knob("1000", "GAIN"), Fraction(100), RIGHT) is None
    assert power_repair(knob("1000"), Fraction(110), RIGHT) is None
    (divisor,) = knobs((raw() / const("64")).node)
    assert divisor_repair(divisor, Fraction(1), RIGHT) is not None
    assert divisor_repair(divisor, Fraction(1), LEFT) is None


def test_names_go_before_the_order_of_rules_and_that_before_nearness() -> None:
    """A meaning that the name speaks against comes last, else the rules' order decides."""
    count = repair("1023", 1024)
    volts = repair("4900", 5000)
    against = repair("1023", 1024, name="VREF_MAX_MV")
    doubtful = repair("1000", 1024, name="SHUNT_X")
    assert rank([count]) < rank([volts]) < rank([doubtful])
    assert rank([against]) < rank([doubtful])


@pytest.mark.parametrize(
    ("text", "wanted", "summed", "told"),
    [("1024", 2048, False, False), ("1024", 2048, True, True), ("2047", 2048, False, True)],
)
def test_a_count_of_sums_needs_a_sum(text: str, wanted: int, summed: bool, told: bool) -> None:
    """The count of one result is not taken for that of two, unless readings are added."""
    layout = replace(RIGHT, summed=summed)
    one = knob(text)
    found = [fact_repair(one, meaning, layout) for meaning in matches(one, Fraction(wanted), TERMS)]
    assert any(found) is told


def test_a_mask_keeps_all_bits() -> None:
    """A narrower mask of the reading is widened; a whole one, or one of a moved code, is not."""
    (narrow,) = knobs((raw() & const("0xFF")).node)
    found = mask_repair(narrow, RIGHT)
    assert found is not None
    assert (found.rule, found.exact) == ("resolution", 1023)
    assert mask_repair(narrow, LEFT) is None
    (whole,) = knobs((raw() & const("0x3FF")).node)
    assert mask_repair(whole, RIGHT) is None


def test_a_bare_power_of_ten_is_no_scaled_ratio() -> None:
    """A gain of 10 in tenths is 100: a nameless constant is not taken for it."""
    ten = terms((number(Role.GAIN, "gain", 10, "chain-constant"),), Fraction(1024))
    one = knob("95")
    found = [fact_repair(one, meaning, RIGHT) for meaning in matches(one, Fraction(100), ten)]
    assert not any(found)
