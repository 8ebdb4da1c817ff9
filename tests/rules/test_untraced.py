"""Rule `untraced`."""

import facts
from bitweight.judge.findings import Level
from bitweight.trace.conversions import Step, Trace
from bitweight.trace.thresholds import Threshold
from bitweight_rules.untraced import RULE
from facts import C, at, findings_of


def test_reason_is_the_message() -> None:
    """A channel that was not followed is a warning on its line of the board file."""
    lost = Trace(channel="tank", reason="CAL comes from flash at run time", place=at(12, 3))
    (found,) = findings_of(RULE.check, facts.case(traced=lost))
    assert (found.message, found.level) == ("CAL comes from flash at run time", Level.WARNING)
    assert (found.place.file, found.place.line) == (facts.BOARD_FILE, 15)
    assert [one.place for one in found.related] == [at(12, 3)]


def test_traced_is_silent() -> None:
    """A channel that was judged is not untraced, right or wrong."""
    c = C()
    right = facts.case(c.op(c.op(c.code(), "*", "5000"), "/", "1024"))
    wrong = facts.case(c.op(c.op(c.code(), "*", "3300"), "/", "1024"))
    assert findings_of(RULE.check, right, wrong) == ()


def test_another_reading_is_channel_map() -> None:
    """A result of another channel's reading was traced: it is another rule's."""
    assert findings_of(RULE.check, facts.case(C().code("int", "pump"))) == ()


def test_limit_without_a_value() -> None:
    """A limit that could not be worked out is told, and the channel stays judged."""
    c = C()
    limited = facts.channel(limits=(facts.limit("relief", "3 V"),))
    case = facts.case(c.op(c.op(c.code(), "*", "5000"), "/", "1024"), of=limited)
    open_ = Threshold(
        channel="tank",
        name="relief",
        text="LIMIT",
        value=None,
        leaf=None,
        place=None,
        reason="LIMIT is not defined",
    )
    (found,) = findings_of(RULE.check, case, thresholds=(open_,))
    assert found.message == "limit relief: LIMIT was not compared: LIMIT is not defined"
    assert found.place.line == 26


def test_a_default_is_a_note() -> None:
    """A declared value that the program may overwrite is told where it is used."""
    c = C()
    scaled = c.op(c.op(c.code(), "*", "5000"), "/", "1024")
    used = Step(place=at(21, 9), message="cal is judged at its declared value")
    traced = Trace(channel="tank", conversions=(facts.conversion(scaled, assumed=(used,)),))
    (found,) = findings_of(RULE.check, facts.case(traced=traced))
    assert (found.level, found.place) == (Level.NOTE, used.place)
    assert found.message == (
        "cal is judged at its declared value; give its value in [constants] if it is another"
    )
