"""Rule `reference-wiring`."""

from typing import Any

import pytest

import facts
from bitweight.board.parts import ReferenceSource
from bitweight.judge.findings import Finding, Level
from bitweight.trace.conversions import Trace
from bitweight.trace.settings import Setting
from bitweight_rules.reference_wiring import RULE
from facts import at

CAUTION = "no other reference may be selected"


def _setting(value: str, line: int = 5, **changes: Any) -> Setting:
    given: dict[str, Any] = {
        "subject": "reference",
        "value": value,
        "text": "ADMUX = ...",
        "place": at(line, 5, "src/adc.c"),
        "target": "ADMUX",
        "caution": CAUTION,
    }
    return Setting(**(given | changes))


def _found(source: ReferenceSource, *settings: Setting, stated: bool = True) -> tuple[Finding, ...]:
    wired = facts.reference(source=source, source_stated=stated, pin="AREF")
    tank = facts.channel(converter=facts.converter(reference=wired))
    case = facts.case(of=tank, traced=Trace(channel="tank"))
    return facts.findings_of(RULE.check, case, settings=settings)


@pytest.mark.parametrize(
    ("value", "phrase"), [("supply", "the supply"), ("internal", "the internal reference")]
)
def test_other_reference_than_the_wired(value: str, phrase: str) -> None:
    """Anything but the external reference on its pin is an error, with the data sheet's caution."""
    (found,) = _found(ReferenceSource.EXTERNAL, _setting(value))
    assert found.message == (f"ADMUX selects {phrase}, but vref is external on pin AREF: {CAUTION}")
    assert (found.level, found.place) == (Level.ERROR, at(5, 5, "src/adc.c"))
    assert (found.found, found.expected) == (value, "external (vref, 5 V)")


@pytest.mark.parametrize(
    ("source", "value"),
    [
        (ReferenceSource.EXTERNAL, "external"),
        (ReferenceSource.SUPPLY, "supply"),
        (ReferenceSource.INTERNAL, "internal"),
    ],
)
def test_wired_reference_is_silent(source: ReferenceSource, value: str) -> None:
    """The reference that is wired may be selected."""
    assert _found(source, _setting(value)) == ()


def test_passing_selection_harms_an_external_source() -> None:
    """A source on the pin is harmed by any other selection, even beside the right one."""
    found = _found(ReferenceSource.EXTERNAL, _setting("external"), _setting("internal", 9))
    assert [one.place.line for one in found] == [9]


def test_passing_selection_of_a_supply_reference() -> None:
    """With nothing on the pin one right selection is enough."""
    assert _found(ReferenceSource.SUPPLY, _setting("supply"), _setting("internal", 9)) == ()
    assert len(_found(ReferenceSource.SUPPLY, _setting("internal", 9))) == 1


def test_assumed_source_is_said() -> None:
    """A source that the board file leaves out is external, and the finding says so."""
    (found,) = _found(ReferenceSource.EXTERNAL, _setting("supply"), stated=False)
    assert "external on pin AREF (assumed: the board file states no source)" in found.message


def test_other_words_are_left_alone() -> None:
    """A selection in words that say no source, and another subject, are not judged."""
    odd = (_setting("reserved"), _setting("left", subject="justification"))
    assert _found(ReferenceSource.EXTERNAL, *odd) == ()
