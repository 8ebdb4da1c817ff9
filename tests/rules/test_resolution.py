"""Rule `resolution`: bits that the conversion assumes."""

import pytest

from bitweight.arithmetic.expressions import Expression
from bitweight.judge.findings import Level
from bitweight_rules.resolution import RULE
from facts import C, case, channel, converter, findings_of


def divided(count: str) -> Expression:
    """raw * 5000 / count."""
    c = C()
    return c.op(c.op(c.code(), "*", "5000UL"), "/", c.number(count, "ADC_COUNTS"))


def shifted(bits: str) -> Expression:
    """raw * 5000 >> bits."""
    c = C()
    return c.op(c.op(c.code(), "*", "5000UL"), ">>", c.number(bits, "ADC_BITS"))


@pytest.mark.parametrize(
    ("bits", "expression", "found", "expected"),
    [
        (8, divided("1024"), "1024", "256"),
        (10, divided("4096"), "4096", "1024"),
        (12, divided("1023"), "1023", "4096"),
        (12, divided("65535"), "65535", "4096"),
        (10, shifted("12"), "12 bits", "10 bits"),
        (12, shifted("10"), "10 bits", "12 bits"),
    ],
)
def test_other_bits_are_found(bits: int, expression: Expression, found: str, expected: str) -> None:
    """A count or a shift of another width is found and would be right as the converter's."""
    judged = channel(converter=converter(bits), ends=None)
    (one,) = findings_of(RULE.check, case(expression, of=judged))
    assert (one.found, one.expected) == (found, expected)
    assert one.level is Level.ERROR


@pytest.mark.parametrize(
    ("bits", "expression"),
    [(8, divided("256")), (10, shifted("10")), (12, divided("4095")), (12, divided("4000"))],
)
def test_its_own_bits_and_other_faults_are_silent(bits: int, expression: Expression) -> None:
    """The converter's own width is right; 2**N - 1 and odd counts are full-scale's matter."""
    judged = channel(converter=converter(bits), ends=None)
    assert not findings_of(RULE.check, case(expression, of=judged))
