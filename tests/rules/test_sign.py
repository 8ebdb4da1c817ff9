"""Rule `sign`."""

import pytest

import facts
from bitweight.arithmetic.expressions import Expression
from bitweight.board.converters import Coding
from bitweight.board.hardware import Channel
from bitweight.judge.findings import Finding, Level
from bitweight_rules.sign import RULE
from facts import C, findings_of


def _tank(coding: Coding, bits: int = 12, *, stated: bool = True) -> Channel:
    made = facts.converter(bits, coding=coding, coding_stated=stated)
    return facts.channel(converter=made, ends=None)


def _found(expression: Expression, of: Channel) -> tuple[Finding, ...]:
    return findings_of(RULE.check, facts.case(expression, of=of))


def _scaled(c: C, reading: str, bits: int, *, signed: bool) -> Expression:
    return c.op(c.op(c.code(reading), "*", "5000"), "/", str(1 << (bits - signed)))


@pytest.mark.parametrize("bits", [8, 12, 16])
def test_signed_code_read_as_unsigned(bits: int) -> None:
    """A two's-complement code in an unsigned word reads far too high below zero."""
    (found,) = _found(
        _scaled(C(), "uint16_t", bits, signed=True), _tank(Coding.TWOS_COMPLEMENT, bits)
    )
    assert (found.found, found.expected) == ("unsigned", "two's complement")
    assert (found.level, found.place) == (Level.ERROR, facts.at(20, 15))
    assert "the code is read as unsigned, but adc delivers two's complement" in found.message


def test_offset_binary_missed() -> None:
    """An offset-binary code taken as it is reads half the span too high."""
    (found,) = _found(_scaled(C(), "uint16_t", 12, signed=True), _tank(Coding.OFFSET_BINARY))
    assert found.expected == "offset binary"
    assert "reads 5 V high" in found.message


def test_complementary_missed() -> None:
    """A complementary code taken as it is runs backwards."""
    (found,) = _found(_scaled(C(), "uint16_t", 12, signed=False), _tank(Coding.COMPLEMENTARY))
    assert (found.found, found.expected) == ("unsigned", "complementary")


def test_assumed_coding_is_said() -> None:
    """Where the board file states no coding the finding says that it is assumed."""
    c = C()
    inverted = c.op(c.op(c.op("4095", "-", c.code()), "*", "5000"), "/", "4096")
    (found,) = _found(inverted, _tank(Coding.UNSIGNED, stated=False))
    assert "unsigned (assumed: the board file states no coding)" in found.message


@pytest.mark.parametrize("reading", ["int16_t", "int"])
def test_signed_reading_is_silent(reading: str) -> None:
    """A two's-complement code in a signed type is right."""
    assert _found(_scaled(C(), reading, 12, signed=True), _tank(Coding.TWOS_COMPLEMENT)) == ()


def test_range_above_zero_is_silent() -> None:
    """A signed converter used for its upper half only is right in an unsigned word."""
    upper = facts.channel(
        converter=facts.converter(12, coding=Coding.TWOS_COMPLEMENT), ends=("0 V", "4.9 V")
    )
    assert _found(_scaled(C(), "uint16_t", 12, signed=True), upper) == ()


def test_wrong_constant_is_not_its_matter() -> None:
    """A wrong gain is no matter of coding."""
    c = C()
    scaled = c.op(c.op(c.code(), "*", "3300"), "/", "4096")
    assert _found(scaled, _tank(Coding.UNSIGNED)) == ()
