"""Justification as configuration code selects it."""

from dataclasses import replace
from typing import Any

import pytest

import facts
from bitweight.board.converters import Justification
from bitweight.judge.findings import Finding, Level
from bitweight.trace.conversions import Conversion, Trace
from bitweight.trace.settings import Setting
from bitweight_rules.justification import RULE
from facts import C, at, findings_of


def _setting(value: str) -> Setting:
    return Setting(
        subject="justification",
        value=value,
        text="ADMUX = ...",
        place=at(5, 5, "src/adc.c"),
        target="ADMUX",
    )


def _register(text: str, bits: int) -> Conversion:
    """A conversion that copies a register of so many bits."""
    c = C()
    word = replace(c.code(), text=text, type=c.model.integer(bits, signed=False))
    return facts.conversion(word)


def _found(
    value: str, conversions: tuple[Conversion, ...] = (), **changes: Any
) -> tuple[Finding, ...]:
    tank = facts.channel(converter=facts.converter(**changes))
    case = facts.case(of=tank, traced=Trace(channel="tank", conversions=conversions))
    return findings_of(RULE.check, case, settings=(_setting(value),))


@pytest.mark.parametrize(("stated", "level"), [(True, Level.ERROR), (False, Level.WARNING)])
def test_other_justification(stated: bool, level: Level) -> None:
    """A selection of the other end is an error, a warning where the board file left it open."""
    (found,) = _found("left", (_register("ADC", 16),), justified_stated=stated)
    assert (found.level, found.found, found.expected) == (level, "left", "right")
    assert ("assumed" in found.message) == (not stated)


@pytest.mark.parametrize(("text", "bits"), [("ADCH", 8), ("adc_read(3)", 16)])
def test_what_does_not_see_the_alignment_is_silent(text: str, bits: int) -> None:
    """The high byte alone, or what a driver returns, says nothing of a justification left open."""
    assert _found("left", (_register(text, bits),), justified_stated=False) == ()


def test_same_justification_is_silent() -> None:
    """The justification of the board file may be selected."""
    assert _found("right") == ()
    assert _found("left", justified=Justification.LEFT, shift=6) == ()


def test_one_cause_is_one_finding() -> None:
    """Where the conversion itself assumes the other end, that is the finding."""
    c = C()
    scaled = c.op(c.op(c.op(c.code(), ">>", "6"), "*", "5000"), "/", "1024")
    case = facts.case(scaled)
    (found,) = findings_of(RULE.check, case, settings=(_setting("left"),))
    assert found.place.file == facts.SOURCE
