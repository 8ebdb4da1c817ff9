"""Rule `channel-map`."""

from typing import Any

import pytest

import facts
from bitweight.judge.findings import Finding, Level
from bitweight.trace.conversions import Trace
from bitweight.trace.settings import Setting
from bitweight_rules.channel_map import RULE
from facts import C, at, findings_of


def _setting(value: str, *channels: str, **changes: Any) -> Setting:
    given: dict[str, Any] = {
        "subject": "input",
        "value": value,
        "text": "ADMUX = ...",
        "place": at(5, 5, "src/adc.c"),
        "target": "ADMUX",
        "channels": channels,
    }
    return Setting(**(given | changes))


def _found(*settings: Setting, input_: int | None = 3) -> tuple[Finding, ...]:
    case = facts.case(of=facts.channel(input=input_), traced=Trace(channel="tank"))
    return findings_of(RULE.check, case, settings=settings)


@pytest.mark.parametrize("value", ["2", "0", "30"])
def test_other_input(value: str) -> None:
    """Another input than the channel's, selected for its reading, is an error."""
    (found,) = _found(_setting(value, "tank"))
    assert found.message == (f"ADMUX selects input {value} for tank, which is on input 3 (pin PC3)")
    assert (found.level, found.expected) == (Level.ERROR, "input 3")


@pytest.mark.parametrize(
    ("settings", "input_"),
    [
        ((_setting("3", "tank"),), 3),
        ((_setting("2", "tank"), _setting("3", "tank", place=at(6))), 3),
        ((_setting("2", "pump"),), 3),
        ((_setting("2"),), 3),
        ((_setting("2", "tank"),), None),
    ],
    ids=["own", "own among others", "of another", "of nobody", "input not stated"],
)
def test_silent(settings: tuple[Setting, ...], input_: int | None) -> None:
    """The channel's own input, or one that is not known to be for it, is no fault."""
    assert _found(*settings, input_=input_) == ()


def test_result_of_another_reading() -> None:
    """A result computed from another channel's reading alone is an error at that reading."""
    c = C()
    scaled = c.op(c.op(c.code("uint16_t", "pump"), "*", "5000"), "/", "1024")
    (found,) = findings_of(RULE.check, facts.case(scaled))
    assert found.message == "tank_held is computed from the reading of pump, not of tank"
    assert (found.place, found.level) == (at(20, 15), Level.ERROR)


def test_second_reading_is_silent() -> None:
    """Another reading beside the channel's own is a ratio, not a mistake."""
    c = C()
    ratio = c.op(c.op(c.code(), "*", "2500"), "/", c.code("uint16_t", "supply"))
    assert findings_of(RULE.check, facts.case(ratio, among=(facts.channel("supply"),))) == ()
