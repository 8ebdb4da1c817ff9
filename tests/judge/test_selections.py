"""Which selections of the configuration code concern a channel."""

from typing import Any

import facts
from bitweight.judge.selections import contradicting, selections
from bitweight.trace.conversions import Trace
from bitweight.trace.settings import Setting
from facts import at

CASE = facts.case(traced=Trace(channel="tank"))


def setting(value: str, line: int = 5, **changes: Any) -> Setting:
    """A selection of the reference, made for all channels."""
    given: dict[str, Any] = {
        "subject": "reference",
        "value": value,
        "text": "ADMUX = ...",
        "place": at(line, 5, "src/adc.c"),
        "target": "ADMUX",
    }
    return Setting(**(given | changes))


def _found(*settings: Setting) -> list[tuple[str, int]]:
    run = facts.facts(CASE, settings=settings)
    wrong = contradicting(selections(CASE, run, "reference"), "supply")
    return [(one.value, one.place.line) for one in wrong]


def test_contradiction() -> None:
    """A selection of something else contradicts."""
    assert _found(setting("external")) == [("external", 5)]


def test_one_right_selection_is_enough() -> None:
    """Where one of several selections is the wanted one, which holds is not known."""
    assert _found(setting("external"), setting("supply", 6)) == []


def test_what_was_seen_at_the_reading_decides() -> None:
    """A selection seen at the channel's reading goes before those made for all."""
    assert _found(setting("external", 9, channels=("tank",)), setting("supply", 6)) == [
        ("external", 9)
    ]


def test_write_is_named() -> None:
    """A selection seen at the reading stands at the write that made it."""
    seen = setting("external", 9, channels=("tank",))
    assert _found(seen, setting("external", 6)) == [("external", 6)]


def test_other_subjects_and_channels_are_left_out() -> None:
    """Settings of another subject or another channel do not concern this one."""
    other = setting("external", channels=("pump",))
    assert _found(setting("left", subject="justification"), other) == []


def test_converter_outside_the_controller() -> None:
    """On a board of two converters, settings made for all concern those of a known family."""
    own = facts.channel(converter=facts.converter(name="outside"))
    inside = facts.channel("pump", converter=facts.converter(family="avr-classic"))
    board = facts.board(own, inside)
    cases = [facts.case(of=one, traced=Trace(channel=one.name)) for one in (own, inside)]
    run = facts.facts(*cases, board=board, settings=(setting("external"),))
    assert [len(selections(case, run, "reference").shared) for case in cases] == [0, 1]
