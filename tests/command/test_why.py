"""`bitweight why`."""

from dataclasses import replace

import pytest

from bitweight.command import why
from bitweight.command.options import WhyOptions
from bitweight.errors import UsageError
from bitweight.judge.rules import BY_EFFECT, ChannelRule, Rule, TreeRule, load_rules

FULL_SCALE = ChannelRule(
    name="full-scale",
    summary="the full-scale count used is not the converter's",
    formula="V = code * reference / full_scale_count",
    source="IEEE 1241",
    check=lambda case, facts: (),
)
CONFLICT = TreeRule(
    name="conflicting-constant",
    summary="a constant is defined with different values that are both live, " * 2,
    formula="value(a) != value(b)",
    source="common practice",
    check=lambda facts: (),
    levels="warning",
)


@pytest.fixture(autouse=True)
def _two_rules(monkeypatch: pytest.MonkeyPatch) -> None:
    rules: tuple[Rule, ...] = (CONFLICT, FULL_SCALE)
    monkeypatch.setattr(why, "load_rules", lambda: rules)


def test_one_rule(capsys: pytest.CaptureFixture[str]) -> None:
    """A rule tells what it checks, how, which level follows and where that is from."""
    assert why.run_why(WhyOptions(rule="full-scale")) == 0
    text = capsys.readouterr().out
    labels = [line.split()[0] for line in text.splitlines() if line[0] != " "]
    assert labels == ["rule", "checks", "formula", "level", "source", "accept"]
    assert "V = code * reference / full_scale_count" in text
    assert f"level {BY_EFFECT}; a channel with a hazard" in " ".join(text.split())


def test_all_rules(capsys: pytest.CaptureFixture[str]) -> None:
    """Without a name all rules are listed with what they check, within 80 columns."""
    assert why.run_why(WhyOptions(rule=None)) == 0
    lines = capsys.readouterr().out.splitlines()
    assert [line.split()[0] for line in lines if line[0] != " "] == [CONFLICT.name, FULL_SCALE.name]
    assert max(map(len, lines)) <= 80


def test_a_near_name() -> None:
    """An unknown rule names the nearest ones."""
    with pytest.raises(UsageError, match="no rule 'fullscale'; did you mean full-scale"):
        why.run_why(WhyOptions(rule="fullscale"))


def test_a_far_name() -> None:
    """A name like no rule's says where the list is."""
    with pytest.raises(UsageError, match="bitweight why lists all"):
        why.run_why(WhyOptions(rule="zzz"))


def test_what_to_do_stands_where_a_rule_says_it() -> None:
    """A rule with a remedy tells it, and a level that cannot be raised is told without hazard."""
    rule = replace(FULL_SCALE, levels="error", mend="compare the spelling")
    text = why.explanation(rule)
    assert "mend      compare the spelling\n" in text
    assert "hazard" not in text
    assert "/* deviation(full-scale): reason */" in text


def test_untraced_says_what_to_do() -> None:
    """A channel that was not found is a matter of the board file, and `why` says of what in it."""
    (rule,) = (one for one in load_rules() if one.name == "untraced")
    text = " ".join(why.explanation(rule).split())
    assert all(word in text for word in ("reading", "@ FILE", "-D", "[constants]"))
