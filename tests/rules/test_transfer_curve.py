"""Rule `transfer-curve`: code that bends where the chain is straight."""

from bitweight_rules.transfer_curve import RULE
from facts import C, case, findings_of


def test_a_bent_curve_is_found() -> None:
    """A result that grows with the square of the code is no straight line."""
    c = C()
    code = c.cast("long", c.code())
    (one,) = findings_of(RULE.check, case(c.op(c.op(code, "*", code), "/", "210")))
    assert one.expected == "a straight line"


def test_lines_and_clamps_are_silent() -> None:
    """A line, also one held at a bound, is no curve."""
    c = C()
    volts = c.op(c.op(c.code(), "*", "5000UL"), "/", "1024")
    clamped = c.choose(c.op(volts, ">", "4500"), "4500", volts)
    for expression in (volts, clamped):
        assert not findings_of(RULE.check, case(expression))
