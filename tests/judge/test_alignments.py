"""Justification as configuration code selects it."""

from typing import Any

import pytest

import facts
from bitweight.board.converters import Justification
from bitweight.judge.findings import Finding, Level
from bitweight.trace.conversions import Trace
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


def _found(value: str, **changes: Any) -> tuple[Finding, ...]:
    tank = facts.channel(converter=facts.converter(**changes))
    case = facts.case(of=tank, traced=Trace(channel="tank"))
    return findings_of(RULE.check, case, settings=(_setting(value),))


@pytest.mark.parametrize(("stated", "level"), [(True, Level.ERROR), (False, Level.WARNING)])
def test_other_justification(stated: bool, level: Level) -> None:
    """A selection of the other end is an error, a warning where the board file left it open."""
    (found,) = _found("left", justified_stated=stated)
    assert (found.level, found.found, found.expected) == (level, "left", "right")
    assert ("assumed" in found.message) == (not stated)


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
