"""What findings of several rules say alike."""

from fractions import Fraction

import pytest

import facts
from bitweight.arithmetic.expressions import Literal, Unknown
from bitweight.judge.statements import (
    edit,
    first_leaf,
    listed,
    off,
    place_of,
    quantity,
    settled,
    uses,
    volts,
)
from facts import C, at


@pytest.mark.parametrize(("names", "text"), [("a", "a"), ("ab", "a and b"), ("abc", "a, b and c")])
def test_listed(names: str, text: str) -> None:
    """Names stand in a sentence as people write them."""
    assert listed(names) == text


def test_quantities() -> None:
    """Numbers carry their unit, with a prefix where the unit takes one."""
    assert quantity(0.0049, facts.channel()) == "4.9 mV"
    assert quantity(Fraction(25, 2), facts.channel(unit="degC", ends=None)) == "12.5 degC"
    assert volts(Fraction(33, 10)) == "3.3 V"


@pytest.mark.parametrize(
    ("error", "text"),
    [
        (-1.951, "reads 1.951 V low"),
        (0.072, "reads 72 mV high"),
        (-2.78e-17, "reads right"),
        (float("nan"), "has no value"),
    ],
)
def test_an_error_is_told_by_what_it_does_to_the_reading(error: float, text: str) -> None:
    """High or low, never by a sign, and what rounding leaves of nothing is nothing."""
    assert off(error, 0.005, facts.channel()) == text


@pytest.mark.parametrize(("value", "shown"), [(1e-15, 0.0), (-4e-8, 0.0), (6e-8, 6e-8)])
def test_what_is_far_below_an_lsb_is_nothing(value: float, shown: float) -> None:
    """A hundred-thousandth of an LSB is the rounding of the arithmetic."""
    assert settled(value, 0.005) == shown


def test_constants() -> None:
    """The first constant spelled below an expression is found, with where it bites and its edit."""
    c = C()
    literal = c.number("1023", "ADC_MAX")
    assert isinstance(literal, Literal)
    leaf = first_leaf(c.op(c.code(), "/", literal))
    assert leaf is not None
    assert leaf is literal.leaf
    assert [one.place for one in uses(leaf)] == [leaf.use]
    assert (edit(leaf, "1024").end_column, edit(leaf, "1024").text) == (22, "1024")
    assert first_leaf(c.code()) is None


def test_places() -> None:
    """An operator has a place of its own; what has none stands where it is told."""
    c = C()
    bare = Literal(value=1, type=c.type("int"))
    assert place_of(bare, at(9)) == at(9)
    assert place_of(Unknown(reason="", type=c.type("int")), at(9)) == at(9)
    assert place_of(c.code(), at(9)) == at(20, 15)
