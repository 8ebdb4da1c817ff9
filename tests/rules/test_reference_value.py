"""Rule `reference-value`: the reference voltage in the code."""

from fractions import Fraction

import pytest

from bitweight.arithmetic.expressions import Expression
from bitweight.judge.findings import Level
from bitweight_rules.reference_value import RULE
from facts import C, case, channel, converter, divider, findings_of, reference


def millivolts(volts: str, count: str = "1024", factor: str | None = None) -> Expression:
    """raw * VREF_MV / count, times a divider's factor."""
    c = C()
    value = c.op(c.op(c.code(), "*", c.number(volts, "VREF_MV")), "/", count)
    return value if factor is None else c.op(value, "*", c.number(factor, "DIVIDER"))


@pytest.mark.parametrize(
    ("board", "code", "level"),
    [
        ("5 V", "3300UL", Level.ERROR),
        ("5 V", "4996UL", Level.WARNING),
        ("2.5 V", "2560UL", Level.ERROR),
        ("1.1 V", "1200UL", Level.ERROR),
    ],
)
def test_another_reference_is_found(board: str, code: str, level: Level) -> None:
    """A reference that is not the board's is found, its level by what it does."""
    judged = channel(converter=converter(reference=reference(board)), ends=None)
    (found,) = findings_of(RULE.check, case(millivolts(code), of=judged))
    assert found.level is level
    assert found.replacement is not None
    millivolt = round(float(board.split()[0]) * 1000)
    assert found.replacement.text == f"{millivolt}UL"


@pytest.mark.parametrize("board", ["5 V", "2.56 V", "1.1 V"])
def test_the_boards_reference_is_silent(board: str) -> None:
    """The board's own reference is no fault."""
    judged = channel(converter=converter(reference=reference(board)), ends=None)
    millivolt = round(float(board.split()[0]) * 1000)
    assert not findings_of(RULE.check, case(millivolts(f"{millivolt}UL"), of=judged))


def test_a_reference_as_exact_as_it_is_written_is_silent() -> None:
    """5.0 for 4.98 V is the board's within half of its last digit."""
    c = C()
    value = c.op(c.op(c.code(), "*", c.number("5.0f", "VREF")), "/", "1024")
    judged = channel(
        converter=converter(reference=reference("4.98 V")), ends=None, count="V", allowed="50 mV"
    )
    assert not findings_of(RULE.check, case(value, of=judged))


def test_the_pin_for_the_span_is_found() -> None:
    """A pin that takes half the reference: the code must use twice its voltage."""
    judged = channel(
        converter=converter(8, reference=reference("2.56 V"), reference_gain=Fraction(2)),
        ends=("0 V", "5.12 V"),
    )
    (found,) = findings_of(RULE.check, case(millivolts("2560UL", "256"), of=judged))
    assert (found.found, found.expected) == ("2560 mV", "5120 mV")


def test_two_that_cancel_are_one_note() -> None:
    """A reference trimmed to make up for a wrong divider is one note that names both."""
    judged = channel(chain=(divider(),), ends=("0 V", "20 V"))
    (found,) = findings_of(RULE.check, case(millivolts("4000UL", factor="5"), of=judged))
    assert found.level is Level.NOTE
    assert "makes up for it exactly" in found.message
    assert any("DIVIDER" in one.message for one in found.related)
