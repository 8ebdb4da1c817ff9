"""Findings about constants."""

from bitweight.judge.corrections import constant_findings
from bitweight.judge.explanations import WrongConstant
from bitweight.judge.findings import Level
from facts import C, case, channel, divider


def say(wrong: WrongConstant) -> str:
    """A short sentence."""
    return f"{wrong.text} is {wrong.found}"


def test_a_finding_carries_place_effect_edit_and_way() -> None:
    """One wrong constant is one finding with everything a reader needs."""
    c = C()
    value = c.op(c.op(c.code(), "*", c.number("4900UL", "VREF_MV")), "/", "1024")
    (found,) = constant_findings(case(value), "reference-value", say)
    assert found.message == ("VREF_MV is 4900 mV; this alone: up to 100 mV low (code 1023)")
    assert found.level is Level.ERROR
    assert [one.message for one in found.related] == ["used here", "the reading"]
    assert found.replacement is not None
    assert found.replacement.end_column == found.place.column + len("4900UL")


def test_another_rules_constants_are_left_alone() -> None:
    """A rule speaks of its own constants only."""
    c = C()
    value = c.op(c.op(c.code(), "*", c.number("4900UL", "VREF_MV")), "/", "1024")
    assert not list(constant_findings(case(value), "full-scale", say))


def test_a_cancelling_pair_is_one_note() -> None:
    """Two constants that cancel are one note of the first one's rule."""
    c = C()
    volts = c.op(c.op(c.code(), "*", c.number("4000UL", "VREF_MV")), "/", "1024")
    value = c.op(volts, "*", c.number("5", "DIVIDER"))
    judged = case(value, of=channel(chain=(divider(),), ends=None))
    (found,) = constant_findings(judged, "reference-value", say)
    assert found.level is Level.NOTE
    assert not list(constant_findings(judged, "divider-ratio", say))
