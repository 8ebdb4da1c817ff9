"""Rule `transfer-gain`: a slope that no single constant explains."""

from dataclasses import replace

import pytest

from bitweight.arithmetic.expressions import Expression
from bitweight.judge.findings import Level
from bitweight_rules.transfer_gain import RULE
from facts import C, case, channel, findings_of, linear, part, shunt


def folded(gain: str) -> Expression:
    """raw * gain, in volts, folded by hand."""
    c = C()
    return c.op(c.cast("float", c.code()), "*", c.number(gain, "VOLTS_PER_COUNT"))


IN_VOLTS = channel(count="V")


@pytest.mark.parametrize("gain", ["0.00588f", "0.0047f", "0.0061f"])
def test_a_wrong_folded_gain_is_an_error_with_its_right_value(gain: str) -> None:
    """A gain per count that leaves the allowed error is found and offered its right value."""
    (one,) = findings_of(RULE.check, case(folded(gain), of=IN_VOLTS))
    assert one.level is Level.ERROR
    assert "4.883 mV per count" in one.message
    assert one.replacement is not None
    assert one.replacement.text.startswith("0.00488281")


@pytest.mark.parametrize("gain", ["0.00488f", "0.004883f", "0.0048828125f", "0.004887f"])
def test_a_gain_inside_the_allowed_error_is_silent(gain: str) -> None:
    """A constant folded by hand is judged by the line alone."""
    assert not findings_of(RULE.check, case(folded(gain), of=IN_VOLTS))


def test_several_unexplained_constants_get_no_replacement() -> None:
    """With more than one candidate the finding stands on the conversion and proposes no edit."""
    c = C()
    value = c.op(c.op(c.code(), "*", "5381"), "/", "917")
    (one,) = findings_of(RULE.check, case(value))
    assert one.replacement is None
    assert one.place.line == 29


def test_constants_that_are_no_board_facts_are_not_made_into_some() -> None:
    """A span that the board file does not state is told by the line, not as a wild explanation."""
    c = C()
    volts = c.op(c.op(c.cast("long", c.code()), "*", c.number("5000", "VREF_MV")), "/", "1024")
    current = c.op(c.op(volts, "*", "1000"), "/", c.number("150", "LOOP_R"))
    above = c.op(current, "-", c.number("4000", "LOOP_ZERO_UA"))
    level = c.op(c.op(above, "*", c.number("400", "LEVEL_CM")), "/", c.number("20000", "SPAN_UA"))
    sensor = replace(linear("40 uA/cm"), offset=part("offset", "4 mA"), at=part("at", "0 cm"))
    judged = channel(unit="cm", chain=(sensor, shunt("150 ohm")), ends=None, count="cm")
    (one,) = findings_of(RULE.check, case(level, of=judged))
    assert one.expected == "0.8138 cm per count"
