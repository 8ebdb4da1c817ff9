"""What a finding does to the reading."""

import facts
from bitweight.judge.findings import Finding
from bitweight.report.consequences import consequence
from facts import C
from report import samples


def finding(rule: str) -> Finding:
    """A finding of a rule, wherever it stands."""
    return samples.finding(rule)


def test_a_wrong_constant_tells_its_own_share() -> None:
    """A constant's own effect stands at bottom, middle and top."""
    case = samples.outcome().facts.cases[1]
    assert consequence(samples.finding(), case) == "bottom 0 V, middle +8 mV, top +16 mV"


def test_a_narrow_store_tells_where_it_is_worst() -> None:
    """What no constant carries is told at its worst code, too."""
    c = C()
    code = c.store("uint8_t", c.op(c.op(c.code(), "*", "5000UL"), "/", "1024UL"))
    text = consequence(finding("narrowing"), facts.case(code))
    assert text.startswith("bottom 0 V, middle -2.3")
    assert text.endswith("most -4.86 V at code 1007")


def test_early_division_tells_what_it_loses() -> None:
    """The loss alone is told, not the whole error."""
    c = C()
    code = c.op(c.op(c.op(c.code(), "/", "16"), "*", "5000"), "/", "64")
    text = consequence(finding("early-division"), facts.case(code))
    assert text.endswith("most -74 mV at code 127")


def test_what_has_no_effect_on_the_reading_is_silent() -> None:
    """A limit does nothing to the reading, nor does what was not traced."""
    outcome = samples.outcome()
    assert consequence(finding("threshold"), outcome.facts.cases[1]) == ""
    assert consequence(finding("untraced"), outcome.facts.cases[2]) == ""
