"""Rules: loaded by entry point, checked, run."""

from collections.abc import Callable
from importlib.metadata import EntryPoint
from typing import Any

import pytest

import facts
from bitweight.errors import RuleError
from bitweight.judge import rules
from bitweight.judge.findings import Finding, Level
from bitweight.judge.rules import ChannelRule, TreeRule, load_rules, run_rules


def _channel_rule(check: Callable[..., Any], name: str = "mine") -> ChannelRule:
    return ChannelRule(name=name, summary="", formula="", source="", check=check)


def _tree_rule(check: Callable[..., Any], name: str = "mine") -> TreeRule:
    return TreeRule(name=name, summary="", formula="", source="", check=check)


def _finding(channel: str) -> Finding:
    return Finding(
        rule="mine", level=Level.NOTE, channels=(channel,), message="", place=facts.at(1)
    )


GOOD = _channel_rule(lambda case, facts: ())
LATER = _tree_rule(lambda facts: (), name="later")
WIDE = _channel_rule(lambda case: ())
NARROW = _tree_rule(lambda case, facts: ())


def _load(monkeypatch: pytest.MonkeyPatch, *names: str) -> tuple[rules.Rule, ...]:
    entries = [
        EntryPoint(name=name, value=f"{__name__}:{name}", group=rules.GROUP) for name in names
    ]
    monkeypatch.setattr(EntryPoint, "load", lambda entry: globals()[entry.name])
    monkeypatch.setattr(rules, "entry_points", lambda group: entries)
    return load_rules()


def test_rules_come_in_order_of_name(monkeypatch: pytest.MonkeyPatch) -> None:
    """What is registered is loaded, by name."""
    assert _load(monkeypatch, "GOOD", "LATER") == (LATER, GOOD)


@pytest.mark.parametrize(
    ("names", "message"),
    [
        (("GOOD", "GOOD"), "a second rule is named 'mine'"),
        (("pytest",), "holds no rule"),
        (("WIDE",), r"must take 2 argument"),
        (("NARROW",), r"must take 1 argument"),
        (("nowhere",), "cannot be loaded"),
    ],
)
def test_what_is_no_rule(
    names: tuple[str, ...], message: str, monkeypatch: pytest.MonkeyPatch
) -> None:
    """A duplicate, another object, a wrong signature and a broken module are told apart."""
    with pytest.raises(RuleError, match=message):
        _load(monkeypatch, *names)


def test_no_rule_at_all_is_an_error(monkeypatch: pytest.MonkeyPatch) -> None:
    """An installation without rules is broken: nothing may be verified by it."""
    with pytest.raises(RuleError, match="no rules are installed"):
        _load(monkeypatch)


def test_our_own_rules_are_registered() -> None:
    """The installed rules load, and each tells what it checks, how, and from where."""
    loaded = load_rules()
    assert [one.name for one in loaded] == sorted(one.name for one in loaded)
    assert len(loaded) > 20
    assert [one.name for one in loaded if not (one.summary and one.formula and one.source)] == []


def test_a_channel_rule_is_asked_once_a_case() -> None:
    """A channel rule sees each case, a tree rule the run."""
    given = facts.facts(facts.case(of=facts.channel("tank")), facts.case(of=facts.channel("pump")))
    each = _channel_rule(lambda case, facts: [_finding(case.channel.name)])
    once = _tree_rule(lambda facts: [_finding("all")])
    found = run_rules([each, once], given)
    assert [one.channel for one in found] == ["tank", "pump", "all"]


def test_an_error_inside_a_rule_names_it() -> None:
    """Whatever a check raises, the rule is named and nothing else is blamed."""
    broken = _tree_rule(lambda facts: 1 // 0, name="broken")
    with pytest.raises(RuleError, match="rule 'broken' failed: ZeroDivisionError"):
        run_rules([broken], facts.facts())
