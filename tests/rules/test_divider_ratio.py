"""Rule `divider-ratio`: the divider, its inverse, its resistors."""

import pytest

from bitweight.arithmetic.expressions import Expression
from bitweight.board.hardware import Channel
from bitweight_rules.divider_ratio import RULE
from facts import C, case, channel, divider, findings_of


def judged(top: str, bottom: str) -> Channel:
    """The tank behind a divider."""
    return channel(chain=(divider(top, bottom),), ends=None)


def by_factor(factor: str) -> Expression:
    """raw * 5000 / 1024 * factor."""
    c = C()
    volts = c.op(c.op(c.code(), "*", "5000ULL"), "/", "1024")
    return c.op(volts, "*", c.number(factor, "DIVIDER"))


def by_resistors(top: str, bottom: str, unit: str = "OHM") -> Expression:
    """raw * 5000 / 1024 * (R1 + R2) / R2."""
    c = C()
    volts = c.op(c.op(c.code(), "*", "5000ULL"), "/", "1024")
    upper, lower = c.number(top, f"R1_{unit}"), c.number(bottom, f"R2_{unit}")
    return c.op(c.op(volts, "*", c.op(upper, "+", lower)), "/", lower)


@pytest.mark.parametrize(
    ("board", "expression", "found", "expected"),
    [
        (judged("30k", "10k"), by_factor("5"), "5", "4"),
        (judged("100k", "10k"), by_factor("10"), "10", "11"),
        (judged("90k", "10k"), by_factor("9.5"), "9.5", "10.0"),
        (judged("1M", "10k"), by_factor("100"), "100", "101"),
        (judged("30k", "10k"), by_resistors("33000", "10000"), "33000 ohm", "30000 ohm"),
        (judged("30k", "10k"), by_resistors("30", "12", "K"), "12 kohm", "10 kohm"),
    ],
)
def test_another_divider_is_found(
    board: Channel, expression: Expression, found: str, expected: str
) -> None:
    """A ratio or a resistor that is not the board's is found with its right value."""
    (one,) = findings_of(RULE.check, case(expression, of=board))
    assert (one.found, one.expected) == (found, expected)


@pytest.mark.parametrize(
    ("board", "expression"),
    [
        (judged("30k", "10k"), by_factor("4")),
        (judged("100k", "10k"), by_factor("11.0")),
        (judged("30k", "10k"), by_resistors("30000", "10000")),
        (judged("30k", "10k"), by_resistors("30", "10", "K")),
        (judged("30k", "10k"), by_resistors("3", "1")),
    ],
)
def test_the_boards_divider_is_silent(board: Channel, expression: Expression) -> None:
    """The board's ratio is right, whichever resistors of that ratio express it."""
    assert not findings_of(RULE.check, case(expression, of=board))
