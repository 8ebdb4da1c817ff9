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
    """A range past full scale is a warning on the range, with where the reading stops."""
    (found,) = _found(ends=("0 V", top))
    assert found.message == (
        f"the range puts {pin} on the pin, adc ends at 5 V: the reading stops at 5 V"
    )
    assert (found.level, found.place.line) == (Level.WARNING, 16)
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
    assert "puts 6 V on the pin, adc ends at 5 V: the reading stops at 20 V" in found.message


def test_below_zero() -> None:
    """A range below zero is past the end of an unsigned converter, and inside a signed one."""
    (found,) = _found(ends=("-1 V", "5 V"))
    assert "puts -1 V on the pin, adc ends at 0 V" in found.message
    signed = facts.converter(12, coding=facts.Coding.TWOS_COMPLEMENT)
    assert _found(converter=signed, ends=("-5 V", "5 V")) == ()


def test_without_a_range() -> None:
    """Without a range nothing is known to leave it."""
    assert _found(ends=None) == ()


@pytest.mark.parametrize(
    ("top", "level"), [("5.5 V", [Level.WARNING]), ("6 V", [Level.WARNING, Level.ERROR])]
)
def test_pin_limit(top: str, level: list[Level]) -> None:
    """Past the pin's absolute limit it is an error that says what can happen."""
    limit = (parse_quantity("-0.3 V"), parse_quantity("5.5 V"))
    found = _found(ends=("0 V", top), pin_limit=limit)
    assert [one.level for one in found] == level
    if Level.ERROR in level:
        assert "absolute limit is 5.5 V: this can damage the part" in found[1].message
