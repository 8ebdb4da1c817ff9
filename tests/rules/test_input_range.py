"""Rule `input-range`."""

from typing import Any

import pytest

import facts
from bitweight.judge.findings import Finding, Level
from bitweight.quantities import parse_quantity
from bitweight.trace.conversions import Trace
from bitweight_rules.input_range import RULE
from facts import findings_of


def _found(**changes: Any) -> tuple[Finding, ...]:
    tank = facts.channel(**changes)
    return findings_of(RULE.check, facts.case(of=tank, traced=Trace(channel="tank")))


@pytest.mark.parametrize(("top", "pin"), [("5.001 V", "5.001 V"), ("6 V", "6 V"), ("50 V", "50 V")])
def test_past_full_scale(top: str, pin: str) -> None:
    """A range past full scale stands at the channel, with where the reading stops."""
    (found,) = _found(ends=("0 V", top))
    assert found.message.startswith(f"the range puts {pin} on the pin, adc ends at 5 V: ")
    assert "the reading stops at 4.99" in found.message
    assert (found.level, found.place) == (Level.WARNING, facts.channel().place)
    assert (found.found, found.expected) == (f"0 V to {pin}", "within 0 V to 5 V")


@pytest.mark.parametrize("top", ["5 V", "4.9 V", "1 mV"])
def test_full_scale_itself_is_silent(top: str) -> None:
    """A range that ends at full scale, or below, is no fault."""
    assert _found(ends=("0 V", top)) == ()


def test_behind_a_divider() -> None:
    """The chain decides what arrives at the pin."""
    divided = facts.divider("30k", "10k")
    assert _found(chain=(divided,), ends=("0 V", "20 V")) == ()
    (found,) = _found(chain=(divided,), ends=("0 V", "24 V"))
    assert "puts 6 V on the pin, adc ends at 5 V: the reading stops at 19.9" in found.message


@pytest.mark.parametrize(
    ("top", "level"), [("5.001 V", Level.WARNING), ("5.2 V", Level.ERROR), ("9 V", Level.ERROR)]
)
def test_level_by_what_is_missed(top: str, level: Level) -> None:
    """It is an error where a value of the range is read off by more than the allowed error."""
    c = facts.C()
    scaled = c.op(c.op(c.code(), "*", "5000"), "/", "1024")
    tank = facts.channel(ends=("0 V", top), allowed="100 mV")
    (found,) = findings_of(RULE.check, facts.case(scaled, of=tank))
    assert found.level is level


def test_below_zero() -> None:
    """A range below zero is past the end of an unsigned converter, and inside a signed one."""
    (found,) = _found(ends=("-1 V", "5 V"))
    assert "puts -1 V on the pin, adc ends at 0 V" in found.message
    signed = facts.converter(12, coding=facts.Coding.TWOS_COMPLEMENT)
    assert _found(converter=signed, ends=("-5 V", "5 V")) == ()


def test_without_a_range() -> None:
    """Without a range nothing is known to leave it."""
    assert _found(ends=None) == ()


@pytest.mark.parametrize(("top", "level"), [("5.5 V", [Level.WARNING]), ("6 V", [Level.ERROR])])
def test_pin_limit(top: str, level: list[Level]) -> None:
    """Past the pin's absolute limit it is an error that says what can happen."""
    limit = (parse_quantity("-0.3 V"), parse_quantity("5.5 V"))
    found = _found(ends=("0 V", top), pin_limit=limit)
    assert [one.level for one in found] == level
    if Level.ERROR in level:
        assert "absolute limit is 5.5 V: this can damage the part" in found[0].message
