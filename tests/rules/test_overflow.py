"""Rule `overflow`."""

import pytest

import facts
from bitweight.arithmetic.expressions import Expression
from bitweight.arithmetic.types import DataModel
from bitweight.board.hardware import Channel
from bitweight.judge.findings import Finding, Level
from bitweight_rules.overflow import RULE
from facts import C, findings_of


def _found(
    expression: Expression, model: DataModel = facts.AVR, of: Channel | None = None
) -> tuple[Finding, ...]:
    return findings_of(RULE.check, facts.case(expression, of=of, model=model))


def test_signed_product_on_16_bits() -> None:
    """1023 * 5000 in a 16-bit int is wrong from code 7, and a suffix mends it."""
    c = C(facts.AVR)
    product = c.op(c.code("int16_t"), "*", c.number("5000", "VREF_MV"))
    (found,) = _found(c.op(product, "/", "1024"))
    assert found.message == (
        "the product 1023 * 5000 needs 23 bits, int holds 15 and a sign: wrong from code 7 (35000)"
    )
    assert (found.level, found.place) == (Level.ERROR, product.place)  # type: ignore[union-attr]
    assert (found.found, found.expected) == ("int, 16 bits", "uint32_t, as 5000UL gives")
    assert found.replacement is not None
    assert found.replacement.text == "5000UL"
    assert found.replacement.place.file == facts.HEADER


@pytest.mark.parametrize(("factor", "code"), [("80", 820), ("5000", 14), ("64000u", 2)])
def test_unsigned_wrap(factor: str, code: int) -> None:
    """A wrap that reaches the result is told with its first code."""
    c = C(facts.AVR)
    (found,) = _found(c.op(c.op(c.code(), "*", factor), "/", "64"))
    assert f"unsigned int has 16: wrong from code {code}" in found.message


@pytest.mark.parametrize("factor", ["64", "5000UL", "5000L", "4.88f"])
def test_what_fits_is_silent(factor: str) -> None:
    """A product that fits, or is wide or floating, is no fault."""
    c = C(facts.AVR)
    assert _found(c.op(c.op(c.code(), "*", factor), "/", "1024")) == ()


def test_outside_the_range_is_a_warning() -> None:
    """A wrap only above the range is a warning and says so."""
    c = C(facts.AVR)
    scaled = c.op(c.op(c.code(), "*", "80"), "/", "16")
    (found,) = _found(scaled, of=facts.channel(ends=("0 V", "4 V")))
    assert found.level is Level.WARNING
    assert found.message.endswith("wrong from code 820 (65600), outside the range")


def test_negative_difference() -> None:
    """An unsigned difference below zero is told as negative."""
    c = C(facts.AVR)
    below = c.op(c.op(c.code(), "-", "512"), "/", "2")
    tank = facts.channel(chain=(facts.amplifier("1", "2.5 V"),), ends=("-2.5 V", "2.5 V"))
    (found,) = _found(c.op(c.op(below, "*", "10L"), "/", "1"), of=tank)
    assert "is negative, unsigned int wraps: first wrong at code 0 (-512)" in found.message


def test_division_by_zero() -> None:
    """A divisor that becomes 0 is told with its code."""
    c = C()
    (found,) = _found(c.op("5000", "/", c.code()), facts.INT32)
    assert found.message == "the divisor becomes 0: first wrong at code 0"
    assert found.expected == "a divisor other than 0"


def test_unsigned_constant_and_negative_code() -> None:
    """A negative code turned unsigned by a constant is mended by dropping its suffix."""
    c = C()
    tank = facts.channel(
        converter=facts.converter(12, coding=facts.Coding.TWOS_COMPLEMENT), ends=("-5 V", "5 V")
    )
    (found,) = _found(c.op(c.op(c.code("int16_t"), "*", "5000u"), "/", "2048"), facts.INT32, tank)
    assert found.message == "unsigned int cannot hold -2048: first wrong at code -2048"
    assert found.replacement is not None
    assert found.replacement.text == "5000"


def test_floating_value_beyond_its_integer_outside_the_range() -> None:
    """A floating value that its integer cannot hold is undefined, also outside the range."""
    c = C()
    volts = c.store("int16_t", c.op(c.code(), "*", "48.828125f"))
    tank = facts.channel(count="0.1 mV", ends=("0 V", "3 V"))
    (found,) = _found(volts, facts.INT32, tank)
    assert found.level is Level.WARNING


def test_store_of_the_result_is_not_its_matter() -> None:
    """A result stored too narrow is narrowing's."""
    c = C()
    scaled = c.op(c.op(c.code(), "*", "5000"), "/", "1024")
    assert _found(c.store("uint8_t", scaled), facts.INT32) == ()
