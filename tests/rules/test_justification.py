"""Rule `justification`: where the code stands in its word."""

import pytest

from bitweight.arithmetic.expressions import Expression
from bitweight.board.converters import Justification
from bitweight.board.hardware import Channel
from bitweight_rules.justification import RULE
from facts import C, case, channel, converter, findings_of


def left(bits: int) -> Channel:
    """The tank on a left-justified converter with a 16-bit word."""
    made = converter(bits, justified=Justification.LEFT, shift=16 - bits)
    return channel(converter=made, ends=None)


def right(bits: int) -> Channel:
    """The tank on a right-justified converter."""
    return channel(converter=converter(bits), ends=None)


def divided(count: str, shift: str | None = None) -> Expression:
    """(raw >> shift) * 5000 / count."""
    c = C()
    code = c.code() if shift is None else c.op(c.code(), ">>", shift)
    return c.op(c.op(code, "*", "5000ULL"), "/", c.number(count, "ADC_COUNTS"))


@pytest.mark.parametrize(
    ("judged", "expression", "expected"),
    [
        (left(10), divided("1024"), "65536"),
        (left(12), divided("4096"), "65536"),
        (right(10), divided("1024", "6"), "0"),
        (right(12), divided("4096", "4"), "0"),
    ],
)
def test_the_other_end_of_the_word_is_found(
    judged: Channel, expression: Expression, expected: str
) -> None:
    """A word read as justified at its other end is found on the constant that mends it."""
    (one,) = findings_of(RULE.check, case(expression, of=judged))
    assert one.expected == expected
    assert one.replacement is not None


@pytest.mark.parametrize(
    ("judged", "expression"),
    [
        (left(10), divided("1024", "6")),
        (left(10), divided("65536")),
        (left(10), divided("256", "8")),
        (right(10), divided("1024")),
        (right(10), divided("256", "2")),
    ],
)
def test_a_code_read_where_it_stands_is_silent(judged: Channel, expression: Expression) -> None:
    """Moved down, used as a whole word, or by its high byte alone: all are right."""
    assert not findings_of(RULE.check, case(expression, of=judged))


def test_without_a_constant_it_stands_at_the_reading() -> None:
    """A gain folded by hand has no count to mend: the finding stands at the reading."""
    c = C()
    folded = c.op(c.cast("float", c.code()), "*", "4.8828125f")
    (one,) = findings_of(RULE.check, case(folded, of=left(10)))
    assert one.place.line == 20
    assert one.replacement is None
