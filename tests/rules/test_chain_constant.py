"""Rule `chain-constant`: shunt, amplifier, sensor."""

from dataclasses import replace

import pytest

from bitweight.arithmetic.expressions import Expression
from bitweight.board.hardware import Channel
from bitweight_rules.chain_constant import RULE
from facts import C, amplifier, case, channel, findings_of, linear, part, shunt

CURRENT = channel(unit="A", chain=(shunt("10 mohm"), amplifier("20")), ends=None, count="mA")
SENSOR = replace(linear("10 mV/degC", "500 mV"), at=part("at", "0 degC"))
WARM = channel(unit="degC", chain=(SENSOR,), ends=None, count="0.1 degC")


def milliamps(resistance: str, gain: str) -> Expression:
    """raw * 5000 / 1024 / gain * 1000 / milliohms, in float."""
    c = C()
    volts = c.op(c.op(c.cast("float", c.code()), "*", "5000.0f"), "/", "1024.0f")
    at_shunt = c.op(volts, "/", c.number(gain, "AMP_GAIN"))
    return c.op(c.op(at_shunt, "*", "1000.0f"), "/", c.number(resistance, "SHUNT_MOHM"))


def tenths(offset: str, millivolts_per_degree: str = "10") -> Expression:
    """(raw * 5000 / 1024 - offset) * 10 / sensitivity."""
    c = C()
    volts = c.op(c.op(c.cast("long", c.code()), "*", "5000L"), "/", "1024")
    above = c.op(volts, "-", c.number(offset, "T_OFFSET_MV"))
    return c.op(c.op(above, "*", "10"), "/", c.number(millivolts_per_degree, "T_MV_PER_DEGC"))


@pytest.mark.parametrize(
    ("judged", "expression", "found", "expected"),
    [
        (CURRENT, milliamps("11.0f", "20.0f"), "11.0 mohm", "10.0 mohm"),
        (CURRENT, milliamps("100.0f", "20.0f"), "100.0 mohm", "10.0 mohm"),
        (CURRENT, milliamps("10.0f", "50.0f"), "50.0", "20.0"),
        (WARM, tenths("400"), "400 mV", "500 mV"),
        (WARM, tenths("500", "20"), "20 mV/degC", "10 mV/degC"),
    ],
)
def test_another_constant_is_found(
    judged: Channel, expression: Expression, found: str, expected: str
) -> None:
    """A shunt, gain, offset or sensitivity that is not the board's is found."""
    (one,) = findings_of(RULE.check, case(expression, of=judged))
    assert (one.found, one.expected) == (found, expected)


@pytest.mark.parametrize(
    ("judged", "expression"),
    [
        (CURRENT, milliamps("10.0f", "20.0f")),
        (WARM, tenths("500")),
        (WARM, tenths("500", "10")),
    ],
)
def test_the_boards_constants_are_silent(judged: Channel, expression: Expression) -> None:
    """The board's own constants are no fault."""
    assert not findings_of(RULE.check, case(expression, of=judged))
