"""The operators that go wrong for some code, each cause once."""

from dataclasses import replace

import pytest

import facts
from bitweight.arithmetic.expressions import Expression
from bitweight.arithmetic.types import DataModel
from bitweight.arithmetic.values import FaultKind
from bitweight.board.hardware import Channel
from bitweight.judge.operations import WrongOperation
from facts import C


def _found(
    expression: Expression, model: DataModel = facts.AVR, of: Channel | None = None
) -> tuple[WrongOperation, ...]:
    judgement = facts.case(expression, of=of, model=model).judgement
    assert judgement is not None
    return judgement.operations


PRODUCTS = [
    # reading type, factor, first code of the wrong product: the product passes 65535 or 32767
    ("uint16_t", "5000", 14, FaultKind.WRAP),
    ("int16_t", "5000", 7, FaultKind.OVERFLOW),
    ("uint16_t", "3300u", 20, FaultKind.WRAP),
    ("uint16_t", "80", 820, FaultKind.WRAP),
    ("int16_t", "33", 993, FaultKind.OVERFLOW),
]


@pytest.mark.parametrize(("reading", "factor", "code", "kind"), PRODUCTS)
def test_product_beyond_16_bits(reading: str, factor: str, code: int, kind: FaultKind) -> None:
    """A product that passes the top of a 16-bit type is wrong from the first code that does."""
    c = C(facts.AVR)
    (wrong,) = _found(c.op(c.op(c.code(reading), "*", factor), "/", "1024"))
    assert (wrong.kind, wrong.index, wrong.in_range, wrong.at_end) == (kind, code, True, False)
    assert wrong.exact == code * int(factor.rstrip("u"))
    assert wrong.operands == (1023, int(factor.rstrip("u")))


@pytest.mark.parametrize("factor", ["5000L", "5000UL", "64", "32"])
def test_product_that_fits(factor: str) -> None:
    """A product that fits its type for every code is no fault."""
    c = C(facts.AVR)
    assert _found(c.op(c.op(c.code(), "*", factor), "/", "1024")) == ()


def test_int_of_32_bits_is_wide_enough() -> None:
    """The same product is right where int has 32 bits."""
    c = C()
    scaled = c.op(c.op(c.code(), "*", "5000"), "/", "1024")
    assert _found(scaled, facts.INT32) == ()


def test_consequences_are_not_told() -> None:
    """A sum and a store after a wrong product are its consequences."""
    c = C(facts.AVR)
    product = c.op(c.code("int16_t"), "*", "5000")
    (wrong,) = _found(c.store("uint8_t", c.op(c.op(product, "+", "30000"), "/", "1024")))
    assert wrong.node is product


def test_two_causes_are_told() -> None:
    """Two products that go wrong apart from each other are two."""
    c = C(facts.AVR)
    code = c.code("int16_t")
    left, right = c.op(code, "*", "100"), c.op(code, "*", "200")
    found = _found(c.op(c.op(left, "/", "512"), "+", c.op(right, "/", "512")))
    assert [wrong.node for wrong in found] == [left, right]


def test_outside_the_range() -> None:
    """Codes outside the channel's range count, but not as in range."""
    c = C(facts.AVR)
    scaled = c.op(c.op(c.code(), "*", "80"), "/", "16")
    (wrong,) = _found(scaled, of=facts.channel(ends=("0 V", "4 V")))
    assert (wrong.index, wrong.in_range) == (820, False)


def test_wrap_that_comes_back_is_none() -> None:
    """An unsigned difference that wraps and is added to again gives the exact result."""
    c = C()
    wrapped = c.op(c.op(c.code("uint32_t"), "-", "100u"), "+", "100u")
    assert _found(c.op(c.op(wrapped, "*", "5000u"), "/", "1024u"), facts.INT32) == ()


def test_sign_extension_is_none() -> None:
    """Bits pushed out on purpose to extend a sign are no fault."""
    c = C()
    extended = c.op(c.cast("int16_t", c.op(c.code(), "<<", "4")), ">>", "4")
    tank = facts.channel(
        converter=facts.converter(12, coding=facts.Coding.TWOS_COMPLEMENT), ends=("-5 V", "5 V")
    )
    assert _found(c.op(c.op(extended, "*", "5000"), "/", "2048"), facts.INT32, tank) == ()


@pytest.mark.parametrize(("low", "in_range"), [("0 V", True), ("1 V", False)])
def test_division_by_zero(low: str, in_range: bool) -> None:
    """A code of 0 below a fraction bar is wrong, in range or not."""
    c = C()
    ratio = c.op("5000", "/", c.code())
    (wrong,) = _found(ratio, facts.INT32, facts.channel(ends=(low, "5 V")))
    assert (wrong.kind, wrong.index, wrong.in_range) == (FaultKind.DIVISION, 0, in_range)


def test_guarded_division_is_none() -> None:
    """A division that code 0 never reaches is no fault."""
    c = C()
    code = c.code()
    guarded = c.choose(c.op(code, "==", "0"), "0", c.op("5000", "/", code))
    assert _found(guarded, facts.INT32) == ()


def test_floating_zero_is_none() -> None:
    """Dividing by a floating 0 gives infinity, which C allows (C11 Annex F)."""
    c = C()
    ratio = c.op("5000.0f", "/", c.code())
    assert _found(ratio, facts.INT32, facts.channel(ends=("1 V", "5 V"))) == ()


def test_oversized_shift() -> None:
    """A shift as wide as its type is wrong for every code."""
    c = C(facts.AVR)
    found = _found(c.op(c.op(c.code(), "<<", "16"), "/", "16"))
    assert [wrong.kind for wrong in found] == [FaultKind.SHIFT]


def test_store_of_result_is_at_end() -> None:
    """The store of the result is known as such, with what it should hold in range."""
    c = C()
    (wrong,) = _found(
        c.store("uint8_t", c.op(c.op(c.code(), "*", "5000"), "/", "1024")), facts.INT32
    )
    assert (wrong.at_end, wrong.index, wrong.low, wrong.high) == (True, 53, 0, 4995)


def test_negative_code_becomes_unsigned() -> None:
    """A negative code that an unsigned constant turns unsigned is wrong."""
    c = C()
    tank = facts.channel(
        converter=facts.converter(12, coding=facts.Coding.TWOS_COMPLEMENT), ends=("-5 V", "5 V")
    )
    (wrong,) = _found(c.op(c.op(c.code("int16_t"), "*", "5000u"), "/", "2048"), facts.INT32, tank)
    assert (wrong.kind, wrong.exact) == (FaultKind.SIGN, -2048)


def test_a_wrap_that_comes_right_is_not_blamed_for_the_store() -> None:
    """A difference that wraps and is cast back is right; only the store of the result fails."""
    c = C(facts.AVR)
    signed = c.cast("int16_t", c.op(c.code("uint16_t"), "-", "512u"))
    scaled = c.op(c.op(c.cast("int32_t", signed), "*", "5000L"), "/", "64")
    found = _found(c.store("int16_t", scaled))
    assert found
    assert all(one.at_end for one in found)


def test_the_additions_of_a_loop_are_one() -> None:
    """A sum that wraps after some readings is one fault, from the first code at which any does."""
    c = C()
    total: Expression = c.code("uint16_t")
    for _ in range(79):
        stored = c.store("uint16_t", c.op(total, "+", c.code("uint16_t")))
        total = replace(stored, place=facts.at(60))
    (wrong,) = _found(c.op(c.op(total, "/", "80"), "*", "5"))
    assert (wrong.index, wrong.high) == (820, 80 * 1023)
