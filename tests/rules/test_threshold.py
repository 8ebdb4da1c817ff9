"""Rule `threshold`."""

from dataclasses import replace
from typing import Any

import pytest

import facts
from bitweight.arithmetic.expressions import Literal
from bitweight.board.hardware import Channel, LimitMeasure
from bitweight.judge.findings import Finding, Level
from bitweight.trace.thresholds import Threshold
from bitweight_rules.threshold import RULE
from facts import C, at, findings_of


def _threshold(text: str, of: str = "tank") -> Threshold:
    literal = C().number(text, "LIMIT")
    assert isinstance(literal, Literal)
    assert literal.leaf is not None
    return Threshold(
        channel=of,
        name="relief",
        text="LIMIT",
        value=literal.value,
        leaf=literal.leaf,
        place=literal.leaf.place,
    )


def _found(
    text: str, quantity: str, tank: Channel | None = None, **changes: Any
) -> tuple[Finding, ...]:
    c = C()
    base = facts.channel() if tank is None else tank
    limited = replace(base, limits=(facts.limit("relief", quantity, **changes),))
    case = facts.case(c.op(c.op(c.code(), "*", "5000"), "/", "1024"), of=limited)
    return findings_of(RULE.check, case, thresholds=(_threshold(text),))


@pytest.mark.parametrize(
    ("text", "quantity", "level"),
    # 10 bits at 5 V: 3 V is 614.4 counts, 2.5 V is 512, one count 4.88 mV, 8.8 mV allowed
    [
        ("600", "3 V", Level.ERROR),
        ("1023", "3 V", Level.ERROR),
        ("612", "3 V", Level.ERROR),
        ("613", "3 V", Level.WARNING),
        ("615", "3 V", Level.WARNING),
        ("511", "2.5 V", Level.WARNING),
        ("3000", "3 V", Level.ERROR),
    ],
)
def test_wrong_count(text: str, quantity: str, level: Level) -> None:
    """Beyond the allowed error is an error, a neighbour of the nearest count a warning."""
    (found,) = _found(text, quantity)
    assert found.level is level


@pytest.mark.parametrize(
    ("text", "quantity"), [("614", "3 V"), ("512", "2.5 V"), ("0x266", "3 V"), ("0", "0 V")]
)
def test_nearest_count_is_silent(text: str, quantity: str) -> None:
    """The nearest count is right, however it is spelled."""
    assert _found(text, quantity) == ()


@pytest.mark.parametrize("text", ["512", "513"])
def test_halfway_takes_either_neighbour(text: str) -> None:
    """A limit in the middle of two counts is right with either."""
    assert _found(text, "2.50244140625 V") == ()


@pytest.mark.parametrize(
    ("text", "right"), [("600", "614"), ("600u", "614u"), ("0x258", "0x266"), ("600UL", "614UL")]
)
def test_replacement_keeps_the_spelling(text: str, right: str) -> None:
    """The edit keeps base and suffix of the constant."""
    (found,) = _found(text, "3 V")
    assert found.replacement is not None
    assert (found.replacement.text, found.replacement.place.file) == (right, facts.HEADER)
    assert found.message == ("LIMIT is 600, which stands for 2.93 V; limit relief is at 3 V")


@pytest.mark.parametrize(
    ("text", "levels"),
    [("154", []), ("153", [Level.ERROR]), ("155", [Level.ERROR]), ("160", [Level.ERROR])],
)
def test_counts_of_another_width(text: str, levels: list[Level]) -> None:
    """A limit compared with the upper 8 bits is a quarter of the 10-bit count: 3 V is 153.6."""
    assert [one.level for one in _found(text, "3 V", bits=8)] == levels


@pytest.mark.parametrize(
    ("text", "levels"),
    [("3000", []), ("3001", [Level.WARNING]), ("3100", [Level.ERROR]), ("614", [Level.ERROR])],
)
def test_limit_of_the_value(text: str, levels: list[Level]) -> None:
    """A limit compared with the result counts in the result's unit."""
    found = _found(text, "3 V", measure=LimitMeasure.VALUE)
    assert [one.level for one in found] == levels


@pytest.mark.parametrize(
    ("text", "right"), [("12.0f", None), ("12", None), ("12.5", "12.0"), ("11.90f", "12.00f")]
)
def test_floating_limit(text: str, right: str | None) -> None:
    """A limit of a floating result is right to half its last written digit."""
    c = C()
    tank = facts.channel(
        chain=(facts.divider("30k", "10k"),),
        ends=("0 V", "20 V"),
        count="V",
        limits=(facts.limit("relief", "12 V", measure=LimitMeasure.VALUE),),
    )
    case = facts.case(c.op(c.code(), "*", "0.01953125f"), of=tank)
    found = findings_of(RULE.check, case, thresholds=(_threshold(text),))
    assert [one.replacement and one.replacement.text for one in found] == (
        [] if right is None else [right]
    )


def test_falling_chain() -> None:
    """Where the code falls with the quantity the count is found all the same."""
    falling = facts.channel(chain=(facts.amplifier("-1", "5 V"),))
    assert _found("410", "3 V", falling) == ()
    assert len(_found("614", "3 V", falling)) == 1


def test_others_are_left_out() -> None:
    """A limit of another channel, or one without a value, says nothing here."""
    limited = facts.channel(limits=(facts.limit("relief", "3 V"),))
    case = facts.case(C().code(), of=limited)
    open_ = Threshold(
        channel="tank", name="relief", text="LIMIT", value=None, leaf=None, place=at(1), reason="?"
    )
    assert findings_of(RULE.check, case, thresholds=(_threshold("600", "pump"), open_)) == ()
