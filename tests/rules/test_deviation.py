"""Rule `deviation`."""

from datetime import date

import facts
from bitweight.judge.deviations import RULE as NAME
from bitweight.judge.deviations import apply_deviations
from bitweight_rules.deviation import RULE
from facts import C, deviation, finding


def test_findings_come_from_the_deviations() -> None:
    """The rule itself says nothing; its findings carry its name and level."""
    run = facts.facts(facts.case(C().code()))
    assert tuple(RULE.check(run)) == ()
    (fault,) = apply_deviations((), (deviation("sign", "tank"),), (), date(2026, 12, 1))
    assert (fault.rule, fault.level.value) == (RULE.name, RULE.levels)
    assert RULE.name == NAME


def test_a_used_deviation_is_silent() -> None:
    """A deviation that covers a finding is no fault."""
    given = (deviation("full-scale", "tank"),)
    assert len(apply_deviations([finding()], given, (), date(2026, 12, 1))) == 1
